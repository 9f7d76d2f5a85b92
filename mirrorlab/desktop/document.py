"""The document: the one mutable thing in the window. Views take it and only watch it.

All that an undo can bring back is one frozen `State`. Every change, whatever it touches, is a step from
one state to the next on the undo stack; steps of one gesture (typing in one cell, one drag) merge.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoCommand, QUndoStack

from mirrorlab.desktop.state import Seed, Settings, State, fitted, read_again
from mirrorlab.desktop.work import Work
from mirrorlab.drawing.model import Key
from mirrorlab.mirrors import Arrangement, Finding, Orbit, OrbitError, TooLarge

__all__ = ["FEWEST_MIRRORS", "MOST_MIRRORS", "Document", "Seed", "Settings", "State", "fitted"]

MOST_MIRRORS = 8
"""The triangle holds so many typed mirrors; the theory goes as far."""

FEWEST_MIRRORS = 2
"""One mirror has no angle to type."""

AT_ONCE = 4000
"""Orbits of up to so many images are made while one types (under a few milliseconds); longer ones run
beside the window, with progress and a cancel button."""

ORBIT_JOB = "images"
"""Name of the job that makes a long orbit."""

UNDO_STEPS = 500
"""Enough for a day's work; each step holds two small states."""


class _Step(QUndoCommand):
    """From one state to the next."""

    def __init__(self, document: Document, after: State, text: str, gesture: str) -> None:
        super().__init__(text)
        self._document = document
        self._before = document.state
        self._after = after
        self._gesture = gesture

    def id(self) -> int:
        return 1 if self._gesture else -1

    def mergeWith(self, other: QUndoCommand) -> bool:
        if not isinstance(other, _Step) or other._gesture != self._gesture:
            return False
        self._after = other._after
        return True

    def redo(self) -> None:
        self._document._show(self._after)

    def undo(self) -> None:
        self._document._show(self._before)


class Document(QObject):
    """What the window works on.

    Attributes
    ----------
    arrangement : Arrangement
    finding : Finding
    orbit : Orbit or None
        None while a long orbit is being made, when it was refused, or when there is none; `orbit_note`
        then says why.
    seed : Seed
    settings : Settings
    crystal, glass : object or None
        Frozen values of the benches.
    selection : Key or None
        What is picked in all pictures and in the table. Picking is no change, so undo leaves it alone.
    undo_stack : QUndoStack
    work : Work
        Jobs beside the window.
    name : str
        What the arrangement is called; of the file or sample it came from.

    Signals
    -------
    arrangement_changed()
        Another arrangement, with its finding, seed and orbit. `seed_changed` is not emitted as well.
    seed_changed()
        Another seed or, for long orbits, the orbit has come.
    selection_changed(), settings_changed(), crystal_changed(), glass_changed(), name_changed()
    settled()
        All that follows from a change has been told; comes after the signals above.
    """

    arrangement_changed = Signal()
    seed_changed = Signal()
    selection_changed = Signal()
    settings_changed = Signal()
    crystal_changed = Signal()
    glass_changed = Signal()
    name_changed = Signal()
    settled = Signal()

    def __init__(self, state: State, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.undo_stack = QUndoStack(self)
        self.undo_stack.setUndoLimit(UNDO_STEPS)
        self.work = Work(self)
        self.state = state
        self.finding: Finding = state.arrangement.finding()
        self.orbit: Orbit | None = None
        self.orbit_note = ""
        self._selection: Key | None = None
        self._paths: dict[int, Path] = {}
        self._firsts: dict[int, State] = {state.sheet: state}
        self._gestures = 0
        self._sheets = state.sheet
        self._make_orbit()

    @property
    def arrangement(self) -> Arrangement:
        """The typed mirrors."""
        return self.state.arrangement

    @property
    def seed(self) -> Seed:
        """Where the seed stands, as asked for; `orbit.seed` has its coordinates."""
        return self.state.seed

    @property
    def settings(self) -> Settings:
        """How angles are read and written."""
        return self.state.settings

    @property
    def crystal(self) -> Any:
        """The crystal bench's value."""
        return self.state.crystal

    @property
    def glass(self) -> Any:
        """The glass bench's value."""
        return self.state.glass

    @property
    def name(self) -> str:
        """What the arrangement is called; of the file or sample it came from."""
        return self.state.name

    @property
    def selection(self) -> Key | None:
        """What is picked in the pictures and the table."""
        return self._selection

    @property
    def path(self) -> Path | None:
        """The file that saving writes, if there is one yet."""
        return self._paths.get(self.state.sheet)

    @property
    def altered(self) -> bool:
        """Whether the sheet differs from how it was opened or last saved."""
        first, now = self._firsts[self.state.sheet], self.state
        same = first.arrangement is now.arrangement and first.seed == now.seed
        return not (same and first.crystal is now.crystal and first.glass is now.glass)

    # -- changes -----------------------------------------------------------------------------------

    def new_gesture(self, what: str) -> str:
        """A name for one gesture; changes made under it become one undo step."""
        self._gestures += 1
        return f"{what} {self._gestures}"

    def change(self, text: str, gesture: str = "", **fields: Any) -> None:
        """Go to a state that differs in the named fields, as one undoable step called `text`."""
        after = replace(self.state, **fields)
        self.undo_stack.push(_Step(self, after, text, gesture))

    def set_angle(self, pair: int, text: str, gesture: str = "") -> None:
        """Type the angle of a pair; raises `AngleError` and changes nothing when it cannot be read."""
        if self.arrangement.given_normals:
            texts = [angle.text for angle in self.arrangement.angles]
            texts[pair] = text
            arrangement = Arrangement.from_angles(texts, self.settings.reading)
        else:
            arrangement = self.arrangement.with_angle(pair, text)
        letters = self.arrangement.letters
        i, j = self.arrangement.pairs[pair]
        self.set_arrangement(arrangement, f"angle {letters[i]}{letters[j]}", gesture)

    def set_arrangement(
        self, arrangement: Arrangement, text: str, gesture: str = "", name: str | None = None
    ) -> None:
        """Put another arrangement in place; the seed is kept where it still makes sense."""
        fields: dict[str, Any] = {"arrangement": arrangement, "seed": fitted(self.seed, arrangement)}
        if name is not None:
            fields["name"] = name
        self.change(text, gesture, **fields)

    def put_sheet(self, arrangement: Arrangement, name: str, path: Path | None = None, **fields: Any) -> None:
        """Put another sheet in place: a sample, a family, a file. Undo brings the former one back."""
        self._sheets += 1
        if path is not None:
            self._paths[self._sheets] = path
        fields.setdefault("seed", fitted(self.seed, arrangement))
        after = replace(self.state, arrangement=arrangement, name=name, sheet=self._sheets, **fields)
        self._firsts[self._sheets] = after
        self.undo_stack.push(_Step(self, after, f"open {name}", ""))
        if path is not None:
            self.undo_stack.setClean()

    def saved_as(self, path: Path) -> None:
        """The sheet now stands in that file."""
        self._paths[self.state.sheet] = path
        self._firsts[self.state.sheet] = self.state
        self.undo_stack.setClean()
        self.name_changed.emit()

    def add_mirror(self) -> None:
        """One more mirror, at right angles to all others."""
        old = self.arrangement
        angles = dict(zip(old.pairs, old.angles, strict=True))
        pairs = [(i, j) for i in range(old.size + 1) for j in range(i + 1, old.size + 1)]
        made = Arrangement.from_angles([angles.get(pair, "90") for pair in pairs], self.settings.reading)
        self.set_arrangement(made, f"add mirror {made.letters[-1]}")

    def remove_mirror(self, index: int) -> None:
        """Take a mirror away; the later ones move up by a letter."""
        old = self.arrangement
        if old.given_normals and old.normals is not None:
            rows = [row for i, row in enumerate(old.normals) if i != index]
            made = Arrangement.from_normals(rows, self.settings.reading)
        else:
            kept = [a for pair, a in zip(old.pairs, old.angles, strict=True) if index not in pair]
            made = Arrangement.from_angles(kept, self.settings.reading)
        self.set_arrangement(made, f"remove mirror {old.letters[index]}")

    def set_seed(self, seed: Seed, text: str = "seed", gesture: str = "") -> None:
        """Move the seed."""
        self.change(text, gesture, seed=seed)

    def set_settings(self, settings: Settings) -> None:
        """Change how angles are read; all typed angles are read again."""
        fields: dict[str, Any] = {"settings": settings}
        if settings.reading != self.settings.reading:
            fields["arrangement"] = read_again(self.arrangement, settings.reading)
        self.change("settings", "", **fields)

    def set_crystal(self, value: Any, text: str, gesture: str = "") -> None:
        """Put another value of the crystal bench in place."""
        self.change(text, gesture, crystal=value)

    def set_glass(self, value: Any, text: str, gesture: str = "") -> None:
        """Put another value of the glass bench in place."""
        self.change(text, gesture, glass=value)

    def select(self, key: Key | None) -> None:
        """Pick a part in all pictures and in the table."""
        if key != self._selection:
            self._selection = key
            self.selection_changed.emit()

    # -- what follows from the state ---------------------------------------------------------------

    def _show(self, after: State) -> None:
        before, self.state = self.state, after
        other_mirrors = after.arrangement is not before.arrangement
        other_seed = after.seed != before.seed
        limit = after.settings.most_images != before.settings.most_images
        if other_mirrors:
            self.finding = after.arrangement.finding()
        if other_mirrors or other_seed or limit:
            self._make_orbit()
            self._selection = None
        if after.settings != before.settings:
            self.settings_changed.emit()
        if other_mirrors:
            self.arrangement_changed.emit()
        elif other_seed or limit:
            self.seed_changed.emit()
        if after.crystal is not before.crystal:
            self.crystal_changed.emit()
        if after.glass is not before.glass:
            self.glass_changed.emit()
        if after.name != before.name or after.sheet != before.sheet:
            self.name_changed.emit()
        self.settled.emit()

    def _make_orbit(self) -> None:
        self.work.cancel(ORBIT_JOB)
        self.orbit, self.orbit_note = None, ""
        group = self.finding.group
        if group is None:
            self.orbit_note = "No list of images: these reflections make no finite group."
            return
        if group.order > AT_ONCE:
            self.orbit_note = "Making the images …"
            self.work.start(ORBIT_JOB, self._orbit_job(), self._orbit_came, self._orbit_failed)
            return
        try:
            self.orbit = self._orbit_job()(None)
        except (OrbitError, TooLarge) as error:
            self.orbit_note = why_none(error)

    def _orbit_job(self) -> Callable[[Any], Orbit]:
        arrangement, seed, limit = self.arrangement, self.seed, self.settings.most_images
        return lambda progress: arrangement.orbit(
            heights=seed.heights,
            point=seed.point,
            place=seed.place,
            rotations=seed.rotations,
            limit=limit,
            progress=progress,
        )

    def _orbit_came(self, orbit: Orbit) -> None:
        self.orbit, self.orbit_note = orbit, ""
        self.seed_changed.emit()

    def _orbit_failed(self, error: Exception) -> None:
        if not isinstance(error, OrbitError | TooLarge):
            raise error
        self.orbit_note = why_none(error)
        self.seed_changed.emit()


def why_none(error: Exception) -> str:
    """Why there is no list of images, for a person."""
    if isinstance(error, TooLarge):
        return (
            f"{error.size:,} images would take {error.memory / 2**20:,.0f} MiB; "
            f"the limit is {error.limit:,} images. Raise it on the bench, or move the seed onto a wall."
        )
    return str(error)
