"""Marks of points: seed, images, axes with their trade symbols, poles."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QColor, QPainter, QPainterPath, QPen, QPolygonF

from mirrorlab.drawing.look import Look
from mirrorlab.drawing.model import Role

AXIS_SIZE = 1.1
"""Radius of an axis' mark, in the size of an image's mark."""

RING = 1.5
"""A mark of a point below the plane of a stereogram is a ring that a dot above it leaves in sight."""


def tint(name: str, alpha: float = 1.0) -> QColor:
    """A Qt colour from ``#rrggbb`` and an opacity."""
    color = QColor(name)
    color.setAlphaF(min(1.0, max(0.0, alpha)))
    return color


def draw_marks(
    painter: QPainter,
    places: NDArray[np.float64],
    role: Role,
    symbol: str,
    look: Look,
    scale: float = 1.0,
    turns: NDArray[np.float64] | None = None,
) -> None:
    """Draw the marks of points of one role.

    Parameters
    ----------
    places : ndarray, shape (N, 2)
        Pixels, from back to front.
    symbol : str
        Of an axis: "2", "3", "-3" …; of a point in a stereogram: "+" above the plane, "o" below it.
    scale : float
        Pixels for one of the look's pixels.
    turns : ndarray, shape (N,), optional
        By how many degrees, clockwise, the two-cornered mark of a twofold axis is turned from upright.
    """
    ink = _mark_tint(look, role)
    if role is not Role.SEED and symbol in ("+", "o", ""):
        hollow = symbol == "o" or (not symbol and role is Role.IMAGE_ODD)
        _dots(
            painter,
            places,
            hollow,
            ink,
            look,
            scale * _relative_size(role) * (RING if symbol == "o" else 1.0),
        )
        return
    for k, (x, y) in enumerate(places.tolist()):
        if role is Role.SEED:
            _seed(painter, QPointF(x, y), look, scale)
        elif turns is not None and symbol == "2":
            painter.save()
            painter.translate(x, y)
            painter.rotate(float(turns[k]))
            _axis(painter, QPointF(0, 0), symbol, ink, look, scale)
            painter.restore()
        else:
            _axis(painter, QPointF(x, y), symbol, ink, look, scale)


def mark_radius(role: Role, symbol: str, look: Look) -> float:
    """About how far a mark reaches from its middle, in the look's pixels."""
    if role is Role.SEED:
        return 0.5 * look.seed_size
    if symbol in ("+", "o", ""):
        return 0.5 * look.mark_size * _relative_size(role) * (RING if symbol == "o" else 1.0)
    return AXIS_SIZE * look.mark_size


def _relative_size(role: Role) -> float:
    return 0.7 if role in (Role.GUIDE, Role.NET) else 1.0


def _mark_tint(look: Look, role: Role) -> str:
    return {
        Role.FLAGGED: look.flagged,
        Role.FACE: look.accent,
        Role.GUIDE: look.guide,
        Role.NET: look.guide,
        Role.AXIS: look.axis,
        Role.TYPED_MIRROR: look.ink,
    }.get(role, look.image)


def _seed(painter: QPainter, centre: QPointF, look: Look, scale: float) -> None:
    r = 0.5 * look.seed_size * scale
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(tint(look.seed_ground))
    painter.drawEllipse(centre, r, r)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(tint(look.seed), 1.5 * scale))
    painter.drawEllipse(centre, r - 0.75 * scale, r - 0.75 * scale)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(tint(look.seed))
    painter.drawEllipse(centre, 0.52 * r, 0.52 * r)


def _dots(
    painter: QPainter, places: NDArray[np.float64], hollow: bool, ink: str, look: Look, scale: float
) -> None:
    """Filled or hollow dots, all in two strokes of the brush: far quicker than one by one."""
    r = 0.5 * look.mark_size * scale
    outer, inner = (r, r - 1.8 * scale) if hollow else (r + 0.6 * scale, r - 0.5 * scale)
    painter.setPen(Qt.PenStyle.NoPen)
    for radius, color in (
        (outer, tint(ink) if hollow else tint(look.image_hollow, 0.85)),
        (inner, tint(look.image_hollow) if hollow else tint(ink)),
    ):
        path = QPainterPath()
        path.setFillRule(Qt.FillRule.WindingFill)
        for x, y in places.tolist():
            path.addEllipse(QPointF(x, y), radius, radius)
        painter.setBrush(color)
        painter.drawPath(path)


def _polygon(centre: QPointF, sides: int, radius: float, turn: float = 0.0) -> QPolygonF:
    """A regular polygon with one corner up, turned by `turn` radians."""
    return QPolygonF(
        [
            centre
            + QPointF(
                radius * math.sin(turn + 2 * math.pi * k / sides),
                -radius * math.cos(turn + 2 * math.pi * k / sides),
            )
            for k in range(sides)
        ]
    )


def _lens(centre: QPointF, radius: float) -> QPainterPath:
    """The two-cornered mark of a twofold axis, upright."""
    path = QPainterPath(centre + QPointF(0, -radius))
    path.quadTo(centre + QPointF(1.05 * radius, 0), centre + QPointF(0, radius))
    path.quadTo(centre + QPointF(-1.05 * radius, 0), centre + QPointF(0, -radius))
    return path


def _shape(centre: QPointF, order: int, radius: float) -> QPainterPath:
    if order == 2:
        return _lens(centre, radius)
    path = QPainterPath()
    path.addPolygon(_polygon(centre, order, radius, math.pi / 4 if order == 4 else 0.0))
    path.closeSubpath()
    return path


def _axis(painter: QPainter, centre: QPointF, symbol: str, ink: str, look: Look, scale: float) -> None:
    """Filled polygon of the axis' order; an inversion axis is left open with the mark of its rotation inside."""
    inverse = symbol.startswith("-") or "\u0304" in symbol or "\u0305" in symbol
    digits = "".join(c for c in symbol if c.isdigit())
    order = int(digits) if digits else 1
    radius = AXIS_SIZE * (1.22 if order == 3 else 1.0) * look.mark_size * scale
    edge = QPen(tint(look.image_hollow), 1.2 * scale)
    edge.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    if order < 2 or symbol == "m":
        painter.setPen(QPen(tint(ink), 1.4 * scale))
        painter.setBrush(tint(look.image_hollow))
        painter.drawEllipse(centre, 0.4 * radius, 0.4 * radius)
        return
    painter.setPen(edge)
    painter.setBrush(QBrush(tint(ink)))
    painter.drawPath(_shape(centre, order, radius))
    if not inverse:
        return
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(tint(look.image_hollow))
    if order % 2:
        painter.drawEllipse(centre, 0.22 * radius, 0.22 * radius)
        return
    open_path = _shape(centre, order, 0.74 * radius)
    painter.drawPath(open_path)
    painter.setBrush(tint(ink))
    painter.drawPath(_shape(centre, order // 2 if order > 4 else 2, 0.62 * radius))


def halo(painter: QPainter, rect: QRectF, look: Look, scale: float) -> None:
    """A ring about what is chosen."""
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(tint(look.ground, 0.9), 4.6 * scale))
    painter.drawEllipse(rect)
    painter.setPen(QPen(tint(look.select), 2.4 * scale))
    painter.drawEllipse(rect)
