"""One pane on the cut sheet: what to cut, what to grind, and how large it is.

The pane is drawn with its mirror side up. Outside each side stand what it meets and its length; inside stand
the part letter, the mirror-side mark and the corner angles. Lettering looks for a free place, so that it
never covers a line that is cut or measured.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.dimension_lines import (
    angle_strokes,
    angle_text,
    length_strokes,
    length_text,
)
from mirrorlab.drawing.lettering import Board, overlap, readable, text_box, text_width
from mirrorlab.drawing.sheet import AngleDimension, Layer, LengthDimension, Sheet, Stroke, Text
from mirrorlab.optics import polygon
from mirrorlab.optics.cutlist import side_name
from mirrorlab.optics.glass import GlassPanel
from mirrorlab.optics.joints import Surface

Array = NDArray[np.float64]

SEEN_OFFSET = 0.05
"""mm; lines closer than this are one line on paper."""

RIGHT_ANGLE = np.radians(0.005)
"""Corners this close to 90° carry the square mark instead of a number: half the last digit that is written."""

NOTE_LEVEL, LINE_LEVEL, TEXT_LEVEL = 1.5, 3.0, 4.25
"""Outside a side, in text heights: the note on its joint, the dimension line, the dimension's text."""


LINE_PITCH = 2.1
"""Distance of lines of lettering inside a pane, in text heights."""


def millimetres(value: float) -> str:
    """A length as it is written on drawings."""
    return f"{value:.1f}"


def inches(value: float) -> str:
    """The same in inches."""
    return f"{value / 25.4:.3f}″"


def degrees(angle: float) -> str:
    """An angle in radians as it is written on drawings."""
    return f"{np.degrees(angle):.2f}".rstrip("0").rstrip(".") + "°"


WRITE = {"mm": millimetres, "in": inches}


def panel_drawing(pane: GlassPanel, copies: int, height: float, unit: str = "mm", kerf: float = 0.0) -> Sheet:
    """The pane with its dimensions and marks, in the frame of its flat panel.

    Parameters
    ----------
    pane : GlassPanel
    copies : int
    height : float
        mm, of the dimension text's capitals.
    unit : str
        "mm" or "in": what lengths are written in. The drawing is at true size either way.
    kerf : float
        mm; when there is one, the middle of the cut is drawn half of it outside the blank.
    """
    board = Board()
    strokes = [Stroke(Layer.CUT, pane.blank, closed=True), *_faces(pane), *_ground(pane)]
    if kerf > 0:
        path = polygon.move_sides(pane.blank, np.full(len(pane.blank), -kerf / 2))
        strokes.append(Stroke(Layer.KERF, path, closed=True))
    for stroke in strokes:
        board.add_line(stroke.points, stroke.closed)
    lengths = _lengths(pane, height, WRITE[unit], board)
    inside = polygon_inside(pane)
    texts = list(_notes(pane, height, board))
    letter = _letter(pane, height, inside, board)
    marks, angles = _corners(pane, height, inside, board)
    texts += [letter, *_marks(mark_lines(pane, copies), letter, height, inside, board)]
    return Sheet(pane.letter, 0.0, 0.0, (*strokes, *marks), tuple(texts), lengths, angles)


def mark_lines(pane: GlassPanel, copies: int) -> tuple[str, ...]:
    """What stands below the part letter; lines that find no room are left to the caption."""
    return ("mirror side up", face_up(pane), *([f"cut {copies}"] if copies > 1 else []))


def polygon_inside(pane: GlassPanel) -> Array:
    """The part of the pane that lies under both faces: free of bevels, fit for lettering."""
    offsets = np.array([max(side.mirror_offset, side.other_offset) for side in pane.sides])
    try:
        return polygon.move_sides(pane.flat.outline, offsets)
    except polygon.PolygonError:
        return pane.blank


def _faces(pane: GlassPanel) -> Iterator[Stroke]:
    for layer, outline in ((Layer.COATED_FACE, pane.coated), (Layer.CLEAR_FACE, pane.clear)):
        for i, side in enumerate(pane.sides):
            own = side.mirror_offset if layer is Layer.COATED_FACE else side.other_offset
            if own - min(side.mirror_offset, side.other_offset) > SEEN_OFFSET:
                yield Stroke(layer, outline[[i, (i + 1) % len(outline)]])


def _ground(pane: GlassPanel) -> Iterator[Stroke]:
    """Hatching of the strip that is ground to the bevel, square to the side."""
    for i, side in enumerate(pane.sides):
        strip = abs(side.other_offset - side.mirror_offset)
        if strip <= SEEN_OFFSET:
            continue
        inner = pane.clear if side.bevel > 0 else pane.coated
        start, stop = inner[i], inner[(i + 1) % len(inner)]
        along = (stop - start) / np.linalg.norm(stop - start)
        out = np.array([along[1], -along[0]]) * strip
        count = max(2, int(np.linalg.norm(stop - start) // 6.0) + 1)
        for share in (np.arange(count) + 0.5) / count:
            ends = start + share * (stop - start) + np.array([np.zeros(2), out])
            if polygon.holds(
                pane.blank, ends[1]
            ):  # beside a blunt corner the strip ends before the side does
                yield Stroke(Layer.BEVEL, ends)


def _lengths(pane: GlassPanel, height: float, write: object, board: Board) -> tuple[LengthDimension, ...]:
    found = []
    lengths = polygon.side_lengths(pane.blank)
    square = len(lengths) == 4 and np.all(np.abs(polygon.corner_angles(pane.blank) - np.pi / 2) < RIGHT_ANGLE)
    for i, length in enumerate(lengths):
        if square and i in (1, 2):
            continue  # a rectangle has two sizes
        stop, start = pane.blank[i], pane.blank[(i + 1) % len(pane.blank)]
        along = (stop - start) / length
        out = np.array([-along[1], along[0]])
        angle = readable(float(np.arctan2(along[1], along[0])))
        text = write(float(length))  # type: ignore[operator]
        bare = LengthDimension(start, stop, LINE_LEVEL * height, text, start, angle, height)
        for stroke in length_strokes(bare):
            board.add_line(stroke.points)
        middle = (start + stop) / 2
        levels = [TEXT_LEVEL + 1.6 * step for step in range(4)]
        shifts = [0.0, 0.15, -0.15, 0.3, -0.3]
        candidates = [
            Text(Layer.DIMENSION, text, middle + out * level * height + along * shift * length, height, angle)
            for level in levels
            for shift in shifts
        ]
        placed = board.place(candidates, pad=0.15 * height) or candidates[-1]
        found.append(LengthDimension(start, stop, LINE_LEVEL * height, text, placed.at, angle, height))
    return tuple(found)


def side_note(pane: GlassPanel, side: int) -> tuple[str, ...]:
    """What is done at a side, from the fullest wording to the shortest."""
    cut, name = pane.sides[side], side_name(pane, side)
    if not cut.neighbour:
        return f"{name} free", name
    ground = f", bevel {degrees(abs(cut.bevel))}" if cut.longer_face else ", square"
    upper = ""
    if cut.longer_face:
        upper = ", upper face longer" if pane.upper_is_longer(side) else ", lower face longer"
    return (
        f"{name} meets {cut.neighbour}{ground}{upper}",
        f"{name} meets {cut.neighbour}{ground}",
        f"{name} · {cut.neighbour}{ground.replace(', bevel', '')}",
        f"{name} · {cut.neighbour}",
        name,
    )


def _notes(pane: GlassPanel, height: float, board: Board) -> Iterator[Text]:
    size = 0.75 * height
    for i, length in enumerate(polygon.side_lengths(pane.blank)):
        start, stop = pane.blank[i], pane.blank[(i + 1) % len(pane.blank)]
        along = (stop - start) / length
        out = np.array([along[1], -along[0]])
        angle = readable(float(np.arctan2(along[1], along[0])))
        middle = (start + stop) / 2
        candidates = [
            Text(Layer.LETTERING, words, middle + out * level * height + along * shift * length, size, angle)
            for level in (NOTE_LEVEL, TEXT_LEVEL + 1.4, TEXT_LEVEL + 2.8)
            for words in side_note(pane, i)
            for shift in (0.0, 0.12, -0.12, 0.25, -0.25)
            if level > NOTE_LEVEL or text_width(words, size) < length - 2
        ]
        placed = board.place(candidates, pad=0.1 * height)
        if placed is not None:
            yield placed


def _letter(pane: GlassPanel, height: float, inside: Array, board: Board) -> Text:
    """The part letter, lifted where there is room for lines below it."""
    centre, radius = polygon.middle(inside)
    size, tall = min(height, radius / 4), min(radius * 0.55, 7 * height)
    block = 3 * LINE_PITCH * size
    lift = block / 2 if radius > tall / 2 + block + height else 0.0
    letters = [
        Text(Layer.LETTERING, pane.letter, centre + np.array([0.0, lift * share]), tall * scale, bold=True)
        for scale in (1.0, 0.7, 0.5)
        for share in (1.0, 0.0)
    ]
    return board.place(letters, inside=inside) or letters[-1]


def _marks(lines: Sequence[str], letter: Text, height: float, inside: Array, board: Board) -> Iterator[Text]:
    """Below or beside the letter: which side is up, and how many to cut."""
    _, radius = polygon.middle(inside)
    size = min(height, radius / 4)
    under = letter.at - np.array([0.0, 0.85 * letter.height + 0.3 * size])
    for i, words in enumerate(lines):
        layer = Layer.MIRROR_SIDE if i < 2 else Layer.LETTERING
        aside = letter.height / 2 + 0.4 * height + text_width(words, size) / 2 + size
        places = [under - np.array([0.0, (i + 0.6) * LINE_PITCH * size])]
        places += [letter.at + np.array([hand * aside, (0.5 - i) * LINE_PITCH * size]) for hand in (1, -1)]
        candidates = [Text(layer, words, at, size * scale) for scale in (1.0, 0.8, 0.65) for at in places]
        placed = board.place(candidates, pad=0.1 * size, inside=inside)
        if placed is not None:
            yield placed


def face_up(pane: GlassPanel) -> str:
    """Which face lies up when the mirror side is up."""
    return "coating below the glass" if pane.surface is Surface.SECOND else "coated face up"


def _corners(
    pane: GlassPanel, height: float, inside: Array, board: Board
) -> tuple[tuple[Stroke, ...], tuple[AngleDimension, ...]]:
    marks, found = [], []
    lengths = polygon.side_lengths(pane.blank)
    for i, angle in enumerate(polygon.corner_angles(pane.blank)):
        vertex, after, before = pane.blank[i], pane.blank[(i + 1) % len(lengths)], pane.blank[i - 1]
        one, other = (after - vertex) / lengths[i], (before - vertex) / lengths[i - 1]
        shorter = min(lengths[i], lengths[i - 1])
        if abs(angle - np.pi / 2) < RIGHT_ANGLE:
            leg = min(1.2 * height, shorter / 4)
            marks.append(Stroke(Layer.DIMENSION, vertex + leg * np.array([one, one + other, other])))
            continue
        dimension = _angle(vertex, after, before, float(angle), shorter, height, inside, board)
        for stroke in angle_strokes(dimension):
            board.add_line(stroke.points)
        found.append(dimension)
    return tuple(marks), tuple(found)


def _angle(
    vertex: Array,
    after: Array,
    before: Array,
    angle: float,
    shorter: float,
    height: float,
    inside: Array,
    board: Board,
) -> AngleDimension:
    """Inside on the bisector where the corner is wide enough, else outside beyond the corner."""
    along = (after - vertex) / np.linalg.norm(after - vertex)
    half = np.array([[np.cos(angle / 2), -np.sin(angle / 2)], [np.sin(angle / 2), np.cos(angle / 2)]])
    bisector = half @ along
    words = degrees(angle)
    small = min(3.5 * height, 0.3 * shorter)
    for scale in (1.0, 0.8, 0.65):
        size = scale * height
        reach = np.hypot(text_width(words, size), 1.5 * size) / 2
        for r in np.arange(reach + 2, 0.75 * shorter, 1.5):
            at = vertex + bisector * r
            candidate = Text(Layer.DIMENSION, words, at, size)
            radius = _distance(vertex, text_box(candidate)) - 0.3 * size
            if radius < min(1.2 * size, small):
                continue
            dimension = AngleDimension(vertex, after, before, radius, words, at, size)
            if (
                _arc_is_clear(dimension, board)
                and board.place([candidate], pad=0.2 * size, inside=inside) is not None
            ):
                return dimension
    reach = np.hypot(text_width(words, height), 1.5 * height) / 2
    for r in np.arange(reach + 1.5, 12 * height, 1.0):
        at = vertex - bisector * r
        if board.place([Text(Layer.DIMENSION, words, at, height)], pad=0.2 * height) is not None:
            return AngleDimension(vertex, after, before, small, words, at, height)
    return AngleDimension(vertex, after, before, small, words, vertex + bisector * small * 2, height)


def _distance(point: Array, box: Array) -> float:
    """From a point outside to the nearest point of an upright box."""
    return float(np.linalg.norm(point - np.clip(point, box.min(axis=0), box.max(axis=0))))


def _arc_is_clear(dimension: AngleDimension, board: Board) -> bool:
    """Whether the arc crosses no lettering; it may cross the lines it springs from."""
    arc = angle_strokes(dimension)[0].points
    boxes = [shape for shape in board.near(arc) if len(shape) > 2]
    return not any(overlap(np.array(piece), box) for piece in pairwise(arc) for box in boxes)


def extent(sheet: Sheet) -> tuple[float, float, float, float]:
    """Left, bottom, right, top of all that a drawing holds, lettering included."""
    shapes = [stroke.points for stroke in sheet.strokes]
    shapes += [s.points for d in sheet.lengths for s in length_strokes(d)]
    shapes += [s.points for d in sheet.angles for s in angle_strokes(d)]
    lettering = (*sheet.texts, *map(length_text, sheet.lengths), *map(angle_text, sheet.angles))
    shapes += [text_box(text) for text in lettering]
    return polygon.bounds(np.vstack(shapes))
