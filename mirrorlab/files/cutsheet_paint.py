"""Painting a drawing sheet with QPainter: for the PDF, and for the window."""

from __future__ import annotations

import numpy as np
from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPen, QPolygonF

from mirrorlab.drawing.dimension_lines import all_strokes, all_texts
from mirrorlab.drawing.lettering import CAP_HEIGHT, text_width
from mirrorlab.drawing.sheet import LOOKS, Layer, Sheet, Stroke, Text

FAMILIES = ["DejaVu Sans", "Verdana", "Arial", "sans-serif"]
FONT_PIXELS = 100
"""Size at which text is laid out before it is scaled to millimetres: large, so that hinting has no say."""


def paint_sheet(painter: QPainter, sheet: Sheet, ink: QColor | None = None) -> None:
    """Paint a sheet at the painter's origin, one painter unit a millimetre, y downwards.

    Parameters
    ----------
    painter : QPainter
        Scaled so that one unit is one millimetre; the sheet's upper left corner comes to (0, 0).
    sheet : Sheet
    ink : QColor, optional
        One tint for everything, for a dark window; the layers' own tints when left out.
    """
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    for stroke in all_strokes(sheet):
        paint_stroke(painter, stroke, sheet.height, ink)
    for text in all_texts(sheet):
        paint_text(painter, text, sheet.height, ink)
    painter.restore()


def layer_pen(layer: Layer, ink: QColor | None = None) -> QPen:
    """The pen of a layer, in millimetres."""
    look = LOOKS[layer]
    pen = QPen(ink or QColor(*look.tint), look.width)
    pen.setCapStyle(Qt.PenCapStyle.FlatCap)
    pen.setJoinStyle(Qt.PenJoinStyle.MiterJoin)
    if look.dash:
        pen.setDashPattern([length / look.width for length in look.dash])
    return pen


def paint_stroke(painter: QPainter, stroke: Stroke, height: float, ink: QColor | None = None) -> None:
    """One polyline."""
    painter.setPen(layer_pen(stroke.layer, ink))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    shape = QPolygonF([QPointF(float(x), float(height - y)) for x, y in stroke.points])
    if stroke.closed:
        painter.drawPolygon(shape)
    else:
        painter.drawPolyline(shape)


def paint_text(painter: QPainter, text: Text, height: float, ink: QColor | None = None) -> None:
    """One line of lettering, narrowed when the font at hand is wider than the room reserved for it."""
    font = QFont()
    font.setFamilies(FAMILIES)
    font.setPixelSize(FONT_PIXELS)
    font.setBold(text.bold)
    scale = text.height / (CAP_HEIGHT * FONT_PIXELS)
    wide = QFontMetricsF(font).horizontalAdvance(text.text)
    room = text_width(text.text, text.height, text.bold) / scale
    narrow = min(1.0, room / wide) if wide > 0 else 1.0
    painter.save()
    painter.translate(float(text.at[0]), float(height - text.at[1]))
    painter.rotate(-float(np.degrees(text.angle)))
    painter.scale(scale * narrow, scale)
    painter.setFont(font)
    painter.setPen(ink or QColor(*LOOKS[text.layer].tint))
    start = {"start": 0.0, "middle": -wide / 2, "end": -wide}[text.anchor]
    painter.drawText(QPointF(start, CAP_HEIGHT * FONT_PIXELS / 2), text.text)
    painter.restore()
