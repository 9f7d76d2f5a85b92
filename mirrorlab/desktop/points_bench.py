"""The bench of points: seed, images, stabiliser, export."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from PySide6.QtCore import QSignalBlocker, QTimer, Signal
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QSpinBox, QVBoxLayout, QWidget

from mirrorlab.desktop import symbols
from mirrorlab.desktop.angle_text import mark_of, short_reading
from mirrorlab.desktop.bench import Bench
from mirrorlab.desktop.chamber_map import ChamberMap
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Segments, button, inset, label
from mirrorlab.desktop.rows import Column, RowsModel, fixed
from mirrorlab.desktop.seed_entry import SeedEntry
from mirrorlab.desktop.state import MOST_IMAGES_RANGE
from mirrorlab.desktop.words import PARITIES
from mirrorlab.mirrors import Orbit

AXES = ("x", "y", "z")
SOON = 80
"""Milliseconds after which the bench follows other mirrors: what one types into comes first."""


class PointsBench(Bench):
    """Where the seed stands, how many images it has, and where they go.

    Signals
    -------
    export_wanted(str)
        "csv", "npy", "picture" or "mesh".
    """

    title = "Points"
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
        self.limit = ImageLimit(document)
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
        self._soon = QTimer(self)
        self._soon.setSingleShot(True)
        self._soon.setInterval(SOON)
        self._soon.timeout.connect(self._show_rest)
        self._lay_out()
        self.group.chosen.connect(self._choose_group)
        document.arrangement_changed.connect(self._follow)
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
        column.addWidget(self.limit)
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
        if orbit is not None:
            return f"{len(orbit):,} image{'s' if len(orbit) != 1 else ''}"
        count = len(self.document.arrangement.pairs)
        return f"{count} pair{'s' if count != 1 else ''} of mirrors"

    @property
    def exports_rows_as(self) -> str:
        """Images have a file of their own; the pairs that stand in for them have none."""
        return "" if self.document.orbit is None else "csv"

    def table_note(self) -> str:
        orbit = self.document.orbit
        return self.document.orbit_note if orbit is None else orbit.frame

    def refresh(self) -> None:
        self._show_rows()
        self._show_rest()

    def _follow(self) -> None:
        """Other mirrors: the table goes with finding and picture; what is on the bench itself comes after them."""
        if not self.isVisible():
            self.watch()
            return
        self._show_rows()
        if not self._soon.isActive():  # so that it follows while one types on and on, too
            self._soon.start()

    def _show_rows(self) -> None:
        orbit = self.document.orbit
        if orbit is None:
            self._model.set_columns(pair_columns(self.document), None)
        else:
            self._model.set_columns(image_columns(orbit), "image")

    def _show_rest(self) -> None:
        self._soon.stop()
        orbit = self.document.orbit
        self.seed.refresh()
        self.map.refresh()
        self.group.choose(1 if self.document.seed.rotations else 0)
        self.facts.show_orbit(self.document)
        self.limit.refresh()
        for part in self.exports.values():
            part.setEnabled(True)
        for kind in ("csv", "npy"):
            self.exports[kind].setEnabled(orbit is not None)

    def _choose_group(self, which: int) -> None:
        seed = replace(self.document.seed, rotations=which == 1)
        if seed != self.document.seed:
            self.document.set_seed(seed, "rotations only" if which else "whole group")


def image_columns(orbit: Orbit) -> list[Column]:
    """The table of an orbit."""
    count, dimension = orbit.points.shape
    names = AXES[:dimension] if dimension <= len(AXES) else [f"x{k + 1}" for k in range(dimension)]
    columns = [Column("image", np.arange(1, count + 1), hint="1 is the seed")]
    columns += [Column(name, orbit.points[:, k], fixed(6)) for k, name in enumerate(names)]
    columns += [
        Column(
            "parity", orbit.parity, lambda p: PARITIES[int(p)], "odd images are mirror-inverted", text=True
        ),
        Column("depth", orbit.depth, hint="fewest reflections that lead to it"),
        Column("word", orbit.words, hint="the mirrors on the way, the last one first", text=True),
    ]
    return columns


def pair_columns(document: Document) -> list[Column]:
    """The table of the typed pairs, for arrangements without a list of images."""
    arrangement, finding = document.arrangement, document.finding
    rows = list(zip(arrangement.angles, arrangement.pairs, finding.evidence.four_cos, strict=True))
    return [
        Column("pair", arrangement.pair_names, text=True),
        Column("typed", [angle.text for angle in arrangement.angles], text=True),
        Column("degrees", np.array([angle.degrees for angle in arrangement.angles])),
        Column("uncertainty", np.array([angle.uncertainty for angle in arrangement.angles]), hint="degrees"),
        Column("read as", [short_reading(angle) for angle in arrangement.angles], text=True),
        Column("4cos²", np.array([float(value) for _, _, (_, value, _) in rows])),
        Column(
            "order", [order for _, _, (_, _, order) in rows], hint="of the product of the two reflections"
        ),
        Column("mark", [mark_of(finding, pair, angle) for angle, pair, _ in rows], text=True),
    ]


class ImageLimit(QWidget):
    """The most images that are made; shown where the group could reach it."""

    NEAR = 10
    """It is shown for groups of more than this part of the limit."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.box = inset(QSpinBox())
        self.box.setRange(*MOST_IMAGES_RANGE)
        self.box.setSingleStep(1_000_000)
        self.box.setGroupSeparatorShown(True)
        self.box.setKeyboardTracking(False)
        self.box.setAccessibleName("most images")
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.addWidget(label("Most images made", "muted"))
        row.addWidget(self.box, 1)
        self.box.valueChanged.connect(self._change)
        self.refresh()

    def refresh(self) -> None:
        """Show the document's limit."""
        most, order = self.document.settings.most_images, self.document.finding.order
        with QSignalBlocker(self.box):
            self.box.setValue(most)
        self.setVisible(order is not None and order * self.NEAR > most)

    def _change(self, most: int) -> None:
        self.document.set_settings(replace(self.document.settings, most_images=most))


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
