"""The eye's view in the real window: traced beside it, turned by the mouse, saved as a file."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QColor, QImage, QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

from mirrorlab.desktop.glass.eye_tracing import SAVE_JOB
from mirrorlab.desktop.glass.glass_state import glass_state
from mirrorlab.desktop.glass.workings import assembly_of

LONG = 120_000


def pixels(image):
    found = image.convertToFormat(QImage.Format.Format_RGB888)
    rows = np.frombuffer(found.constBits(), dtype=np.uint8).reshape(found.height(), found.bytesPerLine())
    return rows[:, : 3 * found.width()].reshape(found.height(), found.width(), 3).astype(int)


def drag(eye, start, stop, steps=4):
    QTest.mousePress(eye, Qt.MouseButton.LeftButton, pos=start)
    for k in range(1, steps + 1):
        QTest.mouseMove(eye, start + (stop - start) * k / steps)
    QTest.mouseRelease(eye, Qt.MouseButton.LeftButton, pos=stop)


def test_a_fine_picture_comes_and_fills_the_pane(eye):
    assert (eye.image.width(), eye.image.height()) == eye.pixels()
    found = pixels(eye.image)
    assert len(np.unique(found.reshape(-1, 3), axis=0)) > 100
    assert eye.note == ""


def test_an_angle_typed_in_the_triangle_changes_it(window, eye, qtbot, type_into):
    before = pixels(eye.image)
    type_into(window.mirrors.triangle.cells[2].edit, "40")
    qtbot.waitUntil(lambda: eye.fine, timeout=LONG)
    assert (pixels(eye.image) != before).any()


def test_one_angle_moves_everything_together(window, eye, section, qtbot, type_into, answered):
    tolerance = section("Tolerance")
    answered(tolerance.figures)
    window.stage.double.click()
    window.stage.right.choose("Assembly")
    view, standing = pixels(eye.image), window.stage.right.drawing
    type_into(window.mirrors.triangle.cells[2].edit, "45.5")
    answered(tolerance.figures)
    assert "bc 4° overlap" in tolerance.facts.texts["Left over"]  # eight sectors, half a degree each
    assert window.stage.right.drawing is not standing
    qtbot.waitUntil(lambda: eye.fine, timeout=LONG)
    assert pixels(eye.image).shape != view.shape or (pixels(eye.image) != view).any()


def test_dragging_turns_the_eye_as_one_step(window, eye, qtbot):
    steps, ahead = window.document.undo_stack.count(), assembly_of(window.document).target
    drag(eye, QPoint(200, 200), QPoint(280, 180))
    state = glass_state(window.document)
    # Dragging the picture to the right brings what is at the left into sight, as when paper is pushed.
    assert float(state.turn[0]) < 0
    assert float(state.turn[1]) < 0
    assert window.document.undo_stack.count() == steps + 1
    assert not np.allclose(assembly_of(window.document).target, ahead)
    qtbot.waitUntil(lambda: eye.fine, timeout=LONG)
    window.document.undo_stack.undo()
    assert np.allclose(assembly_of(window.document).target, ahead)


def test_the_wheel_and_keys_change_the_field_of_view(window, eye):
    wide = np.degrees(assembly_of(window.document).field_of_view)
    steps = window.document.undo_stack.count()
    for _ in range(3):
        event = QWheelEvent(
            QPointF(50, 50),
            QPointF(eye.mapToGlobal(QPoint(50, 50))),
            QPoint(),
            QPoint(0, 120),
            Qt.MouseButton.NoButton,
            Qt.KeyboardModifier.NoModifier,
            Qt.ScrollPhase.NoScrollPhase,
            False,
        )
        QApplication.sendEvent(eye, event)
    narrow = np.degrees(assembly_of(window.document).field_of_view)
    assert narrow == pytest.approx(wide / 1.1**3, abs=0.2)
    assert window.document.undo_stack.count() == steps + 1
    eye.setFocus()
    QTest.keyClick(eye, Qt.Key.Key_Minus)
    assert np.degrees(assembly_of(window.document).field_of_view) > narrow


def test_arrow_keys_turn_it(window, eye):
    eye.setFocus()
    QTest.keyClick(eye, Qt.Key.Key_Right)
    QTest.keyClick(eye, Qt.Key.Key_Right)
    QTest.keyClick(eye, Qt.Key.Key_Up)
    assert glass_state(window.document).turn == ("4.0", "2.0")


def test_what_is_wrong_is_said_over_the_last_picture(window, eye, section, type_into, qtbot):
    view = section("View")
    type_into(view.eye.entries["eye 2"].field, "-40")
    assert "behind mirror" in eye.note
    assert eye.image is not None
    assert "behind mirror" in view.eye.error.text()
    window.document.undo_stack.undo()
    qtbot.waitUntil(lambda: eye.fine and not eye.note, timeout=LONG)
    assert not view.eye.error.isVisible()


def test_ones_own_picture_is_seen(window, eye, section, type_into, qtbot, tmp_path, put):
    put(["60", "60", "60"])
    plain = QImage(32, 32, QImage.Format.Format_RGB888)
    plain.fill(QColor(0, 200, 0))
    path = tmp_path / "green.png"
    assert plain.save(str(path))
    view = section("View")
    QTest.mouseClick(view.thing.button(1), Qt.MouseButton.LeftButton)
    assert "no picture yet" in view.picture.error.text().lower()
    type_into(view.picture.entries["picture"].field, str(path))
    assert not view.picture.error.isVisible()
    qtbot.waitUntil(lambda: eye.fine and not eye.note, timeout=LONG)
    middle = pixels(eye.image)[eye.height() // 2, eye.width() // 2]
    assert abs(middle - [0, 200, 0]).max() <= 2
    type_into(view.picture.entries["picture"].field, str(tmp_path / "none.png"))
    assert "no such picture file" in view.picture.error.text()


def test_a_file_that_is_no_picture_is_told(window, eye, section, type_into, qtbot, tmp_path):
    path = tmp_path / "words.png"
    path.write_text("not a picture")
    view = section("View")
    QTest.mouseClick(view.thing.button(1), Qt.MouseButton.LeftButton)
    type_into(view.picture.entries["picture"].field, str(path))
    qtbot.waitUntil(lambda: "not a picture" in eye.note, timeout=LONG)


def test_the_seed_as_a_ball(window, eye, section, qtbot):
    view = section("View")
    QTest.mouseClick(view.thing.button(2), Qt.MouseButton.LeftButton)
    made = assembly_of(window.document)
    way = made.axes @ window.document.orbit.seed
    assert np.allclose(np.cross(way, made.place.centre), 0, atol=1e-6)
    assert made.place.shape == "ball"
    qtbot.waitUntil(lambda: eye.fine, timeout=LONG)


def test_it_is_saved_at_any_size(window, eye, section, type_into, qtbot, tmp_path):
    view = section("View")
    type_into(view.size.entries["size"].field, "320 x 200")
    path = tmp_path / "view.png"
    view.save_view(path)
    qtbot.waitUntil(lambda: SAVE_JOB not in window.document.work.running(), timeout=LONG)
    saved = QImage(str(path))
    assert (saved.width(), saved.height()) == (320, 200)
    assert len(np.unique(pixels(saved).reshape(-1, 3), axis=0)) > 100


def test_saving_is_cancelled_and_leaves_no_file(window, eye, section, type_into, qtbot, tmp_path):
    view = section("View")
    type_into(view.size.entries["size"].field, "8000 x 8000")
    view.save_view(tmp_path / "large.png")
    qtbot.waitUntil(lambda: window.status.bar.maximum() > 1, timeout=LONG)
    assert SAVE_JOB in window.document.work.running()
    QTest.mouseClick(window.status.cancel, Qt.MouseButton.LeftButton)
    assert SAVE_JOB not in window.document.work.running()
    qtbot.waitUntil(lambda: not window.document.work._leaving, timeout=LONG)
    assert list(tmp_path.iterdir()) == [] or [p.suffix for p in tmp_path.iterdir()] == [".ini"]


@pytest.mark.parametrize("text", ["wide", "0 x 100", "100", "99999 x 10"])
def test_a_size_that_cannot_be_read(eye, section, type_into, tmp_path, text):
    view = section("View")
    type_into(view.size.entries["size"].field, text)
    view.save_view(tmp_path / "view.png")
    assert "write width x height" in view.size.error.text()
    assert not (tmp_path / "view.png").exists()


def test_looking_straight_ahead_again(window, eye, section, type_into):
    view = section("View")
    type_into(view.turn.entries["turn 0"].field, "20")
    type_into(view.turn.entries["field"].field, "30")
    assert np.degrees(assembly_of(window.document).field_of_view) == pytest.approx(30)
    QTest.mouseClick(view.ahead, Qt.MouseButton.LeftButton)
    state = glass_state(window.document)
    assert (state.turn, state.field) == (("", ""), "")
    assert "sunlight" in view.cautions.keys
    assert "photosensitivity" in view.cautions.keys
