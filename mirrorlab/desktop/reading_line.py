"""The line below a typed angle: its mark and how it was read, in the middle, ending in "…" where there is no room."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QSize
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QSizePolicy, QWidget

from mirrorlab.desktop.marks import ReadingMark
from mirrorlab.desktop.parts import Elided
from mirrorlab.desktop.stylesheet import set_kind

GAP = 4


class ReadingLine(QWidget):
    """Mark and words. They are put in place here and not by a layout: at every key they say something else, and a
    layout would ask the whole window anew; and a long reading must not widen its column.

    Parameters
    ----------
    side : int
        Pixels of the mark.
    """

    def __init__(self, side: int, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.mark = ReadingMark(side, self)
        self.words = Elided("", "small")
        self.words.setParent(self)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)

    def text(self) -> str:
        """How the angle was read, in a few characters."""
        return self.words.text()

    def show_reading(self, mark: str, words: str, kind: str = "small") -> None:
        """Show another mark and other words; `kind` is that of the label."""
        self.mark.set_mark(mark)
        self.words.setText(words)
        set_kind(self.words, kind)
        self._place()

    def sizeHint(self) -> QSize:
        return QSize(self.mark.width(), max(self.mark.height(), self.words.sizeHint().height()))

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def event(self, event: QEvent) -> bool:
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.StyleChange, QEvent.Type.Show):
            self._place()
        return super().event(event)

    def resizeEvent(self, event: QResizeEvent) -> None:
        self._place()

    def _place(self) -> None:
        self.words.ensurePolished()
        side, high = self.mark.width(), self.height()
        wanted = self.words.fontMetrics().horizontalAdvance(self.words.text()) + 1
        wide = max(0, min(wanted, self.width() - side - GAP))
        left = max(0, (self.width() - side - GAP - wide) // 2)
        self.mark.move(left, (high - side) // 2)
        self.words.setGeometry(left + side + GAP, 0, wide, high)
