"""Small parts the window and the benches are made of."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TypeVar

from PySide6.QtCore import QEvent, QSize, Qt, Signal
from PySide6.QtGui import QKeyEvent, QKeySequence, QPainter, QPaintEvent
from PySide6.QtWidgets import (
    QButtonGroup,
    QDoubleSpinBox,
    QFrame,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QPushButton,
    QSizePolicy,
    QSpinBox,
    QWidget,
)

from mirrorlab.desktop.stylesheet import set_kind


def label(text: str = "", kind: str = "", wrap: bool = False) -> QLabel:
    """A label of one kind: "title", "heading", "muted", "small", "wrong", "figures", "large" or ""."""
    made = QLabel(text)
    if kind:
        set_kind(made, kind)
    made.setWordWrap(wrap)
    if wrap:
        made.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Minimum)
    return made


class Elided(QLabel):
    """A label of one line that ends in "…" where there is no room, with the whole text as its hint.

    It keeps its text to itself: whatever it says, it takes the room it is given.
    """

    def __init__(self, text: str = "", kind: str = "") -> None:
        super().__init__()
        self._text = ""
        if kind:
            set_kind(self, kind)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self.setText(text)

    def text(self) -> str:
        return self._text

    def setText(self, text: str) -> None:
        if text != self._text:
            self._text = text
            self.setAccessibleName(text)
            self.update()

    def sizeHint(self) -> QSize:
        metrics = self.fontMetrics()
        return QSize(metrics.averageCharWidth(), metrics.height())

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def paintEvent(self, event: QPaintEvent) -> None:
        shown = self.fontMetrics().elidedText(self._text, Qt.TextElideMode.ElideRight, self.width())
        hint = self._text if shown != self._text else ""
        if self.toolTip() != hint:
            self.setToolTip(hint)
        painter = QPainter(self)
        painter.setFont(self.font())
        painter.setPen(self.palette().color(self.foregroundRole()))
        painter.drawText(self.rect(), int(self.alignment()), shown)
        painter.end()


def button(text: str, kind: str = "", hint: str = "") -> QPushButton:
    """A push button: "", "quiet" or "chief"."""
    made = QPushButton(text)
    if kind:
        set_kind(made, kind)
    if hint:
        made.setToolTip(hint)
    return made


Spin = TypeVar("Spin", QSpinBox, QDoubleSpinBox)
SPIN_INSET = 6
"""Pixels before the text of a spin box, as in other fields; a stylesheet's padding does not reach it."""


def inset(box: Spin) -> Spin:
    """A spin box whose text stands clear of its edge."""
    box.lineEdit().setTextMargins(SPIN_INSET, 0, 0, 0)
    return box


def rule() -> QFrame:
    """A hairline across."""
    made = QFrame()
    set_kind(made, "rule")
    made.setFixedHeight(1)
    return made


class Field(QLineEdit):
    """A line to type in that leaves undo and redo to the document, so that they mean one thing everywhere."""

    def event(self, event: QEvent) -> bool:
        if event.type() == QEvent.Type.ShortcutOverride and isinstance(event, QKeyEvent) and undoes(event):
            event.ignore()
            return True
        return super().event(event)


def undoes(event: QKeyEvent) -> bool:
    """Whether a key is that of undo or redo."""
    return event.matches(QKeySequence.StandardKey.Undo) or event.matches(QKeySequence.StandardKey.Redo)


class Segments(QWidget):
    """A row of buttons of which one is chosen; the arrow keys move along it.

    Signals
    -------
    chosen(int)
        By the user; `choose` does not emit it.
    """

    chosen = Signal(int)

    def __init__(
        self,
        texts: Sequence[str],
        kind: str = "segment",
        hints: Sequence[str] = (),
        parent: QWidget | None = None,
    ) -> None:
        super().__init__(parent)
        self._group = QButtonGroup(self)
        self._group.setExclusive(True)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0 if kind == "tab" else 4)
        for i, text in enumerate(texts):
            made = button(text, kind, hints[i] if i < len(hints) else "")
            made.setCheckable(True)
            made.setAutoDefault(False)
            self._group.addButton(made, i)
            row.addWidget(made, 0 if kind == "tab" else 1)
        if kind == "tab":
            row.addStretch(1)
        self._group.idClicked.connect(self.chosen)
        if texts:
            self._group.button(0).setChecked(True)

    @property
    def current(self) -> int:
        """Which one is chosen."""
        return self._group.checkedId()

    def choose(self, index: int) -> None:
        """Choose one without telling anyone."""
        self._group.button(index).setChecked(True)

    def button(self, index: int) -> QPushButton:
        """The button at a place."""
        found = self._group.button(index)
        assert isinstance(found, QPushButton)
        return found

    def keyPressEvent(self, event: QKeyEvent) -> None:
        step = {Qt.Key.Key_Left: -1, Qt.Key.Key_Right: 1}.get(Qt.Key(event.key()), 0)
        place = self.current + step
        if step and 0 <= place < len(self._group.buttons()):
            self.button(place).setFocus()
            self.button(place).click()
            return
        super().keyPressEvent(event)
