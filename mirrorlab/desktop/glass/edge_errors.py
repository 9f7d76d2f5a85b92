"""A row for each edge: the angle that is meant, by how much it is off, and what it is."""

from __future__ import annotations

from functools import partial
from typing import Any

import numpy as np
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.bench_parts import LineField
from mirrorlab.desktop.glass.glass_section import GlassSection
from mirrorlab.desktop.glass.grid_rows import GridRows
from mirrorlab.desktop.glass.workings import kind_of
from mirrorlab.desktop.parts import label
from mirrorlab.desktop.stylesheet import set_wrong
from mirrorlab.optics.tolerance import Intent

MOST_EDGES = 4


class EdgeErrors(GridRows):
    """A row an edge: its pair, the angle it is meant to have, its error, and the angle it has."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(("Meant", "Off by °", "Actual"), 8, parent)
        self.grid.setColumnStretch(2, 1)
        self.pairs, self.meant, self.errors, self.actual = [], [], [], []
        for k in range(MOST_EDGES):
            parts = (label("", "heading"), label("", "figures"), LineField(), label("", "figures"))
            parts[2].setToolTip("Degrees; empty takes the angle typed in the triangle")
            self.put_row(k, parts)
            for kept, part in zip((self.pairs, self.meant, self.errors, self.actual), parts, strict=True):
                kept.append(part)

    def wire(self, section: GlassSection) -> None:
        """Let the fields change the section's state."""
        for k, field in enumerate(self.errors):
            field.entered.connect(partial(section.begin, "error"))
            field.textEdited.connect(partial(self._typed, section, k))

    def _typed(self, section: GlassSection, k: int, text: str) -> None:
        section.change(
            "error of an angle", section.gesture_of("error"), **section.state.with_nth("errors", k, text)
        )

    def show_edges(
        self, state: Any, intent: Intent | None, actual: tuple[float, ...], arrangement: Any
    ) -> None:
        """Show the edges that are meant, or keep what is there while they cannot be told."""
        count = 0 if intent is None else len(intent.pairs)
        if intent is None and kind_of(arrangement):
            return
        for k in range(MOST_EDGES):
            for part in (self.pairs[k], self.meant[k], self.errors[k], self.actual[k]):
                part.setVisible(k < count)
            if intent is None or k >= count:
                continue
            meant, has = np.degrees(intent.radians[k]), np.degrees(actual[k])
            self.pairs[k].setText(intent.pairs[k])
            self.meant[k].setText(f"{meant:.5g}°")
            self.actual[k].setText(f"{has:.6g}°")
            self.errors[k].setAccessibleName(f"error of {intent.pairs[k]}")
            typed = state.nth("errors", k)
            self.errors[k].setPlaceholderText(f"{has - meant + 0.0:.3g}" if not typed.strip() else "")
            if self.errors[k].text() != typed:
                self.errors[k].setText(typed)

    def show_error(self, field: str, message: str) -> bool:
        """Say what is wrong with an error typed here."""
        found = field in ("errors", "actual")
        for pair, part in zip(self.pairs, self.errors, strict=True):
            set_wrong(part, found and bool(message) and bool(pair.text()) and f" {pair.text()}" in message)
        self.tell(message if found else "")
        return found
