"""A finite reflection group with its true chamber: simple mirrors, all mirrors, elements, folding."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.chamber import SAME_MIRROR, generic_point, same_mirrors, simple_of
from mirrorlab.mirrors.families import Family, recognise
from mirrorlab.mirrors.walk import Walk, walk

OUTSIDE = 1e-12
"""A point this part of its size behind a wall is reflected; nearer is rounding, and would be reflected for ever."""

MOST_ELEMENTS = 200_000
"""Largest group whose elements are written out as matrices unless the caller asks for more."""

Array = NDArray[np.float64]


class TooLarge(ValueError):
    """A result that would not fit the limit; `size` and `memory` (bytes) say how large it would be."""

    def __init__(
        self, what: str, size: int, memory: int, limit: int, advice: str = " (raise `limit`)"
    ) -> None:
        self.size, self.memory, self.limit = size, memory, limit
        super().__init__(
            f"{what}: {size:,} of them would take {memory / 2**20:,.0f} MiB; the limit is {limit:,}{advice}"
        )


@dataclass(frozen=True, slots=True)
class Component:
    """One irreducible part of a group: its family and which simple mirrors it has, in the family's order."""

    family: Family
    nodes: tuple[int, ...]


@dataclass(frozen=True, eq=False)
class ReflectionGroup:
    """A finite reflection group in a frame.

    Attributes
    ----------
    simple : ndarray, shape (r, d)
        Unit inward normals of the walls of the true chamber.
    mirrors : ndarray, shape (N, d)
        Unit normals of all mirrors, each pointing to the side of the true chamber.
    letters : tuple of str
        A letter for each simple mirror: the typed letter where the wall was typed, else p, q, r …
    components : tuple of Component
    """

    simple: Array
    mirrors: Array
    letters: tuple[str, ...]
    components: tuple[Component, ...]

    @property
    def dimension(self) -> int:
        """Dimension of the space the mirrors stand in."""
        return int(self.simple.shape[1])

    @property
    def rank(self) -> int:
        """Number of walls of a chamber."""
        return len(self.simple)

    @property
    def families(self) -> tuple[str, ...]:
        """Names of the irreducible parts, e.g. ``("A1", "I2(5)")``."""
        return tuple(component.family.name for component in self.components)

    @cached_property
    def order(self) -> int:
        """Number of elements."""
        return math.prod(component.family.order for component in self.components)

    @property
    def rotation_order(self) -> int:
        """Number of elements that are products of an even number of reflections."""
        return self.order // 2 if self.components else 1

    @property
    def mirror_count(self) -> int:
        """Number of mirrors."""
        return sum(component.family.mirror_count for component in self.components)

    @property
    def degrees(self) -> tuple[int, ...]:
        """Degrees of the basic invariants, ascending."""
        return tuple(sorted(degree for component in self.components for degree in component.family.degrees))

    @property
    def exponents(self) -> tuple[int, ...]:
        """Degrees less one, ascending."""
        return tuple(degree - 1 for degree in self.degrees)

    @property
    def coxeter_numbers(self) -> tuple[int, ...]:
        """The Coxeter number of each irreducible part."""
        return tuple(component.family.coxeter_number for component in self.components)

    @property
    def contains_inversion(self) -> bool:
        """Whether −1 (on the whole space) is in the group."""
        return self.rank == self.dimension and all(c.family.contains_inversion for c in self.components)

    @property
    def crystallographic(self) -> bool:
        """Whether a lattice can carry the group."""
        return all(component.family.crystallographic for component in self.components)

    @cached_property
    def coxeter_matrix(self) -> NDArray[np.int64]:
        """Product orders of the simple mirrors, shape (r, r): 1 on the diagonal, 2 where they are square."""
        result = np.full((self.rank, self.rank), 2, dtype=np.int64)
        np.fill_diagonal(result, 1)
        for component in self.components:
            for i, j, m in component.family.edges:
                u, v = component.nodes[i], component.nodes[j]
                result[u, v] = result[v, u] = m
        return result

    @cached_property
    def cartan(self) -> Array:
        """Cartan matrix, shape (r, r): whole numbers where a lattice exists, −2cos(π/m) elsewhere.

        Convention of Bourbaki: entry (i, j) is 2(αi, αj)/(αj, αj); in B_n the last root is short, in F4 the
        last two, in G2 the first.
        """
        result = 2.0 * np.eye(self.rank)
        for component in self.components:
            for i, j, m in component.family.edges:
                u, v = component.nodes[i], component.nodes[j]
                if component.family.crystallographic:
                    forward, back = {3: (-1, -1), 4: (-2, -1), 6: (-1, -3)}[m]
                    result[u, v], result[v, u] = forward, back
                else:
                    result[u, v] = result[v, u] = -2 * math.cos(math.pi / m)
        return result

    @cached_property
    def corners(self) -> Array:
        """Unit vectors along the chamber's edges to its corners, shape (r, d); corner i lies off wall i only."""
        dual = np.linalg.pinv(self.simple).T
        return np.asarray(dual / np.linalg.norm(dual, axis=1, keepdims=True), dtype=np.float64)

    def elements(self, limit: int = MOST_ELEMENTS) -> tuple[Array, NDArray[np.int64]]:
        """All elements as matrices with their parity.

        Returns
        -------
        matrices : ndarray, shape (order, d, d)
            The first is the identity; ``matrices[k] @ x`` is the image of x.
        parity : ndarray of int, shape (order,)
            0 for products of an even number of reflections, 1 for odd.

        Raises
        ------
        TooLarge
            More than `limit` elements.
        """
        d = self.dimension
        if self.order > limit:
            what = f"elements of {'x'.join(self.families)}"
            raise TooLarge(what, self.order, self.order * d * d * 8, limit)
        return self._elements

    @cached_property
    def whole_walk(self) -> Walk:
        """The walk over all chambers, from the middle of the first."""
        inside = self.corners.sum(axis=0) if self.rank else np.zeros(self.dimension)
        return walk(self.simple, inside, self.order)

    @cached_property
    def _elements(self) -> tuple[Array, NDArray[np.int64]]:
        d, steps = self.dimension, self.whole_walk
        matrices = np.empty((self.order, d, d))
        matrices[0] = np.eye(d)
        reflections = np.eye(d) - 2 * np.einsum("ri,rj->rij", self.simple, self.simple)
        for start, stop in steps.levels[1:]:
            chosen = reflections[steps.mirror[start:stop]]
            matrices[start:stop] = chosen @ matrices[steps.parent[start:stop]]
        parity = steps.depth % 2
        for shared in (matrices, parity):  # kept and handed out again
            shared.setflags(write=False)
        return matrices, parity

    def fold(self, points: Array) -> tuple[Array, NDArray[np.int64]]:
        """Bring points into the true chamber by reflections.

        Parameters
        ----------
        points : array_like, shape (N, d)

        Returns
        -------
        folded : ndarray, shape (N, d)
        count : ndarray of int, shape (N,)
            How many reflections each took; its parity is the point's parity.
        """
        folded = np.array(points, dtype=np.float64, ndmin=2)
        count = np.zeros(len(folded), dtype=np.int64)
        scale = np.abs(folded).max(axis=1, initial=0.0)
        while self.rank:
            heights = folded @ self.simple.T
            worst = heights.argmin(axis=1)
            depth = heights[np.arange(len(folded)), worst]
            moved = depth < -OUTSIDE * scale
            if not moved.any():
                break
            folded[moved] -= 2 * depth[moved, None] * self.simple[worst[moved]]
            count[moved] += 1
        return folded, count


def family_of(roots: Array) -> Family:
    """The family of the irreducible group with these roots, shape (2N, d), both signs."""
    inside = generic_point(roots, np.eye(roots.shape[1]))
    positive = roots[roots @ inside > 0]
    return components_of(positive[simple_of(positive, inside)])[0].family


def build_group(
    pieces: Sequence[Array], inside: Array, typed: Array, letters: Sequence[str]
) -> ReflectionGroup:
    """The group whose mirrors are given, with the chamber that holds a point.

    Parameters
    ----------
    pieces : sequence of ndarray, each of shape (2N, d)
        Unit normals of all mirrors of each irreducible part, both signs.
    inside : ndarray, shape (d,)
        A point off every mirror.
    typed : ndarray, shape (n, d)
        Unit normals of the typed mirrors, whose letters are kept.
    letters : sequence of str
    """
    if not pieces:
        return ReflectionGroup(np.zeros((0, len(inside))), np.zeros((0, len(inside))), (), ())
    positives = [roots[roots @ inside > 0] for roots in pieces]
    simple = np.concatenate([roots[simple_of(roots, inside)] for roots in positives])
    named: dict[int, str] = {}
    for wall, typed_one in zip(*np.nonzero(same_mirrors(simple, typed)), strict=True):
        named.setdefault(int(wall), letters[int(typed_one)])
    order = sorted(named, key=lambda wall: list(letters).index(named[wall]))
    order += [wall for wall in range(len(simple)) if wall not in named]
    spare = iter([c for c in "pqrstuvwxyz" if c not in letters])
    final = tuple(named[wall] if wall in named else next(spare) for wall in order)
    simple = simple[order]
    return ReflectionGroup(simple, np.concatenate(positives), final, components_of(simple))


def components_of(simple: Array) -> tuple[Component, ...]:
    """The irreducible parts of a chamber with these walls; walls meet at π/m, so the angles give every m."""
    size = len(simple)
    angles = np.arccos(np.clip(-(simple @ simple.T), -1, 1))
    orders = {
        (i, j): round(math.pi / float(angles[i, j]))
        for i in range(size)
        for j in range(i + 1, size)
        if abs(angles[i, j] - math.pi / 2) > SAME_MIRROR
    }
    parts = connected(size, orders)
    result = []
    for part in parts:
        if len(part) == 1:
            result.append(Component(Family("A", 1), tuple(part)))
            continue
        place = {node: k for k, node in enumerate(part)}
        inner = {(place[i], place[j]): m for (i, j), m in orders.items() if i in place and j in place}
        family, nodes = recognise(inner, len(part))
        result.append(Component(family, tuple(part[node] for node in nodes)))
    return tuple(result)


def connected(size: int, edges: object) -> list[list[int]]:
    """Connected parts of a graph on ``range(size)``, each sorted, in the order of their first node."""
    group = list(range(size))
    for i, j in edges:  # type: ignore[attr-defined]
        old, new = group[j], group[i]
        group = [new if g == old else g for g in group]
    return [[i for i in range(size) if group[i] == g] for g in dict.fromkeys(group)]
