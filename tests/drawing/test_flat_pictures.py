"""Tubes, the chamber's map and the Coxeter plane."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import mirrorlab as ml
from mirrorlab.drawing.cell import cell_walls
from mirrorlab.drawing.chambermap import MapError, chamber_drawing, chamber_map
from mirrorlab.drawing.coxeterplane import coxeter_axes, coxeter_drawing
from mirrorlab.drawing.model import Drawing, Role
from mirrorlab.drawing.prism import WINDOW, images_of, region_outline

Drawn = Callable[..., Drawing]


def turned(u: np.ndarray, v: np.ndarray) -> np.ndarray:
    """Positive where v lies to the left of u."""
    return u[..., 0] * v[..., 1] - u[..., 1] * v[..., 0]


def shoelace(loop: np.ndarray) -> float:
    x, y = loop[:, 0], loop[:, 1]
    return 0.5 * float(np.sum(x * np.roll(y, -1) - y * np.roll(x, -1)))


@pytest.mark.parametrize("angles", [["60", "60", "60"], ["90", "45", "45"], ["30", "60", "90"]])
def test_a_tube_that_tiles_fills_the_window_once(drawn: Drawn, angles: list[str]):
    drawing = drawn(angles)
    assert drawing.flat
    total = 0.0
    for faces in drawing.faces:
        p = faces.vertices[faces.triangles][:, :, :2]
        signed = 0.5 * turned(p[:, 1] - p[:, 0], p[:, 2] - p[:, 0])
        assert (signed > -1e-9).all(), "counter-clockwise"
        total += float(signed.sum())
    assert total == pytest.approx(np.pi * WINDOW**2, rel=3e-3), "no gap and no overlap"
    assert "endlessly many" in drawing.notes[0]


def test_the_sides_of_a_tube_meet_at_the_typed_angles():
    arrangement = ml.Arrangement.from_angles(["30", "60", "90"])
    outline = region_outline(arrangement.normals, 50)
    assert len(outline) == 3
    assert shoelace(outline) > 0
    sides = np.roll(outline, -1, axis=0) - outline
    unit = sides / np.linalg.norm(sides, axis=1, keepdims=True)
    angles = [np.degrees(np.arccos(-u @ v)) for u, v in zip(unit, np.roll(unit, -1, axis=0), strict=True)]
    assert sorted(angles) == pytest.approx([30, 60, 90])


def test_images_of_a_tube_are_its_reflections():
    normals = ml.Arrangement.from_angles(["60", "60", "60"]).normals
    moves = images_of(normals, 6.0, 500)
    places = np.concatenate([moves.shift, moves.shift + moves.turn[:, :, 0]], axis=1)
    assert len(np.unique(np.round(places, 6), axis=0)) == len(places), "each once"
    np.testing.assert_allclose(np.linalg.det(moves.turn), (-1.0) ** moves.depth, atol=1e-9)
    centres = np.unique(np.round(moves.shift, 6), axis=0)
    inradius = 1.0
    apart = np.linalg.norm(centres[:, None] - centres[None], axis=2) + 9 * np.eye(len(centres))
    assert apart.min() == pytest.approx(2 * inradius), "neighbouring cells touch along a side"


@pytest.mark.parametrize("angles", [["0"], ["0", "90", "90"], ["90", "0", "90", "90", "0", "90"]])
def test_strips_and_rectangles(drawn: Drawn, angles: list[str]):
    drawing = drawn(angles)
    assert drawing.faces
    assert any("how far apart" in note for note in drawing.notes)
    typed = [line for line in drawing.lines if line.role is Role.TYPED_MIRROR]
    assert len(typed) == ml.Arrangement.from_angles(angles).size


def test_a_tube_that_overlaps_is_not_tinted_as_if_it_tiled(drawn: Drawn):
    drawing = drawn(["20", "40", "120"])
    assert {faces.role for faces in drawing.faces} == {Role.REGION}
    assert "overlapping" in drawing.notes[0]
    assert "subdivided" in drawn(["120", "30", "30"]).notes[0]


def test_four_mirrors_that_close_a_cell(drawn: Drawn):
    arrangement = ml.Arrangement.from_angles(["60", "90", "60", "60", "90", "60"])
    assert arrangement.finding().kind == "tube"
    walls = cell_walls(arrangement.normals)
    for wall, normal in zip(walls, arrangement.normals, strict=True):
        assert len(wall) == 3
        np.testing.assert_allclose(wall @ normal, -1, atol=1e-9)
        assert (wall @ arrangement.normals.T >= -1 - 1e-9).all()
    drawing = drawn(arrangement)
    assert len(drawing.faces) == 4
    assert "endlessly many" in drawing.notes[0]


FAMILIES = ["A3", "B3", "H3", "A1xA1xA1", "A1xI2(9)", "A2", "I2(7)", "A1"]


@pytest.mark.parametrize("family", FAMILIES)
@settings(max_examples=25, deadline=None)
@given(weights=st.tuples(*[st.floats(0.01, 1)] * 3))
def test_the_map_leads_there_and_back(family: str, weights: tuple[float, float, float]):
    group = ml.Arrangement.from_family(family).finding().group
    chart = chamber_map(group)
    seed = np.array(weights[: group.rank]) @ group.corners
    seed /= np.linalg.norm(seed)
    place = chart.to_map(seed)
    assert place[2] == 0
    np.testing.assert_allclose(chart.to_seed(place), seed, atol=1e-9)


@pytest.mark.parametrize("family", FAMILIES)
@settings(max_examples=25, deadline=None)
@given(place=st.tuples(st.floats(-3, 3), st.floats(-3, 3)))
def test_every_place_on_the_map_gives_a_seed_in_the_chamber(family: str, place: tuple[float, float]):
    group = ml.Arrangement.from_family(family).finding().group
    seed = chamber_map(group).to_seed(place)
    assert np.linalg.norm(seed) == pytest.approx(1)
    assert (group.simple @ seed >= -1e-9).all()


def test_walls_are_straight_on_the_map():
    group = ml.Arrangement.from_family("H3").finding().group
    chart = chamber_map(group)
    for i in range(3):
        a, b = (group.corners[j] for j in range(3) if j != i)
        t = np.linspace(0, 1, 9)[:, None]
        line = chart.to_map((1 - t) * a + t * b)[:, :2]
        off = turned(line - line[0], line[-1] - line[0])
        np.testing.assert_allclose(off, 0, atol=1e-12)


@pytest.mark.parametrize("family", FAMILIES)
def test_the_map_s_drawing(family: str):
    arrangement = ml.Arrangement.from_family(family)
    drawing = chamber_drawing(arrangement, arrangement.finding(), arrangement.orbit(place="centre"))
    assert drawing.flat
    assert drawing.seed_on == "plane"
    assert {line.key for line in drawing.lines if line.role is Role.TYPED_MIRROR} == {
        ("mirror", i) for i in range(arrangement.size)
    }
    assert [p.role for p in drawing.points] == [Role.SEED]
    (faces,) = drawing.faces
    p = faces.vertices[faces.triangles][:, :, :2]
    assert (turned(p[:, 1] - p[:, 0], p[:, 2] - p[:, 0]) > 0).all()


def test_the_map_names_walls_that_were_not_typed():
    arrangement = ml.Arrangement.from_angles(["90", "60", "72"])
    finding = arrangement.finding()
    drawing = chamber_drawing(arrangement, finding)
    assert {label.text for label in drawing.labels if len(label.text) == 1} == set(finding.group.letters)
    assert any(line.key[0] == "wall" for line in drawing.lines)


def test_no_map_of_higher_ranks():
    group = ml.Arrangement.from_family("A4").finding().group
    with pytest.raises(MapError, match="rank 4"):
        chamber_map(group)
    arrangement = ml.Arrangement.from_family("A4")
    assert not chamber_drawing(arrangement, arrangement.finding()).faces


@pytest.mark.parametrize("family", ["A4", "D5", "E6", "E8", "F4", "H4", "B3", "I2(7)xI2(5)", "A1xH4"])
def test_a_coxeter_element_turns_the_plane(family: str):
    group = ml.Arrangement.from_family(family).finding().group
    axes = coxeter_axes(group)
    np.testing.assert_allclose(axes @ axes.T, np.eye(2), atol=1e-10)
    product = np.eye(group.dimension)
    for normal in group.simple:
        product = product @ (np.eye(group.dimension) - 2 * np.outer(normal, normal))
    turn = axes @ product @ axes.T
    h = max(group.coxeter_numbers)
    assert np.trace(turn) == pytest.approx(2 * np.cos(2 * np.pi / h), abs=1e-9)
    np.testing.assert_allclose(turn @ turn.T, np.eye(2), atol=1e-9)


def test_mirrors_without_a_turned_plane():
    group = ml.Arrangement.from_family("A1xA1xA1xA1").finding().group
    axes = coxeter_axes(group)
    np.testing.assert_allclose(axes @ axes.T, np.eye(2), atol=1e-12)


def test_the_coxeter_plane_s_drawing():
    arrangement = ml.Arrangement.from_family("D4")
    drawing = coxeter_drawing(arrangement, arrangement.finding(), arrangement.orbit(place="corner acd"))
    assert drawing.flat
    assert sum(len(p.positions) for p in drawing.points) == 24
    assert {label.text for label in drawing.labels} <= set("abcd")
    edges = next(line for line in drawing.lines if line.key == ("edge", 0))
    assert len(edges.points) // 2 == 24 * 8 // 2, (
        "the 24-cell: eight edges at a corner (Coxeter, Regular Polytopes)"
    )
    big = ml.Arrangement.from_family("E6")
    told = coxeter_drawing(big, big.finding(), big.orbit(place="centre"))
    assert any("51,840" in note for note in told.notes)


@pytest.mark.parametrize(
    ("name", "heights"),
    [
        ("A3", [1, 2, 3]),  # the mirror between a and b is as far from the seed as c: 1 + 2 = 3
        (
            "A1xA1xA1",
            [3, 4, 5],
        ),  # two steps over square walls are as long as one over the third: 3² + 4² = 5²
        ("A4", [1, 2, 3, 4]),
        ("D4", [1, 2, 3, 4]),
        ("B3", [0, 1, 2]),
        ("A4", [0, 1, 0, 1]),
    ],
)
def test_edges_join_images_across_one_wall(name: str, heights: list[float]):
    arrangement = ml.Arrangement.from_family(name)
    finding, orbit = arrangement.finding(), arrangement.orbit(heights=heights)
    group = finding.group
    drawing = coxeter_drawing(arrangement, finding, orbit)
    joined = set()  # from the definition: g·s and g·(s reflected in a wall) for every g
    rank = {tuple(place): k for k, place in enumerate((np.round(orbit.points, 6) + 0.0).tolist())}
    for matrix in group.elements()[0]:
        for normal in group.simple:
            across = orbit.seed - 2 * (orbit.seed @ normal) * normal
            ends = np.round(np.stack([orbit.seed, across]) @ matrix.T, 6) + 0.0
            joined.add(frozenset(rank[tuple(end)] for end in ends.tolist()))
    joined = {pair for pair in joined if len(pair) == 2}
    edges = next(line for line in drawing.lines if line.key == ("edge", 0)).points[:, :2].reshape(-1, 2, 2)
    flat = orbit.points @ coxeter_axes(group).T
    flat /= np.linalg.norm(flat, axis=1).max()
    wanted = [flat[sorted(pair)] for pair in sorted(joined, key=sorted)]
    assert len(edges) == len(wanted)
    np.testing.assert_allclose(edges, wanted, atol=1e-9)


def test_no_coxeter_plane_without_a_group():
    arrangement = ml.Arrangement.from_angles(["90", "60", "50"])
    drawing = coxeter_drawing(arrangement, arrangement.finding())
    assert not drawing.lines
    assert drawing.notes
