"""CIF files opened by the file's name, by dropping, and from the command line's way in; damaged ones are refused."""

from __future__ import annotations

import pytest
from PySide6.QtCore import QMimeData, QPoint, QPointF, Qt, QUrl
from PySide6.QtGui import QDragEnterEvent, QDropEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QFileDialog

from mirrorlab.desktop.crystal import CrystalBench
from mirrorlab.desktop.crystal.crystal_state import crystal_state

K5 = """data_K-5
_cell_length_a 5.412(2)
_cell_length_b 5.412(2)
_cell_length_c 5.412(2)
_cell_angle_alpha 90
_cell_angle_beta 90
_cell_angle_gamma 90
_space_group_name_H-M_alt 'F -4 3 m'
"""
K6 = """data_K-6
_cell_length_a 4.9(1)
_cell_length_b 4.9(1)
_cell_length_c 5.4(1)
_cell_angle_alpha 90
_cell_angle_beta 90
_cell_angle_gamma 120
_space_group_name_H-M_alt 'P 3 2 1'
"""


@pytest.fixture
def k5(tmp_path):
    path = tmp_path / "k5.cif"
    path.write_text(K5, encoding="utf-8")
    return path


def test_a_cif_brings_cell_group_and_mirrors(window, k5):
    assert window.filing.open_path(k5)
    bench = window.benches.current
    assert isinstance(bench, CrystalBench)
    assert bench.section.name == "Cell"
    assert [field.text() for field in bench.section.fields[:4]] == ["5.412(2)"] * 3 + ["90"]
    assert bench.section.centring.currentText() == "F"
    assert bench.section.heading.text() == "K-5"
    assert crystal_state(window.document).group == "-43m"
    assert window.document.finding.point_group.hermann_mauguin == "-43m"
    assert "4̅3m" in window.status.words.text()
    assert window.filing.recent()[0] == k5
    window.document.undo_stack.undo()
    assert window.document.finding.point_group.hermann_mauguin == "m-3m"
    assert not crystal_state(window.document).has_cell


def test_a_cif_without_mirrors_leaves_those_on_the_sheet(window, tmp_path):
    path = tmp_path / "k6.cif"
    path.write_text(K6, encoding="utf-8")
    before = window.document.arrangement
    assert window.filing.open_path(path)
    assert window.document.arrangement is before
    assert crystal_state(window.document).group in ("32", "321")
    assert "keeps its own" in window.status.words.text()


@pytest.mark.parametrize(
    ("text", "told"),
    [
        (K5.replace("_cell_length_b 5.412(2)\n", ""), "_cell_length_b"),
        (K5.replace("_cell_angle_beta 90", "_cell_angle_beta ninety"), "_cell_angle_beta"),
        ("", "empty"),
        ("no cif at all", "CIF"),
    ],
)
def test_a_damaged_cif_names_the_item_and_changes_nothing(window, tmp_path, text, told):
    path = tmp_path / "damaged.cif"
    path.write_text(text, encoding="utf-8")
    before = window.document.state
    bench = window.benches.current
    assert not window.filing.open_path(path)
    assert window.document.state is before
    assert window.benches.current is bench
    assert window.notice.isVisible()
    assert told in window.notice.words.text()
    assert window.notice.words.text().count(path.name) == 1


def test_a_dropped_file_is_opened(window, k5):
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(k5))])
    middle = window.rect().center()
    actions, button, keys = (
        Qt.DropAction.CopyAction,
        Qt.MouseButton.LeftButton,
        Qt.KeyboardModifier.NoModifier,
    )
    enter = QDragEnterEvent(QPoint(middle), actions, data, button, keys)
    QApplication.sendEvent(window, enter)
    assert enter.isAccepted()
    drop = QDropEvent(QPointF(middle), actions, data, button, keys)
    QApplication.sendEvent(window, drop)
    assert crystal_state(window.document).cell_name == "K-5"


def test_text_that_is_dragged_is_left_alone(window):
    data = QMimeData()
    data.setText("60")
    enter = QDragEnterEvent(
        QPoint(5, 5),
        Qt.DropAction.CopyAction,
        data,
        Qt.MouseButton.LeftButton,
        Qt.KeyboardModifier.NoModifier,
    )
    enter.ignore()
    QApplication.sendEvent(window, enter)
    assert not enter.isAccepted()


def test_the_cell_section_asks_for_a_file(window, section, k5, monkeypatch):
    monkeypatch.setattr(QFileDialog, "getOpenFileName", lambda *_: (str(k5), ""))
    QTest.mouseClick(section("Cell").open, Qt.MouseButton.LeftButton)
    assert crystal_state(window.document).cell_name == "K-5"
