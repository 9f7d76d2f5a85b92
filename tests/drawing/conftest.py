"""A drawing made by hand, and arrangements with what follows from them."""

from __future__ import annotations

import itertools
from collections.abc import Callable

import numpy as np
import pytest

import mirrorlab as ml
from mirrorlab.drawing.model import Drawing, Faces, Line, Points, Role
from mirrorlab.drawing.space import SpaceOptions, space_drawing


def signed_permutations() -> list[np.ndarray]:
    """The 48 matrices that carry the coordinate axes to one another, by definition."""
    return [
        np.diag(signs) @ np.eye(3)[list(order)]
        for order in itertools.permutations(range(3))
        for signs in itertools.product((1.0, -1.0), repeat=3)
    ]


@pytest.fixture
def hand() -> Drawing:
    """The sphere cut by the nine mirrors of a cube, one plain triangle a chamber, with a seed and its images."""
    corners = np.array([[1.0, 0, 0], [1, 1, 0], [1, 1, 1]])
    corners /= np.linalg.norm(corners, axis=1, keepdims=True)
    seed = np.array([0.86, 0.42, 0.18])
    seed /= np.linalg.norm(seed)
    faces, images = {0: [], 1: []}, {0: [], 1: []}
    for k, matrix in enumerate(signed_permutations()):
        turned = int(np.linalg.det(matrix) < 0)
        triangle = corners @ matrix.T
        faces[turned].append((k, triangle[::-1] if turned else triangle))
        images[turned].append((k, matrix @ seed))
    blocks, points = [], []
    for parity, face_role, image_role in (
        (0, Role.CHAMBER_EVEN, Role.IMAGE_EVEN),
        (1, Role.CHAMBER_ODD, Role.IMAGE_ODD),
    ):
        vertices = np.concatenate([t for _, t in faces[parity]])
        triangles = np.arange(len(vertices)).reshape(-1, 3)
        blocks.append(Faces(face_role, vertices, triangles, tuple(("chamber", k) for k, _ in faces[parity])))
        points.append(
            Points(
                image_role,
                np.array([p for _, p in images[parity]]),
                tuple(("image", k) for k, _ in images[parity]),
            )
        )
    t = np.linspace(0, 2 * np.pi, 100)[:-1]
    ring = np.stack([np.cos(t), np.sin(t), 0 * t], axis=1)
    line = Line(Role.TYPED_MIRROR, 1.002 * ring, ("mirror", 1), 1, closed=True)
    return Drawing(
        "by hand",
        tuple(blocks),
        (line,),
        (Points(Role.SEED, seed[None], (("image", 0),)), *points),
        toward=np.array([0.7, 0.5, 0.4]),
        seed_on="sphere",
        frame="x y z",
    )


@pytest.fixture
def drawn() -> Callable[..., Drawing]:
    """Angles, a family or an arrangement to its drawing in space."""

    def make(
        what: list[str] | str | ml.Arrangement,
        heights: list[float] | None = None,
        weights: list[float] | None = None,
        **options: object,
    ) -> Drawing:
        if isinstance(what, str):
            arrangement = ml.Arrangement.from_family(what)
        elif isinstance(what, ml.Arrangement):
            arrangement = what
        else:
            arrangement = ml.Arrangement.from_angles(what)
        finding = arrangement.finding()
        orbit = None
        if finding.group is not None:
            orbit = arrangement.orbit(heights=heights) if heights else arrangement.orbit(place="centre")
            if weights:
                orbit = arrangement.orbit(point=np.array(weights) @ finding.group.corners)
        return space_drawing(arrangement, finding, orbit, SpaceOptions(**options))  # type: ignore[arg-type]

    return make
