"""Symbols side by side in large type, each with what it is beneath it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPaintEvent
from PySide6.QtWidgets import QSizePolicy, QWidget

from mirrorlab.desktop.steady import Room
from mirrorlab.desktop.symbols import Run, as_spoken, draw_symbol, symbol_size
from mirrorlab.desktop.theming import theming
from mirrorlab.files.picture_sight import painting

GAP = 22
"""Pixels between neighbours."""

LEAST = 240
"""Pixels that are enough in a narrow window; there, wider symbols are written smaller and widen nothing."""


@dataclass(frozen=True, slots=True)
class Named:
    """A symbol and what it is, "Schoenflies"."""

    runs: tuple[Run, ...]
    caption: str


class SymbolStrip(QWidget):
    """Symbols with their captions, painted as one, and as wide as they need.

    While one types, groups come and go at every key: their room changes late, see `Room`.

    Parameters
    ----------
    size : float
        Points of the symbols.
    """

    def __init__(self, size: float, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.symbols: tuple[Named, ...] = ()
        self._widths: list[int] = []
        self._size = size
        self._room = Room(self.updateGeometry, self)
        self.setSizePolicy(QSizePolicy.Policy.Maximum, QSizePolicy.Policy.Preferred)
        theming().changed.connect(self.update)

    def show_symbols(self, symbols: Sequence[Named]) -> None:
        """Show other symbols; those without runs are left out."""
        wanted = tuple(one for one in symbols if one.runs)
        if wanted == self.symbols:
            return
        self.symbols = wanted
        self.setAccessibleName("; ".join(f"{one.caption}: {as_spoken(one.runs)}" for one in wanted))
        small = QFontMetricsF(self._small())
        self._widths = [
            max(symbol_size(one.runs, self._size).width(), round(small.horizontalAdvance(one.caption)))
            for one in wanted
        ]
        self._room.need(sum(width + GAP for width in self._widths))
        self.update()

    def sizeHint(self) -> QSize:
        heights = symbol_size((), self._size).height() + QFontMetricsF(self._small()).height()
        return QSize(self._room.pixels, round(heights))

    def minimumSizeHint(self) -> QSize:
        hint = self.sizeHint()
        return QSize(min(hint.width(), LEAST), hint.height())

    def _small(self) -> QFont:
        font = QFont(self.font())
        font.setPointSizeF(theming().theme.fonts.small_size)
        return font

    def paintEvent(self, event: QPaintEvent) -> None:
        theme, widths = theming().theme, self._widths
        small = self._small()
        below = QFontMetricsF(small).height()
        above = symbol_size((), self._size).height()
        wanted = sum(width + GAP for width in widths)
        x = float(max(0, self.width() - wanted))
        top = self.height() - below - above
        with painting(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            if wanted > self.width():
                part = self.width() / wanted
                painter.translate(0, self.height() * (1 - part))
                painter.scale(part, part)
            for one, width in zip(self.symbols, widths, strict=True):
                own = symbol_size(one.runs, self._size).width()
                box = QRectF(x + (width - own) / 2, top, own, above)
                draw_symbol(painter, one.runs, self._size, box, QColor(theme.text))
                painter.setFont(small)
                painter.setPen(QColor(theme.muted))
                box = QRectF(x, self.height() - below, width, below)
                painter.drawText(box, Qt.AlignmentFlag.AlignHCenter, one.caption)
                x += width + GAP
