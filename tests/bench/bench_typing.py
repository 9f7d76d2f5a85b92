"""How long from a keystroke in a cell to new finding, picture and table on the screen. Printed, not asserted.

Run with ``pytest tests/bench/bench_typing.py -s``.
"""

from __future__ import annotations

import statistics
import time
from collections.abc import Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import QEvent, QSettings, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

from mirrorlab.desktop.app import make_window
from mirrorlab.desktop.theming import theming
from mirrorlab.desktop.window import Window

FRAME = 16.7
"""Milliseconds of one frame at 60 Hz."""

LAST_KEYS = ("36", "45", "60", "30", "90", "40", "2pi/5", "44.6(4)")
"""Angles typed into the last cell beside 90 and 60; the last key of each is timed."""


@pytest.fixture
def window(qapp: QApplication, tmp_path: Path) -> Iterator[Window]:
    qapp.setStyle("Fusion")
    theming().wear("light")
    made = make_window(QSettings(str(tmp_path / "s.ini"), QSettings.Format.IniFormat))
    made.settings.setValue("kept folder", str(tmp_path))
    made.show()
    made.activateWindow()
    assert QTest.qWaitForWindowActive(made, 10_000)
    yield made
    made.document.undo_stack.setClean()
    made.close()
    made.deleteLater()
    qapp.sendPostedEvents(None, int(QEvent.Type.DeferredDelete.value))
    qapp.processEvents()


def test_typing_to_screen(window: Window) -> None:
    triangle = window.mirrors.triangle
    edit = triangle.cells[2].edit
    rows: list[tuple[str, str, float, float, float]] = []
    for text in LAST_KEYS:
        answers, paints, works = [], [], []
        for _ in range(7):
            triangle.focus_pair(2)
            QTest.keyClicks(edit, text[:-1])
            QApplication.processEvents()
            start, worked = time.perf_counter(), time.thread_time()
            QTest.keyClick(
                edit, Qt.Key(ord(text[-1].upper())) if text[-1].isalnum() else Qt.Key.Key_ParenRight
            )
            answered = time.perf_counter()
            QApplication.processEvents()
            painted = time.perf_counter()
            answers.append(1000 * (answered - start))
            paints.append(1000 * (painted - answered))
            works.append(1000 * (time.thread_time() - worked))
        assert window.document.arrangement.angles[2].text == text
        kind = window.document.finding.kind
        rows.append((text, kind, *map(statistics.median, (answers, paints, works))))
    view = window.stage.left.view
    assert view is not None
    print(f"\npictures by {type(view.current).__name__}; medians of 7")
    print(
        f"{'typed':>10} {'finding':>18} {'answer ms':>10} {'paint ms':>9} {'frames':>7} {'main thread ms':>15}"
    )
    for text, kind, answer, paint, work in rows:
        frames = (answer + paint) / FRAME
        print(f"{text:>10} {kind:>18} {answer:10.1f} {paint:9.1f} {frames:7.2f} {work:15.1f}")
