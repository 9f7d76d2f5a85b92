"""A drawing in space as a mesh: GLB with tints and names, STL and OBJ for other tools."""

from __future__ import annotations

import os
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.look import LIGHT_LOOK, Look, face_tint, line_style, named_look, rgb
from mirrorlab.drawing.model import Drawing, Faces, Line, Points, Role
from mirrorlab.files.whole import FileError, write_whole

if TYPE_CHECKING:
    import trimesh

Array = NDArray[np.float64]

FORMATS = (".glb", ".stl", ".obj")

TUBE = 0.0035
"""Radius of a line of ordinary width, as a part of the drawing's half size."""

BEAD = 0.018
"""Radius of a point's bead, as a part of the drawing's half size."""

TUBE_SIDES = 8

METRES = {"mm": 0.001}
"""GLB counts in metres."""


class MeshError(FileError):
    """A drawing that cannot be written as a mesh."""


def save_mesh(
    drawing: Drawing,
    path: str | os.PathLike[str],
    theme: Any = LIGHT_LOOK,
    *,
    lines: bool = True,
    points: bool = True,
) -> Path:
    """Write a drawing in space as GLB, STL or OBJ, whichever the file's name ends in.

    Faces keep their vertices; lines become thin tubes and points small beads. GLB has a named, tinted part for each
    role, stands upright (y is up, as the format has it) and counts in metres; STL and OBJ keep the drawing's axes
    and unit.

    Parameters
    ----------
    drawing : Drawing
    path : path
        Written whole or not at all.
    theme : Look, Theme or str
        Tints of a GLB: "light" or "dark".
    lines, points : bool
        Whether lines and points are written too.

    Raises
    ------
    MeshError
        A flat or empty drawing, or an ending that is not accepted.
    FileError
        The file cannot be written.
    """
    target = Path(path)
    ending = target.suffix.lower()
    if ending not in FORMATS:
        msg = f'"{target.name}": a mesh ends in {", ".join(FORMATS)}'
        raise MeshError(msg)
    if drawing.flat:
        msg = f'"{drawing.title}" is flat and has no mesh; save it as a picture'
        raise MeshError(msg)
    parts = mesh_parts(drawing, named_look(theme), lines=lines, points=points)
    if not parts:
        msg = f'"{drawing.title}" has nothing to make a mesh of'
        raise MeshError(msg)
    return write_whole(target, _export(parts, ending, METRES.get(drawing.unit, 1.0)))


def mesh_parts(
    drawing: Drawing, look: Look, *, lines: bool = True, points: bool = True
) -> dict[str, trimesh.Trimesh]:
    """The parts of a mesh by name, each tinted."""
    parts: dict[str, list[tuple[Array, NDArray[np.int64]]]] = {}
    tints: dict[str, tuple[str, float]] = {}
    size = _half_size(drawing)

    def add(name: str, tint: tuple[str, float], piece: tuple[Array, NDArray[np.int64]]) -> None:
        if len(piece[1]):
            parts.setdefault(name, []).append(piece)
            tints[name] = tint

    for faces in drawing.faces:
        add(part_name(faces), face_tint(look, faces.role, faces.index), (faces.vertices, faces.triangles))
    for line in drawing.lines if lines else ():
        name, width, _ = line_style(look, line.role, line.index)
        radius = TUBE * size * width * line.weight / look.generated_width
        for piece in _runs(line):
            add(part_name(line) + " line", (name, 1.0), tube(piece, radius, line.closed))
    for block in drawing.points if points else ():
        tint = look.seed if block.role is Role.SEED else look.image
        radius = BEAD * size * (1.5 if block.role is Role.SEED else 1.0)
        add(part_name(block), (tint, 1.0), beads(block.positions, radius))
    return {name: _joined(pieces, *tints[name]) for name, pieces in parts.items()}


def part_name(part: Faces | Line | Points) -> str:
    """A name for a part: its role, with the letter of a typed mirror."""
    if part.role is Role.TYPED_MIRROR and part.index >= 0:
        return f"mirror {chr(ord('a') + part.index)}"
    return str(part.role)


def tube(points: Array, radius: float, closed: bool = False) -> tuple[Array, NDArray[np.int64]]:
    """A tube along a polyline: vertices and triangles, outside counter-clockwise; ends are capped."""
    points = np.asarray(points, dtype=float)
    keep = np.linalg.norm(np.diff(points, axis=0, prepend=points[:1] - 1.0), axis=1) > 1e-12
    points = points[keep]
    n = len(points)
    if n < 2:
        return np.zeros((0, 3)), np.zeros((0, 3), dtype=np.int64)
    round_about = np.roll(points, -1, axis=0) - np.roll(points, 1, axis=0)
    along = round_about if closed else np.gradient(points, axis=0)
    along /= np.maximum(np.linalg.norm(along, axis=1, keepdims=True), 1e-300)
    side = np.empty_like(points)
    first = np.eye(3)[int(np.abs(along[0]).argmin())]
    for k in range(n):
        before = first if k == 0 else side[k - 1]
        across = before - (before @ along[k]) * along[k]
        side[k] = across / max(float(np.linalg.norm(across)), 1e-300)
    other = np.cross(along, side)
    t = 2 * np.pi * np.arange(TUBE_SIDES) / TUBE_SIDES
    ring = np.cos(t)[None, :, None] * side[:, None] + np.sin(t)[None, :, None] * other[:, None]
    vertices = (points[:, None] + radius * ring).reshape(-1, 3)
    rows = np.arange(n if closed else n - 1)
    i, j = np.meshgrid(rows, np.arange(TUBE_SIDES), indexing="ij")
    a, b = i * TUBE_SIDES + j, i * TUBE_SIDES + (j + 1) % TUBE_SIDES
    c, d = (i + 1) % n * TUBE_SIDES + j, (i + 1) % n * TUBE_SIDES + (j + 1) % TUBE_SIDES
    triangles = [np.stack([a, b, d], axis=-1).reshape(-1, 3), np.stack([a, d, c], axis=-1).reshape(-1, 3)]
    if not closed:
        fan = np.arange(1, TUBE_SIDES - 1)
        low = np.stack([np.zeros_like(fan), fan + 1, fan], axis=1)
        high = np.stack([np.zeros_like(fan), fan, fan + 1], axis=1) + (n - 1) * TUBE_SIDES
        triangles += [low, high]
    return vertices, np.concatenate(triangles)


def beads(places: Array, radius: float) -> tuple[Array, NDArray[np.int64]]:
    """A small sphere at each place: vertices and triangles."""
    import trimesh

    ball = trimesh.creation.icosphere(subdivisions=1, radius=radius)
    vertices = (np.asarray(places)[:, None] + ball.vertices[None]).reshape(-1, 3)
    steps = len(ball.vertices) * np.arange(len(places))[:, None, None]
    return vertices, (ball.faces[None] + steps).reshape(-1, 3)


def _runs(line: Line) -> list[Array]:
    points = np.asarray(line.points, dtype=float)
    return list(points.reshape(-1, 2, 3)) if line.apart else [points]


def _half_size(drawing: Drawing) -> float:
    places = [f.vertices for f in drawing.faces] + [line.points for line in drawing.lines]
    places += [block.positions for block in drawing.points]
    places = [p for p in places if len(p)]
    if not places:
        return 1.0
    every = np.concatenate(places)
    return 0.5 * float((every.max(axis=0) - every.min(axis=0)).max()) or 1.0


def _joined(pieces: list[tuple[Array, NDArray[np.int64]]], name: str, alpha: float) -> trimesh.Trimesh:
    import trimesh

    steps = np.cumsum([0, *(len(vertices) for vertices, _ in pieces[:-1])])
    vertices = np.concatenate([v for v, _ in pieces])
    triangles = np.concatenate([t + step for (_, t), step in zip(pieces, steps, strict=True)])
    mesh = trimesh.Trimesh(vertices, triangles, process=False)
    mesh.merge_vertices()
    material = trimesh.visual.material.PBRMaterial(
        baseColorFactor=[*(rgb(name) ** 2.2).tolist(), alpha],
        metallicFactor=0.1,
        roughnessFactor=0.55,
        alphaMode="OPAQUE" if alpha >= 1 else "BLEND",
        doubleSided=True,
    )
    mesh.visual = trimesh.visual.TextureVisuals(material=material)
    return mesh


def _export(parts: dict[str, trimesh.Trimesh], ending: str, metres: float) -> bytes:
    import trimesh

    if ending == ".glb":
        scene = trimesh.Scene()
        upright = np.array([[1.0, 0, 0, 0], [0, 0, 1, 0], [0, -1, 0, 0], [0, 0, 0, 1]])
        upright[:3] *= metres
        for name, mesh in parts.items():
            scene.add_geometry(mesh, node_name=name, geom_name=name, transform=upright)
        return bytes(scene.export(file_type="glb"))
    if ending == ".stl":
        return bytes(trimesh.util.concatenate(list(parts.values())).export(file_type="stl"))
    return _obj(parts).encode()


def _obj(parts: dict[str, trimesh.Trimesh]) -> str:
    """OBJ with one object a part; written here, since it needs no material file beside it."""
    rows = ["# Mirrorlab"]
    first = 1
    for name, mesh in parts.items():
        rows.append(f"o {name.replace(' ', '_')}")
        rows += [f"v {x:.9g} {y:.9g} {z:.9g}" for x, y, z in mesh.vertices.tolist()]
        rows += [f"f {a + first} {b + first} {c + first}" for a, b, c in mesh.faces.tolist()]
        first += len(mesh.vertices)
    return "\n".join(rows) + "\n"
