"""The panes of a job laid side by side, as a flat picture for the stage."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Faces, Label, Line, Role
from mirrorlab.optics import polygon
from mirrorlab.optics.cutjob import CutJob
from mirrorlab.optics.glass import GlassPanel

Array = NDArray[np.float64]

SPACE = 0.12
"""Room between panes, in parts of the largest one."""


def panels_drawing(job: CutJob) -> Drawing:
    """The panes with their mirror side up: the reflecting faces filled, the blanks as lines around them.

    Keys are ("mirror", i), so that a selected pane is the selected mirror everywhere.
    """
    boxes = [polygon.bounds(pane.blank) for pane in job.panes]
    largest = max(max(right - left, top - bottom) for left, bottom, right, top in boxes)
    long = all(right - left > 2 * (top - bottom) for left, bottom, right, top in boxes)
    columns = 1 if long else len(boxes) if len(boxes) < 4 else 2
    faces, lines, labels = [], [], []
    x = y = row_height = 0.0
    for k, (pane, (left, bottom, right, top)) in enumerate(zip(job.panes, boxes, strict=True)):
        if k and k % columns == 0:
            x, y, row_height = 0.0, y - row_height - SPACE * largest, 0.0
        shift = np.array([x - left, y - top])
        faces.append(_face(pane, shift))
        lines += _outlines(pane, shift)
        labels += _labels(pane, shift)
        x += right - left + SPACE * largest
        row_height = max(row_height, top - bottom)
    return Drawing(
        title=job.title,
        faces=tuple(faces),
        lines=tuple(lines),
        labels=tuple(labels),
        flat=True,
        frame="panes laid flat, mirror side up",
        unit="mm",
    )


def _flat(points: Array, shift: Array) -> Array:
    return np.column_stack([points + shift, np.zeros(len(points))])


def _face(pane: GlassPanel, shift: Array) -> Faces:
    """The reflecting face as a fan; it is convex."""
    outline = _flat(pane.coated, shift)
    triangles = np.array([(0, i, i + 1) for i in range(1, len(outline) - 1)])
    return Faces(Role.PANEL, outline, triangles, (("mirror", pane.flat.index),), pane.flat.index)


def _outlines(pane: GlassPanel, shift: Array) -> list[Line]:
    index = pane.flat.index
    key = ("mirror", index)
    ground = [
        outline for outline in (pane.coated, pane.clear) if not np.allclose(outline, pane.blank, atol=0.05)
    ]
    return [
        Line(Role.TYPED_MIRROR, _flat(pane.blank, shift), key, index, closed=True),
        *(Line(Role.GUIDE, _flat(outline, shift), key, index, closed=True) for outline in ground),
    ]


def _labels(pane: GlassPanel, shift: Array) -> list[Label]:
    index, key = pane.flat.index, ("mirror", pane.flat.index)
    centre, _ = polygon.middle(pane.coated)
    found = [Label(pane.letter, _flat(centre[None], shift)[0], Role.TYPED_MIRROR, key, index)]
    ends = np.roll(pane.blank, -1, axis=0)
    for start, stop, length in zip(pane.blank, ends, polygon.side_lengths(pane.blank), strict=True):
        middle = (start + stop) / 2
        found.append(Label(f"{length:.1f}", _flat(middle[None], shift)[0], Role.GUIDE, key, index))
    return found
