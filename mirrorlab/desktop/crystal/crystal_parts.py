"""Widgets of the crystal bench: a choice with a symbol, a list of typed lines."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QSignalBlocker, Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop import symbols
from mirrorlab.desktop.bench_parts import ChoiceCard, LineField
from mirrorlab.desktop.parts import Field, label
from mirrorlab.desktop.stylesheet import set_live, set_wrong


class Choice(ChoiceCard):
    """A card to choose by mouse, Space or Enter: a symbol in large type, words beside it, a line below."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.symbol = symbols.SymbolText(13)
        self.beside = label("", "small")
        self.state = label("", "small")
        self.below = label("", "small", wrap=True)
        head = QHBoxLayout()
        head.setSpacing(8)
        head.addWidget(self.symbol)
        head.addWidget(self.beside, 1)
        head.addWidget(self.state)
        column = QVBoxLayout(self)
        column.setContentsMargins(10, 4, 10, 5)
        column.setSpacing(2)
        column.addLayout(head)
        column.addWidget(self.below)

    def show_choice(self, symbol: str, beside: str, below: str, state: str, live: bool) -> None:
        """Fill the card; `state` is a word at the right, `live` marks the chosen one."""
        self.symbol.set_runs(symbols.hermann_mauguin(symbol))
        self.beside.setText(beside)
        self.below.setText(below)
        self.below.setVisible(bool(below))
        self.state.setText(state)
        self.setAccessibleName(f"{symbol} {state}".strip())
        set_live(self, live)


class _Line(QWidget):
    """One typed line with what was read from it."""

    def __init__(self, name: str) -> None:
        super().__init__()
        self.field = LineField()
        self.field.setAccessibleName(name)
        self.answer = label("", "small", wrap=True)
        self.answer.setMinimumWidth(0)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(8)
        self.field.setFixedWidth(104)
        row.addWidget(self.field)
        row.addWidget(self.answer, 1)


class TypedList(QWidget):
    """Lines of text, each with an answer beside it, and an empty one at the end to type the next.

    Signals
    -------
    typed(tuple)
        The texts now, the empty ones left out.
    entered()
        The keyboard came into one of the fields.
    """

    typed = Signal(tuple)
    entered = Signal()

    def __init__(self, name: str, hint: str, most: int, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._name, self._hint, self._most = name, hint, most
        self._lines: list[_Line] = []
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(4)
        self.error = label("", "wrong", wrap=True)
        self._column.addWidget(self.error)
        self.error.hide()
        self._fit(1)

    @property
    def fields(self) -> list[Field]:
        """The fields in sight, the empty one last."""
        return [line.field for line in self._lines]

    def texts(self) -> tuple[str, ...]:
        """What is typed, without the empty lines."""
        return tuple(text for line in self._lines if (text := line.field.text().strip()))

    def show_texts(self, texts: Sequence[str]) -> None:
        """Show other texts; a field with the keyboard keeps what is typed when it means the same."""
        if tuple(texts) != self.texts():
            self._fit(min(self._most, len(texts) + 1))
            for k, line in enumerate(self._lines):
                with QSignalBlocker(line.field):
                    line.field.setText(texts[k] if k < len(texts) else "")
        self._tidy()

    def show_answers(self, answers: Sequence[tuple[str, bool]]) -> None:
        """For each text in order what was read from it, and whether that is an error; the first error is told below."""
        place = 0
        error = ""
        for line in self._lines:
            words, wrong = "", False
            if line.field.text().strip():
                words, wrong = answers[place] if place < len(answers) else ("", False)
                place += 1
            set_wrong(line.field, wrong)
            line.answer.setText("" if wrong else words)
            error = error or (words if wrong else "")
        self.error.setText(error)
        self.error.setVisible(bool(error))

    def _fit(self, count: int) -> None:
        while len(self._lines) < count:
            number = len(self._lines) + 1
            line = _Line(f"{self._name} {number}")
            line.field.textEdited.connect(self._edited)
            line.field.entered.connect(self.entered)
            line.field.left.connect(self._tidy)
            line.field.returnPressed.connect(lambda k=number: self._next(k))
            self._lines.append(line)
            self._column.insertWidget(len(self._lines) - 1, line)
        while len(self._lines) > max(1, count):
            line = self._lines.pop()
            self._column.removeWidget(line)
            line.hide()
            line.deleteLater()
        for k, line in enumerate(self._lines):
            last = k == len(self._lines) - 1
            line.field.setPlaceholderText(self._hint if last else "")

    def _edited(self) -> None:
        if self._lines[-1].field.text().strip():
            self._fit(min(self._most, len(self._lines) + 1))
        self.typed.emit(self.texts())

    def _next(self, place: int) -> None:
        if place < len(self._lines):
            self._lines[place].field.setFocus(Qt.FocusReason.TabFocusReason)

    def _tidy(self) -> None:
        """Close gaps once nobody types in them."""
        texts = self.texts()
        shown = [line.field.text().strip() for line in self._lines]
        wanted = [*texts, *[""] * (len(shown) - len(texts))]
        if shown != wanted and not any(line.field.hasFocus() for line in self._lines):
            for line, text in zip(self._lines, wanted, strict=True):
                line.field.setText(text)
        busy = any(line.field.hasFocus() for line in self._lines)
        if not busy:
            self._fit(min(self._most, len(texts) + 1))
