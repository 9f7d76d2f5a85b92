"""What the mirrors are meant to be: the closing angles that typed ones stand for."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from itertools import permutations
from typing import TYPE_CHECKING

from mirrorlab.optics.kinds import kind_of
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.stand import standing_angle

if TYPE_CHECKING:
    from mirrorlab.mirrors import Arrangement

NEAR = 2.0
"""Degrees: typed angles this near to ones that close without a seam are meant to be these, and are off."""

TILING_TRIANGLES = ((3, 3, 3), (2, 4, 4), (2, 3, 6))
"""Triangles of angles 180°/m that tile the plane without a seam; there are no others, for 1/p + 1/q + 1/r = 1."""


@dataclass(frozen=True, slots=True)
class Intent:
    """What the mirrors are meant to be.

    Attributes
    ----------
    kind : str
        "wedge", "corner" or "tube".
    pairs : tuple of str
        Pairs of letters whose mirrors share an edge.
    fractions : tuple of Fraction
        Intended angles over π.
    """

    kind: str
    pairs: tuple[str, ...]
    fractions: tuple[Fraction, ...]

    @property
    def radians(self) -> tuple[float, ...]:
        """Intended angles."""
        return tuple(math.pi * float(fraction) for fraction in self.fractions)

    @property
    def sectors(self) -> tuple[int, ...]:
        """Sectors of light that bring an image home around each edge: twice the closing denominator."""
        return tuple(2 * fraction.denominator for fraction in self.fractions)


def intent_of(arrangement: Arrangement) -> tuple[Intent, tuple[float, ...]]:
    """Return what an arrangement's mirrors are meant to be, and the angles that they have, in radians.

    Angles within `NEAR` of ones that close without a seam are taken as meant to be these; other angles that close
    are taken as they are; for the rest the nearest angles that close are taken as meant.

    Raises
    ------
    AssemblyError
        Mirrors that make no assembly, or have no closing angles near.
    """
    kind = kind_of(arrangement)
    pairs = _joined_pairs(arrangement.size)
    places = [arrangement.pairs.index(pair) for pair in pairs]
    typed = [arrangement.angles[place] for place in places]
    names = tuple(arrangement.letters[i] + arrangement.letters[j] for i, j in pairs)
    degrees = [math.degrees(standing_angle(angle)) for angle in typed]
    meant = tuple(angle.fraction for angle in typed if angle.fraction is not None)
    seamless = _seamless_corner(arrangement) if kind == "corner" else _seamless(kind, degrees)
    closes = len(meant) == len(typed) and (kind != "corner" or arrangement.finding().group is not None)
    if seamless is not None:
        meant = seamless
    elif not closes:
        wanted = None
        if kind == "corner":
            suggestions = arrangement.finding().suggestions
            wanted = next((s for s in suggestions if s.kind.startswith("closed")), None)
        if wanted is None:
            msg = "angles: none near these close; type those that are meant, and the actual ones beside them"
            raise AssemblyError(msg, "angles")
        meant = tuple(wanted.angles[place] for place in places)
    actual = (
        math.pi * float(fraction) if angle.fraction == fraction else standing_angle(angle)
        for angle, fraction in zip(typed, meant, strict=True)
    )
    return Intent(kind, names, meant), tuple(actual)


def _seamless_corner(arrangement: Arrangement) -> tuple[Fraction, ...] | None:
    """The nearest angles that close without a seam: single ones that divide 180° need not close together."""
    near = (s for s in arrangement.finding().suggestions if s.kind == "closed" and s.largest_change <= NEAR)
    return next((tuple(s.angles) for s in near), None)


def _seamless(kind: str, degrees: list[float]) -> tuple[Fraction, ...] | None:
    if kind == "wedge":
        tried: list[tuple[int, ...]] = [(max(2, round(180 / degrees[0])),)]
    elif len(degrees) == 4:
        tried = [(2, 2, 2, 2)]
    else:
        tried = sorted({order for names in TILING_TRIANGLES for order in permutations(names)})
    wanted = min(
        (tuple(Fraction(1, m) for m in orders) for orders in tried), key=lambda f: _furthest(degrees, f)
    )
    return wanted if _furthest(degrees, wanted) <= NEAR else None


def _furthest(degrees: list[float], fractions: tuple[Fraction, ...]) -> float:
    return max(abs(d - 180 * float(f)) for d, f in zip(degrees, fractions, strict=True))


def _joined_pairs(size: int) -> list[tuple[int, int]]:
    if size == 4:
        return [(0, 1), (1, 2), (2, 3), (0, 3)]
    return [(i, j) for i in range(size) for j in range(i + 1, size)]
