"""The glass bench in the real window."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QLineEdit
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.glass import GlassBench
from mirrorlab.desktop.glass.eye_view import EyeView
from mirrorlab.desktop.glass.glass_section import GlassSection
from mirrorlab.desktop.window import Window
from mirrorlab.mirrors import Arrangement

LONG = 120_000
"""Milliseconds within which anything comes, compiling included, on a machine that others use too."""


@pytest.fixture
def bench(window: Window) -> GlassBench:
    """The bench in sight."""
    window.benches.show_index(2)
    found = window.benches.current
    assert isinstance(found, GlassBench)
    return found


@pytest.fixture
def section(bench: GlassBench) -> Callable[[str], GlassSection]:
    """Open a section by clicking its chip."""

    def open_section(name: str) -> GlassSection:
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
    """Type into a field with the keyboard."""

    def typing(field: QLineEdit, text: str) -> None:
        field.setFocus(Qt.FocusReason.TabFocusReason)
        field.selectAll()
        if text:
            QTest.keyClicks(field, text)
        else:
            QTest.keyClick(field, Qt.Key.Key_Delete)

    return typing


@pytest.fixture
def answered(qtbot: QtBot) -> Callable[[object], object]:
    """Wait until an answer that is made beside the window is there."""

    def wait(answer: object) -> object:
        qtbot.waitUntil(lambda: not answer.busy, timeout=LONG)
        return answer.value

    return wait


@pytest.fixture
def eye(window: Window, bench: GlassBench, qtbot: QtBot) -> EyeView:
    """The eye's view on the stage, its fine picture there."""
    window.stage.left.choose("Eye's view")
    found = window.stage.left.stack.currentWidget()
    assert isinstance(found, EyeView)
    qtbot.waitUntil(lambda: found.fine, timeout=LONG)
    return found
