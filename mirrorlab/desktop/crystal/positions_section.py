"""General and special positions, and the images of the seed in the standard setting."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QSignalBlocker
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QWidget

from mirrorlab.crystal.symbols import typographic
from mirrorlab.desktop.bench_parts import FactRows
from mirrorlab.desktop.crystal.crystal_pictures import image_keys, seed_in_setting
from mirrorlab.desktop.crystal.section import Section
from mirrorlab.desktop.crystal.workings import Working, alignment, cell_basis
from mirrorlab.desktop.document import AT_ONCE, Document, Seed
from mirrorlab.desktop.parts import Segments, label
from mirrorlab.desktop.rows import Column
from mirrorlab.desktop.words import PARITIES
from mirrorlab.drawing.model import Key

if TYPE_CHECKING:
    from mirrorlab.crystal.positions import GroupOrbit, Position

Array = NDArray[np.float64]

POSITIONS, IMAGES = range(2)
UNIT, CELL = range(2)
GENERAL = (0.62, 0.31, 0.17)
"""Where free coordinates put the seed: unlike one another, so that no image falls on another by chance."""

MOST_TRIPLETS = 6


class PositionsSection(Section):
    """Where points can stand."""

    name = "Positions"
    about = "General and special positions, and the images of the seed in the standard setting"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.rows = Segments(
            ("Positions", "Images"),
            hints=("The table of general and special positions", "The images of the seed in these axes"),
        )
        self.facts = FactRows()
        self.places = QComboBox()
        self.places.setAccessibleName("put the seed on a position")
        self.places.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.axes = Segments(
            ("Unit axes", "Typed cell"),
            hints=("Fractions of axes of unit length", "Fractions of the cell typed under Cell"),
        )
        self.why = label("", "small", wrap=True)
        self.column.addWidget(label("Rows of the table", "muted"))
        self.column.addWidget(self.rows)
        self.column.addSpacing(4)
        self.column.addWidget(label("Seed", "heading"))
        self.column.addWidget(self.facts)
        row = QHBoxLayout()
        row.setSpacing(8)
        row.addWidget(label("Put it on", "muted"))
        row.addWidget(self.places, 1)
        self.column.addLayout(row)
        self.column.addSpacing(4)
        self.column.addWidget(label("Coordinates as fractions of", "muted"))
        self.column.addWidget(self.axes)
        self.column.addWidget(self.why)
        self.rows.chosen.connect(lambda _: self._show_rows())
        self.places.activated.connect(self._put)
        self.axes.chosen.connect(self._choose_axes)
        self._positions: tuple[Position, ...] = ()

    def refresh(self) -> None:
        from mirrorlab.crystal.positions import positions_of

        work, why = self.working()
        self._positions = () if work is None else positions_of(work.group)
        self.facts.show_facts(self._facts(work, why))
        self._fill_places(work)
        basis = None if work is None else cell_basis(work.group, self.state)
        self.axes.choose(CELL if self.state.in_cell and basis is not None else UNIT)
        self.axes.button(CELL).setEnabled(basis is not None)
        self.why.setText(self._why_no_cell(work, basis))
        self.why.setVisible(bool(self.why.text()))
        self._show_rows()

    def _why_no_cell(self, work: Working | None, basis: Array | None) -> str:
        if work is None or basis is not None:
            return ""
        if not self.state.has_cell:
            return "A cell is typed under Cell."
        return (
            f"The typed cell does not have the symmetry of {typographic(work.group.setting)} in these axes."
        )

    def _facts(self, work: Working | None, why: str) -> dict[str, str]:
        if work is None:
            return {"": why}
        orbit = self._orbit(work)
        if orbit is None:
            reason = self.document.orbit_note or "the mirrors on the sheet are not mirrors of this group"
            return {"Stands": reason}
        return {
            "Stands on": f"{orbit.position.triplets[0]}, {orbit.position.place}",
            "Multiplicity": f"{len(orbit.points)}",
            "Site symmetry": typographic(orbit.site_symmetry),
        }

    def _basis(self, work: Working) -> Array:
        basis = cell_basis(work.group, self.state) if self.state.in_cell else None
        return work.group.basis if basis is None else basis

    def _orbit(self, work: Working) -> GroupOrbit | None:
        from mirrorlab.crystal.positions import orbit_under

        seed = seed_in_setting(self.document, work)
        if seed is None:
            return None
        return orbit_under(work.group, np.linalg.inv(self._basis(work)) @ seed)

    def _fill_places(self, work: Working | None) -> None:
        names = [
            f"{row.multiplicity}  {typographic(row.site_symmetry)}  {row.triplets[0]}"
            for row in self._positions
        ]
        with QSignalBlocker(self.places):
            if names != [self.places.itemText(i) for i in range(self.places.count())]:
                self.places.clear()
                self.places.addItems(names)
            orbit = None if work is None else self._orbit(work)
            at = next((k for k, row in enumerate(self._positions) if orbit and row is orbit.position), -1)
            self.places.setCurrentIndex(at)
        self.places.setEnabled(work is not None and work.rotation is not None and bool(names))

    # -- rows --------------------------------------------------------------------------------------

    def _show_rows(self) -> None:
        work, why = self.working()
        if work is None:
            self.model.set_columns(())
            self.title, self.note = "No positions", why
        elif self.rows.current == POSITIONS:
            self.model.set_columns(position_columns(self._positions))
            self.title = f"{len(self._positions)} positions"
            self.note = f"of {typographic(work.group.setting)}, {work.group.axes}"
        else:
            self._show_images(work)
        self.rows_changed.emit()

    def _show_images(self, work: Working) -> None:
        orbit, found = self.document.orbit, self._orbit(work)
        axes = "the typed cell" if self._in_cell(work) else "unit axes"
        self.note = f"fractions of {axes}, {work.group.axes} of {typographic(work.group.setting)}"
        if orbit is None or found is None:
            self.model.set_columns(())
            self.title = "No images"
            self.note = self._facts(work, "").get("Stands", "")
            return
        aligned = alignment(self.document.finding)
        if work.own and aligned is not None and not self.document.seed.rotations:
            points = aligned.fractions(orbit.points, self._basis(work))
            columns = [Column("image", np.arange(1, len(points) + 1), hint="1 is the seed")]
            columns += fraction_columns(points)
            columns += [
                Column("parity", orbit.parity, lambda p: PARITIES[int(p)], text=True),
                Column("depth", orbit.depth, hint="fewest reflections that lead to it"),
                Column("word", orbit.words, hint="the mirrors on the way, the last one first", text=True),
            ]
            self.model.set_columns(columns, "image")
            self.title = f"{len(points):,} images"
            return
        named = image_keys(self.document, work) if len(orbit) <= AT_ONCE else {}
        keys: list[Key] = [named.get(k, ("equivalent", k)) for k in found.operations]
        self.model.set_columns(equivalent_columns(found, work), keys)
        self.title = f"{len(found.points)} equivalent points"

    def _in_cell(self, work: Working) -> bool:
        return self.state.in_cell and cell_basis(work.group, self.state) is not None

    def save_rows(self, path: Path) -> None:
        from mirrorlab.files.crystal_tables import write_fractions, write_group_orbit

        work, _ = self.working()
        orbit = None if work is None else self._orbit(work)
        if work is None or orbit is None or self.rows.current == POSITIONS:
            super().save_rows(path)
            return
        aligned = alignment(self.document.finding)
        basis = self._basis(work) if self._in_cell(work) else None
        if work.own and aligned is not None and self.document.orbit and not self.document.seed.rotations:
            write_fractions(path, self.document.orbit, aligned, basis)
        else:
            write_group_orbit(path, work.group, orbit, basis)

    # -- doing -------------------------------------------------------------------------------------

    def _choose_axes(self, which: int) -> None:
        self.change("axes of the fractions", in_cell=which == CELL)
        self.rows.choose(IMAGES)
        self._show_rows()

    def _put(self, row: int) -> None:
        work, _ = self.working()
        normals = self.document.arrangement.normals
        if work is None or work.rotation is None or normals is None:
            return
        position = self._positions[row]
        place = work.group.basis @ (position.images[0] @ np.array(GENERAL))
        point = (work.rotation.T @ place)[: normals.shape[1]]
        if not np.linalg.norm(point) > 1e-9:
            self.says.emit("The seed cannot stand where all mirrors meet: it would have no images.")
            self.refresh()
            return
        seed = Seed(point=tuple(map(float, point)), place=None)
        self.document.set_seed(
            replace(seed, rotations=self.document.seed.rotations), f"seed on {position.triplets[0]}"
        )


def position_columns(positions: tuple[Position, ...]) -> list[Column]:
    """The table of general and special positions."""

    def coordinates(row: Position) -> str:
        more = len(row.triplets) - MOST_TRIPLETS
        return "  ".join(row.triplets[:MOST_TRIPLETS]) + (f"  … {more} more" if more > 0 else "")

    return [
        Column("multiplicity", np.array([row.multiplicity for row in positions])),
        Column("site symmetry", [row.site_symmetry for row in positions], text=True),
        Column("order", np.array([row.site_order for row in positions]), hint="of the site symmetry"),
        Column("place", [row.place for row in positions], text=True),
        Column("coordinates", [coordinates(row) for row in positions], text=True),
    ]


def fraction_columns(points: Array) -> list[Column]:
    """Columns x, y, z with six decimals."""
    return [Column(name, points[:, k], _fraction) for k, name in enumerate("xyz")]


def _fraction(value: float) -> str:
    return f"{0.0 if abs(value) < 5e-10 else value:.6f}".replace("-", "−")


def equivalent_columns(orbit: GroupOrbit, work: Working) -> list[Column]:
    """The table of equivalent points under a working group that is not that of the mirrors."""
    ways = [work.group.operations[k] for k in orbit.operations]
    return [
        Column("point", np.arange(1, len(ways) + 1), hint="1 is the seed"),
        *fraction_columns(orbit.points),
        Column("operation", [one.text for one in ways], hint="that leads there", text=True),
        Column("image of x,y,z", [one.triplet for one in ways], text=True),
    ]
