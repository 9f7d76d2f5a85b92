"""Layout for a saw or a water jet: each piece goes as low, then as far left, as it can touch the others.

For convex pieces the places where one piece may not have its corner are exactly the Minkowski sums of each
placed piece with the reflected new one [1]_. A lowest free place is a corner of such a sum, a crossing of two
of their sides, or a crossing with the border of the sheet, so only those are tried.

References
----------
.. [1] J. A. Bennell, J. F. Oliveira, *The geometry of nesting problems: a tutorial*, European Journal of
   Operational Research 184 (2008) 397–415.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics import nesting_straight, polygon
from mirrorlab.optics.nesting import FIT_TOLERANCE, Layout, Piece, Placement, Pose, SheetLayout, Stock, poses

Array = NDArray[np.float64]

ROUND_CORNERS = 12
"""Corners of the polygon that stands for the kerf's round tip; drawn around the circle, so that pieces keep
the kerf exactly along sides and at most 3.5 % more at corners."""


@dataclass(slots=True)
class _Places:
    """Where one pose may go on one sheet; grows as pieces are placed, so that no crossing is found twice."""

    low: Array
    high: Array
    outlines: list[Array]
    free: Array

    @classmethod
    def on_empty(cls, pose: Pose, stock: Stock) -> _Places:
        low = np.array([stock.margin, stock.margin])
        high = np.array([stock.width - pose.width, stock.height - pose.height]) - stock.margin
        if np.any(high < low - FIT_TOLERANCE):
            return cls(low, high, [], np.empty((0, 2)))
        high = np.maximum(high, low)
        border = np.array([low, [high[0], low[1]], high, [low[0], high[1]]])
        return cls(low, high, [border], border)

    def bar(self, barred: Array) -> None:
        """Take away the places inside `barred` and add those on its border."""
        if not self.outlines:
            return
        fresh = np.vstack([barred, _crossings(barred, self.outlines)])
        inside = (fresh >= self.low - FIT_TOLERANCE) & (fresh <= self.high + FIT_TOLERANCE)
        fresh = fresh[np.all(inside, axis=1)]
        for outline in self.outlines[1:]:
            fresh = _outside(fresh, outline)
        self.free = np.vstack([_outside(self.free, barred), fresh])
        self.outlines.append(barred)

    def lowest(self) -> Array | None:
        """The lowest free place, the leftmost of several."""
        if not len(self.free):
            return None
        order = np.lexsort((np.round(self.free[:, 0], 6), np.round(self.free[:, 1], 6)))
        return np.clip(self.free[order[0]], self.low, self.high)


@dataclass(slots=True)
class _Sheet:
    stock: Stock
    placements: list[Placement] = field(default_factory=list)
    grown: list[Array] = field(default_factory=list)
    places: dict[tuple[str, int], tuple[_Places, int]] = field(default_factory=dict)

    def lowest(self, name: str, number: int, pose: Pose) -> Array | None:
        """Lowest place for a pose, brought up to date with all that was placed since it last asked."""
        places, seen = self.places.get((name, number)) or (_Places.on_empty(pose, self.stock), 0)
        for grown in self.grown[seen:]:
            places.bar(polygon.minkowski_sum(grown, -pose.outline))
        self.places[name, number] = places, len(self.grown)
        return places.lowest()

    def put(self, placement: Placement) -> None:
        self.placements.append(placement)
        self.grown.append(_grown(placement.outline, self.stock.kerf))


def lay_out(pieces: Sequence[Piece], stock: Stock) -> Layout:
    """Place the largest pieces first, each on the first sheet that takes it.

    A layout of strips can be cut freely too, and is kept when it comes out better.
    """
    queue = []
    for number, piece in enumerate(pieces):
        turns = poses(piece.outline)
        queue += [(piece, f"{number} {piece.name}", turns, copy + 1) for copy in range(piece.count)]
    queue.sort(key=lambda item: (-polygon.area(item[0].outline), item[1], item[3]))
    sheets: list[_Sheet] = []
    for piece, key, turns, copy in queue:
        if not any(_put(sheet, piece.name, key, turns, copy) for sheet in sheets):
            sheets.append(_Sheet(stock))
            _put(sheets[-1], piece.name, key, turns, copy)
    free = Layout(stock, tuple(SheetLayout(tuple(sheet.placements)) for sheet in sheets))
    strips = nesting_straight.lay_out(pieces, stock)
    uncut = Layout(stock, tuple(SheetLayout(sheet.placements) for sheet in strips.sheets))
    return min((free, uncut), key=lambda layout: (len(layout.sheets), layout.sheets[-1].top))


def _put(sheet: _Sheet, name: str, key: str, turns: Sequence[Pose], copy: int) -> bool:
    best: tuple[tuple[float, float, float], Pose, Array] | None = None
    for number, pose in enumerate(turns):
        place = sheet.lowest(key, number, pose)
        if place is not None:
            rank = (round(place[1] + pose.height, 6), round(place[0] + pose.width, 6), round(place[1], 6))
            if best is None or rank < best[0]:
                best = rank, pose, place
    if best is None:
        return False
    _, pose, place = best
    sheet.put(Placement(name, copy, pose.angle, pose.outline + place))
    return True


def _outside(points: Array, outline: Array) -> Array:
    """The points that don't lie inside a convex outline; those on its border stay."""
    normals = polygon.inward_normals(outline)
    depth = (points @ normals.T - np.sum(normals * outline, axis=1)).min(axis=1)
    kept: Array = points[depth <= FIT_TOLERANCE]
    return kept


def _grown(outline: Array, kerf: float) -> Array:
    if kerf <= FIT_TOLERANCE:
        return outline
    steps = np.arange(ROUND_CORNERS) * 2 * np.pi / ROUND_CORNERS
    radius = kerf / np.cos(np.pi / ROUND_CORNERS)
    return polygon.minkowski_sum(outline, radius * np.column_stack([np.cos(steps), np.sin(steps)]))


def _crossings(one: Array, others: Sequence[Array]) -> Array:
    """Points where a side of `one` crosses a side of the others, shape (N, 2)."""
    start, vector = one[:, None], polygon.side_vectors(one)[:, None]
    starts, vectors = np.vstack(others)[None], np.vstack([polygon.side_vectors(o) for o in others])[None]
    cross = vector[..., 0] * vectors[..., 1] - vector[..., 1] * vectors[..., 0]
    apart = starts - start
    across = np.abs(cross) > 1e-12
    cross = np.where(across, cross, 1.0)
    along = (apart[..., 0] * vectors[..., 1] - apart[..., 1] * vectors[..., 0]) / cross
    other = (apart[..., 0] * vector[..., 1] - apart[..., 1] * vector[..., 0]) / cross
    hit = across & (along >= 0) & (along <= 1) & (other >= 0) & (other <= 1)
    points: Array = (start + along[..., None] * vector)[hit]
    return points
