"""Sets of operations of a group: what they generate, and the largest subgroup among them."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

Whole = NDArray[np.int64]

MOST_SUBGROUPS = 4000
"""Subgroups that are followed; m-3-5 has 164 and 60/m, the richest of order 120, some hundreds."""


def generated_by(members: Iterable[int], table: Whole) -> tuple[int, ...]:
    """All products of some operations.

    Parameters
    ----------
    members : iterable of int
    table : ndarray of int, shape (order, order)
        ``table[i, j]`` is operation i times operation j.
    """
    inside = np.zeros(len(table), bool)
    inside[list(members)] = True
    while True:
        now = np.flatnonzero(inside)
        inside[table[np.ix_(now, now)].ravel()] = True
        if inside.sum() == len(now):
            return tuple(now.tolist())


def largest_subgroup(members: Iterable[int], table: Whole) -> tuple[int, ...]:
    """The largest subgroup that lies within a set of operations; the identity must be in the set.

    Cyclic subgroups within the set are joined as long as the join stays within it.
    """
    allowed = frozenset(members)
    cyclic = {frozenset(generated_by([k], table)) for k in allowed}
    cyclic = {one for one in cyclic if one <= allowed}
    found, front = set(cyclic), list(cyclic)
    while front and len(found) < MOST_SUBGROUPS:
        fresh = []
        for one in front:
            for other in cyclic:
                if not other <= one:
                    joined = frozenset(generated_by(one | other, table))
                    if joined <= allowed and joined not in found:
                        found.add(joined)
                        fresh.append(joined)
        front = fresh
    return tuple(sorted(max(found, key=lambda one: (len(one), [-k for k in sorted(one)]))))
