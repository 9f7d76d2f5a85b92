"""The convex body that light moves in: the mirrors' planes, and the open faces that close it.

The region between the panels is convex, so a ray inside it meets the nearest plane, and that plane's face is a
mirror or one of the open ones. Where a face is open the ray leaves.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.assembly import Assembly, mouth_normal

Array = NDArray[np.float64]


class Face(IntEnum):
    """What a ray meets."""

    MIRROR = 0
    ROOM = 1  # open: the room on the eye's side
    OBJECT = 2  # the far end, closed by the object
    DARK = 3  # open towards a blackened cover
    FLOOR = 4  # what a wedge stands on


@dataclass(frozen=True, slots=True, eq=False)
class Body:
    """Half-spaces whose common part is the inside.

    Attributes
    ----------
    normals : ndarray, shape (m, 3)
        Unit, inward; the mirrors a, b, c … first, then the mouth.
    offsets : ndarray, shape (m,)
        Inside is where ``normals @ x >= offsets``, in millimetres.
    kinds : ndarray of int, shape (m,)
        `Face` of each.
    """

    normals: Array
    offsets: Array
    kinds: NDArray[np.int64]

    @property
    def mirrors(self) -> int:
        """How many of the faces are mirrors."""
        return int((self.kinds == Face.MIRROR).sum())

    @property
    def mouth(self) -> int:
        """Index of the mouth's face."""
        return self.mirrors

    def heights(self, points: Array) -> Array:
        """How far inside of each face points are, shape (…, m), in millimetres."""
        result: Array = np.asarray(points) @ self.normals.T - self.offsets
        return result


def body_of(assembly: Assembly) -> Body:
    """Return the body of an assembly."""
    out = mouth_normal(assembly)
    faces = [(-out, float(-out @ assembly.mouth[0]), Face.ROOM)]
    low = min(float(panel.outline[:, 2].min()) for panel in assembly.panels)
    high = max(float(panel.outline[:, 2].max()) for panel in assembly.panels)
    up = np.array([0.0, 0.0, 1.0])
    into = assembly.kind == "wedge" and abs(out[2]) < 0.5
    if into:
        faces += [(up, low, Face.FLOOR), (-up, -high, Face.ROOM)]
    elif assembly.kind == "wedge":
        far = float(assembly.panels[0].outline[:, 1].max())
        faces += [(up, low, Face.OBJECT), (np.array([0.0, -1.0, 0.0]), -far, Face.DARK)]
    elif low > 0 or assembly.kind == "tube":
        faces.append((up, low, Face.OBJECT))
    normals = np.vstack([assembly.normals, [normal for normal, _, _ in faces]])
    offsets = np.concatenate([assembly.offsets, [offset for _, offset, _ in faces]])
    kinds = np.array([Face.MIRROR] * len(assembly.panels) + [kind for _, _, kind in faces], dtype=np.int64)
    return Body(normals, offsets, kinds)


@dataclass(frozen=True, slots=True, eq=False)
class Paths:
    """Light paths followed backwards from a point until they leave.

    Attributes
    ----------
    directions, ends : ndarray, shape (N, 3)
        Direction and place of each when it leaves, or stops at its length.
    faces : ndarray of int, shape (N,)
        Index of the face it leaves through; −1 where it stopped inside (length, or `most` bounces).
    bounces : ndarray of int, shape (N,)
    words : ndarray of int8, shape (N, most)
        Mirrors met in turn, −1 after the last.
    lengths : ndarray, shape (N,)
        Millimetres travelled.
    """

    directions: Array
    ends: Array
    faces: NDArray[np.int64]
    bounces: NDArray[np.int64]
    words: NDArray[np.int8]
    lengths: Array

    def word(self, index: int, letters: tuple[str, ...]) -> str:
        """The mirrors met by one path, as letters."""
        return "".join(letters[k] for k in self.words[index] if k >= 0)


def follow(
    body: Body, start: Array, directions: Array, most: int = 200, lengths: Array | None = None
) -> Paths:
    """Follow light paths backwards from a point inside, bouncing on the mirrors.

    Parameters
    ----------
    start : ndarray, shape (3,) or (N, 3)
        Inside the body.
    directions : ndarray, shape (N, 3)
        Unit.
    most : int
        Bounces after which a path is stopped.
    lengths : ndarray, shape (N,), optional
        How far to follow each; to the end when left out.
    """
    n = len(directions)
    ways = np.array(directions, dtype=np.float64)
    points = np.array(np.broadcast_to(np.asarray(start, dtype=np.float64), (n, 3)))
    left = np.full(n, np.inf) if lengths is None else np.array(lengths, dtype=np.float64)
    gone = np.zeros(n)
    faces = np.full(n, -1, dtype=np.int64)
    bounces = np.zeros(n, dtype=np.int64)
    words = np.full((n, most), -1, dtype=np.int8)
    alive = np.arange(n)
    last = np.full(n, -1, dtype=np.int64)
    while len(alive):
        slopes = ways[alive] @ body.normals.T
        heights = np.maximum(body.heights(points[alive]), 0.0)
        with np.errstate(divide="ignore", invalid="ignore"):
            times = np.where(slopes < 0, heights / -slopes, np.inf)
        # A path never meets the mirror it has just left, whatever rounding says.
        rows = np.arange(len(alive))
        times[rows[last[alive] >= 0], last[alive][last[alive] >= 0]] = np.inf
        hit = times.argmin(axis=1)
        time = times[rows, hit]
        short = time >= left[alive]
        step = np.where(short, left[alive], time)
        points[alive] += step[:, None] * ways[alive]
        gone[alive] += step
        left[alive] -= step
        mirror = ~short & (body.kinds[hit] == Face.MIRROR) & (bounces[alive] < most)
        leaving = ~short & (body.kinds[hit] != Face.MIRROR)
        faces[alive[leaving]] = hit[leaving]
        on, wall = alive[mirror], hit[mirror]
        normals = body.normals[wall]
        ways[on] -= 2 * np.sum(ways[on] * normals, axis=1)[:, None] * normals
        words[on, bounces[on]] = wall
        bounces[on] += 1
        last[on] = wall
        alive = on
    return Paths(ways, points, faces, bounces, words, gone)
