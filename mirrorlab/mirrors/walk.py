"""The walk over an orbit: every image once, without a search for repeats.

It starts from a point of the chamber. From an image, mirror i leads on when the image lies on its inner side;
the new image is kept only when i is the last wall that it lies behind, so each has one parent and is met once.

References
----------
.. [1] D. M. Snow, Weyl group orbits, ACM Trans. Math. Software 16 (1990) 94–108.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

AT_ONCE = 4096
"""Up to so many images of one depth are led on from all walls in one step; more, wall by wall, to save memory."""

ON_WALL = 1e-9
"""Heights below this part of the largest are 0: seeds are snapped to walls at 1e-6, and rounding is about 1e-15."""

Array = NDArray[np.float64]
Ints = NDArray[np.int64]
Progress = Callable[[int, int], object]


class OrbitCancelled(Exception):
    """The progress callback asked to stop."""


@dataclass(frozen=True, slots=True, eq=False)
class Walk:
    """The walk over an orbit: for each image its parent, the mirror that led there, and its depth.

    `levels` holds (start, stop) for each depth; the images of one depth stand together.
    """

    points: Array
    parent: Ints
    mirror: Ints
    depth: Ints
    levels: tuple[tuple[int, int], ...]

    def led_from(self, simple: Array, dominant: Array) -> Walk:
        """The same walk from another point off all walls: which mirror leads where is the same for all of them."""
        points = np.empty_like(self.points)
        points[0] = dominant
        for start, stop in self.levels[1:]:
            _reflect(points, simple, self.parent, self.mirror, start, stop)
        return replace(self, points=points)


def _reflect(points: Array, simple: Array, parent: Ints, mirror: Ints, start: int, stop: int) -> None:
    """Fill in the images of one depth."""
    old, normals = points[parent[start:stop]], simple[mirror[start:stop]]
    points[start:stop] = old - 2 * np.einsum("ij,ij->i", old, normals)[:, None] * normals


def walk(simple: Array, dominant: Array, size: int, progress: Progress | None = None) -> Walk:
    """Walk over the orbit of a point of the closed chamber.

    Parameters
    ----------
    simple : ndarray, shape (r, d)
        Unit inward normals of the chamber's walls.
    dominant : ndarray, shape (d,)
        A point with no negative height; heights within `ON_WALL` of its largest count as zero.
    size : int
        Number of images, known from the group's order and the stabiliser.
    progress : callable, optional
        Called with (done, size) after each depth; a return of False cancels.
    """
    rank, d = simple.shape
    two_gram = 2 * simple @ simple.T
    heights = simple @ dominant
    small = ON_WALL * float(np.abs(heights).max(initial=0))
    heights[np.abs(heights) <= small] = 0
    points = np.empty((size, d))
    parent = np.zeros(size, dtype=np.int64)
    mirror = np.full(size, -1, dtype=np.int64)
    depth = np.zeros(size, dtype=np.int64)
    points[0] = dominant
    levels = [(0, 1)]
    frontier = heights[None, :]
    half = 0.5 * float(heights[heights > 0].min(initial=np.inf))
    while True:
        start, stop = levels[-1]
        few = len(frontier) <= AT_ONCE
        found = [_through_all(frontier, two_gram, half)] if few else []
        found += [_through(i, frontier, two_gram, half) for i in range(0 if few else rank)]
        frontier, ahead, mirrors = (np.concatenate(parts) for parts in zip(*found, strict=True))
        if not len(frontier):
            break
        end = stop + len(frontier)
        if end > size:
            msg = f"the walk met more than the {size} images that the order allows"
            raise AssertionError(msg)
        parent[stop:end] = ahead + start
        mirror[stop:end] = mirrors
        depth[stop:end] = len(levels)
        _reflect(points, simple, parent, mirror, stop, end)
        levels.append((stop, end))
        if progress is not None and progress(end, size) is False:
            raise OrbitCancelled
    if levels[-1][1] != size:
        msg = f"the walk met {levels[-1][1]} images, not the {size} that the order gives"
        raise AssertionError(msg)
    return Walk(points, parent, mirror, depth, tuple(levels))


def _through(i: int, frontier: Array, two_gram: Array, half: float) -> tuple[Array, Ints, Ints]:
    """Images that wall i leads to: their heights, the row of `frontier` each comes from, and the wall."""
    ahead = np.flatnonzero(frontier[:, i] > half)
    image = frontier[ahead] - frontier[ahead, i, None] * two_gram[i]
    kept = (image[:, i + 1 :] > -half).all(axis=1)
    return image[kept], ahead[kept], np.full(int(kept.sum()), i, dtype=np.int64)


def _through_all(frontier: Array, two_gram: Array, half: float) -> tuple[Array, Ints, Ints]:
    """The same for all walls, in a few steps whatever the rank."""
    walls = np.arange(len(two_gram))
    mirrors, ahead = np.nonzero(half < frontier.T)
    image = frontier[ahead] - frontier[ahead, mirrors, None] * two_gram[mirrors]
    kept = ((image > -half) | (walls <= mirrors[:, None])).all(axis=1)
    return image[kept], ahead[kept], mirrors[kept]
