"""A strip below the finding: what went wrong, or what can be brought back. It waits; nothing has to be answered."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QHBoxLayout, QWidget

from mirrorlab.desktop.marks import WRONG, ReadingMark
from mirrorlab.desktop.parts import button, label


class Notice(QFrame):
    """One sentence with at most one thing to do about it."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("notice")
        self.mark = ReadingMark(12)
        self.mark.set_mark(WRONG)
        self.words = label("", "", wrap=True)
        self.words.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.act = button("", "chief")
        self.dismiss = button("Dismiss", "quiet")
        self._doing: Callable[[], object] | None = None
        row = QHBoxLayout(self)
        row.setContentsMargins(16, 5, 12, 5)
        row.addWidget(self.mark)
        row.addWidget(self.words, 1)
        row.addWidget(self.act)
        row.addWidget(self.dismiss)
        self.act.clicked.connect(self._act)
        self.dismiss.clicked.connect(self.hide)
        self.hide()

    def warn(self, text: str) -> None:
        """Say what went wrong."""
        self._show(text, True)

    def offer(self, text: str, word: str, doing: Callable[[], object]) -> None:
        """Offer something to do."""
        self._show(text, False)
        self._doing = doing
        self.act.setText(word)
        self.act.show()

    def _show(self, text: str, wrong: bool) -> None:
        self.words.setText(text)
        self.mark.setVisible(wrong)
        self.act.hide()
        self._doing = None
        self.show()

    def _act(self) -> None:
        doing = self._doing
        self.hide()
        if doing is not None:
            doing()
