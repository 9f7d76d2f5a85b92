"""Positions, and the images of the seed as fractions of unit axes and of a cell."""

from __future__ import annotations

import csv

import numpy as np
import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from mirrorlab.desktop.crystal.positions_section import CELL, IMAGES
from mirrorlab.desktop.document import Seed


def texts(model, column):
    return [model.data(model.index(k, column)) for k in range(model.rowCount())]


def test_the_table_of_positions(window, section):
    section("Positions")
    model = window.table.rows.model()
    assert texts(model, 0) == ["48", "24", "24", "12", "8", "6", "1"]
    assert texts(model, 1)[-2] == "4m.m"
    assert window.table.title.text() == "7 positions"


def test_the_seed_is_put_on_a_position(window, section, qtbot):
    positions = section("Positions")
    assert positions.facts.texts["Multiplicity"] == "48"
    names = [positions.places.itemText(k) for k in range(positions.places.count())]
    row = next(k for k, name in enumerate(names) if name.endswith("x,x,x"))
    positions.places.setFocus()
    while positions.places.currentIndex() < row:
        QTest.keyClick(positions.places, Qt.Key.Key_Down)
    assert len(window.document.orbit) == 8
    assert positions.facts.texts["Multiplicity"] == "8"
    assert positions.facts.texts["Site symmetry"] == ".3m"
    window.document.undo_stack.undo()
    assert len(window.document.orbit) != 8


def test_the_images_are_linked_with_the_picture_in_space(window, section):
    positions = section("Positions")
    QTest.mouseClick(positions.rows.button(IMAGES), Qt.MouseButton.LeftButton)
    assert window.table.title.text() == "48 images"
    window.table.rows.selectRow(5)
    assert window.document.selection == ("image", 5)
    window.document.select(("image", 9))
    assert window.table.rows.currentIndex().row() == 9
    window.stage.left.choose("Stereogram")
    assert ("image", 9) in {k for one in window.stage.left.drawing.points for k in one.keys}


def test_fractions_of_unit_axes_lie_on_the_orbit(window, section):
    window.document.set_seed(Seed(heights=(1, 2, 3), place=None))
    positions = section("Positions")
    QTest.mouseClick(positions.rows.button(IMAGES), Qt.MouseButton.LeftButton)
    model = positions.model
    points = np.column_stack([model.values(k) for k in (1, 2, 3)])
    # All images of a point of m-3m: its coordinates in any order with any signs.
    first = np.sort(np.abs(points[0]))
    assert np.allclose(np.sort(np.abs(points), axis=1), first, atol=1e-9)
    assert len({tuple(row) for row in np.round(points, 9).tolist()}) == 48


def test_fractions_of_a_typed_cell(window, section, type_into, tmp_path):
    cell = section("Cell")
    for field, text in zip(cell.fields, ("4", "4", "4", "90", "90", "90"), strict=True):
        type_into(field, text)
    positions = section("Positions")
    QTest.mouseClick(positions.rows.button(IMAGES), Qt.MouseButton.LeftButton)
    unit = positions.model.values(1)[0]
    QTest.mouseClick(positions.axes.button(CELL), Qt.MouseButton.LeftButton)
    assert positions.model.values(1)[0] == pytest.approx(unit / 4)
    assert "typed cell" in window.table.note.text()
    path = tmp_path / "fractions.csv"
    window.benches.current.save_rows(path)
    rows = list(csv.reader(path.read_text(encoding="utf-8").splitlines()))
    assert rows[0][:4] == ["image", "x", "y", "z"]
    assert float(rows[1][1]) == positions.model.values(1)[0]
    assert path.with_name("fractions.csv-metadata.json").is_file()


def test_a_cell_without_the_symmetry_is_explained(window, section, type_into):
    cell = section("Cell")
    for field, text in zip(cell.fields, ("4", "5", "4", "90", "90", "90"), strict=True):
        type_into(field, text)
    positions = section("Positions")
    assert not positions.axes.button(CELL).isEnabled()
    assert "does not have the symmetry of m3̅m" in positions.why.text()


def test_equivalent_points_of_a_group_beyond_the_mirrors(window, section, put):
    put(["90"])
    group = section("Group")
    group.work_with("-42m")
    positions = section("Positions")
    QTest.mouseClick(positions.rows.button(IMAGES), Qt.MouseButton.LeftButton)
    keys = {positions.model.key_of(k) for k in range(positions.model.rowCount())}
    # The seed of two mirrors lies in their plane of reflection, on one of the twofold axes or off them all.
    assert {key for key in keys if key[0] == "image"} == {("image", k) for k in range(4)}
    assert positions.model.rowCount() in (4, 8)
    assert positions.model.data(positions.model.index(0, 5)) == "x,y,z"
