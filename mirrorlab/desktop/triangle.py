"""The triangle of cells: the letters stand on its slope, the angle of a pair where row and column meet."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QMouseEvent
from PySide6.QtWidgets import QGridLayout, QWidget

from mirrorlab.angles import AngleError
from mirrorlab.desktop.angle_cell import AngleCell
from mirrorlab.desktop.angle_text import mark_of
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.marks import LetterDisc
from mirrorlab.desktop.printed import as_sentence
from mirrorlab.mirrors import ArrangementError

ROOMY = 4
"""Up to so many mirrors the cells are roomy; with more they are made compact so that eight fit."""


class Disc(LetterDisc):
    """A letter that picks its mirror.

    Signals
    -------
    pressed(int)
    """

    pressed = Signal(int)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self.pressed.emit(self.index)


class Triangle(QWidget):
    """Cells for all pairs of typed mirrors.

    Signals
    -------
    current_changed(int)
        Another pair has the keyboard.
    reading_changed()
        A cell was read anew, or could not be read.
    """

    current_changed = Signal(int)
    reading_changed = Signal()

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.cells: list[AngleCell] = []
        self.discs: list[Disc] = []
        self.current = 0
        self._gesture = ""
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        document.arrangement_changed.connect(self.refresh)
        document.settings_changed.connect(self.refresh)
        document.selection_changed.connect(self._show_selection)
        self.refresh()

    def refresh(self) -> None:
        """Show the document's angles and how they were read."""
        arrangement, finding = self.document.arrangement, self.document.finding
        if len(self.discs) != arrangement.size:
            self._build(arrangement.size)
        for cell, pair, angle in zip(self.cells, arrangement.pairs, arrangement.angles, strict=True):
            cell.show_angle(angle, mark_of(finding, pair, angle))
        self._show_selection()
        self.reading_changed.emit()

    def _build(self, size: int) -> None:
        current, typing = self.current, any(cell.edit.hasFocus() for cell in self.cells)
        if typing:  # else the keyboard goes from one old cell to the next, and to a button at last
            self.setFocus()
        for widget in (*self.cells, *self.discs):
            self._grid.removeWidget(widget)
            widget.hide()
            widget.deleteLater()
        self.cells.clear()
        self.discs.clear()
        for column in range(self._grid.columnCount()):
            self._grid.setColumnStretch(column, 0)
        compact = size > ROOMY
        self._grid.setSpacing(3 if compact else 6)
        letters = self.document.arrangement.letters
        for i in range(size):
            disc = Disc(i, letters[i], 24 if compact else 30)
            disc.pressed.connect(lambda k: self.document.select(("mirror", k)))
            disc.setToolTip(f"Mirror {letters[i]}: pick it")
            self._grid.addWidget(disc, i, i, Qt.AlignmentFlag.AlignCenter)
            self.discs.append(disc)
        for k, (i, j) in enumerate(self.document.arrangement.pairs):
            cell = AngleCell(k, letters[i] + letters[j], compact)
            cell.typed.connect(self._type)
            cell.entered.connect(self._enter)
            cell.left.connect(self._leave)
            cell.done.connect(self._done)
            cell.step.connect(self._step)
            cell.given_up.connect(self._give_up)
            self._grid.addWidget(cell, i, j)
            self.cells.append(cell)
        for column in range(1, size):
            self._grid.setColumnStretch(column, 1)
        self.current = min(current, len(self.cells) - 1)
        if typing:
            self.cells[self.current].show()
            self.focus_pair(self.current)
        self.current_changed.emit(self.current)

    def wanted_width(self) -> int:
        """Pixels the triangle needs for its texts."""
        size = len(self.discs)
        return 30 + (size - 1) * (76 if size <= ROOMY else 52)

    def error_of(self, pair: int) -> str:
        """Why a cell's text cannot be read; "" when it can."""
        return self.cells[pair].error if 0 <= pair < len(self.cells) else ""

    def _type(self, pair: int, text: str) -> None:
        cell = self.cells[pair]
        cell.forget_error()
        self.current = pair
        try:
            if text == self.document.arrangement.angles[pair].text:
                self.refresh()
            else:
                self.document.set_angle(pair, text, self._gesture)
        except (AngleError, ArrangementError) as error:
            cell.show_error(as_sentence(str(error)))
            self.reading_changed.emit()

    def _give_up(self, pair: int) -> None:
        self.cells[pair].forget_error()
        self.refresh()
        self.cells[pair].edit.selectAll()

    def _enter(self, pair: int) -> None:
        self._gesture = self.document.new_gesture("angle")
        self.current = pair
        self.current_changed.emit(pair)

    def _leave(self, pair: int) -> None:
        self._gesture = self.document.new_gesture("angle")

    def _done(self, pair: int) -> None:
        self._gesture = self.document.new_gesture("angle")
        if not self.cells[pair].error:
            self.focus_pair((pair + 1) % len(self.cells))

    def _step(self, pair: int, dx: int, dy: int) -> None:
        pairs = self.document.arrangement.pairs
        i, j = pairs[pair]
        target = (i + dy, j + dx)
        if target in pairs:
            self.focus_pair(pairs.index(target))
        elif dx:
            self.focus_pair(max(0, min(len(pairs) - 1, pair + dx)))

    def take(self, text: str) -> None:
        """Type a text into the current cell."""
        cell = self.cells[self.current]
        cell.edit.setText(text)
        self._gesture = self.document.new_gesture("angle")
        self._type(self.current, text)

    def focus_pair(self, pair: int) -> None:
        """Give a cell the keyboard, its text selected."""
        self.cells[pair].edit.setFocus(Qt.FocusReason.TabFocusReason)
        self.cells[pair].edit.selectAll()

    def _show_selection(self) -> None:
        key = self.document.selection
        for disc in self.discs:
            disc.set_chosen(key == ("mirror", disc.index))
