"""A cell and its planes: typed or read from a CIF file, and taken as mirrors."""

from __future__ import annotations

import re
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QSignalBlocker
from PySide6.QtWidgets import QComboBox, QDoubleSpinBox, QGridLayout, QHBoxLayout, QWidget

from mirrorlab.crystal.indices import parse_indices
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.desktop.bench_parts import FactRows, LineField
from mirrorlab.desktop.crystal.crystal_parts import TypedList
from mirrorlab.desktop.crystal.crystal_state import CONSTANTS, EMPTY
from mirrorlab.desktop.crystal.section import Section
from mirrorlab.desktop.crystal.workings import typed_cell
from mirrorlab.desktop.document import MOST_MIRRORS, Document
from mirrorlab.desktop.parts import Segments, button, inset, label
from mirrorlab.desktop.printed import as_sentence
from mirrorlab.desktop.rows import Column
from mirrorlab.desktop.stylesheet import set_wrong
from mirrorlab.drawing.model import Key

if TYPE_CHECKING:
    from mirrorlab.crystal.cell import Cell
    from mirrorlab.crystal.lattice_mirrors import LatticeSymmetry
    from mirrorlab.crystal.planes import Planes
    from mirrorlab.mirrors import Arrangement

PLANES, ANGLES, MIRRORS = range(3)
CENTRINGS = ("P", "A", "B", "C", "I", "F", "R")
MOST_PLANES = 15
LARGEST_OBLIQUITY = 10.0


class CellSection(Section):
    """The cell and its planes."""

    name = "Cell"
    about = "Cell constants or a CIF file, lattice planes, and which of them are mirrors"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.heading = label("Cell", "heading")
        self.open = button(
            "Open CIF", "", "Take cell and symmetry from a CIF file; dropping it on the window does too"
        )
        self.fields = [LineField() for _ in CONSTANTS]
        self.centring = QComboBox()
        self.centring.addItems(CENTRINGS)
        self.centring.setAccessibleName("centring")
        self.clear = button("Clear", "tight", "Type another cell")
        self.error = label("", "wrong", wrap=True)
        self.facts = FactRows()
        self.tolerance = inset(QDoubleSpinBox())
        self.tolerance.setRange(0, LARGEST_OBLIQUITY)
        self.tolerance.setSingleStep(0.5)
        self.tolerance.setDecimals(2)
        self.tolerance.setSuffix("°")
        self.tolerance.setKeyboardTracking(False)
        self.tolerance.setAccessibleName("largest obliquity of a lattice mirror")
        self.planes = TypedList("plane", "1,1,0", MOST_PLANES)
        self.use = button("Use as mirrors", "tight", "Put these planes into the triangle as mirrors")
        self.use_measured = button(
            "With uncertainties",
            "tight",
            "Put their angles into the triangle with the uncertainty of the cell",
        )
        self.lattice = button("Lattice mirrors", "tight", "Put the mirrors of the lattice into the triangle")
        self.use_error = label("", "wrong", wrap=True)
        self.rows = Segments(
            ("Planes", "Angles", "Mirrors"),
            hints=("Normal rows of the planes", "Angles between the planes", "All mirrors of the lattice"),
        )
        self._lay_out()
        self._connect()

    def _lay_out(self) -> None:
        head = QHBoxLayout()
        head.addWidget(self.heading, 1)
        head.addWidget(self.open)
        self.column.addLayout(head)
        grid = QGridLayout()
        grid.setHorizontalSpacing(4)
        grid.setVerticalSpacing(4)
        for k, (name, field) in enumerate(zip(CONSTANTS, self.fields, strict=True)):
            field.setAccessibleName(f"{name} of the cell")
            grid.addWidget(label(name, "muted"), k // 3, 2 * (k % 3))
            grid.addWidget(field, k // 3, 2 * (k % 3) + 1)
            grid.setColumnStretch(2 * (k % 3) + 1, 1)
        self.column.addLayout(grid)
        row = QHBoxLayout()
        row.setSpacing(8)
        row.addWidget(label("Centring", "muted"))
        row.addWidget(self.centring)
        row.addStretch(1)
        row.addWidget(self.clear)
        self.column.addLayout(row)
        self.column.addWidget(self.error)
        self.column.addWidget(self.facts)
        row = QHBoxLayout()
        row.setSpacing(8)
        row.addWidget(label("Lattice mirrors within", "muted"))
        row.addWidget(self.tolerance, 1)
        self.column.addLayout(row)
        self.column.addSpacing(4)
        self.column.addWidget(label("Planes", "heading"))
        self.column.addWidget(self.planes)
        row = QHBoxLayout()
        row.setSpacing(4)
        for part in (self.use, self.use_measured, self.lattice):
            row.addWidget(part, 1)
        self.column.addLayout(row)
        self.column.addWidget(self.use_error)
        self.column.addWidget(label("Rows of the table", "muted"))
        self.column.addWidget(self.rows)

    def _connect(self) -> None:
        self.open.clicked.connect(self.file_wanted)
        for field in self.fields:
            field.textEdited.connect(self._typed_cell)
            field.entered.connect(lambda: self.begin("cell"))
        self.centring.activated.connect(lambda k: self.change("centring", centring=CENTRINGS[k]))
        self.clear.clicked.connect(
            lambda: self.change(
                "clear cell", constants=EMPTY.constants, centring="P", cell_name="", planes=(), in_cell=False
            )
        )
        self.tolerance.valueChanged.connect(
            lambda v: self.change("tolerance of lattice mirrors", tolerance=v)
        )
        self.planes.typed.connect(lambda texts: self.change("planes", self.gesture, planes=texts))
        self.planes.entered.connect(lambda: self.begin("planes"))
        self.use.clicked.connect(lambda: self._use(lambda planes: planes.arrangement))
        self.use_measured.clicked.connect(lambda: self._use(lambda planes: planes.measured_arrangement))
        self.lattice.clicked.connect(self._use_lattice)
        self.rows.chosen.connect(lambda _: self._show_rows())

    # -- showing -----------------------------------------------------------------------------------

    def refresh(self) -> None:
        state = self.state
        for field, text in zip(self.fields, state.constants, strict=True):
            if field.text() != text:
                field.setText(text)
                field.setCursorPosition(0)
        with QSignalBlocker(self.centring), QSignalBlocker(self.tolerance):
            self.centring.setCurrentText(state.centring)
            self.tolerance.setValue(state.tolerance)
        self.heading.setText(state.cell_name or "Cell")
        self.clear.setEnabled(state.has_cell or bool(state.planes))
        cell, problem = self._cell()
        self._say_cell(problem)
        self.planes.show_texts(state.planes)
        self.planes.setEnabled(cell is not None)
        planes, answers, wrong = (None, [], "") if cell is None else read_planes(cell, state.planes)
        self.planes.show_answers(answers)
        self.use.setEnabled(planes is not None and len(planes.planes) > 1)
        measured = planes is not None and planes.measured_arrangement is not None
        self.use_measured.setVisible(measured)
        self.lattice.setVisible(not measured)
        self.lattice.setEnabled(cell is not None and bool(symmetry(cell, state.tolerance).within.mirrors))
        self._say_use(wrong)
        self.facts.show_facts({} if cell is None else cell_facts(cell, state.tolerance))
        self._show_rows()

    def _cell(self) -> tuple[Cell | None, str]:
        try:
            return typed_cell(self.state.constants, self.state.centring), ""
        except CrystalError as error:
            return None, as_sentence(str(error))

    def _say_cell(self, problem: str) -> None:
        texts = self.state.constants
        missing = [name for name, text in zip(CONSTANTS, texts, strict=True) if not text.strip()]
        unfinished = self.state.has_cell and missing
        if unfinished:
            problem = ""
        named = problem.partition(":")[0]
        for name, field in zip(CONSTANTS, self.fields, strict=True):
            set_wrong(field, bool(problem) and named in (name, f"{name} = {field.text()}"))
        if unfinished:
            problem = f"Still to type: {', '.join(missing)}."
        self.error.setProperty("kind", "small" if unfinished else "wrong")
        self.error.style().unpolish(self.error)
        self.error.style().polish(self.error)
        self.error.setText(problem)
        self.error.setVisible(bool(problem))

    def _say_use(self, problem: str) -> None:
        self.use_error.setText(problem)
        self.use_error.setVisible(bool(problem))

    def _show_rows(self) -> None:
        cell, problem = self._cell()
        which = self.rows.current
        if cell is None:
            self.model.set_columns(())
            self.title, self.note = "No cell", problem or "Type six constants, or open a CIF file."
        elif which == MIRRORS:
            found = symmetry(cell, self.state.tolerance)
            self.model.set_columns(mirror_columns(found))
            count = len(found.mirrors)
            self.title = f"{count} lattice mirror{'s' if count != 1 else ''}"
            self.note = f"within {self.state.tolerance:g}° of obliquity"
        else:
            planes, _, wrong = read_planes(cell, self.state.planes)
            if planes is None:
                self.model.set_columns(())
                self.title, self.note = "No planes", wrong or "Type lattice planes, such as 1,1,0."
            elif which == PLANES:
                keys: list[Key] = [("plane", k) for k in range(len(planes.planes))]
                self.model.set_columns(plane_columns(planes), keys)
                self.title = f"{len(planes.planes)} plane{'s' if len(planes.planes) != 1 else ''}"
                self.note = "with their normal rows; indices in the axes of the cell"
            else:
                self.model.set_columns(angle_columns(planes))
                self.title = f"{len(planes.angles)} angle{'s' if len(planes.angles) != 1 else ''}"
                self.note = "in degrees"
        self.rows_changed.emit()

    # -- doing -------------------------------------------------------------------------------------

    def _typed_cell(self) -> None:
        texts = tuple(field.text().strip() for field in self.fields)
        for text, before in zip(texts, self.state.constants, strict=True):
            parts = re.split(r"[;,\s]+", text)
            if len(parts) == len(CONSTANTS) and len(text) > len(before) + 1:
                texts = tuple(parts)  # a whole cell was pasted into one field
        self.change("cell", self.gesture, constants=texts, cell_name="")

    def _use(self, which) -> None:  # type: ignore[no-untyped-def]
        cell, _ = self._cell()
        if cell is None:
            return
        planes, _, _ = read_planes(cell, self.state.planes)
        if planes is None:
            return
        try:
            made: Arrangement | None = which(planes)
        except ValueError as error:
            self._say_use(as_sentence(str(error)))
            return
        self._put(made, f"Planes of {self.state.cell_name or 'the cell'}")

    def _use_lattice(self) -> None:
        from mirrorlab.mirrors import Arrangement

        cell, _ = self._cell()
        found = None if cell is None else symmetry(cell, self.state.tolerance).within.arrangement
        if found is None:
            return
        group = found.finding().group
        if (
            group is not None and len(group.simple) > 1
        ):  # walls of one chamber: the triangle holds few mirrors
            found = Arrangement.from_normals(group.simple, self.document.settings.reading)
        self._put(found, f"Lattice mirrors of {self.state.cell_name or 'the cell'}")

    def _put(self, made: Arrangement | None, name: str) -> None:
        if made is None:
            return
        if not 2 <= made.size <= MOST_MIRRORS:
            self._say_use(
                f"{made.size} mirror{'s' if made.size != 1 else ''}: the triangle holds 2 to {MOST_MIRRORS}"
            )
            return
        self.document.set_arrangement(made, "planes as mirrors", name=name)


@lru_cache(maxsize=16)
def symmetry(cell: Cell, tolerance: float) -> LatticeSymmetry:
    """Lattice mirrors of a cell, remembered."""
    from mirrorlab.crystal.lattice_mirrors import lattice_symmetry

    return lattice_symmetry(cell, tolerance)


@lru_cache(maxsize=16)
def read_planes(cell: Cell, texts: tuple[str, ...]) -> tuple[Planes | None, list[tuple[str, bool]], str]:
    """The planes that can be read, what is said of each text, and what keeps them from being taken together."""
    from mirrorlab.crystal.planes import planes_of

    whole: list[tuple[float, float, float]] = []
    answers: list[tuple[str, bool]] = []
    for text in texts:
        try:
            indices = parse_indices(text, cell.hexagonal)
            one = planes_of(cell, [indices]).planes[0]
        except CrystalError as error:
            answers.append((as_sentence(str(error)), True))
            continue
        whole.append(indices)
        row = one.row
        kind = "mirror" if one.mirror else "near mirror" if one.near_mirror else "no mirror"
        off = "" if row.exact else f", {row.obliquity_text}"
        answers.append((f"{kind}: {row.text}{off}, index {row.twin_index}", False))
    if not whole:
        return None, answers, ""
    try:
        return planes_of(cell, whole), answers, ""
    except CrystalError as error:
        return None, answers, as_sentence(str(error))


def cell_facts(cell: Cell, tolerance: float) -> dict[str, str]:
    """Facts of a cell by name."""
    from mirrorlab.crystal.measured import write_measured
    from mirrorlab.crystal.symbols import typographic

    found = symmetry(cell, tolerance)
    exact, within = found.exact, found.within
    facts = {
        "Volume": write_measured(cell.volume, cell.uncertainty(lambda other: other.volume), 4),
        "Lattice": f"{typographic(exact.holohedry)} ({exact.conventional.bravais}) exactly",
    }
    if within is not exact:
        facts["Nearly"] = (
            f"{typographic(within.holohedry)} ({within.conventional.bravais}), mirrors within {within.obliquity:.3g}°"
        )
    return facts


def plane_columns(planes: Planes) -> list[Column]:
    """The table of planes."""
    rows = [one.row for one in planes.planes]
    kinds = ["yes" if one.mirror else "nearly" if one.near_mirror else "no" for one in planes.planes]
    return [
        Column("plane", [one.label for one in planes.planes], text=True),
        Column("mirror", kinds, hint="whether the reflection maps the lattice onto itself", text=True),
        Column("normal row", [row.text for row in rows], text=True),
        Column(
            "obliquity",
            [row.obliquity_text for row in rows],
            hint="between the row and the normal",
            text=True,
        ),
        Column("twin index", np.array([row.twin_index for row in rows])),
        Column(
            "d",
            [one.spacing.text for one in planes.planes],
            hint="spacing, in the unit of the cell",
            text=True,
        ),
    ]


def angle_columns(planes: Planes) -> list[Column]:
    """The table of angles between planes."""
    return [
        Column("plane", [one.names[0] for one in planes.angles], text=True),
        Column("with", [one.names[1] for one in planes.angles], text=True),
        Column(
            "normals °", [one.normals.text for one in planes.angles], hint="between the normals", text=True
        ),
        Column(
            "dihedral °",
            [one.dihedral.text for one in planes.angles],
            hint="of the region inside both",
            text=True,
        ),
    ]


def mirror_columns(found: LatticeSymmetry) -> list[Column]:
    """The table of lattice mirrors."""
    rows = [one.row for one in found.mirrors]
    members = {one.indices for one in found.exact.mirrors}
    within = {one.indices for one in found.within.mirrors}
    kinds = [
        "exact" if one.indices in members else "nearly" if one.indices in within else "alone"
        for one in found.mirrors
    ]
    return [
        Column("plane", [one.label for one in found.mirrors], text=True),
        Column("axis", [row.text for row in rows], hint="the twofold axis of the lattice", text=True),
        Column("obliquity", [row.obliquity_text for row in rows], text=True),
        Column(
            "symmetry", kinds, hint="exact, of the symmetry within the tolerance, or of neither", text=True
        ),
    ]
