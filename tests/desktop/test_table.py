"""Rows and the table along the bottom: sorting, links both ways, copying, folding, files."""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest
from PySide6.QtCore import QModelIndex, Qt
from PySide6.QtGui import QColor, QGuiApplication, QImage
from PySide6.QtTest import QAbstractItemModelTester, QTest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.bench import write_csv
from mirrorlab.desktop.rows import KEY_ROLE, Column, RowsModel, fixed
from mirrorlab.desktop.table_heads import Heads
from mirrorlab.desktop.theming import theming
from mirrorlab.desktop.window import Window

UP, DOWN = Qt.SortOrder.AscendingOrder, Qt.SortOrder.DescendingOrder


def small() -> RowsModel:
    return RowsModel(
        [
            Column("n", np.array([3.0, -1.0, 2.5])),
            Column("word", ["ab", "c", "aa"], text=True),
            Column("mixed", [None, 2, "x"]),
        ],
        "image",
    )


def shown(model: RowsModel, column: int) -> list[str]:
    return [model.data(model.index(row, column)) for row in range(model.rowCount())]


def test_decimals_have_a_true_minus_and_none_before_a_zero() -> None:
    assert [fixed(3)(value) for value in (-0.0004, -0.0, 0.0006, -1.5)] == [
        "0.000",
        "0.000",
        "0.001",
        "−1.500",
    ]


def test_model_keeps_qts_contract(qapp: QApplication) -> None:
    model = small()
    tester = QAbstractItemModelTester(model, QAbstractItemModelTester.FailureReportingMode.Fatal)
    model.sort(1, DOWN)
    model.set_columns([Column("n", np.arange(2))], "image")
    assert model.rowCount() == 2
    assert model.rowCount(model.index(0, 0)) == 0
    del tester


@pytest.mark.parametrize(
    ("column", "order", "expected"),
    [(0, UP, ["−1", "2.5", "3"]), (0, DOWN, ["3", "2.5", "−1"]), (1, UP, ["c", "aa", "ab"])],
)
def test_sorting(qapp: QApplication, column: int, order: Qt.SortOrder, expected: list[str]) -> None:
    model = small()
    model.sort(column, order)
    assert shown(model, column) == expected
    model.sort(-1)
    assert shown(model, 0) == ["3", "−1", "2.5"]


def test_mixed_columns_sort_numbers_first_and_nothing_last(qapp: QApplication) -> None:
    model = small()
    model.sort(2, UP)
    assert shown(model, 2) == ["2", "x", ""]


def test_keys_follow_the_rows(qapp: QApplication) -> None:
    model = small()
    model.sort(0, UP)
    assert model.data(model.index(0, 0), KEY_ROLE) == ("image", 1)
    assert model.row_of(("image", 0)) == 2
    assert model.row_of(("chamber", 0)) is None
    assert model.data(QModelIndex()) is None


def test_lazy_columns_are_made_when_shown(qapp: QApplication) -> None:
    asked = []

    def words() -> list[str]:
        asked.append(True)
        return ["a", "b"]

    model = RowsModel([Column("n", np.arange(2)), Column("word", words, text=True)])
    assert model.rowCount() == 2
    assert not asked
    assert model.data(model.index(1, 1)) == "b"
    assert asked == [True]


def test_csv_reads_back_to_the_same_numbers(qapp: QApplication, tmp_path: Path) -> None:
    values = np.random.default_rng(5).normal(size=4)
    write_csv(tmp_path / "rows.csv", RowsModel([Column("x", values), Column('a,"b"', list("pqrs"))]))
    with (tmp_path / "rows.csv").open(newline="") as file:
        rows = list(csv.reader(file))
    assert rows[0] == ["x", 'a,"b"']
    assert [float(row[0]) for row in rows[1:]] == values.tolist()


def test_a_row_picks_in_the_picture_and_the_picture_picks_a_row(window: Window) -> None:
    view, model = window.table.rows, window.table.rows.model()
    place = view.visualRect(model.index(3, 1)).center()
    QTest.mouseClick(view.viewport(), Qt.MouseButton.LeftButton, pos=place)
    assert window.document.selection == ("image", 3)
    window.document.select(("image", 40))
    assert view.selectionModel().currentIndex().row() == 40
    assert view.viewport().rect().contains(view.visualRect(model.index(40, 0)).center())
    QTest.keyClick(view, Qt.Key.Key_Down)
    assert window.document.selection == ("image", 41)


def test_a_click_on_a_head_sorts(window: Window) -> None:
    head, model = window.table.rows.horizontalHeader(), window.table.rows.model()
    depth = [column.title for column in model.columns].index("depth")
    x = head.sectionViewportPosition(depth) + 12
    for _ in range(2):  # once up, once down
        QTest.mouseClick(head.viewport(), Qt.MouseButton.LeftButton, pos=head.rect().center().__class__(x, 8))
    assert model.data(model.index(0, depth)) == "9"
    assert model.key_of(0) == ("image", 47)


def test_rows_are_copied_as_text(window: Window) -> None:
    view = window.table.rows
    view.setFocus()
    QTest.keyClick(view, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    lines = QGuiApplication.clipboard().text().splitlines()
    assert lines[0].split("\t") == ["image", "x", "y", "z", "parity", "depth", "word"]
    assert len(lines) == 49
    assert "−" not in "".join(lines)
    view.selectRow(2)
    QTest.keyClick(view, Qt.Key.Key_Down, Qt.KeyboardModifier.ShiftModifier)
    window.table.copy.click()
    assert len(QGuiApplication.clipboard().text().splitlines()) == 3
    assert "Copied 2 rows" in window.status.words.text()


def test_the_table_folds_away_and_back(window: Window, qtbot: QtBot) -> None:
    before = window.stage.height()
    QTest.mouseClick(window.table.fold, Qt.MouseButton.LeftButton)
    assert not window.table.rows.isVisible()
    qtbot.waitUntil(lambda: window.stage.height() > before)
    QTest.mouseClick(window.table.fold, Qt.MouseButton.LeftButton)
    assert window.table.rows.isVisible()
    qtbot.waitUntil(lambda: window.stage.height() == before)


def test_without_images_the_pairs_stand_in_the_table(window: Window) -> None:
    window.document.set_angle(2, "40")
    model = window.table.rows.model()
    assert window.table.title.text() == "3 pairs of mirrors"
    assert shown(model, 0) == ["ab", "ac", "bc"]
    assert shown(model, model.columnCount() - 1) == ["fine", "fine", "no lattice"]
    window.document.undo_stack.undo()
    assert window.table.title.text() == "48 images"


def test_the_current_row_is_framed_while_the_table_has_the_keyboard(window: Window) -> None:
    rows = window.table.rows
    accent = QColor(theming().theme.accent)

    def framed(row: int) -> bool:
        top = rows.rowViewportPosition(row)
        image = rows.viewport().grab().toImage()
        return all(image.pixelColor(x, top) == accent for x in (2, 200, image.width() - 3))

    rows.setFocus()
    rows.selectRow(1)
    assert framed(1)
    QTest.keyClick(rows, Qt.Key.Key_Down, Qt.KeyboardModifier.ControlModifier)  # moves without choosing
    QApplication.processEvents()
    assert framed(2)
    assert not framed(1)
    window.mirrors.triangle.focus_pair(0)
    assert not framed(2)


@pytest.mark.parametrize("column", [0, 1, 4, 6])
def test_the_arrow_of_a_sorted_column_leaves_its_title_whole(window: Window, column: int) -> None:
    rows = window.table.rows
    heads = rows.horizontalHeader()
    assert isinstance(heads, Heads)

    def head() -> QImage:
        QApplication.processEvents()
        image = heads.viewport().grab().toImage()
        left = heads.sectionViewportPosition(column)
        return image.copy(left, 0, heads.sectionSize(column), image.height())

    plain = head()
    rows.sortByColumn(column, DOWN)
    marked = head()
    title = str(rows.model().headerData(column, Qt.Orientation.Horizontal))
    side = rows.model().headerData(column, Qt.Orientation.Horizontal, Qt.ItemDataRole.TextAlignmentRole)
    text, arrow = heads.places(plain.rect(), title, Qt.AlignmentFlag(int(side)))
    assert plain.copy(text) == marked.copy(text)
    assert plain.copy(arrow) != marked.copy(arrow)
    assert plain.rect().contains(arrow)
