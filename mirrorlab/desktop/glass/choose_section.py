"""Choosing: about so many images through an opening, the nearest assemblies that close, and the whole list."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import partial
from typing import TYPE_CHECKING, Any

import numpy as np
from PySide6.QtCore import QSignalBlocker
from PySide6.QtWidgets import QCheckBox, QWidget

from mirrorlab.desktop.document import Document, fitted
from mirrorlab.desktop.glass.answers import Answer
from mirrorlab.desktop.glass.glass_parts import Card, Entries, Entry
from mirrorlab.desktop.glass.glass_section import GlassSection, told
from mirrorlab.desktop.glass.glass_state import WORDS
from mirrorlab.desktop.glass.workings import mirror_spec, whole_number
from mirrorlab.desktop.parts import Segments, label
from mirrorlab.desktop.printed import with_pi
from mirrorlab.desktop.rows import Column
from mirrorlab.drawing.model import Key
from mirrorlab.mirrors import Arrangement
from mirrorlab.optics.chooser import Choice, choices, nearest
from mirrorlab.optics.lengths import AssemblyError, positive_length

if TYPE_CHECKING:
    from collections.abc import Sequence

    from mirrorlab.optics.closing import Closing

NEAREST = 5
"""Cards: so many stand beside each other without scrolling."""

MOST_IMAGES = 100_000
BRIGHTEST = 0.999
"""Reflectance that perfect mirrors are listed with: with 1 every image of a tube would be bright."""


class ChooseSection(GlassSection):
    """What to build."""

    name = "Choose"
    about = "About how many images, through which opening: the assemblies that close"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.asked = Entries(
            (
                ("images", Entry("About so many images", "Images seen beside the object")),
                ("opening", Entry("Opening", "Longest side of what one looks through; mm, or 4.5in")),
            )
        )
        self.kinds = Segments(
            ("All", "Wedges", "Corners", "Tubes"),
            hints=(
                "",
                "Two mirrors",
                "Three mirrors that meet in a point",
                "Three or four mirrors around one direction",
            ),
        )
        self.whole = QCheckBox("Only those that fit for every eye")
        self.whole.setToolTip("One chamber between the mirrors: images fit together from wherever one looks")
        self.state_words = label("", "small", wrap=True)
        self.cards = [Card() for _ in range(NEAREST)]
        self.found: tuple[Choice, ...] = ()
        self._near: tuple[Choice, ...] = ()
        self._listed: object = None
        self.answer = Answer(document.work, "list of assemblies", self)
        self.column.addWidget(self.asked)
        self.column.addWidget(self.kinds)
        self.column.addWidget(self.whole)
        self.column.addWidget(label("Nearest", "heading"))
        self.column.addWidget(self.state_words)
        for card in self.cards:
            self.column.addWidget(card)
        self.hint = label(
            "All of them stand in the table below. Picking one puts its angles into the triangle.",
            "small",
            wrap=True,
        )
        self.column.addWidget(self.hint)
        self.follow(self.asked)
        self.kinds.chosen.connect(lambda k: self.change("kinds listed", kinds=WORDS["kinds"][k]))
        self.whole.toggled.connect(lambda on: self.change("only those that fit", whole=on))
        for k, card in enumerate(self.cards):
            card.chosen.connect(partial(self._card_chosen, k))
        self.answer.changed.connect(self._came)
        document.selection_changed.connect(self._picked)

    def refresh(self) -> None:
        state = self.state
        self.show_state(self.asked)
        self.kinds.choose(WORDS["kinds"].index(state.kinds))
        with QSignalBlocker(self.whole):
            self.whole.setChecked(state.whole)
        try:
            opening = positive_length(state.opening, "opening")
            reflectance = min(BRIGHTEST, mirror_spec(replace(state, reflectances=()), 0, "a").reflectance)
            whole_number(state.images, "images", "images", 1, MOST_IMAGES)
            self.asked.show_error("", "")
        except AssemblyError as error:
            self.asked.show_error(error.field, told(error))
            return
        self.answer.ask((opening, reflectance), partial(_listed, opening, reflectance))
        self._show()

    def _came(self) -> None:
        if self.isVisible():
            self._show()

    def _show(self) -> None:
        self.state_words.setVisible(False)
        if self.answer.value is None:
            words = (
                "Stopped." if self.answer.stopped else str(self.answer.error or "Working out what closes …")
            )
            self.state_words.setText(words)
            self.state_words.setVisible(True)
        state = self.state
        notation = self.document.settings.notation
        key = (id(self.answer.value), state.kinds, state.whole, notation)
        if key != self._listed:
            self._listed = key
            self.found = tuple(
                choice
                for choice in self.answer.value or ()
                if state.kinds in ("all", choice.closing.kind)
                and (choice.closing.chambers == 1 or not state.whole)
            )
            keys: list[Key] = [("choice", k) for k in range(len(self.found))]
            self.model.set_columns(choice_columns(self.found, notation) if self.found else (), keys)
            count = len(self.found)
            self.title = f"{count} assemblies that close" if count != 1 else "1 assembly that closes"
            if self.answer.value is None:
                self.title = "Assemblies that close"
            self.note = (
                "pick one to load it; lengths in mm"
                if self.found
                else self.state_words.text() or "None of these closes."
            )
            self.rows_changed.emit()
        self._show_cards()

    def _show_cards(self) -> None:
        try:
            wanted = whole_number(self.state.images, "images", "images", 1, MOST_IMAGES)
        except AssemblyError:
            return
        self._near = near = nearest(self.found, wanted, NEAREST)
        notation = self.document.settings.notation
        texts = [angle.fraction for angle in self.document.arrangement.angles]
        for k, card in enumerate(self.cards):
            card.setVisible(k < len(near))
            if k < len(near):
                closing = near[k].closing
                live = list(closing.fractions) == texts
                card.show_card(
                    _name(closing, notation).capitalize(), figure(near[k]), panels_words(near[k]), live
                )

    def _card_chosen(self, index: int) -> None:
        self.begin("choose")
        self.load(self._near[index])

    def _picked(self) -> None:
        key = self.document.selection
        if key is None or key[0] != "choice" or not self.isVisible() or key[1] >= len(self.found):
            return
        # Going through the list with the arrow keys is one step, from before the first row to the last one.
        if not self.gesture.startswith("choose"):
            self.begin("choose")
        self.load(self.found[key[1]])

    def load(self, choice: Choice) -> None:
        """Put an assembly's angles into the triangle, its opening staying as typed; one step."""
        angles, document = choice.closing.angles, self.document
        if [angle.text for angle in document.arrangement.angles] == list(angles):
            return
        arrangement = Arrangement.from_angles(list(angles), document.settings.reading)
        state = replace(
            self.state,
            depth="",
            sides="",
            truncated="",
            taper="",
            errors=(),
            eye=("",) * 3,
            turn=("",) * 2,
            field="",
        )
        if not state.length.strip():
            state = replace(state, length="200 mm")
        fields: dict[str, Any] = {} if state == self.state else {"glass": state}
        document.change(
            f"choose {choice.closing.name}",
            self.gesture,
            arrangement=arrangement,
            seed=fitted(document.seed, arrangement),
            **fields,
        )
        name = _name(choice.closing, document.settings.notation).capitalize()
        self.says.emit(f"{name}: {figure(choice)}. Undo brings back what was there.")


def _listed(opening: float, reflectance: float, progress: Any) -> tuple[Choice, ...]:
    return choices(opening, reflectance=reflectance, progress=progress)


def figure(choice: Choice) -> str:
    """How many images, for a person."""
    if choice.closing.images is None:
        return f"{choice.bright} bright images"
    return f"{choice.images} image{'s' if choice.images != 1 else ''}"


def panels_words(choice: Choice) -> str:
    """Sizes of the panels, equal ones together."""
    sizes: dict[str, str] = {}
    for letter, width, height in choice.panels:
        size = f"{width:.0f} × {height:.0f}"
        sizes[size] = sizes.get(size, "") + letter
    text = ", ".join(f"{letters} {size}" for size, letters in sizes.items()) + " mm"
    between = choice.closing.chambers
    return text if between == 1 else f"{text}; {between} chambers between"


def _name(closing: Closing, notation: str) -> str:
    return with_pi(closing.name_in(notation))


def choice_columns(found: Sequence[Choice], notation: str = "degrees") -> list[Column]:
    """The table of assemblies that close."""
    return [
        Column("assembly", [_name(one.closing, notation) for one in found], text=True),
        Column(
            "images",
            [one.closing.images for one in found],
            lambda v: "endless" if v is None else str(v),
            "seen beside the object",
        ),
        Column(
            "bright", np.array([one.bright for one in found]), hint="images that keep a tenth of their light"
        ),
        Column(
            "chambers",
            [one.closing.order for one in found],
            lambda v: "endless" if v is None else str(v),
            "that all mirrors cut space into",
        ),
        Column(
            "between",
            np.array([one.closing.chambers for one in found]),
            hint="chambers between the mirrors: 1 when images fit together for every eye",
        ),
        Column("group", [one.closing.symbol for one in found], text=True),
        Column(
            "edge angles",
            [" ".join(f"{math.degrees(a):.2f}°" for a in one.edge_angles) or "–" for one in found],
            hint="at the tip of each panel of a corner",
            text=True,
        ),
        Column("depth mm", [one.depth or None for one in found], lambda v: "–" if v is None else f"{v:.1f}"),
        Column("glass m²", np.array([one.area for one in found]), lambda v: f"{v:.4f}"),
        Column("panels", [one.problem or panels_words(one) for one in found], text=True),
    ]
