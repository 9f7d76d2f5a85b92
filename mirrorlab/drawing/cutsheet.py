"""The cut sheet: all panes of a job at true size, the sections of their joints, a ruler and the cautions."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.caution_block import caution_block
from mirrorlab.drawing.composing import A4, GAP, MARGIN, PAGE_TOP, in_one_piece, in_pages, side_by_side
from mirrorlab.drawing.cutsheet_joints import joint_sections
from mirrorlab.drawing.cutsheet_panel import WRITE, extent, mark_lines, panel_drawing
from mirrorlab.drawing.lettering import text_lines, text_width, wrapped
from mirrorlab.drawing.sheet import Layer, Sheet, Stroke, Text, joined, moved
from mirrorlab.optics import polygon
from mirrorlab.optics.cautions import Place
from mirrorlab.optics.cutjob import CutJob
from mirrorlab.optics.glass import GlassPanel
from mirrorlab.optics.joints import JOINT_WORDS

Array = NDArray[np.float64]

TEXT = 2.6
"""mm; capitals of dimensions for panes up to `SMALL`. ISO 3098 has 2.5 mm as a common size (from memory)."""

SMALL = 400.0
"""mm; longer panes get larger lettering, in proportion, so that it reads on a drawing seen as a whole."""


RULER = 100.0
"""mm"""


def cut_sheet(job: CutJob, unit: str = "mm") -> Sheet:
    """The cut sheet at true size, in one piece: for files that know no pages.

    Parameters
    ----------
    job : CutJob
    unit : str
        "mm" or "in": what lengths are written in.
    """
    blocks, text = _blocks(job, unit)
    widest = max(block.width for block in blocks)
    choices = [max(widest, A4[0] - 2 * MARGIN, share * widest) + 2 * MARGIN for share in (1.0, 1.5, 2.1, 3.2)]
    sheets = [
        in_one_piece(job.title, _rows(job, blocks, width - 2 * MARGIN, text, unit), width)
        for width in choices
    ]
    return min(sheets, key=lambda sheet: max(sheet.width / A4[0], sheet.height / A4[1]))


def cut_pages(job: CutJob, page: tuple[float, float] = A4, unit: str = "mm") -> Sheet:
    """The cut sheet for printing at true size.

    Each pane stands whole on a page when it fits (`Sheet.page` then says how the sheet divides); when one
    doesn't, the sheet is in one piece and has to be printed in tiles.

    Parameters
    ----------
    job : CutJob
    page : tuple of float
        mm; printable width and height of a page, upright. It is turned when that needs fewer pages.
    unit : str
        See `cut_sheet`.
    """
    blocks, text = _blocks(job, unit)
    ways = [
        way
        for way in (page, page[::-1])
        if all(b.width <= way[0] and b.height <= way[1] - PAGE_TOP for b in blocks)
    ]
    if not ways:
        return cut_sheet(job, unit)
    sheets = [in_pages(job.title, _rows(job, blocks, way[0], text, unit), way) for way in ways]
    return min(sheets, key=lambda sheet: sheet.width * sheet.height)


def _blocks(job: CutJob, unit: str) -> tuple[list[Sheet], float]:
    longest = max(float(polygon.side_lengths(pane.blank).max()) for pane in job.panes)
    text = TEXT * max(1.0, min(longest / SMALL, 4.0))
    return [_block(pane, job, text, unit) for pane in job.panes], text


def _rows(job: CutJob, blocks: Sequence[Sheet], inner: float, text: float, unit: str) -> list[list[Sheet]]:
    """All blocks in rows no wider than `inner`, from the top down."""
    cautions = [(caution.title, caution.text) for caution in job.cautions(Place.CUT_SHEET)]
    drawn = {stroke.layer for block in blocks for stroke in block.strokes}
    beside = inner - _ruler().width - GAP
    rows = [
        [_head(job, inner, text, unit)],
        *side_by_side(blocks, inner),
        [_legend(drawn, inner, text)],
        *side_by_side(joint_sections(job, 0.8 * text), inner),
        [_notes(job, inner, text)],
    ]
    if beside > 60 * text:
        return [*rows, [_ruler(), caution_block(cautions, beside, 0.85 * text)]]
    return [*rows, [_ruler()], [caution_block(cautions, inner, 0.85 * text)]]


def _block(pane: GlassPanel, job: CutJob, height: float, unit: str) -> Sheet:
    """A pane's drawing with its caption, lower left corner at (0, 0)."""
    drawing = panel_drawing(pane, job.copies, height, unit, job.kerf)
    left, bottom, right, top = extent(drawing)
    _, _, wide, high = polygon.bounds(pane.blank - pane.blank.min(axis=0))
    write = WRITE[unit]
    caption = [
        f"Pane {pane.letter}" + (f", cut {job.copies}" if job.copies > 1 else ""),
        f"blank {write(wide)} × {write(high)}, {_weight(pane.weight)}",
    ]
    said = {text.text for text in drawing.texts}
    missing = [line for line in mark_lines(pane, 1) if line not in said]
    if missing:
        caption.append(", ".join(missing))
    broad = max(right - left, *(text_width(line, height, bold=not i) for i, line in enumerate(caption)))
    lift = 1.7 * height * len(caption) + 0.6 * height
    shift = np.array([(broad - (right - left)) / 2 - left, -bottom])
    tall = top - bottom + lift
    texts = text_lines(Layer.LETTERING, caption, np.array([0.0, tall]), height, bold_first=True)
    return joined(pane.letter, broad, tall, (moved(drawing, shift), Sheet("", 0, 0, texts=texts)))


def _weight(kilograms: float) -> str:
    return f"{kilograms:.1f} kg" if kilograms >= 1 else f"{1000 * kilograms:.0f} g"


def _head(job: CutJob, width: float, text: float, unit: str) -> Sheet:
    first = job.panes[0]
    surfaces = " and ".join(sorted({str(pane.surface) for pane in job.panes}))
    kind = job.joints.kind
    gap = f", {job.joints.gap:g} mm gap" if job.joints.gap else ""
    kerf = f" Kerf {job.kerf:g} mm." if job.kerf else ""
    written = "millimetres" if unit == "mm" else "inches"
    lines = wrapped(job.title, 1.7 * text, width)
    small = wrapped(
        f"Glass {first.thickness:g} mm, {surfaces}-surface mirror. Joints {kind}{gap}: {JOINT_WORDS[kind]}.{kerf} "
        f"Every pane is drawn at 1:1 with its mirror side up; lengths in {written}.",
        text,
        width,
    )
    big = 1.6 * 1.7 * text * len(lines)
    tall = big + 1.7 * text * len(small) + text
    heading = text_lines(
        Layer.LETTERING, lines, np.array([0.0, tall]), 1.7 * text, pitch=1.6, bold_first=True
    )
    rest = text_lines(Layer.LETTERING, small, np.array([0.0, tall - big - 0.5 * text]), text)
    return Sheet("head", width, tall, texts=(*heading, *rest))


LEGEND = {
    Layer.CUT: "cut here",
    Layer.KERF: "middle of the cut",
    Layer.COATED_FACE: "edge of the coated face",
    Layer.CLEAR_FACE: "edge of the uncoated face",
    Layer.BEVEL: "ground to the bevel",
    Layer.COATING: "coating, in the sections",
}


def _legend(drawn: set[Layer], width: float, text: float) -> Sheet:
    """What the line patterns mean; only those that are drawn."""
    strokes, texts, x, row = [], [], 0.0, 0
    for layer, words in LEGEND.items():
        if layer not in drawn | {Layer.COATING}:
            continue
        wide = 20.0 + text_width(words, 0.8 * text) + 6
        if x + wide > width and x > 0:
            x, row = 0.0, row + 1
        y = -row * 2.2 * text
        if layer is Layer.BEVEL:
            strokes += [Stroke(layer, np.array([[x + s, y - 1.2], [x + s, y + 1.2]])) for s in (2, 6, 10, 14)]
        else:
            strokes.append(Stroke(layer, np.array([[x, y], [x + 16, y]])))
        texts.append(Text(Layer.LETTERING, words, np.array([x + 18, y]), 0.8 * text, anchor="start"))
        x += wide
    tall = 2.2 * text * (row + 1)
    return moved(
        Sheet("legend", width, tall, tuple(strokes), tuple(texts)), np.array([0.0, tall - 1.1 * text])
    )


def _notes(job: CutJob, width: float, text: float) -> Sheet:
    size = 0.85 * text
    lines = [line for note in job.notes for line in wrapped(note, size, width)]
    tall = 1.7 * size * len(lines)
    return Sheet("notes", width, tall, texts=text_lines(Layer.LETTERING, lines, np.array([0.0, tall]), size))


def _ruler() -> Sheet:
    """A rule across and one upright: printers scale the two ways differently."""
    size, rise = 0.8 * TEXT, 50.0
    strokes = [Stroke(Layer.RULER, np.array([[0, rise], [0, 0], [RULER, 0]]))]
    texts = []
    for across, length in ((True, RULER), (False, rise)):
        for mm in range(1 if not across else 0, int(length) + 1):
            tick = 4.0 if mm % 10 == 0 else 2.5 if mm % 5 == 0 else 1.3
            ends = np.array([[mm, 0], [mm, tick]]) if across else np.array([[0, mm], [tick, mm]])
            strokes.append(Stroke(Layer.RULER, ends.astype(float)))
            if mm % 10 == 0 and mm:
                at = np.array([mm, 6.2]) if across else np.array([4.8, mm])
                texts.append(Text(Layer.RULER, str(mm), at, size, anchor="middle" if across else "start"))
    words = wrapped(
        "Check the print before you cut: both rules must measure true, 100 mm across and 50 mm up. "
        "Print at 100 %, never fitted to the page.",
        0.85 * TEXT,
        RULER - 22,
    )
    texts += text_lines(Layer.RULER, words, np.array([16.0, rise - 8.0]), 0.85 * TEXT)
    shift = np.array([1.0, 1.0])
    return moved(Sheet("ruler", RULER + 8.0, rise + 4.0, tuple(strokes), tuple(texts)), shift)
