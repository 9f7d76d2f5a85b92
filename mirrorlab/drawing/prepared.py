"""A drawing's arrays put together once, for translators, picking and hiding; each made when first asked for."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Faces, Key, Role
from mirrorlab.drawing.ordering import Piece, Tree, bridged, grow
from mirrorlab.drawing.sphere import cross

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

BALL_ROLES = frozenset({Role.CHAMBER_EVEN, Role.CHAMBER_ODD, Role.REGION, Role.NET})
"""Roles whose faces make up the ball when they lie on the unit sphere."""

SHEER_ROLES = frozenset({Role.TYPED_MIRROR, Role.GENERATED_MIRROR, Role.PANEL, Role.FLAGGED})
"""Roles whose faces let things behind them show, seen from either side."""

ONE_PLACE = 1e-6
"""Images nearer than this part of the picture are seen as one."""

DOT_ROLES = frozenset({Role.SEED, Role.IMAGE_EVEN, Role.IMAGE_ODD})
"""Roles of the seed and its images."""

ON_BALL = 1e-6
"""Vertices this near to length 1 lie on the unit sphere: far above rounding, far below a detail."""

MOST_ORDERED = 300
"""Most plane patches that are cut against one another; more are put in order by their distance alone."""

SAME_PLANE = 1e4
"""Triangles whose normals and distances agree to this part lie in one plane: less than a pixel apart."""


@dataclass(frozen=True, slots=True, eq=False)
class Patch:
    """Triangles of one block that have one key.

    Attributes
    ----------
    block : int
        Index into the drawing's faces.
    key : Key
    triangles : ndarray of int
        Rows of the block's triangles.
    loops : tuple of ndarray
        Boundary as vertex indices of the block, each loop in the triangles' sense.
    middle, normal : ndarray, shape (3,)
        Mean of the triangles' middles, and unit mean normal, weighted by area.
    """

    block: int
    key: Key
    triangles: Ints
    loops: tuple[Ints, ...]
    middle: Array
    normal: Array


def on_ball(drawing: Drawing, faces: Faces) -> bool:
    """Whether these faces are part of the unit ball."""
    if drawing.flat or drawing.unit or faces.role not in BALL_ROLES or not len(faces.vertices):
        return False
    lengths = np.einsum("ij,ij->i", faces.vertices, faces.vertices)
    return bool(np.abs(lengths - 1).max() < ON_BALL)


class Prepared:
    """What translators need of one drawing. It never changes; `drawing` may be asked for by all of them."""

    def __init__(self, drawing: Drawing) -> None:
        self.drawing = drawing

    @cached_property
    def curved(self) -> tuple[bool, ...]:
        """For each block of faces whether it is part of the unit ball."""
        return tuple(on_ball(self.drawing, faces) for faces in self.drawing.faces)

    @property
    def has_ball(self) -> bool:
        """Whether there is a unit ball that hides what is behind it."""
        return any(self.curved)

    @cached_property
    def corners(self) -> Array:
        """Corners of all triangles, block after block, shape (T, 3, 3)."""
        parts = [faces.vertices[faces.triangles] for faces in self.drawing.faces]
        return np.concatenate(parts) if parts else np.zeros((0, 3, 3))

    @cached_property
    def block_of(self) -> Ints:
        """Block of each triangle, shape (T,)."""
        counts = [len(faces.triangles) for faces in self.drawing.faces]
        return np.repeat(np.arange(len(counts)), counts)

    @cached_property
    def starts(self) -> Ints:
        """First triangle of each block, shape (blocks + 1,)."""
        counts = [len(faces.triangles) for faces in self.drawing.faces]
        return np.concatenate([[0], np.cumsum(counts, dtype=np.int64)]).astype(np.int64)

    @cached_property
    def normals(self) -> Array:
        """Unit normal of each triangle, shape (T, 3); zero for a triangle without area."""
        p = self.corners
        n = np.cross(p[:, 1] - p[:, 0], p[:, 2] - p[:, 0])
        return n / np.maximum(np.linalg.norm(n, axis=1, keepdims=True), 1e-300)

    @cached_property
    def solid(self) -> NDArray[np.bool_]:
        """Which triangles hide what is behind them, shape (T,)."""
        sheer = np.array([faces.role in SHEER_ROLES for faces in self.drawing.faces], dtype=bool)
        return ~sheer[self.block_of] if len(sheer) else np.zeros(0, dtype=bool)

    @cached_property
    def plane_corners(self) -> Array:
        """Corners of the solid triangles that are no part of the ball, shape (T, 3, 3)."""
        parts = [
            faces.vertices[faces.triangles]
            for faces, curved in zip(self.drawing.faces, self.curved, strict=True)
            if not curved and faces.role not in SHEER_ROLES
        ]
        return np.concatenate(parts) if parts else np.zeros((0, 3, 3))

    @cached_property
    def bare(self) -> bool:
        """Whether there is nothing solid, so that lines lie on the ground and the far half shows."""
        faces = [faces for faces in self.drawing.faces if len(faces.triangles)]
        solid = any(f.role not in SHEER_ROLES for f in faces)
        return not solid and all(f.role is not Role.PANEL for f in self.drawing.faces)

    def key_of(self, triangle: int) -> Key:
        """Key of a triangle counted over all blocks."""
        block = int(self.block_of[triangle])
        keys = self.drawing.faces[block].keys
        return keys[0] if len(keys) == 1 else keys[triangle - int(self.starts[block])]

    @cached_property
    def patches(self) -> tuple[Patch, ...]:
        """All faces as patches of one key each."""
        found: list[Patch] = []
        for block, faces in enumerate(self.drawing.faces):
            if len(faces.triangles):
                rows = slice(int(self.starts[block]), int(self.starts[block + 1]))
                found += _patches(block, faces, self.corners[rows], self.curved[block])
        return tuple(found)

    def outlines(self, patch: Patch) -> list[Array]:
        """Outlines of a plane patch, holes joined to them, shape (n, 3) each."""
        vertices = self.drawing.faces[patch.block].vertices
        return bridged([vertices[loop] for loop in patch.loops], patch.normal)

    @cached_property
    def tree(self) -> Tree | None:
        """The plane patches, so cut that they can be put in order for any eye; None when there are too many."""
        pieces = [
            Piece(loop, patch.normal, number)
            for number, patch in enumerate(self.patches)
            if not self.curved[patch.block]
            for loop in self.outlines(patch)
        ]
        return grow(pieces) if len(pieces) <= MOST_ORDERED else None

    @cached_property
    def patches_by_key(self) -> dict[Key, tuple[Patch, ...]]:
        """The patches that stand for a key."""
        found: dict[Key, list[Patch]] = {}
        for patch in self.patches:
            found.setdefault(patch.key, []).append(patch)
        return {key: tuple(patches) for key, patches in found.items()}

    @cached_property
    def point_positions(self) -> Array:
        """Positions of all points, shape (P, 3)."""
        parts = [p.positions for p in self.drawing.points if len(p.positions)]
        return np.concatenate(parts) if parts else np.zeros((0, 3))

    @cached_property
    def point_block(self) -> Ints:
        """For each point which `Points` it is of, shape (P,)."""
        counts = [len(p.positions) for p in self.drawing.points]
        return np.repeat(np.arange(len(counts)), counts)

    @cached_property
    def point_keys(self) -> tuple[Key, ...]:
        """Key of each point."""
        return tuple(key for p in self.drawing.points for key in p.keys)

    @cached_property
    def spacing(self) -> float:
        """How far images stand from one another: a low quarter of some images' distances to their second nearest.

        The nearest may lie as close as one likes, where a seed comes near to a wall. Infinite for up to two.
        """
        chosen = np.array([p.role in DOT_ROLES for p in self.drawing.points], dtype=bool)
        places = self.point_positions[chosen[self.point_block]] if len(chosen) else np.zeros((0, 3))
        if len(places) < 3:
            return float("inf")
        apart = np.linalg.norm(places[: len(places) : max(1, len(places) // 30)][:, None] - places, axis=2)
        apart[apart < ONE_PLACE * apart.max()] = np.inf  # itself, and what a projection laid upon it
        return float(np.percentile(np.partition(apart, 1, axis=1)[:, 1], 25))

    @cached_property
    def segments(self) -> tuple[Array, Array, Ints]:
        """Start and end of every line's pieces, shape (S, 3) each, and which line each is of, shape (S,)."""
        starts, ends, which = [], [], []
        for i, line in enumerate(self.drawing.lines):
            points = line.points
            if line.closed and len(points):
                points = np.concatenate([points, points[:1]])
            if len(points) > 1:
                step = 2 if line.apart else 1
                starts.append(points[:-1:step])
                ends.append(points[1::step])
                which.append(np.full(len(starts[-1]), i))
        if not starts:
            return np.zeros((0, 3)), np.zeros((0, 3)), np.zeros(0, dtype=np.int64)
        return np.concatenate(starts), np.concatenate(ends), np.concatenate(which)


def _patches(block: int, faces: Faces, corners: Array, curved: bool) -> list[Patch]:
    """One patch for each key and, off the ball, for each plane."""
    triangles = faces.triangles
    count = len(triangles)
    if len(faces.keys) == 1:
        ids, names = np.zeros(count, dtype=np.int64), [faces.keys[0]]
    else:
        index: dict[Key, int] = {}
        ids = np.fromiter((index.setdefault(k, len(index)) for k in faces.keys), np.int64, count)
        names = list(index)
    n = cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    if not curved:
        ids, names = _by_plane(ids, names, n, corners)
    area = np.maximum(np.linalg.norm(n, axis=1), 1e-300)
    weight = np.bincount(ids, area, len(names))
    middles = corners.mean(axis=1) * area[:, None]
    middle = (
        np.stack([np.bincount(ids, middles[:, k], len(names)) for k in range(3)], axis=1) / weight[:, None]
    )
    normal = np.stack([np.bincount(ids, n[:, k], len(names)) for k in range(3)], axis=1)
    normal /= np.maximum(np.linalg.norm(normal, axis=1, keepdims=True), 1e-300)
    order = np.argsort(ids, kind="stable")
    bounds = np.searchsorted(ids[order], np.arange(len(names) + 1))
    loops = boundary_loops(triangles, ids, len(faces.vertices))
    return [
        Patch(block, names[k], order[bounds[k] : bounds[k + 1]], loops.get(k, ()), middle[k], normal[k])
        for k in range(len(names))
    ]


def _by_plane(ids: Ints, names: list[Key], n: Array, corners: Array) -> tuple[Ints, list[Key]]:
    """Split groups of triangles where they do not lie in one plane."""
    unit = n / np.maximum(np.linalg.norm(n, axis=1, keepdims=True), 1e-300)
    size = max(float(np.abs(corners).max()), 1e-300)
    offset = np.einsum("ij,ij->i", unit, corners[:, 0]) / size
    marks = np.column_stack([ids, np.round(unit * SAME_PLANE), np.round(offset * SAME_PLANE)]) + 0.0
    rows, split = np.unique(marks, axis=0, return_inverse=True)
    return split.ravel().astype(np.int64), [names[int(row[0])] for row in rows]


def boundary_loops(triangles: Ints, ids: Ints, vertices: int) -> dict[int, tuple[Ints, ...]]:
    """Boundary loops of groups of triangles: the edges that no neighbour of the same group runs back along.

    Parameters
    ----------
    triangles : ndarray of int, shape (T, 3)
    ids : ndarray of int, shape (T,)
        Group of each triangle.
    vertices : int
        Number of vertices.
    """
    shifts = _repeats(triangles, ids)
    if len(shifts) > 1:
        one = slice(0, len(ids) // len(shifts))
        (first,) = boundary_loops(triangles[one], ids[one], vertices).values()
        return {g: tuple(loop + shift for loop in first) for g, shift in enumerate(shifts.tolist())}
    a = triangles[:, [0, 1, 2]].ravel()
    b = triangles[:, [1, 2, 0]].ravel()
    group = np.repeat(ids, 3)
    forth = (group * vertices + a) * vertices + b
    back = (group * vertices + b) * vertices + a
    edge = np.flatnonzero(~np.isin(forth, back, assume_unique=False))
    following: dict[tuple[int, int], list[int]] = {}
    for g, i, j in zip(group[edge].tolist(), a[edge].tolist(), b[edge].tolist(), strict=True):
        following.setdefault((g, i), []).append(j)
    loops: dict[int, list[Ints]] = {}
    while following:
        g, start = next(iter(following))
        loop = [start]
        here = start
        while (ahead := following.get((g, here))) is not None:
            after = ahead.pop()
            if not ahead:
                del following[(g, here)]
            here = after
            if here == start:
                break
            loop.append(here)
        loops.setdefault(g, []).append(np.array(loop, dtype=np.int64))
    return {g: tuple(parts) for g, parts in loops.items()}


def _repeats(triangles: Ints, ids: Ints) -> Ints:
    """By how much the vertices of each group are those of the first one shifted; empty where groups differ.

    All chambers of a sphere are cut alike, so that the loops of one are those of all.
    """
    counts = np.bincount(ids)
    none = np.zeros(0, dtype=np.int64)
    if (
        not len(ids)
        or counts.min() != counts.max()
        or (ids != np.repeat(np.arange(len(counts)), counts[0])).any()
    ):
        return none
    groups = triangles.reshape(len(counts), -1)
    shifts = groups[:, 0] - groups[0, 0]
    return shifts if (groups - shifts[:, None] == groups[0]).all() else none
