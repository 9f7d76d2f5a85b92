"""Tolerance: what errors of the angles do, how large they may be, and what chance makes of them."""

from __future__ import annotations

from functools import partial
from typing import Any

import numpy as np
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.bench_parts import FactRows
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.answers import Answer
from mirrorlab.desktop.glass.edge_errors import EdgeErrors
from mirrorlab.desktop.glass.glass_parts import Entries, Entry
from mirrorlab.desktop.glass.glass_section import GlassSection, told, why_no_kind
from mirrorlab.desktop.glass.glass_state import WORDS
from mirrorlab.desktop.glass.histogram import Histogram
from mirrorlab.desktop.glass.workings import intent_and_actual, kind_of, number, whole_number
from mirrorlab.desktop.parts import Segments, button, label
from mirrorlab.desktop.rows import Column
from mirrorlab.optics.lengths import AssemblyError, positive_length
from mirrorlab.optics.montecarlo import MOST_DRAWS, SeamChances, seam_chances
from mirrorlab.optics.tolerance import Intent, Tolerance, tolerance_of

LARGEST_SEED = 2**31 - 1
NO_TURN = 5e-7
"""Degrees that are called none: far below what glass can be set to, above rounding."""

LARGEST_SPREAD = 10.0
"""Degrees, as `seam_chances` takes them."""


class ToleranceSection(GlassSection):
    """How exact the angles must be."""

    name = "Tolerance"
    about = "Actual against intended angles, the seam they open, and how far off they may be"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.error = label("", "wrong", wrap=True)
        self.edges = EdgeErrors()
        self.seam = Entries(
            (
                ("distance", Entry("Seam seen at", "Distance from the edge or the corner's point")),
                ("limit", Entry("Seam wanted below", "Largest seam at that distance; empty asks for none")),
            )
        )
        self.facts = FactRows()
        self.spread = Segments(
            ("Normal", "Even"), hints=("Errors spread around zero", "All errors up to a largest one alike")
        )
        self.chance = Entries(
            (
                ("size", Entry("Off by °", "Standard deviation, or the largest error when even")),
                ("draws", Entry("Assemblies", f"How many are drawn, up to {MOST_DRAWS:,}")),
                ("draw_seed", Entry("Start at", "The same number draws the same assemblies")),
            )
        )
        self.histogram = Histogram()
        self.words = label("", "small", wrap=True)
        self.again = button("Draw again", "tight", "Drawing was stopped")
        self.figures = Answer(document.work, "tolerance", self)
        self.drawn = Answer(document.work, "seams by chance", self)
        self._intent: Intent | None = None
        self._lay_out()
        self.edges.wire(self)
        self.follow(self.seam)
        self.follow(self.chance)
        self.spread.chosen.connect(lambda k: self.change("spread of errors", spread=WORDS["spread"][k]))
        self.again.clicked.connect(self.drawn.again)
        for answer in (self.figures, self.drawn):
            answer.changed.connect(self._came)

    def _lay_out(self) -> None:
        column = self.column
        column.addWidget(label("Angles", "heading"))
        column.addWidget(self.error)
        column.addWidget(self.edges)
        column.addWidget(self.seam)
        column.addWidget(self.facts)
        column.addSpacing(4)
        column.addWidget(label("Chance", "heading"))
        column.addWidget(self.spread)
        column.addWidget(self.chance)
        column.addWidget(self.histogram)
        column.addWidget(self.words)
        column.addWidget(self.again)

    def refresh(self) -> None:
        state = self.state
        self.show_state(self.seam, self.chance)
        self.spread.choose(WORDS["spread"].index(state.spread))
        self._intent, error = None, None
        actual: tuple[float, ...] = ()
        if not kind_of(self.document.arrangement):
            error = AssemblyError(why_no_kind(self.document.arrangement), "angles")
        else:
            try:
                intent, actual = intent_and_actual(self.document.arrangement, state)
                self._intent = intent
                limit = state.limit.strip() or None
                distance = positive_length(state.distance, "distance")
                if limit is not None:
                    positive_length(limit, "limit")
                key = (intent, actual, distance, limit)
                self.figures.ask(key, partial(_figures, *key))
            except AssemblyError as wrong:
                error = wrong
        if error is not None:
            self.figures.forget()
        self.edges.show_edges(state, self._intent, actual, self.document.arrangement)
        self._show_error(error)
        self._ask_chances()
        self._show()

    def _ask_chances(self) -> None:
        state, wrong = self.state, ("", "")
        try:
            size = spread_size(state.size)
            draws = whole_number(state.draws, "draws", "assemblies", 1, MOST_DRAWS)
            seed = whole_number(state.draw_seed, "draw_seed", "start", 0, LARGEST_SEED)
            distance = positive_length(state.distance, "distance")
            if self._intent is not None:
                key = (self._intent, size, state.spread, draws, seed, distance)
                self.drawn.ask(key, partial(_drawn, *key))
            else:
                self.drawn.forget()
        except AssemblyError as error:
            wrong = (error.field, told(error))
            self.drawn.forget()
        self.chance.show_error(*wrong)

    def _show_error(self, error: AssemblyError | None) -> None:
        field, message = ("", "") if error is None else (error.field, told(error))
        found = self.seam.show_error(field, message)
        named = self.edges.show_error(field, message)
        self.error.setText("" if found or named else message)
        self.error.setVisible(bool(self.error.text()))

    def _came(self) -> None:
        if self.isVisible():
            self._show()

    def _show(self) -> None:
        found: Tolerance | None = self.figures.value
        wrong = self.figures.error
        if isinstance(wrong, AssemblyError):
            self._show_error(wrong)
        self.facts.show_facts({} if found is None else facts_of(found))
        if found is None:
            self.model.set_columns(())
            self.title, self.note = "No edges", self.error.text() or self.edges.error.text()
        else:
            self.model.set_columns(edge_columns(found))
            self.title = f"{len(found.edges)} edge{'s' if len(found.edges) != 1 else ''}"
            self.note = "; ".join((f"seams at {found.distance:.6g} mm", *found.notes))
        self._show_chances()
        self.rows_changed.emit()

    def _show_chances(self) -> None:
        found: SeamChances | None = self.drawn.value
        limit = None
        if self.state.limit.strip():
            try:
                limit = positive_length(self.state.limit, "limit")
            except AssemblyError:
                limit = None
        self.histogram.show_chances(found, limit)
        words = str(self.drawn.error or "")
        if found is not None:
            words = (
                f"Half show a seam below {found.percentile(50):.3g} mm, 95 of 100 below"
                f" {found.percentile(95):.3g} mm, at {found.distance:.6g} mm."
            )
            if limit is not None:
                words = f"{100 * found.share_below(limit):.1f} % stay below {limit:.6g} mm. {words}"
        elif self.drawn.stopped:
            words = "Stopped."
        elif self.drawn.busy:
            words = "Drawing …"
        self.words.setText(words)
        self.words.setVisible(bool(words))
        self.again.setVisible(self.drawn.stopped)


def _figures(
    intent: Intent, actual: tuple[float, ...], distance: float, limit: str | None, progress: Any
) -> Tolerance:
    progress(0, 1)
    return tolerance_of(intent, actual, distance, limit)


def _drawn(
    intent: Intent, size: float, spread: str, draws: int, seed: int, distance: float, progress: Any
) -> SeamChances:
    return seam_chances(intent, size, spread, draws, seed, distance, progress=progress)


def spread_size(text: str) -> float:
    """Degrees by which angles are off by chance. Raises `AssemblyError` with the field "size"."""
    size = number(text, "size", "error")
    if not 0 < size <= LARGEST_SPREAD:
        msg = f"error {text}°: must be over 0° and up to {LARGEST_SPREAD:g}°"
        raise AssemblyError(msg, "size")
    return size


def facts_of(found: Tolerance) -> dict[str, str]:
    """Figures of a tolerance."""
    facts = {"Largest seam": f"{found.seam:.3g} mm at {found.distance:.6g} mm"}
    off = [edge for edge in found.edges if abs(edge.leftover) > NO_TURN]
    facts["Left over"] = "<br>".join(f"{edge.pair} {signed(edge.leftover)}" for edge in off) or "nothing"
    if found.whole is not None:
        facts["Whole corner"] = f"{found.whole.worst:.3g}°, {found.whole.worst_seam:.3g} mm"
    if found.limit is not None and found.allowed_together is not None:
        together = found.allowed_together
        facts["Each may be off"] = (
            f"{together:.3g}° ({together * 60:.2g}′) all at once, for {found.limit:.6g} mm"
        )
    if found.returns is not None:
        facts["Beam returns"] = (
            f"{found.returns.centre_line:.3g}° off along the centre line, at worst {found.returns.worst:.3g}°"
        )
    return facts


def signed(degrees: float) -> str:
    """A left-over turn, and whether images overlap or leave a gap."""
    return f"{abs(degrees):.3g}° {'overlap' if degrees > 0 else 'gap'}"


def edge_columns(found: Tolerance) -> list[Column]:
    """The table of edges."""
    edges = found.edges

    def show(value: float) -> str:
        return f"{0.0 if abs(value) < 5e-10 else value:.6g}".replace("-", "−")

    return [
        Column("edge", [edge.pair for edge in edges], text=True),
        Column("meant °", np.array([edge.intended for edge in edges]), show),
        Column("actual °", np.array([edge.actual for edge in edges]), show),
        Column("off by °", np.array([edge.error for edge in edges]), show),
        Column("sectors", np.array([edge.sectors for edge in edges]), hint="images that go once around"),
        Column(
            "left over °",
            np.array([edge.leftover for edge in edges]),
            show,
            "positive: images overlap; negative: a gap",
        ),
        Column("seam mm", np.array([edge.seam for edge in edges]), show),
        Column(
            "alone may be off °", [edge.allowed for edge in edges], lambda v: "–" if v is None else f"{v:.4g}"
        ),
        Column(
            "seam when exact",
            ["yes" if edge.always else "no" for edge in edges],
            hint="not 180°/m: images meet in a seam anyway",
            text=True,
        ),
    ]
