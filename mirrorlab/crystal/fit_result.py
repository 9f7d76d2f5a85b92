"""What a fit of measured angles comes to: the candidates with their pulls, and what can be told from them."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from itertools import product

from mirrorlab.angles import write_angle
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.mirrors import Arrangement, Finding

TOLD_APART = 2 * math.log(20)
"""Difference of χ² above which two candidates are told apart: the better one is then more than 20 times as likely."""

IMPROBABLE = 0.01
"""Probability of so large a χ² below which a candidate does not fit; common practice, no source."""

MISFIT = 3.0
"""Pull, in standard uncertainties, from which on an angle is at odds with a candidate; common practice, no source."""


class FitError(CrystalError):
    """Measured angles that cannot be fitted."""


@dataclass(frozen=True, slots=True)
class MeasuredAngle:
    """One measured angle.

    Attributes
    ----------
    pair : str
        The mirrors by letters, such as ``ab``.
    text : str
        As typed.
    degrees, sigma : float
        In degrees; sigma is 0 for an exact angle.
    source : str
        "measured", "rounded" (half of the last digit over √3 as uncertainty), "given" (the uncertainty given for all
        angles without one of their own) or "exact".
    """

    pair: str
    text: str
    degrees: float
    sigma: float
    source: str

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "pair": self.pair,
            "text": self.text,
            "degrees": self.degrees,
            "sigma": self.sigma,
            "source": self.source,
        }


@dataclass(frozen=True, eq=False)
class FitCandidate:
    """A closed arrangement held against the measured angles.

    Attributes
    ----------
    angles : tuple of Fraction
        Fractions of π, pair by pair, written on the sides that agree best with the angles as typed.
    one_line : bool
        All three mirrors pass through one line, as planes of a zone do; their angles alone would make a tube.
    supplements : tuple of bool
        Where the measured angle was taken for 180° − θ of the candidate: measured in the neighbouring wedge.
    deviations : tuple of float
        Measured less candidate, in degrees.
    pulls : tuple of float or None
        The same in standard uncertainties; None for an exact angle.
    chi_squared : float
    probability : float
        Of a χ² at least as large, if the candidate is true.
    worst : str
        Pair with the largest pull.
    misfit : str or None
        That pair, where its pull is above 3 and the other angles fit without it.
    probability_without : float or None
        Probability of the others' χ² when the worst is left out; None when no other is left.
    """

    angles: tuple[Fraction, ...]
    one_line: bool
    supplements: tuple[bool, ...]
    deviations: tuple[float, ...]
    pulls: tuple[float | None, ...]
    chi_squared: float
    probability: float
    worst: str
    misfit: str | None
    probability_without: float | None

    @cached_property
    def arrangement(self) -> Arrangement:
        """The mirrors, closed; by normals where they pass through one line."""
        if not self.one_line:
            return Arrangement.from_angles(self.angles)
        rows = [(math.cos(math.pi * t), math.sin(math.pi * t)) for t in map(float, self._directions())]
        return Arrangement.from_normals(rows)

    def _directions(self) -> tuple[Fraction, ...]:
        """Directions of the normals in units of π, on the sides that `angles` says."""
        first, second, apart = self.angles
        for s, t in product((1 - first, first - 1), (1 - second, second - 1)):
            if abs(s - t) in (1 - apart, 1 + apart):
                return Fraction(0), s, t
        msg = f"no mirrors through one line make {self.angle_text}"  # a sign of a fault, not of wrong input
        raise FitError(msg)

    @cached_property
    def finding(self) -> Finding:
        """What they do."""
        return self.arrangement.finding()

    @property
    def fits(self) -> bool:
        """Whether the probability is not too small."""
        return self.probability >= IMPROBABLE

    @property
    def angle_text(self) -> str:
        """``45°, 60°, 90°``."""
        return self.angles_in("degrees")

    def angles_in(self, style: str) -> str:
        """The angles in a style of `write_angle`."""
        return ", ".join(write_angle(f, style) for f in self.angles)

    @property
    def symbol(self) -> str:
        """Point group, or the families for more than three mirrors: ``m-3m``, ``E7``."""
        symbols = self.finding.point_group
        return " × ".join(self.finding.families) if symbols is None else symbols.hermann_mauguin

    @property
    def name(self) -> str:
        """``m-3m (B3) at 45°, 60°, 90°``."""
        return self.name_in("degrees")

    def name_in(self, style: str) -> str:
        """The name with its angles in a style of `write_angle`."""
        families = " × ".join(self.finding.families)
        head = self.symbol if self.symbol == families else f"{self.symbol} ({families})"
        return f"{head} at {self.angles_in(style)}" + (", all through one line" if self.one_line else "")

    def to_dict(self) -> dict:
        """Plain JSON."""
        finding = self.finding
        symbols = finding.point_group
        return {
            "angles": [write_angle(f, "pi") for f in self.angles],
            "degrees": [float(180 * f) for f in self.angles],
            "through_one_line": self.one_line,
            "supplements": list(self.supplements),
            "deviations": list(self.deviations),
            "pulls": list(self.pulls),
            "chi_squared": self.chi_squared,
            "probability": self.probability,
            "fits": self.fits,
            "worst": self.worst,
            "misfit": self.misfit,
            "probability_without_worst": self.probability_without,
            "kind": finding.kind,
            "families": list(finding.families),
            "order": finding.order,
            "mirror_count": finding.mirror_count,
            "chambers_between": finding.chambers_between,
            "crystallographic": finding.crystallographic,
            "point_group": None if symbols is None else symbols.to_dict(),
        }


@dataclass(frozen=True, eq=False)
class Fit:
    """Closed arrangements ranked against measured angles.

    Attributes
    ----------
    measured : tuple of MeasuredAngle
    degrees_of_freedom : int
    candidates : tuple of FitCandidate
        The best first.
    complete : bool
        Every closed arrangement was looked at, so no better one exists.
    notes : tuple of str
        How angles without an uncertainty were taken.
    """

    measured: tuple[MeasuredAngle, ...]
    degrees_of_freedom: int
    candidates: tuple[FitCandidate, ...]
    complete: bool
    notes: tuple[str, ...]

    @property
    def best(self) -> FitCandidate:
        """The candidate of least χ²."""
        return self.candidates[0]

    @property
    def tied(self) -> tuple[FitCandidate, ...]:
        """Others that these measurements do not tell from the best."""
        most = self.best.chi_squared + TOLD_APART
        return tuple(one for one in self.candidates[1:] if one.chi_squared < most)

    def sharper(self, other: FitCandidate) -> float | None:
        """How many times as large uncertainties would tell `other` from the best; None when these are small enough.

        Below 1; from the χ² that is to be expected for the one when the other is true.
        """
        apart = 0.0
        for one, f, g in zip(self.measured, self.best.angles, other.angles, strict=True):
            if one.sigma:
                off = float(180 * (min(f, 1 - f) - min(g, 1 - g))) / one.sigma
                apart += off * off
        return math.sqrt(apart / TOLD_APART) if 0 < apart < TOLD_APART else None

    @property
    def sentence(self) -> str:
        """The answer in words, angles in degrees."""
        return self.sentence_in("degrees")

    def sentence_in(self, style: str) -> str:
        """The answer in words, angles in a style of `write_angle`."""
        best = self.best
        count = self.degrees_of_freedom
        angles = f"{count} angle{'s' if count != 1 else ''}"
        numbers = f"χ² = {best.chi_squared:.3g} for {angles}, probability {best.probability:.2g}"
        if not best.fits:
            text = f"No closed arrangement fits; nearest is {best.name_in(style)}: {numbers}."
            if best.misfit:
                text += f" The misfit is {best.misfit}; the others fit."
        else:
            text = f"Fits {best.name_in(style)}: {numbers}."
        if self.tied:
            names = [one.name_in(style) for one in self.tied[:3]]
            more = f" and {len(self.tied) - 3} more" if len(self.tied) > 3 else ""
            text += f" At this precision it cannot be told from {'; '.join(names)}{more}."
        return text

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "measured": [one.to_dict() for one in self.measured],
            "degrees_of_freedom": self.degrees_of_freedom,
            "candidates": [one.to_dict() for one in self.candidates],
            "tied_with_best": [1 + self.candidates[1:].index(one) for one in self.tied],
            "complete": self.complete,
            "notes": list(self.notes),
            "sentence": self.sentence,
        }
