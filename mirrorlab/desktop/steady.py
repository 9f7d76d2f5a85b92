"""Room that changes late, for what says something else at every key.

A label that takes another text makes Qt lay out everything around it anew, up to the window: most of what a
keystroke in the triangle would cost. So room is taken at once where it is needed, and given back only when nothing
has changed for a while; in between, only the label itself is painted.
"""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QEvent, QObject, QSize, Qt, QTimer
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QLabel, QSizePolicy, QWidget

LATER = 400
"""Milliseconds after which room is given back: longer than the pause between two keys."""


class Room(QObject):
    """How many pixels a widget asks for.

    Parameters
    ----------
    changed : callable
        Tells the layout.
    """

    def __init__(self, changed: Callable[[], None], parent: QObject) -> None:
        super().__init__(parent)
        self.pixels = 0
        self._needed = 0
        self._changed = changed
        self._later = QTimer(self)
        self._later.setSingleShot(True)
        self._later.setInterval(LATER)
        self._later.timeout.connect(self._take)

    def need(self, pixels: int) -> None:
        """Say how many are needed now."""
        self._needed = pixels
        self._later.stop()
        if pixels > self.pixels:
            self._take()
        elif pixels < self.pixels:
            self._later.start()

    def _take(self) -> None:
        self.pixels = self._needed
        self._changed()


class Steady(QWidget):
    """A label in such room. No layout stands above it, so that a new text sets nothing else going.

    Parameters
    ----------
    label : QLabel
        One that wraps its words needs room below, any other to the right.
    """

    def __init__(self, label: QLabel, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.label = label
        label.setParent(self)
        self._wraps = label.wordWrap()
        self._room = Room(self.updateGeometry, self)
        policy = QSizePolicy.Policy
        self.setSizePolicy(policy.Ignored if self._wraps else policy.Fixed, policy.Fixed)
        if self._wraps:
            label.setAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop)

    def text(self) -> str:
        """What it says."""
        return self.label.text()

    def setText(self, text: str) -> None:
        """Say something else."""
        if text != self.label.text():
            self.label.setText(text)
            self._ask()

    def sizeHint(self) -> QSize:
        if self._wraps:
            return QSize(self.label.minimumSizeHint().width(), self._room.pixels)
        return QSize(self._room.pixels, self.label.sizeHint().height())

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def event(self, event: QEvent) -> bool:
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.StyleChange):
            self._ask()
        return super().event(event)

    def resizeEvent(self, event: QResizeEvent) -> None:
        self.label.setGeometry(self.rect())
        if self._wraps and event.size().width() != event.oldSize().width():
            self._ask()

    def _ask(self) -> None:
        if self._wraps:
            self._room.need(self.label.heightForWidth(max(1, self.width())))
        else:
            self._room.need(self.label.sizeHint().width())
