"""Small parts the window and the benches are made of."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QButtonGroup, QFrame, QHBoxLayout, QLabel, QPushButton, QSizePolicy, QWidget

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


def button(text: str, kind: str = "", hint: str = "") -> QPushButton:
    """A push button: "", "quiet" or "chief"."""
    made = QPushButton(text)
    if kind:
        set_kind(made, kind)
    if hint:
        made.setToolTip(hint)
    return made


def rule() -> QFrame:
    """A hairline across."""
    made = QFrame()
    set_kind(made, "rule")
    made.setFixedHeight(1)
    return made


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
