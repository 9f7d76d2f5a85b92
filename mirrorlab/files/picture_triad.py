"""A small sign in the corner that says how the axes of the coordinates lie."""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QPainter, QPainterPath, QPen

from mirrorlab.drawing.camera import Camera
from mirrorlab.drawing.look import Look
from mirrorlab.files.picture_labels import label_font
from mirrorlab.files.picture_marks import tint

LENGTH, ROOM, SMALLEST = 22.0, 40.0, 260.0
"""Length of an axis and distance of the sign from the corner, in the look's pixels; and the smallest side of a
picture that has room for it."""

NAMES = "xyz"


def draw_triad(
    painter: QPainter, camera: Camera, width: float, height: float, look: Look, scale: float = 1.0
) -> None:
    """Draw the three axes in the lower left corner; what points away from the eye is drawn lighter and first."""
    if min(width, height) < SMALLEST * scale:
        return
    middle = QPointF(ROOM * scale, height - ROOM * scale)
    axes = camera.axes.T  # one row an axis: right, up, towards the eye
    for k in np.argsort(axes[:, 2], kind="stable").tolist():
        x, y, near = axes[k].tolist()
        alpha = 0.85 if near > -0.2 else 0.5
        tip = middle + QPointF(x, -y) * LENGTH * scale
        painter.setPen(QPen(tint(look.muted, alpha), 1.3 * scale))
        painter.drawLine(middle, tip)
        path = _letter(NAMES[k], look.label_fonts, max(1, round(12.0 * scale)))
        size = float(np.hypot(x, y))
        away = QPointF(x, -y) / size if size > 0.25 else QPointF(0.7, -0.7)
        path = path.translated(tip + away * 8.5 * scale)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(tint(look.muted, alpha))
        painter.drawPath(path)


@lru_cache(maxsize=64)
def _letter(name: str, families: tuple[str, ...], size: int) -> QPainterPath:
    """A letter's outline about the origin."""
    path = QPainterPath()
    path.addText(0, 0, label_font(families, size, True), name)
    return path.translated(-path.boundingRect().center())
