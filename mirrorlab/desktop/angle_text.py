"""Angles as they are shown and typed, and the mark each one carries."""

from __future__ import annotations

from fractions import Fraction

from mirrorlab.angles import Angle, write_angle
from mirrorlab.desktop.marks import FINE, NO_FRACTION, NO_LATTICE
from mirrorlab.mirrors import Arrangement, Finding


def short_reading(angle: Angle, compact: bool = False) -> str:
    """The closing fraction in a few characters, in degrees where π was typed; "≈" where it was uncertain."""
    if angle.fraction is None:
        return "none" if compact else "no fraction"
    if "pi" in angle.text or "π" in angle.text:  # all six decimals stand below the triangle
        degrees = 180 * float(angle.fraction)
        written = f"{round(degrees, 1) if compact else degrees:.6g}°"
    else:
        written = pretty(angle.fraction, "pi")
    return written if angle.source == "exact" or compact else f"≈ {written}"


def pretty(angle: Angle | Fraction | float, notation: str) -> str:
    """An angle as it is printed, π for pi; what is typed back needs no π."""
    return write_angle(angle, notation).replace("pi", "π")


def mark_of(finding: Finding, pair: tuple[int, int], angle: Angle) -> str:
    """The mark of a pair, from the finding's flags."""
    if angle.fraction is None:
        return NO_FRACTION
    codes = {flag.code for flag in finding.flags if tuple(flag.mirrors) == pair}
    return NO_LATTICE if "no-lattice" in codes else FINE


def plainly_typed(arrangement: Arrangement) -> Arrangement:
    """The same mirrors, their exact angles typed as a person would: whole degrees, else fractions of π."""
    return Arrangement.from_angles([plain_text(angle) for angle in arrangement.angles], arrangement.settings)


def plain_text(angle: Angle | Fraction) -> str:
    """An angle as a person would type it."""
    fraction = angle if isinstance(angle, Fraction) else angle.fraction
    if fraction is None:
        assert isinstance(angle, Angle)
        return angle.text
    degrees = 180 * fraction
    return str(degrees.numerator) if degrees.denominator == 1 else write_angle(fraction, "pi")
