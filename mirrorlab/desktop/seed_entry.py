"""The seed as heights, coordinates or a named place, typed with a live answer."""

from __future__ import annotations

import numpy as np
from PySide6.QtCore import QSignalBlocker, Qt, Signal
from PySide6.QtGui import QFocusEvent
from PySide6.QtWidgets import QComboBox, QGridLayout, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop.document import Document, Seed
from mirrorlab.desktop.marks import LetterDisc
from mirrorlab.desktop.parts import Field, Segments, label
from mirrorlab.desktop.printed import as_sentence
from mirrorlab.desktop.seeding import where
from mirrorlab.desktop.stylesheet import set_wrong
from mirrorlab.mirrors import OrbitError
from mirrorlab.mirrors.place import place_names

HEIGHTS, POINT, PLACE = range(3)
AXES = ("x", "y", "z")
IN_A_ROW = 4


class NumberField(Field):
    """A number typed at a place of a list.

    Signals
    -------
    entered()
        The keyboard came.
    """

    entered = Signal()

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        if event.reason() != Qt.FocusReason.MouseFocusReason:
            self.selectAll()
        self.entered.emit()

    def show_number(self, value: float) -> None:
        """Show a value, unless what is typed means the same."""
        typed = number(self.text())
        if typed is None or abs(typed - value) > 5e-7 * max(1.0, abs(value)):
            self.setText(f"{0.0 if abs(value) < 5e-10 else value:.6g}")
            self.setCursorPosition(0)
        set_wrong(self, False)


def number(text: str) -> float | None:
    """A typed number, None when it is none; a decimal comma and a true minus sign are taken."""
    try:
        value = float(text.strip().replace(",", ".").replace("−", "-"))
    except ValueError:
        return None
    return value if np.isfinite(value) else None


class SeedEntry(QWidget):
    """Three ways to say where the seed stands."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.ways = Segments(("Heights", "Coordinates", "Place"))
        self.fields: list[NumberField] = []
        self._grid = QGridLayout()
        self._grid.setHorizontalSpacing(4)
        self._grid.setVerticalSpacing(4)
        self.places = QComboBox()
        self.places.setAccessibleName("place of the seed")
        self.note = label("", "small", wrap=True)
        self.error = label("", "wrong", wrap=True)
        self._gesture = ""
        self._shape: tuple[int, int] = (-1, -1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        column.addWidget(self.ways)
        column.addLayout(self._grid)
        column.addWidget(self.places)
        column.addWidget(self.error)
        column.addWidget(self.note)
        self.ways.chosen.connect(self._switch)
        self.places.activated.connect(self._place)
        self.refresh()

    def refresh(self) -> None:
        """Show the document's seed."""
        seed = self.document.seed
        if self.isHidden() or not self._typing():
            self.ways.choose(self._way_of(seed))
        self._build()
        self._fill()

    @staticmethod
    def _way_of(seed: Seed) -> int:
        return HEIGHTS if seed.heights is not None else POINT if seed.point is not None else PLACE

    def _typing(self) -> bool:
        return any(field.hasFocus() for field in self.fields)

    def _switch(self, way: int) -> None:
        self._build()
        self._fill()
        if way != PLACE and self.fields:
            self.fields[0].setFocus(Qt.FocusReason.TabFocusReason)

    def _build(self) -> None:
        arrangement, way = self.document.arrangement, self.ways.current
        normals = arrangement.normals
        spaces = 0 if normals is None else normals.shape[1]
        count = {HEIGHTS: arrangement.size, POINT: spaces, PLACE: 0}[way]
        self.places.setVisible(way == PLACE)
        if self._shape == (way, count):
            return
        self._shape = (way, count)
        while self._grid.count():
            item = self._grid.takeAt(0)
            if item is not None and item.widget() is not None:
                item.widget().hide()
                item.widget().deleteLater()
        self.fields = []
        in_a_row = 3 if count in (1, 2, 3, 5, 6) else IN_A_ROW
        for k in range(count):
            field = NumberField()
            field.textEdited.connect(self._typed)
            field.entered.connect(self._begin)
            self.fields.append(field)
            cell = QWidget()
            row = QHBoxLayout(cell)
            row.setContentsMargins(0, 0, 0, 0)
            row.setSpacing(3)
            if way == HEIGHTS:
                letter = arrangement.letters[k]
                row.addWidget(LetterDisc(k, letter, 22))
                field.setAccessibleName(f"height above mirror {letter}")
            else:
                name = AXES[k] if count <= len(AXES) else f"x{k + 1}"
                row.addWidget(label(name, "muted"))
                field.setAccessibleName(f"coordinate {name}")
            row.addWidget(field, 1)
            self._grid.addWidget(cell, k // in_a_row, k % in_a_row)

    def _fill(self) -> None:
        document, seed, way = self.document, self.document.seed, self.ways.current
        usable = document.finding.group is not None
        for field in self.fields:
            field.setEnabled(usable)
        self.places.setEnabled(usable)
        self.error.hide()
        if not usable:
            self.note.setText("A seed has images to list once the reflections close.")
            self.note.show()
            return
        values = self._values(way)
        if values is not None:
            for field, value in zip(self.fields, values, strict=False):
                field.show_number(float(value))
        self._fill_places(seed)
        self._say_where()

    def _values(self, way: int) -> tuple[float, ...] | None:
        document, seed = self.document, self.document.seed
        if way == HEIGHTS and seed.heights is not None:
            return seed.heights
        if way == POINT and seed.point is not None:
            return seed.point
        normals = document.arrangement.normals
        if normals is None or way == PLACE:
            return None
        try:
            point = document.arrangement.seed(seed.heights, seed.point, seed.place)
        except OrbitError:
            return None
        return tuple(point if way == POINT else normals @ point)

    def _fill_places(self, seed: Seed) -> None:
        group = self.document.finding.group
        if group is None:
            return
        names = place_names(group)
        shown = [self.places.itemText(i) for i in range(self.places.count())]
        with QSignalBlocker(self.places):
            if shown[: len(names)] != list(names):
                self.places.clear()
                self.places.addItems(names)
            self.places.setCurrentText(seed.place if seed.place in names else "")
            if seed.place is None:
                self.places.setCurrentIndex(-1)

    def _say_where(self) -> None:
        orbit, group = self.document.orbit, self.document.finding.group
        if orbit is None or group is None:
            self.note.setText(self.document.orbit_note)
        else:
            text = f"The seed is {where(tuple(group.letters[i] for i in orbit.walls), group.rank)}"
            if orbit.snapped:
                text += f"; {orbit.snapped}"
            if orbit.folded:
                text += f"; folded into it by {orbit.folded} reflection{'s' if orbit.folded > 1 else ''}"
            self.note.setText(text + ".")
        self.note.setVisible(bool(self.note.text()))

    def _begin(self) -> None:
        self._gesture = self.document.new_gesture("seed")

    def _typed(self) -> None:
        values = [number(field.text()) for field in self.fields]
        for field, value in zip(self.fields, values, strict=True):
            set_wrong(field, value is None)
        wrong = [field.text() for field, value in zip(self.fields, values, strict=True) if value is None]
        if wrong:
            self._say_error(f'"{wrong[0]}": not a number; write one such as 1 or 0.25')
            return
        typed = tuple(value for value in values if value is not None)
        if not any(typed):
            self._say_error("the seed would stand in the corner of all mirrors; give one value other than 0")
            return
        rotations = self.document.seed.rotations
        if self.ways.current == HEIGHTS:
            seed = Seed(heights=typed, place=None, rotations=rotations)
        else:
            seed = Seed(point=typed, place=None, rotations=rotations)
        try:
            self.document.arrangement.seed(seed.heights, seed.point, seed.place)
        except OrbitError as error:
            self._say_error(as_sentence(str(error)))
            return
        self.error.hide()
        self.document.set_seed(seed, "seed", self._gesture)

    def _say_error(self, message: str) -> None:
        self.error.setText(message)
        self.error.show()

    def _place(self, index: int) -> None:
        name = self.places.itemText(index)
        self.document.set_seed(Seed(place=name, rotations=self.document.seed.rotations), f"seed at {name}")
