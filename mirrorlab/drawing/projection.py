"""Directions of space on a flat disc: the equal-angle (Wulff) and the equal-area (Schmidt) projection.

Upper directions fall where they are; lower ones where their mirror image in the plane of the picture would, as in
International Tables for Crystallography, volume A, so that both halves share one disc of radius 1.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

NETS = ("wulff", "schmidt")

LEVEL = 1e-9
"""Directions less than this above or below the plane of the picture lie in it."""

_STEPS = 60

Array = NDArray[np.float64]


class ProjectionError(ValueError):
    """A net or a view that does not exist."""


@dataclass(frozen=True)
class Projection:
    """How the sphere is laid flat.

    Attributes
    ----------
    net : str
        "wulff" keeps angles, "schmidt" keeps areas.
    up : tuple of float
        Direction in the middle of the disc, towards the eye.
    bottom : tuple of float
        Direction at the lower rim (only its part across `up` counts). Crystals are drawn with a towards the
        reader, so x is the standard.
    """

    net: str = "wulff"
    up: tuple[float, float, float] = (0.0, 0.0, 1.0)
    bottom: tuple[float, float, float] = (1.0, 0.0, 0.0)

    def __post_init__(self) -> None:
        if self.net not in NETS:
            msg = f'net "{self.net}": there are {" and ".join(NETS)}'
            raise ProjectionError(msg)
        if not np.linalg.norm(np.cross(self.up, self.bottom)) > LEVEL:
            msg = f"a view along {self.up} with {self.bottom} at the bottom: the two directions must differ"
            raise ProjectionError(msg)

    @cached_property
    def frame(self) -> Array:
        """Rows: right, top and up as unit vectors."""
        up = np.asarray(self.up, float) / np.linalg.norm(self.up)
        bottom = np.asarray(self.bottom, float)
        bottom = bottom - (bottom @ up) * up
        top = -bottom / np.linalg.norm(bottom)
        return np.stack([np.cross(top, up), top, up])

    def project(self, directions: ArrayLike) -> tuple[Array, NDArray[np.bool_]]:
        """Lay directions flat.

        Parameters
        ----------
        directions : array_like, shape (N, 3)
            Any length but 0.

        Returns
        -------
        places : ndarray, shape (N, 3)
            In the plane z = 0, within the unit disc.
        upper : ndarray of bool, shape (N,)
            False for directions below the plane of the picture.
        """
        rows = np.asarray(directions, float).reshape(-1, 3)
        local = rows / np.linalg.norm(rows, axis=1)[:, None] @ self.frame.T
        height = np.abs(local[:, 2])
        flat = np.hypot(local[:, 0], local[:, 1])
        radius = flat / (1 + height if self.net == "wulff" else np.sqrt(1 + height))
        scale = np.divide(radius, flat, out=np.zeros_like(flat), where=flat > 0)
        places = np.column_stack([local[:, 0] * scale, local[:, 1] * scale, np.zeros(len(rows))])
        return places, local[:, 2] >= -LEVEL

    def rim(self) -> Array:
        """The circle around the disc, not closed, shape (4·60, 3)."""
        angles = 2 * np.pi * np.arange(4 * _STEPS) / (4 * _STEPS)
        return np.column_stack([np.cos(angles), np.sin(angles), np.zeros(len(angles))])

    def trace(self, normal: ArrayLike) -> tuple[Array, bool]:
        """The upper half of the great circle across a normal, and whether it is the rim itself."""
        row = np.asarray(normal, float) / np.linalg.norm(normal)
        local = self.frame @ row
        if np.hypot(local[0], local[1]) < LEVEL:
            return self.rim(), True
        level = np.array([-local[1], local[0], 0.0]) / np.hypot(local[0], local[1])
        rising = np.cross(local, level)
        rising = rising if rising[2] >= 0 else -rising
        angles = np.linspace(0, np.pi, 2 * _STEPS + 1)[:, None]
        arc = np.cos(angles) * level + np.sin(angles) * rising
        arc[:, 2] = np.maximum(arc[:, 2], 0.0)
        places, _ = self.project(arc @ self.frame)
        return places, False

    def meridians(self, step: float = 10.0) -> list[tuple[Array, bool]]:
        """Great circles through the top of the disc, `step` degrees apart; the flag marks every thirtieth degree."""
        right, _, up = self.frame
        lines = []
        for degrees in np.arange(step, 180, step):
            angle = np.radians(degrees)
            places, _ = self.trace(np.cos(angle) * up - np.sin(angle) * right)
            lines.append((places, bool(degrees % 30 == 0)))
        return lines

    def parallels(self, step: float = 10.0) -> list[tuple[Array, bool]]:
        """Small circles about the top of the disc, `step` degrees apart."""
        right, top, up = self.frame
        angles = np.linspace(0, np.pi, 2 * _STEPS + 1)[:, None]
        lines = []
        for degrees in np.arange(step, 180, step):
            tilt = np.radians(degrees)
            circle = np.cos(tilt) * top + np.sin(tilt) * (np.cos(angles) * right + np.sin(angles) * up)
            places, _ = self.project(circle)
            lines.append((places, bool(degrees % 30 == 0)))
        return lines
