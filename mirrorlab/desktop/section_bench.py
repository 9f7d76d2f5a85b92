"""A bench of sections: chips to choose one, the section in sight, and its rows in the table along the bottom."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from PySide6.QtWidgets import QVBoxLayout, QWidget

from mirrorlab.desktop.bench import Bench
from mirrorlab.desktop.bench_parts import Chips
from mirrorlab.desktop.bench_section import BenchSection
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.rows import RowsModel


class SectionBench(Bench):
    """The base of such a bench.

    Parameters
    ----------
    sections : sequence of BenchSection
        In the order of their chips.
    first : str
        Name of the one that is in sight at first.

    Attributes
    ----------
    sections : dict of str to BenchSection
    chips : Chips
    column : QVBoxLayout
        Chips and sections; what stands below all sections is added to it.
    """

    def __init__(
        self,
        document: Document,
        sections: Sequence[BenchSection],
        first: str,
        parent: QWidget | None = None,
    ) -> None:
        super().__init__(document, parent)
        self.sections = {section.name: section for section in sections}
        self.chips = Chips([one.name for one in sections], [one.about for one in sections])
        self._current = self.sections[first]
        self.column = QVBoxLayout(self.body)
        self.column.setContentsMargins(14, 12, 14, 12)
        self.column.setSpacing(8)
        self.column.addWidget(self.chips)
        self.column.addSpacing(2)
        for one in sections:
            one.setVisible(one is self._current)
            one.rows_changed.connect(lambda s=one: self._rows_of(s))
            one.picture_wanted.connect(self.picture_wanted)
            one.says.connect(self.says)
            one.file_wanted.connect(self.file_wanted)
            self.column.addWidget(one)
        self.chips.choose(list(self.sections).index(first))
        self.chips.chosen.connect(self.show_section)
        for signal in (document.arrangement_changed, document.seed_changed, document.settings_changed):
            signal.connect(self.watch)

    @property
    def section(self) -> BenchSection:
        """The section in sight."""
        return self._current

    def show_section(self, index: int) -> None:
        """Bring a section into sight."""
        self.chips.choose(index)
        self._current.hide()
        self._current = list(self.sections.values())[index]
        self._current.show()
        self.refresh()

    def show_named(self, name: str) -> None:
        """Bring the section of a name into sight."""
        self.show_section(list(self.sections).index(name))

    def refresh(self) -> None:
        self.section.refresh()
        self.rows_changed.emit()

    def _rows_of(self, section: BenchSection) -> None:
        if section is self.section and self.isVisible():
            self.rows_changed.emit()

    def table_model(self) -> RowsModel:
        return self.section.model

    def table_title(self) -> str:
        return self.section.title

    def table_note(self) -> str:
        return self.section.note

    def save_rows(self, path: Path) -> None:
        self.section.save_rows(path)
