"""Which point goes to which: the pairing of moved points with the points there are, by optimal assignment.

Each pair costs the square of its distance over what is allowed; a point without a partner costs as much as one just out
of reach. The sum is made least [1]_. Points out of each other's reach cannot be partners, so the groups of points that
are in reach of one another are settled one by one.

References
----------
.. [1] SciPy `linear_sum_assignment`; D. F. Crouse, IEEE Trans. Aerosp. Electron. Syst. 52 (2016) 1679–1696.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.operations import CrystalError

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

REACH = 5.0
"""How many times the allowed distance a partner may be away and still count as the partner that is off."""

MOST_PAIRS = 2_000_000
"""Pairs within reach that are held at once (about 100 MB)."""


class MatchingError(CrystalError):
    """A tolerance so wide that everything is in reach of everything."""


def match_points(
    moved: ArrayLike, points: ArrayLike, allowed: ArrayLike, reach: float, kinds: Whole | None = None
) -> tuple[Whole, Array]:
    """Partners of moved points.

    Parameters
    ----------
    moved, points : array_like, shape (n, 3)
    allowed : array_like, shape (n,)
        What each point allows: points i and j may be ``hypot(allowed[i], allowed[j])`` apart.
    reach : float
        How many times the allowed distance a partner may be away.
    kinds : ndarray of int, shape (n,), optional
        Only points of one kind are partners.

    Returns
    -------
    partner : ndarray of int, shape (n,)
        Number of the point that point i was moved to; -1 where there is none.
    distance : ndarray, shape (n,)
        NaN where there is none.

    Raises
    ------
    MatchingError
    """
    here, there = np.asarray(moved, float), np.asarray(points, float)
    share = np.asarray(allowed, float)
    rows, columns, lengths = _pairs(here, there, share, reach, kinds)
    alone = (np.bincount(rows, minlength=len(there))[rows] == 1) & (
        np.bincount(columns, minlength=len(there))[columns] == 1
    )
    taken = [np.flatnonzero(alone)]
    open_pairs = np.flatnonzero(~alone)
    ratios = lengths / np.hypot(share[rows], share[columns])
    for chosen in _in_reach_of_one_another(rows[open_pairs], columns[open_pairs], len(there)):
        pairs = open_pairs[chosen]
        taken.append(pairs[_settle(rows[pairs], columns[pairs], ratios[pairs], reach)])
    pairs = np.concatenate(taken)
    partner, distance = np.full(len(there), -1, np.int64), np.full(len(there), np.nan)
    partner[rows[pairs]] = columns[pairs]
    distance[rows[pairs]] = lengths[pairs]
    return partner, distance


def nearest_both_ways(moved: Array, points: Array, reach: float, kinds: Whole) -> Whole:
    """Partners where each is the other's nearest, within a distance; -1 elsewhere. Quick, for a first look."""
    from scipy.spatial import cKDTree

    gap = 4 * reach + 1.0  # kinds stand apart along a fourth axis
    here = np.column_stack([moved, kinds * gap])
    there = np.column_stack([points, kinds * gap])
    distance, there_of = cKDTree(there).query(here, distance_upper_bound=reach)
    _, here_of = cKDTree(here).query(there, distance_upper_bound=reach)
    found = np.isfinite(distance)
    partner = np.where(found, there_of, -1)
    both = found & (here_of[np.where(found, there_of, 0)] == np.arange(len(here)))
    return np.asarray(np.where(both, partner, -1), np.int64)


def _in_reach_of_one_another(rows: Whole, columns: Whole, count: int) -> list[Whole]:
    """Numbers of the pairs, those together whose points are linked by other pairs."""
    if not len(rows):
        return []
    from scipy.sparse import coo_array
    from scipy.sparse.csgraph import connected_components

    links = coo_array((np.ones(len(rows)), (rows, count + columns)), shape=(2 * count, 2 * count))
    _, group = connected_components(links, directed=False)
    order = np.argsort(group[rows], kind="stable")
    return np.split(order, np.flatnonzero(np.diff(group[rows][order])) + 1)


def _pairs(
    here: Array, there: Array, share: Array, reach: float, kinds: Whole | None
) -> tuple[Whole, Whole, Array]:
    """All pairs within reach of each other, with their distances."""
    from scipy.spatial import cKDTree

    far = reach * np.hypot(share, share.max())
    tree = cKDTree(there)
    if int(tree.query_ball_point(here, far, return_length=True).sum()) > MOST_PAIRS:
        msg = f"the tolerance is so wide that more than {MOST_PAIRS:,} pairs of points are in reach; give a smaller one"
        raise MatchingError(msg)
    near = tree.query_ball_point(here, far)
    counts = np.array([len(row) for row in near])
    rows = np.repeat(np.arange(len(here)), counts)
    columns = np.fromiter((k for row in near for k in row), np.int64, int(counts.sum()))
    lengths = np.linalg.norm(here[rows] - there[columns], axis=1)
    keep = lengths <= reach * np.hypot(share[rows], share[columns])
    if kinds is not None:
        keep &= kinds[rows] == kinds[columns]
    return rows[keep], columns[keep], lengths[keep]


def _settle(rows: Whole, columns: Whole, ratios: Array, reach: float) -> list[int]:
    """Numbers of the pairs taken, among pairs that are in reach of one another."""
    from scipy.optimize import linear_sum_assignment

    left, i = np.unique(rows, return_inverse=True)
    right, j = np.unique(columns, return_inverse=True)
    costs = np.full((len(left), len(right)), reach * reach * 1.000001)
    costs[i, j] = ratios * ratios
    place = np.full(costs.shape, -1)
    place[i, j] = np.arange(len(rows))
    taken = place[linear_sum_assignment(costs)]
    return [int(k) for k in taken if k >= 0]
