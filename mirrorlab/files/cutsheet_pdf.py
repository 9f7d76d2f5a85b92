"""Drawing sheets as PDF at true size, on pages of a common printer.

A sheet that divides into pages is printed page by page. A larger one is printed in tiles that overlap, with
register marks to lay them on each other. Every page carries a short rule that must measure true.
"""

from __future__ import annotations

import math
import os
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.sheet import Layer, Sheet, Stroke, Text
from mirrorlab.files.whole import make_whole

PAGES: dict[str, tuple[float, float]] = {"A4": (210.0, 297.0), "A3": (297.0, 420.0), "Letter": (215.9, 279.4)}
"""mm, upright: ISO 216 and ANSI Y14.1 A (8½ × 11 in), from memory."""

EDGE = 10.0
"""mm at each edge of the page that printers may leave blank; the page's title and rule stand in it at the foot."""

OVERLAP = 10.0
"""mm by which tiles overlap, so that register marks stand on both."""

RESOLUTION = 1200
"""Dots per inch of the PDF's own grid: 0.02 mm."""

MOST_PAGES = 400
"""More pages than that are a mistake in the size, not a template."""


class PdfError(ValueError):
    """A sheet that can't be printed this way."""


@dataclass(frozen=True, slots=True)
class Tile:
    """One page.

    Attributes
    ----------
    name : str
        Column letter and row number: A1 is the upper left.
    left, top : float
        mm; the sheet's point (from its upper left corner, down) at the upper left of the printable area.
    width, height : float
        mm, of the printable area.
    """

    name: str
    left: float
    top: float
    width: float
    height: float


def printable(page: str) -> tuple[float, float]:
    """Printable width and height of a page by name, upright, mm.

    Raises
    ------
    PdfError
        When the name is not known.
    """
    if page not in PAGES:
        msg = f"page {page!r}: not known; choose {', '.join(PAGES)}"
        raise PdfError(msg)
    width, height = PAGES[page]
    return width - 2 * EDGE, height - 2 * EDGE


def tiles(sheet: Sheet, page: str) -> tuple[Tile, ...]:
    """The pages a sheet needs, those with nothing on them left out, row by row."""
    if sheet.page is not None:
        wide, high = sheet.page
        count = round(sheet.height / high)
        return tuple(Tile(f"A{k + 1}", 0.0, k * high, wide, high) for k in range(count))
    size = printable(page)
    if sheet.width <= max(size) and sheet.height <= max(size):
        for way in (size, size[::-1]):
            if sheet.width <= way[0] and sheet.height <= way[1]:
                return (Tile("A1", 0.0, 0.0, *way),)
    upright, lying = (_grid(sheet, way) for way in (size, size[::-1]))
    grid, way = (upright, size) if upright[0] * upright[1] <= lying[0] * lying[1] else (lying, size[::-1])
    if grid[0] * grid[1] > MOST_PAGES:
        msg = (
            f"{sheet.title}: {grid[0] * grid[1]} pages of {page} at true size, more than {MOST_PAGES}; "
            "take a larger page, or the DXF or SVG file"
        )
        raise PdfError(msg)
    found = []
    for row in range(grid[1]):
        for column in range(grid[0]):
            tile = Tile(
                f"{_column(column)}{row + 1}", column * (way[0] - OVERLAP), row * (way[1] - OVERLAP), *way
            )
            if _holds_something(sheet, tile):
                found.append(tile)
    return tuple(found)


def _grid(sheet: Sheet, way: tuple[float, float]) -> tuple[int, int]:
    across, down = (
        max(1, math.ceil((total - OVERLAP) / (size - OVERLAP) - 1e-9))
        for total, size in zip((sheet.width, sheet.height), way, strict=True)
    )
    return across, down


def _column(index: int) -> str:
    letters = ""
    index += 1
    while index:
        index, rest = divmod(index - 1, 26)
        letters = chr(ord("A") + rest) + letters
    return letters


def _holds_something(sheet: Sheet, tile: Tile) -> bool:
    from mirrorlab.drawing.dimension_lines import all_strokes, all_texts
    from mirrorlab.drawing.lettering import overlap, text_box

    bottom = sheet.height - tile.top - tile.height
    window = np.array(
        [
            (tile.left, bottom),
            (tile.left + tile.width, bottom),
            (tile.left + tile.width, bottom + tile.height),
            (tile.left, bottom + tile.height),
        ]
    )
    for stroke in all_strokes(sheet):
        ends = np.roll(stroke.points, -1, axis=0) if stroke.closed else stroke.points[1:]
        for start, stop in zip(stroke.points, ends, strict=False):
            if overlap(np.array([start, stop]), window):
                return True
    return any(overlap(text_box(text), window) for text in all_texts(sheet))


def register_marks(sheet: Sheet, page_tiles: Sequence[Tile], tile: Tile) -> Iterator[Stroke]:
    """Crosses in circles in the middle of every overlap, at the same points of the sheet on both tiles."""
    if len(page_tiles) < 2 or sheet.page is not None:
        return
    xs = _marks_along(tile.left, tile.width, sheet.width)
    ys = _marks_along(tile.top, tile.height, sheet.height)
    middles_x = [tile.left + tile.width / 2] if xs else []
    middles_y = [tile.top + tile.height / 2] if ys else []
    corners = [(x, y) for x in xs for y in ys]
    sides = [(x, y) for x in xs for y in middles_y or [tile.top + tile.height / 2]]
    sides += [(x, y) for y in ys for x in middles_x or [tile.left + tile.width / 2]]
    for x, y in corners + sides:
        yield from _cross(np.array([x, sheet.height - y]))


def _marks_along(start: float, size: float, total: float) -> list[float]:
    found = [start + OVERLAP / 2] if start > 0 else []
    if start + size < total - 1e-6:
        found.append(start + size - OVERLAP / 2)
    return found


def _cross(at: NDArray[np.float64]) -> Iterator[Stroke]:
    for way in (np.array([4.0, 0.0]), np.array([0.0, 4.0])):
        yield Stroke(Layer.RULER, np.array([at - way, at + way]))
    turns = np.linspace(0, 2 * np.pi, 33)[:-1]
    yield Stroke(Layer.RULER, at + 2.0 * np.column_stack([np.cos(turns), np.sin(turns)]), closed=True)


def write_pdf(
    sheets: Sequence[Sheet], path: str | os.PathLike[str], page: str = "A4", created: str = ""
) -> int:
    """Write sheets one after the other; returns the number of pages.

    Parameters
    ----------
    sheets : sequence of Sheet
    path : path
    page : str
        "A4", "A3" or "Letter".
    created : str
        Who or what made it, for the document's properties.

    Raises
    ------
    PdfError
        When the page is not known, or too many pages would be needed.
    FileError
        When the file can't be written; nothing is left behind.
    """
    plan = [(sheet, tiles(sheet, page)) for sheet in sheets]
    total = sum(len(found) for _, found in plan)
    from mirrorlab.files.cutsheet_print import print_pages

    make_whole(path, lambda draft: print_pages(plan, draft, PAGES[page], total, created))
    return total


def foot_words(sheet: Sheet, tile: Tile, number: int, total: int) -> str:
    """What stands at the foot of a page."""
    scale = "1:1" if sheet.scale == 1 else f"1:{1 / sheet.scale:g}"
    place = (
        f"  ·  tile {tile.name}"
        if sheet.page is None and (tile.left or tile.top or tile.name != "A1")
        else ""
    )
    return f"{sheet.title}  ·  {scale}  ·  page {number} of {total}{place}"


def foot(sheet: Sheet, tile: Tile, number: int, total: int) -> Sheet:
    """The page's foot: title, page number and a rule of 50 mm; as wide as the tile, `EDGE` high."""
    base = 3.2
    strokes = [Stroke(Layer.RULER, np.array([[0, base + 2.2], [0, base], [50, base], [50, base + 2.2]]))]
    strokes += [Stroke(Layer.RULER, np.array([[x, base], [x, base + 1.4]])) for x in range(10, 50, 10)]
    rule = Text(Layer.RULER, "this rule is 50 mm", np.array([53.0, base + 1.0]), 1.8, anchor="start")
    words = foot_words(sheet, tile, number, total)
    text = Text(Layer.LETTERING, words, np.array([tile.width, base + 1.0]), 1.8, anchor="end")
    return Sheet("foot", tile.width, EDGE, tuple(strokes), (rule, text))
