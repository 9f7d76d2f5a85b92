"""What several benches are made of: chips of sections, a field that tells of the keyboard, a list of facts."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QMouseEvent
from PySide6.QtWidgets import QButtonGroup, QFrame, QGridLayout, QWidget

from mirrorlab.desktop.parts import Field, button, label
from mirrorlab.desktop.stylesheet import set_kind

CHIPS_IN_A_ROW = 3


class Chips(QWidget):
    """Buttons in rows of three, of which one is chosen; the arrow keys move among them.

    Signals
    -------
    chosen(int)
        By the user; `choose` does not emit it.
    """

    chosen = Signal(int)

    def __init__(self, texts: Sequence[str], hints: Sequence[str], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._group = QButtonGroup(self)
        self._group.setExclusive(True)
        grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setSpacing(4)
        for k, (text, hint) in enumerate(zip(texts, hints, strict=True)):
            made = button(text, "segment", hint)
            made.setCheckable(True)
            self._group.addButton(made, k)
            grid.addWidget(made, k // CHIPS_IN_A_ROW, k % CHIPS_IN_A_ROW)
            grid.setColumnStretch(k % CHIPS_IN_A_ROW, 1)
        self._group.button(0).setChecked(True)
        self._group.idClicked.connect(self.chosen)

    @property
    def current(self) -> int:
        """Which one is chosen."""
        return self._group.checkedId()

    def choose(self, index: int) -> None:
        """Choose one without telling anyone."""
        self._group.button(index).setChecked(True)

    def button(self, index: int) -> QWidget:
        """The button at a place."""
        return self._group.button(index)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        steps = {
            Qt.Key.Key_Left: -1,
            Qt.Key.Key_Right: 1,
            Qt.Key.Key_Up: -CHIPS_IN_A_ROW,
            Qt.Key.Key_Down: CHIPS_IN_A_ROW,
        }
        place = self.current + steps.get(Qt.Key(event.key()), 0)
        if place != self.current and 0 <= place < len(self._group.buttons()):
            self._group.button(place).setFocus()
            self._group.button(place).click()
            return
        super().keyPressEvent(event)


class LineField(Field):
    """A field that says when the keyboard comes.

    Signals
    -------
    entered(), left()
    """

    entered = Signal()
    left = Signal()

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self.entered.emit()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.left.emit()


class FactRows(QWidget):
    """A name and a value a row; the values may wrap. Without a name the value takes the whole row."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(12)
        self._grid.setVerticalSpacing(3)
        self._grid.setColumnStretch(1, 1)
        self._parts: list[tuple[QWidget, QWidget]] = []
        self.texts: dict[str, str] = {}

    def show_facts(self, facts: dict[str, str]) -> None:
        """Show other facts, as rich text; empty ones are left out."""
        kept = {name: text for name, text in facts.items() if text}
        if kept == self.texts:
            return
        self.texts = kept
        for pair in self._parts:
            for part in pair:
                self._grid.removeWidget(part)
                part.hide()
                part.deleteLater()
        self._parts = []
        for row, (name, text) in enumerate(kept.items()):
            left, right = label(name, "muted"), label(text, "" if name else "muted", wrap=True)
            left.setAlignment(Qt.AlignmentFlag.AlignTop)
            if name:
                self._grid.addWidget(left, row, 0)
                self._grid.addWidget(right, row, 1)
            else:
                self._grid.addWidget(right, row, 0, 1, 2)
            self._parts.append((left, right))


class ChoiceCard(QFrame):
    """A frame that is chosen by mouse, Space or Enter; what stands on it is its subclass's.

    Signals
    -------
    chosen()
    """

    chosen = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        set_kind(self, "cell")
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self.setFocus(Qt.FocusReason.MouseFocusReason)
            self.chosen.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Space, Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.chosen.emit()
            return
        super().keyPressEvent(event)
