"""The camera: what projects where, and back."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from mirrorlab.drawing.camera import LEAST_ZOOM, MOST_ZOOM, Camera, home_camera
from mirrorlab.drawing.model import Drawing, Label, Line, Role

ANGLE = st.floats(-180, 180)
TILT = st.floats(-89, 89)
SIZE = st.tuples(st.floats(50, 2000), st.floats(50, 2000))
FIELD = st.sampled_from([0.0, 26.0, 60.0])


@given(ANGLE, TILT)
def test_axes_are_right_handed_and_upright(azimuth: float, elevation: float):
    axes = Camera(azimuth, elevation).axes
    np.testing.assert_allclose(axes @ axes.T, np.eye(3), atol=1e-12)
    assert np.linalg.det(axes) == pytest.approx(1)
    assert axes[0, 2] == pytest.approx(0, abs=1e-12), "the right hand is level"
    assert axes[1, 2] >= 0, "up is up"


@given(ANGLE, TILT, SIZE, FIELD, st.floats(0.5, 3), st.tuples(st.floats(-0.5, 0.5), st.floats(-0.5, 0.5)))
def test_a_ray_goes_through_what_is_projected(azimuth, elevation, size, field, zoom, pan):
    camera = Camera(azimuth, elevation, (0.3, -0.2, 0.1), (1.4, 1.4), zoom, pan, field)
    point = np.array([0.5, 0.3, -0.6])
    x, y, _ = camera.project(point, *size)
    start, direction = camera.ray(x, y, *size)
    off = np.cross(point - start, direction)
    np.testing.assert_allclose(off, 0, atol=1e-8)
    assert (point - start) @ direction > 0


@given(ANGLE, TILT, SIZE, FIELD, st.floats(0.5, 3), st.tuples(st.floats(-0.5, 0.5), st.floats(-0.5, 0.5)))
def test_matrices_agree_with_project(azimuth, elevation, size, field, zoom, pan):
    camera = Camera(azimuth, elevation, (0.3, -0.2, 0.1), (1.4, 1.4), zoom, pan, field)
    points = np.array([[0.5, 0.3, -0.6], [-1, 0.2, 0.7], [0.3, -0.2, 0.1]])
    view, projection = camera.matrices(*size)
    clip = np.column_stack([points, np.ones(3)]) @ (projection @ view).T
    ndc = clip[:, :3] / clip[:, 3:]
    width, height = size
    seen = camera.project(points, *size)
    np.testing.assert_allclose((ndc[:, 0] + 1) * 0.5 * width, seen[:, 0], atol=1e-6)
    np.testing.assert_allclose((1 - ndc[:, 1]) * 0.5 * height, seen[:, 1], atol=1e-6)
    assert (np.abs(ndc[:, 2]) < 1).all(), "between the near and the far plane"
    assert (np.argsort(ndc[:, 2]) == np.argsort(-seen[:, 2])).all(), "nearer is less deep"


@given(ANGLE, TILT)
def test_all_of_a_ball_fits(azimuth: float, elevation: float):
    camera = Camera(azimuth, elevation, extent=(1.0, 1.0), room=0.0)
    rng = np.random.default_rng(1)
    points = rng.normal(size=(4000, 3))
    points /= np.linalg.norm(points, axis=1, keepdims=True)
    seen = camera.project(points, 300, 200)
    reach = np.hypot(seen[:, 0] - 150, seen[:, 1] - 100)
    assert 98 < reach.max() <= 100 + 1e-9, "the ball's outline just touches the shorter sides"


@given(st.floats(0.3, 3), st.floats(0, 400), st.floats(0, 300))
def test_zooming_keeps_what_is_under_the_pointer(factor: float, x: float, y: float):
    camera = Camera(-90, 90, field=0.0, extent=(2.0, 1.0), pan=(0.2, -0.1))
    start, _ = camera.ray(x, y, 400, 300)
    after = camera.zoomed(factor, (x, y), (400, 300)).project(start, 400, 300)
    np.testing.assert_allclose(after[:2], [x, y], atol=1e-7)


def test_zoom_has_an_end():
    camera = Camera()
    assert camera.zoomed(1e9).zoom == MOST_ZOOM
    assert camera.zoomed(1e-9).zoom == LEAST_ZOOM


def test_panning_moves_by_pixels():
    camera = Camera(10, 20, extent=(1.3, 1.3))
    before = camera.project(np.zeros(3), 320, 240)
    after = camera.panned(12, -7, (320, 240)).project(np.zeros(3), 320, 240)
    np.testing.assert_allclose(after[:2] - before[:2], [12, -7], atol=1e-9)


def test_turning_pushes_the_near_side():
    camera = Camera(30, 10)
    near = 0.8 * camera.axes[2]
    before = camera.project(near, 200, 200)
    right = camera.turned(10, 0).project(near, 200, 200)
    up = camera.turned(0, 10).project(near, 200, 200)
    assert right[0] > before[0] + 5
    assert up[1] < before[1] - 5


def test_turning_stops_at_the_poles():
    assert Camera().turned(0, -500).elevation < 90
    assert Camera().turned(0, 500).elevation > -90


def test_home_of_a_flat_drawing_looks_straight_on_and_fits():
    line = Line(Role.PANEL, np.array([[10.0, 5, 0], [210, 5, 0], [210, 45, 0]]), ("panel", 0))
    camera = home_camera(Drawing("sheet", lines=(line,), flat=True, unit="mm"))
    seen = camera.project(line.points, 400, 300)
    assert (seen[:, 0] >= 0).all()
    assert (seen[:, 0] <= 400).all()
    assert 355 < seen[1, 0] - seen[0, 0] <= 370, "the longer side fills the width, but for room at the edges"
    assert seen[2, 1] < seen[1, 1], "y is up"
    assert seen[1, 0] > seen[0, 0], "x is to the right"


def test_home_looks_from_the_best_side(hand: Drawing):
    camera = home_camera(hand)
    best = hand.toward / np.linalg.norm(hand.toward)
    np.testing.assert_allclose(camera.axes[2], best, atol=1e-9)


def test_home_of_an_empty_drawing():
    assert home_camera(Drawing("nothing")).zoom == 1
    assert home_camera(Drawing("nothing", flat=True)).field == 0


def test_home_of_a_lone_label():
    camera = home_camera(Drawing("one", labels=(Label("a", np.array([5.0, 6, 7]), Role.GUIDE),)))
    assert np.isfinite(camera.project(np.array([5.0, 6, 7]), 100, 100)).all()
