"""Work beside the window: results, failures, cancel, replacement, and an end to every thread."""

from __future__ import annotations

import threading

from PySide6.QtCore import QThread
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.work import Work


def test_result_comes_back_in_the_window_thread(qtbot: QtBot) -> None:
    work, got = Work(), []
    with qtbot.waitSignal(work.ended):
        work.start(
            "sum", lambda progress: progress(1, 2) and 42, lambda r: got.append((r, QThread.isMainThread()))
        )
    assert got == [(42, True)]
    assert work.running() == ()
    work.close()


def test_failure_is_handed_over(qtbot: QtBot) -> None:
    work, got = Work(), []

    def fail(progress: object) -> None:
        msg = "no"
        raise ValueError(msg)

    with qtbot.waitSignal(work.ended):
        work.start("bad", fail, got.append, lambda error: got.append(str(error)))
    assert got == ["no"]


def test_progress_is_told(qtbot: QtBot) -> None:
    work, told = Work(), []
    work.progressed.connect(lambda *args: told.append(args))
    with qtbot.waitSignal(work.ended):
        work.start("count", lambda progress: progress(3, 10), lambda r: None)
    assert told == [("count", 3, 10)]


def test_cancel_stops_the_job_and_drops_its_result(qtbot: QtBot) -> None:
    work, got, entered = Work(), [], threading.Event()

    def patient(progress: object) -> str:
        entered.set()
        while progress(0, 1):  # type: ignore[operator]
            pass
        return "late"

    work.start("wait", patient, got.append)
    assert entered.wait(10)
    with qtbot.waitSignal(work.ended):
        work.cancel("wait")
    work.close()
    assert not [t for t in work.findChildren(QThread) if t.isRunning()]
    assert got == []


def test_a_job_replaces_the_one_of_its_name(qtbot: QtBot) -> None:
    work, got, free = Work(), [], threading.Event()
    work.start("name", lambda progress: free.wait(10) and "first", got.append)
    work.start("name", lambda progress: "second", got.append)
    free.set()
    qtbot.waitUntil(lambda: got == ["second"])
    work.close()
    assert got == ["second"]


def test_nothing_starts_after_the_close(qtbot: QtBot) -> None:
    work = Work()
    work.close()
    started: list[str] = []
    work.started.connect(started.append)
    work.start("late", lambda progress: started.append("ran"), lambda result: None)
    assert (started, work.running()) == ([], ())
