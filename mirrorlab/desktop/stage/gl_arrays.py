"""A drawing as arrays for the graphics card: corners of faces, and ribbons of lines."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.look import Look, face_tint, line_style, rgb
from mirrorlab.drawing.model import Faces, Line, Role
from mirrorlab.drawing.prepared import SHEER_ROLES, Prepared, on_ball
from mirrorlab.drawing.sphere import cross
from mirrorlab.drawing.strokes import Strokes

FACE_TYPE = np.dtype(
    [("position", "f4", 3), ("normal", "f4", 3), ("color", "f4", 4), ("ball", "f4")], align=False
)
LINE_TYPE = np.dtype(
    [("start", "f4", 3), ("end", "f4", 3), ("corner", "f4", 2), ("width", "f4", 2), ("color", "f4", 4)],
    align=False,
)

CORNERS = np.array([[0, -1], [0, 1], [1, 1], [1, -1]], dtype=np.float32)
TWO_TRIANGLES = np.array([0, 1, 2, 0, 2, 3], dtype=np.uint32)


@dataclass(frozen=True, slots=True, eq=False)
class FaceArrays:
    """Corners of all faces; `solid` triangles stand first, `sheer` ones are put in order for each view.

    Attributes
    ----------
    data : ndarray of FACE_TYPE, shape (V,)
    ball, solid : ndarray of uint32, shape (3·T,)
        Corners of the triangles of the ball, seen from outside only, and of the other triangles that hide what
        is behind them.
    sheer : ndarray of uint32, shape (S, 3)
    middles : ndarray, shape (S, 3)
        Middle of each sheer triangle.
    """

    data: NDArray[np.void]
    ball: NDArray[np.uint32]
    solid: NDArray[np.uint32]
    sheer: NDArray[np.uint32]
    middles: NDArray[np.float64]


def face_arrays(prepared: Prepared, look: Look) -> FaceArrays:
    """Corners, normals and tints of a drawing's faces."""
    blocks = [faces for faces in prepared.drawing.faces if len(faces.triangles)]
    ball = [faces for faces in blocks if on_ball(prepared.drawing, faces)]
    plane = [faces for faces in blocks if not any(faces is other for other in ball)]
    parts, outside, first = [], [], 0
    for faces in ball:
        data = np.empty(len(faces.vertices), dtype=FACE_TYPE)
        data["position"] = faces.vertices
        data["normal"] = faces.vertices
        data["color"] = _color(look, faces)
        data["ball"] = 1.0
        parts.append(data)
        outside.append((faces.triangles + first).astype(np.uint32).ravel())
        first += len(data)
    none = np.zeros(0, dtype=np.uint32)
    solid, sheer, middles = none, none.reshape(0, 3), np.zeros((0, 3))
    if plane:
        data, corners = _plane(plane, look)
        parts.append(data)
        triangles = (first + np.arange(3 * len(corners), dtype=np.uint32)).reshape(-1, 3)
        see_through = np.repeat([f.role in SHEER_ROLES for f in plane], [len(f.triangles) for f in plane])
        solid = triangles[~see_through].ravel()
        sheer, middles = triangles[see_through], corners[see_through].mean(axis=1)
    return FaceArrays(
        np.concatenate(parts) if parts else np.zeros(0, dtype=FACE_TYPE),
        np.concatenate(outside) if outside else none,
        solid,
        sheer,
        middles,
    )


def _color(look: Look, faces: Faces) -> tuple[float, ...]:
    name, alpha = face_tint(look, faces.role, faces.index)
    return (*rgb(name).tolist(), alpha)


def _plane(blocks: list[Faces], look: Look) -> tuple[NDArray[np.void], NDArray[np.float64]]:
    """Plane faces: each triangle has a normal of its own, so neighbours share no corner."""
    corners = np.concatenate([faces.vertices[faces.triangles] for faces in blocks])
    normal = cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    normal /= np.maximum(np.sqrt(np.einsum("ij,ij->i", normal, normal)), 1e-300)[:, None]
    data = np.empty(3 * len(corners), dtype=FACE_TYPE)
    data["position"] = corners.reshape(-1, 3)
    data["normal"] = np.repeat(normal, 3, axis=0)
    colors = np.array([_color(look, faces) for faces in blocks], dtype=np.float32)
    data["color"] = np.repeat(colors, [3 * len(faces.triangles) for faces in blocks], axis=0)
    data["ball"] = 0.0
    return data, corners


def line_arrays(
    lines: tuple[Line, ...], cut: Strokes, look: Look, bare: bool = False
) -> tuple[NDArray[np.void], NDArray[np.uint32]]:
    """Four corners for each straight piece of a line, and the triangles between them.

    Lines are ordered so that typed mirrors and the region's outline come last, upon the others.
    """
    count = len(cut.start)
    data = np.empty(4 * count, dtype=LINE_TYPE)
    if not count:
        return data, np.zeros(0, dtype=np.uint32)
    rank = {Role.NET: 0, Role.GUIDE: 1, Role.GENERATED_MIRROR: 2, Role.TYPED_MIRROR: 4, Role.REGION: 5}
    order = np.argsort(np.array([rank.get(line.role, 3) for line in lines])[cut.line], kind="stable")
    colors = np.empty((len(lines), 4), dtype=np.float32)
    widths = np.empty(len(lines), dtype=np.float32)
    for k, line in enumerate(lines):
        name, width, _ = line_style(look, line.role, line.index, bare)
        colors[k] = (*rgb(name), 1.0)
        widths[k] = width * line.weight
    which = np.repeat(cut.line[order], 4)
    data["start"] = np.repeat(cut.start[order], 4, axis=0)
    data["end"] = np.repeat(cut.end[order], 4, axis=0)
    data["corner"] = np.tile(CORNERS, (count, 1))
    data["width"] = widths[which][:, None]
    data["color"] = colors[which]
    index = (4 * np.arange(count, dtype=np.uint32)[:, None] + TWO_TRIANGLES).ravel()
    return data, index.astype(np.uint32)
