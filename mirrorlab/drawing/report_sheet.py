"""A report set on pages: headings, sentences, tables, and the cautions in their frame."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from mirrorlab.drawing.caution_block import caution_block
from mirrorlab.drawing.composing import in_pages
from mirrorlab.drawing.cutsheet import TEXT
from mirrorlab.drawing.lettering import text_lines, text_width, wrapped
from mirrorlab.drawing.sheet import Layer, Sheet, Stroke, Text, joined, moved
from mirrorlab.optics.report import Report, Row

PITCH = 1.75
"""Line pitch in text heights."""

COLUMN_GAP = 1.6
"""Between columns of a table, in text heights."""


def report_sheet(report: Report, page: tuple[float, float]) -> Sheet:
    """The report on pages of this printable size, mm."""
    width = page[0]
    rows: list[list[Sheet]] = [[_lines([report.title], 1.7 * TEXT, width, bold=True)]]
    for section in report.sections:
        lead = [_lines([section.heading], 1.2 * TEXT, width, bold=True)]
        body = [_lines([line], 0.95 * TEXT, width) for line in section.lines]
        table = list(_table(section.table, 0.85 * TEXT, width)) if section.table else []
        # A heading stays with what follows it.
        blocks = [*lead, *body, *table]
        rows += [[_stacked(blocks[:2], width)], *([block] for block in blocks[2:])]
    rows += [[Sheet("space", width, 3 * TEXT)], [caution_block(report.cautions, width, 0.9 * TEXT)]]
    return in_pages(report.title, rows, page, gap=0.0)


def _lines(said: Sequence[str], height: float, width: float, bold: bool = False) -> Sheet:
    lines = [line for text in said for line in wrapped(text, height * (1.1 if bold else 1.0), width)]
    pitch = PITCH * height
    lead = 1.2 * height if bold else 0.0
    high = pitch * len(lines) + lead
    texts = text_lines(Layer.LETTERING, lines, np.array([0.0, high - lead]), height, pitch=PITCH)
    if bold:
        texts = tuple(Text(t.layer, t.text, t.at, t.height, anchor="start", bold=True) for t in texts)
    return Sheet("lines", width, high, texts=texts)


def _stacked(blocks: Sequence[Sheet], width: float) -> Sheet:
    high = sum(block.height for block in blocks)
    parts, level = [], high
    for block in blocks:
        level -= block.height
        parts.append(moved(block, np.array([0.0, level])))
    return joined("stack", width, high, tuple(parts))


def _table(rows: Sequence[Row], height: float, width: float) -> Iterator[Sheet]:
    """One block a row; the head in bold over a rule. Columns of numbers stand to the right."""
    count = len(rows[0])
    while True:
        wide = [max(text_width(row[k], height, bold=True) for row in rows) for k in range(count)]
        if sum(wide) + COLUMN_GAP * height * (count - 1) <= width or height < 1.2:
            break
        height *= 0.95
    starts = np.concatenate([[0.0], np.cumsum([w + COLUMN_GAP * height for w in wide])])
    right = [
        all(_is_number(row[k]) for row in rows[1:]) and any(row[k] for row in rows[1:]) for k in range(count)
    ]
    pitch = PITCH * height
    for number, row in enumerate(rows):
        texts = []
        for k, cell in enumerate(row):
            at = starts[k] + wide[k] if right[k] else starts[k]
            if cell:
                place = np.array([at, pitch / 2])
                anchor = "end" if right[k] else "start"
                texts.append(Text(Layer.LETTERING, cell, place, height, anchor=anchor, bold=number == 0))
        rule = Stroke(Layer.LETTERING, np.array([[0.0, 0.0], [starts[-1] - COLUMN_GAP * height, 0.0]]))
        yield Sheet("row", width, pitch, (rule,) if number == 0 else (), tuple(texts))


def _is_number(cell: str) -> bool:
    return not cell or cell.rstrip("°").replace(".", "", 1).replace("-", "", 1).isdigit()
