"""Base of the sections of a bench: each has its widgets, and the rows for the table along the bottom."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QVBoxLayout, QWidget

from mirrorlab.desktop.bench import write_csv
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.rows import RowsModel


class BenchSection(QWidget):
    """One section.

    Attributes
    ----------
    name, about : str
        The word on its chip, and its hint.
    model : RowsModel
        Its rows; `title` and `note` stand above them.

    Signals
    -------
    rows_changed()
    picture_wanted(str)
    says(str)
    file_wanted()
        The user wants to open a file.
    """

    name = ""
    about = ""
    rows_changed = Signal()
    picture_wanted = Signal(str)
    says = Signal(str)
    file_wanted = Signal()

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.model = RowsModel(parent=self)
        self.title = ""
        self.note = ""
        self._gesture = ""
        self.column = QVBoxLayout(self)
        self.column.setContentsMargins(0, 0, 0, 0)
        self.column.setSpacing(6)

    def refresh(self) -> None:
        """Bring widgets and rows in step with the document."""

    def save_rows(self, path: Path) -> None:
        """Write the rows as CSV."""
        write_csv(path, self.model)

    def begin(self, what: str) -> None:
        """Typing begins: until the keyboard goes elsewhere all of it is one step."""
        self._gesture = self.document.new_gesture(what)

    @property
    def gesture(self) -> str:
        """The gesture under way."""
        return self._gesture
