"""Pictures as files: PNG, SVG and PDF of any drawing, without a screen."""

from __future__ import annotations

import os
import sys
from dataclasses import replace
from pathlib import Path
from typing import Any

from PySide6.QtCore import QBuffer, QByteArray, QIODevice, QMarginsF, QRectF, QSize, QSizeF
from PySide6.QtGui import QGuiApplication, QImage, QPageSize, QPainter, QPdfWriter

from mirrorlab.drawing.camera import Camera, home_camera
from mirrorlab.drawing.look import LIGHT_LOOK, named_look
from mirrorlab.drawing.model import Drawing
from mirrorlab.drawing.prepared import Prepared
from mirrorlab.files.picture_marks import tint
from mirrorlab.files.picture_paint import Sight, paint_drawing
from mirrorlab.files.picture_sight import painting
from mirrorlab.files.whole import FileError, write_whole

FORMATS = (".png", ".svg", ".pdf")

SMALLEST, LARGEST = 16, 20_000
"""Sides of a picture in pixels; a square of the largest takes 1.6 GB."""

NOMINAL_SIDE = 640.0
"""A picture with this short side has lines and letters as wide as in a window; others in proportion."""

SMALLEST_SCALE = 0.8
"""Letters of a small picture shrink no further, so that they can be read."""

POINTS_PER_PIXEL = 0.75
"""A PDF takes a pixel as 1/96 inch."""


class PictureError(FileError):
    """A picture that cannot be written."""


def save_picture(
    drawing: Drawing,
    path: str | os.PathLike[str],
    size: tuple[int, int] = (1200, 1200),
    theme: Any = LIGHT_LOOK,
    *,
    camera: Camera | None = None,
    ground: bool = True,
) -> Path:
    """Write a drawing as PNG, SVG or PDF, whichever the file's name ends in. SVG and PDF are vectors.

    Parameters
    ----------
    drawing : Drawing
    path : path
        Written whole or not at all.
    size : tuple of int
        Width and height in pixels; in an SVG or PDF a pixel is 1/96 inch.
    theme : Look, Theme or str
        "light" or "dark".
    camera : Camera, optional
        Where it is looked at from; else its best side.
    ground : bool
        False leaves the ground transparent.

    Returns
    -------
    pathlib.Path

    Raises
    ------
    PictureError
        An ending or size that is not accepted.
    FileError
        The file cannot be written.
    """
    target = Path(path)
    ending = target.suffix.lower()
    if ending not in FORMATS:
        msg = f'"{target.name}": a picture ends in {", ".join(FORMATS)}'
        raise PictureError(msg)
    width, height = (int(side) for side in size)
    if not (SMALLEST <= width <= LARGEST and SMALLEST <= height <= LARGEST):
        msg = f"picture of {width} × {height} pixels: each side must be from {SMALLEST} to {LARGEST}"
        raise PictureError(msg)
    look = named_look(theme)
    ensure_application()
    prepared = Prepared(drawing)
    scale = max(SMALLEST_SCALE, min(width, height) / NOMINAL_SIDE)
    seen = camera or home_camera(drawing)
    sight = Sight(replace(seen, room=seen.room * scale), width, height, look, scale)
    make = {".png": _png, ".svg": _svg, ".pdf": _pdf}[ending]
    return write_whole(target, make(prepared, sight, ground))


def ensure_application() -> None:
    """Have a Qt application: fonts need one. It needs no screen, and one that does not answer would end the process."""
    if QGuiApplication.instance() is not None:
        return
    screenless = ["-platform", "offscreen"] if sys.platform.startswith("linux") else []
    ensure_application.kept = QGuiApplication(["mirrorlab", *screenless])  # type: ignore[attr-defined]


def _paint(painter: QPainter, prepared: Prepared, sight: Sight, ground: bool) -> None:
    if ground:
        painter.fillRect(QRectF(0, 0, sight.width, sight.height), tint(sight.look.ground))
    paint_drawing(painter, prepared, sight)


def _png(prepared: Prepared, sight: Sight, ground: bool) -> bytes:
    image = QImage(int(sight.width), int(sight.height), QImage.Format.Format_ARGB32_Premultiplied)
    image.fill(0)
    dots = round(96 * sight.scale / 0.0254)
    image.setDotsPerMeterX(dots)
    image.setDotsPerMeterY(dots)
    with painting(image) as painter:
        _paint(painter, prepared, sight, ground)
    image.setText("Title", prepared.drawing.title)
    image.setText("Frame", prepared.drawing.frame)
    buffer, data = _buffer()
    if not image.save(buffer, "PNG"):
        msg = "the image could not be written as PNG"
        raise PictureError(msg)
    buffer.close()
    return bytes(data.data())


def _svg(prepared: Prepared, sight: Sight, ground: bool) -> bytes:
    from PySide6.QtSvg import QSvgGenerator

    buffer, data = _buffer()
    generator = QSvgGenerator()
    generator.setOutputDevice(buffer)
    generator.setResolution(96)
    generator.setSize(QSize(int(sight.width), int(sight.height)))
    generator.setViewBox(QRectF(0, 0, sight.width, sight.height))
    generator.setTitle(prepared.drawing.title)
    generator.setDescription(" · ".join(t for t in (prepared.drawing.frame, *prepared.drawing.notes) if t))
    with painting(generator) as painter:
        _paint(painter, prepared, sight, ground)
    buffer.close()
    return bytes(data.data())


def _pdf(prepared: Prepared, sight: Sight, ground: bool) -> bytes:
    buffer, data = _buffer()
    writer = QPdfWriter(buffer)
    writer.setTitle(prepared.drawing.title)
    writer.setCreator("Mirrorlab")
    points = QSizeF(sight.width * POINTS_PER_PIXEL, sight.height * POINTS_PER_PIXEL)
    writer.setPageSize(
        QPageSize(points, QPageSize.Unit.Point, "picture", QPageSize.SizeMatchPolicy.ExactMatch)
    )
    writer.setPageMargins(QMarginsF(0, 0, 0, 0))
    writer.setResolution(1200)
    with painting(writer) as painter:
        painter.scale(1200 / 96, 1200 / 96)
        _paint(painter, prepared, sight, ground)
    buffer.close()
    return bytes(data.data())


def _buffer() -> tuple[QBuffer, QByteArray]:
    data = QByteArray()
    buffer = QBuffer(data)
    buffer.open(QIODevice.OpenModeFlag.WriteOnly)
    return buffer, data
