"""How long a new picture takes. Times are of the processor, so that a busy machine does not count."""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable

import pytest
from pytestqt.qtbot import QtBot

import mirrorlab as ml
from mirrorlab.desktop.stage.painter_view import PainterView
from mirrorlab.drawing.model import Drawing
from mirrorlab.drawing.space import chamber_faces, mirror_lines, space_drawing

ROUNDS = 15

NEW_DRAWING = 10.0
"""Milliseconds for a view to take another drawing of 120 chambers; about 4 were measured on two shared cores."""

MAKE_DRAWING = 15.0
"""Milliseconds to make that drawing anew; about 5 were measured, half of them for the group's elements."""

PAINT = 80.0
"""Milliseconds to paint it without OpenGL; about 30 were measured."""


def fresh() -> Drawing:
    chamber_faces.cache_clear()
    mirror_lines.cache_clear()
    arrangement = ml.Arrangement.from_angles(["90", "60", "36"])
    return space_drawing(arrangement, arrangement.finding(), arrangement.orbit(heights=[1, 0.6, 0.4]))


def middle(act: Callable[[int], object]) -> float:
    act(0)
    times = []
    for k in range(1, ROUNDS):
        start = time.process_time()
        act(k)
        times.append(1000 * (time.process_time() - start))
    return statistics.median(times)


def test_making_a_drawing_of_120_chambers():
    arrangement = ml.Arrangement.from_angles(["90", "60", "36"])
    finding, orbit = arrangement.finding(), arrangement.orbit(heights=[1, 0.6, 0.4])

    def make(_: int) -> None:
        chamber_faces.cache_clear()
        mirror_lines.cache_clear()
        space_drawing(arrangement, finding, orbit)

    assert middle(make) < MAKE_DRAWING


@pytest.mark.gl
def test_showing_a_drawing_of_120_chambers(qtbot: QtBot):
    from mirrorlab.desktop.stage.space_view import SpaceView

    drawings = [fresh() for _ in range(ROUNDS)]
    view = SpaceView()
    qtbot.addWidget(view)
    view.resize(700, 600)
    assert middle(lambda k: view.set_drawing(drawings[k])) < NEW_DRAWING


def test_painting_a_drawing_of_120_chambers(qtbot: QtBot):
    view = PainterView()
    qtbot.addWidget(view)
    view.resize(700, 600)
    view.set_drawing(fresh())

    def turn(_: int) -> None:
        view.set_camera(view.camera.turned(3, 1))
        view.grab()

    assert middle(turn) < PAINT
