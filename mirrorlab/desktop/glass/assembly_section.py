"""The assembly: its lengths, its glass, and the mirrors' surfaces."""

from __future__ import annotations

import math
from functools import partial

import numpy as np
from PySide6.QtCore import QSignalBlocker
from PySide6.QtWidgets import QComboBox, QGridLayout, QWidget

from mirrorlab.desktop.bench_parts import FactRows, LineField
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.glass_parts import Cautions, Entries, Entry
from mirrorlab.desktop.glass.glass_section import GlassSection, told
from mirrorlab.desktop.glass.glass_state import WORDS
from mirrorlab.desktop.glass.workings import TAKES, hazards, kind_of
from mirrorlab.desktop.parts import Segments, button, label
from mirrorlab.desktop.rows import Column
from mirrorlab.desktop.stylesheet import set_wrong
from mirrorlab.drawing.model import Key
from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.cautions import Place, cautions_for
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.mirror import FIRST, PRESETS, SECOND
from mirrorlab.optics.stand import DEFAULT_MIRROR

SHORT = {
    "first-surface aluminium": "Aluminium",
    "first-surface enhanced": "Enhanced",
    "household glass": "Household",
    "perfect": "Perfect",
}
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
SURFACES = {FIRST: "First", SECOND: "Second"}
MOST_PANELS = 4


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
        found = [row.show_error(field, message) for row in self.rows]
        found.append(self.mirrors.show_error(field, message))
        self.error.setText("" if any(found) else message)
        self.error.setVisible(bool(self.error.text()))

    def _show_rows(self, made: Assembly | None, error: AssemblyError | None) -> None:
        if made is None:
            self.model.set_columns(())
            self.title, self.note = "No panels", "" if error is None else told(error)
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


class MirrorRows(QWidget):
    """A row a mirror: its letter, preset, surface and reflectance."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(6)
        grid.setVerticalSpacing(4)
        grid.setColumnStretch(1, 3)
        grid.setColumnStretch(2, 2)
        for column, text in ((1, "Preset"), (2, "Surface"), (3, "Keeps")):
            grid.addWidget(label(text, "small"), 0, column)
        self.letters, self.presets, self.surfaces, self.reflectances = [], [], [], []
        for k in range(MOST_PANELS):
            letter, preset, surface, keeps = label("", "heading"), QComboBox(), QComboBox(), LineField()
            preset.addItems([SHORT[name] for name in PRESETS])
            surface.addItems(list(SURFACES.values()))
            for box in (preset, surface):
                box.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
                box.setMinimumContentsLength(4)
            surface.setFixedWidth(80)
            keeps.setFixedWidth(48)
            keeps.setToolTip(
                "Part of the light that one bounce keeps, over 0 and up to 1; empty takes the preset's"
            )
            surface.setToolTip("First: the metal lies on top. Second: it lies behind the glass")
            for column, part in enumerate((letter, preset, surface, keeps)):
                grid.addWidget(part, k + 1, column)
            self.letters.append(letter)
            self.presets.append(preset)
            self.surfaces.append(surface)
            self.reflectances.append(keeps)
        self.error = label("", "wrong", wrap=True)
        self.error.hide()
        grid.addWidget(self.error, MOST_PANELS + 1, 0, 1, 4)

    def wire(self, section: GlassSection) -> None:
        """Let the widgets change the section's state."""
        for k in range(MOST_PANELS):
            self.presets[k].activated.connect(partial(self._preset, section, k))
            self.surfaces[k].activated.connect(partial(self._surface, section, k))
            self.reflectances[k].entered.connect(partial(section.begin, "reflectance"))
            self.reflectances[k].textEdited.connect(partial(self._reflectance, section, k))

    def _preset(self, section: GlassSection, k: int, chosen: int) -> None:
        state = section.state
        fields = state.with_nth("presets", k, list(PRESETS)[chosen])
        fields |= state.with_nth("surfaces", k, "") | state.with_nth("reflectances", k, "")
        section.change("mirror", **fields)

    def _surface(self, section: GlassSection, k: int, chosen: int) -> None:
        section.change("surface", **section.state.with_nth("surfaces", k, list(SURFACES)[chosen]))

    def _reflectance(self, section: GlassSection, k: int, text: str) -> None:
        section.change("reflectance", section.gesture, **section.state.with_nth("reflectances", k, text))

    def show_mirrors(self, state: object, letters: tuple[str, ...]) -> None:
        """Show the state of the mirrors with these letters."""
        from mirrorlab.desktop.glass.glass_state import GlassState

        assert isinstance(state, GlassState)
        for k in range(MOST_PANELS):
            there = k < len(letters)
            for part in (self.letters[k], self.presets[k], self.surfaces[k], self.reflectances[k]):
                part.setVisible(there)
            if not there:
                continue
            letter = letters[k]
            name = state.nth("presets", k)
            preset = PRESETS.get(name, PRESETS[DEFAULT_MIRROR])
            self.letters[k].setText(letter)
            self.presets[k].setAccessibleName(f"preset of mirror {letter}")
            self.surfaces[k].setAccessibleName(f"surface of mirror {letter}")
            self.reflectances[k].setAccessibleName(f"reflectance of mirror {letter}")
            with QSignalBlocker(self.presets[k]), QSignalBlocker(self.surfaces[k]):
                self.presets[k].setCurrentIndex(list(PRESETS).index(preset.name))
                self.presets[k].setToolTip(preset.name)
                surface = state.nth("surfaces", k) or preset.surface
                self.surfaces[k].setCurrentIndex(list(SURFACES).index(surface) if surface in SURFACES else 0)
            self.reflectances[k].setPlaceholderText(f"{preset.reflectance:.2f}")
            if self.reflectances[k].text() != state.nth("reflectances", k):
                with QSignalBlocker(self.reflectances[k]):
                    self.reflectances[k].setText(state.nth("reflectances", k))

    def show_error(self, field: str, message: str) -> bool:
        """Say what is wrong with a mirror, at the letter that the message names."""
        found = field in ("mirrors", "mirror", "surface", "reflectance")
        for letter, part in zip(self.letters, self.reflectances, strict=True):
            named = f" {letter.text()}" in message.split('"')[0].split(":")[0]
            set_wrong(part, found and bool(message) and named)
        self.error.setText(message if found else "")
        self.error.setVisible(found and bool(message))
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
