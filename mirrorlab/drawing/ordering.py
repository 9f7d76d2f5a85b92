"""Plane polygons put in order from back to front for any eye, cut where they cross.

References
----------
.. [1] H. Fuchs, Z. M. Kedem, B. F. Naylor, SIGGRAPH 80, 124–133: binary space partitioning.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.sphere import cross

Array = NDArray[np.float64]

THICK = 1e-6
"""Corners this near to a plane, as a part of the drawing's size, lie in it: far below a pixel."""

TRIALS = 6
"""So many polygons are tried as the next to cut by; the one that cuts fewest others is taken."""


@dataclass(frozen=True, slots=True, eq=False)
class Piece:
    """A polygon, shape (n, 3), its plane's unit normal, and the number of the patch it is of."""

    points: Array
    normal: Array
    patch: int


@dataclass(frozen=True, slots=True, eq=False)
class Tree:
    """A plane with the pieces in it, and what lies before and behind it."""

    normal: Array
    offset: float
    inside: tuple[Piece, ...]
    before: Tree | None
    behind: Tree | None

    def back_to_front(self, eye: Array) -> Iterator[Piece]:
        """The pieces in the order in which they are painted for an eye at this place."""
        near = float(self.normal @ eye) >= self.offset
        far_side, near_side = (self.behind, self.before) if near else (self.before, self.behind)
        if far_side is not None:
            yield from far_side.back_to_front(eye)
        yield from self.inside
        if near_side is not None:
            yield from near_side.back_to_front(eye)


def grow(pieces: list[Piece]) -> Tree | None:
    """Put pieces into a tree, cutting those that others' planes cross."""
    if not pieces:
        return None
    size = max(float(np.abs(piece.points).max()) for piece in pieces) or 1.0
    return _grow(pieces, THICK * size)


def _grow(pieces: list[Piece], thick: float) -> Tree | None:
    if not pieces:
        return None
    splitter = _choose(pieces, thick)
    normal, offset = splitter.normal, float(splitter.normal @ splitter.points[0])
    inside, before, behind = [], [], []
    for piece in pieces:
        height = piece.points @ normal - offset
        if piece is splitter or np.abs(height).max() <= thick:
            inside.append(piece)
        elif height.min() >= -thick:
            before.append(piece)
        elif height.max() <= thick:
            behind.append(piece)
        else:
            before.append(Piece(cut_loop(piece.points, height), piece.normal, piece.patch))
            behind.append(Piece(cut_loop(piece.points, -height), piece.normal, piece.patch))
    return Tree(normal, offset, tuple(inside), _grow(before, thick), _grow(behind, thick))


def _choose(pieces: list[Piece], thick: float) -> Piece:
    if len(pieces) <= 2:
        return pieces[0]
    points = np.concatenate([piece.points for piece in pieces])
    starts = np.cumsum([0, *(len(piece.points) for piece in pieces[:-1])])
    best, fewest = pieces[0], len(pieces) + 1
    step = max(1, len(pieces) // TRIALS)
    for piece in pieces[::step]:
        height = points @ piece.normal - float(piece.normal @ piece.points[0])
        low, high = np.minimum.reduceat(height, starts), np.maximum.reduceat(height, starts)
        cuts = int(((low < -thick) & (high > thick)).sum())
        if cuts < fewest:
            best, fewest = piece, cuts
    return best


def bridged(loops: list[Array], normal: Array) -> list[Array]:
    """Loops of a plane patch with each hole joined to its outline by a bridge of no width.

    Parameters
    ----------
    loops : list of ndarray, shape (n, 3)
        Outlines run counter-clockwise about the normal, holes clockwise.
    normal : ndarray, shape (3,)
    """
    if len(loops) == 1:
        return loops
    turns = [float(normal @ cross(loop, np.roll(loop, -1, axis=0)).sum(axis=0)) for loop in loops]
    outer = [loop for loop, turn in zip(loops, turns, strict=True) if turn >= 0]
    for hole in [loop for loop, turn in zip(loops, turns, strict=True) if turn < 0]:
        if not outer:
            return [hole]
        gaps = [np.linalg.norm(loop[:, None] - hole[None], axis=2) for loop in outer]
        nearest = min(range(len(outer)), key=lambda k: float(gaps[k].min()))
        i, j = np.unravel_index(int(gaps[nearest].argmin()), gaps[nearest].shape)
        loop, turned = outer[nearest], np.roll(hole, -int(j), axis=0)
        outer[nearest] = np.concatenate([loop[: i + 1], turned, turned[:1], loop[i:]])
    return outer


def cut_loop(loop: Array, height: Array) -> Array:
    """The part of a loop, in two or three coordinates, where `height` is at least 0.

    References
    ----------
    .. [1] I. E. Sutherland, G. W. Hodgman, Comm. ACM 17 (1974) 32–42.
    """
    if (height >= 0).all():
        return loop
    if (height < 0).all():
        return loop[:0]
    ahead, height_ahead = np.roll(loop, -1, axis=0), np.roll(height, -1)
    crosses = (height < 0) != (height_ahead < 0)
    t = np.where(crosses, height / np.where(crosses, height - height_ahead, 1.0), 0.0)
    both = np.stack([loop, loop + t[:, None] * (ahead - loop)], axis=1).reshape(-1, loop.shape[1])
    return both[np.stack([height >= 0, crosses], axis=1).ravel()]
