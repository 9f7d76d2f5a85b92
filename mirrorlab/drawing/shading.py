"""Light on faces: a soft window light from the upper left, the same in every translator.

A ball darkens towards its outline and has a sheen; a plane face darkens as it turns from the light. The OpenGL
view computes the same in its shader, see `mirrorlab.desktop.stage.shaders`.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.look import Look

Array = NDArray[np.float64]

LIGHT = np.array([-0.42, 0.58, 0.70])
LIGHT /= np.linalg.norm(LIGHT)
"""Unit vector towards the light: right, up, towards the eye."""

HALFWAY = LIGHT + np.array([0.0, 0.0, 1.0])
HALFWAY /= np.linalg.norm(HALFWAY)
"""Half way between light and eye: where the sheen is brightest."""

SHEEN_POWER = 22.0
"""How tight the sheen is."""

RIM_POWER = 2.2
"""How near to the outline the ball begins to darken."""

TURN_SHADE = 0.9
"""How much of the look's shade a plane face gets that has turned square from the light."""


def ball_shade(look: Look, facing: Array) -> Array:
    """How much of the shade tint lies over the ball, 0 to 1, where its normal has this part towards the eye."""
    return look.shade_alpha * (1 - np.clip(facing, 0, 1)) ** RIM_POWER


def ball_sheen(look: Look, angle: Array) -> Array:
    """How much of the sheen tint lies over the ball at an angle in radians from where it is brightest."""
    return look.sheen_alpha * np.maximum(np.cos(angle), 0) ** SHEEN_POWER


def plane_shade(look: Look, normal: Array) -> Array:
    """How much of the shade tint lies over a plane face.

    Parameters
    ----------
    normal : ndarray, shape (..., 3)
        Unit normal in the view's axes (right, up, towards the eye), on the side that is seen.
    """
    lit = 0.5 + 0.5 * (normal @ LIGHT)
    return TURN_SHADE * look.shade_alpha * (1 - lit)


def mixed(tint: Array, over: Array, amount: Array) -> Array:
    """A tint with some of another laid over it; shapes broadcast."""
    return tint + (over - tint) * np.asarray(amount)[..., None]
