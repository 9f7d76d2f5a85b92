"""Where a picture is looked at from: one small value that every translator shares, so that pictures agree."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.drawing.model import Drawing

Array = NDArray[np.float64]

FIELD = 26.0
"""Angle of view in degrees: near enough to show depth, far enough that a ball stays round."""

MARGIN = 1.01
"""Room around the drawing, as a factor."""

ROOM = 15.0
"""Pixels left free at each edge: half of a letter's tag, whose middle may lie at the edge of the drawing."""

MOST_ROOM = 0.12
"""Most of a small picture's side that may be left free at each edge."""

OFF_CENTRE = 0.08
"""A drawing whose middle lies this near to the origin, as a part of its size, is turned about the origin."""

LEAST_ZOOM, MOST_ZOOM = 0.2, 40.0

STEEPEST = 89.999
"""Largest elevation in degrees; straight down still knows where its right hand is."""


@dataclass(frozen=True, slots=True)
class Camera:
    """A place to look from.

    Attributes
    ----------
    azimuth, elevation : float
        Degrees; the eye stands in that direction from the target, with the z axis upright.
    target : tuple of float
        What is in the middle.
    extent : tuple of float
        Half width and half height that just fit into the picture at zoom 1.
    zoom : float
    pan : tuple of float
        Shift of the target from the middle, in half short sides of the picture; x to the right, y upwards.
    field : float
        Angle of view in degrees; 0 for a parallel view.
    room : float
        Pixels left free at each edge at zoom 1.
    """

    azimuth: float = -60.0
    elevation: float = 25.0
    target: tuple[float, float, float] = (0.0, 0.0, 0.0)
    extent: tuple[float, float] = (1.0, 1.0)
    zoom: float = 1.0
    pan: tuple[float, float] = (0.0, 0.0)
    field: float = FIELD
    room: float = ROOM

    @property
    def radius(self) -> float:
        """Half of what fits, as one length."""
        return max(self.extent)

    @property
    def axes(self) -> Array:
        """Unit vectors to the right, upwards and towards the eye, as the rows of a (3, 3) matrix."""
        a, e = math.radians(self.azimuth), math.radians(self.elevation)
        ca, sa, ce, se = math.cos(a), math.sin(a), math.cos(e), math.sin(e)
        return np.array([[-sa, ca, 0.0], [-se * ca, -se * sa, ce], [ce * ca, ce * sa, se]])

    @property
    def distance(self) -> float:
        """Distance of the eye from the target; infinite for a parallel view."""
        return self.radius / math.sin(math.radians(self.field / 2)) if self.field > 0 else math.inf

    @property
    def eye(self) -> Array:
        """Where the eye is, shape (3,); for a parallel view a point far out."""
        away = self.distance if self.field > 0 else 1e6 * self.radius
        return np.array(self.target) + away * self.axes[2]

    def _scale(self, width: float, height: float) -> float:
        """Pixels a length at the target's distance takes (perspective: at distance 1 from the eye)."""
        room = min(self.room, MOST_ROOM * width, MOST_ROOM * height)
        fit = min((0.5 * width - room) / self.extent[0], (0.5 * height - room) / self.extent[1]) * self.zoom
        if self.field <= 0:
            return fit
        # A sphere is seen a little larger than its equator: fit its outline, not its equator.
        return fit * math.sqrt(self.distance**2 - self.radius**2)

    def _middle(self, width: float, height: float) -> tuple[float, float]:
        half = 0.5 * min(width, height)
        return 0.5 * width + self.pan[0] * half, 0.5 * height - self.pan[1] * half

    def view(self, points: ArrayLike) -> Array:
        """Coordinates to the right, upwards and towards the eye, from the target, shape (..., 3)."""
        return np.asarray((np.asarray(points, dtype=float) - self.target) @ self.axes.T)

    def project(self, points: ArrayLike, width: float, height: float) -> Array:
        """Pixels of points.

        Parameters
        ----------
        points : array_like, shape (..., 3)
        width, height : float
            Size of the picture in pixels.

        Returns
        -------
        ndarray, shape (..., 3)
            x to the right and y downwards in pixels from the upper left, and the length towards the eye from
            the target, in the drawing's unit.
        """
        seen = self.view(points)
        scale = self._scale(width, height)
        if self.field > 0:
            scale = scale / np.maximum(self.distance - seen[..., 2], 1e-6 * self.radius)
        x0, y0 = self._middle(width, height)
        return np.stack([x0 + scale * seen[..., 0], y0 - scale * seen[..., 1], seen[..., 2]], axis=-1)

    def pixels_per_unit(self, width: float, height: float) -> float:
        """Pixels that a unit of length at the target takes."""
        scale = self._scale(width, height)
        return scale / self.distance if self.field > 0 else scale

    def ray(self, x: float, y: float, width: float, height: float) -> tuple[Array, Array]:
        """Start and unit direction of what the eye sees at a pixel, each of shape (3,)."""
        x0, y0 = self._middle(width, height)
        scale = self._scale(width, height)
        right, up, towards = self.axes
        across = (x - x0) / scale * right - (y - y0) / scale * up
        if self.field > 0:
            start, direction = self.eye, across - towards
        else:
            start, direction = np.array(self.target) + across + 4 * self.radius * towards, -towards
        return start, direction / np.linalg.norm(direction)

    def matrices(self, width: float, height: float) -> tuple[Array, Array]:
        """View and projection matrices, shape (4, 4) each, for column vectors in OpenGL's clip space."""
        view = np.eye(4)
        view[:3, :3] = self.axes
        view[:3, 3] = -self.axes @ np.array(self.target)
        sx, sy = 2 * self._scale(width, height) / width, 2 * self._scale(width, height) / height
        x0, y0 = self._middle(width, height)
        shift_x, shift_y = 2 * x0 / width - 1, 1 - 2 * y0 / height
        reach = 2.5 * self.radius
        projection = np.zeros((4, 4))
        if self.field > 0:
            near, far = max(self.distance - reach, 0.05 * self.distance), self.distance + reach
            view[2, 3] -= self.distance
            projection[0] = [sx, 0, -shift_x, 0]
            projection[1] = [0, sy, -shift_y, 0]
            projection[2] = [0, 0, -(far + near) / (far - near), -2 * far * near / (far - near)]
            projection[3] = [0, 0, -1, 0]
        else:
            projection[0] = [sx, 0, 0, shift_x]
            projection[1] = [0, sy, 0, shift_y]
            projection[2] = [0, 0, -1 / reach, 0]
            projection[3] = [0, 0, 0, 1]
        return view, projection

    def turned(self, right: float, up: float) -> Camera:
        """Turn the drawing by degrees to the right and upwards, as if its near side were pushed."""
        azimuth = (self.azimuth - right + 180.0) % 360.0 - 180.0
        elevation = min(STEEPEST, max(-STEEPEST, self.elevation - up))
        return replace(self, azimuth=azimuth, elevation=elevation)

    def zoomed(
        self, factor: float, at: tuple[float, float] | None = None, size: tuple[float, float] = (1.0, 1.0)
    ) -> Camera:
        """Zoom in by a factor, keeping what is at pixel `at` of a picture of that size where it is."""
        zoom = min(MOST_ZOOM, max(LEAST_ZOOM, self.zoom * factor))
        if at is None:
            return replace(self, zoom=zoom)
        half = 0.5 * min(size)
        px, py = (at[0] - 0.5 * size[0]) / half, (0.5 * size[1] - at[1]) / half
        grown = zoom / self.zoom
        pan = (px - (px - self.pan[0]) * grown, py - (py - self.pan[1]) * grown)
        return replace(self, zoom=zoom, pan=pan)

    def panned(self, dx: float, dy: float, size: tuple[float, float]) -> Camera:
        """Shift the picture by pixels to the right and downwards."""
        half = 0.5 * min(size)
        return replace(self, pan=(self.pan[0] + dx / half, self.pan[1] - dy / half))


def home_camera(drawing: Drawing) -> Camera:
    """Return the place from which a drawing is first looked at: all fits, its best side in front."""
    parts = [f.vertices for f in drawing.faces] + [line.points for line in drawing.lines]
    parts += [p.positions for p in drawing.points] + [np.atleast_2d(t.position) for t in drawing.labels]
    parts = [p for p in parts if len(p)]
    if not parts:
        return Camera(azimuth=-90.0, elevation=STEEPEST, field=0.0) if drawing.flat else Camera()
    places = np.concatenate(parts)
    low, high = places.min(axis=0), places.max(axis=0)
    if drawing.flat:
        half = np.maximum(0.5 * (high - low), 1e-9 + 0.02 * float((high - low).max()))[:2] * MARGIN
        middle = 0.5 * (low + high)
        return Camera(
            -90.0,
            90.0,
            (float(middle[0]), float(middle[1]), 0.0),
            (float(half[0]), float(half[1])),
            field=0.0,
        )
    target = 0.5 * (low + high)
    if np.linalg.norm(target) < OFF_CENTRE * np.linalg.norm(high - low):
        target = np.zeros(3)  # what stands about the origin turns about it
    places = places - target
    radius = math.sqrt(float(np.einsum("ij,ij->i", places, places).max())) or 1.0
    azimuth, elevation = Camera().azimuth, Camera().elevation
    if drawing.toward is not None:
        x, y, z = (float(c) for c in drawing.toward)
        azimuth = math.degrees(math.atan2(y, x)) if math.hypot(x, y) > 1e-9 else azimuth
        elevation = math.degrees(math.atan2(z, math.hypot(x, y)))
        elevation = min(STEEPEST, max(-STEEPEST, elevation))
    side = radius * MARGIN
    return Camera(azimuth, elevation, (float(target[0]), float(target[1]), float(target[2])), (side, side))
