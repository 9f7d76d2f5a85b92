"""The nearest sets of angles that close.

For two mirrors every fraction of π closes. For three, every closed and closed-subdivided triangle with angles
kπ/m is listed once and compared. For more, Coxeter–Dynkin graphs are grown mirror by mirror: a graph is that of
a finite group only if every part of it is, so branches are cut early, and branches whose change is already
larger than the best kept ones are cut too.
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

MOST_SUGGESTIONS = 6
MOST_NODES = 20_000
"""Graphs looked at for four mirrors or more, before the best so far are taken (about half a second)."""

HALF = Fraction(1, 2)
Decide = Callable[[Sequence[Fraction]], "tuple[str, tuple[str, ...], int | None, int | None, str]"]
Verdict = tuple[str, tuple[str, ...], int | None, int | None, str]


@dataclass(frozen=True, slots=True)
class Suggestion:
    """A set of angles that closes.

    Attributes
    ----------
    angles : tuple of Fraction
        Fractions of π, pair by pair.
    changes : tuple of float
        Degrees to add to each typed angle.
    kind, families, order, chambers_between, name
        Its finding in short; `name` is its symbol.
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
        """Names of the pairs whose angle changes by more than 1e-9 degrees, largest change first."""
        ranked = sorted(zip(self.changes, self.pair_names, strict=True), key=lambda item: -abs(item[0]))
        return tuple(name for change, name in ranked if abs(change) > 1e-9)

    def degrees_of(self, pair: str) -> str:
        """The suggested angle of a pair, written in degrees."""
        return write_angle(self.angles[self.pair_names.index(pair)], "degrees")

    def texts(self) -> tuple[str, ...]:
        """The angles as text that can be typed."""
        return tuple(write_angle(f, "pi") for f in self.angles)

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "angles": [write_angle(f, "pi") for f in self.angles],
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
    """The nearest sets of angles that close, by largest change, then by total change, closed before subdivided."""
    typed = np.array([angle.degrees for angle in angles])
    found: list[tuple[Fraction, ...]]
    if size == 2:
        found = [(nearby.fraction,) for nearby in angles[0].nearest(MOST_SUGGESTIONS)]
        found += [(Fraction(1, max(2, round(180 / max(typed[0], 0.5)))),)]
    elif size == 3:
        found = _triangles(angles, typed, decide)
    else:
        found = _graphs(typed, size)
    result = [_suggest(candidate, typed, names, decide) for candidate in dict.fromkeys(found)]
    result.sort(key=lambda s: (round(s.largest_change, 9), s.kind != "closed", sum(map(abs, s.changes))))
    return tuple(s for s in result if s.largest_change > 1e-12)[:MOST_SUGGESTIONS]


def supplements(angles: tuple[Angle, ...], names: tuple[str, ...], decide: Decide) -> tuple[Suggestion, ...]:
    """Sets in which one angle θ is read as 180° − θ, where they close."""
    fractions = [angle.fraction for angle in angles]
    if any(f is None for f in fractions):
        return ()
    known = [f for f in fractions if f is not None]
    typed = np.array([float(180 * f) for f in known])
    result = []
    for k, f in enumerate(known):
        if f in (HALF, 0):
            continue
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
def _closing_triangles(decide: Decide) -> tuple[tuple[Fraction, ...], ...]:
    """Every unordered triple of kπ/m with m up to 5 that closes."""
    options = sorted({Fraction(k, m) for m in range(2, 6) for k in range(1, m)})
    return tuple(
        triple
        for triple in combinations_with_replacement(options, 3)
        if decide(triple)[0].startswith("closed")
    )


def _triangles(
    angles: tuple[Angle, ...], typed: NDArray[np.float64], decide: Decide
) -> list[tuple[Fraction, ...]]:
    candidates = {
        (t[i], t[j], t[k])
        for t in _closing_triangles(decide)
        for i, j, k in ((0, 1, 2), (0, 2, 1), (1, 0, 2), (1, 2, 0), (2, 0, 1), (2, 1, 0))
    }
    for k, angle in enumerate(angles):  # two right angles leave the third free
        free = angle.fraction or angle.nearest(1)[0].fraction
        for f in (free, Fraction(1, max(2, round(180 / max(angle.degrees, 0.5))))):
            if 0 < f < 1:
                candidates.add(tuple(f if j == k else HALF for j in range(3)))  # type: ignore[arg-type]
    table = list(candidates)
    values = np.array([[float(180 * f) for f in row] for row in table])
    changes = np.abs(values - typed)
    rank = np.lexsort((changes.sum(axis=1), changes.max(axis=1).round(9)))
    return [table[k] for k in rank[: 3 * MOST_SUGGESTIONS]]


def _graphs(typed: NDArray[np.float64], size: int) -> list[tuple[Fraction, ...]]:
    """Coxeter–Dynkin graphs of finite groups whose angles are nearest to the typed ones."""
    place = {pair: k for k, pair in enumerate((i, j) for i in range(size) for j in range(i + 1, size))}
    options = []
    for value in typed:
        near = {Fraction(1, m) for m in (2, 3, 4, 5)} | {Fraction(1, max(2, round(180 / max(value, 0.5))))}
        options.append(sorted(near, key=lambda f: abs(float(180 * f) - value)))
    best: list[tuple[float, tuple[Fraction, ...]]] = []
    nodes = 0

    def grow(
        chosen: dict[tuple[int, int], Fraction], gram: NDArray[np.float64], new: int, worst: float
    ) -> None:
        nonlocal nodes
        if new == size:
            best.append((worst, tuple(chosen[pair] for pair in place)))
            best.sort(key=lambda item: item[0])
            del best[MOST_SUGGESTIONS:]
            return
        for worst_here, row in sorted(_rows(options, typed, place, new), key=lambda item: item[0]):
            reach = max(worst, worst_here)
            if nodes > MOST_NODES or (len(best) == MOST_SUGGESTIONS and reach >= best[-1][0]):
                return
            nodes += 1
            grown = gram.copy()
            for i, f in enumerate(row):
                grown[i, new] = grown[new, i] = -math.cos(math.pi * f)
            if np.linalg.eigvalsh(grown[: new + 1, : new + 1])[0] > 1e-9:
                grow({**chosen, **{(i, new): f for i, f in enumerate(row)}}, grown, new + 1, reach)

    grow({}, np.eye(size), 1, 0.0)
    return [angles for _, angles in best]


def _rows(
    options: list[list[Fraction]], typed: NDArray[np.float64], place: dict[tuple[int, int], int], new: int
) -> list[tuple[float, tuple[Fraction, ...]]]:
    """Angles of a new mirror with each earlier one: at most three of them slanted (no finite graph has more)."""
    rows: list[tuple[float, tuple[Fraction, ...], int]] = [(0.0, (), 0)]
    for i in range(new):
        k = place[i, new]
        rows = [
            (max(worst, abs(float(180 * f) - float(typed[k]))), (*row, f), slanted + (f != HALF))
            for worst, row, slanted in rows
            for f in options[k]
            if slanted + (f != HALF) <= 3
        ]
    return [(worst, row) for worst, row, _ in rows]
