"""The window: all of it fits, benches load late, pictures change, the theme switches, work can be cancelled."""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path

import pytest
from PySide6.QtCore import QPoint, QRect, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QAbstractButton, QAbstractSpinBox, QApplication, QLabel, QWidget
from pytestqt.qtbot import QtBot

from mirrorlab.angles import STYLES
from mirrorlab.desktop import app
from mirrorlab.desktop.bench import BENCHES
from mirrorlab.desktop.own_settings import kept_settings
from mirrorlab.desktop.parts import Elided
from mirrorlab.desktop.state import Settings
from mirrorlab.desktop.status import SOON
from mirrorlab.desktop.theming import theming
from mirrorlab.desktop.window import Window
from mirrorlab.mirrors import Arrangement


def inside(widget: QWidget, window: Window) -> bool:
    corner = widget.mapTo(window, QPoint(0, 0))
    return window.rect().contains(QRect(corner, widget.size()))


@pytest.mark.parametrize(("width", "height"), [(1280, 800), (1920, 1080)])
def test_everything_fits(window: Window, qtbot: QtBot, width: int, height: int) -> None:
    window.resize(width, height)
    qtbot.waitUntil(lambda: window.width() == width and window.height() == height)
    qtbot.waitUntil(lambda: inside(window.benches, window))
    for part in (window.band, window.mirrors, window.stage, window.benches, window.table, window.status):
        assert part.isVisible()
        assert inside(part, window), part.objectName()
    for text in window.findChildren(QLabel):
        if text.isVisible() and not text.wordWrap() and not isinstance(text, Elided) and text.text():
            assert text.width() >= text.sizeHint().width() - 1, f"{text.text()!r} is cut off"
    for press in window.findChildren(QAbstractButton):
        if press.isVisible() and press.text():
            room = press.width()
            assert room >= press.fontMetrics().horizontalAdvance(press.text()), press.text()
    assert window.stage.left.stack.width() > 0.4 * width


def test_eight_mirrors_fit_a_small_laptop(window: Window, qtbot: QtBot) -> None:
    window.resize(1280, 800)
    window.document.put_sheet(Arrangement.from_family("A8"), "A8")
    qtbot.waitUntil(lambda: window.mirrors.triangle.cells[-1].isVisible())
    assert window.width() == 1280
    assert inside(window.benches, window)
    assert window.stage.width() >= 480
    for cell in window.mirrors.triangle.cells:
        assert cell.edit.width() >= cell.edit.fontMetrics().horizontalAdvance("120.5")


def test_no_bench_but_the_first_is_loaded_at_the_start(window: Window) -> None:
    assert list(window.benches._benches) == [BENCHES[0].title]


def test_every_bench_comes_with_its_key(window: Window) -> None:
    for i, slot in enumerate(window.benches.slots):
        QTest.keyClick(window, Qt.Key(Qt.Key.Key_1 + i), Qt.KeyboardModifier.AltModifier)
        assert window.benches.current.title == slot.title
        assert window.benches.current.isVisible()
        assert window.table.bench is window.benches.current


def test_pictures_are_chosen_and_shown_side_by_side(window: Window) -> None:
    stage = window.stage
    assert stage.left.shown == "Space"
    assert stage.left.drawing is not None
    stage.left.choose("Chamber map")
    assert stage.left.drawing is not None
    assert stage.left.drawing.flat
    QTest.keyClick(window, Qt.Key.Key_2, Qt.KeyboardModifier.ControlModifier)
    assert len(stage.panes) == 2
    stage.right.choose("Space")
    assert stage.right.drawing is not None
    window.document.set_angle(2, "36")
    assert "generated" in {line.key[0] for line in stage.right.drawing.lines}
    QTest.keyClick(window, Qt.Key.Key_2, Qt.KeyboardModifier.ControlModifier)
    assert len(stage.panes) == 1


def test_a_picture_that_does_not_fit_gives_way_and_comes_back(window: Window) -> None:
    left = window.stage.left
    window.document.put_sheet(Arrangement.from_family("A4"), "A4")
    assert left.shown == "Coxeter plane"
    assert "Space" not in [left.chooser.itemText(i) for i in range(left.chooser.count())]
    window.document.undo_stack.undo()
    assert left.shown == "Space"


def test_selection_is_shared_by_pictures_and_triangle(window: Window) -> None:
    window.stage.double.click()
    window.stage.right.choose("Chamber map")
    window.document.select(("mirror", 1))
    assert window.mirrors.triangle.discs[1].chosen
    for pane in window.stage.panes:
        assert pane.view is not None
        assert ("mirror", 1) in pane.view.current._selection
    QTest.keyClick(window, Qt.Key.Key_D, Qt.KeyboardModifier.ControlModifier)
    assert window.document.selection is None


def test_what_is_under_the_pointer_is_said(window: Window) -> None:
    left = window.stage.left
    for key, words in (
        (("image", 3), "word c, odd"),
        (("image", 0), "Seed"),
        (("chamber", 0), "chamber of the seed"),
        (("chamber", 5), "Chamber "),
        (("mirror", 1), "Mirror b: 90 with a, 45 with c"),
        (("generated", 8), "Generated mirror 9 of 9"),
    ):
        left._hover(key)
        assert words in window.status.words.text()
    left._hover(None)
    assert "Type an angle" in window.status.words.text()


def test_light_and_dark(window: Window, qtbot: QtBot) -> None:
    assert theming().theme.name == "light"
    with qtbot.waitSignal(theming().changed):
        QTest.keyClick(window, Qt.Key.Key_L, Qt.KeyboardModifier.ControlModifier)
    assert theming().theme.name == "dark"
    assert window.settings.value("theme") == "dark"
    assert window.stage.left.view is not None
    assert window.stage.left.view.look.name == "dark"
    QTest.keyClick(window, Qt.Key.Key_L, Qt.KeyboardModifier.ControlModifier)


def test_the_sheets_name_says_when_it_was_changed(window: Window) -> None:
    name = window.mirrors.name
    assert name.text() == "Ostrel corner lantern"
    window.document.set_angle(2, "36")
    assert name.text() == "Ostrel corner lantern, changed"
    assert window.isWindowModified()
    window.document.undo_stack.undo()
    assert name.text() == "Ostrel corner lantern"
    assert not window.isWindowModified()


def test_long_work_shows_and_is_cancelled(window: Window, qtbot: QtBot) -> None:
    import threading

    entered = threading.Event()

    def patient(progress: object) -> None:
        entered.set()
        done = 0
        while progress(done := done + 1, 100):  # type: ignore[operator]
            threading.Event().wait(0.001)

    window.document.work.start("something long", patient, lambda r: None)
    assert entered.wait(10)
    qtbot.waitUntil(lambda: window.status.bar.maximum() == 100)
    qtbot.waitUntil(window.status.working.isVisible)
    QTest.mouseClick(window.status.cancel, Qt.MouseButton.LeftButton)
    assert not window.status.working.isVisible()
    assert window.document.work.running() == ()


def test_short_work_does_not_flash(window: Window, qtbot: QtBot) -> None:
    with qtbot.waitSignal(window.document.work.ended):
        window.document.work.start("something short", lambda progress: 1, lambda r: None)
    qtbot.wait(SOON + 100)
    assert not window.status.working.isVisible()


def test_the_window_offers_the_ways_to_write_that_there_are(window: Window) -> None:
    box = window.mirrors.settings.notation
    assert tuple(box.itemData(k) for k in range(box.count())) == STYLES


def test_notation_and_limit_are_the_users_own(window: Window) -> None:
    settings = replace(window.document.settings, notation="dms", most_images=5000)
    window.document.set_settings(settings)
    kept = kept_settings(window.settings)
    assert (kept.notation, kept.most_images) == ("dms", 5000)
    window.settings.setValue("notation", "roman")
    window.settings.setValue("most images", "many")
    assert kept_settings(window.settings) == Settings()


def test_help_opens_beside_the_window(window: Window, qtbot: QtBot) -> None:
    QTest.keyClick(window, Qt.Key.Key_F1)
    assert window.actions_.help.isVisible()
    assert not window.actions_.help.isModal()


def test_an_error_inside_is_shown_and_the_document_kept(
    window: Window, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.setattr(sys, "excepthook", sys.excepthook)
    app.guard(window)
    window.document.set_angle(2, "36")
    try:
        msg = "for the test"
        raise RuntimeError(msg)
    except RuntimeError as error:
        sys.excepthook(type(error), error, error.__traceback__)
    assert window.notice.isVisible()
    assert "for the test" in window.notice.words.text()
    assert window.filing.kept_path.is_file()
    assert window.document.finding.families == ("H3",)
    assert "RuntimeError" in capsys.readouterr().err


def test_unsaved_changes_are_offered_at_the_next_start(window: Window, qtbot: QtBot, tmp_path: Path) -> None:
    window.document.set_angle(2, "36")
    window.filing.keep_unsaved()
    window.document.undo_stack.undo()
    window.filing.offer_kept()
    assert window.notice.isVisible()
    QTest.mouseClick(window.notice.act, Qt.MouseButton.LeftButton)
    assert window.document.finding.families == ("H3",)
    assert window.document.path is None
    assert not window.filing.kept_path.exists()
    window.document.undo_stack.setClean()


def test_text_of_spin_boxes_stands_clear_of_the_edge(window: Window) -> None:
    window.benches.show_index(1)
    boxes = window.findChildren(QAbstractSpinBox)
    assert len(boxes) == 4
    assert min(box.lineEdit().textMargins().left() for box in boxes) >= 4


def test_a_long_name_does_not_widen_the_mirrors(window: Window) -> None:
    width = window.mirrors.width()
    name = "The lantern of the third gallery, as measured in spring and again in autumn"
    window.document.put_sheet(window.document.arrangement, name)
    QApplication.processEvents()
    assert window.mirrors.width() == width
    assert window.mirrors.name.geometry().right() <= window.mirrors.area.viewport().width()
    window.grab()
    assert window.mirrors.name.toolTip() == name
