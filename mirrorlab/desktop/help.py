"""Keys and marks on one page, in a window of its own that may stay open."""

from __future__ import annotations

from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPaintEvent
from PySide6.QtWidgets import (
    QDialog,
    QGridLayout,
    QHBoxLayout,
    QScrollArea,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from mirrorlab.desktop.marks import (
    FINDING_TINTS,
    FINE,
    NO_FRACTION,
    NO_LATTICE,
    READING_TINTS,
    WRONG,
    paint_finding,
    paint_reading,
)
from mirrorlab.desktop.parts import label
from mirrorlab.desktop.theming import theming

KEYS = (
    ("Ctrl+K", "type angles: the first cell of the triangle"),
    ("Tab, Enter", "to the next cell"),
    ("Arrow keys", "to the cell beside, above or below"),
    ("Esc", "bring back the last text that could be read"),
    ("Ctrl+M, Ctrl+Shift+M", "add a mirror, remove one"),
    ("Ctrl+Z, Ctrl+Shift+Z", "undo, redo: everything, samples and files too"),
    ("Alt+1, 2, 3", "bench: points, crystal, glass"),
    ("Ctrl+2", "two pictures side by side"),
    ("Ctrl+E", "evidence, flags and suggestions"),
    ("Ctrl+T", "fold the table"),
    ("Ctrl+C, Ctrl+Shift+C", "copy rows of the table as text"),
    ("Ctrl+L", "light or dark"),
    ("Ctrl+O, Ctrl+S", "open, save"),
    ("Drag, wheel", "turn a picture or move the seed; come nearer"),
    ("Double click", "bring a picture back to where it started"),
    ("Arrows, +, −, Home", "the same, when a picture has the keyboard"),
)

ANGLES = (
    ("60, 59.9", "whole degrees are exact; a decimal is uncertain by half its last digit"),
    ("59.9(2), 59.9±0.2", "measured, with its standard uncertainty"),
    ("54°44'8\"", "degrees, minutes, seconds"),
    ("pi/3, 2pi/5", "fractions of π, exact"),
    ("1.0472rad", "radians"),
)

FINDINGS = (
    ("closed", "the reflections close, and the region between the mirrors is one chamber"),
    ("closed-subdivided", "they close, but generated mirrors cut that region up"),
    ("open", "mirrors meet in a point and never close"),
    ("tube", "mirrors share a direction instead of a point"),
    ("unbuildable", "no planes have these angles"),
)

READINGS = (
    (FINE, "fine: it closes, and a lattice can have it"),
    (NO_LATTICE, "it closes, but no lattice has it"),
    (NO_FRACTION, "no closing fraction within its band"),
    (WRONG, "cannot be read; the last good arrangement stays"),
)


class Mark(QWidget):
    """A mark of a finding or of an angle, for the list."""

    def __init__(self, name: str, finding: bool) -> None:
        super().__init__()
        self._name, self._finding = name, finding
        self.setFixedSize(26, 26)

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        tints = FINDING_TINTS if self._finding else READING_TINTS
        tint = QColor(getattr(theming().theme, tints[self._name]))
        inset = 1 if self._finding else 7
        box = QRectF(self.rect()).adjusted(inset, inset, -inset, -inset)
        (paint_finding if self._finding else paint_reading)(painter, box, self._name, tint)
        painter.end()


class Help(QDialog):
    """The page of keys and marks."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent, Qt.WindowType.Tool)
        self.setWindowTitle("Keys and marks")
        self.setModal(False)
        body = QWidget()
        left, right = QVBoxLayout(), QVBoxLayout()
        left.setSpacing(6)
        right.setSpacing(6)
        self._list(left, "Keys", KEYS)
        left.addStretch(1)
        self._list(right, "Ways to write an angle", ANGLES)
        self._marks(right, "Findings", FINDINGS, True)
        self._marks(right, "Marks of an angle", READINGS, False)
        right.addStretch(1)
        columns = QHBoxLayout(body)
        columns.setContentsMargins(20, 16, 20, 16)
        columns.setSpacing(32)
        columns.addLayout(left)
        columns.addLayout(right)
        area = QScrollArea()
        area.setWidgetResizable(True)
        area.setWidget(body)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addWidget(area)
        self.resize(920, 640)

    def open(self) -> None:
        """Show the page, in front."""
        self.show()
        self.raise_()

    @staticmethod
    def _grid(column: QVBoxLayout, heading: str) -> QGridLayout:
        title = label(heading, "title")
        title.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)
        column.addWidget(title)
        grid = QGridLayout()
        grid.setHorizontalSpacing(16)
        grid.setVerticalSpacing(4)
        grid.setColumnStretch(1, 1)
        column.addLayout(grid)
        column.addSpacing(10)
        return grid

    def _list(self, column: QVBoxLayout, heading: str, rows: tuple[tuple[str, str], ...]) -> None:
        grid = self._grid(column, heading)
        for k, (key, meaning) in enumerate(rows):
            grid.addWidget(label(key, "figures"), k, 0, Qt.AlignmentFlag.AlignTop)
            grid.addWidget(label(meaning, "", wrap=True), k, 1)

    def _marks(
        self, column: QVBoxLayout, heading: str, rows: tuple[tuple[str, str], ...], finding: bool
    ) -> None:
        grid = self._grid(column, heading)
        for k, (name, meaning) in enumerate(rows):
            grid.addWidget(Mark(name, finding), k, 0)
            text = f"{name}: {meaning}" if finding else meaning
            grid.addWidget(label(text, "", wrap=True), k, 1)
