"""The part of PDF writing that needs Qt: pages, clipping, painting."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from PySide6.QtCore import QMarginsF, QRectF, QSizeF
from PySide6.QtGui import QGuiApplication, QPageLayout, QPageSize, QPainter, QPdfWriter

from mirrorlab.drawing.sheet import Sheet
from mirrorlab.files.cutsheet_paint import paint_sheet, paint_stroke
from mirrorlab.files.cutsheet_pdf import EDGE, RESOLUTION, Tile, foot, register_marks


def print_pages(
    plan: Sequence[tuple[Sheet, Sequence[Tile]]],
    path: Path,
    size: tuple[float, float],
    total: int,
    created: str,
) -> None:
    """Print every tile of every sheet on a page of its own.

    Parameters
    ----------
    plan : sequence of (Sheet, tiles)
    path : Path
    size : tuple of float
        mm, of an upright page.
    total : int
        Number of pages, for the foot.
    created : str
        For the document's properties.

    Raises
    ------
    OSError
        When the file can't be written.
    """
    application = QGuiApplication.instance() or QGuiApplication(["mirrorlab", "-platform", "offscreen"])
    writer = QPdfWriter(str(path))
    writer.setResolution(RESOLUTION)
    writer.setTitle(plan[0][0].title)
    writer.setCreator(created or "Mirrorlab")
    number = 0
    painter = QPainter()
    for sheet, found in plan:
        for tile in found:
            number += 1
            _set_page(writer, size, lying=tile.width > tile.height)
            if number == 1:
                if not painter.begin(writer):
                    msg = f"{path}: can't be written"
                    raise OSError(msg)
            else:
                writer.newPage()
            _print_tile(painter, sheet, found, tile, (number, total))
    painter.end()
    del application


def _set_page(writer: QPdfWriter, size: tuple[float, float], lying: bool) -> None:
    way = QPageLayout.Orientation.Landscape if lying else QPageLayout.Orientation.Portrait
    page = QPageSize(QSizeF(*size), QPageSize.Unit.Millimeter)
    writer.setPageLayout(QPageLayout(page, way, QMarginsF(0, 0, 0, 0), QPageLayout.Unit.Millimeter))


def _print_tile(
    painter: QPainter, sheet: Sheet, found: Sequence[Tile], tile: Tile, count: tuple[int, int]
) -> None:
    painter.save()
    painter.scale(RESOLUTION / 25.4, RESOLUTION / 25.4)
    painter.translate(EDGE, EDGE)
    painter.save()
    painter.setClipRect(QRectF(-0.5, 0, tile.width + 1, tile.height))
    painter.translate(-tile.left, -tile.top)
    paint_sheet(painter, sheet)
    for mark in register_marks(sheet, found, tile):
        paint_stroke(painter, mark, sheet.height)
    painter.restore()
    painter.translate(0, tile.height)
    paint_sheet(painter, foot(sheet, tile, *count))
    painter.restore()
