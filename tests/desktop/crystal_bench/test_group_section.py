"""Candidates, the working group, and typed symbols."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from mirrorlab.desktop.crystal.crystal_state import crystal_state
from mirrorlab.desktop.symbols import Run, hermann_mauguin
from mirrorlab.drawing.model import Role
from mirrorlab.mirrors import Arrangement


def shown(section):
    return [card.accessibleName() for card in section.choices]


def test_candidates_stand_with_what_decides_between_them(window, section, put):
    put(["90"])
    group = section("Group")
    assert shown(group) == ["mm2 working group", "-42m"]
    assert "fourfold rotoinversion axis" in group.choices[1].below.text()
    assert "along the line of mirrors a and b" in group.choices[1].below.text()
    assert not group.choices[0].below.text()
    assert group.facts.texts["Lattices"].startswith("oP oS oI oF")
    assert "polar" in group.facts.texts["Kind"]
    assert window.table.title.text() == "4 operations"


def test_a_candidate_is_chosen_by_mouse_and_by_key(window, section, put):
    put(["90"])
    group = section("Group")
    QTest.mouseClick(group.choices[1], Qt.MouseButton.LeftButton)
    assert crystal_state(window.document).group == "-42m"
    assert shown(group) == ["mm2", "-42m working group"]
    assert window.table.title.text() == "8 operations"
    assert "4̅2m" in window.table.note.text()
    group.choices[0].setFocus()
    QTest.keyClick(group.choices[0], Qt.Key.Key_Space)
    assert crystal_state(window.document).group == ""
    window.document.undo_stack.undo()
    assert shown(group) == ["mm2", "-42m working group"]
    window.document.undo_stack.undo()
    assert shown(group) == ["mm2 working group", "-42m"]


def test_groups_with_more_mirrors_are_one_click_away(window, section, put):
    put(["90"])
    group = section("Group")
    assert not group.more_grid.isVisible()
    QTest.mouseClick(group.more, Qt.MouseButton.LeftButton)
    assert group.more_grid.isVisible()
    buttons = [group._grid.itemAt(k).widget() for k in range(group._grid.count())]
    QTest.mouseClick(next(b for b in buttons if b.accessibleName() == "4/mmm"), Qt.MouseButton.LeftButton)
    assert crystal_state(window.document).group == "4/mmm"
    assert "these mirrors and more" in group.choices[-1].below.text()
    group.more.setChecked(False)


def test_any_symbol_is_typed(window, section, type_into):
    group = section("Group")
    for text, setting, order in (("D5h", "-10m2", 20), ("31m", "31m", 6), ("Td", "-43m", 24)):
        type_into(group.field, text)
        QTest.keyClick(group.field, Qt.Key.Key_Return)
        assert crystal_state(window.document).group == setting
        assert window.table.title.text() == f"{order} operations"
    assert group.facts.texts["Laue class"].count("overline") == 1


def test_a_symbol_that_is_none_is_told_where_it_was_typed(window, section, type_into):
    group = section("Group")
    type_into(group.field, "5/mx")
    QTest.keyClick(group.field, Qt.Key.Key_Return)
    assert group.field.property("wrong")
    assert '"5/mx"' in group.error.text()
    assert group.error.isVisible()
    assert group.field.text() == "5/mx"
    assert window.document.crystal is None
    type_into(group.field, "m")
    assert not group.error.isVisible()


def test_the_mirrors_of_a_group_go_into_the_triangle(window, section, put, type_into):
    put(["pi/5"])
    group = section("Group")
    assert not group.put.isVisible()
    type_into(group.field, "-43m")
    QTest.keyClick(group.field, Qt.Key.Key_Return)
    QTest.mouseClick(group.put, Qt.MouseButton.LeftButton)
    assert window.document.finding.point_group.hermann_mauguin == "-43m"
    assert sorted(angle.text for angle in window.document.arrangement.angles) == ["60", "60", "90"]
    assert crystal_state(window.document).group == "-43m"
    window.document.undo_stack.undo()
    assert window.document.finding.point_group.hermann_mauguin == "5m"


def test_mirrors_without_a_point_group_are_explained(window, section, type_into):
    window.document.put_sheet(Arrangement.from_family("F4"), "F4")
    group = section("Group")
    assert window.table.empty.isVisible()
    assert "no point group in space" in window.table.empty.text()
    type_into(group.field, "m-3m")
    QTest.keyClick(group.field, Qt.Key.Key_Return)
    assert window.table.title.text() == "48 operations"
    window.document.put_sheet(Arrangement.from_angles(["61", "70", "80"]), "open")
    assert window.document.finding.kind == "open"
    assert window.table.title.text() == "48 operations"


def test_an_operation_and_its_mirror_are_chosen_together(window, section):
    section("Group")
    window.stage.left.choose("Stereogram")
    model = window.table.rows.model()
    kinds = [model.data(model.index(k, 2)) for k in range(model.rowCount())]
    for kind in ("mirror", "rotation"):
        window.table.rows.selectRow(kinds.index(kind))
        key = window.document.selection
        assert key == model.key_of(kinds.index(kind))
        drawing = window.stage.left.drawing
        drawn = {line.key for line in drawing.lines} | {k for one in drawing.points for k in one.keys}
        assert key in drawn


def test_overbars_stand_over_the_digits_they_belong_to():
    assert hermann_mauguin("-43m") == (Run("4", barred=True), Run("3"), Run("m", slanted=True))
    assert hermann_mauguin("-42m") == (Run("4", barred=True), Run("2"), Run("m", slanted=True))
    assert hermann_mauguin("-122m")[0] == Run("12", barred=True)
    assert [run.barred for run in hermann_mauguin("m-3-5")] == [False, True, True]


def test_typed_mirrors_keep_letters_and_keys_in_another_working_group(window, section, put):
    put(["90"])
    group = section("Group")
    group.work_with("-42m")
    window.stage.left.choose("Stereogram")
    drawing = window.stage.left.drawing
    typed = [line for line in drawing.lines if line.role is Role.TYPED_MIRROR]
    assert sorted(line.key for line in typed) == [("mirror", 0), ("mirror", 1)]
    assert {one.text for one in drawing.labels} >= {"a", "b"}
    images = {key for one in drawing.points for key in one.keys if key[0] == "image"}
    assert images == {("image", k) for k in range(4)}
    assert {key[0] for one in drawing.points for key in one.keys} >= {"image", "axis"}


def test_mirrors_that_are_there_already_are_not_offered(section, put):
    put(["60"])
    group = section("Group")
    group.work_with("-3m")
    assert not group.put.isVisible()
    group.work_with("6mm")
    assert group.put.isVisible()
