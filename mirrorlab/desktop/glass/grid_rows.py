"""Rows of widgets under small heads, with what is wrong with one of them below."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtWidgets import QGridLayout, QVBoxLayout, QWidget

from mirrorlab.desktop.parts import label


class GridRows(QWidget):
    """The base of such rows.

    Parameters
    ----------
    heads : sequence of str
        Over the columns from the second on; the first has the name of the row.
    spacing : int
        Pixels between columns.
    """

    def __init__(self, heads: Sequence[str], spacing: int, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.setSpacing(2)
        self.grid = QGridLayout()
        outer.addLayout(self.grid)
        self.grid.setHorizontalSpacing(spacing)
        self.grid.setVerticalSpacing(4)
        for column, text in enumerate(heads, 1):
            self.grid.addWidget(label(text, "small"), 0, column)
        self.error = label("", "wrong", wrap=True)
        self.error.hide()
        outer.addWidget(self.error)

    def put_row(self, index: int, parts: Sequence[QWidget]) -> None:
        """Put the widgets of a row in place."""
        for column, part in enumerate(parts):
            self.grid.addWidget(part, index + 1, column)

    def tell(self, message: str) -> None:
        """Say what is wrong; "" for nothing."""
        self.error.setText(message)
        self.error.setVisible(bool(message))
