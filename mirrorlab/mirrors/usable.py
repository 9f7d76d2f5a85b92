"""Which fractions of π a suggestion may put in the place of a typed angle.

Nearness alone is no use to anyone: 59.8° is nearest to 80π/241, which closes only as 241 mirrors through one line,
and parallel mirrors are nearest to the narrowest angle there is. So an angle that a suggestion changes becomes one of

- k·180°/m with m of `DENOMINATORS`, and of these, on each side of the typed angle, the nearest of all and the nearest
  with m up to `LATTICE_DENOMINATOR`;
- the next whole parts of 180° on either side, 180°/m, as long as they are no narrower than `NARROWEST`: a fan of as
  many mirrors with one chamber between each two. Below half of `NARROWEST` mirrors count as parallel and have none.

An angle that stays as typed may be any.
"""

from __future__ import annotations

import math
from bisect import bisect_left, bisect_right
from fractions import Fraction
from functools import cache

DENOMINATORS = (2, 3, 4, 5, 6, 7, 8, 9, 10, 12)
"""The m of k·180°/m: up to 10, and 12, which with 8 and 10 are the axes that quasicrystals are known for (common
practice, no source). They make 35 angles, 5° apart in the mean; with m up to 360 one lies within 0.01° of any angle
and says nothing about it."""

LATTICE_DENOMINATOR = 6
"""Largest m of an angle in a lattice; 5, of the pentagon and the icosahedron, falls below it too."""

NARROWEST = 3.0
"""Degrees; a wedge of 3° shows 119 images, far more than mirrors keep bright, and 180°/59 and 180°/61 are only 0.05°
off: less than a joint made by hand keeps (common practice, no source)."""


def usable_near(degrees: float) -> tuple[Fraction, ...]:
    """The usable fractions of π nearest to an angle from 0 to below 180 degrees, at most six, smallest first."""
    value = Fraction(degrees) / 180
    found = set(_whole_parts_near(degrees))
    for most in (LATTICE_DENOMINATOR, max(DENOMINATORS)):
        ladder = _ladder(most)
        found |= {*ladder[: bisect_right(ladder, value)][-1:], *ladder[bisect_left(ladder, value) :][:1]}
    return tuple(sorted(found))


def _whole_parts_near(degrees: float) -> tuple[Fraction, ...]:
    """The angles 180°/m on either side of an angle, none narrower than `NARROWEST`; none for parallel mirrors."""
    if degrees <= NARROWEST / 2:
        return ()
    m = min(180 / degrees, 180 / NARROWEST)
    return tuple(Fraction(1, max(2, k)) for k in {math.floor(m), math.ceil(m)})


@cache
def _ladder(most: int) -> tuple[Fraction, ...]:
    """Every k/m between 0 and 1 with m of `DENOMINATORS` up to `most`, smallest first."""
    return tuple(sorted({Fraction(k, m) for m in DENOMINATORS if m <= most for k in range(1, m)}))
