"""A drawing sheet for the workshop: lines, dimensions and lettering at true size, in named layers.

A `Sheet` knows no file and no screen. The DXF, SVG and PDF writers and the window's painter translate it; what
a line is stands here, and how thick and in which dash it is drawn stands in `LOOKS`, once for all of them.

Lengths are millimetres, x to the right and y up, from the sheet's lower left corner.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


class Layer(StrEnum):
    """The layers, under the names they have in a file."""

    CUT = "CUT"
    COATED_FACE = "COATED_FACE"
    CLEAR_FACE = "CLEAR_FACE"
    BEVEL = "BEVEL"
    KERF = "KERF"
    DIMENSION = "DIMENSION"
    LETTERING = "LETTERING"
    MIRROR_SIDE = "MIRROR_SIDE"
    SECTION = "SECTION"
    COATING = "COATING"
    RULER = "RULER"
    CAUTION = "CAUTION"
    STOCK = "STOCK"
    THROUGH_CUT = "THROUGH_CUT"


@dataclass(frozen=True, slots=True)
class Look:
    """How a layer is drawn: width in mm, dash lengths in mm (none: solid), and what the layer holds."""

    width: float
    dash: tuple[float, ...]
    holds: str
    tint: tuple[int, int, int] = (0, 0, 0)


LOOKS: dict[Layer, Look] = {
    Layer.CUT: Look(0.35, (), "outline to cut from the sheet"),
    Layer.COATED_FACE: Look(
        0.18, (4.0, 1.0, 0.6, 1.0), "edge of the coated face where it differs", (0, 70, 130)
    ),
    Layer.CLEAR_FACE: Look(0.18, (2.0, 1.0), "edge of the uncoated face where it differs", (90, 90, 90)),
    Layer.BEVEL: Look(0.13, (), "what is ground away", (120, 70, 0)),
    Layer.KERF: Look(0.13, (1.0, 1.0), "middle of the cut, half a kerf outside the outline", (130, 30, 30)),
    Layer.DIMENSION: Look(0.13, (), "dimensions", (60, 60, 60)),
    Layer.LETTERING: Look(0.18, (), "part letters, titles and notes"),
    Layer.MIRROR_SIDE: Look(0.18, (), "mirror-side marks", (0, 70, 130)),
    Layer.SECTION: Look(0.25, (), "sections across the joints, not to cut"),
    Layer.COATING: Look(0.7, (), "the coating, in sections", (0, 70, 130)),
    Layer.RULER: Look(0.18, (), "ruler to check the print scale"),
    Layer.CAUTION: Look(0.25, (), "cautions"),
    Layer.STOCK: Look(0.25, (6.0, 2.0), "stock sheet and its usable area"),
    Layer.THROUGH_CUT: Look(0.18, (8.0, 1.5, 1.5, 1.5), "cuts right across the sheet", (130, 30, 30)),
}
"""Darker tints only: they print on any printer, and pattern or layer name says the same without colour."""


@dataclass(frozen=True, slots=True, eq=False)
class Stroke:
    """A polyline; `points` has shape (k, 2)."""

    layer: Layer
    points: Array
    closed: bool = False


@dataclass(frozen=True, slots=True, eq=False)
class Text:
    """One line of lettering.

    Attributes
    ----------
    height : float
        mm, of a capital letter.
    at : ndarray, shape (2,)
        The line's anchor, at half the height of a capital.
    angle : float
        Radians, counter-clockwise.
    anchor : str
        "start", "middle" or "end".
    """

    layer: Layer
    text: str
    at: Array
    height: float
    angle: float = 0.0
    anchor: str = "middle"
    bold: bool = False


@dataclass(frozen=True, slots=True, eq=False)
class LengthDimension:
    """The distance from `start` to `stop`, its line `offset` mm to the left of that direction.

    The text stands at `text_at`, turned by `text_angle` radians.
    """

    start: Array
    stop: Array
    offset: float
    text: str
    text_at: Array
    text_angle: float
    height: float

    @property
    def measure(self) -> float:
        """mm"""
        return float(np.linalg.norm(self.stop - self.start))


@dataclass(frozen=True, slots=True, eq=False)
class AngleDimension:
    """The angle at `vertex` from the direction of `start` counter-clockwise to that of `stop`."""

    vertex: Array
    start: Array
    stop: Array
    radius: float
    text: str
    text_at: Array
    height: float

    @property
    def measure(self) -> float:
        """Radians."""
        one, other = self.start - self.vertex, self.stop - self.vertex
        return float(np.arctan2(one[0] * other[1] - one[1] * other[0], one @ other) % (2 * np.pi))


@dataclass(frozen=True, slots=True, eq=False)
class Sheet:
    """A drawing sheet.

    Attributes
    ----------
    title : str
    width, height : float
        mm
    scale : float
        Drawn size over true size of what the sheet shows: 1 for templates. Sheet coordinates are as drawn.
    page : tuple of float or None
        mm; when set, the sheet divides into pages of this size from its upper left corner, and nothing crosses
        from one to the next.
    """

    title: str
    width: float
    height: float
    strokes: tuple[Stroke, ...] = ()
    texts: tuple[Text, ...] = ()
    lengths: tuple[LengthDimension, ...] = ()
    angles: tuple[AngleDimension, ...] = ()
    scale: float = 1.0
    page: tuple[float, float] | None = None

    @property
    def layers(self) -> tuple[Layer, ...]:
        """The layers in use, in their standing order."""
        used = {stroke.layer for stroke in self.strokes} | {text.layer for text in self.texts}
        if self.lengths or self.angles:
            used.add(Layer.DIMENSION)
        return tuple(layer for layer in Layer if layer in used)


def moved(sheet: Sheet, by: Array) -> Sheet:
    """The sheet's content moved; its size stays."""
    return replace(
        sheet,
        strokes=tuple(replace(s, points=s.points + by) for s in sheet.strokes),
        texts=tuple(replace(t, at=t.at + by) for t in sheet.texts),
        lengths=tuple(
            replace(d, start=d.start + by, stop=d.stop + by, text_at=d.text_at + by) for d in sheet.lengths
        ),
        angles=tuple(
            replace(a, vertex=a.vertex + by, start=a.start + by, stop=a.stop + by, text_at=a.text_at + by)
            for a in sheet.angles
        ),
    )


def joined(title: str, width: float, height: float, parts: tuple[Sheet, ...], scale: float = 1.0) -> Sheet:
    """One sheet with the content of several, each already in its place."""
    return Sheet(
        title,
        width,
        height,
        strokes=tuple(s for part in parts for s in part.strokes),
        texts=tuple(t for part in parts for t in part.texts),
        lengths=tuple(d for part in parts for d in part.lengths),
        angles=tuple(a for part in parts for a in part.angles),
        scale=scale,
    )
