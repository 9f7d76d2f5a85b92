"""A small painted histogram of seams."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QSizePolicy, QWidget

from mirrorlab.desktop.theming import theming
from mirrorlab.optics.montecarlo import SeamChances

HEIGHT = 96
FOOT = 16


class Histogram(QWidget):
    """Bars of how many assemblies show a seam of each size, and a line at the largest seam wanted."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.chances: SeamChances | None = None
        self.limit: float | None = None
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        theming().changed.connect(self.update)

    def sizeHint(self) -> QSize:
        return QSize(200, HEIGHT)

    def show_chances(self, chances: SeamChances | None, limit: float | None) -> None:
        """Show others, or none."""
        self.chances, self.limit = chances, limit
        self.setVisible(chances is not None)
        if chances is not None:
            words = f"Histogram of {chances.draws:,} seams, from 0 to {chances.edges[-1]:.3g} mm"
            self.setAccessibleName(words)
            self.setToolTip(f"{words}; the line is the largest seam wanted")
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        if self.chances is None:
            return
        theme = theming().theme
        counts, last = self.chances.counts, float(self.chances.edges[-1])
        painter = QPainter(self)
        font = QFont(self.font())
        font.setPointSizeF(theme.fonts.small_size)
        painter.setFont(font)
        room = QRectF(0, 4, self.width(), self.height() - FOOT - 4)
        step = room.width() / len(counts)
        tallest = max(1, int(counts.max()))
        for k, count in enumerate(counts):
            high = room.height() * count / tallest
            within = self.limit is None or self.chances.edges[k + 1] <= self.limit * (1 + 1e-9)
            bar = QRectF(k * step, room.bottom() - high, max(1.0, step - 1), high)
            painter.fillRect(bar, QColor(theme.good if within else theme.accent))
        painter.setPen(QColor(theme.line))
        painter.drawLine(QPointF(0, room.bottom() + 0.5), QPointF(room.width(), room.bottom() + 0.5))
        if self.limit is not None and self.limit < last:
            x = room.width() * self.limit / last
            painter.setPen(QPen(QColor(theme.text), 1, Qt.PenStyle.DashLine))
            painter.drawLine(QPointF(x, 0), QPointF(x, room.bottom()))
        painter.setPen(QColor(theme.muted))
        foot = QRectF(0, room.bottom() + 1, room.width(), FOOT)
        painter.drawText(foot, int(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter), "0")
        painter.drawText(foot, int(Qt.AlignmentFlag.AlignHCenter | Qt.AlignmentFlag.AlignVCenter), "seam")
        painter.drawText(
            foot, int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter), f"{last:.3g} mm"
        )
        painter.end()
