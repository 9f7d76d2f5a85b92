"""How a drawing is looked at, and small steps between its arrays and Qt's shapes."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPaintDevice, QPainter, QPainterPath, QPolygonF

from mirrorlab.drawing.camera import Camera
from mirrorlab.drawing.look import Look, face_tint, rgb
from mirrorlab.drawing.model import Faces, Key

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Sight:
    """How a drawing is looked at.

    Attributes
    ----------
    width, height : float
        Size of the picture, in the painter's units.
    scale : float
        Painter's units for one of the look's pixels.
    selection : frozenset of Key
        What is chosen.
    hover : Key or None
        What is under the pointer.
    """

    camera: Camera
    width: float
    height: float
    look: Look
    scale: float = 1.0
    selection: frozenset[Key] = frozenset()
    hover: Key | None = None

    def project(self, points: Array) -> Array:
        """Pixels of points, shape (..., 3)."""
        return self.camera.project(points, self.width, self.height)


@contextmanager
def painting(device: QPaintDevice) -> Iterator[QPainter]:
    """A painter on a device, ended whatever happens: a device that goes while painted on takes the process along."""
    painter = QPainter(device)
    try:
        yield painter
    finally:
        painter.end()


def polygon(seen: Array) -> QPolygonF:
    """Pixels as a polygon."""
    return QPolygonF([QPointF(x, y) for x, y in seen[:, :2].tolist()])


def path_of(loops: Iterable[Array]) -> QPainterPath:
    """Loops of pixels as one filled shape."""
    path = QPainterPath()
    path.setFillRule(Qt.FillRule.WindingFill)
    for loop in loops:
        path.addPolygon(polygon(loop))
        path.closeSubpath()
    return path


def color_of(base: Array, alpha: float) -> QColor:
    """A tint, shape (3,), with an opacity."""
    r, g, b = (float(min(1.0, max(0.0, c))) for c in base)
    return QColor.fromRgbF(r, g, b, alpha)


def tint_of(look: Look, faces: Faces) -> tuple[Array, float]:
    """Tint and opacity of faces before light falls on them."""
    name, alpha = face_tint(look, faces.role, faces.index)
    return rgb(name), alpha


def stroke_path(a: Array, b: Array, which: Array, joined: Array) -> QPainterPath:
    """Pieces from a to b, those in `which`, run together where one begins at the end of the one before."""
    path = QPainterPath()
    before = -2
    starts, ends = a[which].tolist(), b[which].tolist()
    for k, (x0, y0), (x1, y1), follows in zip(
        which.tolist(), starts, ends, joined[which].tolist(), strict=True
    ):
        if not (follows and k == before + 1):
            path.moveTo(x0, y0)
        path.lineTo(x1, y1)
        before = k
    return path


def ball_outline(sight: Sight) -> QRectF:
    """Where the unit ball about the origin is seen, as the square about its outline."""
    camera = sight.camera
    middle = sight.project(np.zeros(3))
    if camera.field > 0:
        away = float(np.linalg.norm(camera.eye))
        radius = camera.pixels_per_unit(sight.width, sight.height) * camera.distance / np.sqrt(away**2 - 1.0)
    else:
        radius = camera.pixels_per_unit(sight.width, sight.height)
    return QRectF(middle[0] - radius, middle[1] - radius, 2 * radius, 2 * radius)
