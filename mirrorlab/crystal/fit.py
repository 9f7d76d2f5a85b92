"""Measured angles between mirrors: which closed arrangements they fit, how well, and which angle is at odds.

Every candidate has fixed angles, so χ² = Σ ((measured − candidate)/σ)² with as many degrees of freedom as there are
angles with an uncertainty. An angle that is exact as typed must agree exactly.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property

from mirrorlab.angles import Angle, AngleError, parse_angle, write_angle
from mirrorlab.crystal.fit_candidates import Costs, Folded, best_sets, closing_sides
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.mirrors import Arrangement, Finding
from mirrorlab.mirrors.families import TOP_RANK

MOST_CANDIDATES = 12
"""Candidates that are listed unless more are asked for."""

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
        """The mirrors, closed."""
        return Arrangement.from_angles(self.angles)

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
        return ", ".join(write_angle(f) for f in self.angles)

    @property
    def symbol(self) -> str:
        """Point group, or the families for more than three mirrors: ``m-3m``, ``E7``."""
        symbols = self.finding.point_group
        return " × ".join(self.finding.families) if symbols is None else symbols.hermann_mauguin

    @property
    def name(self) -> str:
        """``m-3m (B3) at 45°, 60°, 90°``."""
        families = " × ".join(self.finding.families)
        head = self.symbol if self.symbol == families else f"{self.symbol} ({families})"
        return f"{head} at {self.angle_text}"

    def to_dict(self) -> dict:
        """Plain JSON."""
        finding = self.finding
        symbols = finding.point_group
        return {
            "angles": [write_angle(f, "pi") for f in self.angles],
            "degrees": [float(180 * f) for f in self.angles],
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
        """By what factor all uncertainties would have to shrink to tell `other` from the best; None when they suffice.

        From the χ² that is to be expected for the one when the other is true.
        """
        apart = 0.0
        for one, f, g in zip(self.measured, self.best.angles, other.angles, strict=True):
            if one.sigma:
                off = float(180 * (min(f, 1 - f) - min(g, 1 - g))) / one.sigma
                apart += off * off
        return math.sqrt(TOLD_APART / apart) if 0 < apart < TOLD_APART else None

    @property
    def sentence(self) -> str:
        """The answer in words."""
        best = self.best
        count = self.degrees_of_freedom
        angles = f"{count} angle{'s' if count != 1 else ''}"
        numbers = f"χ² = {best.chi_squared:.3g} for {angles}, probability {best.probability:.2g}"
        if not best.fits:
            text = f"No closed arrangement fits; nearest is {best.name}: {numbers}."
            if best.misfit:
                text += f" The misfit is {best.misfit}; the others fit."
        else:
            text = f"Fits {best.name}: {numbers}."
        if self.tied:
            names = [one.name for one in self.tied[:3]]
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


def fit_angles(
    angles: Iterable[str | int | float | Fraction | Angle],
    sigma: float | None = None,
    subdivided: bool = True,
    most: int = MOST_CANDIDATES,
) -> Fit:
    """Rank closed arrangements against measured angles.

    Parameters
    ----------
    angles : iterable
        Pair by pair, row by row, as for an arrangement: ``["59.8(3)", "90.1(2)", "44.6(4)"]``; 1 for two mirrors, 3 for
        three, up to 28 for eight. Each may have been measured as θ or as 180° − θ.
    sigma : float, optional
        Standard uncertainty in degrees of the angles typed without one. When not given, a decimal is taken as rounded
        and a whole number of degrees or fraction of π as exact.
    subdivided : bool
        Also candidates with generated mirrors between the measured ones (two and three mirrors).
    most : int
        At most so many candidates, 1 to 500.

    Raises
    ------
    AngleError
        An angle that cannot be read.
    FitError
        A number of angles that fits no number of mirrors, an uncertainty that makes no sense, angles that are all
        exact, or exact ones that no closed arrangement has.
    """
    if sigma is not None and not 0 < sigma <= 90:
        msg = f"uncertainty {sigma:g}: degrees above 0, up to 90"
        raise FitError(msg)
    if not 1 <= most <= 500:
        msg = f"{most} candidates: a whole number from 1 to 500"
        raise FitError(msg)
    given = [angles] if isinstance(angles, str) else list(angles)
    size = (1 + math.isqrt(1 + 8 * len(given))) // 2
    if size * (size - 1) // 2 != len(given) or not 2 <= size <= TOP_RANK:
        fits = ", ".join(f"{n * (n - 1) // 2} for {n}" for n in range(2, TOP_RANK + 1))
        msg = f"{len(given)} angles fit no number of mirrors; n mirrors have n(n−1)/2 angles: {fits}"
        raise FitError(msg)
    measured = tuple(_read(angle, k, size, sigma) for k, angle in enumerate(given))
    if not any(one.sigma for one in measured):
        msg = "no angle has an uncertainty; write 59.8(3), or give one for all of them"
        raise FitError(msg)
    costs = Costs(tuple(min(m.degrees, 180 - m.degrees) for m in measured), tuple(m.sigma for m in measured))
    sets, complete = best_sets(costs, size, most, subdivided)
    if not sets:
        exact = ", ".join(f"{one.pair} = {one.text}" for one in measured if not one.sigma)
        msg = f"no closed arrangement has exactly {exact}; give these angles an uncertainty"
        raise FitError(msg)
    freedom = sum(one.sigma > 0 for one in measured)
    candidates = tuple(_candidate(one, measured, freedom) for one in sets)
    return Fit(measured, freedom, candidates, complete, _notes(measured, complete))


def _read(
    given: str | int | float | Fraction | Angle, k: int, size: int, sigma: float | None
) -> MeasuredAngle:
    pairs = [(i, j) for i in range(size) for j in range(i + 1, size)]
    name = "".join("abcdefgh"[i] for i in pairs[k])
    try:
        angle = given if isinstance(given, Angle) else parse_angle(given)
    except AngleError as error:
        msg = f"angle {k + 1} of {len(pairs)}, {error}" if len(pairs) > 1 else str(error)
        raise AngleError(msg) from None
    if angle.source == "measured":
        return MeasuredAngle(name, angle.text, angle.degrees, angle.uncertainty, "measured")
    if sigma is not None:
        return MeasuredAngle(name, angle.text, angle.degrees, sigma, "given")
    if angle.source == "rounded":
        # A value rounded to a digit is spread evenly over it: JCGM 100:2008 (GUM), 4.3.7.
        return MeasuredAngle(name, angle.text, angle.degrees, angle.uncertainty / math.sqrt(3), "rounded")
    return MeasuredAngle(name, angle.text, angle.degrees, 0.0, "exact")


def _notes(measured: tuple[MeasuredAngle, ...], complete: bool) -> tuple[str, ...]:
    notes = [
        f"{one.pair} = {one.text} has no standard uncertainty; taken as rounded, {one.sigma:.2g}°"
        if one.source == "rounded"
        else f"{one.pair} = {one.text} is exact as typed: candidates must have it"
        for one in measured
        if one.source in ("rounded", "exact")
    ]
    if not complete:
        notes.append(
            "too many arrangements are about as near: the search was cut short, others may fit as well"
        )
    return tuple(notes)


def _candidate(folded: Folded, measured: tuple[MeasuredAngle, ...], freedom: int) -> FitCandidate:
    angles = _as_typed(folded, measured)
    supplements, deviations = [], []
    for one, fraction in zip(measured, angles, strict=True):
        wedge, other = (one.degrees - float(180 * f) for f in (fraction, 1 - fraction))
        supplements.append(abs(other) < abs(wedge) - 1e-12)
        deviations.append(other if supplements[-1] else wedge)
    pulls = [d / m.sigma if m.sigma else None for d, m in zip(deviations, measured, strict=True)]
    squares = [0.0 if pull is None else pull * pull for pull in pulls]
    total = sum(squares)
    worst = max(range(len(squares)), key=squares.__getitem__)
    without = probability_of(total - squares[worst], freedom - 1) if freedom > 1 else None
    probability = probability_of(total, freedom)
    odd = squares[worst] > MISFIT**2 and without is not None and without >= IMPROBABLE
    return FitCandidate(
        angles,
        tuple(supplements),
        tuple(deviations),
        tuple(pulls),
        total,
        probability,
        measured[worst].pair,
        measured[worst].pair if odd else None,
        without,
    )


def probability_of(chi_squared: float, freedom: int) -> float:
    """Probability of a χ² at least as large: the regularised upper incomplete gamma function at (ν/2, χ²/2)."""
    from scipy.special import gammaincc  # loads in a tenth of the time of scipy.stats

    return float(gammaincc(freedom / 2, max(chi_squared, 0.0) / 2))


def _as_typed(folded: Folded, measured: tuple[MeasuredAngle, ...]) -> tuple[Fraction, ...]:
    """The sides of the planes on which most angles are as they were typed; among those, the sharper angles."""

    def misread(angles: Folded) -> tuple[int, Fraction]:
        wrong = sum(
            f != Fraction(1, 2) and (f > Fraction(1, 2)) != (one.degrees > 90)
            for f, one in zip(angles, measured, strict=True)
        )
        return wrong, sum(angles, Fraction(0))

    return min(closing_sides(folded), key=misread)
