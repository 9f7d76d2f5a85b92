"""The painter's translator: a drawing onto anything Qt paints on, back to front.

The window's view without OpenGL, and PNG, SVG and PDF files, all come through here. The OpenGL view uses the
last part of it (`paint_over`) for marks, letters and what is chosen.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QLineF, Qt
from PySide6.QtGui import QPainter, QPen

from mirrorlab.drawing.hiding import LINE_LIFT, dimmed, dimmed_alpha
from mirrorlab.drawing.look import Look, line_style, rgb
from mirrorlab.drawing.model import Line, Role
from mirrorlab.drawing.ordering import cut_loop
from mirrorlab.drawing.prepared import Patch, Prepared
from mirrorlab.drawing.shading import mixed, plane_shade
from mirrorlab.drawing.strokes import Strokes, strokes
from mirrorlab.files.picture_ball import outline_height, paint_ball
from mirrorlab.files.picture_marks import tint
from mirrorlab.files.picture_over import paint_over
from mirrorlab.files.picture_sight import Sight, color_of, path_of, polygon, stroke_path, tint_of

__all__ = ["Sight", "paint_drawing", "paint_over", "paint_under"]

Array = NDArray[np.float64]


def paint_drawing(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    """Paint a drawing."""
    paint_under(painter, prepared, sight)
    paint_over(painter, prepared, sight)


def paint_under(painter: QPainter, prepared: Prepared, sight: Sight, cut: Strokes | None = None) -> None:
    """Paint the faces and lines of a drawing. `cut` are its `strokes`, when they have been made before."""
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    if cut is None:
        cut = strokes(prepared.drawing, sight.look, sight.camera.radius)
    if prepared.drawing.flat:
        paint_flat_faces(painter, prepared, sight)
        _paint_flat_lines(painter, prepared, sight)
    else:
        paint_faces(painter, prepared, sight)
        _paint_lines(painter, prepared, sight, cut)
    painter.restore()


def paint_flat_faces(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    """Paint the faces of a drawing on paper, in the order they are given, in their plain tints."""
    painter.setPen(Qt.PenStyle.NoPen)
    for patch in prepared.patches:
        faces = prepared.drawing.faces[patch.block]
        base, alpha = tint_of(sight.look, faces)
        seen = sight.project(faces.vertices)
        color = color_of(base, alpha)
        painter.setBrush(color)
        if alpha >= 1:
            painter.setPen(QPen(color, 0.6 * sight.scale))  # closes the hairline between neighbours
        painter.drawPath(path_of(seen[loop] for loop in patch.loops))
        painter.setPen(Qt.PenStyle.NoPen)


def paint_faces(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    """Paint the faces of a drawing in space from back to front, the ball between those behind and before it."""
    painter.setPen(Qt.PenStyle.NoPen)
    pieces = _ordered(prepared, sight.camera.eye)
    if not prepared.has_ball:
        for patch, loop in pieces:
            _fill_plane(painter, prepared, sight, patch, loop)
        return
    # What lies beyond the plane of the ball's outline cannot stand before the ball, and the rest must.
    heights = [loop @ sight.camera.axes[2] - outline_height(sight.camera) for _, loop in pieces]
    for (patch, loop), height in zip(pieces, heights, strict=True):
        _fill_plane(painter, prepared, sight, patch, cut_loop(loop, -height))
    paint_ball(painter, prepared, sight)
    for (patch, loop), height in zip(pieces, heights, strict=True):
        _fill_plane(painter, prepared, sight, patch, cut_loop(loop, height))


def _ordered(prepared: Prepared, eye: Array) -> list[tuple[Patch, Array]]:
    """Plane patches from back to front, with the outline of the part that is painted."""
    if prepared.tree is not None:
        return [(prepared.patches[piece.patch], piece.points) for piece in prepared.tree.back_to_front(eye)]
    plane = [patch for patch in prepared.patches if not prepared.curved[patch.block]]
    plane.sort(key=lambda patch: -float(np.linalg.norm(eye - patch.middle)))
    return [(p, loop) for p in plane for loop in prepared.outlines(p)]


def _fill_plane(painter: QPainter, prepared: Prepared, sight: Sight, patch: Patch, loop: Array) -> None:
    if len(loop) < 3:
        return
    faces = prepared.drawing.faces[patch.block]
    base, alpha = tint_of(sight.look, faces)
    normal = sight.camera.axes @ patch.normal
    normal = normal if normal[2] >= 0 else -normal
    base = mixed(base, rgb(sight.look.shade), plane_shade(sight.look, normal))
    color = color_of(base, alpha)
    painter.setBrush(color)
    # A pen of the same tint closes the hairline between neighbours.
    painter.setPen(QPen(color, 0.6 * sight.scale) if alpha >= 1 else QPen(Qt.PenStyle.NoPen))
    painter.drawPolygon(polygon(sight.project(loop)))
    painter.setPen(Qt.PenStyle.NoPen)


def _pen(look: Look, line: Line, scale: float, alpha: float = 1.0, bare: bool = False) -> QPen:
    name, width, _ = line_style(look, line.role, line.index, bare)
    pen = QPen(tint(name, alpha), width * line.weight * scale)
    pen.setCapStyle(Qt.PenCapStyle.FlatCap)
    pen.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    return pen


def _paint_flat_lines(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for line in _back_to_front(prepared):
        pen = _pen(sight.look, line, sight.scale, bare=prepared.bare)
        pattern = line_style(sight.look, line.role, line.index)[2]
        if pattern and not line.plain:
            pen.setDashPattern(list(pattern))
        painter.setPen(pen)
        seen = sight.project(np.asarray(line.points, dtype=float))
        if line.apart:
            pieces = zip(seen[0::2, :2].tolist(), seen[1::2, :2].tolist(), strict=True)
            painter.drawLines([QLineF(*start, *end) for start, end in pieces])
            continue
        if line.closed:
            painter.drawPolygon(polygon(seen))
        else:
            painter.drawPolyline(polygon(seen))


def _back_to_front(prepared: Prepared) -> list[Line]:
    order = {Role.NET: 0, Role.GUIDE: 1, Role.GENERATED_MIRROR: 2, Role.TYPED_MIRROR: 4, Role.REGION: 5}
    return sorted(prepared.drawing.lines, key=lambda line: order.get(line.role, 3))


def _paint_lines(painter: QPainter, prepared: Prepared, sight: Sight, cut: Strokes) -> None:
    if not len(cut.start):
        return
    look = sight.look
    back = dimmed(prepared, sight.camera, 0.5 * (cut.start + cut.end), LINE_LIFT)
    a, b = sight.project(cut.start)[:, :2], sight.project(cut.end)[:, :2]
    order = {Role.NET: 0, Role.GUIDE: 1, Role.GENERATED_MIRROR: 2, Role.TYPED_MIRROR: 4, Role.REGION: 5}
    lines = prepared.drawing.lines
    bounds = np.searchsorted(cut.line, np.arange(len(lines) + 1))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for ghost in (False,) if prepared.has_ball else (True, False):
        for number in sorted(range(len(lines)), key=lambda k: order.get(lines[k].role, 3)):
            part = slice(int(bounds[number]), int(bounds[number + 1]))
            which = np.flatnonzero(back[part] == ghost) + part.start
            if not len(which):
                continue
            alpha = dimmed_alpha(prepared, look) if ghost else 1.0
            painter.setPen(_pen(look, lines[number], sight.scale, alpha, prepared.bare))
            painter.drawPath(stroke_path(a, b, which, cut.joined))
