"""The painter's translator: a drawing onto anything Qt paints on, back to front.

The window's view without OpenGL, and PNG, SVG and PDF files, all come through here. The OpenGL view uses the
last part of it (`paint_over`) for marks, letters and what is chosen.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import (
    QBrush,
    QColor,
    QPaintEngine,
    QPainter,
    QPainterPath,
    QPen,
    QPolygonF,
    QRadialGradient,
)

from mirrorlab.drawing.camera import Camera
from mirrorlab.drawing.hiding import LINE_LIFT, dimmed, dimmed_alpha, hidden
from mirrorlab.drawing.look import Look, face_tint, line_style, rgb
from mirrorlab.drawing.model import Key, Line, Role
from mirrorlab.drawing.ordering import cut_loop
from mirrorlab.drawing.prepared import DOT_ROLES, SHEER_ROLES, Patch, Prepared
from mirrorlab.drawing.shading import HALFWAY, ball_shade, ball_sheen, mixed, plane_shade
from mirrorlab.drawing.strokes import Strokes, strokes
from mirrorlab.files.picture_labels import draw_label, is_tag, label_box
from mirrorlab.files.picture_marks import draw_marks, halo, mark_radius, tint
from mirrorlab.files.picture_triad import draw_triad

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


def paint_drawing(painter: QPainter, prepared: Prepared, sight: Sight, cut: Strokes | None = None) -> None:
    """Paint a drawing. `cut` are its `strokes`, when they have been made before."""
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    if cut is None:
        cut = strokes(prepared.drawing, sight.look, sight.camera.radius)
    if prepared.drawing.flat:
        _paint_flat_faces(painter, prepared, sight)
        _paint_flat_lines(painter, prepared, sight)
    else:
        _paint_faces(painter, prepared, sight)
        _paint_lines(painter, prepared, sight, cut)
    painter.restore()
    paint_over(painter, prepared, sight)


def paint_over(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    """Paint what lies over faces and lines: what is chosen, marks and letters."""
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    if prepared.has_ball:
        # Its edge is smooth by this line, whatever the surface it is drawn on.
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(tint(sight.look.ball_edge), 1.4 * sight.scale))
        painter.drawEllipse(ball_outline(sight))
    for key in sight.selection:
        _paint_chosen(painter, prepared, sight, key, strong=True)
    if sight.hover is not None and sight.hover not in sight.selection:
        _paint_chosen(painter, prepared, sight, sight.hover, strong=False)
    _paint_points(painter, prepared, sight)
    _paint_labels(painter, prepared, sight)
    if not prepared.drawing.flat and prepared.drawing.frame:
        draw_triad(painter, sight.camera, sight.width, sight.height, sight.look, sight.scale)
    painter.restore()


def _polygon(seen: Array) -> QPolygonF:
    return QPolygonF([QPointF(x, y) for x, y in seen[:, :2].tolist()])


def _path(loops: Iterable[Array]) -> QPainterPath:
    path = QPainterPath()
    path.setFillRule(Qt.FillRule.WindingFill)
    for loop in loops:
        path.addPolygon(_polygon(loop))
        path.closeSubpath()
    return path


def _color(look: Look, base: Array, alpha: float) -> QColor:
    r, g, b = (float(min(1.0, max(0.0, c))) for c in base)
    return QColor.fromRgbF(r, g, b, alpha)


def patch_tint(look: Look, role: Role, index: int) -> tuple[Array, float]:
    """Tint and opacity of a face before light falls on it."""
    name, alpha = face_tint(look, role, index)
    return rgb(name), alpha


def _paint_flat_faces(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    painter.setPen(Qt.PenStyle.NoPen)
    for patch in prepared.patches:
        faces = prepared.drawing.faces[patch.block]
        base, alpha = patch_tint(sight.look, faces.role, faces.index)
        seen = sight.project(faces.vertices)
        color = _color(sight.look, base, alpha)
        painter.setBrush(color)
        if alpha >= 1:
            painter.setPen(QPen(color, 0.6 * sight.scale))  # closes the hairline between neighbours
        painter.drawPath(_path(seen[loop] for loop in patch.loops))
        painter.setPen(Qt.PenStyle.NoPen)


def _paint_faces(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    painter.setPen(Qt.PenStyle.NoPen)
    pieces = _ordered(prepared, sight.camera.eye)
    if not prepared.has_ball:
        for patch, loop in pieces:
            _fill_plane(painter, prepared, sight, patch, loop)
        return
    # What lies beyond the plane of the ball's outline cannot stand before the ball, and the rest must.
    heights = [loop @ sight.camera.axes[2] - _outline_height(sight.camera) for _, loop in pieces]
    for (patch, loop), height in zip(pieces, heights, strict=True):
        _fill_plane(painter, prepared, sight, patch, cut_loop(loop, -height))
    _paint_ball(painter, prepared, sight)
    for (patch, loop), height in zip(pieces, heights, strict=True):
        _fill_plane(painter, prepared, sight, patch, cut_loop(loop, height))


def _ordered(prepared: Prepared, eye: Array) -> list[tuple[Patch, Array]]:
    """Plane patches from back to front, with the outline of the part that is painted."""
    if prepared.tree is not None:
        return [(prepared.patches[piece.patch], piece.points) for piece in prepared.tree.back_to_front(eye)]
    plane = [patch for patch in prepared.patches if not prepared.curved[patch.block]]
    plane.sort(key=lambda patch: -float(np.linalg.norm(eye - patch.middle)))
    return [(p, loop) for p in plane for loop in prepared.outlines(p)]


def _outline_height(camera: Camera) -> float:
    """How far towards the eye from its middle the circle lies that is seen as the ball's outline."""
    return 1.0 / camera.distance if camera.field > 0 else 0.0


def _fill_plane(painter: QPainter, prepared: Prepared, sight: Sight, patch: Patch, loop: Array) -> None:
    if len(loop) < 3:
        return
    faces = prepared.drawing.faces[patch.block]
    base, alpha = patch_tint(sight.look, faces.role, faces.index)
    normal = sight.camera.axes @ patch.normal
    normal = normal if normal[2] >= 0 else -normal
    base = mixed(base, rgb(sight.look.shade), plane_shade(sight.look, normal))
    color = _color(sight.look, base, alpha)
    painter.setBrush(color)
    # A pen of the same tint closes the hairline between neighbours.
    painter.setPen(QPen(color, 0.6 * sight.scale) if alpha >= 1 else QPen(Qt.PenStyle.NoPen))
    painter.drawPolygon(_polygon(sight.project(loop)))
    painter.setPen(Qt.PenStyle.NoPen)


def _paint_ball(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    if not prepared.has_ball:
        return
    look, outline = sight.look, ball_outline(sight)
    painter.setBrush(_color(look, 0.5 * (rgb(look.silver_light) + rgb(look.silver_dark)), look.ball_alpha))
    painter.drawEllipse(outline)
    towards, height = sight.camera.axes[2], _outline_height(sight.camera)
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
        base, alpha = patch_tint(look, faces.role, faces.index)
        painter.setBrush(_color(look, base, alpha))
        if not patch.loops:
            painter.drawEllipse(outline)  # all of the ball is one face
        elif any(front[patch.block][loop].any() for loop in patch.loops):
            painter.drawPath(_path(seen[patch.block][loop] for loop in patch.loops))
    _light_ball(painter, sight, outline)


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
        polygon = _polygon(seen)
        if line.closed:
            painter.drawPolygon(polygon)
        else:
            painter.drawPolyline(polygon)


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
            painter.drawPath(_stroke_path(a, b, which, cut.joined))


def _stroke_path(a: Array, b: Array, which: Array, joined: Array) -> QPainterPath:
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


def _paint_points(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    positions = prepared.point_positions
    if not len(positions):
        return
    look = sight.look
    seen = sight.project(positions)
    back = dimmed(prepared, sight.camera, positions)
    margin = 20 * sight.scale
    inside = (seen[:, 0] > -margin) & (seen[:, 0] < sight.width + margin)
    inside &= (seen[:, 1] > -margin) & (seen[:, 1] < sight.height + margin)
    blocks, block_of = prepared.drawing.points, prepared.point_block
    crowd = _crowding(prepared, sight)
    order = sorted(range(len(blocks)), key=lambda k: blocks[k].role is Role.SEED)
    for ghost in (False,) if prepared.has_ball else (True, False):
        painter.setOpacity(dimmed_alpha(prepared, look) if ghost else 1.0)
        for number in order:
            block = blocks[number]
            which = np.flatnonzero((block_of == number) & (back == ghost) & inside)
            which = which[np.argsort(seen[which, 2], kind="stable")]
            if not ghost and (sight.selection or sight.hover is not None):
                _ring_chosen(painter, prepared, sight, seen, which)
            size = sight.scale * (crowd if block.role in DOT_ROLES and block.role is not Role.SEED else 1.0)
            draw_marks(painter, seen[which, :2], block.role, block.symbol, look, size)
    painter.setOpacity(1.0)


LEAST_MARK = 0.42
"""Smallest size of a mark where images crowd, as a part of its full size: still filled or hollow to the eye."""


def _crowding(prepared: Prepared, sight: Sight) -> float:
    """How much smaller marks are drawn so that neighbouring images stay apart."""
    room = prepared.spacing * sight.camera.pixels_per_unit(sight.width, sight.height)
    return float(np.clip(room / (1.25 * sight.look.mark_size * sight.scale), LEAST_MARK, 1.0))


def _ring_chosen(painter: QPainter, prepared: Prepared, sight: Sight, seen: Array, which: Array) -> None:
    for k in which.tolist():
        key = prepared.point_keys[k]
        if key in sight.selection or key == sight.hover:
            block = prepared.drawing.points[int(prepared.point_block[k])]
            r = (mark_radius(block.role, block.symbol, sight.look) + 4.0) * sight.scale
            box = QRectF(seen[k, 0] - r, seen[k, 1] - r, 2 * r, 2 * r)
            halo(painter, box, sight.look, sight.scale)


def _paint_labels(painter: QPainter, prepared: Prepared, sight: Sight) -> None:
    """Letters and other writing. Tags always stand; other writing gives way where it would lie on some before it."""
    labels = prepared.drawing.labels
    if not labels:
        return
    positions = np.array([label.position for label in labels], dtype=float).reshape(-1, 3)
    seen = sight.project(positions)
    back = dimmed(prepared, sight.camera, positions)
    faint = sight.look.far_alpha if prepared.bare else 0.0
    taken: list[QRectF] = []
    shown: list[tuple[int, float]] = []
    tags = np.array([is_tag(label) for label in labels])
    for k in np.lexsort((-seen[:, 2], ~tags)).tolist():
        alpha = faint if back[k] and not tags[k] else 0.0 if back[k] and not prepared.bare else 1.0
        if alpha <= 0:
            continue
        box = label_box(float(seen[k, 0]), float(seen[k, 1]), labels[k], sight.look, sight.scale)
        if not tags[k] and any(box.intersects(other) for other in taken):
            continue
        taken.append(box)
        shown.append((k, alpha))
    for k, alpha in reversed(shown):
        draw_label(painter, float(seen[k, 0]), float(seen[k, 1]), labels[k], sight.look, sight.scale, alpha)


def _paint_chosen(painter: QPainter, prepared: Prepared, sight: Sight, key: Key, strong: bool) -> None:
    """Outline the faces and thicken the lines that stand for a key."""
    look = sight.look
    painter.setBrush(tint(look.select, 0.30 if strong else 0.14))
    pen = QPen(tint(look.select, 1.0 if strong else 0.8), (2.4 if strong else 1.4) * sight.scale)
    pen.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    painter.setPen(pen)
    for patch in prepared.patches_by_key.get(key, ()):
        faces = prepared.drawing.faces[patch.block]
        if not prepared.drawing.flat and faces.role in SHEER_ROLES:
            continue
        if not prepared.drawing.flat and float(patch.normal @ (sight.camera.eye - patch.middle)) <= 0:
            continue
        seen = sight.project(faces.vertices)
        painter.drawPath(_path(seen[loop] for loop in patch.loops))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for index, line in enumerate(prepared.drawing.lines):
        if line.key != key:
            continue
        starts, ends, number = prepared.segments
        part = slice(*np.searchsorted(number, [index, index + 1]).tolist())
        back = hidden(prepared, sight.camera, 0.5 * (starts[part] + ends[part]), LINE_LIFT)
        a, b = sight.project(starts[part])[:, :2], sight.project(ends[part])[:, :2]
        _, width, _ = line_style(look, line.role, line.index)
        pen = QPen(tint(look.select, 0.55 if strong else 0.4), (width + 4.0) * sight.scale)
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        painter.setPen(pen)
        joined = np.full(len(a), not line.apart)
        painter.drawPath(_stroke_path(a, b, np.flatnonzero(~back), joined))
