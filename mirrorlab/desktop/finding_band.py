"""The finding across the top: a mark, one sentence, the symbols in large type; it unfolds to the evidence."""

from __future__ import annotations

import re
from html import escape

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop import symbols
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.evidence import EvidenceSheet
from mirrorlab.desktop.marks import FindingMark
from mirrorlab.desktop.parts import Elided, button, label, rule
from mirrorlab.desktop.printed import with_pi
from mirrorlab.desktop.steady import Steady
from mirrorlab.desktop.symbol_strip import Named, SymbolStrip
from mirrorlab.desktop.theming import arrow, theming
from mirrorlab.mirrors import Finding
from mirrorlab.mirrors.sentence import sentence

HEADLINES = {
    "closed": "Closed",
    "closed-subdivided": "Closed, subdivided",
    "open": "Open",
    "tube": "Tube",
    "unbuildable": "Unbuildable",
}


SYMBOL = re.compile(r"[-\dm/]+(?= \([A-I]\d)|p\dm?m?\d?m?(?=\))")
FAMILY = re.compile(r"\b[A-I]\d(?:\(\d+\))?(?=[ ):.;,])")
"""Group symbols within a sentence: Hermann–Mauguin ones stand before a family in brackets."""

SYMBOL_SIZE = 25
"""Points of the group's symbols: to be read across a table."""


MOST_FLAGS = "Evidence, 9 flags"
"""The button is as wide as this whatever it says."""

HEAD_HEIGHT = 84
"""Pixels; the same with and without symbols, so that nothing below jumps while one types."""


class FindingBand(QFrame):
    """The band across the top of the window.

    Signals
    -------
    unfolded(bool)
        The evidence was opened or folded away.
    """

    unfolded = Signal(bool)

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("band")
        self.setProperty("kind", "panel")
        self.document = document
        self.mark = FindingMark(46)
        self.headline = Elided("", "large")
        words = label("", "", wrap=True)
        words.setTextFormat(Qt.TextFormat.RichText)
        words.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        words.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.sentence = Steady(words)
        self.symbols = SymbolStrip(SYMBOL_SIZE)
        self.toggle = button(MOST_FLAGS, "quiet", "Numbers to check by hand, flags and suggestions")
        self.toggle.setCheckable(True)
        self.toggle.setLayoutDirection(Qt.LayoutDirection.RightToLeft)
        self.toggle.toggled.connect(self._unfold)
        theming().changed.connect(self._point_arrow)
        self.sheet = EvidenceSheet(document)
        self.sheet.setVisible(False)
        self._point_arrow()
        self._lay_out()
        document.arrangement_changed.connect(self.refresh)
        document.settings_changed.connect(self.refresh)
        self.refresh()

    def _lay_out(self) -> None:
        words = QVBoxLayout()
        words.setSpacing(0)
        words.addStretch(1)
        words.addWidget(self.headline)
        words.addWidget(self.sentence)
        words.addStretch(1)
        row = QHBoxLayout()
        row.setContentsMargins(16, 8, 12, 8)
        row.setSpacing(14)
        row.addWidget(self.mark)
        row.addLayout(words, 1)
        row.addWidget(self.symbols, 0, Qt.AlignmentFlag.AlignBottom)
        row.addWidget(self.toggle)
        self.toggle.ensurePolished()
        self.toggle.setFixedSize(self.toggle.sizeHint())
        head = QWidget()
        head.setLayout(row)
        head.setMinimumHeight(HEAD_HEIGHT)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(head)
        column.addWidget(rule())
        column.addWidget(self.sheet)

    def refresh(self) -> None:
        """Show the document's finding."""
        finding = self.document.finding
        self.mark.set_kind(finding.kind)
        self.headline.setText(HEADLINES[finding.kind])
        self.sentence.setText(sentence_html(finding, self.document.settings.notation))
        self.symbols.show_symbols(symbols_of(finding))
        count = len(finding.flags)
        self.toggle.setText("Evidence" if not count else f"Evidence, {count} flag{'s' if count > 1 else ''}")

    def _unfold(self, shown: bool) -> None:
        self.sheet.setVisible(shown)
        self._point_arrow()
        self.unfolded.emit(shown)

    def _point_arrow(self) -> None:
        self.toggle.setIcon(arrow("up" if self.toggle.isChecked() else "down"))


def symbols_of(finding: Finding) -> tuple[Named, ...]:
    """The symbols of a finding's group, and of its families."""
    group, tube = finding.point_group, finding.tube
    if group is not None:
        names = [
            Named(symbols.hermann_mauguin(group.hermann_mauguin), "Hermann–Mauguin"),
            Named(symbols.schoenflies(group.schoenflies), "Schoenflies"),
        ]
    else:
        plane = (tube.plane_group if tube is not None else None) or ""
        names = [Named(symbols.hermann_mauguin(plane), "plane group")]
    caption = "family" if len(finding.families) < 2 else "families"
    return (*names, Named(symbols.families(finding.families), caption))


def sentence_html(finding: Finding, notation: str) -> str:
    """The finding's sentence with its symbols set as printed, its angles in a notation."""
    text = escape(with_pi(sentence(finding, notation)), quote=False)
    text = SYMBOL.sub(lambda match: symbols.as_html(symbols.hermann_mauguin(match[0])), text)
    return FAMILY.sub(lambda match: symbols.as_html(symbols.families([match[0]])), text)
