"""The finding band: symbols as printed, evidence, flags, and suggestions applied with one click."""

from __future__ import annotations

from dataclasses import replace

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel, QPushButton
from pytestqt.qtbot import QtBot

from mirrorlab.desktop import symbols
from mirrorlab.desktop.finding_band import HEADLINES
from mirrorlab.desktop.symbols import Run
from mirrorlab.desktop.window import Window


def test_overbars_and_slanted_letters() -> None:
    assert symbols.hermann_mauguin("m-3m") == (Run("m", True), Run("3", barred=True), Run("m", True))
    assert symbols.hermann_mauguin("-10m2") == (Run("10", barred=True), Run("m", True), Run("2"))
    assert symbols.hermann_mauguin("-43m") == (Run("4", barred=True), Run("3"), Run("m", True))
    assert symbols.hermann_mauguin("-122m")[:2] == (Run("12", barred=True), Run("2"))
    assert symbols.hermann_mauguin("-3m") == (Run("3", barred=True), Run("m", True))
    assert symbols.hermann_mauguin("6/mmm") == (Run("6"), Run("/"), Run("mmm", True))
    assert symbols.as_html(symbols.hermann_mauguin("m-3-5")).count("overline") == 2


def test_lowered_indices() -> None:
    assert symbols.schoenflies("D5h") == (Run("D", True), Run("5h", lowered=True))
    assert symbols.families(["A1", "I2(5)"]) == (
        Run("A", True),
        Run("1", lowered=True),
        Run(" × "),
        Run("I", True),
        Run("2", lowered=True),
        Run("(5)"),
    )


def test_band_shows_the_group(window: Window) -> None:
    band = window.band
    assert band.headline.text() == "Closed"
    assert band.symbols.accessibleName() == "Hermann–Mauguin: m bar 3 m; Schoenflies: O h; family: B 3"
    assert band.symbols.width() == band.symbols.sizeHint().width() > 0
    assert "48 images" in band.sentence.text()


def kinds() -> list[tuple[str, int, str]]:
    return [
        ("closed", 2, "36"),
        ("closed-subdivided", 2, "2pi/5"),
        ("open", 2, "40"),
        ("tube", 2, "30"),
        ("unbuildable", 2, "5"),
    ]


@pytest.mark.parametrize(("kind", "pair", "text"), kinds())
def test_every_kind_has_its_headline(window: Window, kind: str, pair: int, text: str) -> None:
    window.document.set_angle(pair, text)
    assert window.document.finding.kind == kind
    assert window.band.headline.text() == HEADLINES[kind]
    assert window.band.sentence.text()


def test_evidence_unfolds_and_shows_numbers(window: Window) -> None:
    band = window.band
    assert not band.sheet.isVisible()
    QTest.mouseClick(band.toggle, Qt.MouseButton.LeftButton)
    assert band.sheet.isVisible()
    text = "".join(label.text() for label in band.sheet.findChildren(QLabel))
    assert "4cos²" in text
    assert "2, 4, 6" in text
    QTest.mouseClick(band.toggle, Qt.MouseButton.LeftButton)
    assert not band.sheet.isVisible()


def test_flags_name_the_pair(window: Window) -> None:
    window.band.toggle.click()
    window.document.set_angle(2, "36")
    assert "1 flag" in window.band.toggle.text()
    texts = [label.text() for label in window.band.sheet.flags.findChildren(QLabel)]
    assert any("bc" in text and "4cos²" in text for text in texts)


def test_flags_and_sentence_keep_to_the_notation(window: Window) -> None:
    window.band.toggle.click()
    flags = window.band.sheet.flags

    def told() -> str:
        QApplication.processEvents()
        return " ".join(label.text() for label in flags.findChildren(QLabel) if not label.isHidden())

    window.document.set_angle(2, "36")
    assert "bc 36°" in told()
    window.document.set_settings(replace(window.document.settings, notation="pi"))
    assert "bc π/5" in told()
    assert "π/4" in told()
    for pair in range(3):
        window.document.set_angle(pair, "60")
    assert "read as 2π/3" in window.band.sentence.text()
    window.document.set_settings(replace(window.document.settings, notation="dms"))
    assert "read as 120°" in window.band.sentence.text()


def test_letters_of_mirrors_keep_their_case_in_the_evidence(window: Window) -> None:
    window.band.toggle.click()
    window.document.set_angle(2, "40")
    grounds = " ".join(label.text() for label in window.band.sheet.grounds.findChildren(QLabel))
    assert "<b>b and c make mirrors" in grounds


def test_a_suggestion_is_applied_with_one_click(window: Window, qtbot: QtBot) -> None:
    window.document.set_angle(2, "40")
    window.band.toggle.click()
    flags = window.band.sheet.flags
    qtbot.waitUntil(lambda: bool(flags.findChildren(QPushButton)), timeout=30_000)
    apply = flags.findChildren(QPushButton)[0]
    QTest.mouseClick(apply, Qt.MouseButton.LeftButton)
    assert window.document.finding.kind.startswith("closed")
    window.document.undo_stack.undo()
    assert window.document.finding.kind == "open"
