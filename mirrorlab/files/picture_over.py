"""What lies over faces and lines of a picture: what is chosen, marks, letters, the axes' sign."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QPainter, QPen

from mirrorlab.drawing.hiding import LINE_LIFT, dimmed, dimmed_alpha, hidden
from mirrorlab.drawing.look import line_style
from mirrorlab.drawing.model import Key, Role
from mirrorlab.drawing.prepared import DOT_ROLES, SHEER_ROLES, Prepared
from mirrorlab.files.picture_labels import draw_label, is_tag, label_box
from mirrorlab.files.picture_marks import draw_marks, halo, mark_radius, tint
from mirrorlab.files.picture_sight import Sight, ball_outline, path_of, stroke_path
from mirrorlab.files.picture_triad import draw_triad

Array = NDArray[np.float64]


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
            turns = _along_axes(positions[which]) if prepared.drawing.flat else None
            draw_marks(painter, seen[which, :2], block.role, block.symbol, look, size, turns)
    painter.setOpacity(1.0)


def _along_axes(positions: Array) -> Array:
    """By how many degrees, clockwise from upright, the axes through these places of a stereogram are seen to run."""
    return np.asarray(np.degrees(np.arctan2(positions[:, 0], positions[:, 1])))


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
        painter.drawPath(path_of(seen[loop] for loop in patch.loops))
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
        painter.drawPath(stroke_path(a, b, np.flatnonzero(~back), joined))
