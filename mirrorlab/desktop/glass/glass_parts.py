"""Widgets of the glass bench: named entries in rows with their error below, cards to choose, cautions."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QSignalBlocker, Qt, Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop.bench_parts import ChoiceCard, LineField
from mirrorlab.desktop.parts import Elided, label
from mirrorlab.desktop.stylesheet import set_kind, set_live, set_wrong
from mirrorlab.optics.cautions import Caution


class Entry(QWidget):
    """A name above a field."""

    def __init__(self, name: str, hint: str = "", placeholder: str = "") -> None:
        super().__init__()
        self.name = label(name, "small")
        self.field = LineField()
        self.field.setAccessibleName(name)
        self.field.setPlaceholderText(placeholder)
        self.field.setToolTip(hint)
        self.field.setMinimumWidth(0)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(1)
        column.addWidget(self.name)
        column.addWidget(self.field)

    def show_text(self, text: str) -> None:
        """Show another text; the caret stays where the keyboard is when nothing differs."""
        if self.field.text() != text:
            with QSignalBlocker(self.field):
                self.field.setText(text)


class Entries(QWidget):
    """Entries side by side, by key, with the error of any of them below.

    Signals
    -------
    typed(str, str)
        Key and text.
    entered(str)
        The keyboard came to the entry of that key.
    """

    typed = Signal(str, str)
    entered = Signal(str)

    def __init__(self, entries: Sequence[tuple[str, Entry]], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.entries = dict(entries)
        self.error = label("", "wrong", wrap=True)
        self.error.hide()
        row = QHBoxLayout()
        row.setSpacing(8)
        for key, entry in self.entries.items():
            row.addWidget(entry, 1)
            entry.field.textEdited.connect(lambda text, k=key: self.typed.emit(k, text))
            entry.field.entered.connect(lambda k=key: self.entered.emit(k))
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        column.addLayout(row)
        column.addWidget(self.error)

    def show_error(self, key: str, message: str) -> bool:
        """Say what is wrong with an entry, or nothing; True when the entry is one of these."""
        found = key in self.entries
        for name, entry in self.entries.items():
            set_wrong(entry.field, bool(message) and name == key)
        self.error.setText(message if found else "")
        self.error.setVisible(found and bool(message))
        return found


class Card(ChoiceCard):
    """A card to choose by mouse, Space or Enter: a name, figures at the right, a line below."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.name = Elided("", "heading")
        self.figure = label("", "")
        self.below = Elided("", "small")
        head = QHBoxLayout()
        head.setSpacing(8)
        head.addWidget(self.name, 1)
        head.addWidget(self.figure)
        column = QVBoxLayout(self)
        column.setContentsMargins(10, 4, 10, 5)
        column.setSpacing(1)
        column.addLayout(head)
        column.addWidget(self.below)

    def show_card(self, name: str, figure: str, below: str, live: bool) -> None:
        """Fill the card; `live` marks the one that is on the sheet."""
        self.name.setText(name)
        self.figure.setText(figure)
        self.below.setText(below)
        self.setAccessibleName(f"{name}, {figure}{', on the sheet' if live else ''}")
        set_live(self, live)


class Cautions(QFrame):
    """What can hurt, each with a few words in bold and a sentence."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        set_kind(self, "card")
        self.words = label("", "small", wrap=True)
        self.words.setTextFormat(Qt.TextFormat.RichText)
        column = QVBoxLayout(self)
        column.setContentsMargins(10, 7, 10, 8)
        column.addWidget(self.words)
        self.keys: tuple[str, ...] = ()

    def show_cautions(self, cautions: Sequence[Caution]) -> None:
        """Show these."""
        keys = tuple(caution.key for caution in cautions)
        if keys != self.keys:
            self.keys = keys
            lines = [f"<b>{one.title}.</b> {one.text}" for one in cautions]
            self.words.setText("<p style='margin:0'>⚠ " + "<br>".join(lines) + "</p>")
        self.setVisible(bool(keys))
