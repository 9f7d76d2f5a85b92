"""Lists of points held against the working group."""

from __future__ import annotations

import itertools
from dataclasses import replace

import numpy as np
import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from mirrorlab.desktop.crystal.compare_section import POINTS, UNREAD
from mirrorlab.desktop.crystal.crystal_state import crystal_state
from mirrorlab.drawing.model import Role

LONG = 60_000


def tetrahedral():
    """All images of a general point under -43m: even numbers of sign changes, every order of the coordinates."""
    rows = []
    for order in itertools.permutations((0.3, 0.5, 0.9)):
        for signs in itertools.product((1, -1), repeat=3):
            if np.prod(signs) > 0:
                rows.append(np.array(signs) * order)
    return np.array(rows)


@pytest.fixture
def opened(window, bench, section, tmp_path, qtbot):
    """Write rows to a file, open it, and wait for the answer."""

    def open_list(rows, tail=""):
        path = tmp_path / "points.csv"
        lines = [f"P{k},{x:.6f},{y:.6f},{z:.6f}" for k, (x, y, z) in enumerate(rows)]
        path.write_text("label,x,y,z\n" + "\n".join(lines) + "\n" + tail, encoding="utf-8")
        assert window.filing.open_path(path)
        compare = bench.section
        assert compare.name == "Compare"
        qtbot.waitUntil(lambda: compare.answer is not None or bool(compare.problem), timeout=LONG)
        return compare

    return open_list


def answered(compare, qtbot):
    qtbot.waitUntil(lambda: compare.answer is not None, timeout=LONG)


def test_a_list_that_obeys_half_of_the_group(window, opened):
    compare = opened(tetrahedral())
    assert "24 of 48 operations" in compare.sentence.text()
    assert compare.survivor.accessibleName() == "-43m"
    assert window.table.title.text() == "24 of 48 operations survive"
    QTest.mouseClick(compare.survivor, Qt.MouseButton.LeftButton)
    assert crystal_state(window.document).group == "-43m"
    window.document.undo_stack.undo()
    assert crystal_state(window.document).group == ""
    window.document.undo_stack.undo()
    assert compare.heading.text() == "No list yet"
    assert "Open a list" in compare.sentence.text()


def test_a_turned_list_is_refined(window, opened, qtbot):
    turn = np.radians(4)
    matrix = np.array([[np.cos(turn), -np.sin(turn), 0], [np.sin(turn), np.cos(turn), 0], [0, 0, 1]])
    compare = opened(tetrahedral() @ matrix.T)
    assert compare.answer.orientation.angle == pytest.approx(4, abs=1e-3)
    assert "4°" in compare.facts.texts["Turned by"]
    assert compare.survivor.accessibleName() == "-43m"
    QTest.mouseClick(compare.orientation.button(0), Qt.MouseButton.LeftButton)
    answered(compare, qtbot)
    assert compare.survivor.accessibleName() != "-43m"
    assert "Turned by" not in compare.facts.texts
    window.document.undo_stack.undo()
    answered(compare, qtbot)
    assert compare.orientation.current == 1


def test_a_tolerance_is_typed_and_a_wrong_one_told(window, opened, type_into, qtbot):
    rows = tetrahedral()
    rows[0] *= 1.05
    compare = opened(rows)
    assert compare.survivor.accessibleName() != "-43m"
    type_into(compare.tolerance, "0.2")
    answered(compare, qtbot)
    assert compare.survivor.accessibleName() == "-43m"
    type_into(compare.tolerance, "-1")
    assert compare.tolerance.property("wrong")
    assert '"-1"' in compare.tolerance_error.text()
    window.document.undo_stack.undo()


def test_rows_that_cannot_be_read_are_named_by_line(window, opened):
    compare = opened(tetrahedral(), tail="P24,1,oops,2\n")
    assert 'line 26, "P24,1,oops,2"' in compare.unread.text()
    assert "24 points" in window.status.words.text()
    assert "1 row cannot be read" in window.status.words.text()
    QTest.mouseClick(compare.rows.button(UNREAD), Qt.MouseButton.LeftButton)
    assert window.table.title.text() == "1 line not read"
    model = window.table.rows.model()
    assert model.data(model.index(0, 0)) == "26"


def test_points_as_rows(window, opened):
    compare = opened(tetrahedral()[:-1])
    QTest.mouseClick(compare.rows.button(POINTS), Qt.MouseButton.LeftButton)
    assert window.table.title.text() == "23 points"
    model = window.table.rows.model()
    lonely = [int(model.data(model.index(k, 6))) for k in range(23)]
    assert min(lonely) >= 1
    compare.rows.button(0).click()


def test_a_file_that_is_no_list_changes_nothing(window, bench, tmp_path):
    path = tmp_path / "wrong.csv"
    path.write_text("alpha,beta\n1,2\n", encoding="utf-8")
    before = window.document.state
    assert not window.filing.open_path(path)
    assert window.document.state is before
    assert "no columns x,y,z" in window.notice.words.text()


def test_the_list_in_the_stereogram(window, bench, opened, qtbot):
    """Points are where they are read; what the list does not obey is flagged; table and picture choose together."""
    compare = opened(tetrahedral())
    window.stage.left.choose("Stereogram")
    QTest.mouseClick(bench.net.shown.button(2), Qt.MouseButton.LeftButton)
    assert crystal_state(window.document).marks == "list"
    drawing = window.stage.left.drawing
    listed = [key for points in drawing.points for key in points.keys if key[0] == "listed"]
    assert sorted(k for _, k in listed) == list(range(24))
    flagged = [line for line in drawing.lines if line.role is Role.FLAGGED]
    assert len(flagged) == 3, "of m-3m, -43m keeps the six diagonal mirrors and loses the three of the axes"
    compare.rows.button(POINTS).click()
    window.document.select(("listed", 5))
    index = window.table.rows.selectionModel().currentIndex()
    assert window.table.rows.model().key_of(index.row()) == ("listed", 5)


def test_the_stereogram_waits_for_the_comparison(window, bench, section, opened, qtbot):
    opened(tetrahedral())
    window.stage.left.choose("Stereogram")
    QTest.mouseClick(bench.net.shown.button(2), Qt.MouseButton.LeftButton)
    section("Group")
    window.document.set_crystal(replace(crystal_state(window.document), group="-43m"), "group")
    qtbot.waitUntil(
        lambda: window.stage.left.drawing is not None and "-43m" in window.stage.left.drawing.title,
        timeout=LONG,
    )
    assert not any(line.role is Role.FLAGGED for line in window.stage.left.drawing.lines)


def test_without_a_list_the_stereogram_says_how_to_open_one(window, bench):
    window.stage.left.choose("Stereogram")
    QTest.mouseClick(bench.net.shown.button(2), Qt.MouseButton.LeftButton)
    title, reason = window.stage.left.words
    assert title == "Stereogram"
    assert "Open a list" in reason
