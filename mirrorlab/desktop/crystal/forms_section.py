"""Face forms: typed faces, their names, and the solid they make together."""

from __future__ import annotations

from functools import partial
from pathlib import Path

import numpy as np
from PySide6.QtWidgets import QHBoxLayout, QMenu, QWidget

from mirrorlab.crystal.combinations import MOST_FORMS, Combination
from mirrorlab.crystal.forms import form, forms_of
from mirrorlab.crystal.indices import parse_form
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.pointgroups import NamedGroup
from mirrorlab.crystal.symbols import typographic
from mirrorlab.desktop.bench_parts import FactRows
from mirrorlab.desktop.crystal.crystal_parts import TypedList
from mirrorlab.desktop.crystal.libraries import LOADING, loaded
from mirrorlab.desktop.crystal.section import Section
from mirrorlab.desktop.crystal.workings import Working, cell_basis, solid_of
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Segments, button, label
from mirrorlab.desktop.printed import as_sentence
from mirrorlab.desktop.rows import Column, fixed
from mirrorlab.drawing.model import Key

FACES, EDGES = range(2)


class FormsSection(Section):
    """The forms on the crystal."""

    name = "Forms"
    about = "Faces typed, their forms named, and the solid they make"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.heading = label("", "heading")
        self.hint = label("A face of each form, with its distance if it is not 1", "small", wrap=True)
        self.faces = TypedList("face", "1,1,0:1.2", MOST_FORMS)
        self.kinds = button("Kinds", "", "One form of each kind that this group has")
        self.kinds.setProperty("menu", True)
        self.menu = QMenu(self.kinds)
        self.kinds.setMenu(self.menu)
        self.menu.aboutToShow.connect(self._fill_menu)
        self.show_solid = button("Show solid", "tight", "The solid on the stage")
        self.show_poles = button("Show poles", "tight", "The poles of the faces in the stereogram")
        self.facts = FactRows()
        self.rows = Segments(("Faces", "Edges"), hints=("All faces", "Angles between neighbouring faces"))
        self._lay_out()
        self.faces.typed.connect(self._typed)
        self.faces.entered.connect(lambda: self.begin("faces"))
        self.show_solid.clicked.connect(lambda: self.picture_wanted.emit("Form"))
        self.show_poles.clicked.connect(self._poles)
        self.rows.chosen.connect(lambda _: self._show_rows())

    def _lay_out(self) -> None:
        head = QHBoxLayout()
        head.addWidget(self.heading, 1)
        head.addWidget(self.kinds)
        self.column.addLayout(head)
        self.column.addWidget(self.hint)
        self.column.addWidget(self.faces)
        row = QHBoxLayout()
        row.setSpacing(4)
        for part in (self.show_solid, self.show_poles):
            row.addWidget(part, 1)
        self.column.addLayout(row)
        self.column.addSpacing(4)
        self.column.addWidget(self.facts)
        self.column.addWidget(label("Rows of the table", "muted"))
        self.column.addWidget(self.rows)

    def refresh(self) -> None:
        work, why = self.working()
        self.heading.setText("Forms" if work is None else f"Forms of {typographic(work.group.setting)}")
        self.faces.show_texts(self.state.faces)
        self.faces.setEnabled(work is not None)
        self.kinds.setEnabled(work is not None and work.group.name.crystallographic)
        if work is None or not loaded(self.document):
            self.faces.show_answers([("", False)] * len(self.state.faces))
            self.facts.show_facts({"": why or LOADING})
        else:
            self.faces.show_answers(answers(work.group, self.state.faces))
            self.facts.show_facts(self._facts(work))
        self._show_rows()

    def _made(self) -> Combination | None:
        if not loaded(self.document):
            return None
        try:
            return solid_of(self.document)
        except CrystalError:
            return None

    def _facts(self, work: Working) -> dict[str, str]:
        made = self._made()
        if made is None:
            return {}
        count = len(made.labels)
        ends = "they close" if made.closed else "open: they do not close"
        axes = "unit axes"
        if self.state.has_cell:
            fits = cell_basis(work.group, self.state) is not None
            axes = "the typed cell" if fits else "unit axes; the typed cell does not fit the group"
        return {
            "Together": f"{count} face{'s' if count != 1 else ''}, {ends}",
            "Not in sight": ", ".join(made.hidden),
            "Axes": axes,
        }

    def _show_rows(self) -> None:
        made = self._made()
        if made is None:
            self.model.set_columns(())
            self.title, self.note = (
                "No faces",
                LOADING if not loaded(self.document) else "No form is typed yet.",
            )
        elif self.rows.current == FACES:
            keys: list[Key] = [("face", k) for k in range(len(made.labels))]
            self.model.set_columns(face_columns(made), keys)
            self.title = f"{len(keys)} face{'s' if len(keys) != 1 else ''}"
            self.note = f"{made.group.axes}; normals Cartesian, a along x, b in the xy plane"
        else:
            angles = made.edge_angles
            self.model.set_columns(
                [
                    Column("form", [one.first for one in angles], text=True),
                    Column("with", [one.second for one in angles], text=True),
                    Column("angle °", np.array([one.degrees for one in angles]), lambda v: f"{v:.3f}"),
                    Column("edges", np.array([one.edges for one in angles])),
                ]
            )
            self.title = f"{len(angles)} kind{'s' if len(angles) != 1 else ''} of edge"
            self.note = "angles between the normals of neighbouring faces"
        self.rows_changed.emit()

    def save_rows(self, path: Path) -> None:
        from mirrorlab.files.crystal_tables import write_faces

        made = self._made()
        if made is not None and self.rows.current == FACES:
            write_faces(path, made)
        else:
            super().save_rows(path)

    # -- doing -------------------------------------------------------------------------------------

    def _typed(self, texts: tuple[str, ...]) -> None:
        before = self.state.faces
        self.change("faces", self.gesture, faces=texts)
        if texts and not before and self.state.marks != "poles":
            self.picture_wanted.emit("Form")

    def _poles(self) -> None:
        self.change("poles in the stereogram", marks="poles")
        self.picture_wanted.emit("Stereogram")

    def _fill_menu(self) -> None:
        self.menu.clear()
        work, _ = self.working()
        if work is None or not loaded(self.document):
            self.menu.addAction(LOADING).setEnabled(False)
            return
        for made in forms_of(work.group):
            count = made.face_count
            text = f"{made.symbol}  {made.name}, {count} face{'s' if count != 1 else ''}"
            self.menu.addAction(text).triggered.connect(partial(self._add, made.symbol.strip("{}")))

    def _add(self, face: str, _checked: bool = False) -> None:
        self.change(f"form {face}", faces=(*self.state.faces, face))
        self.picture_wanted.emit("Form")


def answers(group: NamedGroup, faces: tuple[str, ...]) -> list[tuple[str, bool]]:
    """For each typed face the form's name, or what is wrong with it."""
    found: list[tuple[str, bool]] = []
    seen: dict[tuple[float, ...], str] = {}
    for text in faces:
        try:
            indices, _ = parse_form(text, group.hexagonal, group.name.crystallographic)
            made = form(group, indices)
        except CrystalError as error:
            found.append((as_sentence(str(error)), True))
            continue
        first = tuple(made.faces[0].tolist())
        if first in seen:
            found.append((f'"{text}" is a face of the form of {seen[first]}; each form is typed once', True))
            continue
        seen |= {tuple(row): text for row in made.faces.tolist()}
        count = made.face_count
        ends = "" if made.closed else ", open"
        found.append((f"{made.name}, {count} face{'s' if count != 1 else ''}{ends}", False))
    return found


def face_columns(made: Combination) -> list[Column]:
    """The table of all faces."""
    body, owners = made.solid, made.owners.tolist()
    return [
        Column("face", list(made.labels), text=True),
        Column("form", [made.forms[k].symbol for k in owners], text=True),
        Column("name", [made.forms[k].name for k in owners], text=True),
        *(Column(f"n{axis}", body.normals[:, k], fixed(5)) for k, axis in enumerate("xyz")),
        Column("distance", body.distances, hint="from the centre"),
        Column("area", body.areas, hint="0 where other forms cut the face away"),
    ]
