"""The finding band: symbols as printed, evidence, flags, and suggestions applied with one click."""

from __future__ import annotations

from dataclasses import replace

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QImage, QRegion
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel, QPushButton, QScrollArea, QWidget
from pytestqt.qtbot import QtBot

from mirrorlab.desktop import symbols
from mirrorlab.desktop.finding_band import HEADLINES
from mirrorlab.desktop.symbols import Run
from mirrorlab.desktop.window import Window
from mirrorlab.mirrors import Arrangement


def test_overbars_and_slanted_letters() -> None:
    assert symbols.hermann_mauguin("m-3m") == (Run("m", True), Run("3", barred=True), Run("m", True))
    assert symbols.hermann_mauguin("-10m2") == (Run("10", barred=True), Run("m", True), Run("2"))
    assert symbols.hermann_mauguin("-43m") == (Run("4", barred=True), Run("3"), Run("m", True))
    assert symbols.hermann_mauguin("-122m")[:2] == (Run("12", barred=True), Run("2"))
    assert symbols.hermann_mauguin("-3m") == (Run("3", barred=True), Run("m", True))
    assert symbols.hermann_mauguin("6/mmm") == (Run("6"), Run("/"), Run("mmm", True))
    assert symbols.as_html(symbols.hermann_mauguin("m-3-5")).count("overline") == 2


@pytest.mark.parametrize("scale", [1.0, 1.25, 1.5, 2.0])
@pytest.mark.parametrize("top", [0.0, 1.0, 2.0, 3.0])
def test_bars_are_seen_at_every_scale(dressed: QApplication, scale: float, top: float) -> None:
    def drawn(runs: tuple[Run, ...]) -> QImage:
        box = QWidget()
        line = QLabel(symbols.as_html(runs), box)
        line.setTextFormat(Qt.TextFormat.RichText)
        line.setGeometry(0, 0, line.sizeHint().width(), line.sizeHint().height())
        image = QImage(round(60 * scale), round(40 * scale), QImage.Format.Format_RGB32)
        image.setDevicePixelRatio(scale)
        image.fill(Qt.GlobalColor.white)
        line.render(image, QPoint(0, round(top)), QRegion(), QWidget.RenderFlag.DrawChildren)
        return image.convertToFormat(QImage.Format.Format_Grayscale8)

    def ink(image: QImage) -> int:
        return sum(
            image.pixelColor(x, y).lightness() < 140
            for x in range(image.width())
            for y in range(image.height())
        )

    barred, plain = drawn((Run("3", barred=True),)), drawn((Run("3"),))
    assert ink(barred) - ink(plain) >= 4 * scale  # a digit is six pixels wide


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


@pytest.mark.parametrize(
    ("texts", "ground"),
    [
        (("5", "5", "5"), "negative eigenvalue"),
        (("60", "60", "60"), "eigenvalue 0"),
        (("90", "60", "37"), "apart"),
    ],
)
def test_every_kind_has_grounds_and_nothing_beside_is_cut_off(
    window: Window, texts: tuple[str, ...], ground: str
) -> None:
    window.document.put_sheet(Arrangement.from_angles(texts), "test")
    window.band.toggle.click()
    QApplication.processEvents()
    column = window.band.sheet.grounds
    label = column.findChildren(QLabel)[-1]
    assert ground in label.text()
    assert label.width() >= label.minimumSizeHint().width()
    assert label.geometry().right() <= column.width()


def test_wide_numbers_scroll_to_the_side(window: Window, qtbot: QtBot) -> None:
    bar = window.band.sheet.gram.findChild(QScrollArea).horizontalScrollBar()
    window.document.put_sheet(Arrangement.from_family("A1xI2(7)xI2(9)xI2(11)"), "wide")
    window.band.toggle.click()
    qtbot.waitUntil(lambda: bar.maximum() > 0)
    window.document.put_sheet(Arrangement.from_angles(["17", "23", "29", "31", "37", "41"]), "four")
    qtbot.waitUntil(lambda: bar.maximum() == 0)


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


def test_wide_symbols_do_not_widen_a_narrow_window(window: Window) -> None:
    QApplication.processEvents()
    least = window.minimumSizeHint().width()
    window.resize(least, 700)
    QApplication.processEvents()
    window.document.put_sheet(Arrangement.from_family("A1xI2(7)xI2(9)"), "wide")
    QApplication.processEvents()
    band = window.band
    assert band.minimumSizeHint().width() <= window.width()
    assert band.toggle.geometry().right() <= band.width()
    image = band.symbols.grab().toImage()
    ground = image.pixelColor(0, 0)
    ink = [
        x
        for x in range(image.width())
        if any(image.pixelColor(x, y) != ground for y in range(image.height()))
    ]
    assert 0 <= ink[0] < ink[-1] < image.width() - 1
