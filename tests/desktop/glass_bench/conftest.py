"""The glass bench in the real window."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.glass import GlassBench
from mirrorlab.desktop.glass.eye_view import EyeView
from mirrorlab.desktop.window import Window

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
