"""The assembly: its lengths, its glass, and the mirrors' surfaces."""

from __future__ import annotations

import math

import numpy as np
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.bench_parts import FactRows
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.glass_parts import Cautions, Entries, Entry
from mirrorlab.desktop.glass.glass_section import GlassSection, told
from mirrorlab.desktop.glass.glass_state import WORDS, GlassState
from mirrorlab.desktop.glass.mirror_rows import MirrorRows
from mirrorlab.desktop.glass.workings import TAKES, hazards, kind_of
from mirrorlab.desktop.parts import Segments, button, label
from mirrorlab.desktop.rows import Column
from mirrorlab.drawing.model import Key
from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.cautions import Place, cautions_for
from mirrorlab.optics.lengths import AssemblyError, parse_length

ENTRIES = {
    "opening": (
        "Opening",
        "Longest side of what one looks through; empty takes all that the panels leave",
        "all",
    ),
    "length": ("Length", "Of a wedge's edge or a tube", ""),
    "depth": (
        "Depth",
        "How far a corner's point or a wedge's mirrors reach; empty follows the opening",
        "follows",
    ),
    "truncated": ("Cut off at", "Depth at which a corner's point is cut off; empty leaves it whole", "whole"),
    "sides": ("Sides", "Of a tube's mouth: one, or several with commas; empty follows the opening", "follow"),
    "taper": ("Taper", "A tube's far end over its mouth; 1 is straight", "straight"),
    "thickness": ("Glass", "Thickness of the glass", ""),
}
"""Name, hint and placeholder of each length."""

ROWS = (("opening", "length", "depth"), ("truncated", "sides", "taper", "thickness"))


class AssemblySection(GlassSection):
    """What the mirrors are cut to and made of."""

    name = "Assembly"
    about = "Lengths, glass and mirrors of the wedge, corner or tube that the angles make"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.heading = label("", "heading")
        self.error = label("", "wrong", wrap=True)
        self.rows = tuple(Entries([(key, entry(key)) for key in keys]) for keys in ROWS)
        self.look = Segments(
            ("Along the edge", "Into the wedge"),
            hints=(
                "Down the edge, as through an eyepiece",
                "From the open side, the object between the mirrors",
            ),
        )
        self.cut = Segments(
            ("Equal edges", "Centre line"),
            hints=(
                "The mouth cuts all edges at one length",
                "The mouth stands square to the line with the same distance from all mirrors",
            ),
        )
        self.show_picture = button("Show assembly", "", "The panels in space, on the stage")
        self.mirrors = MirrorRows()
        self.facts = FactRows()
        self.cautions = Cautions()
        self._lay_out()
        for row in self.rows:
            self.follow(row)
        self.look.chosen.connect(lambda k: self.change("look", look=WORDS["look"][k]))
        self.cut.chosen.connect(lambda k: self.change("cut of the mouth", cut=WORDS["cut"][k]))
        self.show_picture.clicked.connect(lambda: self.picture_wanted.emit("Assembly"))
        self.mirrors.wire(self)

    def _lay_out(self) -> None:
        self.column.addWidget(self.heading)
        self.column.addWidget(self.error)
        for row in self.rows:
            self.column.addWidget(row)
        self.column.addWidget(self.look)
        self.column.addWidget(self.cut)
        self.column.addSpacing(2)
        self.column.addWidget(label("Mirrors", "heading"))
        self.column.addWidget(self.mirrors)
        self.column.addSpacing(2)
        self.column.addWidget(self.facts)
        self.column.addWidget(self.show_picture)
        self.column.addWidget(self.cautions)

    def refresh(self) -> None:
        arrangement = self.document.arrangement
        kind = kind_of(arrangement)
        self.show_state(*self.rows)
        takes = TAKES.get(kind, ())
        for row in self.rows:
            for key, part in row.entries.items():
                part.setVisible(key in takes or key == "thickness")
        self.look.choose(WORDS["look"].index(self.state.look))
        self.look.setVisible(kind == "wedge")
        self.cut.choose(WORDS["cut"].index(self.state.cut))
        self.cut.setVisible(kind == "corner")
        self.mirrors.show_mirrors(self.state, arrangement.letters if kind else ())
        made, error = self.bare()
        count = arrangement.size
        self.heading.setText(f"{kind.capitalize()} of {count} mirrors" if kind else "No assembly")
        self._show_error(error)
        self.show_picture.setEnabled(made is not None)
        if made is None:
            self.facts.show_facts({})
            self.cautions.show_cautions(())
        else:
            self.facts.show_facts(facts_of(made))
            self.cautions.show_cautions(cautions_for(Place.ASSEMBLY, hazards(made)))
        self._show_rows(made, error)

    def _show_error(self, error: AssemblyError | None) -> None:
        field, message = ("", "") if error is None else (error.field, told(error))
        found = []
        unread = unreadable(self.state, TAKES.get(kind_of(self.document.arrangement), ()))
        for row in self.rows:
            # The maker stops at the first thing that is wrong; whatever else cannot be read is told as well.
            key = (
                field if field in row.entries else next((name for name in row.entries if name in unread), "")
            )
            found.append(
                row.show_error(key, message if key == field else unread.get(key, "")) and key == field
            )
        found.append(self.mirrors.show_error(field, message))
        self.error.setText("" if any(found) else message)
        self.error.setVisible(bool(self.error.text()))

    def _show_rows(self, made: Assembly | None, error: AssemblyError | None) -> None:
        if made is None:
            self.model.set_columns(())
            self.title, self.note = "No mirrors", "" if error is None else told(error)
        else:
            keys: list[Key] = [("mirror", k) for k in range(len(made.panels))]
            self.model.set_columns(panel_columns(made), keys)
            self.title = f"{len(keys)} mirrors"
            self.note = "reflecting faces, lengths in mm; cut sizes stand under Panels"
        self.rows_changed.emit()


def entry(key: str) -> Entry:
    """The entry of a length."""
    name, hint, placeholder = ENTRIES[key]
    return Entry(name, hint, placeholder)


def unreadable(state: GlassState, takes: tuple[str, ...]) -> dict[str, str]:
    """What is wrong with each typed length that is none."""
    found = {}
    for key in (*takes, "thickness"):
        text = getattr(state, key).strip()
        if text and key not in ("sides", "taper"):
            try:
                parse_length(text, key)
            except AssemblyError as error:
                found[key] = told(error)
    return found


def facts_of(made: Assembly) -> dict[str, str]:
    """Figures of an assembly beside its entries."""
    sides = np.linalg.norm(np.roll(made.mouth, -1, axis=0) - made.mouth, axis=1)
    facts = {
        "Mouth": " × ".join(f"{side:.1f}" for side in sides) + " mm" if made.kind != "wedge" else "",
        "Depth": f"{made.mouth[:, 2].max():.1f} mm" if made.kind == "corner" else "",
    }
    if made.kind == "wedge":
        outline = made.panels[0].outline
        facts["Mirrors reach"] = f"{np.linalg.norm(outline[1] - outline[0]):.1f} mm from the edge"
    angles = {pair: math.degrees(angle) for pair, angle in sorted(made.dihedrals.items())}
    facts["Between"] = ", ".join(
        f"{made.letters[i]}{made.letters[j]} {angle:.5g}°" for (i, j), angle in angles.items()
    )
    return facts


def panel_columns(made: Assembly) -> list[Column]:
    """The table of reflecting faces."""
    from mirrorlab.optics import polygon
    from mirrorlab.optics.panels import flatten_panels

    flat = flatten_panels(made)
    boxes = [polygon.bounds(panel.outline) for panel in flat]
    return [
        Column("mirror", list(made.letters), text=True),
        Column("width", np.array([right - left for left, _, right, _ in boxes]), lambda v: f"{v:.2f}"),
        Column("height", np.array([top - bottom for _, bottom, _, top in boxes]), lambda v: f"{v:.2f}"),
        Column("area m²", np.array([panel.area / 1e6 for panel in flat]), lambda v: f"{v:.5f}"),
        Column("surface", [mirror.surface for mirror in made.mirrors], text=True),
        Column(
            "keeps",
            np.array([mirror.reflectance for mirror in made.mirrors]),
            hint="part of the light that one bounce keeps",
        ),
        Column("preset", [mirror.name or "own" for mirror in made.mirrors], text=True),
        Column("meets", [" ".join(edge for edge in panel.edges if edge) for panel in made.panels], text=True),
    ]
