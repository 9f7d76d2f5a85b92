"""The crystal bench: sections by chips, the stereogram's settings below, one table for the section in sight."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

from PySide6.QtCore import QSignalBlocker, Signal
from PySide6.QtWidgets import QCheckBox, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop.bench import Bench, PictureMaker
from mirrorlab.desktop.bench_parts import Chips
from mirrorlab.desktop.crystal import crystal_pictures, libraries
from mirrorlab.desktop.crystal.cell_section import CellSection
from mirrorlab.desktop.crystal.compare_section import CompareSection
from mirrorlab.desktop.crystal.crystal_files import take_cif, take_list
from mirrorlab.desktop.crystal.crystal_state import NETS, crystal_state
from mirrorlab.desktop.crystal.fit_section import FitSection
from mirrorlab.desktop.crystal.forms_section import FormsSection
from mirrorlab.desktop.crystal.group_section import GroupSection
from mirrorlab.desktop.crystal.positions_section import PositionsSection
from mirrorlab.desktop.crystal.section import Section
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Segments, label, rule
from mirrorlab.desktop.rows import RowsModel


class CrystalBench(Bench):
    """Where a crystallographer works.

    Attributes
    ----------
    sections : dict of str to Section
    chips : Chips
    """

    title = "Crystal"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        made: tuple[Section, ...] = (
            GroupSection(document),
            PositionsSection(document),
            FormsSection(document),
            CellSection(document),
            FitSection(document),
            CompareSection(document),
        )
        self.sections: dict[str, Section] = {section.name: section for section in made}
        self.chips = Chips([one.name for one in made], [one.about for one in made])
        self._current: Section = made[0]
        for one in made:
            one.setVisible(one is made[0])
            one.rows_changed.connect(lambda s=one: self._rows_of(s))
            one.picture_wanted.connect(self.picture_wanted)
            one.says.connect(self.says)
            one.file_wanted.connect(self.file_wanted)
        self.net = StereogramSettings(document)
        self.net.picture_wanted.connect(self.picture_wanted)
        column = QVBoxLayout(self.body)
        column.setContentsMargins(14, 12, 14, 12)
        column.setSpacing(8)
        column.addWidget(self.chips)
        column.addSpacing(2)
        for one in made:
            column.addWidget(one)
        column.addSpacing(4)
        column.addWidget(self.net)
        column.addStretch(1)
        self.chips.chosen.connect(self.show_section)
        for signal in (document.arrangement_changed, document.seed_changed, document.crystal_changed):
            signal.connect(self.watch)
        libraries.load(document, lambda error: self.says.emit(f"Forms cannot be made: {error}"))

    @property
    def section(self) -> Section:
        """The section in sight."""
        return self._current

    def show_section(self, index: int) -> None:
        """Bring a section into sight."""
        self.chips.choose(index)
        self._current.hide()
        self._current = list(self.sections.values())[index]
        self._current.show()
        self.net.setVisible(self.section.name in ("Group", "Positions", "Forms"))
        self.section.refresh()
        self.rows_changed.emit()

    def show_named(self, name: str) -> None:
        """Bring the section of a name into sight."""
        self.show_section(list(self.sections).index(name))

    def refresh(self) -> None:
        self.section.refresh()
        self.net.refresh()
        self.rows_changed.emit()

    def _rows_of(self, section: Section) -> None:
        if section is self.section and self.isVisible():
            self.rows_changed.emit()

    def open_file(self, path: Path) -> str:
        if path.suffix.lower() == ".csv":
            from mirrorlab.crystal.point_lists import read_points

            said = take_list(self.document, read_points(path), path)
            self.show_named("Compare")
            return said
        from mirrorlab.crystal.cif import read_cif

        said = take_cif(self.document, read_cif(path))
        self.show_named("Cell")
        return said

    def table_model(self) -> RowsModel:
        return self.section.model

    def table_title(self) -> str:
        return self.section.title

    def table_note(self) -> str:
        return self.section.note

    def save_rows(self, path: Path) -> None:
        self.section.save_rows(path)

    def pictures(self) -> dict[str, PictureMaker]:
        return {"Stereogram": crystal_pictures.stereogram, "Form": crystal_pictures.solid}


class StereogramSettings(QWidget):
    """Projection, net, and what the stereogram shows.

    Signals
    -------
    picture_wanted(str)
    """

    picture_wanted = Signal(str)

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.nets = Segments(
            ("Wulff", "Schmidt"),
            hints=("Equal angles: great circles stay circles", "Equal areas: densities stay true"),
        )
        self.underlay = QCheckBox("Net")
        self.underlay.setToolTip("The net under the stereogram, every ten degrees")
        self.shown = Segments(
            ("Images", "Poles"), hints=("The images of the seed", "The poles of the typed forms")
        )
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        column.addWidget(rule())
        column.addWidget(label("Stereogram", "heading"))
        row = QHBoxLayout()
        row.setSpacing(8)
        row.addWidget(self.nets, 1)
        row.addWidget(self.underlay)
        column.addLayout(row)
        column.addWidget(self.shown)
        self.nets.chosen.connect(lambda k: self._change("projection", net=NETS[k]))
        self.underlay.toggled.connect(lambda on: self._change("net", underlay=on))
        self.shown.chosen.connect(lambda k: self._change("stereogram", poles=bool(k)))
        self.refresh()

    def refresh(self) -> None:
        """Show the document's settings."""
        state = crystal_state(self.document)
        self.nets.choose(NETS.index(state.net))
        self.shown.choose(int(state.poles))
        with QSignalBlocker(self.underlay):
            self.underlay.setChecked(state.underlay)

    def _change(self, text: str, **fields: Any) -> None:
        after = replace(crystal_state(self.document), **fields)
        if after != crystal_state(self.document):
            self.document.set_crystal(after, text)
        self.picture_wanted.emit("Stereogram")
