"""The flat picture of a job's panes."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.drawing.model import Role
from mirrorlab.drawing.panels import panels_drawing
from mirrorlab.optics import JointSettings, corner, make_cut_job, polygon, tube


@pytest.mark.parametrize(
    "job",
    [
        make_cut_job(corner(["90", "60", "36"], opening=120)),
        make_cut_job(tube(["90"] * 4, 180, [60, 40]), JointSettings.named("butted")),
        make_cut_job(tube(["60"] * 3, 200, 150), JointSettings.named("square")),
    ],
    ids=["corner", "four panes", "three panes"],
)
def test_panes_lie_side_by_side_at_true_size(job):
    drawing = panels_drawing(job)
    assert drawing.flat
    assert drawing.unit == "mm"
    assert len(drawing.faces) == len(job.panes)
    boxes = []
    for face, pane in zip(drawing.faces, job.panes, strict=True):
        assert face.role is Role.PANEL
        assert face.keys == (("mirror", pane.flat.index),)
        assert np.all(face.vertices[:, 2] == 0)
        corners = face.vertices[face.triangles][..., :2]
        one, two = corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
        areas = 0.5 * (one[:, 0] * two[:, 1] - one[:, 1] * two[:, 0])
        assert np.all(areas > 0)
        assert areas.sum() == pytest.approx(polygon.area(pane.coated))
    blanks = [line for line in drawing.lines if line.role is Role.TYPED_MIRROR]
    for line, pane in zip(blanks, job.panes, strict=True):
        assert polygon.side_lengths(line.points[:, :2]) == pytest.approx(polygon.side_lengths(pane.blank))
        boxes.append((line.points.min(axis=0), line.points.max(axis=0)))
    for k, (low, high) in enumerate(boxes):
        for other_low, other_high in boxes[:k]:
            assert np.any(low[:2] > other_high[:2]) or np.any(high[:2] < other_low[:2])
    names = {label.text for label in drawing.labels}
    assert {pane.letter for pane in job.panes} <= names
