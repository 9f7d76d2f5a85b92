"""An assembly in space: its panels with their letters, the opening, the object and the eye."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Faces, Key, Label, Line, Points, Role
from mirrorlab.optics.assembly import FRAME, Assembly, outside_mouth

Array = NDArray[np.float64]

BALL_RINGS, BALL_SIDES = 8, 16
"""Facets of a ball: round enough beside panels."""

STAGGER = 0.08
"""Of a panel's height, between the letters of neighbouring panels."""

LENS = 20
"""Sides of the ring that stands for the eye."""

EYE_KEY: Key = ("eye", 0)
OBJECT_KEY: Key = ("object", 0)
OPENING_KEY: Key = ("opening", 0)


def assembly_drawing(assembly: Assembly, glass: bool = True) -> Drawing:
    """Return the drawing of an assembly, in millimetres.

    Parameters
    ----------
    glass : bool
        Whether the back of the glass is drawn too.

    Notes
    -----
    Panels have the keys ``("mirror", index)``; the eye, the object and the opening theirs.
    """
    faces, lines, labels = [], [], []
    breadth = float(np.ptp(assembly.mouth, axis=0).max())
    for index, panel in enumerate(assembly.panels):
        key = ("mirror", index)
        corners = panel.outline
        fan = np.array([[0, k, k + 1] for k in range(1, len(corners) - 1)], dtype=np.int64)
        faces.append(Faces(Role.PANEL, corners, fan, (key,), index))
        lines.append(Line(Role.PANEL, corners, key, index, closed=True))
        if glass and assembly.thickness > 0:
            lines += _glass(assembly, index)
        # One above the other, so that letters of panels behind each other can be told apart.
        middle = corners.mean(axis=0)
        step = STAGGER * (index - (len(assembly.panels) - 1) / 2) * np.ptp(corners[:, 2])
        away = np.array([0.0, 0.0, step])
        labels.append(
            Label(panel.letter, middle + on_plane(away, panel.normal), Role.TYPED_MIRROR, key, index)
        )
    lines.append(Line(Role.GUIDE, assembly.opening, OPENING_KEY, closed=True))
    more_faces, more_lines = _object(assembly)
    eye_lines, eye_points, eye_labels = _eye(assembly, breadth)
    return Drawing(
        title=_title(assembly),
        faces=(*faces, *more_faces),
        lines=(*lines, *more_lines, *eye_lines),
        points=tuple(eye_points),
        labels=(*labels, *eye_labels),
        frame=FRAME,
        unit="mm",
    )


def _title(assembly: Assembly) -> str:
    pairs = ", ".join(
        f"{assembly.panels[i].letter}{assembly.panels[j].letter} {math.degrees(angle):.5g}°"
        for (i, j), angle in assembly.dihedrals.items()
    )
    return f"{assembly.kind.capitalize()}: {pairs}"


def _glass(assembly: Assembly, index: int) -> list[Line]:
    # The back of a pane, cut off where the planes of its neighbours' backs would be met: only a sketch of it.
    panel = assembly.panels[index]
    back = panel.outline - assembly.thickness * panel.normal
    key = ("mirror", index)
    ends = [
        Line(Role.GUIDE, np.array([front, behind]), key)
        for front, behind in zip(panel.outline, back, strict=True)
    ]
    return [Line(Role.GUIDE, back, key, closed=True), *ends]


def on_plane(step: Array, normal: Array) -> Array:
    """Return the part of a step that stays on a plane."""
    result: Array = step - (step @ normal) * normal
    return result


def _object(assembly: Assembly) -> tuple[list[Faces], list[Line]]:
    place = assembly.place
    if place.shape == "ball":
        vertices, triangles = _ball(place.centre, place.width / 2)
        return [Faces(Role.REGION, vertices, triangles, (OBJECT_KEY,))], []
    if place.inside:
        across, along = place.right * place.width / 2, place.up * place.height / 2
        corners = place.centre + np.array([-across - along, across - along, across + along, along - across])
    else:
        corners = far_end(assembly)
    fan = np.array([[0, k, k + 1] for k in range(1, len(corners) - 1)], dtype=np.int64)
    return [Faces(Role.REGION, corners, fan, (OBJECT_KEY,))], [
        Line(Role.REGION, corners, OBJECT_KEY, closed=True)
    ]


def far_end(assembly: Assembly) -> Array:
    """Return the outline of the far end, counter-clockwise seen from the eye, shape (k, 3)."""
    corners = np.vstack([panel.outline for panel in assembly.panels])
    low = corners[:, 2].min()
    found = np.unique(np.round(corners[corners[:, 2] < low + 1e-9 * (1 + abs(low))], 9), axis=0)
    away = found[:, :2] - found[:, :2].mean(axis=0)
    result: Array = found[np.argsort(np.arctan2(away[:, 1], away[:, 0]))]
    return result


def _ball(centre: Array, radius: float) -> tuple[Array, NDArray[np.int64]]:
    rise = np.linspace(-math.pi / 2, math.pi / 2, BALL_RINGS + 1)
    turn = np.linspace(0, 2 * math.pi, BALL_SIDES, endpoint=False)
    up, around = np.meshgrid(rise, turn, indexing="ij")
    vertices = np.stack([np.cos(up) * np.cos(around), np.cos(up) * np.sin(around), np.sin(up)], axis=-1)
    triangles = []
    for i in range(BALL_RINGS):
        for j in range(BALL_SIDES):
            a, b = i * BALL_SIDES + j, i * BALL_SIDES + (j + 1) % BALL_SIDES
            if i > 0:
                triangles.append((a, b, b + BALL_SIDES))
            if i < BALL_RINGS - 1:
                triangles.append((a, b + BALL_SIDES, a + BALL_SIDES))
    return centre + radius * vertices.reshape(-1, 3), np.array(triangles, dtype=np.int64)


def _eye(assembly: Assembly, breadth: float) -> tuple[list[Line], list[Points], list[Label]]:
    eye, target = assembly.eye, assembly.target
    forward = (target - eye) / np.linalg.norm(target - eye)
    right = np.cross(forward, assembly.up)
    right = right / np.linalg.norm(right)
    up = np.cross(right, forward)
    size = 0.07 * breadth
    turn = np.linspace(0, 2 * math.pi, LENS, endpoint=False)
    # A lid over and under a pupil: an eye that is seen to look forward.
    ring = eye + 0.45 * size * (np.cos(turn)[:, None] * right + np.sin(turn)[:, None] * up)
    share = np.linspace(-1, 1, 13)
    lids = [
        eye + size * (share[:, None] * right + side * 0.55 * (1 - share**2)[:, None] * up)
        for side in (1.0, -1.0)
    ]
    lines = [
        Line(Role.FACE, ring, EYE_KEY, closed=True),
        *(Line(Role.FACE, lid, EYE_KEY) for lid in lids),
        Line(Role.GUIDE, np.array([eye, _looked_at(assembly)]), EYE_KEY),
    ]
    if outside_mouth(assembly, eye):
        lines += [Line(Role.GUIDE, np.array([eye, corner]), EYE_KEY) for corner in assembly.opening]
    label = Label("eye", eye + 1.3 * size * up, Role.GUIDE, EYE_KEY)
    return lines, [Points(Role.GUIDE, eye[None], (EYE_KEY,))], [label]


def _looked_at(assembly: Assembly) -> Array:
    # The line of sight ends at the far end, for what lies behind it is not seen.
    eye, way = assembly.eye, assembly.target - assembly.eye
    low = min(float(panel.outline[:, 2].min()) for panel in assembly.panels)
    share = (low - eye[2]) / way[2] if way[2] < 0 else 1.0
    result: Array = eye + min(1.0, share) * way
    return result
