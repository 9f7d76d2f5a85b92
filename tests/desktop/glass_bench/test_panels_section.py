"""Joints, stock, the cut list and the workshop's files."""

from __future__ import annotations

import csv

import ezdxf
import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from mirrorlab.desktop.glass.glass_state import glass_state

LONG = 120_000


@pytest.fixture
def panels(section):
    return section("Panels")


def test_the_cut_list_is_linked_with_the_mirrors(window, panels):
    assert window.table.title.text() == "Cut list, 3 panes"
    assert window.table.rows.model().rowCount() == 9
    QTest.mouseClick(panels.show_picture, Qt.MouseButton.LeftButton)
    assert window.stage.left.shown == "Panels"
    window.table.rows.selectRow(4)
    assert window.document.selection == ("mirror", 1)


def test_joints_change_the_bevels(window, panels):
    titles = [column.title for column in panels.model.columns]
    bevels = list(panels.model.values(titles.index("bevel °")))
    assert max(bevels) > 0
    QTest.mouseClick(panels.joint.button(2), Qt.MouseButton.LeftButton)
    assert max(panels.model.values(titles.index("bevel °"))) == 0
    assert "jig" in panels.notes.text()
    assert not panels.order.isVisible()
    QTest.mouseClick(panels.joint.button(1), Qt.MouseButton.LeftButton)
    assert panels.order.isVisible()
    window.document.undo_stack.undo()
    window.document.undo_stack.undo()
    assert list(panels.model.values(titles.index("bevel °"))) == bevels


def test_stock_is_laid_out_with_its_waste(panels, type_into, answered):
    assert not panels.exports["layout"].isEnabled()
    type_into(panels.rows[0].entries["copies"].field, "4")
    type_into(panels.rows[1].entries["stock"].field, "600 x 400 mm")
    job = answered(panels.layout_answer)
    assert job.layout is not None
    assert sum(len(sheet.placements) for sheet in job.layout.sheets) == 12
    assert "%" in panels.facts.texts["Sheets"]
    assert panels.exports["layout"].isEnabled()


@pytest.mark.parametrize(
    ("row", "key", "text", "said"),
    [
        (1, "stock", "1200", "width x height"),
        (1, "stock", "50 x 50", "fit"),
        (0, "copies", "0", "whole number"),
        (0, "gap", "wide", "not a length"),
    ],
)
def test_what_cannot_be_cut_is_told_below(panels, type_into, answered, row, key, text, said):
    type_into(panels.rows[row].entries[key].field, text)
    answered(panels.layout_answer)
    assert said in panels.rows[row].error.text()
    assert panels.rows[row].entries[key].field.property("wrong")


def test_files_are_written_and_read_back(window, panels, type_into, answered, tmp_path, qtbot):
    type_into(panels.rows[1].entries["stock"].field, "600 x 400")
    answered(panels.layout_answer)
    for kind, name in (
        ("dxf", "p.dxf"),
        ("svg", "p.svg"),
        ("pdf", "p.pdf"),
        ("csv", "p.csv"),
        ("layout", "l.pdf"),
    ):
        panels.export(kind, tmp_path / name)
        assert not panels.wrote.isVisible(), panels.wrote.text()
        assert (tmp_path / name).stat().st_size > 500
    assert ezdxf.readfile(tmp_path / "p.dxf").units == ezdxf.units.MM
    with (tmp_path / "p.csv").open(newline="") as stream:
        rows = list(csv.DictReader(stream))
    lengths = [row.length_mm for row in panels.job.rows]
    assert [float(row["length_mm"]) for row in rows] == pytest.approx(lengths, abs=1e-3)
    panels.export("report", tmp_path / "r.txt")
    qtbot.waitUntil(lambda: (tmp_path / "r.txt").exists(), timeout=LONG)
    text = (tmp_path / "r.txt").read_text()
    assert "47 images" in text
    assert "gloves" in text
    assert "sunlight" in text.lower()


def test_a_file_that_cannot_be_written_is_told(panels, tmp_path):
    panels.export("svg", tmp_path / "no folder" / "p.svg")
    assert panels.wrote.isVisible()
    assert "Not written" in panels.wrote.text()


def test_cautions_stand_where_files_are_written(panels):
    keys = set(panels.cautions.keys)
    assert {
        "cut-glass",
        "safety-mirror",
        "sunlight",
        "mirror-room",
        "disorientation",
        "photosensitivity",
    } <= keys


def test_unit_and_paper(window, panels):
    QTest.mouseClick(panels.unit.button(1), Qt.MouseButton.LeftButton)
    panels.page.setFocus()
    QTest.keyClicks(panels.page, "L")
    assert (glass_state(window.document).unit, glass_state(window.document).page) == ("in", "Letter")
    window.document.undo_stack.undo()
    assert panels.page.currentText() == "A4"


def test_rows_are_saved_as_the_cut_list(window, panels, tmp_path):
    window.benches.current.save_rows(tmp_path / "rows.csv")
    assert "length_mm" in (tmp_path / "rows.csv").read_text().splitlines()[0]


def test_an_angle_typed_in_the_triangle_moves_panels_and_figures_together(window, panels, type_into):
    QTest.mouseClick(panels.show_picture, Qt.MouseButton.LeftButton)
    before = window.stage.left.drawing
    lengths = [row.length_mm for row in panels.job.rows]
    type_into(window.mirrors.triangle.cells[2].edit, "36")
    assert window.document.finding.order == 120
    assert [row.length_mm for row in panels.job.rows] != pytest.approx(lengths)
    assert window.stage.left.drawing is not before
