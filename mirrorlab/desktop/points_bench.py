"""The bench of points: seed, images, stabiliser, export."""

from __future__ import annotations

import numpy as np
from PySide6.QtCore import Signal
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop import symbols
from mirrorlab.desktop.bench import Bench
from mirrorlab.desktop.chamber_map import ChamberMap
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Segments, button, label
from mirrorlab.desktop.rows import Column, RowsModel
from mirrorlab.desktop.seed_entry import SeedEntry
from mirrorlab.desktop.words import PARITIES
from mirrorlab.mirrors import Orbit

AXES = ("x", "y", "z")


class PointsBench(Bench):
    """Where the seed stands, how many images it has, and where they go.

    Signals
    -------
    export_wanted(str)
        "csv", "npy", "picture" or "mesh".
    """

    title = "Points"
    exports_rows_as = "csv"
    export_wanted = Signal(str)

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self._model = RowsModel(parent=self)
        self.seed = SeedEntry(document)
        self.group = Segments(
            ("Whole group", "Rotations"),
            hints=("Images under all reflections", "Images that no mirror inverts"),
        )
        self.facts = Facts()
        self.map = ChamberMap(document)
        self.map.says.connect(self.says)
        self.exports = {
            kind: button(text, hint=hint)
            for kind, text, hint in (
                (
                    "csv",
                    "CSV",
                    "Images as CSV, with a file beside it that states frame, seed, group and units",
                ),
                ("npy", "NumPy", "Coordinates as a NumPy array"),
                ("picture", "Picture", "The picture on the stage as PNG, SVG or PDF"),
                ("mesh", "Mesh", "The picture on the stage as a mesh: GLB, STL or OBJ"),
            )
        }
        self._lay_out()
        self.group.chosen.connect(self._choose_group)
        document.arrangement_changed.connect(self.watch)
        document.seed_changed.connect(self.watch)
        document.settings_changed.connect(self.watch)

    def _lay_out(self) -> None:
        column = QVBoxLayout(self.body)
        column.setContentsMargins(14, 12, 14, 12)
        column.setSpacing(8)
        column.addWidget(label("Seed", "heading"))
        column.addWidget(self.seed)
        column.addWidget(self.map)
        column.addSpacing(8)
        column.addWidget(label("Images", "heading"))
        column.addWidget(self.group)
        column.addWidget(self.facts)
        column.addSpacing(8)
        column.addWidget(label("Export", "heading"))
        row = QHBoxLayout()
        row.setSpacing(4)
        for kind, part in self.exports.items():
            part.setProperty("kind", "tight")
            part.clicked.connect(lambda _=False, k=kind: self.export_wanted.emit(k))
            row.addWidget(part, 1)
        column.addLayout(row)
        column.addStretch(1)

    def table_model(self) -> RowsModel:
        return self._model

    def table_title(self) -> str:
        orbit = self.document.orbit
        return "Images" if orbit is None else f"{len(orbit):,} image{'s' if len(orbit) != 1 else ''}"

    def table_note(self) -> str:
        orbit = self.document.orbit
        return self.document.orbit_note if orbit is None else orbit.frame

    def refresh(self) -> None:
        orbit = self.document.orbit
        self._model.set_columns(() if orbit is None else image_columns(orbit), "image")
        self.seed.refresh()
        self.map.refresh()
        self.group.choose(1 if self.document.seed.rotations else 0)
        self.facts.show_orbit(self.document)
        for part in self.exports.values():
            part.setEnabled(True)
        for kind in ("csv", "npy"):
            self.exports[kind].setEnabled(orbit is not None)

    def _choose_group(self, which: int) -> None:
        from dataclasses import replace

        seed = replace(self.document.seed, rotations=which == 1)
        if seed != self.document.seed:
            self.document.set_seed(seed, "rotations only" if which else "whole group")


def image_columns(orbit: Orbit) -> list[Column]:
    """The table of an orbit."""
    count, dimension = orbit.points.shape
    names = AXES[:dimension] if dimension <= len(AXES) else [f"x{k + 1}" for k in range(dimension)]
    columns = [Column("image", np.arange(1, count + 1), hint="1 is the seed")]
    columns += [Column(name, orbit.points[:, k], _coordinate) for k, name in enumerate(names)]
    columns += [
        Column(
            "parity", orbit.parity, lambda p: PARITIES[int(p)], "odd images are mirror-inverted", text=True
        ),
        Column("depth", orbit.depth, hint="fewest reflections that lead to it"),
        Column("word", orbit.words, hint="the mirrors on the way, the last one first", text=True),
    ]
    return columns


def _coordinate(value: float) -> str:
    text = f"{0.0 if abs(value) < 5e-10 else value:.6f}"
    return text.replace("-", "−")


class Facts(QWidget):
    """How many images there are and what leaves the seed in place, as a small table."""

    ROWS = ("Images", "Order of the group", "Stabiliser", "Most reflections")

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(12)
        grid.setVerticalSpacing(3)
        grid.setColumnStretch(1, 1)
        self.values = {}
        for row, name in enumerate(self.ROWS):
            value = label("", "figures")
            grid.addWidget(label(name, "muted"), row, 0)
            grid.addWidget(value, row, 1)
            self.values[name] = value

    def show_orbit(self, document: Document) -> None:
        """Show the document's orbit."""
        orbit, group = document.orbit, document.finding.group
        texts = dict.fromkeys(self.ROWS, "–")
        if group is not None:
            order = group.rotation_order if document.seed.rotations else group.order
            texts["Order of the group"] = f"{order:,}"
        if orbit is not None:
            texts["Images"] = f"{len(orbit):,}"
            families = symbols.as_html(symbols.families(orbit.stabiliser.rstrip("+").split("x")))
            kind = ", rotations" if orbit.stabiliser.endswith("+") else ""
            trivial = orbit.stabiliser_order == 1
            texts["Stabiliser"] = "1" if trivial else f"{families}{kind}, order {orbit.stabiliser_order:,}"
            texts["Most reflections"] = str(int(orbit.depth.max()))
        for name, text in texts.items():
            self.values[name].setText(text)
