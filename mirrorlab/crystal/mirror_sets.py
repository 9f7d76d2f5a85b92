"""Reflections of a lattice as whole-number matrices, and the sets of them that are all the mirrors of a symmetry."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

Whole = NDArray[np.int64]

ORDER_BY_TRACE = {-1: 2, 0: 3, 1: 4, 2: 6}
"""Orders of a rotation other than 1 that maps a lattice onto itself, by the trace of its matrix."""

MOST_SETS = 2000
"""Sets that are followed; a lattice within 10° of two cubic ones at once has some hundreds."""


def reflection_in(plane: ArrayLike, row: ArrayLike) -> Whole:
    """1 − 2 u hᵀ/(h·u): keeps the plane h and turns the row u round; whole numbers when h·u is 1 or 2."""
    h, u = np.asarray(plane, np.int64), np.asarray(row, np.int64)
    return np.eye(3, dtype=np.int64) - 2 * np.outer(u, h) // int(h @ u)


def closed_sets(reflections: Sequence[Whole]) -> set[frozenset[int]]:
    """Sets of mirrors that are, together with the centre, all the mirrors of a finite group.

    Parameters
    ----------
    reflections : sequence of ndarray of int, shape (3, 3)
        Those that are allowed; a set that would need another one is left out.

    Returns
    -------
    set of frozenset of int
        Numbers of the reflections. The empty set (the centre alone) is always among them.
    """
    follow = _consequences(reflections)
    single = {frozenset([k]) for k in range(len(reflections))}
    found: set[frozenset[int]] = {frozenset()} | single
    front = list(single)
    while front and len(found) < MOST_SETS:
        fresh = []
        for one in front:
            for k in range(len(reflections)):
                if k not in one:
                    grown = _close(one | {k}, follow)
                    if grown is not None and grown not in found:
                        found.add(grown)
                        fresh.append(grown)
        front = fresh
    return found


def _consequences(reflections: Sequence[Whole]) -> list[list[frozenset[int] | None]]:
    """For each pair, the mirrors that a symmetry with both has as well; None when one is not allowed or none can be."""
    place = {matrix.tobytes(): k for k, matrix in enumerate(reflections)}
    size = len(reflections)
    table: list[list[frozenset[int] | None]] = [[frozenset()] * size for _ in range(size)]
    for i in range(size):
        for j in range(i + 1, size):
            table[i][j] = table[j][i] = _of_pair(reflections[i], reflections[j], place)
    return table


def _of_pair(first: Whole, second: Whole, place: dict[bytes, int]) -> frozenset[int] | None:
    rotation = first @ second
    order = _order(rotation)
    if order is None:
        return None  # both would make a rotation that never returns
    needed = [first @ second @ first, second @ first @ second]
    if order % 2 == 0:
        needed.append(
            -np.linalg.matrix_power(rotation, order // 2)
        )  # a half turn and the centre make a mirror
    keys = [np.ascontiguousarray(matrix).tobytes() for matrix in needed]
    if any(key not in place for key in keys):
        return None
    return frozenset(place[key] for key in keys)


def _order(product: Whole) -> int | None:
    """Order of the product of two different reflections, None when no power of it is the identity.

    Its trace is 1 + 2 cos of the angle it turns by. With three different eigenvalues the trace decides; a half turn
    may come with a shear, so its square is looked at.
    """
    order = ORDER_BY_TRACE.get(int(np.trace(product)))
    if order == 2 and (product @ product != np.eye(3, dtype=np.int64)).any():
        return None
    return order


def _close(start: frozenset[int], follow: list[list[frozenset[int] | None]]) -> frozenset[int] | None:
    inside, front = set(start), list(start)
    while front:
        k = front.pop()
        for other in list(inside):
            more = follow[k][other]
            if more is None:
                return None
            fresh = more - inside
            inside |= fresh
            front.extend(fresh)
    return frozenset(inside)
