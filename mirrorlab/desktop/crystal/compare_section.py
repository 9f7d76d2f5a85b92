"""A list of points or poles held against the working group."""

from __future__ import annotations

from collections.abc import Hashable
from functools import partial
from typing import TYPE_CHECKING, Any

import numpy as np
from PySide6.QtCore import QSignalBlocker
from PySide6.QtWidgets import QCheckBox, QHBoxLayout, QWidget

from mirrorlab.crystal.symbols import typographic
from mirrorlab.desktop import symbols
from mirrorlab.desktop.bench_parts import FactRows, LineField
from mirrorlab.desktop.crystal.answered_section import AnsweredSection
from mirrorlab.desktop.crystal.crystal_parts import Choice
from mirrorlab.desktop.crystal.crystal_state import ORIENTATIONS
from mirrorlab.desktop.crystal.workings import Working, cell_basis, read_list
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Segments, button, label
from mirrorlab.desktop.rows import Column, fixed
from mirrorlab.desktop.seed_entry import number
from mirrorlab.desktop.stylesheet import set_wrong

if TYPE_CHECKING:
    from mirrorlab.crystal.compare import Comparison
    from mirrorlab.crystal.point_lists import PointList

OPERATIONS, POINTS, UNREAD = range(3)
COMPARING = "Comparing …"
SHOWN_LINES, MOST_NAMED = 3, 6


class CompareSection(AnsweredSection):
    """Whether measured points obey the group."""

    name = "Compare"
    about = "A list of points or face poles held against the working group"
    job = "the comparison"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.heading = label("No list yet", "heading")
        self.open = button("Open list", "", "A CSV file of points x,y,z, faces h,k,l, or poles azimuth,polar")
        self.unread = label("", "wrong", wrap=True)
        self.orientation = Segments(
            ("As given", "Refined", "Searched"),
            hints=(
                "The list stands as the standard setting does",
                "The list is turned to obey the group best, from where it stands",
                "The list may stand anyhow: the best orientation is looked for",
            ),
        )
        self.tolerance = LineField()
        self.tolerance.setPlaceholderText("from the list")
        self.tolerance.setFixedWidth(96)
        self.tolerance.setAccessibleName("largest deviation")
        self.unit = label("", "muted")
        self.tolerance_error = label("", "wrong", wrap=True)
        self.as_poles = QCheckBox("Directions only")
        self.as_poles.setToolTip("Points count by their direction, as face poles do")
        self.in_cell = QCheckBox("In the typed cell")
        self.in_cell.setToolTip("Coordinates are fractions of the cell typed under Cell, indices refer to it")
        self.sentence = label("", "", wrap=True)
        self.survivor = Choice()
        self.facts = FactRows()
        self.rows = Segments(
            ("Operations", "Points", "Not read"),
            hints=("Each operation with its deviations", "The points as they were turned", "Lines left out"),
        )
        self._lay_out()
        self._connect()

    def _lay_out(self) -> None:
        head = QHBoxLayout()
        head.addWidget(self.heading, 1)
        head.addWidget(self.open)
        self.column.addLayout(head)
        self.column.addWidget(self.unread)
        self.column.addWidget(label("Orientation", "muted"))
        self.column.addWidget(self.orientation)
        row = QHBoxLayout()
        row.setSpacing(6)
        row.addWidget(label("Tolerance", "muted"))
        row.addWidget(self.tolerance)
        row.addWidget(self.unit, 1)
        self.column.addLayout(row)
        self.column.addWidget(self.tolerance_error)
        row = QHBoxLayout()
        row.addWidget(self.as_poles)
        row.addWidget(self.in_cell)
        self.column.addLayout(row)
        self.column.addSpacing(4)
        self.column.addWidget(self.sentence)
        self.column.addWidget(self.survivor)
        self.column.addWidget(self.facts)
        self.column.addWidget(label("Rows of the table", "muted"))
        self.column.addWidget(self.rows)

    def _connect(self) -> None:
        self.open.clicked.connect(self.file_wanted)
        self.orientation.chosen.connect(
            lambda k: self.change("orientation of the list", orientation=ORIENTATIONS[k])
        )
        self.tolerance.textEdited.connect(
            lambda text: self.change("tolerance", self.gesture, list_tolerance=text.strip())
        )
        self.tolerance.entered.connect(lambda: self.begin("tolerance"))
        self.as_poles.toggled.connect(lambda on: self.change("directions only", as_poles=on))
        self.in_cell.toggled.connect(lambda on: self.change("list in the cell", list_in_cell=on))
        self.survivor.chosen.connect(self._work_with_survivor)
        self.rows.chosen.connect(lambda _: self._show_rows())

    # -- asking ------------------------------------------------------------------------------------

    def refresh(self) -> None:
        state = self.state
        points = read_list(state.list_text, state.list_name) if state.list_text else None
        work, why = self.working()
        basis = None if work is None else cell_basis(work.group, state)
        self._show_settings(points, basis is not None)
        tolerance = number(state.list_tolerance) if state.list_tolerance else None
        wrong = bool(state.list_tolerance) and (tolerance is None or tolerance <= 0)
        set_wrong(self.tolerance, wrong)
        told = f'"{state.list_tolerance}": no tolerance; write a number above 0' if wrong else ""
        self.tolerance_error.setText(told)
        self.tolerance_error.setVisible(wrong)
        if isinstance(points, str) or points is None:
            self.drop(points or "Open a list of points or poles, or drop it on the window.")
        elif work is None or wrong:
            self.drop(why or "Type a tolerance, or leave it empty.")
        else:
            chosen = basis if state.list_in_cell else None
            question = (points, work.group, tolerance, state.orientation, state.as_poles, _frozen(chosen))
            asked = partial(_compare, points, work, tolerance, state.orientation, state.as_poles, chosen)
            self.ask(question, asked)
        self.show_answer()

    def _show_settings(self, points: PointList | str | None, cell_fits: bool) -> None:
        state = self.state
        read = None if isinstance(points, str) else points
        self.heading.setText(f"{state.list_name}" if state.list_name else "No list yet")
        self.heading.setToolTip(state.list_name)
        bad = () if read is None else read.unreadable
        lines = [f'line {one.line}, "{one.text}": {one.reason}' for one in bad[:SHOWN_LINES]]
        more = f"… and {len(bad) - SHOWN_LINES} more, see the table" if len(bad) > SHOWN_LINES else ""
        self.unread.setText("\n".join([*lines, more]).strip())
        self.unread.setVisible(bool(bad))
        with QSignalBlocker(self.as_poles), QSignalBlocker(self.in_cell):
            self.as_poles.setChecked(state.as_poles)
            self.in_cell.setChecked(state.list_in_cell)
        self.as_poles.setEnabled(read is None or not read.directions)
        self.in_cell.setEnabled(cell_fits)
        self.orientation.choose(ORIENTATIONS.index(state.orientation))
        if self.tolerance.text().strip() != state.list_tolerance:
            self.tolerance.setText(state.list_tolerance)
        directions = state.as_poles or (read is not None and read.directions)
        self.unit.setText("degrees" if directions else "in its unit")
        self.rows.button(UNREAD).setEnabled(bool(bad))
        if not bad and self.rows.current == UNREAD:
            self.rows.choose(OPERATIONS)

    def _answered(self, question: Hashable, answer: Any) -> None:
        super()._answered(question, answer)
        if self.state.marks == "list":
            self.document.crystal_changed.emit()  # the stereogram has waited for it

    # -- showing -----------------------------------------------------------------------------------

    def show_answer(self) -> None:
        found: Comparison | None = self.answer
        if found is None:
            self.sentence.setText(self.problem or COMPARING)
            self.survivor.hide()
            self.facts.show_facts({})
        else:
            self.sentence.setText(_told(found))
            words = (
                "of the surviving operations"
                if found.closed
                else "largest group among the surviving operations"
            )
            work, _ = self.working()
            live = work is not None and work.group.hermann_mauguin == found.symbol
            beside = f"order {len(found.subgroup)}"
            self.survivor.show_choice(found.symbol, beside, words, "working group" if live else "", live)
            self.survivor.show()
            self.facts.show_facts(_facts(found))
        self._show_rows()

    def _show_rows(self) -> None:
        found: Comparison | None = self.answer
        points = read_list(self.state.list_text, self.state.list_name) if self.state.list_text else None
        if self.rows.current == UNREAD and points is not None and not isinstance(points, str):
            bad = points.unreadable
            self.model.set_columns(
                [
                    Column("line", np.array([one.line for one in bad])),
                    Column("text", [one.text for one in bad], text=True),
                    Column("reason", [one.reason for one in bad], text=True),
                ]
            )
            count = len(bad)
            self.title = f"{count} line{'s' if count != 1 else ''} not read"
            self.note = f"of {points.source}"
        elif found is None:
            self.model.set_columns(())
            self.title, self.note = "No comparison", self.problem or COMPARING
        elif self.rows.current == OPERATIONS:
            self.model.set_columns(operation_columns(found))
            self.title = f"{len(found.surviving)} of {found.group.order} operations survive"
            self.note = f"of {typographic(found.group.setting)}; deviations in {_unit(found)}"
        else:
            self.model.set_columns(point_columns(found), "listed")
            self.title = f"{len(found.points.labels)} {found.points.what}"
            self.note = f"turned to the standard setting, Cartesian; deviations in {_unit(found)}"
        self.rows_changed.emit()

    # -- doing -------------------------------------------------------------------------------------

    def _work_with_survivor(self) -> None:
        if self.answer is not None:
            self.change(f"group {self.answer.symbol}", group=self.answer.symbol)


def _frozen(basis: Any) -> bytes:
    return b"" if basis is None else np.asarray(basis, float).tobytes()


def _compare(
    points: PointList, work: Working, tolerance: float | None, orientation: str, poles: bool, basis: Any
) -> Comparison:
    from mirrorlab.crystal.compare import compare_points

    return compare_points(points, work.group, tolerance, orientation, poles=poles, basis=basis)


def _unit(found: Comparison) -> str:
    return "degrees" if found.unit == "degrees" else "the list's unit"


def _told(found: Comparison) -> str:
    count, order = len(found.surviving), found.group.order
    name = typographic(found.group.setting)
    if count == order:
        return f"The list obeys {name}: all {order} operations survive."
    if count == 1:
        return f"Of {name} only the identity survives."
    return f"{count} of {order} operations of {name} survive."


def _facts(found: Comparison) -> dict[str, str]:
    short = "°" if found.unit == "degrees" else ""
    turned = found.orientation
    axis = ", ".join(map(fixed(3), turned.axis))
    made = symbols.as_html(symbols.hermann_mauguin(found.generated_symbol))
    return {
        "Allowed": "3σ of both points" if found.tolerance is None else f"{found.tolerance:.4g}{short}",
        "RMS": "" if found.rms is None else f"{found.rms:.4g}{short}",
        "Turned by": "" if turned.how == "given" else f"{turned.angle:.4g}° about ({axis})",
        "Generate": "" if found.closed else made,
        "Notes": "; ".join(found.notes),
    }


def _named(labels: tuple[str, ...]) -> str:
    return ", ".join(labels) if len(labels) <= MOST_NAMED else f"{len(labels)} points"


def operation_columns(found: Comparison) -> list[Column]:
    """The table of operations with their deviations."""
    rows = found.operations
    return [
        Column("operation", np.array([one.index + 1 for one in rows])),
        Column("symbol", [one.text for one in rows], text=True),
        Column("survives", ["yes" if one.survives else "no" for one in rows], text=True),
        Column("rms", [one.rms for one in rows], hint="root-mean-square deviation"),
        Column("largest", [one.largest for one in rows]),
        Column("at", [one.worst for one in rows], hint="the point of the largest deviation", text=True),
        Column(
            "unmatched",
            [_named(one.unmatched) for one in rows],
            hint="points without a partner",
            text=True,
        ),
    ]


def point_columns(found: Comparison) -> list[Column]:
    """The table of points with their largest deviation under the surviving operations."""
    off = np.array([found.operations[k].deviation for k in found.subgroup])
    lonely = [sum(label in one.unmatched for one in found.operations) for label in found.points.labels]
    return [
        Column("label", list(found.points.labels), text=True),
        Column("line", np.array(found.points.lines)),
        *(Column(axis, found.coordinates[:, k], fixed(5)) for k, axis in enumerate("xyz")),
        Column("largest deviation", off.max(axis=0), hint="under the operations of the surviving group"),
        Column("without partner", np.array(lonely), hint="operations under which it has none"),
    ]
