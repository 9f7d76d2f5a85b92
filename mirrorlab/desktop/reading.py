"""How the angle of one pair was read, in full, below the triangle."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QHBoxLayout, QVBoxLayout, QWidget

from mirrorlab.angles import Angle
from mirrorlab.desktop.angle_text import mark_of, plain_text, pretty
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.marks import FINE, NO_FRACTION, NO_LATTICE, WRONG, ReadingMark
from mirrorlab.desktop.parts import Elided, button, label
from mirrorlab.desktop.steady import Steady
from mirrorlab.desktop.stylesheet import set_kind
from mirrorlab.desktop.triangle import Triangle

NEAREST = 3
"""So many nearby closing fractions are offered for an angle that has none."""


class PairReading(QFrame):
    """The current pair's reading, its error where there is one, and nearby angles to take with one click."""

    def __init__(self, document: Document, triangle: Triangle, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        set_kind(self, "card")
        self.document, self.triangle = document, triangle
        self.mark = ReadingMark(12)
        self.title = Elided("", "heading")
        words = label("", "", wrap=True)
        words.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.words = Steady(words)
        self.offers = QWidget()
        self._row = QHBoxLayout(self.offers)
        self._row.setContentsMargins(0, 2, 0, 0)
        self._row.setSpacing(4)
        head = QHBoxLayout()
        head.setSpacing(6)
        head.addWidget(self.mark)
        head.addWidget(self.title, 1)
        column = QVBoxLayout(self)
        column.setContentsMargins(10, 7, 10, 8)
        column.setSpacing(3)
        column.addLayout(head)
        column.addWidget(self.words)
        column.addWidget(self.offers)
        triangle.current_changed.connect(self.refresh)
        triangle.reading_changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Show the current pair."""
        arrangement, finding = self.document.arrangement, self.document.finding
        pair = self.triangle.current
        if not 0 <= pair < len(arrangement.pairs):
            self.hide()
            return
        self.show()
        i, j = arrangement.pairs[pair]
        angle = arrangement.angles[pair]
        name = f"{arrangement.letters[i]} and {arrangement.letters[j]}"
        error = self.triangle.error_of(pair)
        mark = WRONG if error else mark_of(finding, (i, j), angle)
        self.mark.set_mark(mark)
        set_kind(self.words.label, "wrong" if error else "")
        self.title.setText(f"{name}: {_TITLES[mark]}")
        self.words.setText(error or in_words(angle, self.document.settings.notation))
        self._offer(angle, mark)

    def _offer(self, angle: Angle, mark: str) -> None:
        while self._row.count():
            item = self._row.takeAt(0)
            if item is not None and item.widget() is not None:
                item.widget().hide()
                item.widget().deleteLater()
        nearby = angle.nearest(NEAREST) if mark == NO_FRACTION else ()
        for near in nearby:
            text = plain_text(near.fraction)
            away = f"{near.deviation_degrees:+.3g}°".replace("-", "−")
            written = pretty(near.fraction, self.document.settings.notation)
            if self.document.settings.notation == "degrees":  # a hint and the triangle say it in full
                written = f"{180 * float(near.fraction):.6g}°"
            offer = button(written, hint=f"Type {text}, {away} from the typed value")
            offer.clicked.connect(lambda _=False, t=text: self.triangle.take(t))
            self._row.addWidget(offer)
        if nearby:
            self._row.addStretch(1)
        self.offers.setVisible(bool(nearby))


_TITLES = {
    FINE: "suits a lattice",
    NO_LATTICE: "no lattice has it",
    NO_FRACTION: "no closing fraction",
    WRONG: "cannot be read",
}


def in_words(angle: Angle, notation: str) -> str:
    """How an angle was read, as a sentence."""
    band = {
        "exact": "exact",
        "rounded": f"rounded, ± {angle.uncertainty:.3g}°",
        "measured": f"measured, standard uncertainty {angle.uncertainty:.3g}°",
        "computed": "computed from the normals",
    }[angle.source]
    if angle.fraction is None:
        return f"{angle.text} ({band}): its reflections never come round."
    written = pretty(angle.fraction, notation if notation != "pi" else "degrees")
    fraction = pretty(angle.fraction, "pi")
    times = angle.fraction.denominator
    turn = (
        f"; the two reflections come round after {times}" if angle.fraction else "; the mirrors are parallel"
    )
    return f"{written} = {fraction}, {band}{turn}."
