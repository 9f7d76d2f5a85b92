"""A cell typed, its planes, and both taken as mirrors."""

from __future__ import annotations

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest

from mirrorlab.desktop.crystal.cell_section import ANGLES, MIRRORS
from mirrorlab.desktop.crystal.crystal_state import crystal_state


@pytest.fixture
def typed(section, type_into):
    """Type a cell and planes with the keyboard."""

    def type_cell(constants, planes=()):
        cell = section("Cell")
        for field, text in zip(cell.fields, constants, strict=True):
            type_into(field, text)
        for k, text in enumerate(planes):
            type_into(cell.planes.fields[k], text)
        return cell

    return type_cell


CUBIC = ("4.2", "4.2", "4.2", "90", "90", "90")


def test_planes_of_a_cubic_cell_are_mirrors_and_go_into_the_triangle(window, typed):
    cell = typed(CUBIC, ("1,0,0", "-1,1,0", "0,-1,1"))
    assert cell.planes._lines[0].answer.text() == "mirror: [100], index 1"
    assert cell.facts.texts["Lattice"] == "m3̅m (cP) exactly"
    before = window.document.finding
    QTest.mouseClick(cell.use, Qt.MouseButton.LeftButton)
    assert window.document.finding.point_group.hermann_mauguin == "m-3m"
    assert window.document.arrangement.size == 3
    assert sorted(round(angle.degrees) for angle in window.document.arrangement.angles) == [45, 60, 90]
    assert crystal_state(window.document).planes == ("1,0,0", "-1,1,0", "0,-1,1")
    window.document.undo_stack.undo()
    assert window.document.finding is not None
    assert window.document.finding.sentence == before.sentence


def test_rows_of_planes_angles_and_lattice_mirrors(window, typed):
    cell = typed(CUBIC, ("1,0,0", "1,1,0"))
    assert window.table.title.text() == "2 planes"
    QTest.mouseClick(cell.rows.button(ANGLES), Qt.MouseButton.LeftButton)
    model = window.table.rows.model()
    assert [model.data(model.index(0, k)) for k in range(4)] == ["(100)", "(110)", "45", "135"]
    QTest.mouseClick(cell.rows.button(MIRRORS), Qt.MouseButton.LeftButton)
    assert window.table.title.text() == "9 lattice mirrors"
    cell.rows.button(0).click()


def test_a_nearly_orthorhombic_cell_and_the_tolerance(window, typed, section):
    cell = typed(("5.0", "6.1", "7.3", "90", "90.4", "90"))
    assert cell.facts.texts["Lattice"] == "2/m (mP) exactly"
    assert cell.facts.texts["Nearly"].startswith("mmm (oP), mirrors within 0.4°")
    QTest.mouseClick(cell.lattice, Qt.MouseButton.LeftButton)
    assert window.document.finding.point_group.hermann_mauguin == "mmm"
    window.document.undo_stack.undo()
    cell.tolerance.setFocus()
    cell.tolerance.selectAll()
    QTest.keyClicks(cell.tolerance, "0.1")
    QTest.keyClick(cell.tolerance, Qt.Key.Key_Return)
    assert "Nearly" not in cell.facts.texts
    window.document.undo_stack.undo()
    assert "Nearly" in cell.facts.texts
    assert cell.tolerance.value() == 3


def test_uncertain_cells_give_uncertain_angles(window, typed):
    cell = typed(("5.40(2)", "5.43(3)", "5.41(2)", "90", "90", "90"), ("1,0,0", "1,1,0"))
    assert cell.use_measured.isVisible()
    QTest.mouseClick(cell.use_measured, Qt.MouseButton.LeftButton)
    angle = window.document.arrangement.angles[0]
    assert angle.source == "measured"
    assert 0 < angle.uncertainty < 1


@pytest.mark.parametrize(
    ("place", "text", "told"),
    [(0, "4.2x", "a: "), (3, "190", "α: "), (1, "-3", "b: "), (5, "", "Still to type: γ")],
)
def test_a_wrong_constant_is_told_where_it_was_typed(window, typed, type_into, place, text, told):
    cell = typed(CUBIC)
    type_into(cell.fields[place], text)
    if not text:
        QTest.keyClick(cell.fields[place], Qt.Key.Key_Delete)
    assert told in cell.error.text()
    assert cell.error.isVisible()
    assert bool(cell.fields[place].property("wrong")) == bool(text)
    assert cell.fields[place].text() == text
    assert [field.text() for k, field in enumerate(cell.fields) if k != place] == [
        one for k, one in enumerate(CUBIC) if k != place
    ]


def test_a_centring_that_does_not_suit_the_cell_is_explained(window, typed):
    cell = typed(CUBIC)
    cell.centring.setFocus()
    QTest.keyClicks(cell.centring, "R")
    cell.centring.activated.emit(cell.centring.currentIndex())
    assert "hexagonal axes" in cell.error.text()
    window.document.undo_stack.undo()
    assert not cell.error.isVisible()


def test_planes_that_cannot_be_read_or_repeat(window, typed, type_into):
    cell = typed(CUBIC, ("1,0,0", "1,0"))
    assert '"1,0"' in cell.planes.error.text()
    assert not cell.use.isEnabled()
    type_into(cell.planes.fields[1], "-1,0,0")
    assert "the same mirror twice" in cell.use_error.text()
    type_into(cell.planes.fields[1], "0,1,0")
    assert not cell.use_error.isVisible()
    assert cell.use.isEnabled()


def test_a_whole_cell_is_pasted_into_one_field(window, section, type_into):
    cell = section("Cell")
    QGuiApplication.clipboard().setText("5.1, 5.1, 7.3, 90, 90, 120")
    cell.fields[0].setFocus()
    QTest.keyClick(cell.fields[0], Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)
    assert cell.facts.texts["Lattice"] == "6/mmm (hP) exactly"
    type_into(cell.planes.fields[0], "10-10")
    assert cell.planes._lines[0].answer.text().startswith("mirror")
    QTest.mouseClick(cell.clear, Qt.MouseButton.LeftButton)
    assert not crystal_state(window.document).has_cell
    window.document.undo_stack.undo()
    assert crystal_state(window.document).has_cell
