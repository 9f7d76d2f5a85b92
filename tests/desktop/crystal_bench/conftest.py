"""The crystal bench in the real window."""

from __future__ import annotations

import pytest
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.crystal import CrystalBench
from mirrorlab.desktop.crystal.libraries import loaded
from mirrorlab.desktop.window import Window


@pytest.fixture
def bench(window: Window, qtbot: QtBot) -> CrystalBench:
    """The bench in sight, its libraries loaded, its first section open."""
    window.benches.show_index(1)
    found = window.benches.current
    assert isinstance(found, CrystalBench)
    qtbot.waitUntil(lambda: loaded(window.document), timeout=60_000)
    found.show_section(0)
    return found
