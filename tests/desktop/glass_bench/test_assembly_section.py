"""Lengths as typed, glass and mirrors, errors below their entries, and what the panels become."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from mirrorlab.desktop.glass.glass_state import glass_state
from mirrorlab.desktop.glass.workings import assembly_of
from mirrorlab.mirrors import Arrangement


@pytest.fixture
def assembly(section):
    return section("Assembly")


def field(assembly, key):
    return next(row.entries[key].field for row in assembly.rows if key in row.entries)


def errors(assembly):
    return [row.error.text() for row in assembly.rows if row.error.isVisible()]


def test_lengths_in_inches(window, assembly, type_into):
    steps = window.document.undo_stack.count()
    type_into(field(assembly, "opening"), "4 1/2 in")
    made = assembly_of(window.document)
    sides = np.linalg.norm(np.roll(made.mouth, -1, axis=0) - made.mouth, axis=1)
    assert sides.max() == pytest.approx(4.5 * 25.4)  # the inch is 25.4 mm (1959 agreement; from memory)
    assert window.document.undo_stack.count() == steps + 1, "typing in one field is one step"
    window.document.undo_stack.undo()
    assert field(assembly, "opening").text() == "120 mm"


def test_the_kind_follows_the_arrangement(put, assembly):
    def shown():
        return {key for row in assembly.rows for key, part in row.entries.items() if part.isVisible()}

    assert assembly.heading.text() == "Corner of 3 mirrors"
    assert shown() == {"opening", "depth", "truncated", "thickness"}
    put(["30"])
    assert assembly.heading.text() == "Wedge of 2 mirrors"
    assert shown() == {"opening", "length", "depth", "thickness"}
    put(["60", "60", "60"])
    assert assembly.heading.text() == "Tube of 3 mirrors"
    assert shown() == {"opening", "length", "sides", "taper", "thickness"}


def test_mirrors_that_make_no_assembly_are_explained(window, put, assembly):
    put(["90", "60", "60", "60", "60", "90"])
    assert assembly.heading.text() == "No assembly"
    assert "make no assembly" in assembly.error.text()
    window.stage.left.choose("Assembly")
    assert window.stage.left.drawing is None
    fan = Arrangement.from_normals([[1, 0, 0], [0, 1, 0], [-1, -1, 0]])
    window.document.put_sheet(fan, "three through one line")
    assert "through one line" in assembly.error.text()
    assert assembly.error.isVisible()


@pytest.mark.parametrize(
    ("key", "text", "said"),
    [
        ("opening", "wide", "not a length"),
        ("depth", "20 mm", "larger than"),
        ("truncated", "500", "nearer to the point"),
        ("thickness", "thick", "not a length"),
    ],
)
def test_a_bad_length_is_told_where_it_was_typed(window, assembly, type_into, key, text, said):
    type_into(field(assembly, key), text)
    assert field(assembly, key).text() == text
    assert said in " ".join(errors(assembly))
    wrong = [k for row in assembly.rows for k, part in row.entries.items() if part.field.property("wrong")]
    # An opening that is too large for a typed depth may be put right at either of them.
    assert wrong == ["opening" if key == "depth" else key]
    assert field(assembly, "opening").text() in ("120 mm", text)
    window.document.undo_stack.undo()
    assert errors(assembly) == []


def test_no_thickness_with_second_surface_mirrors(assembly, type_into):
    assembly.mirrors.presets[1].setFocus()
    QTest.keyClicks(assembly.mirrors.presets[1], "H")  # Household, by its first letter
    assert assembly.mirrors.surfaces[1].currentText() == "Second"
    type_into(field(assembly, "thickness"), "0")
    assert "second-surface" in errors(assembly)[0]
    assert field(assembly, "thickness").property("wrong")


def test_presets_surfaces_and_reflectances(window, assembly, type_into):
    steps = window.document.undo_stack.count()
    assembly.mirrors.presets[2].setFocus()
    QTest.keyClick(assembly.mirrors.presets[2], Qt.Key.Key_Down)
    made = assembly_of(window.document)
    assert [mirror.reflectance for mirror in made.mirrors] == [0.9, 0.9, 0.95]
    type_into(assembly.mirrors.reflectances[0], "0.5")
    assembly.mirrors.surfaces[1].setFocus()
    QTest.keyClick(assembly.mirrors.surfaces[1], Qt.Key.Key_Down)
    made = assembly_of(window.document)
    assert [mirror.reflectance for mirror in made.mirrors] == [0.5, 0.9, 0.95]
    assert [mirror.surface for mirror in made.mirrors] == ["first", "second", "first"]
    assert window.document.undo_stack.count() == steps + 3
    for _ in range(3):
        window.document.undo_stack.undo()
    assert {mirror.reflectance for mirror in assembly_of(window.document).mirrors} == {0.9}
    assert assembly.mirrors.reflectances[0].text() == ""


@pytest.mark.parametrize("text", ["1.5", "0", "bright"])
def test_a_reflectance_that_no_mirror_has(assembly, type_into, text):
    type_into(assembly.mirrors.reflectances[1], text)
    assert assembly.mirrors.error.isVisible()
    assert [part.property("wrong") is True for part in assembly.mirrors.reflectances[:3]] == [
        False,
        True,
        False,
    ]


def test_two_things_wrong_are_told_at_both_places(assembly, type_into):
    type_into(assembly.mirrors.reflectances[1], "2")
    type_into(field(assembly, "opening"), "12 mn")
    assert "no unit" in errors(assembly)[0]
    assert field(assembly, "opening").property("wrong")
    assert assembly.mirrors.error.isVisible()
    assert not assembly.error.isVisible()


def test_the_assembly_on_the_stage_shares_the_selection(window, assembly):
    QTest.mouseClick(assembly.show_picture, Qt.MouseButton.LeftButton)
    assert window.stage.left.shown == "Assembly"
    keys = {key for block in window.stage.left.drawing.faces for key in block.keys}
    assert {("mirror", 0), ("mirror", 1), ("mirror", 2)} <= keys
    window.table.rows.selectRow(1)
    assert window.document.selection == ("mirror", 1)


def test_cautions_stand_beside_it_and_a_room_has_more(assembly, type_into):
    assert {"cut-glass", "safety-mirror", "sunlight"} <= set(assembly.cautions.keys)
    assert "gloves" in assembly.cautions.words.text()
    assert "mirror-room" not in assembly.cautions.keys
    type_into(field(assembly, "opening"), "2 m")
    assert "mirror-room" in assembly.cautions.keys
    assert "licensed glazier" in assembly.cautions.words.text()


def test_taper_and_sides_of_a_tube(window, put, assembly, type_into):
    put(["90", "45", "45"])
    type_into(field(assembly, "taper"), "0.5")
    made = assembly_of(window.document)
    far = made.panels[0].outline[np.argsort(made.panels[0].outline[:, 2])[:2]]
    near = made.panels[0].outline[np.argsort(made.panels[0].outline[:, 2])[2:]]
    assert np.linalg.norm(far[1] - far[0]) == pytest.approx(0.5 * np.linalg.norm(near[1] - near[0]))
    type_into(field(assembly, "taper"), "x")
    assert "taper" in errors(assembly)[0].lower()
    assert glass_state(window.document).taper == "x"
