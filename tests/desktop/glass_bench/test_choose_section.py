"""About so many images, the nearest assemblies, the whole list, and picking one."""

from __future__ import annotations

from dataclasses import replace

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest


@pytest.fixture
def choose(section, answered):
    """The section with its list."""
    found = section("Choose")
    answered(found.answer)
    return found


def angles(window):
    return [angle.text for angle in window.document.arrangement.angles]


def test_the_nearest_and_the_whole_list(window, choose, type_into):
    type_into(choose.asked.entries["images"].field, "12")
    figures = [int(card.figure.text().split()[0]) for card in choose.cards]
    assert figures[0] == 11
    assert [abs(n - 12) for n in figures] == sorted(abs(n - 12) for n in figures)
    assert window.table.title.text() == f"{len(choose.found)} assemblies that close"
    assert window.table.rows.model().rowCount() == len(choose.found) > 50
    kinds = {one.closing.kind for one in choose.found}
    assert kinds == {"wedge", "corner", "tube"}


def test_a_card_puts_its_angles_into_the_triangle_as_one_step(window, choose, type_into):
    type_into(choose.asked.entries["images"].field, "119")
    place = next(k for k, card in enumerate(choose.cards) if card.name.text() == "Corner 90° 60° 36°")
    before, steps = angles(window), window.document.undo_stack.count()
    QTest.mouseClick(choose.cards[place], Qt.MouseButton.LeftButton)
    assert angles(window) == ["90", "60", "36"]
    assert window.document.finding.order == 120
    assert window.document.undo_stack.count() == steps + 1
    assert choose.cards[place].property("live")
    window.document.undo_stack.undo()
    assert angles(window) == before
    choose.cards[place].setFocus()
    QTest.keyClick(choose.cards[place], Qt.Key.Key_Return)
    assert angles(window) == ["90", "60", "36"]


def test_going_through_the_table_is_one_step(window, choose):
    rows = window.table.rows
    before, steps = angles(window), window.document.undo_stack.count()
    rows.setFocus()
    rows.selectRow(0)
    QTest.keyClick(rows, Qt.Key.Key_Down)
    QTest.keyClick(rows, Qt.Key.Key_Down)
    assert angles(window) == list(choose.found[2].closing.angles)
    assert rows.currentIndex().row() == 2
    assert window.document.undo_stack.count() == steps + 1
    window.document.undo_stack.undo()
    assert angles(window) == before


def test_kinds_and_whole_ones_only(window, choose):
    QTest.mouseClick(choose.kinds.button(3), Qt.MouseButton.LeftButton)
    assert {one.closing.kind for one in choose.found} == {"tube"}
    assert "bright" in choose.cards[0].figure.text()
    QTest.mouseClick(choose.kinds.button(0), Qt.MouseButton.LeftButton)
    count = len(choose.found)
    choose.whole.click()
    assert 0 < len(choose.found) < count
    assert {one.closing.chambers for one in choose.found} == {1}
    window.document.undo_stack.undo()
    assert len(choose.found) == count


def test_the_list_is_sorted_by_a_column(window, choose):
    window.table.rows.sortByColumn(2, Qt.SortOrder.DescendingOrder)
    model = window.table.rows.model()
    first = int(model.text_at(0, 2))
    assert first == max(one.bright for one in choose.found)


def test_a_larger_opening_makes_larger_panels(choose, type_into, answered):
    before = {one.closing.name: one.area for one in choose.found}
    type_into(choose.asked.entries["opening"].field, "240 mm")
    answered(choose.answer)
    for one in choose.found:
        assert one.area == pytest.approx(4 * before[one.closing.name])


@pytest.mark.parametrize(
    ("key", "text"), [("opening", "wide"), ("opening", "0"), ("images", "a few"), ("images", "0")]
)
def test_what_cannot_be_read_is_told_below_and_the_list_stays(choose, type_into, key, text):
    shown = [card.name.text() for card in choose.cards]
    field = choose.asked.entries[key].field
    type_into(field, text)
    assert field.property("wrong")
    assert choose.asked.error.isVisible()
    assert text in choose.asked.error.text()
    assert [card.name.text() for card in choose.cards] == shown


def test_assemblies_are_named_in_the_notation(window, choose):
    window.document.set_settings(replace(window.document.settings, notation="pi"))
    assert any("π/" in card.name.text() for card in choose.cards)
    model = window.table.rows.model()
    names = [model.text_at(row, 0) for row in range(model.rowCount())]
    assert "corner π/2 π/3 π/5" in names
    assert not [name for name in names if "°" in name]
