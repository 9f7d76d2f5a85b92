"""Layout for glass that is scored and snapped: strips, then cuts from edge to edge across each strip.

Strips are filled from the left, the tallest first ("first fit, decreasing height" [1]_). Inside a strip a
slanted cut is as good as an upright one, so triangles and tapered panels stand head to foot; the line that
parts a piece from all before it runs along a side of one of them.

References
----------
.. [1] E. G. Coffman, M. R. Garey, D. S. Johnson, R. E. Tarjan, *Performance bounds for level-oriented
   two-dimensional packing algorithms*, SIAM J. Comput. 9 (1980) 808–826.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics import polygon
from mirrorlab.optics.nesting import (
    FIT_TOLERANCE,
    Layout,
    NestingError,
    Piece,
    Placement,
    Pose,
    SheetLayout,
    Stock,
    poses,
)

Array = NDArray[np.float64]

STEEPEST_SLANT = np.radians(20.0)
"""A cut across a strip makes at least this angle with it: a flatter one would run along the strip."""


@dataclass(slots=True)
class _Strip:
    bottom: float
    height: float
    placed: list[tuple[Placement, Array]] = field(default_factory=list)
    cuts: list[Array] = field(default_factory=list)
    lines: list[tuple[Array, float]] = field(
        default_factory=list
    )  # a cut's direction across it, and its level


Policy = Callable[[Pose], float]
POLICIES: tuple[Policy, ...] = (
    lambda pose: pose.height,
    lambda pose: -pose.height,
    lambda pose: pose.width * pose.height,
)
"""Which pose opens a strip: the lowest, the tallest that fits, or the one with the smallest box. All are
tried and the best layout is kept; no single rule is best for both needles and squares."""


def lay_out(pieces: Sequence[Piece], stock: Stock) -> Layout:
    """The best of the layouts that the policies give: fewest sheets, then the largest remnant."""
    layouts = [_lay_out(pieces, stock, policy) for policy in POLICIES]
    return min(layouts, key=lambda layout: (len(layout.sheets), layout.sheets[-1].top))


def _lay_out(pieces: Sequence[Piece], stock: Stock, policy: Policy) -> Layout:
    width, height = stock.usable
    queue = []
    for piece in pieces:
        fitting = [
            p
            for p in poses(piece.outline)
            if p.width <= width + FIT_TOLERANCE and p.height <= height + FIT_TOLERANCE
        ]
        opening = min(fitting, key=policy)
        queue += [(opening, fitting, piece.name, copy + 1) for copy in range(piece.count)]
    queue.sort(key=lambda item: (-round(item[0].height, 6), item[2], item[3]))
    sheets: list[list[_Strip]] = []
    for opening, fitting, name, copy in queue:
        if any(_put(strip, fitting, name, copy, stock) for strips in sheets for strip in strips):
            continue
        for strips in sheets:
            bottom = strips[-1].bottom + strips[-1].height + stock.kerf
            if bottom + opening.height <= stock.margin + height + FIT_TOLERANCE:
                break
        else:
            strips, bottom = [], stock.margin
            sheets.append(strips)
        strip = _Strip(bottom, opening.height)
        strips.append(strip)
        if not _put(strip, [opening], name, copy, stock):  # pragma: no cover - nest() checked that it fits
            msg = f"panel {name} doesn't fit in a strip of its own"
            raise NestingError(msg)
    return Layout(stock, tuple(_finish(strips, stock) for strips in sheets))


def _put(strip: _Strip, fitting: Sequence[Pose], name: str, copy: int, stock: Stock) -> bool:
    """Push the piece as far left as a straight cut allows, in the pose that takes least of the strip."""
    best: tuple[float, Pose, Array, tuple[Array, float] | None] | None = None
    right = stock.width - stock.margin + FIT_TOLERANCE
    for pose in fitting:
        if pose.height > strip.height + FIT_TOLERANCE:
            continue
        for lift in {0.0, strip.height - pose.height}:
            lifted = pose.outline + np.array([0.0, strip.bottom + lift])
            moved, line = _push_left(strip, lifted, stock)
            reach = float(moved[:, 0].max())
            if reach <= right and (best is None or reach < best[0] - FIT_TOLERANCE):
                best = reach, pose, moved, line
    if best is None:
        return False
    _, pose, moved, line = best
    strip.placed.append((Placement(name, copy, pose.angle, moved), moved))
    if line is not None:
        across, level = line
        ends = strip.bottom, strip.bottom + strip.height
        strip.lines.append(line)
        strip.cuts.append(np.array([[(level - y * across[1]) / across[0], y] for y in ends]))
    return True


def _push_left(strip: _Strip, outline: Array, stock: Stock) -> tuple[Array, tuple[Array, float] | None]:
    if not strip.placed:
        return outline + np.array([stock.margin - outline[:, 0].min(), 0.0]), None
    before = np.vstack([placed for _, placed in strip.placed])
    sides = np.vstack(
        [polygon.side_vectors(outline), polygon.side_vectors(strip.placed[-1][1]), [[0.0, 1.0]]]
    )
    clear_of_cuts = stock.margin - float(outline[:, 0].min())
    for across, level in strip.lines:
        clear_of_cuts = max(
            clear_of_cuts, (level + stock.kerf / 2 - float((outline @ across).min())) / across[0]
        )
    best: tuple[float, Array, float] | None = None
    for side in sides:
        slant = float(np.arctan2(abs(side[1]), abs(side[0])))
        if slant < STEEPEST_SLANT:
            continue
        upward = side * np.sign(side[1]) / np.linalg.norm(side)
        across = np.array([upward[1], -upward[0]])  # to the right of the cut
        left_of_cut = float((before @ across).max())
        shift = (left_of_cut + stock.kerf - float((outline @ across).min())) / across[0]
        # Later pieces keep right of earlier cuts too: a cut goes through the whole strip.
        shift = max(shift, clear_of_cuts)
        if best is None or shift < best[0] - FIT_TOLERANCE:
            best = shift, across, left_of_cut + stock.kerf / 2
    if best is None:  # pragma: no cover - the upright cut is always there
        msg = "no cut across the strip"
        raise NestingError(msg)
    shift, across, level = best
    return outline + np.array([shift, 0.0]), (across, level)


def _finish(strips: Sequence[_Strip], stock: Stock) -> SheetLayout:
    """Through cuts in the order they are made: along the strips first, then across each."""
    along = []
    if stock.margin > 0:
        low = stock.margin - stock.kerf / 2
        along.append(np.array([[0.0, low], [stock.width, low]]))
    for strip in strips:
        level = strip.bottom + strip.height + stock.kerf / 2
        if level < stock.height:
            along.append(np.array([[0.0, level], [stock.width, level]]))
    across = [_on_sheet(cut, stock.width) for strip in strips for cut in strip.cuts]
    return SheetLayout(tuple(p for strip in strips for p, _ in strip.placed), (*along, *across))


def _on_sheet(cut: Array, width: float) -> Array:
    """The part of a slanted cut that lies on the sheet: it may leave through the right-hand edge."""
    (x0, y0), (x1, y1) = cut
    ends = []
    for x, y in cut:
        over = min(max(x, 0.0), width)
        ends.append((over, y if over == x else y0 + (over - x0) * (y1 - y0) / (x1 - x0)))
    return np.array(ends)
