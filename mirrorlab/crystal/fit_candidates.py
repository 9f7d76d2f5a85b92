"""Closed arrangements whose angles can be held against measured ones.

An angle between two mirrors is the same pair of planes as its supplement, so angles are compared folded: θ or
180° − θ, whichever is not above a right angle. Two mirrors close at every 180°/m. Three close as A3, B3 or H3 in any
order, at two right angles and any 180°/m, and, with generated mirrors between them, at a short list of further triples,
which is found by deciding all of them; and as three mirrors through one line, as the planes of a zone are. More mirrors
are walls of a finite group when every angle is 180°/m and the Gram matrix is positive definite [1]_; such sets are
grown pair by pair, and branches too far off to be listed are left.

References
----------
.. [1] J. E. Humphreys, Reflection Groups and Coxeter Groups (1990), sections 2.4 and 6.4.
"""

from __future__ import annotations

import bisect
import math
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from itertools import combinations, combinations_with_replacement, permutations, product

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors import Arrangement

HALF = Fraction(1, 2)

LARGEST_M = 360
"""Smallest angle between two mirrors is 180°/360, as angles are read."""

LARGEST_STAR_M = 12
"""Angles k·180°/m with k > 1 are held against measured ones up to this m: larger ones lie so close that any angle fits
some of them."""

SAME_ANGLE = 1e-9
"""Degrees within which an exact angle is that of a candidate: rounding."""

MOST_NODES = 60_000
"""Branches followed for four mirrors or more (about two seconds) before the best so far are taken."""

Folded = tuple[Fraction, ...]


@dataclass(frozen=True, slots=True)
class Costs:
    """What it costs to take a measured angle for a fraction of π: ((folded − value)/σ)², or all or nothing when exact.

    Attributes
    ----------
    folded : tuple of float
        Measured angles in degrees, folded.
    sigmas : tuple of float
        In degrees; 0 for an exact one.
    """

    folded: tuple[float, ...]
    sigmas: tuple[float, ...]

    def of(self, k: int, fraction: Fraction) -> float:
        """For the k-th angle."""
        off = self.folded[k] - float(180 * fraction)
        if self.sigmas[k] == 0:
            return 0.0 if abs(off) < SAME_ANGLE else math.inf
        return (off / self.sigmas[k]) ** 2

    def totals(self, degrees: NDArray[np.float64]) -> NDArray[np.float64]:
        """For all angles of some sets: rows of folded angles in degrees, shape (sets, angles)."""
        off, sigmas = np.array(self.folded) - degrees, np.array(self.sigmas)
        measured = sigmas > 0
        total = ((off[:, measured] / sigmas[measured]) ** 2).sum(axis=1)
        return np.where((np.abs(off[:, ~measured]) < SAME_ANGLE).all(axis=1), total, math.inf)


def fold(fraction: Fraction) -> Fraction:
    """θ or π − θ, in units of π, whichever is not above one half."""
    return min(fraction, 1 - fraction)


@dataclass(frozen=True, slots=True)
class AngleSet:
    """Folded angles that close; `one_line` when the three mirrors pass through one line."""

    folded: Folded
    one_line: bool = False


def best_sets(costs: Costs, size: int, most: int, subdivided: bool) -> tuple[list[AngleSet], bool]:
    """The closed sets of folded angles that fit best, and whether all were looked at.

    Parameters
    ----------
    costs : Costs
    size : int
        Number of mirrors, 2 to 8.
    most : int
        How many.
    subdivided : bool
        With generated mirrors between the measured ones as well (two and three mirrors only).
    """
    if size > 3:
        found, complete = _grow(costs, size, most)
        return [AngleSet(one) for one in found], complete
    sets, degrees = _listed(size, subdivided)
    totals = costs.totals(degrees)
    ranked = np.argsort(totals, kind="stable")[:most]
    return [sets[k] for k in ranked if totals[k] < math.inf], True


@lru_cache(maxsize=4)
def _listed(size: int, subdivided: bool) -> tuple[tuple[AngleSet, ...], NDArray[np.float64]]:
    """All sets for two or three mirrors, and their angles in degrees; mirrors through one line come last."""
    sets = [AngleSet(one) for one in (_pairs(subdivided) if size == 2 else _triples(subdivided))]
    if size == 3 and subdivided:
        sets += [AngleSet(one, one_line=True) for one in zone_triples()]
    return tuple(sets), np.array([[float(180 * f) for f in one.folded] for one in sets])


@lru_cache(maxsize=2)
def _pairs(subdivided: bool) -> tuple[Folded, ...]:
    wedges = {Fraction(1, m) for m in range(2, LARGEST_M + 1)}
    return tuple((f,) for f in sorted(wedges | _stars() if subdivided else wedges))


def _stars() -> set[Fraction]:
    every = {Fraction(k, m) for m in range(5, LARGEST_STAR_M + 1) for k in range(2, m // 2 + 1)}
    return {f for f in every if f.numerator > 1 and f < HALF}


@lru_cache(maxsize=2)
def _triples(subdivided: bool) -> tuple[Folded, ...]:
    walls = [(Fraction(1, 3), Fraction(1, m)) for m in (3, 4, 5)]
    base: set[Folded] = {(HALF, *pair) for pair in walls}
    base |= {(HALF, HALF, f) for (f,) in _pairs(subdivided)}
    if subdivided:
        base |= set(closing_triples())
    return tuple(sorted({order for one in base for order in permutations(one)}))


@lru_cache(maxsize=1)
def zone_triples() -> tuple[Folded, ...]:
    """Folded angles between three mirrors through one line, multiples of 180°/m with m up to 12."""
    found: set[Folded] = set()
    for m in range(3, LARGEST_STAR_M + 1):
        for i, j in combinations(range(1, m), 2):
            angles = (fold(Fraction(i, m)), fold(Fraction(j, m)), Fraction(j - i, m))
            found |= set(permutations((*angles[:2], fold(angles[2]))))
    return tuple(sorted(found))


def zone_directions(folded: Folded) -> tuple[Fraction, Fraction, Fraction]:
    """Directions, in units of π, in which three mirrors through one line stand to have these folded angles."""
    first, second, apart = folded
    for t in (second, 1 - second):
        for s in (first, 1 - first):
            if fold(abs(t - s)) == apart:
                return Fraction(0), s, t
    msg = f"no three mirrors through one line have the angles {folded}"
    raise ValueError(msg)


@lru_cache(maxsize=1)
def closing_triples() -> tuple[Folded, ...]:
    """Folded triples of kπ/m, m up to 5, that close on some side of their planes, each decided.

    No others close but for two right angles and a third: in a group of rank 3 that does not split no two mirrors stand
    closer than 36°, so every angle is kπ/m with m up to 5.
    """
    options = sorted({fold(Fraction(k, m)) for m in range(2, 6) for k in range(1, m)})
    return tuple(t for t in combinations_with_replacement(options, 3) if closing_sides(t))


@lru_cache(maxsize=4096)
def closing_sides(folded: Folded) -> tuple[Folded, ...]:
    """All ways to write folded angles of two or three mirrors as θ or π − θ so that they close.

    For more mirrors: those that come from walls by turning mirrors round.
    """
    size = (1 + math.isqrt(1 + 8 * len(folded))) // 2
    pairs = [(i, j) for i in range(size) for j in range(i + 1, size)]
    found: dict[Folded, None] = {}
    for base in _sides_to_try(folded, size):
        for signs in product((1, -1), repeat=size - 1):
            sides = (1, *signs)
            turned = tuple(
                f if sides[i] == sides[j] else 1 - f for f, (i, j) in zip(base, pairs, strict=True)
            )
            found[turned] = None
    return tuple(found)


def _sides_to_try(folded: Folded, size: int) -> list[Folded]:
    """Writings that close; turning a mirror round makes the others."""
    if size != 3:
        return [folded]
    other = (*folded[:2], 1 - folded[2])
    return [
        one for one in (folded, other) if Arrangement.from_angles(one).finding().kind.startswith("closed")
    ]


def _grow(costs: Costs, size: int, most: int) -> tuple[list[Folded], bool]:
    """Walls of finite groups by depth-first search with a bound; a branch can always end in right angles."""
    pairs = [(i, j) for i in range(size) for j in range(i + 1, size)]
    options = [_options(costs, k) for k in range(len(pairs))]
    cheapest = np.cumsum([0.0, *(row[0][0] for row in reversed(options))])[::-1]
    best: list[tuple[float, Folded]] = []
    gram = np.eye(size)
    nodes = 0
    complete = True

    def visit(k: int, cost: float, chosen: list[Fraction], edges: list[tuple[int, int]]) -> None:
        nonlocal nodes, complete
        if k == len(pairs):
            bisect.insort(best, (cost, tuple(chosen)))
            del best[most:]
            return
        i, j = pairs[k]
        for extra, fraction in options[k]:
            bound = cost + extra + cheapest[k + 1]
            if bound == math.inf or (len(best) == most and bound >= best[-1][0]):
                return
            nodes += 1
            if nodes > MOST_NODES and best:
                complete = False
                return
            slanted = fraction != HALF
            if slanted and _joined(edges, i, j):
                continue  # no finite group has a closed chain of mirrors that are not square
            gram[i, j] = gram[j, i] = -math.cos(math.pi * float(fraction)) if slanted else 0.0
            if not slanted or np.linalg.eigvalsh(gram)[0] > 1e-9:
                visit(k + 1, cost + extra, [*chosen, fraction], [*edges, (i, j)] if slanted else edges)
            gram[i, j] = gram[j, i] = 0.0

    visit(0, 0.0, [], [])
    return [one for _, one in best], complete


def _options(costs: Costs, k: int) -> list[tuple[float, Fraction]]:
    """Angles that a pair of walls can have, the nearest to the measured one first."""
    value = max(costs.folded[k], 0.25)
    near = range(max(2, int(180 / value) - 3), min(LARGEST_M, int(180 / value) + 4) + 1)
    fractions = {Fraction(1, m) for m in (2, 3, 4, 5, 6, *near)}
    return sorted((cost, f) for f in fractions if (cost := costs.of(k, f)) < math.inf or f == HALF)


def _joined(edges: list[tuple[int, int]], i: int, j: int) -> bool:
    """Whether mirrors i and j are in one chain of slanted mirrors already."""
    reached, front = {i}, [i]
    while front:
        node = front.pop()
        for u, v in edges:
            for a, b in ((u, v), (v, u)):
                if a == node and b not in reached:
                    reached.add(b)
                    front.append(b)
    return j in reached
