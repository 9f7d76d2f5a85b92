"""The OpenGL view, and that it shows what the painter shows."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QImage
from PySide6.QtWidgets import QVBoxLayout, QWidget
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.stage import make_view
from mirrorlab.desktop.stage.gl_setup import PAINTER_SWITCH, SAMPLES, Card, try_opengl
from mirrorlab.desktop.stage.painter_view import PainterView
from mirrorlab.desktop.stage.view import StageView
from mirrorlab.drawing.look import LIGHT_LOOK, rgb
from mirrorlab.drawing.model import Drawing, Role

Shown = Callable[..., QWidget]


def array_of(image: QImage) -> np.ndarray:
    image = image.convertToFormat(QImage.Format.Format_RGBA8888)
    data = np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), image.bytesPerLine() // 4, 4)
    return data[:, : image.width(), :3].astype(float) / 255


def space_view(drawing: Drawing, shown: Shown, size: tuple[int, int] = (420, 400)):
    from mirrorlab.desktop.stage.space_view import SpaceView

    view = SpaceView()
    view.set_drawing(drawing)
    return shown(view, size)


@pytest.mark.gl
def test_both_views_show_the_same(qtbot: QtBot, shown: Shown, ball: Drawing):
    """Pixels at known places: middles of chambers, images, seed, the ring, the ground."""
    gl = space_view(ball, shown)
    painter = PainterView()
    painter.set_drawing(ball)
    shown(painter, (420, 400))
    for turn in ((0, 0), (35, -20), (140, 30)):
        camera = gl.camera.turned(*turn)
        gl.set_camera(camera)
        painter.set_camera(camera)
        one = array_of(gl.grab().toImage())
        two = array_of(painter.grab().toImage())
        assert one.shape == two.shape
        towards = camera.axes[2]
        places = [p.positions for p in ball.points]
        for faces in ball.faces[:2]:
            middles = faces.vertices[faces.triangles].mean(axis=1)
            places.append(middles[:: max(1, len(middles) // 150)])
        places = np.concatenate(places)
        places = places[places @ towards > 0.35]
        seen = camera.project(places, 420, 400)[:, :2].round().astype(int)
        off = np.abs(one[seen[:, 1], seen[:, 0]] - two[seen[:, 1], seen[:, 0]]).max(axis=1)
        assert np.mean(off < 0.06) > 0.93, "but for edges of lines and marks, which fall between pixels"
        whole = np.abs(one - two).max(axis=2)
        assert np.mean(whole > 0.15) < 0.03


@pytest.mark.gl
def test_tints_where_they_belong(shown: Shown, ball: Drawing):
    view = space_view(replace(ball, points=(), lines=(), labels=(), faces=ball.faces[:2]), shown)
    data = array_of(view.grab().toImage())
    np.testing.assert_allclose(data[3, 3], rgb(LIGHT_LOOK.ground), atol=0.02)
    for faces, tint in zip(ball.faces, (LIGHT_LOOK.silver_light, LIGHT_LOOK.silver_dark), strict=False):
        middles = faces.vertices[faces.triangles].mean(axis=1)
        lower = (middles @ view.camera.axes[2] > 0.75) & (middles @ view.camera.axes[1] < -0.1)
        seen = view.camera.project(middles[lower], 420, 400)[:, :2].round().astype(int)
        got = data[seen[:, 1], seen[:, 0]]
        assert np.mean(np.abs(got - rgb(tint)).max(axis=1) < 0.05) > 0.9


@pytest.mark.gl
def test_turning_shows_other_chambers(shown: Shown, ball: Drawing):
    view = space_view(ball, shown)
    before = array_of(view.grab().toImage())
    view.set_camera(view.camera.turned(45, 0))
    after = array_of(view.grab().toImage())
    assert np.mean(np.abs(before - after).max(axis=2) > 0.1) > 0.15


@pytest.mark.gl
def test_another_drawing_takes_the_same_buffers(shown: Shown, ball: Drawing):
    view = space_view(ball, shown)
    first = array_of(view.grab().toImage())
    item = view.items[0]
    data = item._faces
    seed = replace(ball.points[0], positions=np.array([[0.9, 0.3, 0.31]]) / np.linalg.norm([0.9, 0.3, 0.31]))
    view.set_drawing(replace(ball, points=(seed, *ball.points[1:])))
    assert view.items == [item]
    assert item._faces is data, "faces that are the same are not sent again"
    moved = array_of(view.grab().toImage())
    assert np.abs(first - moved).max() > 0.3
    view.set_drawing(replace(ball, faces=ball.faces[:1], title=ball.title))
    assert item._faces is not data
    assert view.items == [item]
    view.set_drawing(ball)
    np.testing.assert_allclose(array_of(view.grab().toImage()), first, atol=0.01)


@pytest.mark.gl
def test_a_view_that_moves_to_another_window_keeps_its_picture(qtbot: QtBot, shown: Shown, ball: Drawing):
    view = space_view(ball, shown)
    before = array_of(view.grab().toImage())
    other = QWidget()
    layout = QVBoxLayout(other)
    layout.setContentsMargins(0, 0, 0, 0)
    shown(other, (420, 400))
    layout.addWidget(view)
    with qtbot.waitExposed(view):
        view.show()
    qtbot.waitUntil(lambda: view.size() == other.size())
    np.testing.assert_allclose(array_of(view.grab().toImage()), before, atol=0.02)


@pytest.mark.gl
def test_marks_and_letters_lie_over_the_faces(qtbot: QtBot, shown: Shown, ball: Drawing):
    view = space_view(ball, shown)
    grabbed = array_of(view.grab().toImage())
    seed = ball.points[0].positions[0]
    x, y, _ = view.camera.project(seed, 420, 400).round().astype(int)
    np.testing.assert_allclose(grabbed[y, x], rgb(LIGHT_LOOK.seed), atol=0.05)


@pytest.mark.gl
def test_solid_faces_hide_lines_behind_them(shown: Shown):
    """A plate with a line before it and one behind: one is drawn full, the other dimmed."""
    from mirrorlab.drawing.model import Faces, Line

    plate = np.array([[-1.0, -1, 0], [1, -1, 0], [1, 1, 0], [-1, 1, 0]])
    drawing = Drawing(
        "plate",
        (Faces(Role.FACE, plate, np.array([[0, 1, 2], [0, 2, 3]]), (("face", 0),)),),
        tuple(
            Line(Role.REGION, np.array([[-0.8, y, z], [0.8, y, z]]), ("line", k))
            for k, (y, z) in enumerate([(0.4, 0.3), (-0.4, -0.3)])
        ),
        toward=np.array([0.0, -0.02, 1.0]),
        unit="mm",
    )
    view = space_view(drawing, shown)
    data = array_of(view.grab().toImage())
    darkness = []
    for y, z in ((0.4, 0.3), (-0.4, -0.3)):
        px, py, _ = view.camera.project(np.array([0.0, y, z]), 420, 400).round().astype(int)
        darkness.append(data[py - 2 : py + 3, px].mean(axis=1).min())
    plain = data[200, 210].mean()
    assert darkness[0] < plain - 0.25
    assert plain - 0.25 < darkness[1] < plain - 0.02


@pytest.mark.gl
def test_the_stage_uses_opengl_for_space_and_the_painter_for_sheets(
    qtbot: QtBot, shown: Shown, ball: Drawing, sheet: Drawing
):
    stage = make_view("light")
    stage.set_drawing(ball)
    shown(stage)
    assert type(stage.current).__name__ == "SpaceView"
    assert stage.without_opengl == ""
    qtbot.waitUntil(lambda: stage._tested)
    assert type(stage.current).__name__ == "SpaceView", "the picture is not empty, so it stays"
    stage.set_drawing(sheet)
    assert type(stage.current) is PainterView
    stage.set_drawing(ball)
    assert type(stage.current).__name__ == "SpaceView"


@pytest.mark.gl
def test_the_stage_falls_back_when_opengl_draws_nothing(
    qtbot: QtBot, shown: Shown, ball: Drawing, monkeypatch: pytest.MonkeyPatch
):
    from mirrorlab.desktop.stage.space_view import SpaceView

    monkeypatch.setattr(SpaceView, "has_picture", lambda self: False)
    stage = make_view("light")
    stage.set_drawing(ball)
    stage.set_selection(("chamber", 3))
    shown(stage)
    qtbot.waitUntil(lambda: type(stage.current) is PainterView)
    assert "empty picture" in stage.without_opengl
    assert stage.drawing is ball


@pytest.mark.gl
def test_opengl_is_found_and_can_be_switched_off(qapp, monkeypatch: pytest.MonkeyPatch):
    found = try_opengl()
    assert found.missing == ""
    assert found.renderer
    monkeypatch.setenv(PAINTER_SWITCH, "1")
    assert PAINTER_SWITCH in try_opengl().missing


def test_samples_follow_the_renderer():
    assert Card("", "llvmpipe (LLVM 15.0.6, 256 bits)").samples == 0
    assert Card("", "A graphics card").samples == SAMPLES


def forward(stage: StageView, qtbot: QtBot, pointer: Callable[..., None]) -> None:
    place = stage.drawing.points[0].positions[0]
    x, y, _ = stage.camera.project(place, stage.current.width(), stage.current.height()).round()
    with qtbot.waitSignal(stage.hovered) as said:
        pointer(stage.current, QPoint(int(x), int(y)))
    assert said.args == [("image", 0)]
    with qtbot.waitSignal(stage.picked):
        qtbot.mouseClick(stage.current, Qt.MouseButton.LeftButton, pos=QPoint(int(x), int(y)))
    with qtbot.waitSignal(stage.camera_changed):
        qtbot.keyClick(stage.current, Qt.Key.Key_Right)


def test_the_stage_passes_signals_on(qtbot: QtBot, shown: Shown, ball: Drawing, pointer):
    """With OpenGL where there is some, else with the painter: the same words."""
    stage = make_view("light")
    stage.hint_of = lambda key: str(key)
    stage.set_drawing(ball)
    shown(stage)
    forward(stage, qtbot, pointer)
    stage.set_hover(("image", 5))
    stage.set_selection(("image", 5))
    home = stage.camera
    stage.go_home()
    assert stage.camera != home
    stage.set_look("dark")
    assert stage.look.name == "dark"
    assert stage.current.look.name == "dark"


def test_without_opengl_the_stage_paints(
    qtbot: QtBot, shown: Shown, ball: Drawing, pointer, monkeypatch: pytest.MonkeyPatch
):
    monkeypatch.setattr("mirrorlab.desktop.stage.view.why_no_opengl", lambda: "none here")
    stage = make_view("light")
    stage.set_drawing(ball)
    shown(stage)
    assert type(stage.current) is PainterView
    assert stage.without_opengl == "none here"
    forward(stage, qtbot, pointer)
