"""Putting blocks on a sheet: in rows, in one piece or page by page.

A block is a `Sheet` whose content lies between (0, 0) and (width, height).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from mirrorlab.drawing.sheet import Sheet, joined, moved

Rows = list[list[Sheet]]

GAP = 8.0
"""mm between blocks."""

MARGIN = 6.0
"""mm kept free around the content of a sheet in one piece."""

PAGE_TOP = 2.0
"""mm kept free at the top of a page, so that ascenders don't reach the page before."""

A4 = (190.0, 277.0)
"""mm; the printable part of an A4 page."""


def side_by_side(blocks: Sequence[Sheet], width: float) -> Rows:
    """Rows of blocks, none wider than `width` unless a single block is."""
    rows: Rows = []
    used = width + 1.0
    for block in blocks:
        if used + GAP + block.width > width:
            rows.append([])
            used = -GAP
        rows[-1].append(block)
        used += GAP + block.width
    return rows


def tall(row: Sequence[Sheet]) -> float:
    """Height of a row in mm."""
    return max((block.height for block in row), default=0.0)


def in_one_piece(title: str, rows: Rows, width: float, scale: float = 1.0, gap: float = GAP) -> Sheet:
    """All rows from the top down on a sheet of this width, with a margin around."""
    rows = [row for row in rows if tall(row)]
    height = 2 * MARGIN + sum(tall(row) + gap for row in rows) - gap
    parts, level = [], height - MARGIN
    for row in rows:
        parts += _placed(row, MARGIN, level)
        level -= tall(row) + gap
    return joined(title, width, height, tuple(parts), scale)


def in_pages(
    title: str, rows: Rows, page: tuple[float, float], scale: float = 1.0, gap: float = GAP
) -> Sheet:
    """All rows from the top down on pages of this printable size; no row crosses from one to the next.

    Rows must not be higher than a page less `PAGE_TOP`.
    """
    parts, level = [], -PAGE_TOP  # counts down from the top of the first page
    rows = [row for row in rows if tall(row)]
    for row in rows:
        left_on_page = page[1] - (-level) % page[1]
        if tall(row) > left_on_page:
            level -= left_on_page + PAGE_TOP
        parts += _placed(row, 0.0, level)
        level -= tall(row) + gap
    height = math.ceil((-level - gap) / page[1] - 1e-9) * page[1]
    up = np.array([0.0, height])
    whole = joined(title, page[0], height, tuple(moved(part, up) for part in parts), scale)
    return replace(whole, page=page)


def _placed(row: Sequence[Sheet], left: float, top: float) -> list[Sheet]:
    """The blocks of a row, tops level."""
    found, x = [], left
    for block in row:
        found.append(moved(block, np.array([x, top - block.height])))
        x += block.width + GAP
    return found
