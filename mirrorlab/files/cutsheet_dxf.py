"""Drawing sheets as DXF in millimetres: named layers, closed outlines, real dimensions.

Dimensions are DIMENSION entities that measure, so that a drawing program shows its own value when a corner is
moved. R2010 is written: the oldest version that keeps line weights, true colours and Unicode text together.
"""

from __future__ import annotations

import os
from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from mirrorlab.drawing.dimension_lines import EXTENSION_GAP, overshoot
from mirrorlab.drawing.sheet import (
    LOOKS,
    AngleDimension,
    Layer,
    LengthDimension,
    Sheet,
    Stroke,
    Text,
    moved,
)
from mirrorlab.files.whole import make_whole

if TYPE_CHECKING:
    from ezdxf.document import Drawing as DxfDrawing
    from ezdxf.layouts import Modelspace

VERSION = "R2010"
MILLIMETRES = 4
"""$INSUNITS of the DXF reference: 4 is millimetres."""

STYLE = "MIRRORLAB"
SPACING = 50.0
"""mm between sheets laid side by side."""


def sheets_dxf(sheets: Sequence[Sheet], unit: str = "mm") -> DxfDrawing:
    """Sheets side by side in model space, at true size.

    Parameters
    ----------
    sheets : sequence of Sheet
        At true size (`Sheet.scale` 1).
    unit : str
        "mm" or "in": with "in" dimensions show the written inches; the drawing stays in millimetres.

    Raises
    ------
    ValueError
        When a sheet is drawn to a scale.
    """
    import ezdxf

    for sheet in sheets:
        if sheet.scale != 1:
            msg = f"{sheet.title}: drawn at {sheet.scale:g}, a DXF file is at true size"
            raise ValueError(msg)
    document = ezdxf.new(VERSION)
    document.header["$INSUNITS"] = MILLIMETRES
    document.header["$MEASUREMENT"] = 1
    document.header["$LUNITS"] = 2
    document.styles.add(STYLE, font="DejaVuSans.ttf")
    document.styles.add(f"{STYLE}_BOLD", font="DejaVuSans-Bold.ttf")
    _dimension_style(document)
    for layer in Layer:
        _layer(document, layer)
    space, left = document.modelspace(), 0.0
    for sheet in sheets:
        _draw(space, moved(sheet, np.array([left, 0.0])), unit)
        left += sheet.width + SPACING
    _frame(document, sheets)
    return document


def write_dxf(sheets: Sequence[Sheet], path: str | os.PathLike[str], unit: str = "mm") -> None:
    """Write sheets as one DXF file, whole or not at all."""
    document = sheets_dxf(sheets, unit)
    make_whole(path, lambda draft: document.saveas(draft))


def _layer(document: DxfDrawing, layer: Layer) -> None:
    look = LOOKS[layer]
    pattern = "CONTINUOUS"
    if look.dash:
        pattern = layer.value
        signs = [length if i % 2 == 0 else -length for i, length in enumerate(look.dash)]
        document.linetypes.add(pattern, [sum(look.dash), *signs], description=look.holds)
    made = document.layers.add(layer.value, linetype=pattern, lineweight=round(100 * look.width))
    made.description = look.holds
    if any(look.tint):
        made.rgb = look.tint
    # Index colour 7 is black on white and white on black, whatever the reader's background.


def _dimension_style(document: DxfDrawing) -> None:
    style = document.dimstyles.add(STYLE)
    style.dxf.dimtxsty = STYLE
    style.dxf.dimblk = "OBLIQUE"
    style.dxf.dimexo = EXTENSION_GAP
    style.dxf.dimtad = 1
    style.dxf.dimgap = 0.6
    style.dxf.dimdec = 1
    style.dxf.dimlunit = 2
    style.dxf.dimdsep = ord(".")
    style.dxf.dimzin = 0
    style.dxf.dimaunit = 0
    style.dxf.dimadec = 2
    style.dxf.dimazin = 2  # 60°, not 60.00°


def _draw(space: Modelspace, sheet: Sheet, unit: str) -> None:
    for stroke in sheet.strokes:
        _stroke(space, stroke)
    for text in sheet.texts:
        _text(space, text)
    for length in sheet.lengths:
        _length(space, length, unit)
    for angle in sheet.angles:
        _angle(space, angle)


def _stroke(space: Modelspace, stroke: Stroke) -> None:
    attributes = {"layer": stroke.layer.value}
    if len(stroke.points) == 2 and not stroke.closed:
        space.add_line(stroke.points[0], stroke.points[1], dxfattribs=attributes)
    else:
        space.add_lwpolyline(stroke.points, close=stroke.closed, dxfattribs=attributes)


def _text(space: Modelspace, text: Text) -> None:
    from ezdxf.enums import TextEntityAlignment

    align = {
        "start": TextEntityAlignment.MIDDLE_LEFT,
        "middle": TextEntityAlignment.MIDDLE_CENTER,
        "end": TextEntityAlignment.MIDDLE_RIGHT,
    }[text.anchor]
    attributes = {
        "layer": text.layer.value,
        "style": f"{STYLE}_BOLD" if text.bold else STYLE,
        "rotation": float(np.degrees(text.angle)),
    }
    space.add_text(text.text, height=text.height, dxfattribs=attributes).set_placement(text.at, align=align)


def _length(space: Modelspace, dimension: LengthDimension, unit: str) -> None:
    along = (dimension.stop - dimension.start) / dimension.measure
    base = dimension.start + np.array([-along[1], along[0]]) * dimension.offset
    past = overshoot(dimension.height)
    entity = space.add_linear_dim(
        base=base,
        p1=dimension.start,
        p2=dimension.stop,
        angle=float(np.degrees(np.arctan2(along[1], along[0]))),
        location=dimension.text_at,
        text="<>" if unit == "mm" else dimension.text,
        text_rotation=float(np.degrees(dimension.text_angle)),
        dimstyle=STYLE,
        override={"dimtxt": dimension.height, "dimexe": past, "dimdle": past, "dimasz": 2 * past},
        dxfattribs={"layer": Layer.DIMENSION.value},
    )
    entity.render()


def _angle(space: Modelspace, dimension: AngleDimension) -> None:
    half = (dimension.start - dimension.vertex) / np.linalg.norm(dimension.start - dimension.vertex)
    cos, sin = np.cos(dimension.measure / 2), np.sin(dimension.measure / 2)
    bisector = np.array([half[0] * cos - half[1] * sin, half[0] * sin + half[1] * cos])
    entity = space.add_angular_dim_3p(
        base=dimension.vertex + dimension.radius * bisector,
        center=dimension.vertex,
        p1=dimension.start,
        p2=dimension.stop,
        location=dimension.text_at,
        text_rotation=0.0,
        dimstyle=STYLE,
        # The arc ends on the pane's own sides: no extension lines, no arrows.
        override={"dimtxt": dimension.height, "dimse1": 1, "dimse2": 1, "dimasz": 0.0, "dimblk": "NONE"},
        dxfattribs={"layer": Layer.DIMENSION.value},
    )
    entity.render()


def _frame(document: DxfDrawing, sheets: Sequence[Sheet]) -> None:
    """Where a drawing program looks when it opens the file."""
    width = sum(sheet.width for sheet in sheets) + SPACING * (len(sheets) - 1)
    height = max(sheet.height for sheet in sheets)
    document.header["$EXTMIN"] = (0.0, 0.0, 0.0)
    document.header["$EXTMAX"] = (width, height, 0.0)
    document.set_modelspace_vport(height=1.05 * max(height, width / 1.6), center=(width / 2, height / 2))
