"""The corner reflector's return error.

P. R. Yoder, J. Opt. Soc. Am. 48 (1958) 496: a hollow corner with all three dihedral angles off by ε sends a beam back
off by (4/3)√6 ε (from memory; confirmed here by the product of the three reflections, and by tracing beams).
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from mirrorlab import optics
from mirrorlab.optics.body import body_of, follow

YODER = 4 / 3 * math.sqrt(6)


@pytest.mark.parametrize("seconds", [1.0, 10.0, 60.0, -30.0])
def test_yoders_figure(seconds: float) -> None:
    error = math.radians(seconds / 3600)
    found = optics.return_error([math.pi / 2 + error] * 3)
    assert math.radians(found.centre_line) == pytest.approx(YODER * abs(error), rel=1e-3)
    assert len(found.beams) == 6
    assert all(degrees == pytest.approx(found.centre_line, rel=1e-6) for _, degrees in found.beams), (
        "six equal spots"
    )
    assert found.worst >= found.centre_line


def test_the_same_by_tracing_beams() -> None:
    error = math.radians(0.05)
    assembly = optics.corner([math.degrees(math.pi / 2 + error)] * 3, 100)
    rng = np.random.default_rng(3)
    starts = rng.dirichlet([1, 1, 1], 400) @ assembly.mouth - np.array([0, 0, 1e-6])
    down = np.tile([0.0, 0, -1], (400, 1))
    paths = follow(body_of(assembly), starts, down)
    thrice = paths.bounces == 3
    off = np.linalg.norm(paths.directions[thrice] - [0, 0, 1], axis=1)
    assert thrice.sum() > 100
    assert off == pytest.approx(YODER * error, rel=2e-3)
    words = {paths.word(int(k), "abc") for k in np.flatnonzero(thrice)}
    assert words == {"abc", "acb", "bac", "bca", "cab", "cba"}


def test_the_right_corner_returns_every_beam() -> None:
    """The product of three mutually perpendicular reflections is −1 (geometry)."""
    found = optics.return_error([math.pi / 2] * 3)
    assert found.worst < 1e-10
