"""Writing in pictures: mirror letters on round tags, other labels with a rim of ground so that lines pass behind."""

from __future__ import annotations

import math

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPainterPath, QPen

from mirrorlab.drawing.look import Look, label_tint
from mirrorlab.drawing.model import Label, Role
from mirrorlab.files.picture_marks import tint


def label_font(look: Look, size: float, italic: bool = False) -> QFont:
    """The font of labels, `size` in pixels."""
    font = QFont()
    font.setFamilies(list(look.label_fonts))
    font.setPixelSize(max(1, round(size)))
    font.setItalic(italic)
    font.setStyleHint(QFont.StyleHint.Serif)
    return font


def draw_label(
    painter: QPainter, x: float, y: float, label: Label, look: Look, scale: float = 1.0, alpha: float = 1.0
) -> None:
    """Draw a label with its middle at a pixel. Text is drawn as outlines: a file needs no font to show it."""
    tag = label.role in (Role.TYPED_MIRROR, Role.GENERATED_MIRROR) and len(label.text) <= 2
    size = look.label_size * scale * (1.12 if tag else 0.92)
    font = label_font(look, size, italic=tag)
    metrics = QFontMetricsF(font)
    path = QPainterPath()
    box = metrics.tightBoundingRect(label.text) if tag else metrics.boundingRect(label.text)
    path.addText(QPointF(x, y) - box.center(), font, label.text)
    ink = tint(label_tint(look, label.role, label.index), alpha)
    if tag:
        radius = 0.74 * size
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(tint(look.ground, alpha))
        painter.drawEllipse(QPointF(x, y), radius, radius)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(_ring_pen(look, label, ink, radius, scale))
        painter.drawEllipse(QPointF(x, y), radius, radius)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(tint(look.ink, alpha))
        painter.drawPath(path)
        return
    rim = QPen(tint(look.ground, 0.86 * alpha), 3.2 * scale)
    rim.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    painter.setPen(rim)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawPath(path)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(ink)
    painter.drawPath(path)


def _ring_pen(look: Look, label: Label, ink: QColor, radius: float, scale: float) -> QPen:
    """A pen in the mirror's pattern, so stretched that it closes upon itself around the tag."""
    width = 1.7 * scale
    pen = QPen(ink, width)
    pattern = look.pattern(label.index) if label.role is Role.TYPED_MIRROR else ()
    if pattern:
        around = 2 * math.pi * radius / width
        fit = around / (max(1, round(around / sum(pattern))) * sum(pattern))
        pen.setDashPattern([part * fit for part in pattern])
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
    return pen
