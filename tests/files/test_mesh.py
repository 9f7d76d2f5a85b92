"""Meshes read back with trimesh."""

from __future__ import annotations

import json
import struct
from pathlib import Path

import numpy as np
import pytest
import trimesh

import mirrorlab as ml
from mirrorlab.drawing.model import Drawing, Faces, Line, Role
from mirrorlab.drawing.space import SpaceOptions, space_drawing
from mirrorlab.files.mesh import MeshError, beads, save_mesh, tube
from mirrorlab.files.whole import FileError


@pytest.fixture(scope="module")
def drawing() -> Drawing:
    arrangement = ml.Arrangement.from_angles(["90", "60", "45"])
    return space_drawing(arrangement, arrangement.finding(), arrangement.orbit(heights=[1, 0.6, 0.4]))


def test_a_glb_has_named_tinted_parts(drawing: Drawing, tmp_path: Path):
    path = save_mesh(drawing, tmp_path / "m.glb")
    scene = trimesh.load(path)
    names = set(scene.geometry)
    assert {"mirror a", "mirror b", "mirror c", "seed", "chamber of even parity"} <= names
    header = path.read_bytes()
    length = struct.unpack("<I", header[12:16])[0]
    document = json.loads(header[20 : 20 + length])
    modes = {m["alphaMode"] for m in document["materials"] if "alphaMode" in m}
    assert "BLEND" in modes, "the mirrors are sheer"
    even = scene.geometry["chamber of even parity"]
    odd = scene.geometry["chamber of odd parity"]
    region = scene.geometry["region between the typed mirrors"]
    assert even.area + odd.area + region.area == pytest.approx(4 * np.pi, rel=4e-3)
    ball = trimesh.util.concatenate([g.copy() for g in (even, odd, region)])
    ball.merge_vertices(merge_tex=True, merge_norm=True, digits_vertex=6)
    assert ball.volume == pytest.approx(4 / 3 * np.pi, rel=1e-2), "triangles face outwards"


def test_a_glb_stands_upright(tmp_path: Path):
    edge = Drawing("edge", lines=(Line(Role.AXIS, np.array([[0.0, 0, 0], [0, 0, 2]]), ("edge", 0)),))
    scene = trimesh.load(save_mesh(edge, tmp_path / "m.glb"))
    high = scene.bounds[1]
    assert high[1] == pytest.approx(2, abs=1e-3), "the drawing's z is the format's y"
    assert abs(high[2]) < 0.1


@pytest.mark.parametrize("ending", [".stl", ".obj"])
def test_stl_and_obj_keep_axes_and_unit(drawing: Drawing, tmp_path: Path, ending: str):
    mesh = trimesh.load(save_mesh(drawing, tmp_path / f"m{ending}", lines=False, points=False), force="mesh")
    count = sum(len(faces.triangles) for faces in drawing.faces)
    assert len(mesh.faces) == count
    places = np.concatenate([faces.vertices for faces in drawing.faces])
    np.testing.assert_allclose(mesh.bounds, [places.min(axis=0), places.max(axis=0)], atol=1e-5)


def test_millimetres_become_metres_in_glb_only(tmp_path: Path):
    square = np.array([[0.0, 0, 0], [100, 0, 0], [100, 50, 0], [0, 50, 0]])
    faces = Faces(Role.PANEL, square, np.array([[0, 1, 2], [0, 2, 3]]), (("panel", 0),), 0)
    panel = Drawing("panel", (faces,), unit="mm")
    assert trimesh.load(save_mesh(panel, tmp_path / "m.glb")).extents.max() == pytest.approx(0.1)
    assert trimesh.load(save_mesh(panel, tmp_path / "m.stl")).extents.max() == pytest.approx(100)


@pytest.mark.parametrize("closed", [False, True])
def test_a_tube_is_a_closed_surface(closed: bool):
    t = np.linspace(0, 2 * np.pi, 60)[:-1]
    ring = np.stack([np.cos(t), np.sin(t), 0.2 * np.sin(2 * t)], axis=1)
    vertices, triangles = tube(ring if closed else ring[:40], 0.05, closed)
    mesh = trimesh.Trimesh(vertices, triangles, process=False)
    assert mesh.is_watertight
    assert mesh.is_winding_consistent
    assert mesh.volume > 0, "triangles face outwards"
    assert len(tube(np.zeros((1, 3)), 0.1)[1]) == 0


def test_beads_stand_where_the_points_are():
    places = np.array([[0.0, 0, 0], [3, 0, 0]])
    vertices, triangles = beads(places, 0.5)
    parts = trimesh.Trimesh(vertices, triangles).split()
    assert len(parts) == 2
    centres = np.array(sorted(p.center_mass.tolist() for p in parts))
    np.testing.assert_allclose(centres, places, atol=1e-9)


def test_what_has_no_mesh_is_refused(drawing: Drawing, tmp_path: Path):
    arrangement = ml.Arrangement.from_angles(["60"])
    flat = space_drawing(arrangement, arrangement.finding(), None, SpaceOptions(flat=True))
    with pytest.raises(MeshError, match="is flat"):
        save_mesh(flat, tmp_path / "m.glb")
    with pytest.raises(MeshError, match="nothing to make a mesh of"):
        save_mesh(Drawing("nothing"), tmp_path / "m.glb")
    with pytest.raises(MeshError, match=r"a mesh ends in \.glb, \.stl, \.obj"):
        save_mesh(drawing, tmp_path / "m.dae")
    assert not list(tmp_path.iterdir())
    with pytest.raises(FileError, match="cannot be written"):
        save_mesh(drawing, tmp_path / "none" / "m.stl")
