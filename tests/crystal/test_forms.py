"""Forms, their solids and combinations: by definition and by elementary geometry."""

from itertools import product
from math import gcd, sqrt

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.spatial import ConvexHull

from mirrorlab.crystal.combinations import CombinationError, combination
from mirrorlab.crystal.forms import eigensymmetry, face_normals, form, forms_of, general_basis
from mirrorlab.crystal.generators import IN_CRYSTAL_AXES
from mirrorlab.crystal.indices import (
    IndicesError,
    check_indices,
    parse_form,
    parse_indices,
    printed,
    write_face,
)
from mirrorlab.crystal.lattices import axes_from_constants
from mirrorlab.crystal.pointgroups import MetricError, point_group
from mirrorlab.crystal.solid import SolidError, bounds, cut_solid


@pytest.mark.parametrize("symbol", ["m", "mm2", "-42m", "31m", "-6", "23"])
def test_small_positive_indices_show_every_kind(symbol):
    group = point_group(symbol)
    shown = {(made.name, made.face_symmetry, made.kind) for made in forms_of(group)}
    for face in product(range(-3, 4), repeat=3):
        if gcd(*face) == 1:
            made = form(group, face)
            assert (made.name, made.face_symmetry, made.kind) in shown


@settings(deadline=None, max_examples=60)
@given(
    st.sampled_from(list(IN_CRYSTAL_AXES)),
    st.tuples(*[st.integers(-6, 6)] * 3).filter(lambda face: any(face)),
)
def test_faces_by_definition(symbol, face):
    """The faces are the different normals that Cartesian operations make of one."""
    group = point_group(symbol)
    made = form(group, face)
    basis = general_basis(group)
    operations = group.cartesian_in(basis)
    images = operations @ face_normals(group, [face], basis)[0]
    assert made.face_count == len(np.unique(np.round(images, 6) + 0.0, axis=0))
    normals = face_normals(group, made.faces, basis)
    assert np.abs(images[:, None] - normals[None]).max(axis=2).min(axis=0).max() < 1e-9
    assert made.closed == bounds(normals)


@pytest.mark.parametrize("symbol", ["mmm", "4/m", "-3", "432", "-43m", "m-3"])
def test_eigensymmetry_by_trying_all_triples(symbol):
    """Slow twin: an operation is fixed by the images of three independent normals; every triple of images is tried."""
    group = point_group(symbol)
    normals = face_normals(group, form(group, "321").faces)
    first = next(
        list(rows)
        for rows in product(range(len(normals)), repeat=3)
        if abs(np.linalg.det(normals[list(rows)])) > 1e-3
    )
    start = normals[first]
    count = 0
    for rows in product(range(len(normals)), repeat=3):
        target = normals[list(rows)]
        if np.allclose(target @ target.T, start @ start.T):
            turned = normals @ np.linalg.solve(start, target)
            count += bool(np.abs(turned[:, None] - normals[None]).max(axis=2).min(axis=1).max() < 1e-9)
    assert count == eigensymmetry(normals).order


@pytest.mark.parametrize(
    ("face", "volume", "angle"),
    [
        ("100", 8.0, 90.0),  # cube of edge 2
        ("111", 4 * sqrt(3), 70.5288),  # octahedron with faces at 1: edge √6, volume √2/3·√6³
        ("110", 4 * sqrt(2), 60.0),  # rhombic dodecahedron of edge √6/2: 16/9·√3·a³
    ],
)
def test_solids_of_the_cubic_group(face, volume, angle):
    made = combination(point_group("m-3m"), [face])
    assert made.solid.volume == pytest.approx(volume)
    assert [row.degrees for row in made.edge_angles] == pytest.approx([angle], abs=1e-4)
    assert made.area_shares == pytest.approx((1.0,))


@pytest.mark.parametrize("symbol", ["m-3m", "-43m", "6/mmm", "mmm", "-3m", "422"])
def test_solid_against_the_hull_of_its_corners(symbol):
    made = combination(point_group(symbol), ["321", "111" if symbol != "-3m" else "001"], [1.0, 0.9])
    body = made.solid
    hull = ConvexHull(body.vertices)
    assert made.closed
    assert body.volume == pytest.approx(hull.volume)
    assert body.areas.sum() == pytest.approx(hull.area)
    faces = sum(bool(corners) for corners in body.faces)
    assert len(body.vertices) - len(body.edges) + faces == 2  # Euler
    for corners, normal in zip(body.faces, body.normals, strict=True):
        if corners:
            a, b, c = body.vertices[list(corners[:3])]
            assert np.cross(b - a, c - b) @ normal > 0


def test_cube_and_octahedron_by_their_distance():
    # Octahedron corners leave the cube at d = 1/√3 of the cube's, its edges at 2/√3, its faces at √3 (geometry).
    group = point_group("m-3m")
    beyond = combination(group, ["100", "111"], [1, 1.74])
    assert beyond.hidden == ("{111}",)
    assert beyond.area_shares == pytest.approx((1.0, 0.0))
    middle = combination(group, ["100", "111"], [1, 2 / sqrt(3)])
    assert len(middle.solid.vertices) == 12
    inside = combination(group, ["100", "111"], [1, 0.57])
    assert inside.hidden == ("{100}",)


@pytest.mark.parametrize("symbol", ["1", "-1", "2", "m", "4", "4mm", "6", "mm2", "3m"])
def test_open_forms_are_ended_for_the_picture(symbol):
    made = combination(point_group(symbol), ["101"])
    assert not made.closed
    assert made.solid.volume is None
    assert all(made.solid.faces)
    assert np.isfinite(made.solid.vertices).all()


def test_two_open_forms_close():
    made = combination(point_group("4mm"), ["111", "00-1"])
    assert made.closed
    assert len(made.solid.vertices) == 5


def test_axes_change_the_angles_and_not_the_name():
    group = point_group("mmm")
    axes = axes_from_constants([1, 2, 3, 90, 90, 90])
    made = combination(group, ["110"], basis=axes)
    assert made.forms[0].name == "rhombic prism"
    # tan of half the prism angle is b/a (geometry).
    wanted = 180 - 2 * np.degrees(np.arctan(2 / 1))
    assert sorted(row.degrees for row in made.edge_angles) == pytest.approx(sorted([wanted, 180 - wanted]))


def test_axes_without_the_symmetry_are_refused():
    with pytest.raises(MetricError, match="do not have the symmetry m-3m"):
        combination(point_group("m-3m"), ["110"], basis=axes_from_constants([1, 1, 2, 90, 90, 90]))


def test_refused_combinations():
    group = point_group("mmm")
    with pytest.raises(CombinationError, match="same form"):
        combination(group, ["100", "-100"])
    with pytest.raises(CombinationError, match="0 forms"):
        combination(group, [])
    with pytest.raises(CombinationError, match="not a positive number"):
        combination(group, ["100"], [-1])
    with pytest.raises(CombinationError, match="distance for each"):
        combination(group, ["100"], [1, 2])
    with pytest.raises(SolidError):
        cut_solid([[0, 0, 0]], 1)
    with pytest.raises(SolidError, match="positive"):
        cut_solid([[1, 0, 0]], 0)


@pytest.mark.parametrize(
    ("text", "hexagonal", "indices"),
    [
        ("1,1,0", False, (1, 1, 0)),
        ("1-10", False, (1, -1, 0)),
        ("(1 -1 0)", False, (1, -1, 0)),
        ("{2 2 0}", False, (1, 1, 0)),
        ("10-11", True, (1, 0, 1)),
        ("1,0,-1,1", True, (1, 0, 1)),
        ("2,-1,-1,0", True, (2, -1, 0)),
        ("12,1,0", False, (12, 1, 0)),
        ("−1,0,0", False, (-1, 0, 0)),
    ],
)
def test_indices(text, hexagonal, indices):
    assert parse_indices(text, hexagonal) == indices


@pytest.mark.parametrize(
    ("text", "hexagonal", "says"),
    [
        ("", False, "0 numbers"),
        ("1,1", False, "2 numbers"),
        ("1,0,-1,1", False, "hexagonal axes"),
        ("1,0,1,1", True, "add up to 0"),
        ("0,0,0", False, "all indices 0"),
        ("a,b,c", False, "not numbers"),
        ("1.5,0,0", False, "whole numbers"),
        ("1000,0,1", False, "between"),
        ("nan,0,1", False, "between"),
        ("inf,0,1", False, "between"),
    ],
)
def test_refused_indices(text, hexagonal, says):
    with pytest.raises(IndicesError, match=says) as caught:
        parse_indices(text, hexagonal)
    assert "indices" in str(caught.value)


def test_form_with_a_distance():
    assert parse_form("1,1,0:1.25") == ((1, 1, 0), 1.25)
    assert parse_form("111") == ((1, 1, 1), 1.0)
    for wrong in ("111:", "111:x", "111:-1", "111:0", "111:nan", "111:inf"):
        with pytest.raises(IndicesError, match="not a positive number"):
            parse_form(wrong)


def test_writing_indices():
    assert write_face((1, -1, 0)) == "(1-10)"
    assert write_face((1, 0, 1), hexagonal=True, brackets="{}") == "{10-11}"
    assert write_face((10, -1, 0)) == "(10,-1,0)"
    assert printed("(1-10)") == "(11̅0)"
    assert printed("(10,-11,0)") == "(10,1̅1̅,0)"
    assert check_indices([2.0, 4.0, 0.0]) == (1, 2, 0)


def test_groups_without_a_lattice_have_no_list_of_forms():
    with pytest.raises(IndicesError, match="no lattice"):
        forms_of(point_group("5m"))
