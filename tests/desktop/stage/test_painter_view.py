"""The painter's view, by mouse, wheel and keyboard."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QImage, QWheelEvent
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.stage.handling import KEY_TURN, Handling
from mirrorlab.desktop.stage.painter_view import PainterView
from mirrorlab.drawing.camera import home_camera
from mirrorlab.drawing.look import DARK_LOOK, LIGHT_LOOK, rgb
from mirrorlab.drawing.model import Drawing, Role

Key = Qt.Key
Left, Right = Qt.MouseButton.LeftButton, Qt.MouseButton.RightButton
Shown = Callable[..., PainterView]


@pytest.fixture
def view(shown: Shown, ball: Drawing) -> PainterView:
    made = PainterView()
    made.set_drawing(ball)
    return shown(made)


def at(view: Handling, place: np.ndarray) -> QPoint:
    x, y, _ = view.camera.project(np.asarray(place, dtype=float), view.width(), view.height())
    return QPoint(round(x), round(y))


def facing(view: Handling) -> tuple[np.ndarray, tuple[str, int]]:
    """An image well in front, and its key."""
    block = next(p for p in view.drawing.points if p.role is Role.IMAGE_ODD)
    k = int((block.positions @ view.camera.axes[2]).argmax())
    return block.positions[k], block.keys[k]


@pytest.fixture
def drag(qtbot: QtBot, pointer: Callable[..., None]) -> Callable[..., None]:
    """Press, move in two steps and let go."""

    def act(view: PainterView, start: QPoint, step: QPoint, button=Left, keys=None) -> None:
        keys = keys or Qt.KeyboardModifier.NoModifier
        qtbot.mousePress(view, button, keys, start)
        pointer(view, start + step / 2, button, keys)
        pointer(view, start + step, button, keys)
        qtbot.mouseRelease(view, button, keys, start + step)

    return act


def test_hovering_says_what_is_there(qtbot: QtBot, view: PainterView, pointer):
    place, key = facing(view)
    with qtbot.waitSignal(view.hovered) as said:
        pointer(view, at(view, place))
    assert said.args == [key]
    with qtbot.waitSignal(view.hovered) as said:
        pointer(view, QPoint(2, 2))
    assert said.args == [None]


def test_clicking_picks(qtbot: QtBot, view: PainterView):
    place, key = facing(view)
    with qtbot.waitSignal(view.picked) as said:
        qtbot.mouseClick(view, Left, Qt.KeyboardModifier.ControlModifier, at(view, place))
    assert said.args[0] == key
    assert said.args[1] == Qt.KeyboardModifier.ControlModifier
    with qtbot.waitSignal(view.picked) as said:
        qtbot.mouseClick(view, Left, pos=QPoint(2, 2))
    assert said.args[0] is None


def test_dragging_turns_and_does_not_pick(qtbot: QtBot, view: PainterView, drag):
    before = view.camera
    place, _ = facing(view)
    start = at(view, place)
    with qtbot.assertNotEmitted(view.picked), qtbot.waitSignal(view.camera_changed):
        drag(view, start, QPoint(40, 0))
    moved = at(view, place)
    assert view.camera.elevation == before.elevation
    assert moved.x() - start.x() == pytest.approx(40, abs=25), "the surface goes with the pointer"


def test_other_buttons_and_shift_move_the_picture(qtbot: QtBot, view: PainterView, drag):
    for button, modifier in ((Right, None), (Left, Qt.KeyboardModifier.ShiftModifier)):
        view.go_home()
        start = at(view, np.array([0.0, 0, 0.2]))
        drag(view, QPoint(20, 380), QPoint(30, -20), button, modifier)
        assert at(view, np.array([0.0, 0, 0.2])) - start == QPoint(30, -20)


def test_the_seed_is_dragged(qtbot: QtBot, view: PainterView, drag):
    seed = view.drawing.points[0].positions[0]
    camera = view.camera
    places, order = [], []
    view.seed_dragged.connect(places.append)
    view.seed_grabbed.connect(lambda: order.append("grabbed"))
    view.seed_dragged.connect(lambda place: order.append("dragged"))
    view.seed_released.connect(lambda: order.append("released"))
    drag(view, at(view, seed), QPoint(30, 20))
    assert order == ["grabbed", "dragged", "dragged", "released"]
    assert view.camera == camera, "the picture stays"
    for place in places:
        assert np.linalg.norm(place) == pytest.approx(1)
    assert at(view, places[-1]) - at(view, seed) == QPoint(30, 20)


def test_a_click_on_the_seed_picks_it(qtbot: QtBot, view: PainterView):
    with qtbot.assertNotEmitted(view.seed_grabbed), qtbot.waitSignal(view.picked) as said:
        qtbot.mouseClick(view, Left, pos=at(view, view.drawing.points[0].positions[0]))
    assert said.args[0] == ("image", 0)


def turn_wheel(view: PainterView, place: QPoint, notches: float) -> None:
    event = QWheelEvent(
        QPointF(place),
        view.mapToGlobal(QPointF(place)),
        QPoint(),
        QPoint(0, round(120 * notches)),
        Qt.MouseButton.NoButton,
        Qt.KeyboardModifier.NoModifier,
        Qt.ScrollPhase.NoScrollPhase,
        False,
    )
    QApplication.sendEvent(view, event)


def test_the_wheel_zooms(qtbot: QtBot, view: PainterView, sheet: Drawing):
    turn_wheel(view, QPoint(100, 100), 2)
    assert view.camera.zoom > 1.3
    assert view.camera.pan == (0, 0), "a ball is zoomed about its middle"
    view.set_drawing(sheet)
    corner = at(view, np.array([1.0, 1, 0]))
    turn_wheel(view, corner, 2)
    after = at(view, np.array([1.0, 1, 0]))
    assert (after - corner).manhattanLength() <= 2, "a sheet is zoomed about the pointer"


def test_home_again(qtbot: QtBot, view: PainterView):
    home = view.camera
    qtbot.keyClick(view, Key.Key_Right)
    qtbot.keyClick(view, Key.Key_Plus)
    assert view.camera != home
    qtbot.keyClick(view, Key.Key_Home)
    assert view.camera == home
    turn_wheel(view, QPoint(100, 100), 3)
    qtbot.mouseDClick(view, Left, pos=QPoint(5, 5))
    assert view.camera == home


def test_keys_turn_zoom_and_let_go(qtbot: QtBot, view: PainterView):
    before = view.camera
    qtbot.keyClick(view, Key.Key_Right)
    assert view.camera.azimuth == pytest.approx(before.azimuth - KEY_TURN)
    qtbot.keyClick(view, Key.Key_Left)
    qtbot.keyClick(view, Key.Key_Up, Qt.KeyboardModifier.ShiftModifier)
    assert view.camera.elevation == pytest.approx(before.elevation - 1)
    qtbot.keyClick(view, Key.Key_Minus)
    assert view.camera.zoom < 1
    with qtbot.waitSignal(view.picked) as said:
        qtbot.keyClick(view, Key.Key_Escape)
    assert said.args[0] is None


def test_a_flat_drawing_is_shifted_and_its_seed_moves_on_the_plane(
    qtbot: QtBot, shown: Shown, sheet: Drawing, drag
):
    view = PainterView()
    view.set_drawing(sheet)
    shown(view)
    places = []
    view.seed_dragged.connect(places.append)
    drag(view, at(view, np.array([0.3, 0.2, 0])), QPoint(-40, 30))
    assert places[-1][2] == pytest.approx(0, abs=1e-9)
    assert places[-1][0] < 0.3
    assert places[-1][1] < 0.2
    before = at(view, np.zeros(3))
    drag(view, QPoint(200, 90), QPoint(25, 10))
    assert at(view, np.zeros(3)) - before == QPoint(25, 10)
    qtbot.keyClick(view, Key.Key_Right)
    assert at(view, np.zeros(3)).x() < before.x() + 25


def test_a_turned_picture_stays_turned(qtbot: QtBot, view: PainterView, ball: Drawing, sheet: Drawing):
    from dataclasses import replace

    qtbot.keyClick(view, Key.Key_Right)
    turned = view.camera
    view.set_drawing(replace(ball))
    assert view.camera == turned
    view.set_drawing(sheet)
    assert view.camera == home_camera(sheet), "another picture is seen from its own best side"
    other = replace(ball, toward=np.array([0.0, 1, 0.2]))
    view.set_drawing(other)
    assert view.camera == home_camera(other)


def pixel(view: PainterView, place: np.ndarray) -> np.ndarray:
    image = view.grab().toImage().convertToFormat(QImage.Format.Format_RGB32)
    spot = at(view, place) * image.devicePixelRatio()
    color = image.pixelColor(spot)
    return np.array([color.redF(), color.greenF(), color.blueF()])


def test_looks_and_what_is_chosen_show(qtbot: QtBot, view: PainterView):
    place, key = facing(view)
    chamber = view.pick_at(*(at(view, place + 0.09 * view.camera.axes[1]).toTuple()))
    assert chamber[0] == "chamber"
    spot = place + 0.09 * view.camera.axes[1]
    plain = pixel(view, spot)
    view.set_selection(chamber)
    chosen = pixel(view, spot)
    assert np.abs(chosen - plain).max() > 0.08
    view.set_selection(None)
    np.testing.assert_allclose(pixel(view, spot), plain, atol=0.01)
    view.set_selection({key, chamber})
    assert np.abs(pixel(view, spot) - plain).max() > 0.08
    view.set_selection([])
    view.set_look("dark")
    grabbed = view.grab().toImage().pixelColor(3, 3)
    np.testing.assert_allclose(
        [grabbed.redF(), grabbed.greenF(), grabbed.blueF()], rgb(DARK_LOOK.ground), atol=0.01
    )


def test_a_hint_stands_beside_the_pointer(qtbot: QtBot, view: PainterView, pointer):
    place, _ = facing(view)
    view.hint_of = lambda key: f"{key[0]} {key[1]}\nsecond line"
    before = view.grab().toImage()
    pointer(view, at(view, place))
    after = view.grab().toImage()
    beside = at(view, place) + QPoint(24, 34)
    assert before.pixelColor(beside) != after.pixelColor(beside)


def test_an_empty_drawing_says_why(qtbot: QtBot, shown: Shown):
    view = PainterView()
    shown(view)
    blank = view.grab().toImage()
    view.set_drawing(Drawing("No planes in space have these angles", notes=("They cannot be built.",)))
    assert view.grab().toImage() != blank
    assert "cannot be built" in view.accessibleDescription()


def test_the_ground_is_the_look_s(view: PainterView):
    color = view.grab().toImage().pixelColor(2, 2)
    np.testing.assert_allclose(
        [color.redF(), color.greenF(), color.blueF()], rgb(LIGHT_LOOK.ground), atol=0.01
    )
