"""Group symbols set as the trade prints them: overbars, slanted letters, lowered indices."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache
from html import escape

from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QSizePolicy, QWidget

from mirrorlab.desktop.theming import theming
from mirrorlab.files.picture_sight import painting

LOWERED = 0.66
"""Size of an index beside its letter, about what book printing takes."""

BAR_GAP = 0.07
BAR_WEIGHT = 0.055
"""Gap above a digit and thickness of its overbar, as parts of the font's height."""


@dataclass(frozen=True, slots=True)
class Run:
    """A stretch of a symbol set one way."""

    text: str
    slanted: bool = False
    barred: bool = False
    lowered: bool = False


def hermann_mauguin(symbol: str) -> tuple[Run, ...]:
    """Runs of a Hermann–Mauguin symbol in plain characters, ``"m-3m"``; "-" bars the next axis."""
    runs: list[Run] = []
    for match in re.finditer(r"(-?)(\d+)|([a-zA-Z]+)|(.)", symbol):
        bar, digits, letters, other = match.groups()
        if digits and bar:
            axis = barred_axis(digits, symbol[match.end() :])
            runs.append(Run(digits[:axis], barred=True))
            if digits[axis:]:
                runs.append(Run(digits[axis:]))
        elif digits:
            runs.append(Run(digits))
        elif letters:
            runs.append(Run(letters, slanted=True))
        else:
            runs.append(Run(other))
    return tuple(runs)


def barred_axis(digits: str, rest: str) -> int:
    """How many of the digits after a "-" are the order of the barred axis.

    In ``-43m`` and ``-82m`` the last digit is an axis of its own, in ``-10m2`` both belong to one.
    """
    own = len(digits) > 1 and digits[-1] in "23" and rest == "m"
    return len(digits) - 1 if own else len(digits)


def schoenflies(symbol: str) -> tuple[Run, ...]:
    """Runs of a Schoenflies symbol: a slanted capital and a lowered rest, ``"Oh"``, ``"D5h"``."""
    if not symbol:
        return ()
    head, rest = Run(symbol[0], slanted=True), symbol[1:]
    return (head, Run(rest, lowered=True)) if rest else (head,)


def families(names: Iterable[str]) -> tuple[Run, ...]:
    """Runs of the product of families: ``("A1", "I2(5)")`` is A₁ × I₂(5)."""
    runs: list[Run] = []
    for name in names:
        if runs:
            runs.append(Run(" × "))
        match = re.fullmatch(r"([A-Z])(\d+)(\(.*\))?", name)
        if match is None:
            runs.append(Run(name))
            continue
        runs += [Run(match[1], slanted=True), Run(match[2], lowered=True)]
        if match[3]:
            runs.append(Run(match[3]))
    return tuple(runs)


HEADROOM = "<big>\u2060</big>"
"""A larger nothing that makes its line higher: a label cuts off what is above it, and some screens lost the bars."""


def as_html(runs: Iterable[Run]) -> str:
    """Runs as rich text for a label."""
    parts: list[str] = []
    barred = False
    for run in runs:
        text = escape(run.text)
        if run.barred and barred:
            parts.append(
                '<span style="font-size:3pt"> </span>'
            )  # two bars side by side must not run into one
        barred = run.barred
        if run.slanted:
            text = f"<i>{text}</i>"
        if run.barred:
            text = f'{HEADROOM}<span style="text-decoration:overline">{text}</span>'
        if run.lowered:
            text = f"<sub>{text}</sub>"
        parts.append(text)
    return "".join(parts)


def as_spoken(runs: Iterable[Run]) -> str:
    """Runs as words for a screen reader: "m bar 3 m"."""
    return " ".join(f"bar {run.text}" if run.barred else run.text for run in runs)


def run_font(run: Run, size: float) -> tuple[QFont, QFontMetricsF]:
    """The font of a run in a symbol of this size in points, and its measures."""
    points = size * (LOWERED if run.lowered else 1.0)
    return _font(theming().theme.fonts.display, points, run.slanted)


@lru_cache(maxsize=64)
def _font(families: tuple[str, ...], points: float, slanted: bool) -> tuple[QFont, QFontMetricsF]:
    font = QFont(list(families))
    font.setPointSizeF(points)
    font.setItalic(slanted)
    return font, QFontMetricsF(font)


def symbol_size(runs: Iterable[Run], size: float) -> QSize:
    """Pixels that a symbol takes."""
    height = run_font(Run(""), size)[1].height()
    width = sum(run_font(r, size)[1].horizontalAdvance(r.text) for r in runs)
    return QSize(round(width + 0.12 * height), round(height * 1.12))


def draw_symbol(painter: QPainter, runs: Iterable[Run], size: float, box: QRectF, tint: QColor) -> None:
    """Draw a symbol from the left of a box, half way up, its overbars at the right height."""
    whole = run_font(Run(""), size)[1]
    base = box.top() + (box.height() - whole.height()) / 2 + whole.ascent() + 0.05 * whole.height()
    x = box.left()
    for run in runs:
        font, metrics = run_font(run, size)
        painter.setFont(font)
        painter.setPen(tint)
        drop = 0.22 * whole.xHeight() + 0.1 * whole.ascent() if run.lowered else 0.0
        painter.drawText(QPointF(x, base + drop), run.text)
        wide = metrics.horizontalAdvance(run.text)
        if run.barred:
            top = base - metrics.tightBoundingRect(run.text).height() - BAR_GAP * whole.height()
            weight = max(1.2, BAR_WEIGHT * whole.height())
            pen = QPen(tint, weight)
            pen.setCapStyle(Qt.PenCapStyle.FlatCap)
            painter.setPen(pen)
            inset = 0.06 * wide
            painter.drawLine(
                QPointF(x + inset, top - weight / 2), QPointF(x + wide - inset, top - weight / 2)
            )
        x += wide


class SymbolText(QWidget):
    """A symbol in large type.

    Parameters
    ----------
    size : float
        Points.
    """

    def __init__(self, size: float, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._runs: tuple[Run, ...] = ()
        self._size = size
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        theming().changed.connect(self.update)

    def set_runs(self, runs: Iterable[Run]) -> None:
        """Show another symbol; nothing at all hides the widget."""
        wanted = tuple(runs)
        if wanted == self._runs and wanted:
            return
        self._runs = wanted
        self.setVisible(bool(self._runs))
        self.setAccessibleName(as_spoken(self._runs))
        self.updateGeometry()
        self.update()

    @property
    def runs(self) -> tuple[Run, ...]:
        """What is shown."""
        return self._runs

    def sizeHint(self) -> QSize:
        return symbol_size(self._runs, self._size)

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def paintEvent(self, event: QPaintEvent) -> None:
        with painting(self) as painter:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            draw_symbol(painter, self._runs, self._size, QRectF(self.rect()), QColor(theming().theme.text))
