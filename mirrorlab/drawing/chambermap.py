"""A flat map of one chamber, in which the seed can be moved: walls are straight, and every place is seen at once."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.drawing.model import Drawing, Faces, Label, Line, Points, Role
from mirrorlab.mirrors import Arrangement, Finding, Orbit, ReflectionGroup

Array = NDArray[np.float64]

SIZE = 1.0
"""Half the map's larger side."""


class MapError(ValueError):
    """A chamber that cannot be drawn on paper."""


@dataclass(frozen=True, eq=False)
class ChamberMap:
    """The map of a group's true chamber.

    Rank 3: gnomonic projection about the chamber's middle, so that walls, which are great circles, are straight.
    Rank 1 and 2: the sector itself.

    Attributes
    ----------
    group : ReflectionGroup
    axes : ndarray, shape (r, d)
        Unit vectors to the map's right, upwards and (rank 3) towards the reader.
    scale : float
        Map units for one unit of the projection.
    shift : ndarray, shape (2,)
        Where the projection's origin lies on the map.
    """

    group: ReflectionGroup
    axes: Array
    scale: float
    shift: Array

    def to_map(self, seeds: ArrayLike) -> Array:
        """Places of directions on the map.

        Parameters
        ----------
        seeds : array_like, shape (..., d)
            Of any length; they should lie in the chamber.

        Returns
        -------
        ndarray, shape (..., 3)
            With z = 0.
        """
        local = np.asarray(seeds, dtype=float) @ self.axes.T
        if self.group.rank == 3:
            flat = local[..., :2] / np.maximum(local[..., 2:], 1e-9)
        else:
            flat = local / np.maximum(np.linalg.norm(local, axis=-1, keepdims=True), 1e-300)
            if self.group.rank == 1:
                flat = np.concatenate([np.zeros_like(flat), flat], axis=-1)
            flat = self._radius * flat
        place = self.scale * flat + self.shift
        return np.concatenate([place, np.zeros((*place.shape[:-1], 1))], axis=-1)

    def to_seed(self, place: ArrayLike) -> Array:
        """The unit vector that a place on the map stands for, shape (d,); outside the chamber the nearest wall's.

        Parameters
        ----------
        place : array_like, shape (2,) or (3,)
        """
        flat = (np.asarray(place, dtype=float)[:2] - self.shift) / self.scale
        if self.group.rank == 3:
            direction = flat @ self.axes[:2] + self.axes[2]
        elif self.group.rank == 2:
            direction = flat @ self.axes
        else:
            direction = self.axes[0].copy()
        if np.linalg.norm(direction) < 1e-12:
            direction = self.group.corners.sum(axis=0)
        return self._inside(direction / np.linalg.norm(direction))

    def _inside(self, direction: Array) -> Array:
        """Bring a direction to the nearest of the chamber: onto the walls it has crossed."""
        simple = self.group.simple
        crossed: list[int] = []
        for _ in range(len(simple) + 1):
            heights = simple @ direction
            worst = int(heights.argmin())
            if heights[worst] >= -1e-12 or worst in crossed or len(crossed) + 1 >= max(len(simple), 2):
                break
            crossed.append(worst)
            walls = simple[crossed]
            direction = direction - np.linalg.pinv(walls) @ (walls @ direction)
            direction = direction / max(float(np.linalg.norm(direction)), 1e-12)
        if (simple @ direction).min() < -1e-9:
            corners = self.group.corners
            direction = corners[int((corners @ direction).argmax())]
        return np.asarray(direction)

    @property
    def _radius(self) -> float:
        return 0.62

    @cached_property
    def outline(self) -> Array:
        """Corners of the chamber on the map, shape (k, 3), counter-clockwise."""
        if self.group.rank == 3:
            return self.to_map(self.group.corners)
        low, high = self._angles()
        t = np.linspace(low, high, 40)
        rim = self.scale * np.stack([np.cos(t), np.sin(t)], axis=1) + self.shift
        points = np.concatenate([self.shift[None], rim]) if self.group.rank == 2 else rim
        return np.column_stack([points, np.zeros(len(points))])

    def _angles(self) -> tuple[float, float]:
        if self.group.rank == 1:
            return 0.0, np.pi
        ends = self.group.corners @ self.axes.T
        angles = np.arctan2(ends[:, 1], ends[:, 0])
        return float(angles.min()), float(angles.max())


def chamber_map(group: ReflectionGroup) -> ChamberMap:
    """The map of a group's true chamber.

    Raises
    ------
    MapError
        When the group's rank is 0 or above 3.
    """
    if not 1 <= group.rank <= 3:
        msg = f"rank {group.rank}: a chamber map is drawn for rank 1, 2 and 3"
        raise MapError(msg)
    if group.rank == 1:
        return ChamberMap(group, group.simple.copy(), SIZE, np.array([0.0, -0.4]))
    corners = group.corners
    middle = corners.sum(axis=0)
    middle /= np.linalg.norm(middle)
    if group.rank == 2:
        across = corners[0] - (corners[0] @ middle) * middle
        right = across / np.linalg.norm(across)
        return ChamberMap(group, np.stack([right, middle]), SIZE, np.array([0.0, -0.5]))
    # The first wall lies along the bottom; the reader stands outside the sphere.
    up = group.simple[0] - (group.simple[0] @ middle) * middle
    up /= np.linalg.norm(up)
    axes = np.stack([np.cross(up, middle), up, middle])
    flat = (corners @ axes[:2].T) / (corners @ middle)[:, None]
    low, high = flat.min(axis=0), flat.max(axis=0)
    scale = 2 * SIZE / float((high - low).max())
    return ChamberMap(group, axes, scale, -0.5 * scale * (low + high))


def chamber_drawing(arrangement: Arrangement, finding: Finding, orbit: Orbit | None = None) -> Drawing:
    """The chamber with its walls, corners and the seed; `ChamberMap.to_seed` reads where the seed is dragged.

    Keys: ("mirror", i) for a wall that was typed, ("wall", k) for one that was not, ("chamber", 0), ("image", 0).
    """
    if finding.group is None or not 1 <= finding.group.rank <= 3:
        return Drawing(title="Chamber", notes=("There is no chamber to draw a map of",), flat=True)
    group = finding.group
    chart = chamber_map(group)
    outline = chart.outline
    fan = np.arange(1, len(outline) - 1)
    triangles = np.stack([np.zeros_like(fan), fan, fan + 1], axis=1)
    if np.cross(outline[1] - outline[0], outline[2] - outline[0])[2] < 0:
        triangles = triangles[:, ::-1]
    faces = (Faces(Role.REGION, outline, triangles, (("chamber", 0),)),)
    lines, labels = _walls(arrangement, group, chart)
    points: tuple[Points, ...] = ()
    if orbit is not None and len(orbit.points):
        seed = orbit.seed
        lines = (*_feet(group, chart, seed), *lines)
        points = (Points(Role.SEED, chart.to_map(seed)[None], (("image", 0),)),)
    return Drawing(
        title="Chamber map",
        faces=faces,
        lines=lines,
        points=points,
        labels=labels,
        flat=True,
        frame="gnomonic map about the chamber's middle" if group.rank == 3 else "the sector, true to angle",
        seed_on="plane",
    )


def _walls(
    arrangement: Arrangement, group: ReflectionGroup, chart: ChamberMap
) -> tuple[tuple[Line, ...], tuple[Label, ...]]:
    lines, labels = [], []
    for k, letter in enumerate(group.letters):
        ends = _wall_ends(group, chart, k)
        typed = letter in arrangement.letters
        index = arrangement.letters.index(letter) if typed else -1
        role = Role.TYPED_MIRROR if typed else Role.GENERATED_MIRROR
        key = ("mirror", index) if typed else ("wall", k)
        lines.append(Line(role, ends, key, index, weight=1.0 if typed else 1.6))
        inward = group.simple[k] @ chart.axes.T
        inward = np.array([0.0, 1.0]) if group.rank == 1 else inward[:2] / np.linalg.norm(inward[:2])
        if group.rank == 2:
            place = 1.14 * (ends[1] - ends[0]) + ends[0]
        else:
            place = 0.5 * (ends[0] + ends[1]) - 0.17 * np.array([*inward, 0.0])
        labels.append(Label(letter, place, Role.TYPED_MIRROR if typed else Role.GENERATED_MIRROR, key, index))
    if group.rank == 3:
        middle = chart.outline.mean(axis=0)
        for i in range(3):
            j, k = (j for j in range(3) if j != i)
            order = int(group.coxeter_matrix[j, k])
            corner = chart.outline[i]
            away = corner - middle
            place = corner + 0.13 * away / max(float(np.linalg.norm(away)), 1e-12)
            text = f"π/{order}"
            labels.append(Label(text, place, Role.GUIDE, None))
    return tuple(lines), tuple(labels)


def _wall_ends(group: ReflectionGroup, chart: ChamberMap, k: int) -> Array:
    if group.rank == 3:
        return np.asarray(chart.outline[[i for i in range(3) if i != k]])
    origin = np.array([*chart.shift, 0.0])
    if group.rank == 1:
        return origin + SIZE * np.array([[-1.0, 0, 0], [1, 0, 0]])
    low, high = chart._angles()
    corner = group.corners[1 - k] @ chart.axes.T
    angle = min((low, high), key=lambda a: abs(np.exp(1j * a) - complex(*corner)))
    return np.stack([origin, origin + 1.06 * SIZE * np.array([np.cos(angle), np.sin(angle), 0.0])])


def _feet(group: ReflectionGroup, chart: ChamberMap, seed: Array) -> tuple[Line, ...]:
    """Lines from the seed to the nearest place of each wall: its heights."""
    lines = []
    for k, normal in enumerate(group.simple):
        foot = seed - (seed @ normal) * normal
        if np.linalg.norm(foot) < 1e-9 or np.linalg.norm(foot - seed) < 1e-9 or group.rank != 3:
            continue
        if (group.simple @ foot).min() < -1e-9:
            continue
        t = np.linspace(0, 1, 12)[:, None]
        lines.append(Line(Role.GUIDE, chart.to_map((1 - t) * seed + t * foot), ("height", k)))
    return tuple(lines)
