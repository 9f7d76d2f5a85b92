"""The nearest sets of angles that close, or that make a tube whose images tile the plane.

For two mirrors every fraction of π closes, and for three with two right angles every third angle: there only those
count that are of use (see `mirrorlab.mirrors.usable`). For other three, every closed and closed-subdivided triangle
with angles kπ/m is listed once and compared, and so is every tube that tiles (`mirrorlab.mirrors.tiling_tubes`). For
more, see `mirrorlab.mirrors.graphs`.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from itertools import combinations_with_replacement

import numpy as np
from numpy.typing import NDArray

from mirrorlab.angles import Angle, write_angle
from mirrorlab.mirrors.exact import CERTAIN, triangle_rank
from mirrorlab.mirrors.families import MOST_MIRRORS
from mirrorlab.mirrors.generation import generate_roots
from mirrorlab.mirrors.graphs import UNCHANGED, nearest_graphs
from mirrorlab.mirrors.tiling_tubes import tubes_of
from mirrorlab.mirrors.usable import usable_near

MOST_SUGGESTIONS = 6
FOUND = ("closed", "closed-subdivided", "tube")

MOST_ASKEW = 30.0
"""Degrees; walls further from right angles were not meant as a room."""
HALF = Fraction(1, 2)
Decide = Callable[[Sequence[Fraction]], "tuple[str, tuple[str, ...], int | None, int | None, str]"]
Verdict = tuple[str, tuple[str, ...], int | None, int | None, str]


@dataclass(frozen=True, slots=True)
class Suggestion:
    """A set of angles that closes, or that makes a tube whose images tile the plane.

    Attributes
    ----------
    angles : tuple of Fraction
        Fractions of π, pair by pair.
    changes : tuple of float
        Degrees to add to each typed angle.
    kind, families, order, chambers_between, name
        Its finding in short; `name` is its symbol. A tube has no families and no order; its symbol is that of its
        plane group.
    """

    angles: tuple[Fraction, ...]
    changes: tuple[float, ...]
    pair_names: tuple[str, ...]
    kind: str
    families: tuple[str, ...]
    order: int | None
    chambers_between: int | None
    name: str

    @property
    def largest_change(self) -> float:
        """Largest change of an angle, in degrees."""
        return max((abs(change) for change in self.changes), default=0.0)

    @property
    def changed_pairs(self) -> tuple[str, ...]:
        """Names of the pairs whose angle changes by more than `UNCHANGED` degrees, largest change first."""
        ranked = sorted(zip(self.changes, self.pair_names, strict=True), key=lambda item: -abs(item[0]))
        return tuple(name for change, name in ranked if abs(change) > UNCHANGED)

    def degrees_of(self, pair: str) -> str:
        """The suggested angle of a pair, written in degrees."""
        return self.angle_of(pair, "degrees")

    def angle_of(self, pair: str, style: str) -> str:
        """The suggested angle of a pair, in a style of `write_angle`."""
        return write_angle(self.angles[self.pair_names.index(pair)], style)

    def texts(self, style: str = "pi") -> tuple[str, ...]:
        """The angles as text that can be typed, in a style of `write_angle`."""
        return tuple(write_angle(f, style) for f in self.angles)

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "angles": list(self.texts()),
            "degrees": [float(180 * f) for f in self.angles],
            "changes": list(self.changes),
            "largest_change": self.largest_change,
            "kind": self.kind,
            "families": list(self.families),
            "order": self.order,
            "chambers_between": self.chambers_between,
            "symbol": self.name,
        }


def nearest_closing(
    angles: tuple[Angle, ...], size: int, names: tuple[str, ...], decide: Decide
) -> tuple[Suggestion, ...]:
    """The nearest sets, by largest change, then those that close with one chamber, then by total change."""
    typed = np.array([angle.degrees for angle in angles])
    found: list[tuple[Fraction, ...]]
    if size == 2:
        found = [(f,) for f in usable_near(angles[0].degrees)]
    elif size == 3:
        found = _triangles(angles, typed)
    else:
        found = nearest_graphs(typed, size)
    result = [_suggest(candidate, typed, names, decide) for candidate in dict.fromkeys(found)]
    result = [s for s in result if s.kind in FOUND and s.largest_change > UNCHANGED]
    result.sort(key=lambda s: (round(s.largest_change, 9), s.kind != "closed", sum(map(abs, s.changes))))
    return tuple(result[:MOST_SUGGESTIONS])


def nearest_room(
    angles: tuple[Angle, ...], size: int, names: tuple[str, ...], decide: Decide
) -> tuple[Suggestion, ...]:
    """For four walls that are no room yet: the room with right angles whose walls are nearest."""
    typed = np.array([angle.degrees for angle in angles])
    rooms = [_suggest(candidate, typed, names, decide) for candidate in tubes_of(size)]
    nearest = min(rooms, key=lambda s: s.largest_change, default=None)
    return () if nearest is None or nearest.largest_change > MOST_ASKEW else (nearest,)


def supplements(angles: tuple[Angle, ...], names: tuple[str, ...], decide: Decide) -> tuple[Suggestion, ...]:
    """Sets in which one angle θ is read as 180° − θ, where they close."""
    fractions = [angle.fraction for angle in angles]
    if any(f is None for f in fractions):
        return ()
    known = [f for f in fractions if f is not None]
    typed = np.array([float(180 * f) for f in known])
    size = (1 + math.isqrt(1 + 8 * len(known))) // 2
    gram = np.eye(size)
    row, column = np.triu_indices(size, 1)
    gram[row, column] = gram[column, row] = -np.cos(np.radians(typed))
    result = []
    for k, f in enumerate(known):
        if f in (HALF, 0):
            continue
        turned = gram.copy()
        turned[row[k], column[k]] = turned[column[k], row[k]] = -gram[row[k], column[k]]
        if np.linalg.eigvalsh(turned)[0] < -CERTAIN:
            continue  # still no planes have these angles: no need to look closer
        candidate = (*known[:k], 1 - f, *known[k + 1 :])
        suggestion = _suggest(candidate, typed, names, decide)
        if suggestion.kind.startswith("closed"):
            result.append(suggestion)
    result.sort(key=lambda s: (s.kind != "closed", s.chambers_between or 0, s.largest_change))
    return tuple(result)


def _suggest(
    candidate: tuple[Fraction, ...], typed: NDArray[np.float64], names: tuple[str, ...], decide: Decide
) -> Suggestion:
    kind, families, order, between, name = decide(candidate)
    changes = tuple(float(180 * f) - float(t) for f, t in zip(candidate, typed, strict=True))
    return Suggestion(candidate, changes, names, kind, families, order, between, name)


@lru_cache(maxsize=1)
def _closing_triangles() -> tuple[tuple[Fraction, ...], ...]:
    """Every unordered triple of kπ/m with m up to 5 that closes."""
    options = sorted({Fraction(k, m) for m in range(2, 6) for k in range(1, m)})
    return tuple(t for t in combinations_with_replacement(options, 3) if _triangle_closes(t))


def _triangle_closes(triple: tuple[Fraction, Fraction, Fraction]) -> bool:
    a, b, c = triple
    if triangle_rank(a, b, c) != (3, True) or {4, 5} <= {f.denominator for f in triple}:
        return False
    if triple.count(HALF) > 1:
        return True
    one = Fraction(1)
    return generate_roots([[one, a, b], [a, one, c], [b, c, one]], MOST_MIRRORS[3])[2]


def _triangles(angles: tuple[Angle, ...], typed: NDArray[np.float64]) -> list[tuple[Fraction, ...]]:
    candidates = set(tubes_of(3)) | {
        (t[i], t[j], t[k])
        for t in _closing_triangles()
        for i, j, k in ((0, 1, 2), (0, 2, 1), (1, 0, 2), (1, 2, 0), (2, 0, 1), (2, 1, 0))
    }
    for k, angle in enumerate(angles):  # two right angles leave the third free
        kept = (
            (angle.fraction,) if angle.fraction and abs(180 * angle.fraction - typed[k]) <= UNCHANGED else ()
        )
        for f in (*kept, *usable_near(angle.degrees)):
            candidates.add(tuple(f if j == k else HALF for j in range(3)))
    table = list(candidates)
    values = np.array([[float(180 * f) for f in row] for row in table])
    changes = np.abs(values - typed)
    rank = np.lexsort((changes.sum(axis=1), changes.max(axis=1).round(9)))
    return [table[k] for k in rank[: 3 * MOST_SUGGESTIONS]]
