"""Pictures against published figures and reference libraries.

Sources
-------
Coxeter, *Regular Polytopes* (3rd ed. 1973): edges of the characteristic triangles; the 240 points of the E8 figure
lie on eight rings of thirty in the Coxeter plane. Girard's theorem: a spherical triangle's area is its angles' sum
less pi. All values from memory.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
import trimesh

import mirrorlab as ml
from mirrorlab.drawing.camera import home_camera
from mirrorlab.drawing.coxeterplane import coxeter_drawing
from mirrorlab.drawing.hiding import ray_lengths
from mirrorlab.drawing.model import Role
from mirrorlab.drawing.space import space_drawing

ARCSECOND = math.radians(1 / 3600)

TRIANGLES = {
    ("90", "60", "36"): ["20 54 19", "31 43 3", "37 22 39"],
    ("90", "60", "45"): ["35 15 52", "45 0 0", "54 44 8"],
    ("90", "60", "60"): ["54 44 8", "54 44 8", "70 31 44"],
}


def degrees(text: str) -> float:
    d, m, s = (int(part) for part in text.split())
    return d + m / 60 + s / 3600


@pytest.mark.parametrize(("angles", "edges"), TRIANGLES.items())
def test_edges_of_the_drawn_region_are_coxeter_s(angles: tuple[str, ...], edges: list[str]):
    arrangement = ml.Arrangement.from_angles(list(angles))
    drawing = space_drawing(arrangement, arrangement.finding())
    outline = next(line for line in drawing.lines if line.role is Role.REGION).points
    unit = outline / np.linalg.norm(outline, axis=1, keepdims=True)
    normals = arrangement.normals
    lengths = []
    ahead = np.roll(unit, -1, axis=0)
    for normal in normals:
        on = (np.abs(unit @ normal) < 1e-9) & (np.abs(ahead @ normal) < 1e-9)
        steps = np.arctan2(
            np.linalg.norm(np.cross(unit[on], ahead[on]), axis=1), np.einsum("ij,ij->i", unit[on], ahead[on])
        )
        lengths.append(float(steps.sum()))
    expected = sorted(math.radians(degrees(edge)) for edge in edges)
    assert sorted(lengths) == pytest.approx(expected, abs=0.6 * ARCSECOND)


@pytest.mark.parametrize("angles", [("90", "60", "36"), ("90", "60", "45"), ("90", "90", "15")])
def test_a_chamber_has_girard_s_area(angles: tuple[str, ...]):
    arrangement = ml.Arrangement.from_angles(list(angles))
    drawing = space_drawing(arrangement, arrangement.finding())
    excess = math.radians(sum(float(a) for a in angles)) - math.pi
    for faces in drawing.faces:
        if faces.role in (Role.CHAMBER_EVEN, Role.CHAMBER_ODD, Role.REGION):
            p = faces.vertices[faces.triangles]
            # The solid angle of each small triangle: A. van Oosterom, J. Strackee, IEEE Trans. Biomed. Eng. 30 (1983).
            a, b, c = p[:, 0], p[:, 1], p[:, 2]
            dot = [np.einsum("ij,ij->i", u, v) for u, v in ((a, b), (b, c), (c, a))]
            solid = 2 * np.arctan2(np.einsum("ij,ij->i", a, np.cross(b, c)), 1 + sum(dot))
            chambers = len(set(faces.keys))
            assert solid.sum() / chambers == pytest.approx(excess, rel=1e-9)


def test_e8_lies_on_eight_rings_of_thirty():
    arrangement = ml.Arrangement.from_family("E8")
    finding = arrangement.finding()
    orbits = [arrangement.orbit(place=f"corner {letters}") for letters in ("bcdefgh", "abcdefg")]
    orbit = min(orbits, key=len)
    assert len(orbit) == 240
    drawing = coxeter_drawing(arrangement, finding, orbit)
    places = np.concatenate([p.positions for p in drawing.points])
    radii = np.round(np.linalg.norm(places, axis=1), 6)
    values, counts = np.unique(radii, return_counts=True)
    assert len(values) == 8
    assert (counts == 30).all()


def test_rays_agree_with_trimesh():
    box = trimesh.creation.icosphere(subdivisions=2)
    rng = np.random.default_rng(5)
    start = 3 * rng.normal(size=(30, 3))
    direction = -start / np.linalg.norm(start, axis=1, keepdims=True) + 0.15 * rng.normal(size=(30, 3))
    direction /= np.linalg.norm(direction, axis=1, keepdims=True)
    lengths = ray_lengths(start, direction, np.asarray(box.triangles))
    for s, d, found in zip(start, direction, lengths, strict=True):
        expected = []
        for normal, corners in zip(box.face_normals, box.triangles, strict=True):
            place = trimesh.intersections.plane_lines(
                corners[0], normal, np.array([[s], [s + 100 * d]]), line_segments=True
            )[0]
            if len(place):
                weights = trimesh.triangles.points_to_barycentric(corners[None], place)[0]
                if (weights >= -1e-9).all():
                    expected.append(np.linalg.norm(place[0] - s))
        np.testing.assert_allclose(np.sort(found[np.isfinite(found)]), np.sort(expected), rtol=1e-6)


def test_the_camera_agrees_with_trimesh_s():
    arrangement = ml.Arrangement.from_angles(["90", "60", "45"])
    drawing = space_drawing(arrangement, arrangement.finding())
    camera = home_camera(drawing)
    pose = np.eye(4)
    pose[:3, :3], pose[:3, 3] = camera.axes.T, camera.eye
    across = 2 * math.degrees(math.atan(300 / camera._scale(600, 600)))
    scene = trimesh.Scene(
        camera=trimesh.scene.Camera(resolution=(600, 600), fov=(across, across)), camera_transform=pose
    )
    origins, vectors, pixels = scene.camera_rays()
    for k in (0, 12_345, 200_000, 359_999):
        start, direction = camera.ray(pixels[k][0] + 0.5, 599 - pixels[k][1] + 0.5, 600, 600)
        np.testing.assert_allclose(start, origins[k], atol=1e-9)
        assert np.degrees(np.arccos(min(1.0, direction @ vectors[k]))) < 0.06, "within a pixel"
