"""How long a new picture of 120 chambers takes: made, taken by a view, painted. Printed, not asserted.

Times are of the processor, so that a busy machine counts less. Run with ``pytest -s tests/bench/bench_pictures.py``.
"""

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

    print(f"\nmaking the drawing {middle(make):.1f} ms")


@pytest.mark.gl
def test_showing_a_drawing_of_120_chambers(qtbot: QtBot):
    from mirrorlab.desktop.stage.space_view import SpaceView

    drawings = [fresh() for _ in range(ROUNDS)]
    view = SpaceView()
    qtbot.addWidget(view)
    view.resize(700, 600)
    print(f"\ntaking another drawing {middle(lambda k: view.set_drawing(drawings[k])):.1f} ms")


def test_painting_a_drawing_of_120_chambers(qtbot: QtBot):
    view = PainterView()
    qtbot.addWidget(view)
    view.resize(700, 600)
    view.set_drawing(fresh())

    def turn(_: int) -> None:
        view.set_camera(view.camera.turned(3, 1))
        view.grab()

    print(f"\npainting without OpenGL {middle(turn):.1f} ms")
