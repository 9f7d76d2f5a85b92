"""Real widgets for the window's tests, and a window that must leave nothing behind."""

from __future__ import annotations

import gc
import threading
from collections.abc import Iterator
from pathlib import Path

import pytest
import shiboken6
from PySide6.QtCore import QCoreApplication, QEvent, QSettings, QThread, QTimer
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.stage import prepare_opengl

if QCoreApplication.instance() is None:
    prepare_opengl()

from mirrorlab.desktop.app import first_state, make_window
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.theming import theming
from mirrorlab.desktop.window import Window


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


@pytest.fixture
def window(dressed: QApplication, qtbot: QtBot, settings: QSettings) -> Iterator[Window]:
    """The real window in sight. Fails when closing it leaves widgets, threads or timers behind."""
    swept(dressed)
    widgets = set(dressed.topLevelWidgets())
    threads = set(threading.enumerate())
    timers = set(live_timers())
    made = make_window(settings)
    with qtbot.waitActive(made):
        made.show()
        made.activateWindow()
    yield made
    work = made.document.work
    made.close()
    assert not work.running(), "work goes on after the window was closed"
    assert not [t for t in work.findChildren(QThread) if t.isRunning()], "threads run on after the close"
    made.deleteLater()
    swept(dressed)
    assert not shiboken6.isValid(made), "the window outlives its deletion"
    left = [w for w in dressed.topLevelWidgets() if w not in widgets]
    assert not left, f"widgets left behind: {left}"
    assert not set(threading.enumerate()) - threads, "threads left behind"
    assert not set(live_timers()) - timers, "timers left running"


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
