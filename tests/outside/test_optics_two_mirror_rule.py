"""The images of two mirrors at every whole number of degrees, against the rule of two mirrors.

The rule is common practice, no source: 360/θ − 1 images where 360/θ is even; where it is odd, 360/θ − 1 with the
object on the bisector and 360/θ off it; where it is no whole number, its integer part.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from mirrorlab import optics


def counted(degrees: int, share: float) -> int:
    """Images that light finds, the object at `share` of the angle from one mirror to the other."""
    turn = math.pi / 2 + math.radians(degrees) * (0.5 - share)
    radius = min(
        30.0, 40 * math.cos(math.radians(degrees) / 2)
    )  # between the mirrors, however wide they stand
    point = np.array([radius * math.cos(turn), radius * math.sin(turn), 50])
    assembly = optics.wedge(float(degrees), 100, 100, mirrors="perfect")
    return optics.count_images(assembly, point, faintest=1e-9).count


@pytest.mark.parametrize("degrees", range(1, 180))
def test_the_two_mirror_rule(degrees: int) -> None:
    off, on = counted(degrees, 0.37), counted(degrees, 0.5)
    if 360 % degrees == 0:
        parts = 360 // degrees
        assert on == parts - 1
        assert off == (parts - 1 if parts % 2 == 0 else parts)
    else:
        # The rule's integer part leaves out that a last image comes or goes with the object's place. Exactly,
        # the mirror at angle α from the object shows every image until one stands behind both mirrors
        # (plane geometry): the whole number that is not below (180° − α)/θ.
        whole = 360 // degrees
        for found, share in ((off, 0.37), (on, 0.5)):
            exact = sum(math.ceil((180 - part * degrees) / degrees - 1e-9) for part in (share, 1 - share))
            assert found == exact
            assert found in (whole, whole + 1)
        others = (counted(degrees, share) for share in (0.02, 0.2))
        assert whole in (off, on) or whole in others, "the rule's number is one of those that there are"
