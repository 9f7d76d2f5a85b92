"""The triangle by keyboard and mouse: live reading, errors in place, neighbours, add and remove."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.marks import FINE, NO_FRACTION, NO_LATTICE, WRONG
from mirrorlab.desktop.window import Window
from mirrorlab.mirrors import Arrangement


def retype(window: Window, pair: int, text: str) -> None:
    """Type over a cell as a person does."""
    triangle = window.mirrors.triangle
    triangle.focus_pair(pair)
    QTest.keyClicks(triangle.cells[pair].edit, text)


def test_typing_reads_live_and_marks(window: Window, qtbot: QtBot) -> None:
    cells = window.mirrors.triangle.cells
    assert [cell.edit.text() for cell in cells] == ["90", "60", "45"]
    assert {cell.mark.mark for cell in cells} == {FINE}
    with qtbot.waitSignal(window.document.arrangement_changed):
        retype(window, 2, "36")
    assert cells[2].mark.mark == NO_LATTICE
    assert cells[2].reading.text() == "π/5"
    assert window.document.finding.families == ("H3",)
    retype(window, 2, "36.01(1)")
    assert cells[2].reading.text() == "≈ π/5"
    retype(window, 2, "40.123456")
    assert cells[2].mark.mark == NO_FRACTION
    assert "no closing fraction" in window.mirrors.reading.title.text()
    assert window.mirrors.reading.offers.isVisible()


def test_a_nearby_angle_is_taken_with_one_click(window: Window) -> None:
    retype(window, 2, "45.123456")
    reading = window.mirrors.reading
    offers = [reading._row.itemAt(i).widget() for i in range(reading._row.count() - 1)]
    assert offers[0].text() == "45°"
    window.document.set_settings(replace(window.document.settings, notation="pi"))
    offers = [reading._row.itemAt(i).widget() for i in range(reading._row.count() - 1)]
    assert offers[0].text() == "π/4"
    QTest.mouseClick(offers[0], Qt.MouseButton.LeftButton)
    assert window.document.finding.families == ("B3",)
    assert window.mirrors.triangle.cells[2].edit.text() == "45"


def test_an_unreadable_text_stays_with_its_error_and_the_last_good_arrangement(window: Window) -> None:
    triangle, document = window.mirrors.triangle, window.document
    retype(window, 1, "6o")
    cell = triangle.cells[1]
    assert cell.mark.mark == WRONG
    assert '"6o"' in window.mirrors.reading.words.text()
    assert document.arrangement.angles[1].text == "6"
    retype(window, 2, "60")  # a change elsewhere keeps the text
    assert cell.edit.text() == "6o"
    assert cell.mark.mark == WRONG
    QTest.keyClick(cell.edit, Qt.Key.Key_Escape)
    assert cell.edit.text() == "6"
    assert cell.mark.mark != WRONG


def test_undo_from_a_cell_first_brings_back_a_text_then_steps(window: Window) -> None:
    triangle, document = window.mirrors.triangle, window.document
    retype(window, 2, "36")
    edit = triangle.cells[2].edit
    QTest.keyClicks(edit, "x")
    assert triangle.cells[2].error
    QTest.keyClick(edit, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert edit.text() == "36"
    QTest.keyClick(edit, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert edit.text() == "45"
    assert document.finding.families == ("B3",)
    QTest.keyClick(
        edit, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier
    )
    assert edit.text() == "36"


def test_keys_lead_from_cell_to_cell(window: Window) -> None:
    triangle = window.mirrors.triangle
    triangle.focus_pair(0)
    expected = [
        (Qt.Key.Key_Return, 1),
        (Qt.Key.Key_Down, 2),
        (Qt.Key.Key_Up, 1),
        (Qt.Key.Key_Tab, 2),
    ]
    for key, target in expected:
        QTest.keyClick(QApplication.focusWidget(), key)
        assert QApplication.focusWidget() is triangle.cells[target].edit, key
    edit = triangle.cells[1].edit
    triangle.focus_pair(1)
    QTest.keyClick(edit, Qt.Key.Key_Home)
    QTest.keyClick(edit, Qt.Key.Key_Left)
    assert QApplication.focusWidget() is triangle.cells[0].edit


def test_mirrors_are_added_and_the_picked_one_removed(window: Window) -> None:
    triangle, mirrors = window.mirrors.triangle, window.mirrors
    QTest.mouseClick(mirrors.add, Qt.MouseButton.LeftButton)
    assert len(triangle.discs) == 4
    assert len(triangle.cells) == 6
    QTest.mouseClick(triangle.discs[0], Qt.MouseButton.LeftButton)
    assert window.document.selection == ("mirror", 0)
    assert mirrors.remove.text() == "Remove a"
    QTest.mouseClick(mirrors.remove, Qt.MouseButton.LeftButton)
    assert [a.text for a in window.document.arrangement.angles] == ["45", "90", "90"]


def test_eight_mirrors_are_the_most_and_two_the_fewest(window: Window) -> None:
    mirrors = window.mirrors
    for _ in range(7):
        mirrors.add.click()
    assert len(mirrors.triangle.discs) == 8
    assert not mirrors.add.isEnabled()
    for _ in range(8):
        mirrors.remove.click()
    assert len(mirrors.triangle.discs) == 2
    assert not mirrors.remove.isEnabled()


def test_a_family_is_taken_or_its_error_shown_in_place(window: Window) -> None:
    ways = window.mirrors.ways
    QTest.mouseClick(ways.family_button, Qt.MouseButton.LeftButton)
    QTest.keyClicks(ways.family.field, "Q9")
    QTest.keyClick(ways.family.field, Qt.Key.Key_Return)
    assert ways.family.error.isVisible()
    assert ways.family.field.text() == "Q9"
    assert window.document.finding.families == ("B3",)
    ways.family.field.selectAll()
    QTest.keyClicks(ways.family.field, "H4")
    QTest.keyClick(ways.family.field, Qt.Key.Key_Return)
    assert not ways.family.error.isVisible()
    assert window.document.finding.families == ("H4",)
    window.document.undo_stack.undo()
    assert window.document.finding.families == ("B3",)


def test_normals_fill_the_triangle_or_say_which_row_is_wrong(window: Window) -> None:
    ways = window.mirrors.ways
    ways.normals_button.click()
    ways.normals.field.setPlainText("1 0 0\n0 one 0")
    ways.normals.take()
    assert 'Row 2, "one"' in ways.normals.error.text()
    ways.normals.field.setPlainText("1 0 0\n0 1 0\n0, -1, 1")
    ways.normals.take()
    assert [c.reading.text() for c in window.mirrors.triangle.cells][:1] == ["≈ π/2"]
    assert window.document.arrangement.given_normals


def test_samples_all_load(window: Window) -> None:
    actions = window.mirrors.ways.samples.menu().actions()
    assert len(actions) >= 8
    for action in actions:
        action.trigger()
        assert window.document.name in action.text()
        assert window.document.finding.sentence
    assert window.document.undo_stack.count() == len(actions)


def test_reading_settings_are_visible_and_undoable(window: Window) -> None:
    mirrors = window.mirrors
    retype(window, 2, "51.4(2)")
    assert mirrors.triangle.cells[2].mark.mark == NO_LATTICE
    mirrors.settings_button.click()
    assert mirrors.settings.isVisible()
    mirrors.settings.denominator.setValue(6)
    assert mirrors.triangle.cells[2].mark.mark == NO_FRACTION
    assert "π/6" in mirrors.settings_button.text()
    window.document.undo_stack.undo()
    assert mirrors.settings.denominator.value() == 360
    assert mirrors.triangle.cells[2].mark.mark == NO_LATTICE


def test_the_keyboard_stays_in_the_triangle_when_mirrors_come_and_go(window: Window) -> None:
    triangle, document = window.mirrors.triangle, window.document
    retype(window, 1, "72")
    document.put_sheet(Arrangement.from_family("E8"), "E8")
    QApplication.processEvents()
    assert triangle.current == 1
    assert triangle.cells[1].edit.hasFocus()
    QTest.keyClick(triangle.cells[1].edit, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    QApplication.processEvents()
    assert len(triangle.cells) == 3
    assert triangle.cells[1].edit.hasFocus()
    assert [angle.text for angle in document.arrangement.angles] == ["90", "72", "45"]


def test_long_readings_widen_no_column(window: Window) -> None:
    window.document.put_sheet(Arrangement.from_family("A1xI2(7)xI2(9)xI2(11)"), "wide")
    window.mirrors.fit()
    QApplication.processEvents()
    panel, triangle = window.mirrors, window.mirrors.triangle
    widths = {cell.width() for cell in triangle.cells}
    assert max(widths) - min(widths) <= 1
    right = triangle.cells[-1].mapTo(panel, triangle.cells[-1].rect().topRight()).x()
    assert right <= panel.area.viewport().width()
    for cell in triangle.cells:
        assert cell.reading.words.geometry().right() <= cell.reading.width()


def test_a_reading_takes_no_layout(window: Window) -> None:
    cell = window.mirrors.triangle.cells[2]
    window.mirrors.triangle.focus_pair(2)
    QApplication.processEvents()
    asked: list[QEvent.Type] = []
    watch = Watch(asked)
    cell.installEventFilter(watch)
    QTest.keyClicks(cell.edit, "37")
    assert cell.reading.text() == "37π/180"
    QApplication.processEvents()
    assert QEvent.Type.LayoutRequest not in asked


class Watch(QObject):
    """Notes the types of events."""

    def __init__(self, seen: list[QEvent.Type]) -> None:
        super().__init__()
        self.seen = seen

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        self.seen.append(event.type())
        return False
