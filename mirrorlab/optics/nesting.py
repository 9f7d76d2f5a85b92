"""Laying panels out on stock sheets, and how much glass is wasted.

Two ways to cut, two layouts. `straight`: glass is scored and snapped, so every cut goes right through:
the sheet is cut in strips, each strip is cut across from edge to edge, and each piece is trimmed to its
shape. `free`: a saw or a water jet follows any line, so pieces are pushed into each other's corners.
Pieces are turned, never turned over: the mirror side stays up.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics import polygon

Array = NDArray[np.float64]

FIT_TOLERANCE = 1e-6
"""mm by which a piece may stand over a sheet's usable area: rounding, far below any cutter's."""


class NestingError(ValueError):
    """Panels that can't be laid out on this stock."""


class Cutting(StrEnum):
    """How the glass is cut."""

    STRAIGHT = "straight"
    FREE = "free"


@dataclass(frozen=True, slots=True)
class Stock:
    """A stock sheet.

    Attributes
    ----------
    width, height : float
        mm
    margin : float
        mm kept free along every edge of the sheet.
    kerf : float
        mm that a cut takes away or that pieces must stand apart: about 0 when scored, the width of the
        blade or jet otherwise.
    cutting : Cutting
    """

    width: float
    height: float
    margin: float = 10.0
    kerf: float = 0.0
    cutting: Cutting = Cutting.STRAIGHT

    def __post_init__(self) -> None:
        if not (self.width > 0 and self.height > 0 and np.isfinite(self.width + self.height)):
            msg = f"stock sheet {self.width:g} x {self.height:g} mm: both sizes must be greater than 0"
            raise NestingError(msg)
        if self.margin < 0 or self.kerf < 0:
            msg = f"margin {self.margin:g} mm, kerf {self.kerf:g} mm: neither may be negative"
            raise NestingError(msg)
        if 2 * self.margin >= min(self.width, self.height):
            msg = f"margin {self.margin:g} mm leaves nothing of a {self.width:g} x {self.height:g} mm sheet"
            raise NestingError(msg)

    @property
    def usable(self) -> tuple[float, float]:
        """Width and height inside the margins, mm."""
        return self.width - 2 * self.margin, self.height - 2 * self.margin


@dataclass(frozen=True, slots=True, eq=False)
class Piece:
    """What is to be cut: a name, a convex outline (mm, mirror side up) and how many."""

    name: str
    outline: Array
    count: int = 1


@dataclass(frozen=True, slots=True, eq=False)
class Placement:
    """One piece on one sheet.

    Attributes
    ----------
    name : str
    copy : int
        1, 2, 3 … of pieces of this name.
    angle : float
        Radians it was turned, counter-clockwise.
    outline : ndarray, shape (k, 2)
        Where it lies, mm from the sheet's lower left corner; corners in the piece's own order.
    """

    name: str
    copy: int
    angle: float
    outline: Array


@dataclass(frozen=True, slots=True, eq=False)
class SheetLayout:
    """One stock sheet with its pieces.

    Attributes
    ----------
    placements : tuple of Placement
    cuts : tuple of ndarray, shape (2, 2)
        For straight cutting, the through cuts in the order they are made; none for free cutting.
    """

    placements: tuple[Placement, ...]
    cuts: tuple[Array, ...] = ()

    @property
    def top(self) -> float:
        """mm from the sheet's lower edge to the highest piece."""
        return max(float(p.outline[:, 1].max()) for p in self.placements)


@dataclass(frozen=True, slots=True, eq=False)
class Layout:
    """All sheets.

    Attributes
    ----------
    stock : Stock
    sheets : tuple of SheetLayout
    """

    stock: Stock
    sheets: tuple[SheetLayout, ...]

    @property
    def sheet_area(self) -> float:
        """m² of all sheets used."""
        return len(self.sheets) * self.stock.width * self.stock.height / 1e6

    @property
    def piece_area(self) -> float:
        """m² of all pieces."""
        return sum(polygon.area(p.outline) for s in self.sheets for p in s.placements) / 1e6

    @property
    def waste_area(self) -> float:
        """m² that are not a piece, the remnant included."""
        return self.sheet_area - self.piece_area

    @property
    def waste_percent(self) -> float:
        """Waste in percent of all sheets used."""
        return 100 * self.waste_area / self.sheet_area

    @property
    def remnant(self) -> tuple[float, float]:
        """Width and height in mm of the strip left whole at the top of the last sheet, margins included."""
        return self.stock.width, max(0.0, self.stock.height - self.sheets[-1].top - self.stock.kerf)

    @property
    def waste_percent_without_remnant(self) -> float:
        """Waste in percent of what is used up when the remnant of the last sheet is kept."""
        used = self.sheet_area - self.remnant[0] * self.remnant[1] / 1e6
        return 100 * (used - self.piece_area) / used

    def to_dict(self) -> dict[str, object]:
        """Plain JSON; angles in degrees."""
        return {
            "stock_mm": [self.stock.width, self.stock.height],
            "margin_mm": self.stock.margin,
            "kerf_mm": self.stock.kerf,
            "cutting": str(self.stock.cutting),
            "sheet_count": len(self.sheets),
            "sheet_area_m2": self.sheet_area,
            "piece_area_m2": self.piece_area,
            "waste_m2": self.waste_area,
            "waste_percent": self.waste_percent,
            "remnant_mm": list(self.remnant),
            "waste_percent_without_remnant": self.waste_percent_without_remnant,
            "sheets": [
                {
                    "placements": [
                        {
                            "name": p.name,
                            "copy": p.copy,
                            "angle_degrees": float(np.degrees(p.angle)),
                            "outline_mm": p.outline.tolist(),
                        }
                        for p in sheet.placements
                    ],
                    "cuts_mm": [cut.tolist() for cut in sheet.cuts],
                }
                for sheet in self.sheets
            ],
        }


def layout_words(layout: Layout, scale: float = 1.0) -> tuple[str, ...]:
    """The layout in words: sheets, waste, remnant, how to cut."""
    stock = layout.stock
    drawn = "" if scale == 1 else f" Drawn at 1:{1 / scale:g}; not a template."
    remnant = layout.remnant
    many = "s" if len(layout.sheets) > 1 else ""
    size = f"{stock.width:g} × {stock.height:g} mm, margin {stock.margin:g} mm, kerf {stock.kerf:g} mm"
    used = f"Pieces {layout.piece_area:.4f} m² of {layout.sheet_area:.4f} m²"
    words = [
        f"{len(layout.sheets)} sheet{many} of {size}.{drawn}",
        f"{used}: waste {layout.waste_area:.4f} m², {layout.waste_percent:.1f} %.",
    ]
    if remnant[1] > stock.margin + 1:
        words.append(
            f"A remnant of {remnant[0]:.0f} × {remnant[1]:.0f} mm stays whole on the last sheet; "
            f"without it the waste is {layout.waste_percent_without_remnant:.1f} %."
        )
    if stock.cutting is Cutting.STRAIGHT:
        words.append("Cut along the strips first, then across each; every cut goes right through. Then trim.")
    return tuple(words)


@dataclass(frozen=True, slots=True, eq=False)
class Pose:
    """A piece turned so that one of its sides lies level, its box starting at (0, 0)."""

    angle: float
    outline: Array
    width: float
    height: float


def poses(outline: Array) -> tuple[Pose, ...]:
    """Every way to lay a piece with a side along the bottom or the top; equal boxes are kept once."""
    found: list[Pose] = []
    sides = polygon.side_vectors(outline)
    for side in sides:
        level = -float(np.arctan2(side[1], side[0]))
        for angle in (level, level + np.pi):
            shape = polygon.turned(outline, angle)
            shape = shape - shape.min(axis=0)
            width, height = shape.max(axis=0)
            same = any(_same_shape(shape, pose.outline) for pose in found)
            if not same:
                found.append(Pose(angle, shape, float(width), float(height)))
    return tuple(found)


def _same_shape(one: Array, other: Array) -> bool:
    return any(np.allclose(np.roll(one, k, axis=0), other, atol=FIT_TOLERANCE) for k in range(len(one)))


def nest(pieces: Sequence[Piece], stock: Stock) -> Layout:
    """Lay the pieces out on as few sheets as this method finds.

    Returns
    -------
    Layout

    Raises
    ------
    NestingError
        When there is nothing to cut, or a piece is larger than the usable sheet however it is turned.
    """
    if not any(piece.count > 0 for piece in pieces):
        msg = "nothing to lay out: give at least one piece with a count of 1 or more"
        raise NestingError(msg)
    width, height = stock.usable
    for piece in pieces:
        if not any(
            p.width <= width + FIT_TOLERANCE and p.height <= height + FIT_TOLERANCE
            for p in poses(piece.outline)
        ):
            left, bottom, right, top = polygon.bounds(piece.outline)
            msg = (
                f"panel {piece.name} ({right - left:.0f} x {top - bottom:.0f} mm) doesn't fit on a "
                f"{stock.width:g} x {stock.height:g} mm sheet with a {stock.margin:g} mm margin; "
                "take larger stock"
            )
            raise NestingError(msg)
    if stock.cutting is Cutting.FREE:
        from mirrorlab.optics.nesting_free import lay_out
    else:
        from mirrorlab.optics.nesting_straight import lay_out
    return lay_out(pieces, stock)
