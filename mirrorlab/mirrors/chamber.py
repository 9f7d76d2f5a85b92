"""Which walls does the chamber around a point have?"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.families import MOST_MIRRORS, TOP_RANK

Array = NDArray[np.float64]

SAME_MIRROR = 1e-7
"""Two unit normals nearer than this name one mirror. Mirrors of a finite group read with closing fractions up
to m = 100,000 stand at least 0.00003 apart, and double precision errs by about 1e-14."""

ROOMY = 0.5
"""A point farther from every mirror than this over the number of normals is far enough: even among 100,000 mirrors that
is ten digits above rounding."""


def simple_of(positive: Array, inside: Array) -> NDArray[np.int64]:
    """Which of an irreducible group's positive roots are simple: their reflection turns no other one negative.

    Parameters
    ----------
    positive : ndarray, shape (N, d)
        Unit normals of all mirrors, each with a positive product with `inside`.
    inside : ndarray, shape (d,)

    References
    ----------
    .. [1] Humphreys (1990), section 1.4: a simple reflection permutes the other positive roots.
    """
    heights = positive @ inside
    if len(positive) > MOST_MIRRORS[TOP_RANK]:
        # More mirrors than any group of higher rank has: a fan in a plane, whose outermost two are simple. The
        # table of all products would not fit for 100,000 mirrors.
        first = int(heights.argmin())
        return np.array([first, int((positive @ positive[first]).argmin())])
    after = heights[None, :] - 2 * (positive @ positive.T) * heights[:, None]
    turned: NDArray[np.int64] = np.flatnonzero((after < 0).sum(axis=1) == 1)
    return turned


def generic_point(roots: Array, frame: Array) -> Array:
    """A point with positive coordinates in a frame, off every mirror with as much room as a few trials give.

    Parameters
    ----------
    roots : ndarray, shape (M, d)
    frame : ndarray, shape (k, d)
        Rows along which the point has positive coordinates, e.g. the corners of the typed region.
    """
    primes = np.sqrt([2.0, 3.0, 5.0, 7.0, 11.0, 13.0, 17.0, 19.0, 23.0])
    best, room = frame.sum(axis=0), -1.0
    for trial in range(24):
        weights = 1 + np.modf(np.resize(primes, len(frame)) * (trial + 1) + 0.37 * trial)[0] * min(
            1.0, trial / 4
        )
        point = weights @ frame
        point = point / np.linalg.norm(point)
        margin = float(np.abs(roots @ point).min(initial=1.0))
        if margin > room:
            best, room = point, margin
        if room * len(roots) > ROOMY:
            break
    return np.asarray(best, dtype=np.float64)


def same_mirrors(normals: Array, others: Array) -> NDArray[np.bool_]:
    """Which unit normals name the same mirror as which others, up to sign; shape (n, k).

    The sine of the angle between them is compared: 1 − cosine would not tell mirrors 0.0004 apart.
    """
    difference = normals[:, None, :] - others[None, :, :]
    total = normals[:, None, :] + others[None, :, :]
    least = np.minimum((difference**2).sum(axis=2), (total**2).sum(axis=2))
    return np.asarray(least < SAME_MIRROR**2)


def typed_walls(roots: Array, inside: Array, typed: Array) -> NDArray[np.bool_]:
    """Which of the typed mirrors are walls of the chamber that holds a point."""
    heights = roots @ inside
    above = roots[heights > 0]
    after = above @ inside - 2 * (typed @ inside)[:, None] * (typed @ above.T)
    return np.asarray((after < 0).sum(axis=1) == 1)


def corner_points(roots: Array, corners: Array) -> list[Array]:
    """Points of the region's chambers that stand in its corners, off every mirror: these share typed walls.

    Each starts on a corner and moves towards the next ones by less than the distance to any mirror not met.
    """
    count = len(corners)
    turns = [[(start + way * k) % count for k in range(count)] for start in range(count) for way in (1, -1)]
    points = []
    for turn in turns:
        point = corners[turn[0]]
        for k in turn[1:]:
            rooms = np.abs(roots @ point)
            point = point + 0.3 * float(rooms[rooms > SAME_MIRROR].min()) * corners[k]
        points.append(point)
    return points


def region_frame(normals: Array, dependent: bool) -> Array:
    """Rows along which a point of the typed region has positive coordinates: its corners, where it has them."""
    if dependent:
        return np.eye(normals.shape[1])
    corners = np.linalg.pinv(normals).T
    return np.asarray(corners / np.linalg.norm(corners, axis=1, keepdims=True))
