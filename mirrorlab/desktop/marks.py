"""Marks that read without colour: what a finding is, how an angle was read, and which mirror is which."""

from __future__ import annotations

import math

from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QPainter, QPainterPath, QPaintEvent, QPen
from PySide6.QtWidgets import QSizePolicy, QWidget

from mirrorlab.desktop.theming import theming

FINE = "fine"
NO_LATTICE = "no lattice"
NO_FRACTION = "no closing fraction"
WRONG = "cannot be read"

READING_TINTS = {FINE: "good", NO_LATTICE: "warn", NO_FRACTION: "bad", WRONG: "bad"}
"""Theme tint of each mark of an angle: a full disc, a half disc, a cross and an exclamation mark."""

FINDING_TINTS = {
    "closed": "good",
    "closed-subdivided": "good",
    "open": "bad",
    "tube": "warn",
    "unbuildable": "bad",
}
"""Theme tint of each kind: a closed ring with a full core, a ring cut into sectors, a ring with a gap, two
parallel bars, and a triangle whose sides miss each other."""


def paint_reading(painter: QPainter, box: QRectF, mark: str, tint: QColor) -> None:
    """Paint the mark of an angle into a square."""
    side = min(box.width(), box.height())
    square = QRectF(0, 0, side, side)
    square.moveCenter(box.center())
    weight = max(1.2, side * 0.16)
    pen = QPen(tint, weight)
    pen.setCapStyle(Qt.PenCapStyle.RoundCap)
    inner = square.adjusted(weight / 2, weight / 2, -weight / 2, -weight / 2)
    painter.setPen(pen)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    if mark == FINE:
        painter.setBrush(tint)
        painter.drawEllipse(inner)
    elif mark == NO_LATTICE:
        painter.drawEllipse(inner)
        painter.setBrush(tint)
        painter.drawPie(inner, 90 * 16, 180 * 16)
    elif mark == NO_FRACTION:
        painter.drawLine(inner.topLeft(), inner.bottomRight())
        painter.drawLine(inner.topRight(), inner.bottomLeft())
    else:
        x = square.center().x()
        painter.drawLine(QPointF(x, inner.top()), QPointF(x, inner.top() + 0.56 * inner.height()))
        painter.drawPoint(QPointF(x, inner.bottom()))


def paint_finding(painter: QPainter, box: QRectF, kind: str, tint: QColor) -> None:
    """Paint the mark of a finding into a square."""
    side = min(box.width(), box.height())
    square = QRectF(0, 0, side, side)
    square.moveCenter(box.center())
    weight = side * 0.085
    ring = square.adjusted(weight, weight, -weight, -weight)
    centre, radius = ring.center(), ring.width() / 2
    pen = QPen(tint, weight)
    pen.setCapStyle(Qt.PenCapStyle.FlatCap)
    pen.setJoinStyle(Qt.PenJoinStyle.MiterJoin)
    painter.setPen(pen)
    painter.setBrush(Qt.BrushStyle.NoBrush)

    def at(degrees: float, part: float = 1.0) -> QPointF:
        turn = math.radians(degrees)
        return centre + QPointF(math.cos(turn), -math.sin(turn)) * radius * part

    if kind in ("closed", "closed-subdivided"):
        painter.drawEllipse(ring)
        wedge = QPainterPath(centre)
        wedge.arcTo(ring, 60, 60)
        wedge.closeSubpath()
        painter.fillPath(wedge, tint)
        painter.setPen(QPen(tint, weight * 0.62))
        for k in range(3):
            painter.drawLine(at(60 * k, 0.94), at(60 * k + 180, 0.94))
        if kind == "closed-subdivided":
            painter.setPen(QPen(QColor(theming().theme.panel), weight * 0.8))
            painter.drawLine(at(90, 0.16), at(90, 0.92))
    elif kind == "open":
        painter.drawArc(ring, 68 * 16, 300 * 16)
        painter.setPen(QPen(tint, weight * 0.62))
        for degrees in (60, 119, 178, 237, 296, 355):
            painter.drawLine(centre, at(degrees, 0.94))
    elif kind == "tube":
        for x in (-0.5, 0.5):
            painter.drawLine(centre + QPointF(x, -1) * radius, centre + QPointF(x, 1) * radius)
        painter.setPen(QPen(tint, weight * 0.62))
        for y in (-0.66, 0.0, 0.66):
            painter.drawLine(centre + QPointF(-0.5, y) * radius, centre + QPointF(0.5, y) * radius)
    else:
        for degrees in (90, 210, 330):
            painter.drawLine(at(degrees + 14), at(degrees + 106))
            painter.drawLine(at(degrees + 14), at(degrees + 14, 0.62))


class FindingMark(QWidget):
    """The mark of a finding, as a widget."""

    def __init__(self, side: int = 40, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._kind = "closed"
        self.setFixedSize(side, side)
        theming().changed.connect(self.update)

    def set_kind(self, kind: str) -> None:
        """Show the mark of another kind."""
        if kind == self._kind:
            return
        self._kind = kind
        self.setAccessibleName(kind)
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        tint = QColor(getattr(theming().theme, FINDING_TINTS[self._kind]))
        paint_finding(painter, QRectF(self.rect()).adjusted(1, 1, -1, -1), self._kind, tint)
        painter.end()


class ReadingMark(QWidget):
    """The mark of an angle, as a widget."""

    def __init__(self, side: int = 10, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._mark = FINE
        self.setFixedSize(side, side)
        theming().changed.connect(self.update)

    @property
    def mark(self) -> str:
        """What is shown."""
        return self._mark

    def set_mark(self, mark: str) -> None:
        """Show another mark."""
        if mark == self._mark and self.toolTip():
            return
        self._mark = mark
        self.setToolTip(mark)
        self.setAccessibleName(mark)
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        tint = QColor(getattr(theming().theme, READING_TINTS[self._mark]))
        paint_reading(painter, QRectF(self.rect()), self._mark, tint)
        painter.end()


class LetterDisc(QWidget):
    """A mirror's letter within a ring of its own pattern and tint, as on the stage."""

    def __init__(self, index: int, letter: str, side: int = 30, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.index, self.letter = index, letter
        self.chosen = False
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self.setFixedSize(side, side)
        self.setAccessibleName(f"mirror {letter}")
        theming().changed.connect(self.update)

    def sizeHint(self) -> QSize:
        return QSize(30, 30)

    def set_chosen(self, chosen: bool) -> None:
        """Show the mirror as picked."""
        if chosen != self.chosen:
            self.chosen = chosen
            self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        theme = theming().theme
        look = theme.picture
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        weight = 2.6
        ring = QRectF(self.rect()).adjusted(weight, weight, -weight, -weight)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(theme.select if self.chosen else theme.raised))
        painter.drawEllipse(ring)
        pen = QPen(QColor(look.mirror(self.index)), weight)
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        pattern = look.pattern(self.index)
        if pattern:
            pen.setDashPattern(fitted_pattern(pattern, math.pi * ring.width() / weight))
        painter.setPen(pen)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawEllipse(ring)
        font = QFont(list(theme.fonts.display))
        font.setItalic(True)
        font.setPixelSize(round(self.height() * 0.56))
        painter.setFont(font)
        painter.setPen(QColor(theme.text))
        painter.drawText(
            QRectF(self.rect()).translated(0, -self.height() * 0.04),
            Qt.AlignmentFlag.AlignCenter,
            self.letter,
        )
        painter.end()


def fitted_pattern(pattern: tuple[float, ...], around: float) -> list[float]:
    """The pattern shrunk a little so that it goes round a ring a whole number of times."""
    size = sum(pattern) * 0.8
    times = max(2, round(around / size))
    scale = around / (times * sum(pattern))
    return [part * scale for part in pattern]
