"""The crystal bench: sections by chips, the stereogram's settings below, one table for the section in sight."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

from PySide6.QtCore import QSignalBlocker, Signal
from PySide6.QtWidgets import QCheckBox, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop.bench import PictureMaker
from mirrorlab.desktop.crystal import crystal_pictures, libraries
from mirrorlab.desktop.crystal.cell_section import CellSection
from mirrorlab.desktop.crystal.compare_section import CompareSection
from mirrorlab.desktop.crystal.crystal_files import take_cif, take_list
from mirrorlab.desktop.crystal.crystal_state import MARKS, NETS, crystal_state
from mirrorlab.desktop.crystal.fit_section import FitSection
from mirrorlab.desktop.crystal.forms_section import FormsSection
from mirrorlab.desktop.crystal.group_section import GroupSection
from mirrorlab.desktop.crystal.positions_section import PositionsSection
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Segments, label, rule
from mirrorlab.desktop.section_bench import SectionBench
from mirrorlab.drawing.model import Drawing

BELOW = ("Group", "Positions", "Forms", "Compare")
"""Sections that the stereogram shows; its settings stand below them."""


class CrystalBench(SectionBench):
    """Where a crystallographer works."""

    title = "Crystal"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        self.compare = CompareSection(document)
        sections = (
            GroupSection(document),
            PositionsSection(document),
            FormsSection(document),
            CellSection(document),
            FitSection(document),
            self.compare,
        )
        super().__init__(document, sections, "Group", parent)
        self.net = StereogramSettings(document)
        self.net.picture_wanted.connect(self.picture_wanted)
        self.column.addSpacing(4)
        self.column.addWidget(self.net)
        self.column.addStretch(1)
        document.crystal_changed.connect(self.watch)
        libraries.load(document, lambda error: self.says.emit(f"Forms cannot be made: {error}"))

    def refresh(self) -> None:
        self.net.setVisible(self.section.name in BELOW)
        self.net.refresh()
        if crystal_state(self.document).marks == "list" and self.section is not self.compare:
            self.compare.refresh()
        super().refresh()

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

    def pictures(self) -> dict[str, PictureMaker]:
        return {"Stereogram": self._stereogram, "Form": crystal_pictures.solid}

    def _stereogram(self, document: Document) -> Drawing:
        return crystal_pictures.stereogram(document, self.compare.answer)


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
            ("Images", "Poles", "List"),
            hints=(
                "The images of the seed",
                "The poles of the typed forms",
                "The points or poles of the list that is compared",
            ),
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
        self.shown.chosen.connect(lambda k: self._change("stereogram", marks=MARKS[k]))
        self.refresh()

    def refresh(self) -> None:
        """Show the document's settings."""
        state = crystal_state(self.document)
        self.nets.choose(NETS.index(state.net))
        self.shown.choose(MARKS.index(state.marks))
        with QSignalBlocker(self.underlay):
            self.underlay.setChecked(state.underlay)

    def _change(self, text: str, **fields: Any) -> None:
        after = replace(crystal_state(self.document), **fields)
        if after != crystal_state(self.document):
            self.document.set_crystal(after, text)
        self.picture_wanted.emit("Stereogram")
