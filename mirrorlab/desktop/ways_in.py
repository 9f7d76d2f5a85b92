"""Other ways into the triangle: a sample, a family, normals or a file. They all fill the same cells."""

from __future__ import annotations

import re

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QHBoxLayout, QMenu, QPlainTextEdit, QVBoxLayout, QWidget

from mirrorlab.desktop.angle_text import plainly_typed
from mirrorlab.desktop.document import MOST_MIRRORS, Document
from mirrorlab.desktop.parts import Field, button, label
from mirrorlab.desktop.printed import as_sentence
from mirrorlab.desktop.sheets import show_sheet
from mirrorlab.desktop.stylesheet import set_wrong
from mirrorlab.files.samples import samples
from mirrorlab.mirrors import Arrangement


class WaysIn(QWidget):
    """A row of ways in; family and normals open a field below it.

    Signals
    -------
    file_wanted()
        The user wants to open a file.
    grown()
        More of it stands below than before.
    """

    file_wanted = Signal()
    grown = Signal()

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.samples = button("Sample", hint="Arrangements from the Ostrel workshop and cabinet")
        menu = QMenu(self.samples)
        fill_samples(menu, document)
        self.samples.setMenu(menu)
        self.samples.setProperty("menu", True)
        self.family_button = button("Family", hint="A named finite group: E7, H3, A1xI2(5)")
        self.normals_button = button("Normals", hint="Mirrors through one point, from their normals")
        self.file_button = button("File", hint="Open an arrangement file (Ctrl+O)")
        for opener in (self.family_button, self.normals_button):
            opener.setCheckable(True)
        self.family = FamilyEntry(document)
        self.normals = NormalsEntry(document)
        self.family.grown.connect(self.grown)
        self.normals.grown.connect(self.grown)
        self.family.hide()
        self.normals.hide()
        self.family_button.toggled.connect(lambda on: self._open(self.family_button, on))
        self.normals_button.toggled.connect(lambda on: self._open(self.normals_button, on))
        self.file_button.clicked.connect(self.file_wanted)
        row = QHBoxLayout()
        row.setSpacing(4)
        for part in (self.samples, self.family_button, self.normals_button, self.file_button):
            part.setProperty("kind", "tight")
            row.addWidget(part, 1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        column.addLayout(row)
        column.addWidget(self.family)
        column.addWidget(self.normals)

    def _open(self, opener: QWidget, on: bool) -> None:
        entry = self.family if opener is self.family_button else self.normals
        other = self.normals_button if opener is self.family_button else self.family_button
        entry.setVisible(on)
        self.grown.emit()
        if on:
            other.setChecked(False)
            entry.take_focus()


def fill_samples(menu: QMenu, document: Document) -> None:
    """Put one action a sample into a menu."""
    for sheet in samples():
        action = menu.addAction(f"{sheet.name}  –  {sheet.note}")
        action.triggered.connect(lambda _=False, s=sheet: show_sheet(s, document))


class FamilyEntry(QWidget):
    """A field for the name of a family; Enter takes it. `grown` tells that an error stands below it."""

    grown = Signal()

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.field = Field()
        self.field.setPlaceholderText("E7, H3, A1xI2(5) …")
        self.field.setAccessibleName("family")
        self.error = label("", "wrong", wrap=True)
        self.error.hide()
        take = button("Take")
        row = QHBoxLayout()
        row.setSpacing(4)
        row.addWidget(self.field, 1)
        row.addWidget(take)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        column.addLayout(row)
        column.addWidget(self.error)
        self.field.returnPressed.connect(self.take)
        self.field.textEdited.connect(lambda _: self._say(""))
        take.clicked.connect(self.take)

    def take_focus(self) -> None:
        """Give the field the keyboard."""
        self.field.setFocus()
        self.field.selectAll()

    def take(self) -> None:
        """Make the arrangement, or say in place why it cannot be made."""
        name = self.field.text().strip()
        try:
            arrangement = plainly_typed(Arrangement.from_family(name, self.document.settings.reading))
        except ValueError as error:
            self._say(as_sentence(str(error)))
            return
        if arrangement.size < 2:
            self._say(f'"{name}" is a single mirror: it has no angle to show in the triangle')
            return
        self._say("")
        self.document.put_sheet(arrangement, name)

    def _say(self, message: str) -> None:
        self.error.setText(message)
        self.error.setVisible(bool(message))
        set_wrong(self.field, bool(message))
        if message:
            self.grown.emit()


class NormalsEntry(QWidget):
    """A field for normals, one row a mirror. `grown` tells that an error stands below it."""

    grown = Signal()

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.field = QPlainTextEdit()
        self.field.setPlaceholderText("One normal a row:\n1 0 0\n-1 1 0\n0 -1 1")
        self.field.setAccessibleName("normals")
        self.field.setTabChangesFocus(True)
        self.field.setFixedHeight(78)
        self.error = label("", "wrong", wrap=True)
        self.error.hide()
        take = button("Take", hint="Make the arrangement of these normals")
        row = QHBoxLayout()
        row.addWidget(self.error, 1)
        row.addWidget(take)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(4)
        column.addWidget(self.field)
        column.addLayout(row)
        take.clicked.connect(self.take)
        self.field.textChanged.connect(lambda: self._say(""))

    def take_focus(self) -> None:
        """Give the field the keyboard."""
        self.field.setFocus()

    def take(self) -> None:
        """Make the arrangement, or say in place why it cannot be made."""
        try:
            arrangement = Arrangement.from_normals(read_rows(self.field.toPlainText()))
            arrangement.finding()  # refused here, in place, when it would fill the memory with mirrors
        except ValueError as error:
            self._say(as_sentence(str(error)))
            return
        if not 2 <= arrangement.size <= MOST_MIRRORS:
            self._say(f"{arrangement.size} normals: the triangle holds 2 to {MOST_MIRRORS} mirrors")
            return
        self._say("")
        self.document.put_sheet(arrangement, "From normals")

    def _say(self, message: str) -> None:
        self.error.setText(message)
        self.error.setVisible(bool(message))
        set_wrong(self.field, bool(message))
        if message:
            self.grown.emit()


def read_rows(text: str) -> list[list[float]]:
    """Rows of numbers parted by spaces, commas or semicolons; a ValueError names the row and the word."""
    rows: list[list[float]] = []
    for number, line in enumerate(text.splitlines(), 1):
        words = [word for word in re.split(r"[\s,;]+", line.strip()) if word]
        row = []
        for word in words:
            try:
                row.append(float(word.replace("−", "-")))
            except ValueError:
                msg = f'row {number}, "{word}": not a number; write one normal a row, such as 1 -1 0'
                raise ValueError(msg) from None
        if row:
            rows.append(row)
    if not rows:
        msg = "no normals yet; write one a row, such as 1 -1 0"
        raise ValueError(msg)
    if len({len(row) for row in rows}) > 1:
        k = next(i for i, row in enumerate(rows) if len(row) != len(rows[0]))
        msg = f"row {k + 1} has {len(rows[k])} numbers and row 1 has {len(rows[0])}; all need as many"
        raise ValueError(msg)
    return rows
