"""Room for lettering: how wide a line of text is, and whether a place for it is still free.

Widths are those of DejaVu Sans, a wide face, so that text set in any common sans-serif stays inside.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.sheet import Layer, Text

Array = NDArray[np.float64]

CAP_HEIGHT = 0.729
"""Height of a capital over the font size, in DejaVu Sans."""

_BY_WIDTH = {
    23: "′",
    27: "'",
    28: "ijl",
    29: "IJ",
    32: " \u00a0,.·’‘",
    34: "/:;\\|",
    35: "f",
    36: "-",
    37: "″",
    39: "()[]t",
    40: "!²³",
    41: "r",
    46: '"',
    50: "*_`°–",
    52: "sz“”",
    53: "?",
    55: "c",
    56: "L",
    58: "Fk",
    59: "vxy",
    60: "P",
    61: "TYao",
    62: "e",
    63: "ESbdghnpqu",
    64: "$0123456789{}",
    66: "K",
    68: "AV",
    69: "BRXZ",
    70: "C",
    73: "U",
    75: "HN",
    77: "DG",
    78: "&",
    79: "OQ",
    82: "w",
    84: "#+<=>^~×−±",
    86: "M",
    95: "%",
    97: "m½",
    99: "W",
}
"""Characters by their advance in DejaVu Sans, in hundredths of the font size; read from the font."""

_EM = {character: width / 100 for width, characters in _BY_WIDTH.items() for character in characters}
_WIDEST = 1.0
_BOLD = 1.15
"""Bold lines are 12 to 14 % wider."""


def text_width(text: str, height: float, bold: bool = False) -> float:
    """Width in mm of a line whose capitals are `height` mm high."""
    return sum(_EM.get(c, _WIDEST) for c in text) * height / CAP_HEIGHT * (_BOLD if bold else 1.0)


def text_box(text: Text, pad: float = 0.0) -> Array:
    """Corners of the rectangle that a line covers, descenders included, shape (4, 2), counter-clockwise."""
    width, height = text_width(text.text, text.height, text.bold), text.height
    left = {"start": 0.0, "middle": -width / 2, "end": -width}[text.anchor]
    low, high = -height * 0.85 - pad, height * 0.65 + pad
    box = np.array(
        [(left - pad, low), (left + width + pad, low), (left + width + pad, high), (left - pad, high)]
    )
    cos, sin = np.cos(text.angle), np.sin(text.angle)
    return text.at + box @ np.array([[cos, sin], [-sin, cos]])


def readable(angle: float) -> float:
    """The same direction or its opposite, so that text reads from below or from the right."""
    angle = (angle + np.pi) % (2 * np.pi) - np.pi
    if angle > np.pi / 2 + 1e-6:
        angle -= np.pi
    elif angle <= -np.pi / 2 + 1e-6:
        angle += np.pi
    return float(angle)


def wrapped(text: str, height: float, width: float) -> list[str]:
    """Lines no wider than `width` mm; a single longer word stays whole."""
    lines: list[str] = []
    for word in text.split(" "):
        longer = f"{lines[-1]} {word}" if lines else word
        if lines and text_width(longer, height) <= width:
            lines[-1] = longer
        else:
            lines.append(word)
    return lines


@dataclass(slots=True)
class Board:
    """What is already drawn, so that lettering finds a free place."""

    shapes: list[Array] = field(default_factory=list)
    reach: list[tuple[float, float, float, float]] = field(default_factory=list)

    def add(self, shape: Array) -> None:
        """Take up a convex shape: a box of shape (k, 2), or a segment of shape (2, 2)."""
        self.shapes.append(shape)
        (left, bottom), (right, top) = shape.min(axis=0), shape.max(axis=0)
        self.reach.append((float(left), float(bottom), float(right), float(top)))

    def add_line(self, points: Array, closed: bool = False) -> None:
        """Take up a polyline, segment by segment."""
        ends = np.roll(points, -1, axis=0) if closed else points[1:]
        for start, stop in zip(points, ends, strict=False):
            self.add(np.array([start, stop]))

    def is_free(self, box: Array) -> bool:
        """Whether a convex box touches nothing that is drawn."""
        return not any(overlap(box, shape) for shape in self.near(box))

    def near(self, shape: Array) -> Iterator[Array]:
        """What is drawn within the upright rectangle around a shape: the only things it can touch."""
        left, bottom = (float(value) for value in shape.min(axis=0))
        right, top = (float(value) for value in shape.max(axis=0))
        for there, (x0, y0, x1, y1) in zip(self.shapes, self.reach, strict=True):
            if x0 < right and x1 > left and y0 < top and y1 > bottom:
                yield there

    def place(self, candidates: Iterable[Text], pad: float = 0.4, inside: Array | None = None) -> Text | None:
        """The first candidate with a free place (inside a convex outline, if given), taken up; None when none is."""
        for text in candidates:
            box = text_box(text, pad)
            if (inside is None or _within(box, inside)) and self.is_free(box):
                self.add(box)
                return text
        return None


def overlap(one: Array, other: Array) -> bool:
    """Whether two convex shapes share an inner point (separating axes: the normals of all sides)."""
    axes = np.vstack([_normals(one), _normals(other)])
    first, second = one @ axes.T, other @ axes.T
    apart = np.maximum(second.min(axis=0) - first.max(axis=0), first.min(axis=0) - second.max(axis=0))
    return bool(np.all(apart < -1e-9))


def _normals(shape: Array) -> Array:
    sides = np.roll(shape, -1, axis=0) - shape
    return np.column_stack([-sides[:, 1], sides[:, 0]])


def _within(box: Array, outline: Array) -> bool:
    sides = np.roll(outline, -1, axis=0) - outline
    apart = box[:, None] - outline[None]
    return bool(np.all(sides[:, 0] * apart[..., 1] - sides[:, 1] * apart[..., 0] >= -1e-9))


def text_lines(
    layer: Layer,
    lines: Sequence[str],
    top_left: Array,
    height: float,
    pitch: float = 1.7,
    bold_first: bool = False,
) -> tuple[Text, ...]:
    """Lines of text one below the other, the first capital's top at `top_left`."""
    return tuple(
        Text(
            layer,
            line,
            top_left + np.array([0.0, -height / 2 - i * pitch * height]),
            height,
            anchor="start",
            bold=bold_first and i == 0,
        )
        for i, line in enumerate(lines)
    )
