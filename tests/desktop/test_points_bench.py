"""The points bench: seed typed, placed and dragged, images counted, limits kept."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.document import Seed
from mirrorlab.desktop.points_bench import PointsBench
from mirrorlab.desktop.seed_entry import HEIGHTS, PLACE, POINT
from mirrorlab.desktop.window import Window
from mirrorlab.drawing.model import Role
from mirrorlab.mirrors import Arrangement


@pytest.fixture
def bench(window: Window) -> PointsBench:
    found = window.benches.current
    assert isinstance(found, PointsBench)
    window.document.set_seed(Seed(heights=(1, 2, 3), place=None))
    return found


def type_into(bench: PointsBench, index: int, text: str) -> None:
    field = bench.seed.fields[index]
    field.setFocus(Qt.FocusReason.TabFocusReason)
    field.selectAll()
    QTest.keyClicks(field, text)


def test_heights_are_typed_with_a_live_answer(window: Window, bench: PointsBench, qtbot: QtBot) -> None:
    with qtbot.waitSignal(window.document.seed_changed):
        type_into(bench, 0, "0")
    assert window.document.seed.heights == (0, 2, 3)
    assert bench.facts.values["Images"].text() == "24"
    assert "order 2" in bench.facts.values["Stabiliser"].text()
    assert "on wall a" in bench.seed.note.text()
    assert window.table.title.text() == "24 images"


def test_typing_in_one_field_is_one_step(window: Window, bench: PointsBench) -> None:
    steps = window.document.undo_stack.count()
    type_into(bench, 1, "2.75")
    assert window.document.undo_stack.count() == steps + 1
    window.document.undo_stack.undo()
    assert bench.seed.fields[1].text() == "2"


def test_a_bad_number_is_marked_in_its_field_and_changes_nothing(window: Window, bench: PointsBench) -> None:
    type_into(bench, 2, "3..")
    assert bench.seed.fields[2].property("wrong")
    assert '"3.."' in bench.seed.error.text()
    assert bench.seed.fields[2].text() == "3.."
    assert window.document.seed.heights == (1, 2, 3)
    for k in range(3):
        type_into(bench, k, "0")
    assert "corner of all mirrors" in bench.seed.error.text()


def test_coordinates_keep_what_was_typed_though_the_seed_is_folded(
    window: Window, bench: PointsBench
) -> None:
    bench.seed.ways.button(POINT).click()
    for k, text in enumerate(("-1", "-2", "0.5")):
        type_into(bench, k, text)
    assert [field.text() for field in bench.seed.fields] == ["-1", "-2", "0.5"]
    assert window.document.seed.point == (-1, -2, 0.5)
    assert "folded into it" in bench.seed.note.text()


def test_a_named_place_is_chosen(window: Window, bench: PointsBench) -> None:
    bench.seed.ways.button(PLACE).click()
    places = bench.seed.places
    places.setFocus()
    places.setCurrentText("corner bc")
    places.activated.emit(places.currentIndex())
    assert window.document.orbit is not None
    assert len(window.document.orbit) == 6
    window.document.undo_stack.undo()
    assert bench.seed.ways.current == HEIGHTS


def test_rotations_halve_the_images(window: Window, bench: PointsBench) -> None:
    QTest.mouseClick(bench.group.button(1), Qt.MouseButton.LeftButton)
    assert bench.facts.values["Images"].text() == "24"
    assert bench.facts.values["Order of the group"].text() == "24"
    window.document.undo_stack.undo()
    assert bench.group.current == 0


def test_the_seed_is_dragged_in_the_map_as_one_step(window: Window, bench: PointsBench, qtbot: QtBot) -> None:
    qtbot.waitUntil(lambda: bool(bench.map.view.drawing.points) and not bench.map._later.isActive())
    view = bench.map.view.current
    seed = next(p for p in view.drawing.points if p.role is Role.SEED).positions
    x, y = view.camera.project(seed, view.width(), view.height())[0, :2]
    start = QPoint(round(x), round(y))
    steps = window.document.undo_stack.count()
    QTest.mousePress(view, Qt.MouseButton.LeftButton, pos=start)
    for step in (8, 14, 20):
        QTest.mouseMove(view, start + QPoint(0, -step))
    QTest.mouseRelease(view, Qt.MouseButton.LeftButton, pos=start + QPoint(0, -20))
    assert window.document.undo_stack.count() == steps + 1
    heights = window.document.seed.heights
    assert heights is not None
    assert min(heights) >= 0
    before = np.array([1, 2, 3]) / np.linalg.norm(window.document.arrangement.seed([1, 2, 3]))
    assert np.abs(np.array(heights) - before).max() > 0.05
    window.document.undo_stack.undo()
    assert window.document.seed.heights == (1, 2, 3)


def test_the_map_hides_where_there_is_none(window: Window, bench: PointsBench, qtbot: QtBot) -> None:
    window.document.put_sheet(Arrangement.from_family("A4"), "A4")
    qtbot.waitUntil(lambda: not bench.map.isVisible())
    window.document.undo_stack.undo()
    qtbot.waitUntil(bench.map.isVisible)


def test_the_bench_follows_other_mirrors_after_the_table(
    window: Window, bench: PointsBench, qtbot: QtBot
) -> None:
    window.document.set_angle(2, "36")
    assert window.table.title.text() == "120 images"
    qtbot.waitUntil(lambda: bench.facts.values["Order of the group"].text() == "120")


def test_the_limit_of_images_can_be_raised_in_place(window: Window, bench: PointsBench, qtbot: QtBot) -> None:
    assert not bench.limit.isVisible()
    bench.limit.box.setValue(1000)
    window.document.put_sheet(Arrangement.from_family("F4"), "F4")
    assert "1,152 images" in window.document.orbit_note
    qtbot.waitUntil(bench.limit.isVisible)
    bench.limit.box.setValue(2000)
    qtbot.waitUntil(lambda: window.document.orbit is not None)
    assert window.table.title.text() == "1,152 images"
