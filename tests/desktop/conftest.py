"""Real widgets for the window's tests, and a window that must leave nothing behind."""

from __future__ import annotations

import gc
import threading
from collections.abc import Callable, Iterator, Sequence
from pathlib import Path

import pytest
import shiboken6
from PySide6.QtCore import QEvent, QSettings, Qt, QThread, QTimer
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit

from mirrorlab.desktop.app import first_state, make_window
from mirrorlab.desktop.bench_section import BenchSection
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.section_bench import SectionBench
from mirrorlab.desktop.theming import theming
from mirrorlab.desktop.window import FIRST_SIZE, Window
from mirrorlab.mirrors import Arrangement


@pytest.fixture
def dressed(qapp: QApplication) -> Iterator[QApplication]:
    """The application in the light theme, as it starts."""
    qapp.setStyle("Fusion")
    if not qapp.styleSheet() or theming().theme.name != "light":
        theming().wear("light")
    yield qapp
    if theming().theme.name != "light":
        theming().wear("light")


@pytest.fixture
def document(dressed: QApplication) -> Iterator[Document]:
    """A document with the first sample."""
    made = Document(first_state())
    yield made
    made.work.close()
    made.deleteLater()
    swept(dressed)


@pytest.fixture
def settings(tmp_path: Path) -> QSettings:
    """Settings of this test alone; unsaved changes are kept in its folder too."""
    made = QSettings(str(tmp_path / "settings.ini"), QSettings.Format.IniFormat)
    made.setValue("kept folder", str(tmp_path / "kept"))
    return made


@pytest.fixture(scope="module")
def one_window(qapp: QApplication, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Window]:
    """One real window for the tests of a module; they get it through `window`, which clears it.

    Fails when closing it leaves widgets, threads or timers behind.
    """
    qapp.setStyle("Fusion")
    theming().wear("light")
    swept(qapp)
    widgets = set(qapp.topLevelWidgets())
    threads = live_threads()
    timers = set(live_timers())
    folder = tmp_path_factory.mktemp("window")
    made = make_window(QSettings(str(folder / "settings.ini"), QSettings.Format.IniFormat))
    made.settings.setValue("kept folder", str(folder))
    made.show()
    made.activateWindow()
    assert QTest.qWaitForWindowActive(made, 10_000)
    yield made
    work = made.document.work
    made.close()
    assert not work.running(), "work goes on after the window was closed"
    assert not [t for t in work.findChildren(QThread) if t.isRunning()], "threads run on after the close"
    made.deleteLater()
    swept(qapp)
    assert not shiboken6.isValid(made), "the window outlives its deletion"
    left = [w for w in qapp.topLevelWidgets() if w not in widgets]
    assert not left, f"widgets left behind: {left}"
    assert not live_threads() - threads, "threads left behind"
    assert not set(live_timers()) - timers, "timers left running"


@pytest.fixture
def window(one_window: Window, settings: QSettings) -> Iterator[Window]:
    """The real window in sight, as it starts, with settings of this test alone."""
    one_window.settings = settings
    if not one_window.isActiveWindow():
        one_window.activateWindow()
        assert QTest.qWaitForWindowActive(one_window, 10_000)
    yield one_window
    clear(one_window)


@pytest.fixture
def section(bench: SectionBench) -> Callable[[str], BenchSection]:
    """Open a section of the bench in sight by clicking its chip."""

    def open_section(name: str) -> BenchSection:
        QTest.mouseClick(bench.chips.button(list(bench.sections).index(name)), Qt.MouseButton.LeftButton)
        assert bench.section is bench.sections[name]
        assert bench.section.isVisible()
        return bench.section

    return open_section


@pytest.fixture
def put(window: Window) -> Callable[[Sequence[str]], None]:
    """Put mirrors of these angles on the sheet."""

    def put_angles(texts: Sequence[str]) -> None:
        window.document.put_sheet(Arrangement.from_angles(texts), "test")

    return put_angles


@pytest.fixture
def type_into() -> Callable[[QLineEdit, str], None]:
    """Type into a field with the keyboard; no text empties it."""

    def typing(field: QLineEdit, text: str) -> None:
        field.setFocus(Qt.FocusReason.TabFocusReason)
        field.selectAll()
        if text:
            QTest.keyClicks(field, text)
        else:
            QTest.keyClick(field, Qt.Key.Key_Delete)

    return typing


def clear(window: Window) -> None:
    """Bring the window back to how it starts."""
    document = window.document
    document.work.cancel()
    document.undo_stack.clear()
    document._paths.clear()
    document._firsts = {0: first_state()}
    document._show(document._firsts[0])
    document.select(None)
    window.actions_.help.hide()
    window.notice.hide()
    window.status.say("")
    mirrors = window.mirrors
    for opened in (
        mirrors.ways.family_button,
        mirrors.ways.normals_button,
        mirrors.settings_button,
        window.band.toggle,
        window.stage.double,
    ):
        opened.setChecked(False)
    for cell in mirrors.triangle.cells:
        cell.forget_error()
    mirrors.triangle.refresh()
    window.table.set_folded(False)
    window.stage.left.choose("Space")
    window.benches.show_index(0)
    window.table.rows.sortByColumn(-1, Qt.SortOrder.AscendingOrder)
    window.resize(FIRST_SIZE)
    if theming().theme.name != "light":
        theming().wear("light")
    window.setFocus()
    QApplication.processEvents()


def live_threads() -> set[threading.Thread]:
    """Python's threads. Its notes on Qt's threads stay in the list when these have ended (until Python 3.12); Qt's own
    are asked for by name above."""
    return {thread for thread in threading.enumerate() if not isinstance(thread, threading._DummyThread)}


def live_timers() -> list[QTimer]:
    """Timers that run now."""
    return [
        thing
        for thing in gc.get_objects()
        if type(thing) is QTimer and shiboken6.isValid(thing) and thing.isActive()
    ]


def swept(app: QApplication) -> None:
    """Let deleted things go."""
    for _ in range(3):
        app.processEvents()
        app.sendPostedEvents(None, int(QEvent.Type.DeferredDelete.value))
    gc.collect()
