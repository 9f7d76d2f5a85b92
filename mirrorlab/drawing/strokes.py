"""Lines cut into the pieces that are drawn: solid lines whole, patterned ones dash by dash.

Dashes lie on the line itself, so that they turn and shrink with it, and are the same in every translator.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.look import Look, line_style
from mirrorlab.drawing.model import Drawing

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

NOMINAL_RADIUS = 260.0
"""Pixels from the middle to the edge for which dashes have their nominal length: a stage of a common window."""

PIECES = 2
"""Straight pieces a dash is made of, so that it follows a circle."""


@dataclass(frozen=True, slots=True, eq=False)
class Strokes:
    """Straight pieces of all lines of a drawing.

    Attributes
    ----------
    start, end : ndarray, shape (S, 3)
    line : ndarray of int, shape (S,)
        Which line of the drawing each is of.
    joined : ndarray of bool, shape (S,)
        Whether a piece begins where the one before it ended.
    """

    start: Array
    end: Array
    line: Ints
    joined: NDArray[np.bool_]


def strokes(drawing: Drawing, look: Look, radius: float) -> Strokes:
    """Cut the lines of a drawing whose half extent is `radius`."""
    starts, ends, which, joined = [], [], [], []
    for number, line in enumerate(drawing.lines):
        points = np.asarray(line.points, dtype=float)
        if line.closed and len(points):
            points = np.concatenate([points, points[:1]])
        if len(points) < 2:
            continue
        if line.apart:
            starts.append(points[0::2])
            ends.append(points[1::2])
            joined.append(np.zeros(len(points) // 2, dtype=bool))
            which.append(np.full(len(points) // 2, number))
            continue
        _, width, pattern = line_style(look, line.role, line.index)
        width *= line.weight
        lengths = np.array(() if line.plain else pattern) * width * radius / NOMINAL_RADIUS
        pieces = dashes(points, lengths, line.closed) if len(lengths) else points[None]
        starts.append(pieces[:, :-1].reshape(-1, 3))
        ends.append(pieces[:, 1:].reshape(-1, 3))
        follow = np.ones(pieces.shape[:2], dtype=bool)[:, 1:]
        follow[:, 0] = False
        joined.append(follow.ravel())
        which.append(np.full(len(starts[-1]), number))
    if not starts:
        empty = np.zeros((0, 3))
        return Strokes(empty, empty, np.zeros(0, dtype=np.int64), np.zeros(0, dtype=bool))
    return Strokes(
        np.concatenate(starts), np.concatenate(ends), np.concatenate(which), np.concatenate(joined)
    )


def dashes(points: Array, lengths: Array, closed: bool = False) -> Array:
    """Cut a polyline into dashes.

    Parameters
    ----------
    points : ndarray, shape (n, 3)
        A closed line ends with its first point.
    lengths : ndarray, shape (2k,)
        Drawn and left out, in turn, in the unit of the points.
    closed : bool
        The pattern is stretched a little so that it closes upon itself.

    Returns
    -------
    ndarray, shape (m, PIECES + 1, 3)
        Points of each dash.
    """
    along = np.concatenate([[0.0], np.cumsum(np.linalg.norm(np.diff(points, axis=0), axis=1))])
    total, period = float(along[-1]), float(lengths.sum())
    if total <= 0 or period <= 0:
        return np.zeros((0, PIECES + 1, 3))
    count = max(1, round(total / period)) if closed else int(np.ceil(total / period))
    if closed:
        lengths = lengths * total / (count * period)
        period = total / count
    edges = np.concatenate([[0.0], np.cumsum(lengths)])
    begin = (period * np.arange(count)[:, None] + edges[:-1:2]).ravel()
    finish = (period * np.arange(count)[:, None] + edges[1::2]).ravel()
    kept = begin < total
    begin, finish = begin[kept], np.minimum(finish[kept], total)
    at = begin[:, None] + (finish - begin)[:, None] * np.linspace(0, 1, PIECES + 1)
    return np.stack([np.interp(at, along, points[:, k]) for k in range(3)], axis=-1)
