"""The tubes of three or four mirrors whose images tile the plane.

The angles of a triangle whose images tile are multiples of 30° or of 45°, which leaves four; of four walls the room
with right angles is left, since other four-sided tubes are cut by images of their own walls.
"""

from __future__ import annotations

from fractions import Fraction
from itertools import permutations

RIGHT, PARALLEL = Fraction(1, 2), Fraction(0)

TRIANGLES = tuple(
    tuple(Fraction(k, m) for k in parts)
    for m, parts in ((6, (2, 2, 2)), (6, (3, 2, 1)), (6, (4, 1, 1)), (4, (2, 1, 1)))
)
"""Angles ab, ac, bc as fractions of π."""

ROOM = (RIGHT, PARALLEL, RIGHT, RIGHT, PARALLEL, RIGHT)
"""Angles ab, ac, ad, bc, bd, cd of walls a, b, c, d one after another."""


def tubes_of(size: int) -> tuple[tuple[Fraction, ...], ...]:
    """The tubes of so many mirrors with their walls in every order; empty for other numbers than three and four."""
    if size == 3:
        return tuple(dict.fromkeys(order for triangle in TRIANGLES for order in permutations(triangle)))
    if size == 4:
        return tuple(
            tuple(PARALLEL if k in (opposite, 5 - opposite) else RIGHT for k in range(6))
            for opposite in range(3)
        )
    return ()
