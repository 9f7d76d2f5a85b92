"""Writing in pictures: mirror letters on round tags, other labels with a rim of ground so that lines pass behind."""

from __future__ import annotations

import math
from functools import lru_cache

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPainterPath, QPainterPathStroker, QPen

from mirrorlab.drawing.look import Look, label_tint
from mirrorlab.drawing.model import Label, Role
from mirrorlab.files.picture_marks import tint

TAG_SIZE, TAG_RADIUS = 1.12, 0.74
"""Height of a tag's letter in label sizes, and the tag's radius in letter heights."""

TEXT_SIZE = 0.92
"""Height of other writing, in label sizes."""


RIM = 3.2
"""Width of the band of ground about other writing, in the look's pixels."""


@lru_cache(maxsize=64)
def label_font(families: tuple[str, ...], size: int, italic: bool = False) -> QFont:
    """The font of labels, `size` in pixels."""
    font = QFont()
    font.setFamilies(list(families))
    font.setPixelSize(size)
    font.setItalic(italic)
    font.setStyleHint(QFont.StyleHint.Serif)
    return font


def is_tag(label: Label) -> bool:
    """Whether a label is a mirror's letter, drawn on a round tag."""
    return label.role in (Role.TYPED_MIRROR, Role.GENERATED_MIRROR) and len(label.text) <= 2


def label_box(x: float, y: float, label: Label, look: Look, scale: float = 1.0) -> QRectF:
    """The room a label takes with its middle at a pixel."""
    if is_tag(label):
        radius = TAG_RADIUS * look.label_size * TAG_SIZE * scale
        return QRectF(x - radius, y - radius, 2 * radius, 2 * radius)
    box = _text_box(label.text, look.label_fonts, max(1, round(look.label_size * TEXT_SIZE * scale)))
    return QRectF(x - 0.5 * box.width(), y - 0.5 * box.height(), box.width(), box.height())


@lru_cache(maxsize=512)
def _text_box(text: str, families: tuple[str, ...], size: int) -> QRectF:
    return QFontMetricsF(label_font(families, size)).tightBoundingRect(text)


@lru_cache(maxsize=512)
def _outline(text: str, families: tuple[str, ...], size: int, italic: bool, rim: float) -> QPainterPath:
    """Outline of a text about the origin, or, with a rim, of the band around it. Making them takes longest."""
    font = label_font(families, size, italic)
    metrics = QFontMetricsF(font)
    box = metrics.tightBoundingRect(text) if italic else metrics.boundingRect(text)
    path = QPainterPath()
    path.addText(-box.center(), font, text)
    if not rim:
        return path
    stroker = QPainterPathStroker()
    stroker.setWidth(rim)
    stroker.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    band = stroker.createStroke(path)
    band.setFillRule(Qt.FillRule.WindingFill)
    return band


def draw_label(
    painter: QPainter, x: float, y: float, label: Label, look: Look, scale: float = 1.0, alpha: float = 1.0
) -> None:
    """Draw a label with its middle at a pixel. Text is drawn as outlines: a file needs no font to show it."""
    tag = is_tag(label)
    size = look.label_size * scale * (TAG_SIZE if tag else TEXT_SIZE)
    pixels = max(1, round(size))
    ink = tint(label_tint(look, label.role, label.index), alpha)
    painter.save()
    painter.translate(x, y)
    painter.setPen(Qt.PenStyle.NoPen)
    if tag:
        radius = TAG_RADIUS * size
        painter.setBrush(tint(look.ground, alpha))
        painter.drawEllipse(QPointF(0, 0), radius, radius)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(_ring_pen(look, label, ink, radius, scale))
        painter.drawEllipse(QPointF(0, 0), radius, radius)
        painter.setPen(Qt.PenStyle.NoPen)
        ink = tint(look.ink, alpha)
    else:
        painter.setBrush(tint(look.ground, 0.86 * alpha))
        painter.drawPath(_outline(label.text, look.label_fonts, pixels, False, RIM * scale))
    painter.setBrush(ink)
    painter.drawPath(_outline(label.text, look.label_fonts, pixels, tag, 0.0))
    painter.restore()


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
