"""Measured angles of the triangle held against all closed arrangements."""

from __future__ import annotations

from dataclasses import replace
from functools import partial
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop.angle_text import plainly_typed
from mirrorlab.desktop.bench_parts import LineField
from mirrorlab.desktop.crystal.answered_section import AnsweredSection
from mirrorlab.desktop.crystal.crystal_parts import Choice
from mirrorlab.desktop.document import Document, fitted
from mirrorlab.desktop.parts import button, label
from mirrorlab.desktop.printed import as_sentence, with_pi
from mirrorlab.desktop.rows import Column
from mirrorlab.desktop.seed_entry import number
from mirrorlab.desktop.stylesheet import set_wrong
from mirrorlab.drawing.model import Key
from mirrorlab.mirrors import Arrangement

if TYPE_CHECKING:
    from mirrorlab.crystal.fit import Fit, FitCandidate

CARDS = 4
"""Candidates shown as cards; all of them stand in the table."""

FITTING = "Holding the angles against all closed arrangements …"


class FitSection(AnsweredSection):
    """Which closed arrangement was measured."""

    name = "Fit"
    about = "Measured angles, such as 59.8(3), held against all closed arrangements"
    job = "the fit"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.measured = label("", "muted", wrap=True)
        self.back = button("Put the measured angles back", "tight")
        self.sigma = LineField()
        self.sigma.setPlaceholderText("as typed")
        self.sigma.setFixedWidth(76)
        self.sigma.setAccessibleName("uncertainty of angles without one")
        self.sigma_error = label("", "wrong", wrap=True)
        self.sentence = label("", "", wrap=True)
        self.cards: list[Choice] = []
        self.apply = button("", "tight", "Put the arrangement of the chosen row into the triangle")
        self.notes = label("", "small", wrap=True)
        self._lay_out()
        self.sigma.textEdited.connect(
            lambda text: self.change("uncertainty", self.gesture, fit_sigma=text.strip())
        )
        self.sigma.entered.connect(lambda: self.begin("uncertainty"))
        self.back.clicked.connect(self._put_back)
        self.apply.clicked.connect(self._apply_chosen)
        document.selection_changed.connect(self._show_chosen)

    def _lay_out(self) -> None:
        self.column.addWidget(label("Measured angles", "heading"))
        self.column.addWidget(self.measured)
        self.column.addWidget(self.back)
        row = QHBoxLayout()
        row.setSpacing(6)
        row.addWidget(label("σ of angles without one", "muted"), 1)
        row.addWidget(self.sigma)
        row.addWidget(label("°", "muted"))
        self.column.addLayout(row)
        self.column.addWidget(self.sigma_error)
        self.column.addSpacing(4)
        self.column.addWidget(label("Closed arrangements, the best first", "heading"))
        self.column.addWidget(self.sentence)
        self._stack = QVBoxLayout()
        self._stack.setSpacing(4)
        self.column.addLayout(self._stack)
        self.column.addWidget(self.apply)
        self.column.addWidget(self.notes)

    # -- asking ------------------------------------------------------------------------------------

    def texts(self) -> tuple[str, ...]:
        """The angles to fit: those of the triangle, or the measured ones that a fitted arrangement replaced."""
        arrangement, kept = self.document.arrangement, self.state.fit_texts
        measured = any(angle.uncertainty for angle in arrangement.angles)
        if not measured and len(kept) == len(arrangement.angles) and not arrangement.given_normals:
            return kept
        return tuple(angle.text for angle in arrangement.angles)

    def refresh(self) -> None:
        state, texts = self.state, self.texts()
        pairs = self.document.arrangement.pair_names
        replaced = texts == state.fit_texts and not self._in_triangle(texts)
        typed = "  ".join(f"{name}\u00a0{text}" for name, text in zip(pairs, texts, strict=True))
        self.measured.setText(
            f"Measured were {typed}" if replaced else "Those of the triangle, such as 59.8(3)."
        )
        self.back.setVisible(replaced)
        if self.sigma.text().strip() != state.fit_sigma:
            self.sigma.setText(state.fit_sigma)
        sigma = number(state.fit_sigma) if state.fit_sigma else None
        wrong = bool(state.fit_sigma) and (sigma is None or not 0 < sigma <= 90)
        set_wrong(self.sigma, wrong)
        told = f'"{state.fit_sigma}": no uncertainty; write degrees above 0, such as 0.3' if wrong else ""
        self.sigma_error.setText(told)
        self.sigma_error.setVisible(wrong)
        if wrong:
            self.drop("Type the uncertainty, or leave it empty.")
        else:
            self.ask((texts, sigma), partial(_fit, texts, sigma))
        self.show_answer()

    def _in_triangle(self, texts: tuple[str, ...]) -> bool:
        return tuple(angle.text for angle in self.document.arrangement.angles) == texts

    # -- showing -----------------------------------------------------------------------------------

    def show_answer(self) -> None:
        found: Fit | None = self.answer
        self.title = "No fit"
        if found is None:
            self.sentence.setText(self.problem or FITTING)
            self.model.set_columns(())
            self.note = self.problem or FITTING
            self.notes.hide()
        else:
            notation = self.document.settings.notation
            self.sentence.setText(_told(found, notation))
            keys: list[Key] = [("candidate", k) for k in range(len(found.candidates))]
            self.model.set_columns(candidate_columns(found, notation), keys)
            self.title = f"{len(found.candidates)} closed arrangements"
            self.note = f"χ² of {found.degrees_of_freedom} angles; pulls in standard uncertainties"
            self.notes.setText(" ".join(as_sentence(note) for note in found.notes))
            self.notes.setVisible(bool(found.notes))
        self._show_cards(() if found is None else found.candidates[:CARDS])
        self._show_chosen()
        self.rows_changed.emit()

    def _show_cards(self, candidates: tuple[FitCandidate, ...]) -> None:
        while len(self.cards) < len(candidates):
            card = Choice()
            card.chosen.connect(partial(self._apply, len(self.cards)))
            self.cards.append(card)
            self._stack.addWidget(card)
        while len(self.cards) > len(candidates):
            card = self.cards.pop()
            self._stack.removeWidget(card)
            card.hide()
            card.deleteLater()
        notation = self.document.settings.notation
        now = tuple(angle.fraction for angle in self.document.arrangement.angles)
        for card, one in zip(self.cards, candidates, strict=True):
            pairs = [name.pair for name in self.answer.measured]
            live = now == one.angles and not any(
                angle.uncertainty for angle in self.document.arrangement.angles
            )
            state = "in the triangle" if live else f"p {_probability(one.probability)}"
            card.show_choice(one.symbol, _angles(one, notation), _pulls(one, pairs), state, live)
            card.setToolTip("Put it into the triangle")

    def _show_chosen(self) -> None:
        place = self._chosen()
        self.apply.setVisible(place is not None and place >= len(self.cards))
        if place is not None:
            self.apply.setText(f"Put {self.answer.candidates[place].symbol} into the triangle")

    def _chosen(self) -> int | None:
        key = self.document.selection
        if key is None or key[0] != "candidate" or self.answer is None:
            return None
        return key[1] if key[1] < len(self.answer.candidates) else None

    # -- doing -------------------------------------------------------------------------------------

    def _apply_chosen(self) -> None:
        place = self._chosen()
        if place is not None:
            self._apply(place)

    def _apply(self, place: int) -> None:
        if self.answer is None:
            return
        one = self.answer.candidates[place]
        made = one.arrangement if one.one_line else plainly_typed(one.arrangement)
        self._put(made, f"fit {one.symbol}", tuple(m.text for m in self.answer.measured))

    def _put_back(self) -> None:
        texts = self.state.fit_texts
        made = Arrangement.from_angles(texts, self.document.settings.reading)
        self._put(made, "measured angles", texts)

    def _put(self, made: Arrangement, text: str, kept: tuple[str, ...]) -> None:
        state = replace(self.state, fit_texts=kept)
        seed = fitted(self.document.seed, made)
        self.document.change(text, arrangement=made, seed=seed, crystal=state)


def _fit(texts: tuple[str, ...], sigma: float | None) -> Fit:
    from mirrorlab.crystal.fit import fit_angles

    return fit_angles(texts, sigma)


def _angles(one: FitCandidate, notation: str) -> str:
    return with_pi(one.angles_in(notation))


def _told(found: Fit, notation: str) -> str:
    """The answer in a few words; the numbers stand on the cards."""
    best = found.best
    told = "The best fits." if best.fits else "None of them fits; the nearest comes first."
    if best.misfit and not best.fits:
        told += f" The misfit is {best.misfit}: the other angles fit without it."
    if found.tied:
        names = ", ".join(f"{one.symbol} at {_angles(one, notation)}" for one in found.tied[:2])
        more = f" and {len(found.tied) - 2} more" if len(found.tied) > 2 else ""
        told += f" At this precision it cannot be told from {names}{more}."
    return told


def _probability(value: float) -> str:
    return f"= {value:.2f}" if value >= 0.01 else f"= {value:.3f}" if value >= 0.001 else "< 0.001"


def _pulls(one: FitCandidate, pairs: list[str]) -> str:
    pulls = [
        f"{pair}\u00a0{'exact' if pull is None else f'{pull:+.1f}σ'}{' (180° − θ)' if other else ''}"
        for pair, pull, other in zip(pairs, one.pulls, one.supplements, strict=True)
    ]
    shown = "  ".join(pulls[:6]) + (" …" if len(pulls) > 6 else "")
    misfit = f"; misfit {one.misfit}" if one.misfit else ""
    return f"χ² {_tidy(one.chi_squared)}   {shown}{misfit}".replace("-", "−")


def _tidy(chi_squared: float) -> str:
    return f"{chi_squared:.3g}" if chi_squared < 1000 else f"{chi_squared:,.0f}"


def candidate_columns(found: Fit, notation: str = "degrees") -> list[Column]:
    """The table of candidates."""
    rows = found.candidates
    columns = [
        Column("rank", np.arange(1, len(rows) + 1)),
        Column("group", [one.symbol for one in rows], text=True),
        Column("angles", [_angles(one, notation) for one in rows], text=True),
        Column("χ²", np.array([one.chi_squared for one in rows]), _tidy),
        Column(
            "probability",
            np.array([one.probability for one in rows]),
            lambda v: _probability(v).removeprefix("= "),
        ),
        Column("misfit", [one.misfit or "" for one in rows], text=True),
    ]
    for k, measured in enumerate(found.measured):
        columns.append(
            Column(
                f"pull {measured.pair}",
                [one.pulls[k] for one in rows],
                lambda v: "exact" if v is None else f"{v:+.2f}".replace("-", "−"),
                hint="measured less candidate, in standard uncertainties",
            )
        )
    return columns
