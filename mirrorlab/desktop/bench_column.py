"""The column at the right: one bench of several, each loaded when it is first wanted."""

from __future__ import annotations

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QFrame, QStackedWidget, QVBoxLayout, QWidget

from mirrorlab.desktop.bench import Bench, there
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Segments, rule
from mirrorlab.desktop.theming import theming

FAIR_PART = 0.195
MOST_WIDE = 400


class BenchColumn(QFrame):
    """Tabs over the benches.

    Signals
    -------
    shown(object)
        The `Bench` that is in sight now.
    loaded(object)
        A `Bench` was built.
    """

    shown = Signal(object)
    loaded = Signal(object)

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("bench")
        self.setProperty("kind", "panel")
        self.fit(0)
        self.document = document
        self.slots = there()
        self._benches: dict[str, Bench] = {}
        self.tabs = Segments([slot.title for slot in self.slots], "tab", [slot.about for slot in self.slots])
        self.stack = QStackedWidget()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.tabs)
        column.addWidget(rule())
        column.addWidget(self.stack, 1)
        self.tabs.chosen.connect(self.show_index)

    def fit(self, window_width: int) -> None:
        """Take a fair part of a wide window."""
        least = theming().theme.spacing.bench_width
        self.setFixedWidth(min(MOST_WIDE, max(least, round(window_width * FAIR_PART))))

    def bench(self, title: str) -> Bench:
        """The bench of a title, built on first use."""
        if title not in self._benches:
            slot = next(slot for slot in self.slots if slot.title == title)
            made = slot.build(self.document)
            self._benches[title] = made
            self.stack.addWidget(made)
            self.loaded.emit(made)
        return self._benches[title]

    @property
    def current(self) -> Bench:
        """The bench in sight."""
        return self.bench(self.slots[self.tabs.current].title)

    def show_index(self, index: int) -> None:
        """Bring a bench into sight."""
        self.tabs.choose(index)
        made = self.bench(self.slots[index].title)
        self.stack.setCurrentWidget(made)
        self.shown.emit(made)
