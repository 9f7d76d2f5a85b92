"""Faces typed, forms named, the solid and its poles on the stage."""

from __future__ import annotations

import csv

from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest

from mirrorlab.desktop.crystal.crystal_state import crystal_state
from mirrorlab.desktop.crystal.forms_section import EDGES
from mirrorlab.drawing.model import Role


def test_a_typed_face_is_named_and_shown(window, section, type_into):
    forms = section("Forms")
    type_into(forms.faces.fields[0], "1,1,0")
    assert forms.faces._lines[0].answer.text() == "rhomb-dodecahedron, 12 faces"
    assert window.stage.left.shown == "Form"
    assert sum(len(block.triangles) for block in window.stage.left.drawing.faces) == 24
    assert window.table.title.text() == "12 faces"
    assert "they close" in forms.facts.texts["Together"]


def test_a_second_form_is_typed_in_the_next_field(window, section, type_into):
    forms = section("Forms")
    type_into(forms.faces.fields[0], "100")
    QTest.keyClick(forms.faces.fields[0], Qt.Key.Key_Return)
    assert forms.faces.fields[1].hasFocus()
    QTest.keyClicks(forms.faces.fields[1], "111:1.2")
    assert crystal_state(window.document).faces == ("100", "111:1.2")
    assert window.table.title.text() == "14 faces"
    assert len(forms.faces.fields) == 3


def test_typing_in_one_field_is_one_step(window, section, type_into):
    forms = section("Forms")
    steps = window.document.undo_stack.count()
    type_into(forms.faces.fields[0], "2,1,0")
    assert window.document.undo_stack.count() == steps + 1
    window.document.undo_stack.undo()
    assert forms.faces.texts() == ()
    window.document.undo_stack.redo()
    assert forms.faces.texts() == ("2,1,0",)


def test_what_cannot_be_read_is_told_in_place_and_the_rest_stays(window, section, type_into):
    forms = section("Forms")
    type_into(forms.faces.fields[0], "111")
    type_into(forms.faces.fields[1], "1,1")
    assert forms.faces.fields[1].property("wrong")
    assert '"1,1"' in forms.faces.error.text()
    assert forms.faces.fields[1].text() == "1,1"
    assert window.table.title.text() == "8 faces"
    type_into(forms.faces.fields[1], "-1-1-1")
    assert "each form is typed once" in forms.faces.error.text()
    type_into(forms.faces.fields[1], "1,0,0:-2")
    assert "not a positive number" in forms.faces.error.text()
    type_into(forms.faces.fields[1], "1,0,0:0.9")
    assert not forms.faces.error.isVisible()
    assert window.table.title.text() == "14 faces"


def test_four_indices_and_open_forms(window, section, type_into):
    group = section("Group")
    group.work_with("6/mmm")
    forms = section("Forms")
    type_into(forms.faces.fields[0], "10-10")
    assert forms.faces._lines[0].answer.text() == "hexagonal prism, 6 faces, open"
    assert "do not close" in forms.facts.texts["Together"]
    type_into(forms.faces.fields[1], "0001")
    assert "they close" in forms.facts.texts["Together"]


def test_faces_are_chosen_in_table_solid_and_poles_together(window, section, type_into):
    forms = section("Forms")
    type_into(forms.faces.fields[0], "111")
    window.table.rows.selectRow(3)
    assert window.document.selection == ("face", 3)
    assert ("face", 3) in window.stage.left.view.current.sight().selection
    QTest.mouseClick(forms.show_poles, Qt.MouseButton.LeftButton)
    assert window.stage.left.shown == "Stereogram"
    poles = [one for one in window.stage.left.drawing.points if one.role is Role.FACE]
    keys = [key for one in poles for key in one.keys]
    assert sorted(keys) == [("face", k) for k in range(8)]
    assert ("face", 3) in window.stage.left.view.current.sight().selection


def test_a_pole_is_picked_in_the_stereogram(window, section, type_into, qtbot):
    forms = section("Forms")
    type_into(forms.faces.fields[0], "321")
    QTest.mouseClick(forms.show_poles, Qt.MouseButton.LeftButton)
    view = window.stage.left.view.current
    poles = next(one for one in view.drawing.points if one.role is Role.FACE and len(one.keys) > 1)
    x, y = view.camera.project(poles.positions[:1], view.width(), view.height())[0, :2]
    QTest.mouseMove(view, QPoint(round(x), round(y)))
    qtbot.waitUntil(lambda: window.status.words.text().startswith("Face ("))
    assert "of {321}, hexaoctahedron" in window.status.words.text()
    QTest.mouseClick(view, Qt.MouseButton.LeftButton, pos=QPoint(round(x), round(y)))
    assert window.document.selection == poles.keys[0]
    row = window.table.rows.currentIndex().row()
    assert window.table.rows.model().key_of(row) == poles.keys[0]


def test_kinds_of_form_are_offered(window, section):
    forms = section("Forms")
    forms.menu.aboutToShow.emit()
    texts = [action.text() for action in forms.menu.actions()]
    assert any("cube" in text for text in texts)
    assert len(texts) == 7  # International Tables lists seven forms of m-3m
    forms.menu.actions()[0].trigger()
    assert len(crystal_state(window.document).faces) == 1
    assert window.stage.left.shown == "Form"


def test_edges_and_faces_as_rows_and_as_files(window, section, type_into, tmp_path):
    forms = section("Forms")
    type_into(forms.faces.fields[0], "111")
    path = tmp_path / "faces.csv"
    window.benches.current.save_rows(path)
    rows = list(csv.reader(path.read_text(encoding="utf-8").splitlines()))
    assert len(rows) == 9
    assert rows[0][:3] == ["form", "name", "face"]
    QTest.mouseClick(forms.rows.button(EDGES), Qt.MouseButton.LeftButton)
    assert window.table.title.text() == "1 kind of edge"
    model = window.table.rows.model()
    # Neighbouring faces of an octahedron meet at arccos(1/3) between their normals.
    assert model.data(model.index(0, 2)) == "70.529"
    forms.rows.button(0).click()


def test_without_a_form_the_stage_says_how_to_type_one(window, section):
    section("Forms")
    window.stage.left.choose("Form")
    title, reason = window.stage.left.words
    assert title == "Form"
    assert "Type a face" in reason
    assert window.stage.left.stack.currentWidget() is window.stage.left.view


def test_settings_of_the_stereogram(window, bench, section):
    section("Group")
    QTest.mouseClick(bench.net.nets.button(1), Qt.MouseButton.LeftButton)
    assert window.stage.left.shown == "Stereogram"
    assert "Schmidt" in window.stage.left.drawing.frame
    assert not [line for line in window.stage.left.drawing.lines if line.role is Role.NET]
    bench.net.underlay.setFocus()
    QTest.keyClick(bench.net.underlay, Qt.Key.Key_Space)
    assert [line for line in window.stage.left.drawing.lines if line.role is Role.NET]
    window.document.undo_stack.undo()
    window.document.undo_stack.undo()
    assert "Wulff" in window.stage.left.drawing.frame
    assert bench.net.nets.current == 0
    assert not bench.net.underlay.isChecked()
