"""The view: what is looked at, from where and how widely, and its picture as a file."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import Any

import numpy as np
from PySide6.QtCore import QSignalBlocker
from PySide6.QtWidgets import QComboBox, QFileDialog, QHBoxLayout, QWidget

from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.eye_tracing import SAVE_JOB, picture_of, traced
from mirrorlab.desktop.glass.glass_parts import Cautions, Entries, Entry
from mirrorlab.desktop.glass.glass_section import GlassSection, told
from mirrorlab.desktop.glass.glass_state import WORDS
from mirrorlab.desktop.glass.workings import hazards
from mirrorlab.desktop.parts import Segments, button, label
from mirrorlab.desktop.rows import Column, fixed
from mirrorlab.optics.cautions import Place, cautions_for
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.pattern import PATTERNS

SUITS = "The one that suits"
PICTURES = "Pictures (*.png *.jpg *.jpeg *.webp *.bmp *.gif);;All files (*)"
SMOOTH = 3
"""Rays a pixel along each side in a saved picture."""

LARGEST_SIDE = 32_768
"""Pixels along a side, as the tracer takes them."""

AXES = ("x", "y", "z")


class ViewSection(GlassSection):
    """What the eye sees."""

    name = "View"
    about = "The object, the eye and its field of view, and the picture as a file"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.thing = Segments(
            ("Pattern", "Picture", "Seed"),
            hints=("A drawn pattern", "A picture file of your own", "A ball where the seed is"),
        )
        self.pattern = QComboBox()
        self.pattern.addItems([SUITS, *PATTERNS])
        self.pattern.setAccessibleName("pattern")
        self.picture = Entries((("picture", Entry("Picture file", "Path of a picture", "lantern.png")),))
        self.browse = button("Choose file", "tight", "Choose a picture file")
        self.error = label("", "wrong", wrap=True)
        self.eye = Entries(
            tuple(
                (f"eye {k}", Entry(f"Eye {axis}", f"{axis} of the eye, mm or with a unit"))
                for k, axis in enumerate(AXES)
            )
        )
        self.turn = Entries(
            (
                ("turn 0", Entry("Turn right °", "Degrees to the right; drag the view", "0")),
                ("turn 1", Entry("Up °", "Degrees up; drag the view", "0")),
                ("field", Entry("Field °", "Degrees across the shorter side; turn the wheel over the view")),
            )
        )
        self.ahead = button("Look straight ahead", "tight", "Eye, turn and field as the assembly suggests")
        self.show_picture = button("Show view", "tight", "The eye's view on the stage")
        self.size = Entries((("size", Entry("Size in pixels", "Width x height", "1920 x 1080")),))
        self.save = button("Save PNG", "tight", "Trace at this size and save; can be cancelled")
        self.cautions = Cautions()
        self._lay_out()
        self._connect()

    def _lay_out(self) -> None:
        column = self.column
        column.addWidget(label("Object", "heading"))
        column.addWidget(self.thing)
        column.addWidget(self.pattern)
        column.addWidget(self.picture)
        column.addWidget(self.browse)
        column.addWidget(self.error)
        column.addSpacing(2)
        column.addWidget(label("Eye", "heading"))
        column.addWidget(self.eye)
        column.addWidget(self.turn)
        row = QHBoxLayout()
        row.setSpacing(4)
        for part in (self.ahead, self.show_picture):
            row.addWidget(part, 1)
        column.addLayout(row)
        column.addSpacing(2)
        column.addWidget(label("Picture of the view", "heading"))
        column.addWidget(self.size)
        column.addWidget(self.save)
        column.addWidget(self.cautions)

    def _connect(self) -> None:
        self.thing.chosen.connect(lambda k: self.change("object", thing=WORDS["thing"][k]))
        self.pattern.activated.connect(
            lambda k: self.change("pattern", pattern="" if k == 0 else list(PATTERNS)[k - 1])
        )
        self.follow(self.picture)
        self.browse.clicked.connect(self._browse)
        for row in (self.eye, self.turn):
            row.entered.connect(self._entered)
            row.typed.connect(self._typed)
        self.ahead.clicked.connect(
            lambda: self.change("look straight ahead", eye=("",) * 3, turn=("",) * 2, field="")
        )
        self.show_picture.clicked.connect(lambda: self.picture_wanted.emit("Eye's view"))
        self.save.clicked.connect(self._ask_where)

    def _entered(self, key: str) -> None:
        self.begin(key.split()[0])

    def _typed(self, key: str, text: str) -> None:
        name, _, place = key.partition(" ")
        fields = self.state.with_nth(name, int(place), text) if place else {name: text}
        self.change(
            "field of view" if name == "field" else f"{name} of the view", self.gesture_of(name), **fields
        )

    def refresh(self) -> None:
        state = self.state
        self.thing.choose(WORDS["thing"].index(state.thing))
        self.pattern.setVisible(state.thing == "pattern")
        with QSignalBlocker(self.pattern):
            self.pattern.setCurrentIndex(
                1 + list(PATTERNS).index(state.pattern) if state.pattern in PATTERNS else 0
            )
        self.picture.setVisible(state.thing == "picture")
        self.browse.setVisible(state.thing == "picture")
        self.show_state(self.picture)
        for row in (self.eye, self.turn):
            for key, entry in row.entries.items():
                name, _, place = key.partition(" ")
                entry.show_text(state.nth(name, int(place)) if place else getattr(state, name))
        bare, _ = self.bare()
        made, error = self.assembly()
        if error is None:
            try:
                picture_of(state)
            except AssemblyError as wrong:
                error = wrong
        self._show_error(error)
        if bare is not None:
            suits = made or bare
            for k, entry in enumerate(self.eye.entries.values()):
                entry.field.setPlaceholderText(f"{bare.eye[k] + 0.0:.0f}")
            self.turn.entries["field"].field.setPlaceholderText(f"{np.degrees(suits.field_of_view):.0f}")
        self.save.setEnabled(made is not None and error is None)
        self.cautions.show_cautions(() if bare is None else cautions_for(Place.EYE, hazards(bare)))
        self._show_rows(made, error)

    def _show_error(self, error: AssemblyError | None) -> None:
        field, message = ("", "") if error is None else (error.field, told(error))
        place = {
            "eye": "eye 2",
            "target": "eye 2",
            "up": "turn 1",
            "turn": "turn 0",
            "field_of_view": "field",
        }.get(field, field)
        found = [row.show_error(place, message) for row in (self.picture, self.eye, self.turn)]
        self.error.setText("" if any(found) else message)
        self.error.setVisible(bool(self.error.text()))

    def _show_rows(self, made: Any, error: AssemblyError | None) -> None:
        if made is None:
            self.model.set_columns(())
            self.title, self.note = "No view", "" if error is None else told(error)
        else:
            places = {"eye": made.eye, "looked at": made.target, "object": made.place.centre}
            table = np.array(list(places.values()))
            columns = [Column("place", list(places), text=True)]
            columns += [Column(f"{axis} mm", table[:, k], fixed(2)) for k, axis in enumerate(AXES)]
            heights = np.array([made.heights(spot) for spot in places.values()])
            columns += [
                Column(
                    f"from {letter} mm",
                    heights[:, k],
                    fixed(2),
                    "distance before the mirror",
                )
                for k, letter in enumerate(made.letters)
            ]
            self.model.set_columns(columns)
            self.title, self.note = (
                "Eye and object",
                "x right, y up for an eye that looks down z; z towards the eye",
            )
        self.rows_changed.emit()

    # -- files ---------------------------------------------------------------------------------------

    def _browse(self) -> None:
        name, _ = QFileDialog.getOpenFileName(self, "Picture of the object", "", PICTURES)
        if name:
            self.change("picture", picture=name)

    def _ask_where(self) -> None:
        if self._wanted_size() is None:
            return
        name, _ = QFileDialog.getSaveFileName(self, "Save the eye's view", "view.png", "PNG picture (*.png)")
        if name:
            path = Path(name)
            self.save_view(path if path.suffix else path.with_suffix(".png"))

    def _wanted_size(self) -> tuple[int, int] | None:
        text = self.size.entries["size"].field.text().strip() or "1920 x 1080"
        parts = [part.strip() for part in text.lower().replace("×", "x").split("x")]
        if len(parts) == 2 and all(part.isdecimal() and 1 <= int(part) <= LARGEST_SIDE for part in parts):
            self.size.show_error("size", "")
            return int(parts[0]), int(parts[1])
        message = (
            f'"{text}": write width x height in pixels, each from 1 to {LARGEST_SIDE:,}, such as 1920 x 1080.'
        )
        self.size.show_error("size", message)
        return None

    def save_view(self, path: Path) -> None:
        """Trace the view beside the window and write it; progress and cancel stand in the status line."""
        from mirrorlab.files.raster import check_view_name, save_view

        size, (made, _) = self._wanted_size(), self.assembly()
        if size is None or made is None:
            return
        try:
            picture = picture_of(self.state)
            check_view_name(path)
        except ValueError as error:
            self._failed(error)
            return

        def job(progress: Any) -> Path:
            return save_view(path, traced(made, picture, size, SMOOTH, progress))

        self.document.work.start(SAVE_JOB, job, partial(self._saved, size), self._failed)

    def _saved(self, size: tuple[int, int], path: Path) -> None:
        self.size.show_error("size", "")
        self.says.emit(f"Wrote {path}, {size[0]} × {size[1]} pixels.")

    def _failed(self, error: Exception) -> None:
        if not isinstance(error, ValueError | OSError | ImportError):
            raise error
        self.size.show_error("size", f"Not written: {error}")
