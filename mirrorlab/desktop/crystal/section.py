"""Base of the sections of the crystal bench."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from mirrorlab.crystal.operations import CrystalError
from mirrorlab.desktop.bench_section import BenchSection
from mirrorlab.desktop.crystal.crystal_state import CrystalState, crystal_state
from mirrorlab.desktop.crystal.workings import Working, working_of
from mirrorlab.desktop.printed import as_sentence


class Section(BenchSection):
    """One section, with the document's typed values and working group."""

    @property
    def state(self) -> CrystalState:
        """What is typed."""
        return crystal_state(self.document)

    def change(self, text: str, gesture: str = "", **fields: Any) -> None:
        """Change what is typed, as one step; nothing happens when it is the same."""
        after = replace(self.state, **fields)
        if after != self.state:
            self.document.set_crystal(after, text, gesture)

    def working(self) -> tuple[Working | None, str]:
        """The working group, or why there is none."""
        try:
            return working_of(self.document), ""
        except CrystalError as error:
            return None, as_sentence(str(error))
