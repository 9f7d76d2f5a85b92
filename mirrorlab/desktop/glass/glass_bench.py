"""The glass bench: sections by chips, one table for the section in sight, three pictures for the stage."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtWidgets import QVBoxLayout, QWidget

from mirrorlab.desktop.bench import Bench, PictureMaker
from mirrorlab.desktop.bench_parts import Chips
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass import glass_pictures
from mirrorlab.desktop.glass.assembly_section import AssemblySection
from mirrorlab.desktop.glass.choose_section import ChooseSection
from mirrorlab.desktop.glass.eye_view import EyeView
from mirrorlab.desktop.glass.glass_section import GlassSection
from mirrorlab.desktop.glass.images_section import ImagesSection
from mirrorlab.desktop.glass.panels_section import PanelsSection
from mirrorlab.desktop.glass.tolerance_section import ToleranceSection
from mirrorlab.desktop.glass.view_section import ViewSection
from mirrorlab.desktop.rows import RowsModel


class GlassBench(Bench):
    """Where a maker works.

    Attributes
    ----------
    sections : dict of str to GlassSection
    chips : Chips
    """

    title = "Glass"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        made: tuple[GlassSection, ...] = (
            ChooseSection(document),
            AssemblySection(document),
            ViewSection(document),
            ImagesSection(document),
            ToleranceSection(document),
            PanelsSection(document),
        )
        self.sections: dict[str, GlassSection] = {section.name: section for section in made}
        self.chips = Chips([one.name for one in made], [one.about for one in made])
        self._current: GlassSection = self.sections["Assembly"]
        column = QVBoxLayout(self.body)
        column.setContentsMargins(14, 12, 14, 12)
        column.setSpacing(8)
        column.addWidget(self.chips)
        column.addSpacing(2)
        for one in made:
            one.setVisible(one is self._current)
            one.rows_changed.connect(lambda s=one: self._rows_of(s))
            one.picture_wanted.connect(self.picture_wanted)
            one.says.connect(self.says)
            column.addWidget(one)
        column.addStretch(1)
        self.chips.choose(list(self.sections).index(self._current.name))
        self.chips.chosen.connect(self.show_section)
        for signal in (document.arrangement_changed, document.seed_changed, document.glass_changed):
            signal.connect(self.watch)

    @property
    def section(self) -> GlassSection:
        """The section in sight."""
        return self._current

    def show_section(self, index: int) -> None:
        """Bring a section into sight."""
        self.chips.choose(index)
        self._current.hide()
        self._current = list(self.sections.values())[index]
        self._current.show()
        self.section.refresh()
        self.rows_changed.emit()

    def show_named(self, name: str) -> None:
        """Bring the section of a name into sight."""
        self.show_section(list(self.sections).index(name))

    def refresh(self) -> None:
        self.section.refresh()
        self.rows_changed.emit()

    def _rows_of(self, section: GlassSection) -> None:
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

    def pictures(self) -> dict[str, PictureMaker]:
        return {
            "Eye's view": EyeView,
            "Assembly": glass_pictures.assembly,
            "Panels": glass_pictures.panels,
        }
