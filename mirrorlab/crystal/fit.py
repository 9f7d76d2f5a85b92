"""Measured angles between mirrors: which closed arrangements they fit, how well, and which angle is at odds.

Every candidate has fixed angles, so χ² = Σ ((measured − candidate)/σ)² with as many degrees of freedom as there are
angles with an uncertainty. An angle that is exact as typed must agree exactly.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from fractions import Fraction
from itertools import product

from mirrorlab.angles import Angle, AngleError, parse_angle
from mirrorlab.crystal.fit_candidates import (
    AngleSet,
    Costs,
    Folded,
    best_sets,
    closing_sides,
    zone_directions,
)
from mirrorlab.crystal.fit_result import (
    IMPROBABLE,
    MISFIT,
    Fit,
    FitCandidate,
    FitError,
    MeasuredAngle,
)
from mirrorlab.mirrors.families import TOP_RANK

MOST_CANDIDATES = 12
"""Candidates that are listed unless more are asked for."""


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
        Also candidates with generated mirrors between the measured ones, and three mirrors through one line.
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


def _candidate(chosen: AngleSet, measured: tuple[MeasuredAngle, ...], freedom: int) -> FitCandidate:
    angles = _as_typed(chosen, measured)
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
        chosen.one_line,
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


def _as_typed(chosen: AngleSet, measured: tuple[MeasuredAngle, ...]) -> tuple[Fraction, ...]:
    """The sides of the planes on which most angles are as they were typed; among those, the sharper angles."""

    def misread(angles: Folded) -> tuple[int, Fraction]:
        wrong = sum(
            f != Fraction(1, 2) and (f > Fraction(1, 2)) != (one.degrees > 90)
            for f, one in zip(angles, measured, strict=True)
        )
        return wrong, sum(angles, Fraction(0))

    return min(_zone_sides(chosen.folded) if chosen.one_line else closing_sides(chosen.folded), key=misread)


def _zone_sides(folded: Folded) -> tuple[Folded, ...]:
    """All ways to write the angles between three mirrors through one line, by turning mirrors round."""
    directions = zone_directions(folded)
    found = []
    for turned in product((0, 1), repeat=2):
        t = [d + flip for d, flip in zip(directions, (0, *turned), strict=True)]
        apart = [abs(t[i] - t[j]) % 2 for i, j in ((0, 1), (0, 2), (1, 2))]
        found.append(tuple(1 - min(a, 2 - a) for a in apart))
    return tuple(found)
