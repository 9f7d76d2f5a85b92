"""The layout on stock sheets: what lies where, where to cut, and what is wasted."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from mirrorlab.drawing.composing import MARGIN, in_one_piece, in_pages
from mirrorlab.drawing.cutsheet import TEXT
from mirrorlab.drawing.lettering import Board, text_lines, wrapped
from mirrorlab.drawing.sheet import Layer, Sheet, Stroke, Text
from mirrorlab.optics import polygon
from mirrorlab.optics.nesting import Cutting, Layout, SheetLayout, layout_words

HEAD_ROOM = 50.0
"""mm; kept for the words above the first sheet."""

LEVEL_ROOM = 6.0
"""Room at the right for the levels of the cuts, in text heights."""

ROUND = (1.0, 1 / 2, 1 / 5, 1 / 10, 1 / 20, 1 / 50, 1 / 100)
"""Scales of the trade: ISO 5455 (from memory)."""


def stock_sheet(layout: Layout, title: str, room: tuple[float, float] | None = None) -> Sheet:
    """All stock sheets with their pieces, one below the other.

    Parameters
    ----------
    layout : Layout
    title : str
    room : tuple of float, optional
        mm; width and height that each stock sheet may take on paper: the largest round scale that fits is
        chosen. Left out, everything is at true size.
    """
    stock = layout.stock
    scale = 1.0
    if room is not None:
        fitting = [
            s
            for s in ROUND
            if s * stock.width <= room[0] - LEVEL_ROOM * TEXT and s * stock.height <= room[1] - HEAD_ROOM
        ]
        scale = fitting[0] if fitting else ROUND[-1]
    text = TEXT * (max(1.0, stock.width / 600) if room is None else 1.0)
    levels = LEVEL_ROOM * text if stock.cutting is Cutting.STRAIGHT else 0.0
    width = max(scale * stock.width + levels, 120.0 if room is None else room[0])
    lines = [title, *(line for said in layout_words(layout, scale) for line in wrapped(said, text, width))]
    high = 1.7 * text * len(lines)
    head = text_lines(Layer.LETTERING, lines, np.array([0.0, high]), text, bold_first=True)
    rows = [[Sheet("head", width, high, texts=head)]]
    for number, sheet in enumerate(layout.sheets):
        rows.append([_one(sheet, layout, scale, text, f"Sheet {number + 1} of {len(layout.sheets)}")])
    if room is None:
        return in_one_piece(title, rows, width + 2 * MARGIN)
    return in_pages(title, rows, room, scale)


def _one(sheet: SheetLayout, layout: Layout, scale: float, text: float, name: str) -> Sheet:
    """One stock sheet, its lower left corner at (0, 0)."""
    stock, margin = layout.stock, layout.stock.margin
    wide, high = scale * stock.width, scale * stock.height
    frame = np.array([(0, 0), (wide, 0), (wide, high), (0, high)])
    inner = scale * np.array(
        [
            (margin, margin),
            (stock.width - margin, margin),
            (stock.width - margin, stock.height - margin),
            (margin, stock.height - margin),
        ]
    )
    strokes = [Stroke(Layer.STOCK, frame, closed=True)]
    if margin:
        strokes.append(Stroke(Layer.STOCK, inner, closed=True))
    strokes += [Stroke(Layer.THROUGH_CUT, scale * cut) for cut in sheet.cuts]
    strokes += [Stroke(Layer.CUT, scale * p.outline, closed=True) for p in sheet.placements]
    title = Text(Layer.LETTERING, name, np.array([0.0, high + text]), text, anchor="start", bold=True)
    texts = (title, *_letters(sheet, scale, text), *_levels(sheet, layout, scale, text))
    return Sheet(name, wide, high + 2 * text, tuple(strokes), texts)


def _levels(sheet: SheetLayout, layout: Layout, scale: float, text: float) -> Iterator[Text]:
    """How far above the lower edge each cut along the sheet runs, written beside its end."""
    board = Board()
    for cut in sheet.cuts:
        if cut[0, 1] == cut[1, 1]:
            at = np.array([scale * layout.stock.width + text, scale * cut[0, 1]])
            words = Text(Layer.DIMENSION, f"{cut[0, 1]:.1f}", at, 0.8 * text, anchor="start")
            placed = board.place([words])
            if placed is not None:
                yield placed


def _letters(sheet: SheetLayout, scale: float, text: float) -> Iterator[Text]:
    board = Board()
    for cut in sheet.cuts:
        board.add_line(scale * cut)
    copies = any(p.copy > 1 for p in sheet.placements)
    for placed in sheet.placements:
        outline = scale * placed.outline
        centre, radius = polygon.middle(outline)
        words = f"{placed.name} {placed.copy}" if copies else placed.name
        along = outline[1] - outline[0]
        sizes = [min(text * 2, radius * share) for share in (0.9, 0.6, 0.4)]
        candidates = [
            Text(Layer.LETTERING, words, centre, size, float(np.arctan2(along[1], along[0])))
            for size in sizes
        ]
        yield board.place(candidates, pad=0.1, inside=outline) or candidates[-1]
