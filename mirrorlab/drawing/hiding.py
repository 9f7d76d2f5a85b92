"""What of a picture is hidden behind solid parts, found without a screen so that every translator agrees."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.camera import Camera
from mirrorlab.drawing.look import Look
from mirrorlab.drawing.prepared import Prepared

Array = NDArray[np.float64]

LIFT = 0.035
"""How far towards the eye, in radii of the picture, a mark is held before the surface it lies on. A mark has a
size: one at the ball's outline would otherwise be cut in half."""

LINE_LIFT = 0.006
"""The same for lines, which only must not sink into their own surface."""

MOST_TESTS = 3_000_000
"""Most pairs of point and triangle tried; beyond it nothing counts as hidden, and order alone decides."""

CHUNK = 200_000
"""Pairs tried at once, so that the working arrays stay within the processor's cache."""


def hidden(prepared: Prepared, camera: Camera, points: Array, lift: float = LIFT) -> NDArray[np.bool_]:
    """Return which points lie behind a solid part, shape (N,)."""
    count = len(points)
    if prepared.drawing.flat or not count:
        return np.zeros(count, dtype=bool)
    towards = camera.eye - points
    towards /= np.linalg.norm(towards, axis=1, keepdims=True)
    start = points + lift * camera.radius * towards
    result = behind_ball(start, towards) if prepared.has_ball else np.zeros(count, dtype=bool)
    corners = prepared.plane_corners
    if 0 < len(corners) * count <= MOST_TESTS:
        result |= behind_triangles(start, towards, corners)
    return result


def dimmed(prepared: Prepared, camera: Camera, points: Array, lift: float = LIFT) -> NDArray[np.bool_]:
    """Return which points are drawn dimmed: those hidden or, where nothing is solid, those on the far half."""
    if prepared.bare and not prepared.drawing.flat:
        return np.asarray(camera.view(points)[..., 2] < 0)
    return hidden(prepared, camera, points, lift)


def dimmed_alpha(prepared: Prepared, look: Look) -> float:
    """How strongly what is dimmed is drawn; 0 behind the ball, which is silvered."""
    if prepared.has_ball:
        return 0.0
    return look.far_alpha if prepared.bare else look.hidden_alpha


def behind_ball(start: Array, direction: Array) -> NDArray[np.bool_]:
    """Return which rays from `start` meet the unit ball."""
    along = np.einsum("ij,ij->i", start, direction)
    nearest = np.einsum("ij,ij->i", start, start) - along**2
    outside = np.einsum("ij,ij->i", start, start) >= 1
    return (nearest < 1) & ((along < 0) | ~outside)


def behind_triangles(start: Array, direction: Array, corners: Array) -> NDArray[np.bool_]:
    """Return which rays meet any of the triangles, shape (T, 3, 3), ahead of their start."""
    result = np.zeros(len(start), dtype=bool)
    step = max(1, CHUNK // max(1, len(corners)))
    for first in range(0, len(start), step):
        part = slice(first, first + step)
        result[part] = np.isfinite(ray_lengths(start[part], direction[part], corners)).any(axis=1)
    return result


def ray_lengths(start: Array, direction: Array, corners: Array) -> Array:
    """Return how far along each ray each triangle is met, infinite where it is not.

    Parameters
    ----------
    start, direction : ndarray, shape (N, 3)
    corners : ndarray, shape (T, 3, 3)

    Returns
    -------
    ndarray, shape (N, T)

    References
    ----------
    .. [1] T. Möller, B. Trumbore, J. Graphics Tools 2 (1997) 21–28.
    """
    edge1, edge2 = corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
    p = np.cross(direction[:, None], edge2[None])
    det = np.einsum("tj,ntj->nt", edge1, p)
    with np.errstate(divide="ignore", invalid="ignore"):
        s = start[:, None] - corners[None, :, 0]
        u = np.einsum("ntj,ntj->nt", s, p) / det
        q = np.cross(s, edge1[None])
        v = np.einsum("nj,ntj->nt", direction, q) / det
        t = np.einsum("tj,ntj->nt", edge2, q) / det
        hit = (u >= -1e-12) & (v >= -1e-12) & (u + v <= 1 + 1e-12) & (t > 0) & (det != 0)
    return np.where(hit, t, np.inf)
