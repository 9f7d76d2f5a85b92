"""The mirrors at the left: their triangle, the reading of one pair, and the other ways in."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtCore import QCoreApplication, QEvent, QSignalBlocker, Qt
from PySide6.QtWidgets import (
    QComboBox,
    QDoubleSpinBox,
    QFormLayout,
    QFrame,
    QHBoxLayout,
    QScrollArea,
    QSpinBox,
    QVBoxLayout,
    QWidget,
)

from mirrorlab.angles import STYLES, AngleSettings
from mirrorlab.desktop.document import FEWEST_MIRRORS, MOST_MIRRORS, Document
from mirrorlab.desktop.parts import Elided, button, inset, label, rule
from mirrorlab.desktop.reading import PairReading
from mirrorlab.desktop.theming import theming
from mirrorlab.desktop.triangle import Triangle
from mirrorlab.desktop.ways_in import WaysIn

EXAMPLES = ("60.5°", "2π/5", "60°30'00\"")
"""What each notation looks like."""

FAIR_PART, MOST_WIDE = 0.175, 360
"""Part of a wide window that the panel takes, and the most pixels."""

MARGIN = 14
SCROLL_BAR = 10
"""Kept free at the right, so that nothing moves or is cut off when the panel must scroll."""


class MirrorsPanel(QFrame):
    """The left side of the window."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("mirrors")
        self.setProperty("kind", "panel")
        self.document = document
        self.name = Elided("", "title")
        self.triangle = Triangle(document)
        self.reading = PairReading(document, self.triangle)
        self.add = button("Add mirror", "tight", "One more mirror, at right angles to the others")
        self.remove = button("Remove", "tight", "Take away the picked mirror, or the last one")
        self.ways = WaysIn(document)
        self.settings = ReadingSettings(document)
        self.settings_button = button("", "line", "How angles are read and written")
        self.settings_button.setCheckable(True)
        self.settings_button.toggled.connect(self.settings.setVisible)
        self.settings.hide()
        self._lay_out()
        self.ways.grown.connect(self._reveal)
        self.add.clicked.connect(document.add_mirror)
        self.remove.clicked.connect(lambda: document.remove_mirror(self._to_remove()))
        for signal in (document.settled, document.selection_changed, document.name_changed):
            signal.connect(self.refresh)
        document.settings_changed.connect(self.refresh)
        self.refresh()

    def _lay_out(self) -> None:
        buttons = QHBoxLayout()
        buttons.setSpacing(4)
        buttons.addWidget(self.add, 1)
        buttons.addWidget(self.remove, 1)
        body = QWidget()
        column = QVBoxLayout(body)
        column.setContentsMargins(MARGIN, 10, MARGIN, 10)
        column.setSpacing(10)
        column.addWidget(self.name)
        column.addWidget(self.triangle)
        column.addLayout(buttons)
        column.addWidget(self.reading)
        column.addWidget(self.settings_button)
        column.addWidget(self.settings)
        column.addWidget(rule())
        column.addWidget(label("Other ways in", "small"))
        column.addWidget(self.ways)
        column.addStretch(1)
        self.area = area = QScrollArea()
        area.setWidgetResizable(True)
        area.setFrameShape(QFrame.Shape.NoFrame)
        area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        area.setWidget(body)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addWidget(area)

    def refresh(self) -> None:
        """Show the arrangement's name, and what can be added or removed."""
        size = self.document.arrangement.size
        given = self.document.arrangement.given_normals
        changed = ", changed" if self.document.altered and self.document.name else ""
        self.name.setText((self.document.name or "Mirrors") + changed)
        self.fit()
        self.add.setEnabled(size < MOST_MIRRORS and not given)
        self.remove.setEnabled(size > FEWEST_MIRRORS)
        self.remove.setText(f"Remove {self.document.arrangement.letters[self._to_remove()]}")
        self.settings_button.setText(settings_in_words(self.document))

    def fit(self) -> None:
        """Be as wide as the triangle needs, and take a fair part of a wide window."""
        inside = max(self.triangle.wanted_width(), self.ways.minimumSizeHint().width())
        width = max(theming().theme.spacing.triangle_width, inside + 2 * MARGIN + SCROLL_BAR)
        self.setFixedWidth(max(width, min(MOST_WIDE, round(self.window().width() * FAIR_PART))))

    def _reveal(self) -> None:
        """Scroll to the foot of the panel, where something was opened."""
        QCoreApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest.value)
        bar = self.area.verticalScrollBar()
        bar.setValue(bar.maximum())

    def _to_remove(self) -> int:
        key = self.document.selection
        size = self.document.arrangement.size
        return key[1] if key is not None and key[0] == "mirror" and key[1] < size else size - 1


def settings_in_words(document: Document) -> str:
    """The reading settings in one line."""
    reading = document.settings.reading
    return f"Read within {reading.sigmas:g} σ, up to π/{reading.max_denominator}"


class ReadingSettings(QWidget):
    """How angles are read and written; every change is a step that can be undone."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.denominator = inset(QSpinBox())
        self.denominator.setRange(2, 5000)
        self.denominator.setKeyboardTracking(False)
        self.denominator.setToolTip("A closing fraction kπ/m is looked for with m up to this")
        self.sigmas = inset(QDoubleSpinBox())
        self.sigmas.setRange(0.5, 10)
        self.sigmas.setSingleStep(0.5)
        self.sigmas.setDecimals(1)
        self.sigmas.setKeyboardTracking(False)
        self.sigmas.setToolTip("59.9(2) is searched for a closing fraction within so many times 0.2°")
        self.notation = QComboBox()
        self.notation.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.notation.setMinimumContentsLength(6)
        for value, text in zip(STYLES, EXAMPLES, strict=True):
            self.notation.addItem(text, value)
        form = QFormLayout(self)
        form.setContentsMargins(0, 0, 0, 0)
        form.setSpacing(6)
        form.addRow("Largest m in kπ/m", self.denominator)
        form.addRow("Band in σ", self.sigmas)
        form.addRow("Write as", self.notation)
        self.denominator.valueChanged.connect(self._change)
        self.sigmas.valueChanged.connect(self._change)
        self.notation.currentIndexChanged.connect(self._change)
        document.settings_changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Show the document's settings."""
        settings = self.document.settings
        with QSignalBlocker(self.denominator), QSignalBlocker(self.sigmas), QSignalBlocker(self.notation):
            self.denominator.setValue(settings.reading.max_denominator)
            self.sigmas.setValue(settings.reading.sigmas)
            self.notation.setCurrentIndex(self.notation.findData(settings.notation))

    def _change(self) -> None:
        reading = AngleSettings(max_denominator=self.denominator.value(), sigmas=self.sigmas.value())
        settings = replace(self.document.settings, reading=reading, notation=self.notation.currentData())
        if settings != self.document.settings:
            self.document.set_settings(settings)
