"""Four or more mirrors in space that never meet in one point: the cell between them and its first images."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Faces, Label, Line, Role
from mirrorlab.drawing.ordering import cut_loop
from mirrorlab.drawing.prism import images_of
from mirrorlab.drawing.sphere import plane_axes
from mirrorlab.mirrors import Arrangement

Array = NDArray[np.float64]

HALF = 3.4
"""A cell without an end of its own is cut off at a cube of this half side; the mirrors stand at distance 1."""

INSET = 0.965
"""Each wall is drawn a little smaller, so that neighbours' outlines stand side by side."""

FIRST = 9
"""The cell and so many of its images are outlined: those one reflection away, and a few more."""


def cell_walls(normals: Array, half: float = HALF) -> list[Array]:
    """Outline of the wall in each mirror, shape (k, 3) each; k is 0 where a mirror bounds nothing.

    Parameters
    ----------
    normals : ndarray, shape (n, 3)
        Mirror i is where ``normals[i] @ x == -1``.
    """
    cube = np.concatenate([np.eye(3), -np.eye(3)])
    walls = []
    for i, normal in enumerate(normals):
        u, v = plane_axes(normal)
        far = 3 * half
        loop = -normal + far * np.array([u + v, v - u, -u - v, u - v])
        for j, other in enumerate(normals):
            if j != i:
                loop = cut_loop(loop, loop @ other + 1.0)
        for side in cube:
            loop = cut_loop(loop, half - loop @ side)
        keep = np.linalg.norm(loop - np.roll(loop, 1, axis=0), axis=1) > 1e-9
        walls.append(loop[keep])
    return walls


def cell_drawing(arrangement: Arrangement) -> Drawing:
    """The cell with its typed walls, and outlines of its first images."""
    normals = arrangement.normals
    assert normals is not None
    walls = cell_walls(normals)
    faces, lines, labels = [], [], []
    for i, loop in enumerate(walls):
        if len(loop) < 3:
            continue
        fan = np.arange(1, len(loop) - 1)
        triangles = np.stack([np.zeros_like(fan), fan, fan + 1], axis=1)
        loop = loop.mean(axis=0) + INSET * (loop - loop.mean(axis=0))
        faces.append(Faces(Role.TYPED_MIRROR, loop, triangles, (("mirror", i),), i))
        lines.append(Line(Role.TYPED_MIRROR, loop, ("mirror", i), i, closed=True))
        place = loop.mean(axis=0) - 0.25 * normals[i]
        labels.append(Label(arrangement.letters[i], place, Role.TYPED_MIRROR, ("mirror", i), i))
    moves = images_of(normals, 2 * HALF, FIRST)
    sides = [np.stack([loop, np.roll(loop, -1, axis=0)], axis=1) for loop in walls if len(loop) >= 3]
    if sides and len(moves.depth) > 1:
        ends = np.concatenate(sides).reshape(-1, 3)
        images = np.einsum("kij,vj->kvi", moves.turn[1:], ends) + moves.shift[1:, None]
        lines.append(
            Line(Role.GENERATED_MIRROR, images.reshape(-1, 3), ("generated", 0), apart=True, weight=0.6)
        )
    toward = np.array([0.78, -0.5, 0.42])
    return Drawing(
        title="Mirrors that never meet in a point",
        faces=tuple(faces),
        lines=tuple(lines),
        labels=tuple(labels),
        frame=arrangement.frame,
        notes=(
            f"The cell between the mirrors and {len(moves.depth) - 1} of endlessly many images",
            "angles do not say how far apart the mirrors stand; they are drawn at equal distances",
        ),
        toward=toward / np.linalg.norm(toward),
        unit="",
    )
