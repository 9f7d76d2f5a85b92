"""Dashes lie on their line and add up."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.drawing.look import LIGHT_LOOK, PATTERNS
from mirrorlab.drawing.model import Drawing, Line, Role
from mirrorlab.drawing.sphere import circles
from mirrorlab.drawing.strokes import NOMINAL_RADIUS, dashes, strokes


def total(pieces: np.ndarray) -> float:
    return float(np.linalg.norm(np.diff(pieces, axis=1), axis=2).sum())


@pytest.mark.parametrize("pattern", PATTERNS[1:])
def test_a_closed_pattern_closes(pattern: tuple[float, ...]):
    ring = circles(np.array([[0.0, 0, 1]]), 1.0, 360)[0]
    ring = np.concatenate([ring, ring[:1]])
    lengths = 0.02 * np.array(pattern)
    pieces = dashes(ring, lengths, closed=True)
    drawn = sum(pattern[::2]) / sum(pattern)
    assert total(pieces) == pytest.approx(2 * np.pi * drawn, rel=5e-3)
    assert len(pieces) % (len(pattern) // 2) == 0, "whole periods"
    assert np.abs(np.linalg.norm(pieces, axis=2) - 1).max() < 1e-3


def test_an_open_pattern_ends_with_the_line():
    line = np.array([[0.0, 0, 0], [1, 0, 0]])
    pieces = dashes(line, np.array([0.3, 0.2]))
    assert pieces[:, 0, 0].tolist() == pytest.approx([0, 0.5])
    assert pieces[:, -1, 0].tolist() == pytest.approx([0.3, 0.8])
    assert len(dashes(np.zeros((2, 3)), np.array([0.3, 0.2]))) == 0, "a line without length has no dash"


def test_strokes_of_all_kinds():
    points = np.array([[0.0, 0, 0], [1, 0, 0], [1, 1, 0], [0, 1, 0]])
    drawing = Drawing(
        "lines",
        lines=(
            Line(Role.GENERATED_MIRROR, points, ("generated", 0)),
            Line(Role.GENERATED_MIRROR, points, ("generated", 1), closed=True),
            Line(Role.GENERATED_MIRROR, points, ("generated", 2), apart=True),
            Line(Role.TYPED_MIRROR, points, ("mirror", 1), 1),
            Line(Role.TYPED_MIRROR, points, ("mirror", 1), 1, plain=True),
            Line(Role.GUIDE, points[:1], ("guide", 0)),
        ),
    )
    cut = strokes(drawing, LIGHT_LOOK, 1.0)
    counts = np.bincount(cut.line, minlength=6)
    assert counts[[0, 1, 2, 4, 5]].tolist() == [3, 4, 2, 3, 0]
    period = sum(PATTERNS[1]) * LIGHT_LOOK.typed_width / NOMINAL_RADIUS
    assert counts[3] / 2 == pytest.approx(3 / period, abs=1)
    assert not cut.joined[cut.line == 2].any()
    np.testing.assert_array_equal(cut.joined[cut.line == 0], [False, True, True])
    follow = np.flatnonzero(cut.joined)
    np.testing.assert_allclose(cut.start[follow], cut.end[follow - 1], atol=1e-12)
    assert len(strokes(Drawing("none"), LIGHT_LOOK, 1.0).start) == 0
