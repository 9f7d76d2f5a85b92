"""The crystal bench in the real window."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QLineEdit
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.crystal import CrystalBench
from mirrorlab.desktop.crystal.libraries import loaded
from mirrorlab.desktop.crystal.section import Section
from mirrorlab.desktop.window import Window
from mirrorlab.mirrors import Arrangement


@pytest.fixture
def bench(window: Window, qtbot: QtBot) -> CrystalBench:
    """The bench in sight, its libraries loaded, its first section open."""
    window.benches.show_index(1)
    found = window.benches.current
    assert isinstance(found, CrystalBench)
    qtbot.waitUntil(lambda: loaded(window.document), timeout=60_000)
    found.show_section(0)
    return found


@pytest.fixture
def section(bench: CrystalBench) -> Callable[[str], Section]:
    """Open a section by clicking its chip."""

    def open_section(name: str) -> Section:
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
        QTest.keyClicks(field, text)

    return typing
