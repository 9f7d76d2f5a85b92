"""Errors of angles, the seams they open, and seams by chance."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from mirrorlab.optics.montecarlo import seam_chances
from mirrorlab.optics.tolerance import intent_of


@pytest.fixture
def tolerance(section, put, answered):
    put(["60"])
    found = section("Tolerance")
    answered(found.figures)
    answered(found.drawn)
    return found


def cell(model, row, title):
    titles = [column.title for column in model.columns]
    return model.values(titles.index(title))[row]


def test_an_angle_measured_in_the_triangle(window, tolerance, answered, type_into):
    type_into(window.mirrors.triangle.cells[0].edit, "59.7")
    answered(tolerance.figures)
    assert tolerance.edges.errors[0].placeholderText() == "-0.3"
    # Six sectors of 59.7° leave 360° − 358.2° = 1.8° open.
    assert cell(tolerance.model, 0, "left over °") == pytest.approx(-1.8)
    assert tolerance.facts.texts["Left over"] == "ab 1.8° gap"
    # A chord at 200 mm: 2 · 200 · sin(0.9°).
    assert abs(cell(tolerance.model, 0, "seam mm")) == pytest.approx(400 * np.sin(np.radians(0.9)))


def test_an_error_typed_here_leaves_the_triangle_alone(window, tolerance, answered, type_into):
    steps = window.document.undo_stack.count()
    type_into(tolerance.edges.errors[0], "0.25")
    answered(tolerance.figures)
    assert cell(tolerance.model, 0, "left over °") == pytest.approx(1.5)
    assert window.document.arrangement.angles[0].text == "60"
    assert tolerance.edges.actual[0].text() == "60.25°"
    assert window.document.undo_stack.count() == steps + 1
    window.document.undo_stack.undo()
    answered(tolerance.figures)
    assert tolerance.facts.texts["Left over"] == "nothing"


def test_backwards_from_a_seam(tolerance, answered, type_into):
    type_into(tolerance.seam.entries["limit"].field, "2 mm")
    answered(tolerance.figures)
    # Six sectors: 2 mm at 200 mm is a turn of 2 asin(2/400), a sixth of it for each.
    allowed = np.degrees(2 * np.arcsin(2 / 400)) / 6
    assert cell(tolerance.model, 0, "alone may be off °") == pytest.approx(allowed)
    assert tolerance.facts.texts["Each may be off"].startswith(f"{allowed:.3g}°")
    type_into(tolerance.seam.entries["limit"].field, "")
    answered(tolerance.figures)
    assert "Each may be off" not in tolerance.facts.texts


@pytest.mark.parametrize(
    ("row", "key", "text"),
    [
        ("seam", "distance", "far"),
        ("seam", "limit", "0"),
        ("chance", "size", "20"),
        ("chance", "draws", "none"),
    ],
)
def test_what_cannot_be_read_is_told_below(tolerance, type_into, row, key, text):
    entries = getattr(tolerance, row)
    type_into(entries.entries[key].field, text)
    assert entries.entries[key].field.property("wrong")
    assert entries.error.isVisible()


@pytest.mark.parametrize("text", ["30", "x"])
def test_an_error_that_is_none(tolerance, answered, type_into, text):
    type_into(tolerance.edges.errors[0], text)
    answered(tolerance.figures)
    assert tolerance.edges.error.isVisible()
    assert tolerance.edges.errors[0].text() == text


def test_chance_is_seeded_and_the_same_as_without_a_window(window, tolerance, answered, type_into):
    type_into(tolerance.chance.entries["draws"].field, "3000")
    type_into(tolerance.chance.entries["draw_seed"].field, "7")
    found = answered(tolerance.drawn)
    intent, _ = intent_of(window.document.arrangement)
    other = seam_chances(intent, 0.02, "normal", 3000, 7, 200.0)
    assert np.array_equal(found.counts, other.counts)
    assert f"{100 * other.share_below(1.0):.1f} %" in tolerance.words.text()
    assert tolerance.histogram.chances is found
    QTest.mouseClick(tolerance.spread.button(1), Qt.MouseButton.LeftButton)
    assert answered(tolerance.drawn).spread == "uniform"


def test_the_histogram_is_painted(tolerance):
    image = tolerance.histogram.grab().toImage()
    tints = {image.pixelColor(x, image.height() - 22).name() for x in range(0, image.width(), 3)}
    assert len(tints) > 1


def test_a_corner_reflector_and_its_beam(put, tolerance, answered, type_into):
    put(["90", "90", "90"])
    type_into(tolerance.edges.errors[0], "0.1")
    answered(tolerance.figures)
    assert "off along the centre line" in tolerance.facts.texts["Beam returns"]
    assert "Whole corner" in tolerance.facts.texts
    assert window_rows(tolerance) == 3


def window_rows(tolerance):
    return tolerance.model.rowCount()


def test_angles_near_none_that_close(put, tolerance):
    put(["90", "60", "60", "60", "60", "90"])
    assert "make no assembly" in tolerance.error.text()
    assert tolerance.model.rowCount() == 0
