"""What the finding rests on: numbers to check by hand, flags, and suggestions applied with one click."""

from __future__ import annotations

from html import escape

from PySide6.QtCore import Qt
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QFrame, QGridLayout, QHBoxLayout, QLabel, QScrollArea, QVBoxLayout, QWidget

from mirrorlab.desktop import symbols
from mirrorlab.desktop.angle_text import plain_text, pretty
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import button, label
from mirrorlab.desktop.printed import as_sentence, with_pi
from mirrorlab.desktop.theming import theming
from mirrorlab.mirrors import Arrangement, Finding, Suggestion

SUGGESTIONS_JOB = "suggestions"
FULL = 3
"""Rows of a Gram matrix up to which its column has room for four digits."""

FOLD, FOLD_EVERY = "\u200b", 10
"""A space without width, and after so many letters of a word one stands."""

SHEET_HEIGHT = 172
"""Pixels: the numbers of three mirrors stand in it whole; more of them scroll."""


class EvidenceSheet(QFrame):
    """Three columns below the band; filled only while they are in sight."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("evidence")
        self.setFixedHeight(SHEET_HEIGHT)
        self.document = document
        self._stale = True
        self.numbers = _Column("Pairs of mirrors", wide=True)
        self.gram = _Column("Gram matrix, −cos of the angles", wide=True)
        self.grounds = _Column("Why it is so")
        self.flags = _Column("Flags and suggestions")
        row = QHBoxLayout(self)
        row.setContentsMargins(16, 8, 8, 6)
        row.setSpacing(20)
        for column, stretch in ((self.numbers, 4), (self.gram, 4), (self.grounds, 6), (self.flags, 7)):
            row.addWidget(column, stretch)
        document.arrangement_changed.connect(self.watch)
        document.settings_changed.connect(self.watch)
        theming().changed.connect(self.watch)

    def watch(self) -> None:
        """Fill now when in sight, else when it comes into sight."""
        self._stale = True
        if self.isVisible():
            self._fill()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._stale:
            self._fill()

    def _fill(self) -> None:
        self._stale = False
        finding, arrangement = self.document.finding, self.document.arrangement
        notation = self.document.settings.notation
        self.numbers.show_html(pairs_html(arrangement, finding, notation))
        self.gram.show_html(gram_html(arrangement, finding))
        self.grounds.show_html(grounds_html(finding))
        self.flags.clear()
        for flag in finding.flags:
            reason = with_pi(flag.reason_in(notation))
            self.flags.add(
                label(reason if flag.letters in reason else f"{flag.letters}  {reason}", "", wrap=True)
            )
        if finding.kind == "closed" and not finding.flags:
            self.flags.add(
                label("No flags: every pair and cycle of mirrors suits a lattice.", "muted", wrap=True)
            )
        if finding.kind != "closed":
            self.flags.add(label("Looking for the nearest angles that close …", "muted"))
            self.document.work.start(
                SUGGESTIONS_JOB,
                lambda _: (finding, (*finding.supplements, *finding.suggestions)),
                self._suggest,
            )

    def _suggest(self, found: tuple[Finding, tuple[Suggestion, ...]]) -> None:
        finding, suggestions = found
        if finding is not self.document.finding:
            return
        self.flags.drop_last()
        if not suggestions:
            self.flags.add(
                label("No other set of angles that closes or tiles was found nearby.", "muted", wrap=True)
            )
            return
        box = QWidget()
        grid = QGridLayout(box)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(10)
        grid.setVerticalSpacing(3)
        for k, suggestion in enumerate(suggestions):
            apply = button("Apply", "tight", f"Type these angles: {', '.join(suggestion.texts())}")
            apply.clicked.connect(lambda _=False, s=suggestion: self._apply(s))
            grid.addWidget(apply, k, 0)
            for c, html in enumerate(suggestion_html(suggestion, self.document.settings.notation), 1):
                text = label(html)
                text.setTextFormat(Qt.TextFormat.RichText)
                grid.addWidget(text, k, c)
        grid.setColumnStretch(3, 1)
        self.flags.add(box)

    def _apply(self, suggestion: Suggestion) -> None:
        reading = self.document.settings.reading
        arrangement = Arrangement.from_angles([plain_text(f) for f in suggestion.angles], reading)
        self.document.set_arrangement(arrangement, f"suggestion {suggestion.name}")


class _Column(QWidget):
    """A heading over things that scroll; those that are `wide` do so to the side as well."""

    def __init__(self, heading: str, wide: bool = False) -> None:
        super().__init__()
        self._body = QWidget()
        self._list = QVBoxLayout(self._body)
        self._list.setContentsMargins(0, 0, 0 if wide else 8, 0)
        self._list.setSpacing(6)
        self._list.addStretch(1)
        area = QScrollArea()
        area.setWidgetResizable(True)
        area.setFrameShape(QFrame.Shape.NoFrame)
        if not wide:
            area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        area.setWidget(self._body)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(4)
        column.addWidget(label(heading, "heading"))
        column.addWidget(area, 1)

    def add(self, widget: QWidget) -> None:
        """Put a widget below the others."""
        self._list.insertWidget(self._list.count() - 1, widget)

    def drop_last(self) -> None:
        """Take the last widget away."""
        item = self._list.takeAt(self._list.count() - 2)
        if item is not None and item.widget() is not None:
            item.widget().hide()
            item.widget().deleteLater()

    def clear(self) -> None:
        """Take all widgets away."""
        while self._list.count() > 1:
            self.drop_last()

    def show_html(self, html: str) -> None:
        """Show one rich text and nothing else."""
        self.clear()
        text = QLabel(html)
        text.setTextFormat(Qt.TextFormat.RichText)
        text.setWordWrap(True)
        text.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        text.setAlignment(Qt.AlignmentFlag.AlignTop)
        self.add(text)


def _row(cells: list[str], head: bool = False) -> str:
    muted = theming().theme.muted
    tint = f"; color:{muted}" if head else ""
    style = f'style="padding:0 8px 2px 0{tint}"'
    return "<tr>" + "".join(f'<td {style} align="right">{cell}</td>' for cell in cells) + "</tr>"


def _table(rows: list[str]) -> str:
    return f'<table cellspacing="0" cellpadding="0" style="margin:0">{"".join(rows)}</table>'


def _number(value: float, digits: int = 6) -> str:
    text = f"{0.0 if abs(value) < 5e-11 else value:.{digits}g}"
    return text.replace("-", "−")


def pairs_html(arrangement: Arrangement, finding: Finding, notation: str) -> str:
    """Table of the pairs: angle, 4cos² and the order of the product of the two reflections."""
    rows = [_row(["pair", "angle", "4cos²", "order"], head=True)]
    for (pair, value, order), angle in zip(finding.evidence.four_cos, arrangement.angles, strict=True):
        written = angle.text if angle.fraction is None else pretty(angle.fraction, notation)
        if angle.fraction is not None and notation == "degrees":
            written = f"{180 * float(angle.fraction):.6g}°"
        times = "∞" if order is None else str(order)
        rows.append(_row([f"<i>{pair}</i>", escape(written), _number(float(value)), times]))
    return _table(rows)


def gram_html(arrangement: Arrangement, finding: Finding) -> str:
    """The Gram matrix and its determinant."""
    gram = finding.evidence.gram
    digits = 4 if len(gram) <= FULL else 3
    head = _row(["", *(f"<i>{letter}</i>" for letter in arrangement.letters)], head=True)
    body = [
        _row([f"<i>{letter}</i>", *(_number(v, digits) for v in row)])
        for letter, row in zip(arrangement.letters, gram, strict=True)
    ]
    return _table([head, *body]) + f"Its determinant is {_number(finding.evidence.determinant)}."


def grounds_html(finding: Finding) -> str:
    """The bounds used, what breaks them, and the numbers of the group."""
    evidence, group = finding.evidence, finding.group
    lines = [escape(as_sentence(text)) for text in evidence.bounds]
    lines += [f"<b>{escape(as_sentence(text))}</b>" for text in evidence.broken]
    if evidence.witness is not None:
        one, other, apart = evidence.witness
        lines.append(
            f"The mirrors <i>{foldable(one)}</i> and <i>{foldable(other)}</i> stand only {apart:.4g}° apart."
        )
    least = _number(float(evidence.eigenvalues[0]), 4)
    if finding.kind == "unbuildable":
        lines.append(
            f"Normals of planes make a Gram matrix without a negative eigenvalue; the least of this one is {least}."
        )
    if finding.kind == "tube":
        lines.append("The Gram matrix has the eigenvalue 0: the mirrors share a direction.")
    if group is not None:
        degrees = ", ".join(map(str, group.degrees))
        lines.append(f"Degrees {degrees}; their product is the order {group.order:,}.")
        lines.append(
            f"Exponents {', '.join(map(str, group.exponents))}; their sum is the count of mirrors, "
            f"{group.mirror_count}."
        )
        for letter, word in zip(group.letters, finding.wall_words, strict=True):
            if letter != word:
                lines.append(
                    f"The chamber's wall <i>{letter}</i> was not typed; it is <i>{escape(foldable(word))}</i>."
                )
        rotations = finding.rotation_group
        name = (
            ""
            if rotations is None
            else f" ({symbols.as_html(symbols.hermann_mauguin(rotations.hermann_mauguin))})"
        )
        lines.append(f"Rotation subgroup{name} of order {group.rotation_order:,}.")
        lines.append("−1 is in the group." if group.contains_inversion else "−1 is not in the group.")
    return "".join(f'<p style="margin:0 0 5px 0">{line}</p>' for line in lines)


def foldable(word: str) -> str:
    """A word that may go on in the next line; long ones would push what stands beside them out of sight."""
    return FOLD.join(word[k : k + FOLD_EVERY] for k in range(0, len(word), FOLD_EVERY))


def suggestion_html(suggestion: Suggestion, notation: str) -> tuple[str, str, str]:
    """Angles, group and largest change of a suggestion, as rich texts."""
    changed = set(suggestion.changed_pairs)
    angles = [
        f"<b>{pretty(f, notation)}</b>" if pair in changed else pretty(f, notation)
        for f, pair in zip(suggestion.angles, suggestion.pair_names, strict=True)
    ]
    if len(angles) > 6:
        pairs = suggestion.changed_pairs
        angles = [f"{p} {suggestion.degrees_of(p)}" for p in pairs[:3]] + (["…"] if len(pairs) > 3 else [])
    symbol, _, _ = suggestion.name.partition(" (")
    spatial = "(" in suggestion.name
    runs = symbols.hermann_mauguin(symbol) if spatial else symbols.families(suggestion.families)
    cut = " tube" if suggestion.kind == "tube" else ""
    cut += ", subdivided" if (suggestion.chambers_between or 1) > 1 else ""
    return " ".join(angles), symbols.as_html(runs) + cut, f"by {suggestion.largest_change:.3g}°"
