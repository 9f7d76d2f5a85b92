"""Convex polygons in the plane: what panels, joints and stock sheets need of them.

All polygons are arrays of shape (k, 2), counter-clockwise, in one unit (mm). Side i runs from corner i to
corner i + 1. Panels of a wedge, a corner or a tube are convex, so no general polygon code is needed.
"""

from __future__ import annotations

from itertools import combinations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

PARALLEL = 1e-12
"""Three sides whose normals have a smaller determinant hold no circle between them."""

TOUCHES = 1e-9
"""Part of a circle's radius by which it may stand over a side: rounding."""

SHORTEST_SIDE = 1e-6
"""mm; a side shorter than this is no side: a thousandth of what any cutter can measure."""


class PolygonError(ValueError):
    """A polygon that is not what the function can work on."""


def side_vectors(outline: Array) -> Array:
    """Vectors along the sides, shape (k, 2)."""
    return np.roll(outline, -1, axis=0) - outline


def side_lengths(outline: Array) -> Array:
    """Lengths of the sides, shape (k,)."""
    return np.linalg.norm(side_vectors(outline), axis=1)


def corner_angles(outline: Array) -> Array:
    """Inside angle at every corner in radians, shape (k,)."""
    after = side_vectors(outline)
    before = -np.roll(after, 1, axis=0)
    cross = after[:, 0] * before[:, 1] - after[:, 1] * before[:, 0]
    return np.arctan2(cross, np.sum(after * before, axis=1)) % (2 * np.pi)


def area(outline: Array) -> float:
    """Signed area; positive when counter-clockwise."""
    x, y = outline.T
    return float(0.5 * np.sum(x * np.roll(y, -1) - y * np.roll(x, -1)))


def is_convex(outline: Array) -> bool:
    """Whether the polygon turns left at every corner."""
    return bool(np.all(corner_angles(outline) < np.pi)) and area(outline) > 0


def inward_normals(outline: Array) -> Array:
    """Unit normals of the sides, pointing inside, shape (k, 2)."""
    vectors = side_vectors(outline)
    lengths = np.linalg.norm(vectors, axis=1, keepdims=True)
    return np.stack([-vectors[:, 1], vectors[:, 0]], axis=1) / lengths


def move_sides(outline: Array, offsets: Array) -> Array:
    """The polygon whose sides are moved inwards by `offsets` (outwards where negative).

    Parameters
    ----------
    outline : ndarray, shape (k, 2)
    offsets : ndarray, shape (k,)

    Raises
    ------
    PolygonError
        When a side vanishes; the message names the first that does.
    """
    normals = inward_normals(outline)
    levels = np.sum(normals * outline, axis=1) + offsets
    moved = np.empty_like(outline)
    for i in range(len(outline)):
        pair = [i - 1, i]
        moved[i] = np.linalg.solve(normals[pair], levels[pair])
    kept = np.sum(side_vectors(moved) * side_vectors(outline), axis=1)
    gone = np.flatnonzero((kept <= 0) | (side_lengths(moved) < SHORTEST_SIDE))
    if len(gone):
        moves = np.round(offsets, 3).tolist()
        msg = f"side {gone[0] + 1} of {len(outline)} vanishes when the sides move by {moves} mm"
        raise PolygonError(msg)
    return moved


def turned(outline: Array, angle: float) -> Array:
    """The polygon turned about the origin by `angle` radians."""
    cos, sin = np.cos(angle), np.sin(angle)
    return outline @ np.array([[cos, sin], [-sin, cos]])


def bounds(outline: Array) -> tuple[float, float, float, float]:
    """Left, bottom, right, top."""
    low, high = outline.min(axis=0), outline.max(axis=0)
    return float(low[0]), float(low[1]), float(high[0]), float(high[1])


def holds(outline: Array, point: Array, slack: float = 1e-6) -> bool:
    """Whether a point lies in a convex polygon or on its border, within `slack` mm."""
    return bool(np.all(np.sum(inward_normals(outline) * (point - outline), axis=1) >= -slack))


def largest_circle(outline: Array) -> tuple[Array, float]:
    """Centre (2,) and radius of the largest circle inside a convex polygon.

    It touches at least three sides, so every triple of sides is tried: fine for the few sides of a panel.
    """
    normals = inward_normals(outline)
    levels = np.sum(normals * outline, axis=1)
    best, radius = outline.mean(axis=0), 0.0
    for triple in combinations(range(len(outline)), 3):
        rows = np.column_stack([normals[list(triple)], -np.ones(3)])
        if abs(np.linalg.det(rows)) < PARALLEL:
            continue
        x, y, r = np.linalg.solve(rows, levels[list(triple)])
        inside = normals @ np.array([x, y]) - levels
        if r > radius and np.all(inside >= r - TOUCHES * max(1.0, r)):
            best, radius = np.array([x, y]), float(r)
    return best, radius


def middle(outline: Array) -> tuple[Array, float]:
    """Centre and radius of a large circle inside: in the middle where several are (nearly) as large."""
    centre, radius = largest_circle(outline)
    mean = outline.mean(axis=0)
    normals = inward_normals(outline)
    room = float((normals @ mean - np.sum(normals * outline, axis=1)).min())
    return (mean, room) if room > 0.9 * radius else (centre, radius)


def minkowski_sum(first: Array, second: Array) -> Array:
    """All sums of a point of one convex polygon and a point of the other, as a convex polygon.

    The sides of both are walked in order of direction [1]_.

    References
    ----------
    .. [1] M. de Berg, O. Cheong, M. van Kreveld, M. Overmars, *Computational Geometry* (3rd ed. 2008), 13.3.
    """
    starts = [_from_lowest(polygon) for polygon in (first, second)]
    sides = np.concatenate([side_vectors(polygon) for polygon in starts])
    order = np.argsort(np.arctan2(sides[:, 1], sides[:, 0]) % (2 * np.pi), kind="stable")
    steps = sides[order][:-1]
    return np.vstack([starts[0][0] + starts[1][0], starts[0][0] + starts[1][0] + np.cumsum(steps, axis=0)])


def _from_lowest(outline: Array) -> Array:
    lowest = np.lexsort((outline[:, 0], outline[:, 1]))[0]
    return np.roll(outline, -lowest, axis=0)
