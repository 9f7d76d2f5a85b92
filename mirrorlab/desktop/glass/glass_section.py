"""Base of the sections of the glass bench."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from mirrorlab.desktop.bench_section import BenchSection
from mirrorlab.desktop.glass.glass_parts import Entries
from mirrorlab.desktop.glass.glass_state import GlassState, glass_state
from mirrorlab.desktop.glass.workings import assembly_of, bare_assembly, kind_of
from mirrorlab.desktop.printed import as_sentence
from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.lengths import AssemblyError


class GlassSection(BenchSection):
    """One section, with the document's typed values and assembly."""

    @property
    def state(self) -> GlassState:
        """What is typed."""
        return glass_state(self.document)

    def change(self, text: str, gesture: str = "", **fields: Any) -> None:
        """Change what is typed, as one step; nothing happens when it is the same."""
        after = replace(self.state, **fields)
        if after != self.state:
            self.document.set_glass(after, text, gesture)

    def follow(self, entries: Entries) -> None:
        """Let entries whose keys are fields of the state change it; the typing in one of them is one step."""
        entries.entered.connect(self.begin)
        entries.typed.connect(self._typed_in)

    def _typed_in(self, key: str, text: str) -> None:
        self.change(key.replace("_", " "), self.gesture_of(key), **{key: text})

    def gesture_of(self, what: str) -> str:
        """The gesture under way when it is of this entry, else a new one."""
        if not self.gesture.startswith(f"{what} "):
            self.begin(what)
        return self.gesture

    def show_state(self, *rows: Entries) -> None:
        """Show the state in entries whose keys are its fields."""
        state = self.state
        for row in rows:
            for key, entry in row.entries.items():
                entry.show_text(getattr(state, key))

    def assembly(self) -> tuple[Assembly | None, AssemblyError | None]:
        """The assembly, or what is wrong with it."""
        if not kind_of(self.document.arrangement):
            return None, AssemblyError(why_no_kind(self.document.arrangement), "angles")
        try:
            return assembly_of(self.document), None
        except AssemblyError as error:
            return None, error

    def bare(self) -> tuple[Assembly | None, AssemblyError | None]:
        """The panels alone, whatever may be wrong with object or eye."""
        if not kind_of(self.document.arrangement):
            return None, AssemblyError(why_no_kind(self.document.arrangement), "angles")
        try:
            return bare_assembly(self.document.arrangement, self.state), None
        except AssemblyError as error:
            return None, error


def why_no_kind(arrangement: Any) -> str:
    """Why these mirrors make no assembly, in a sentence."""
    if arrangement.normals is None:
        return "No planes in space have these angles, so there is no assembly of them."
    if arrangement.size > 3:
        return (
            f"{arrangement.size} mirrors that meet in a point make no assembly. A wedge has two mirrors, a corner"
            " three, a tube three or four around one direction; remove a mirror or choose one under Choose."
        )
    return "Three mirrors through one line make no assembly: remove one for a wedge, or change an angle."


def told(error: AssemblyError) -> str:
    """An error as a sentence to stand below its entry."""
    return as_sentence(str(error))
