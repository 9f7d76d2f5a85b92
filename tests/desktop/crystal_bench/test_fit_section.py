"""Measured angles fitted, candidates applied and the measured angles brought back."""

from __future__ import annotations

from dataclasses import replace

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from mirrorlab.desktop.crystal.answered_section import STOPPED

LONG = 60_000


@pytest.fixture
def fitted(section, put, qtbot):
    """Open the section on these angles and wait for its answer."""

    def open_fit(*texts):
        put(texts)
        fit = section("Fit")
        qtbot.waitUntil(lambda: fit.answer is not None or bool(fit.problem), timeout=LONG)
        return fit

    return open_fit


def texts_of(window):
    return [angle.text for angle in window.document.arrangement.angles]


def test_the_best_candidate_comes_first_and_is_applied_by_a_click(window, fitted, qtbot):
    measured = ["90.1(2)", "59.8(3)", "44.6(4)"]
    fit = fitted(*measured)
    assert fit.cards[0].accessibleName().startswith("m-3m")
    # (0.1/0.2)² + (0.2/0.3)² + (0.4/0.4)²
    assert fit.answer.best.chi_squared == pytest.approx(0.25 + 4 / 9 + 1)
    assert "ab\u00a0+0.5σ" in fit.cards[0].below.text()
    assert "misfit bc" in fit.cards[1].below.text()
    assert window.table.title.text().endswith("closed arrangements")
    QTest.mouseClick(fit.cards[0], Qt.MouseButton.LeftButton)
    assert texts_of(window) == ["90", "60", "45"]
    qtbot.waitUntil(lambda: fit.answer is not None, timeout=LONG)
    assert fit.cards[0].accessibleName() == "m-3m in the triangle"
    QTest.mouseClick(fit.back, Qt.MouseButton.LeftButton)
    assert texts_of(window) == measured
    window.document.undo_stack.undo()
    window.document.undo_stack.undo()
    assert texts_of(window) == measured
    assert window.document.crystal is None


def test_a_candidate_from_the_table_is_applied(window, fitted):
    fit = fitted("59.8(3)")
    row = len(fit.cards) + 1
    wanted = fit.answer.candidates[row].angles[0]
    window.table.rows.selectRow(row)
    assert fit.apply.isVisible()
    QTest.mouseClick(fit.apply, Qt.MouseButton.LeftButton)
    assert window.document.arrangement.angles[0].fraction == wanted


def test_exact_angles_ask_for_an_uncertainty(window, fitted, type_into, qtbot):
    fit = fitted("90", "60", "45")
    assert "No angle has an uncertainty" in fit.sentence.text()
    assert "No angle has an uncertainty" in window.table.empty.text()
    type_into(fit.sigma, "0.5")
    qtbot.waitUntil(lambda: fit.answer is not None, timeout=LONG)
    assert fit.answer.best.chi_squared == 0
    type_into(fit.sigma, "half")
    assert fit.sigma.property("wrong")
    assert '"half"' in fit.sigma_error.text()
    assert fit.sigma.text() == "half"
    window.document.undo_stack.undo()


def test_nothing_fits_and_one_angle_is_the_misfit(fitted):
    fit = fitted("90.0(1)", "60.0(1)", "48.0(1)")
    assert fit.sentence.text().startswith("None of them fits")
    assert "misfit is bc" in fit.sentence.text()


def test_a_stopped_fit_is_asked_for_again(window, section, put, qtbot):
    put(["90.1(2)", "59.8(3)", "44.6(4)"])
    fit = section("Fit")
    QTest.mouseClick(window.status.cancel, Qt.MouseButton.LeftButton)
    if fit.answer is None:
        assert fit.sentence.text() == STOPPED
    section("Group")
    section("Fit")
    qtbot.waitUntil(lambda: fit.answer is not None, timeout=LONG)
    assert fit.cards[0].accessibleName().startswith("m-3m")


def test_candidates_are_written_in_the_notation(window, fitted):
    fit = fitted("90.1(2)", "59.8(3)", "44.6(4)")
    assert fit.cards[0].beside.text() == "90°, 60°, 45°"
    window.document.set_settings(replace(window.document.settings, notation="pi"))
    assert fit.cards[0].beside.text() == "π/2, π/3, π/4"
    assert window.table.rows.model().text_at(0, 2) == "π/2, π/3, π/4"
