"""The real picture in the real window: its pixels, picking, and the seed dragged on the sphere."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QColor, QImage
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.document import Seed
from mirrorlab.desktop.window import Window


def picture(window: Window) -> QImage:
    """What the left pane shows, drawn with OpenGL or by the painter."""
    return window.stage.left.view.current.grab().toImage()


def levels(image: QImage) -> np.ndarray:
    """Red, green, blue of every pixel."""
    plain = image.convertToFormat(QImage.Format.Format_RGB32)
    rows = np.frombuffer(plain.constBits(), np.uint8).reshape(plain.height(), plain.width(), 4)
    return rows[:, :, :3].astype(int)


def pixel(window: Window, direction: np.ndarray) -> QPoint:
    """Where a direction's place on the sphere is seen."""
    view = window.stage.left.view.current
    unit = np.asarray(direction, dtype=float) / np.linalg.norm(direction)
    x, y = view.camera.project(unit[None], view.width(), view.height())[0, :2]
    return QPoint(round(x), round(y))


def tint(window: Window, direction: np.ndarray) -> QColor:
    image = picture(window)
    at = pixel(window, direction) * (image.width() / window.stage.left.view.current.width())
    return image.pixelColor(at)


def test_region_is_golden_and_its_neighbour_silver(window: Window, qtbot: QtBot) -> None:
    window.document.set_seed(Seed(place="corner ab"))  # out of the middle of the region
    qtbot.waitUntil(lambda: not picture(window).isNull())
    group = window.document.finding.group
    assert group is not None
    middle = group.corners.sum(axis=0) / 3 + 0.05 * group.corners[0]
    golden = tint(window, middle)
    assert golden.red() > golden.blue() + 50
    across = middle - 2 * (group.simple[0] @ middle) * group.simple[0]
    silver = tint(window, across)
    assert abs(silver.red() - silver.blue()) < 45
    assert golden.red() - golden.blue() > 2 * abs(silver.red() - silver.blue())


def test_the_picture_follows_the_angle(window: Window) -> None:
    before = levels(picture(window))
    window.document.set_angle(2, "36")
    after = levels(picture(window))
    assert (np.abs(after - before).max(axis=2) > 20).mean() > 0.1
    window.document.undo_stack.undo()
    again = levels(picture(window))
    assert np.abs(again - before).max() < 10  # letters are smoothed anew, within a few levels


def test_the_dark_picture_is_dark(window: Window) -> None:
    corner = QPoint(6, 6)
    light = picture(window).pixelColor(corner).lightness()
    QTest.keyClick(window, Qt.Key.Key_L, Qt.KeyboardModifier.ControlModifier)
    assert picture(window).pixelColor(corner).lightness() < 80 < 200 < light


def test_a_click_on_an_image_picks_it_and_its_row(window: Window, qtbot: QtBot) -> None:
    view = window.stage.left.view.current
    orbit = window.document.orbit
    assert orbit is not None
    group = window.document.finding.group
    assert group is not None
    toward = window.stage.left.drawing.toward
    nearest = int(np.argsort(-(orbit.points @ toward))[1])
    index = nearest or int(np.argsort(-(orbit.points @ toward))[0])
    with qtbot.waitSignal(window.document.selection_changed):
        QTest.mouseClick(view, Qt.MouseButton.LeftButton, pos=pixel(window, orbit.points[index]))
    assert window.document.selection == ("image", index)
    assert window.table.rows.selectionModel().currentIndex().row() == index


def test_the_pointer_reads_a_word(window: Window, qtbot: QtBot) -> None:
    view = window.stage.left.view.current
    orbit = window.document.orbit
    assert orbit is not None
    QTest.mouseMove(view, pixel(window, orbit.points[0]))
    qtbot.waitUntil(lambda: window.status.words.text().startswith("Seed"))
    QTest.mouseMove(view, QPoint(3, 3))
    qtbot.waitUntil(lambda: not window.status.words.text().startswith("Seed"))


def test_the_seed_is_dragged_on_the_sphere_as_one_step_and_snaps(window: Window) -> None:
    view, document = window.stage.left.view.current, window.document
    group = document.finding.group
    assert group is not None
    assert document.orbit is not None
    start = pixel(window, document.orbit.points[0])
    edge = group.corners[1] + group.corners[2]  # the middle of wall a
    end = pixel(window, edge)
    steps = document.undo_stack.count()
    QTest.mousePress(view, Qt.MouseButton.LeftButton, pos=start)
    for part in (0.3, 0.6, 1.0):
        QTest.mouseMove(view, start + (end - start) * part)
    QTest.mouseRelease(view, Qt.MouseButton.LeftButton, pos=end)
    assert document.undo_stack.count() == steps + 1
    assert document.seed.heights is not None
    assert document.seed.heights[0] == 0
    assert len(document.orbit) == 24
    assert "on wall a" in window.status.words.text() or "on wall a" in window.benches.current.seed.note.text()
    document.undo_stack.undo()
    assert len(document.orbit) == 48


@pytest.mark.gl
def test_opengl_serves_on_a_display(window: Window) -> None:
    assert window.stage.left.view is not None
    assert window.stage.left.view.without_opengl == ""
    assert type(window.stage.left.view.current).__name__ == "SpaceView"
