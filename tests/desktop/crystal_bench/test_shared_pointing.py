"""What is under the pointer is shown in every picture, told in words, and the same for rows of the table."""

from __future__ import annotations

from PySide6.QtCore import QPoint
from PySide6.QtTest import QTest

from mirrorlab.desktop.words import describe
from mirrorlab.drawing.model import Role


def test_a_row_under_the_pointer_is_shown_in_both_pictures(window, section, qtbot):
    positions = section("Positions")
    positions.rows.button(1).click()
    window.stage.double.setChecked(True)
    window.stage.right.choose("Stereogram")
    rows = window.table.rows
    place = rows.visualRect(rows.model().index(3, 1)).center()
    QTest.mouseMove(rows.viewport(), place - QPoint(0, 22))
    QTest.mouseMove(rows.viewport(), place)
    views = [pane.view.current for pane in window.stage.panes]
    qtbot.waitUntil(lambda: all(view.sight().hover == ("image", 3) for view in views))
    rows.left.emit()
    assert all(view.sight().hover is None for view in views)
    positions.rows.button(0).click()


def test_pointing_in_the_stereogram_shows_in_space(window, section, qtbot):
    section("Group")
    window.stage.double.setChecked(True)
    window.stage.right.choose("Stereogram")
    view = window.stage.right.view.current
    images = next(one for one in view.drawing.points if one.role is Role.IMAGE_ODD)
    x, y = view.camera.project(images.positions[:1], view.width(), view.height())[0, :2]
    QTest.mouseMove(view, QPoint(round(x), round(y)))
    qtbot.waitUntil(lambda: view.sight().hover is not None)
    assert window.stage.left.view.current.sight().hover == view.sight().hover


def test_parts_are_told_in_words(window, section, put):
    section("Group")
    window.stage.left.choose("Stereogram")
    axes = {key for one in window.stage.left.drawing.points if one.role is Role.AXIS for key in one.keys}
    told = {describe(window.document, key) for key in axes}
    assert any("4+ [001]" in text for text in told)
    assert len(told) == len(axes)
    assert all(text.startswith(("Axis: ", "Centre")) for text in told)
    put(["90"])
    section("Group").work_with("mmm")
    drawing = window.stage.left.drawing
    kinds = {key[0] for line in drawing.lines for key in [line.key]}
    assert "group mirror" in kinds
    lonely = next(line.key for line in drawing.lines if line.key[0] == "group mirror")
    assert describe(window.document, lonely).startswith("Mirror m (")
    seeds = [one for one in drawing.points if one.role is Role.SEED]
    assert [one.keys for one in seeds] == [(("image", 0),)]
