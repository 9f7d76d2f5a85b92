"""Base of the sections of the crystal bench: each has its widgets, and the rows for the table along the bottom."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QVBoxLayout, QWidget

from mirrorlab.crystal.operations import CrystalError
from mirrorlab.desktop.bench import write_csv
from mirrorlab.desktop.crystal.crystal_state import CrystalState, crystal_state
from mirrorlab.desktop.crystal.workings import Working, working_of
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.rows import RowsModel


class Section(QWidget):
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
    """

    name = ""
    about = ""
    rows_changed = Signal()
    picture_wanted = Signal(str)
    says = Signal(str)

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

    @property
    def state(self) -> CrystalState:
        """What is typed."""
        return crystal_state(self.document)

    def change(self, text: str, gesture: str = "", **fields: Any) -> None:
        """Change what is typed, as one step; nothing happens when it is the same."""
        after = replace(self.state, **fields)
        if after != self.state:
            self.document.set_crystal(after, text, gesture)

    def begin(self, what: str) -> None:
        """Typing begins: until the keyboard goes elsewhere all of it is one step."""
        self._gesture = self.document.new_gesture(what)

    @property
    def gesture(self) -> str:
        """The gesture under way."""
        return self._gesture

    def working(self) -> tuple[Working | None, str]:
        """The working group, or why there is none."""
        try:
            return working_of(self.document), ""
        except CrystalError as error:
            return None, str(error)
