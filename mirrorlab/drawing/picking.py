"""What of a drawing is under the pointer: a ray cast in plain arithmetic, the same for every view."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.camera import Camera
from mirrorlab.drawing.hiding import hidden, ray_lengths
from mirrorlab.drawing.model import Key, Role
from mirrorlab.drawing.prepared import DOT_ROLES, Prepared

Array = NDArray[np.float64]

POINT_REACH = 9.0
"""Pixels within which a point is meant."""

LINE_REACH = 4.0
"""Pixels within which a line is meant when no point is."""

SEED_REACH = 14.0
"""Pixels within which a press takes hold of the seed."""


@dataclass(frozen=True, slots=True, eq=False)
class Hit:
    """What was picked: its key and where, in the drawing's coordinates."""

    key: Key
    position: Array


def pick(prepared: Prepared, camera: Camera, x: float, y: float, width: float, height: float) -> Hit | None:
    """Return what is seen at a pixel: a point, else a line, else the nearest face, else None."""
    return (
        _pick_point(prepared, camera, x, y, width, height)
        or _pick_line(prepared, camera, x, y, width, height)
        or _pick_face(prepared, camera, x, y, width, height)
    )


def _pick_point(p: Prepared, camera: Camera, x: float, y: float, width: float, height: float) -> Hit | None:
    positions = p.point_positions
    if not len(positions):
        return None
    seen = camera.project(positions, width, height)
    apart = np.hypot(seen[:, 0] - x, seen[:, 1] - y)
    near = np.flatnonzero(apart <= POINT_REACH)
    near = near[~hidden(p, camera, positions[near])]
    if not len(near):
        return None
    # A seed or image beats a net's or an axis' mark at the same place; then the nearest, then the frontmost.
    first = np.array([p.drawing.points[int(p.point_block[i])].role not in DOT_ROLES for i in near])
    best = near[np.lexsort((-seen[near, 2], np.round(apart[near]), first))[0]]
    return Hit(p.point_keys[int(best)], positions[best])


def _pick_line(p: Prepared, camera: Camera, x: float, y: float, width: float, height: float) -> Hit | None:
    starts, ends, which = p.segments
    if not len(starts):
        return None
    a, b = camera.project(starts, width, height), camera.project(ends, width, height)
    d = b[:, :2] - a[:, :2]
    along = np.clip(
        ((x - a[:, 0]) * d[:, 0] + (y - a[:, 1]) * d[:, 1]) / np.maximum((d**2).sum(axis=1), 1e-12), 0, 1
    )
    apart = np.hypot(a[:, 0] + along * d[:, 0] - x, a[:, 1] + along * d[:, 1] - y)
    near = np.flatnonzero(apart <= LINE_REACH)
    near = near[[p.drawing.lines[int(which[i])].role not in _BACKGROUND for i in near]]
    places = starts[near] + along[near, None] * (ends[near] - starts[near])
    seen = ~hidden(p, camera, places)
    near, places = near[seen], places[seen]
    if not len(near):
        return None
    typed = [p.drawing.lines[int(which[i])].role is not Role.TYPED_MIRROR for i in near]
    best = int(np.lexsort((apart[near], typed))[0])
    return Hit(p.drawing.lines[int(which[near[best]])].key, places[best])


_BACKGROUND = frozenset({Role.NET, Role.GUIDE, Role.REGION})


def _pick_face(p: Prepared, camera: Camera, x: float, y: float, width: float, height: float) -> Hit | None:
    if not len(p.corners):
        return None
    start, direction = camera.ray(x, y, width, height)
    lengths = ray_lengths(start[None], direction[None], p.corners)[0]
    # A sheer mirror gives way to the solid face behind it, unless there is none.
    for group in (p.solid, ~p.solid):
        candidates = np.where(group, lengths, np.inf)
        if p.drawing.flat:
            inside = np.flatnonzero(np.isfinite(candidates))
            if len(inside):
                return Hit(p.key_of(int(inside[-1])), start + direction * candidates[inside[-1]])
        elif np.isfinite(candidates).any():
            best = int(candidates.argmin())
            return Hit(p.key_of(best), start + direction * candidates[best])
    return None


def near_seed(prepared: Prepared, camera: Camera, x: float, y: float, width: float, height: float) -> bool:
    """Return whether a press at a pixel takes hold of the seed."""
    if not prepared.drawing.seed_on:
        return False
    for points in prepared.drawing.points:
        if points.role is Role.SEED and len(points.positions):
            seen = camera.project(points.positions, width, height)
            close = np.hypot(seen[:, 0] - x, seen[:, 1] - y) <= SEED_REACH
            if (close & ~hidden(prepared, camera, points.positions)).any():
                return True
    return False


def seed_at(
    prepared: Prepared, camera: Camera, x: float, y: float, width: float, height: float
) -> Array | None:
    """Return where the seed would be when dragged to a pixel, shape (3,); None where it cannot be.

    On a sphere a pixel beside it means the nearest point of its outline.
    """
    seeds = [p.positions[0] for p in prepared.drawing.points if p.role is Role.SEED and len(p.positions)]
    seed = np.asarray(seeds[0], dtype=float) if seeds else np.array([0.0, 0.0, 1.0])
    start, direction = camera.ray(x, y, width, height)
    if prepared.drawing.seed_on == "plane":
        if abs(direction[2]) < 1e-9:
            return None
        t = (seed[2] - start[2]) / direction[2]
        return None if t < 0 else np.asarray(start + t * direction)
    if prepared.drawing.seed_on == "sphere":
        radius = float(np.linalg.norm(seed)) or 1.0
        along = -float(start @ direction)
        nearest = start + along * direction
        gap = radius**2 - float(nearest @ nearest)
        if gap >= 0:
            return np.asarray(start + (along - math.sqrt(gap)) * direction)
        return np.asarray(nearest * radius / np.linalg.norm(nearest))
    return None
