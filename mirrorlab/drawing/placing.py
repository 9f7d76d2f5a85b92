"""Arrangements of any dimension put into the three axes of a picture."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors import Arrangement, Orbit, ReflectionGroup

Array = NDArray[np.float64]

SAME_PLANE = 1e-9
"""A normal this near to the span of those before it adds no direction; rounding is about 1e-15."""


def picture_axes(normals: Array, rank: int) -> Array:
    """Rows that take coordinates of an arrangement to those of its picture, shape (3, d).

    Up to three dimensions the picture has the arrangement's own axes. Mirrors of rank 3 or less in more dimensions
    are shown in the space that their normals span, a's along x.
    """
    d = normals.shape[1]
    if d <= 3:
        return np.eye(3)[:, :d]
    rows: list[Array] = []
    for normal in normals:
        rest = normal - sum((row @ normal) * row for row in rows)
        length = float(np.linalg.norm(rest))
        if length > SAME_PLANE and len(rows) < min(rank, 3):
            rows.append(rest / length)
    axes = np.zeros((3, d))
    axes[: len(rows)] = rows
    return axes


def placed(
    arrangement: Arrangement, group: ReflectionGroup | None, orbit: Orbit | None, rank: int
) -> tuple[Arrangement, ReflectionGroup | None, Orbit | None]:
    """The same in three coordinates; what has three already comes back as it is."""
    normals = arrangement.normals
    if normals is None or normals.shape[1] == 3:
        return arrangement, group, orbit
    axes = picture_axes(normals, rank)
    arrangement = replace(arrangement, normals=normals @ axes.T)
    if group is not None:
        group = replace(group, simple=group.simple @ axes.T, mirrors=group.mirrors @ axes.T)
    if orbit is not None:
        orbit = replace(orbit, points=orbit.points @ axes.T, seed=orbit.seed @ axes.T)
    return arrangement, group, orbit


def common_axes(normals: Array) -> Array:
    """Axes for mirrors of rank 1 or 2: two in the plane across their common edge, the third along it, as rows.

    Parameters
    ----------
    normals : ndarray, shape (n, 3)
    """
    x = normals[0] / np.linalg.norm(normals[0])
    rest = normals - np.outer(normals @ x, x)
    lengths = np.linalg.norm(rest, axis=1)
    if lengths.max() > SAME_PLANE:
        y = rest[int(lengths.argmax())] / lengths.max()
    else:
        y = np.eye(3)[int(np.abs(x).argmin())]
        y = y - (y @ x) * x
        y /= np.linalg.norm(y)
    z = np.cross(x, y)
    # The edge points upwards, so that the picture stands and is not seen in a mirror.
    if z[int(np.abs(z).argmax())] < 0:
        y, z = -y, -z
    return np.stack([x, y, z])
