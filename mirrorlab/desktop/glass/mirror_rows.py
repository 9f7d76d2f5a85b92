"""A row for each mirror: its preset, surface and reflectance."""

from __future__ import annotations

from functools import partial

from PySide6.QtCore import QSignalBlocker
from PySide6.QtWidgets import QComboBox, QWidget

from mirrorlab.desktop.bench_parts import LineField
from mirrorlab.desktop.glass.glass_section import GlassSection
from mirrorlab.desktop.glass.glass_state import GlassState
from mirrorlab.desktop.glass.grid_rows import GridRows
from mirrorlab.desktop.parts import label
from mirrorlab.desktop.stylesheet import set_wrong
from mirrorlab.optics.mirror import FIRST, PRESETS, SECOND
from mirrorlab.optics.stand import DEFAULT_MIRROR

SHORT = {
    "first-surface aluminium": "Aluminium",
    "first-surface enhanced": "Enhanced",
    "household glass": "Household",
    "perfect": "Perfect",
}
SURFACES = {FIRST: "First", SECOND: "Second"}
MOST_PANELS = 4


class MirrorRows(GridRows):
    """A row a mirror: its letter, preset, surface and reflectance."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(("Preset", "Surface", "Keeps"), 6, parent)
        self.grid.setColumnStretch(1, 3)
        self.grid.setColumnStretch(2, 2)
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
            self.put_row(k, (letter, preset, surface, keeps))
            self.letters.append(letter)
            self.presets.append(preset)
            self.surfaces.append(surface)
            self.reflectances.append(keeps)

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
        section.change(
            "reflectance",
            section.gesture_of("reflectance"),
            **section.state.with_nth("reflectances", k, text),
        )

    def show_mirrors(self, state: GlassState, letters: tuple[str, ...]) -> None:
        """Show the state of the mirrors with these letters."""
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
        self.tell(message if found else "")
        return found
