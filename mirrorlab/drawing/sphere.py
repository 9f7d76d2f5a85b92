"""Pieces of the unit sphere and of discs through its centre, as triangles and polylines."""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Ints = NDArray[np.int64]


@lru_cache(maxsize=32)
def _grid(steps: int) -> tuple[Array, Ints]:
    """Barycentric weights, shape (V, 3), and triangles, shape (steps², 3), of a triangle cut into equal parts."""
    rows = [(i, j) for i in range(steps + 1) for j in range(steps + 1 - i)]
    number = {place: k for k, place in enumerate(rows)}
    weights = np.array([(steps - i - j, i, j) for i, j in rows], dtype=float) / steps
    triangles = []
    for i, j in rows:
        if i + j < steps:
            triangles.append((number[i, j], number[i + 1, j], number[i, j + 1]))
        if i + j < steps - 1:
            triangles.append((number[i + 1, j], number[i + 1, j + 1], number[i, j + 1]))
    weights.setflags(write=False)
    result = np.array(triangles, dtype=np.int64)
    result.setflags(write=False)
    return weights, result


def spherical_triangles(corners: Array, steps: int) -> tuple[Array, Ints]:
    """Triangles of the unit sphere, each cut into steps² small ones whose edges lie along great circles.

    Parameters
    ----------
    corners : ndarray, shape (M, 3, 3)
        Unit vectors to the three corners of each; they may run either way round.
    steps : int

    Returns
    -------
    vertices : ndarray, shape (M·V, 3)
    triangles : ndarray of int, shape (M·steps², 3)
        Counter-clockwise from outside; those of one spherical triangle stand together.
    """
    turn = np.linalg.det(corners) < 0
    corners = np.where(turn[:, None, None], corners[:, [0, 2, 1]], corners)
    weights, small = _grid(steps)
    vertices = np.einsum("vk,mkj->mvj", weights, corners)
    vertices /= np.linalg.norm(vertices, axis=2, keepdims=True)
    count = len(weights)
    triangles = small[None] + count * np.arange(len(corners))[:, None, None]
    return vertices.reshape(-1, 3), triangles.reshape(-1, 3)


def plane_axes(normals: Array) -> tuple[Array, Array]:
    """Two unit vectors that span the plane with this unit normal, right-handed with it; shape (..., 3) each."""
    u = np.zeros_like(normals)
    least = np.abs(normals).argmin(axis=-1)
    np.put_along_axis(u, least[..., None], 1.0, axis=-1)
    u = cross(u, normals)
    u /= np.sqrt(np.einsum("...i,...i->...", u, u))[..., None]
    return u, cross(normals, u)


def cross(a: Array, b: Array) -> Array:
    """Cross product of arrays of vectors. NumPy's own takes ten times as long for a few vectors."""
    return np.stack(
        [
            a[..., 1] * b[..., 2] - a[..., 2] * b[..., 1],
            a[..., 2] * b[..., 0] - a[..., 0] * b[..., 2],
            a[..., 0] * b[..., 1] - a[..., 1] * b[..., 0],
        ],
        axis=-1,
    )


@lru_cache(maxsize=16)
def _turns(steps: int) -> tuple[Array, Array]:
    t = 2 * np.pi * np.arange(steps) / steps
    return np.cos(t)[:, None], np.sin(t)[:, None]


def circles(normals: Array, radius: float = 1.0, steps: int = 96) -> Array:
    """Points of the circles about the origin in planes with these unit normals.

    Parameters
    ----------
    normals : ndarray, shape (N, 3)

    Returns
    -------
    ndarray, shape (N, steps, 3)
        Not closed: the first point does not come again.
    """
    u, v = plane_axes(normals)
    cos, sin = _turns(steps)
    return radius * (cos * u[:, None] + sin * v[:, None])


def arc(start: Array, end: Array, radius: float = 1.0, step: float = 0.06) -> Array:
    """Points of the shorter great-circle arc between two unit vectors, shape (n, 3), both ends included."""
    angle = float(np.arctan2(np.linalg.norm(cross(start, end)), start @ end))
    count = max(2, int(np.ceil(angle / step)) + 1)
    if angle < 1e-12:
        return radius * np.stack([start, end])
    t = np.linspace(0, 1, count)[:, None]
    return radius * (np.sin((1 - t) * angle) * start + np.sin(t * angle) * end) / np.sin(angle)


QUARTER_STEPS = 24
"""Straight pieces of a quarter of a disc's rim: 3.75 degrees each."""


def disc_quarters(normals: Array, inner: float, outer: float) -> tuple[Array, Ints]:
    """Discs or rings about the origin, each in four quarters.

    Parameters
    ----------
    normals : ndarray, shape (N, 3)
        Unit normals of the discs.
    inner, outer : float
        Radii; 0 for whole discs.

    Returns
    -------
    vertices : ndarray, shape (N, 4, V, 3)
    triangles : ndarray of int, shape (T, 3)
        The same for each quarter.
    """
    whole = circles(normals, 1.0, 4 * QUARTER_STEPS)
    which = np.arange(4)[:, None] * QUARTER_STEPS + np.arange(QUARTER_STEPS + 1)
    rim = whole[:, which % (4 * QUARTER_STEPS)]
    i = np.arange(QUARTER_STEPS)
    if inner > 0:
        vertices = np.concatenate([inner * rim, outer * rim], axis=2)
        n = QUARTER_STEPS + 1
        sides = [np.stack([i, n + i, n + i + 1], axis=1), np.stack([i, n + i + 1, i + 1], axis=1)]
        return vertices, np.concatenate(sides)
    vertices = np.concatenate([np.zeros_like(rim[:, :, :1]), outer * rim], axis=2)
    return vertices, np.stack([np.zeros_like(i), i + 1, i + 2], axis=1)


def cone_corners(normals: Array, tolerance: float = 1e-9) -> Array:
    """Unit vectors to the corners of the region where all ``normals @ x`` are at least 0, in order around it.

    Parameters
    ----------
    normals : ndarray, shape (n, 3)

    Returns
    -------
    ndarray, shape (k, 3)
        k is 0 when the region is empty, flat, or not bounded by at least three corners.
    """
    n = len(normals)
    found: list[Array] = []
    for i in range(n):
        for j in range(i + 1, n):
            along = cross(normals[i], normals[j])
            length = np.linalg.norm(along)
            if length < tolerance:
                continue
            for sign in (1.0, -1.0):
                x = sign * along / length
                if (normals @ x >= -tolerance).all() and not any(np.abs(x - y).max() < 1e-7 for y in found):
                    found.append(x)
    if len(found) < 3:
        return np.zeros((0, 3))
    corners = np.array(found)
    middle = corners.sum(axis=0)
    size = np.linalg.norm(middle)
    if size < tolerance:
        return np.zeros((0, 3))
    u, v = plane_axes(middle / size)
    return corners[np.argsort(np.arctan2(corners @ v, corners @ u))]
