"""The unit ball: its chambers as whole shapes, drawn in to its outline, with light laid over them."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QPaintEngine, QPainter, QPainterPath, QRadialGradient

from mirrorlab.drawing.camera import Camera
from mirrorlab.drawing.look import rgb
from mirrorlab.drawing.prepared import Prepared
from mirrorlab.drawing.shading import HALFWAY, ball_shade, ball_sheen
from mirrorlab.files.picture_marks import tint
from mirrorlab.files.picture_sight import Sight, ball_outline, color_of, path_of, tint_of

Array = NDArray[np.float64]


def outline_height(camera: Camera) -> float:
    """How far towards the eye from its middle the circle lies that is seen as the ball's outline."""
    return 1.0 / camera.distance if camera.field > 0 else 0.0


def paint_ball(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    """Paint the ball where there is one."""
    if not prepared.has_ball:
        return
    look, outline = sight.look, ball_outline(sight)
    painter.setBrush(color_of(0.5 * (rgb(look.silver_light) + rgb(look.silver_dark)), look.ball_alpha))
    painter.drawEllipse(outline)
    towards, height = sight.camera.axes[2], outline_height(sight.camera)
    seen, front = [], []
    for block, curved in enumerate(prepared.curved):
        vertices = prepared.drawing.faces[block].vertices if curved else np.zeros((0, 3))
        above = vertices @ towards
        # Beyond the outline a chamber's edge is drawn in to the outline, where the eye loses it.
        across = vertices - above[:, None] * towards
        across *= np.sqrt(1 - height**2) / np.maximum(np.linalg.norm(across, axis=1, keepdims=True), 1e-12)
        front.append(above > height)
        seen.append(sight.project(np.where(front[-1][:, None], vertices, across + height * towards)))
    for patch in prepared.patches:
        if not prepared.curved[patch.block]:
            continue
        faces = prepared.drawing.faces[patch.block]
        base, alpha = tint_of(look, faces)
        painter.setBrush(color_of(base, alpha))
        if not patch.loops:
            painter.drawEllipse(outline)  # all of the ball is one face
        elif any(front[patch.block][loop].any() for loop in patch.loops):
            painter.drawPath(path_of(seen[patch.block][loop] for loop in patch.loops))
    _light_ball(painter, sight, outline)


def _light_ball(painter: QPainter, sight: Sight, outline: QRectF) -> None:
    look, radius = sight.look, 0.5 * outline.width()
    at = np.linspace(0, 1, LIGHT_STEPS)
    shade = ball_shade(look, np.sqrt(np.maximum(0.0, 1 - at**2)))
    _glow(painter, outline.center(), radius, look.shade, at, shade)
    middle = outline.center() + QPointF(HALFWAY[0] * radius, -HALFWAY[1] * radius)
    sheen = ball_sheen(look, np.arcsin(at * SHEEN_REACH))
    _glow(painter, middle, SHEEN_REACH * radius, look.sheen, at, sheen)


LIGHT_STEPS = 40
"""Stops of the ball's shade and sheen."""

SHEEN_REACH = 0.62
"""How far the sheen reaches, in radii of the ball; beyond it there is less than a hundredth of it left."""


def _glow(painter: QPainter, middle: QPointF, radius: float, name: str, at: Array, amount: Array) -> None:
    """Lay a tint over a disc, as much of it as `amount` says at the parts `at` of its radius."""
    engine = painter.paintEngine()
    painter.setPen(Qt.PenStyle.NoPen)
    if engine is None or engine.type() != QPaintEngine.Type.Pdf:
        gradient = QRadialGradient(middle, radius)
        for place, alpha in zip(at.tolist(), amount.tolist(), strict=True):
            gradient.setColorAt(place, tint(name, alpha))
        painter.setBrush(QBrush(gradient))
        painter.drawEllipse(middle, radius, radius)
        return
    # Common PDF readers show a gradient between opacities as solid white: lay thin films over one another instead.
    outward = bool(amount[-1] > amount[0])
    steps = list(zip(at.tolist(), amount.tolist(), strict=True))
    covered = 0.0
    for place, alpha in steps if outward else reversed(steps):
        film = 1 - (1 - alpha) / (1 - covered)
        covered = max(covered, alpha)
        if film < 1e-3:
            continue
        path = QPainterPath()
        path.setFillRule(Qt.FillRule.OddEvenFill)
        if outward:
            path.addEllipse(middle, radius, radius)
        path.addEllipse(middle, place * radius, place * radius)
        painter.setBrush(tint(name, film))
        painter.drawPath(path)
