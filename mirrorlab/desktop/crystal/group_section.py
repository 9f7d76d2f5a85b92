"""Which point group: what the mirrors leave open, what decides, and facts of the one worked with."""

from __future__ import annotations

from html import escape
from pathlib import Path

import numpy as np
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.crystal.candidates import Candidate, decide
from mirrorlab.crystal.mirror_match import in_space
from mirrorlab.crystal.operations import CrystalError, Operation
from mirrorlab.crystal.symbols import typographic
from mirrorlab.desktop import symbols
from mirrorlab.desktop.angle_text import plainly_typed
from mirrorlab.desktop.bench_parts import FactRows, LineField
from mirrorlab.desktop.crystal.crystal_parts import Choice
from mirrorlab.desktop.crystal.crystal_pictures import axis_directions, mirror_keys
from mirrorlab.desktop.crystal.section import Section
from mirrorlab.desktop.crystal.workings import SAME_PLACE, Working, candidates, simple_mirrors
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import button, label
from mirrorlab.desktop.printed import as_sentence
from mirrorlab.desktop.rows import Column
from mirrorlab.desktop.stylesheet import set_wrong
from mirrorlab.drawing.model import Key
from mirrorlab.mirrors import Arrangement

IN_A_ROW = 5


class GroupSection(Section):
    """The working group."""

    name = "Group"
    about = "Which point groups have these mirrors, and what decides between them"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.heading = label("", "heading")
        self.choices: list[Choice] = []
        self.more = button("", "line")
        self.more.setCheckable(True)
        self.more_grid = QWidget()
        self._grid = QGridLayout(self.more_grid)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setSpacing(4)
        self.more_grid.hide()
        self.more.toggled.connect(self.more_grid.setVisible)
        self.field = LineField()
        self.field.setPlaceholderText("-43m, 31m, D5h …")
        self.field.setAccessibleName("symbol of the group")
        self.take = button("Take", hint="Work with the group of this symbol")
        self.error = label("", "wrong", wrap=True)
        self.error.hide()
        self.facts = FactRows()
        self.put = button("Use its mirrors", "tight", "Put the mirrors of this group into the triangle")
        self._listed: tuple[str, ...] = ()
        self._shown: tuple[object, ...] = ()
        self._lay_out()
        self.field.returnPressed.connect(self._take)
        self.field.textEdited.connect(lambda _: self._say(""))
        self.take.clicked.connect(self._take)
        self.put.clicked.connect(self._put)

    def _lay_out(self) -> None:
        self.column.addWidget(self.heading)
        self._cards = QVBoxLayout()
        self._cards.setSpacing(4)
        self.column.addLayout(self._cards)
        self.column.addWidget(self.more)
        self.column.addWidget(self.more_grid)
        row = QHBoxLayout()
        row.setSpacing(4)
        row.addWidget(label("Symbol", "muted"))
        row.addWidget(self.field, 1)
        row.addWidget(self.take)
        self.column.addLayout(row)
        self.column.addWidget(self.error)
        self.column.addSpacing(4)
        self.column.addWidget(self.facts)
        self.column.addWidget(self.put)

    # -- showing -----------------------------------------------------------------------------------

    def refresh(self) -> None:
        now = (self.document.finding, self.state.group, self.state.marks)
        if now == self._shown:
            return  # another seed is no reason to look for groups
        self._shown = now
        work, why = self.working()
        self._show_candidates(work)
        self._say(why if self.state.group else "")
        if not self.field.hasFocus():
            self.field.setText("" if work is None or work.own else work.group.setting)
        self.facts.show_facts({} if work is None else facts_of(work))
        more = work is not None and (
            work.rotation is None or len(work.group.mirrors) != self.document.finding.mirror_count
        )
        self.put.setVisible(more and work is not None and len(work.group.mirrors) > 1)
        self._show_rows(work, why)

    def _show_candidates(self, work: Working | None) -> None:
        found = candidates(self.document.finding)
        cards = [] if found is None else list(found.exactly)
        chosen = None if work is None else work.group
        if found is not None and chosen is not None and all(c.group is not chosen for c in cards):
            more = next((c for c in found.at_least if c.group is chosen), None)
            cards += [Candidate(chosen, np.eye(3), False) if more is None else more]
        elif found is None and chosen is not None:
            cards = [Candidate(chosen, np.eye(3), False)]
        self.heading.setText("Groups with exactly these mirrors" if found is not None else "Working group")
        self._fit_cards(len(cards))
        letters = () if self.document.finding.group is None else self.document.finding.group.letters
        simple = None if self.document.finding.group is None else self.document.finding.group.simple
        at = next((c for c in cards if c.group is chosen), None)
        for card, one in zip(self.choices, cards, strict=True):
            live = one.group is chosen
            words = ""
            if found is not None and not live and at is not None and at.exact and one.exact:
                words = _plainly(decide(at, one, in_space(simple), letters).sentence, (at, one))
            elif live and not one.exact and found is not None:
                words = (
                    "It has these mirrors and more."
                    if any(one is c for c in found.at_least)
                    else "The mirrors on the sheet are not mirrors of this group."
                )
            beside = (
                f"{symbols.as_html(symbols.schoenflies(one.group.schoenflies))} · order {one.group.order}"
            )
            card.show_choice(one.group.setting, beside, words, "working group" if live else "", live)
            card.setProperty("symbol", one.group.setting)
        self._show_more(() if found is None else found.at_least)

    def _fit_cards(self, count: int) -> None:
        while len(self.choices) < count:
            card = Choice()
            card.chosen.connect(lambda c=card: self.work_with(str(c.property("symbol"))))
            self.choices.append(card)
            self._cards.addWidget(card)
        while len(self.choices) > count:
            card = self.choices.pop()
            self._cards.removeWidget(card)
            card.hide()
            card.deleteLater()

    def _show_more(self, more: tuple[Candidate, ...]) -> None:
        names = tuple(one.group.setting for one in more)
        self.more.setVisible(bool(names))
        self.more_grid.setVisible(bool(names) and self.more.isChecked())
        count = len(names)
        self.more.setText(f"{count} group{'s have' if count != 1 else ' has'} these mirrors and more")
        if names == self._listed:
            return
        self._listed = names
        while self._grid.count():
            item = self._grid.takeAt(0)
            if item is not None and item.widget() is not None:
                item.widget().hide()
                item.widget().deleteLater()
        for k, one in enumerate(names):
            made = button(typographic(one), "tight", f"Work with {typographic(one)}")
            made.setAccessibleName(one)
            made.clicked.connect(lambda _=False, s=one: self.work_with(s))
            self._grid.addWidget(made, k // IN_A_ROW, k % IN_A_ROW)

    def _show_rows(self, work: Working | None, why: str) -> None:
        if work is None:
            self.model.set_columns(())
            self.title, self.note = "No working group", why
            return
        operations = work.group.operations
        self.model.set_columns(operation_columns(operations), operation_keys(self.document, work))
        self.title = f"{work.group.order} operation{'s' if work.group.order != 1 else ''}"
        self.note = f"of {typographic(work.group.setting)}, {work.group.axes}"

    # -- doing -------------------------------------------------------------------------------------

    def work_with(self, symbol: str) -> None:
        """Make a group the working group."""
        found = candidates(self.document.finding)
        own = found is not None and found.mirror_group.hermann_mauguin == symbol
        self.change(f"group {symbol}", group="" if own else symbol)

    def _take(self) -> None:
        typed = self.field.text().strip()
        if not typed:
            self.change("group of the mirrors", group="")
            return
        from mirrorlab.crystal.pointgroups import point_group

        try:
            group = point_group(typed)
        except CrystalError as error:
            self._say(as_sentence(str(error)))
            return
        self._say("")
        self._shown = ()
        self.work_with(group.setting)
        self.refresh()

    def _put(self) -> None:
        work, _ = self.working()
        if work is None:
            return
        made = Arrangement.from_normals(simple_mirrors(work.group), self.document.settings.reading)
        symbol = work.group.setting
        self.document.put_sheet(plainly_typed(made), f"Mirrors of {symbol}", crystal=self.state)

    def _say(self, message: str) -> None:
        self.error.setText(message)
        self.error.setVisible(bool(message))
        set_wrong(self.field, bool(message))

    def save_rows(self, path: Path) -> None:
        from mirrorlab.files.crystal_tables import write_operations

        work, _ = self.working()
        if work is not None:
            write_operations(path, work.group)


def _plainly(sentence: str, both: tuple[Candidate, Candidate]) -> str:
    """The sentence with its symbols printed as the trade does."""
    for one in both:
        name = one.group.hermann_mauguin
        if "-" in name:
            sentence = sentence.replace(name, typographic(name))
    return sentence


def facts_of(work: Working) -> dict[str, str]:
    """Facts of the working group, as rich text by name."""
    from mirrorlab.crystal.lattices import lattices_of

    group = work.group
    kinds = [
        word
        for word, true in (
            ("centrosymmetric", group.centrosymmetric),
            ("polar", group.polar),
            ("chiral", group.chiral),
        )
        if true
    ]
    lattices = lattices_of(group)
    made = symbols.as_html(symbols.hermann_mauguin(group.mirror_subgroup.hermann_mauguin))
    mirrors = f"{len(group.mirrors)}, together {made}" if group.mirrors else "none"
    carried = " ".join(one.symbol for one in lattices.required)
    if lattices.also:
        carried += f"; as more symmetric ones {' '.join(one.symbol for one in lattices.also)}"
    return {
        "System": escape(group.name.system),
        "Laue class": symbols.as_html(symbols.hermann_mauguin(group.laue_class)),
        "Kind": ", ".join(kinds) or "neither centrosymmetric, polar nor chiral",
        "Mirrors": mirrors,
        "Lattices": carried or "none can carry it",
    }


def operation_columns(operations: tuple[Operation, ...]) -> list[Column]:
    """The table of a group's operations."""
    kinds = [
        ("rotation" if one.proper else "mirror" if one.kind == "m" else "rotoinversion") for one in operations
    ]
    kinds[0] = "identity"
    kinds = ["centre" if one.kind == "-1" else kind for one, kind in zip(operations, kinds, strict=True)]
    return [
        Column("operation", np.arange(1, len(operations) + 1)),
        Column(
            "symbol", [one.text for one in operations], hint="with its axis [uvw] or plane (hkl)", text=True
        ),
        Column("kind", kinds, text=True),
        Column("image of x,y,z", [one.triplet for one in operations], text=True),
    ]


def operation_keys(document: Document, work: Working) -> list[Key]:
    """For each operation the mirror or axis it belongs to in the stereogram."""
    mirrors = iter(mirror_keys(document, work))
    axes = axis_directions(document, work)
    keys: list[Key] = []
    for k, one in enumerate(work.group.operations):
        if one.kind == "m":
            keys.append(next(mirrors))
        elif one.axis is not None and len(axes):
            direction = work.group.basis @ np.asarray(one.axis, float)
            cosines = np.abs(axes @ direction) / np.linalg.norm(direction)
            place = int(np.argmax(cosines))
            keys.append(("axis", place) if cosines[place] > 1 - SAME_PLACE else ("operation", k))
        else:
            keys.append(("axis", -1) if one.kind == "-1" else ("operation", k))
    return keys
