"""The finding across the top: a mark, one sentence, the symbols in large type; it unfolds to the evidence."""

from __future__ import annotations

import re

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.desktop import symbols
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.evidence import EvidenceSheet
from mirrorlab.desktop.marks import FindingMark
from mirrorlab.desktop.parts import button, label, rule
from mirrorlab.desktop.symbols import Run, SymbolText
from mirrorlab.desktop.theming import arrow, theming
from mirrorlab.mirrors import Finding

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


HEAD_HEIGHT = 84
"""Pixels; the same with and without symbols, so that nothing below jumps while one types."""


class _Named(QWidget):
    """A symbol with what it is beneath it."""

    def __init__(self, caption: str, size: float) -> None:
        super().__init__()
        self.symbol = SymbolText(size)
        self.caption = label(caption, "small")
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addStretch(1)
        column.addWidget(self.symbol, 0, Qt.AlignmentFlag.AlignHCenter | Qt.AlignmentFlag.AlignBottom)
        column.addWidget(self.caption, 0, Qt.AlignmentFlag.AlignHCenter)

    def show_runs(self, runs: tuple[Run, ...], caption: str = "") -> None:
        """Show a symbol; none hides it with its caption."""
        self.symbol.set_runs(runs)
        if caption:
            self.caption.setText(caption)
        self.setVisible(bool(runs))


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
        self.headline = label("", "large")
        self.sentence = label("", "", wrap=True)
        self.sentence.setTextFormat(Qt.TextFormat.RichText)
        self.sentence.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.sentence.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.group = _Named("Hermann–Mauguin", SYMBOL_SIZE)
        self.schoenflies = _Named("Schoenflies", SYMBOL_SIZE)
        self.family = _Named("family", SYMBOL_SIZE)
        self.toggle = button("Evidence", "quiet", "Numbers to check by hand, flags and suggestions")
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
        for named in (self.group, self.schoenflies, self.family):
            row.addWidget(named, 0, Qt.AlignmentFlag.AlignBottom)
            row.addSpacing(8)
        row.addWidget(self.toggle)
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
        self.sentence.setText(sentence_html(finding))
        self._show_symbols(finding)
        count = len(finding.flags)
        self.toggle.setText("Evidence" if not count else f"Evidence, {count} flag{'s' if count > 1 else ''}")

    def _show_symbols(self, finding: Finding) -> None:
        group = finding.point_group
        tube = finding.tube
        if group is not None:
            self.group.show_runs(symbols.hermann_mauguin(group.hermann_mauguin), "Hermann–Mauguin")
            self.schoenflies.show_runs(symbols.schoenflies(group.schoenflies))
        else:
            plane = tube.plane_group if tube is not None else None
            self.group.show_runs(symbols.hermann_mauguin(plane or ""), "plane group")
            self.schoenflies.show_runs(())
        self.family.show_runs(
            symbols.families(finding.families), "family" if len(finding.families) < 2 else "families"
        )

    def _unfold(self, shown: bool) -> None:
        self.sheet.setVisible(shown)
        self._point_arrow()
        self.unfolded.emit(shown)

    def _point_arrow(self) -> None:
        self.toggle.setIcon(arrow("up" if self.toggle.isChecked() else "down"))


def sentence_html(finding: Finding) -> str:
    """The finding's sentence with its symbols set as printed."""
    text = finding.sentence.replace("&", "&amp;").replace("<", "&lt;")
    text = SYMBOL.sub(lambda match: symbols.as_html(symbols.hermann_mauguin(match[0])), text)
    return FAMILY.sub(lambda match: symbols.as_html(symbols.families([match[0]])), text)
