"""Dimensions as plain strokes and text, for translators that have no dimension of their own."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.sheet import AngleDimension, Layer, LengthDimension, Sheet, Stroke, Text

Array = NDArray[np.float64]

EXTENSION_GAP = 1.0
"""mm between a measured corner and the start of its extension line."""

ARC_STEP = np.radians(3.0)
"""Chord of an angle's arc."""


def overshoot(height: float) -> float:
    """mm by which extension lines and the dimension line run on, for text of this height."""
    return 0.5 * height


def length_strokes(dimension: LengthDimension) -> tuple[Stroke, ...]:
    """Two extension lines, the dimension line, and an oblique tick at each end."""
    along = (dimension.stop - dimension.start) / dimension.measure
    out = np.array([-along[1], along[0]]) * np.sign(dimension.offset)
    level = abs(dimension.offset)
    past = overshoot(dimension.height)
    gap = min(EXTENSION_GAP, level / 3)
    ends = dimension.start + out * level, dimension.stop + out * level
    lines = [
        np.array([corner + out * gap, corner + out * (level + past)])
        for corner in (dimension.start, dimension.stop)
    ]
    lines.append(np.array([ends[0] - along * past, ends[1] + along * past]))
    tick = (along + out) / np.sqrt(2) * past
    lines += [np.array([end - tick, end + tick]) for end in ends]
    return tuple(Stroke(Layer.DIMENSION, line) for line in lines)


def angle_strokes(dimension: AngleDimension) -> tuple[Stroke, ...]:
    """The arc between the two sides."""
    first = dimension.start - dimension.vertex
    begin = np.arctan2(first[1], first[0])
    steps = max(3, int(np.ceil(dimension.measure / ARC_STEP)) + 1)
    turns = begin + np.linspace(0, dimension.measure, steps)
    arc = dimension.vertex + dimension.radius * np.column_stack([np.cos(turns), np.sin(turns)])
    return (Stroke(Layer.DIMENSION, arc),)


def length_text(dimension: LengthDimension) -> Text:
    """The lettering of a length."""
    return Text(Layer.DIMENSION, dimension.text, dimension.text_at, dimension.height, dimension.text_angle)


def angle_text(dimension: AngleDimension) -> Text:
    """The lettering of an angle."""
    return Text(Layer.DIMENSION, dimension.text, dimension.text_at, dimension.height)


def all_strokes(sheet: Sheet) -> tuple[Stroke, ...]:
    """Every stroke of a sheet, those of its dimensions included."""
    lengths = tuple(s for d in sheet.lengths for s in length_strokes(d))
    angles = tuple(s for d in sheet.angles for s in angle_strokes(d))
    return (*sheet.strokes, *lengths, *angles)


def all_texts(sheet: Sheet) -> tuple[Text, ...]:
    """Every line of lettering of a sheet, those of its dimensions included."""
    return (*sheet.texts, *map(length_text, sheet.lengths), *map(angle_text, sheet.angles))
