"""The solid cut out by faces at given distances from the centre: an intersection of half-spaces."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.operations import CrystalError

FLAT = 1e-9
"""Unit normals that leave a plane or line by less lie in it: rounding is about 1e-15, angles of faces are 1e-3 up."""

BALANCED = 1e-6
"""Share of their number below which the sum of unit normals is none: faces of a form cancel or lean one way."""

SAME_VERTEX = 1e-7
"""Corners closer than this times the size of the solid are one: half-space intersection returns a corner once for
each three faces that meet in it, equal within about 1e-12."""

_CAP, _FAR = 1.5, 8.0


class SolidError(CrystalError):
    """Faces that bound no solid around the centre."""


@dataclass(frozen=True, eq=False)
class Solid:
    """A convex solid with its faces.

    Attributes
    ----------
    vertices : ndarray, shape (V, 3)
    faces : tuple of tuple of int
        For each given face its corners, counter-clockwise seen from outside; empty when other faces cut it away.
    caps : tuple of tuple of int
        Cuts that are no faces: they end an open form so that it can be drawn.
    normals : ndarray, shape (N, 3)
    distances : ndarray, shape (N,)
    """

    vertices: NDArray[np.float64]
    faces: tuple[tuple[int, ...], ...]
    caps: tuple[tuple[int, ...], ...]
    normals: NDArray[np.float64]
    distances: NDArray[np.float64]

    @property
    def closed(self) -> bool:
        """True when the faces alone bound a finite solid."""
        return not self.caps

    @cached_property
    def edges(self) -> tuple[tuple[int, int, int, int], ...]:
        """Each edge between two faces: corner, corner, face, face."""
        owners: dict[tuple[int, int], list[int]] = {}
        for face, corners in enumerate(self.faces):
            for start, end in zip(corners, (*corners[1:], *corners[:1]), strict=True):
                owners.setdefault((min(start, end), max(start, end)), []).append(face)
        return tuple((*ends, *pair) for ends, pair in owners.items() if len(pair) == 2)

    @cached_property
    def outline(self) -> tuple[tuple[int, int], ...]:
        """Edges where a face ends in a cut."""
        inner = {(start, end) for start, end, _, _ in self.edges}
        ends = set()
        for corners in self.faces:
            for start, end in zip(corners, (*corners[1:], *corners[:1]), strict=True):
                ends.add((min(start, end), max(start, end)))
        return tuple(sorted(ends - inner))

    @cached_property
    def areas(self) -> NDArray[np.float64]:
        """Area of each face, in squared units of the distances; 0 for one that is cut away."""
        result = np.zeros(len(self.faces))
        for face, corners in enumerate(self.faces):
            if corners:
                points = self.vertices[list(corners)]
                crosses = np.cross(points[1:-1] - points[0], points[2:] - points[0])
                result[face] = np.linalg.norm(crosses.sum(axis=0)) / 2
        return result

    @property
    def volume(self) -> float | None:
        """Volume in cubed units of the distances; None for an open one."""
        return float(self.areas @ self.distances / 3) if self.closed else None

    @property
    def faces_at_corner(self) -> int:
        """The most faces that meet in one corner."""
        counts = np.bincount(np.concatenate([np.array(corners, int) for corners in self.faces]))
        return int(counts.max())


def cut_solid(normals: ArrayLike, distances: ArrayLike) -> Solid:
    """The solid {x : normals @ x ≤ distances}.

    Parameters
    ----------
    normals : array_like, shape (N, 3)
        Outward normals; made unit length.
    distances : array_like, shape (N,) or ()
        From the centre, positive.

    Raises
    ------
    SolidError
        When a distance is not positive or a normal is zero.
    """
    rows = np.asarray(normals, float).reshape(-1, 3)
    lengths = np.linalg.norm(rows, axis=1)
    offsets = np.broadcast_to(np.asarray(distances, float), lengths.shape).copy()
    if not len(rows) or not (lengths > 0).all():
        msg = "a solid needs at least one face, and no face normal may be zero"
        raise SolidError(msg)
    if not (offsets > 0).all() or not np.isfinite(offsets).all():
        msg = f"face {int(np.argmax(~(offsets > 0))) + 1}: the distance from the centre must be a positive number"
        raise SolidError(msg)
    rows = rows / lengths[:, None]
    cut_normals, cut_distances = (
        (np.zeros((0, 3)), np.zeros(0)) if bounds(rows) else _cuts(rows, offsets.max())
    )
    planes = np.concatenate([rows, cut_normals])
    all_offsets = np.concatenate([offsets, cut_distances])
    vertices = _vertices(planes, all_offsets)
    polygons = [
        _polygon(vertices, normal, offset) for normal, offset in zip(planes, all_offsets, strict=True)
    ]
    faces, caps = polygons[: len(rows)], [polygon for polygon in polygons[len(rows) :] if polygon]
    return Solid(vertices, tuple(faces), tuple(caps), rows, offsets)


def bounds(normals: ArrayLike) -> bool:
    """Whether faces with these normals close: whether the origin lies inside the hull of the normals."""
    from scipy.spatial import ConvexHull

    rows = np.asarray(normals, float)
    if len(rows) < 4 or np.linalg.matrix_rank(rows[1:] - rows[0], tol=FLAT) < 3:
        return False
    return bool((ConvexHull(rows).equations[:, -1] < -FLAT).all())


def _cuts(normals: NDArray, size: float) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Planes that end an open form: across the directions it runs off in, and a far box around everything."""
    _, strengths, axes = np.linalg.svd(normals, full_matrices=True)
    rank = int((strengths > FLAT).sum())
    free = axes[rank:]
    total = normals.sum(axis=0)
    directions = [*free, *-free]
    if np.linalg.norm(total) > BALANCED * len(normals):
        directions.append(-total / np.linalg.norm(total))
    near = [_CAP * size] * len(directions)
    box = [*np.eye(3), *-np.eye(3)]
    return np.array([*directions, *box]), np.array([*near, *[_FAR * size] * 6])


def _vertices(normals: NDArray, offsets: NDArray) -> NDArray[np.float64]:
    from scipy.spatial import HalfspaceIntersection

    found = HalfspaceIntersection(np.column_stack([normals, -offsets]), np.zeros(3)).intersections
    tolerance = SAME_VERTEX * float(np.abs(found).max())
    kept: list[NDArray] = []
    for point in found:
        if not kept or np.abs(np.array(kept) - point).max(axis=1).min() > tolerance:
            kept.append(point)
    return np.array(kept)


def _polygon(vertices: NDArray, normal: NDArray, offset: float) -> tuple[int, ...]:
    tolerance = 10 * SAME_VERTEX * float(np.abs(vertices).max())
    on = np.flatnonzero(np.abs(vertices @ normal - offset) < tolerance)
    if len(on) < 3:
        return ()
    points = vertices[on] - vertices[on].mean(axis=0)
    across = points[int(np.argmax(np.linalg.norm(points, axis=1)))]
    across = across / np.linalg.norm(across)
    up = np.cross(normal, across)
    order = np.argsort(np.arctan2(points @ up, points @ across))
    return tuple(int(index) for index in on[order])
