"""Stereograms and solids as drawings: places on the disc, marks and keys."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import mirrorlab as ml
from mirrorlab.crystal.combinations import combination
from mirrorlab.crystal.compare import compare_points
from mirrorlab.crystal.lattices import align
from mirrorlab.crystal.point_lists import parse_points
from mirrorlab.crystal.pointgroups import point_group
from mirrorlab.drawing.form import form_drawing
from mirrorlab.drawing.model import Role
from mirrorlab.drawing.projection import Projection, ProjectionError
from mirrorlab.drawing.stereogram import (
    StereogramOptions,
    arrangement_stereogram,
    clear_direction,
    group_stereogram,
    list_stereogram,
)

FAMILIES = [["90", "60", "45"], ["90", "60", "36"], ["90", "90", "60"], ["60"], []]


def marks(drawing, role):
    """Positions of a role by symbol."""
    found = {}
    for block in drawing.points:
        if block.role is role:
            found.setdefault(block.symbol, []).extend(block.positions.tolist())
    return found


@settings(deadline=None)
@given(st.tuples(*[st.floats(-1, 1)] * 3).filter(lambda v: np.linalg.norm(v) > 1e-3))
def test_radius_by_definition(direction):
    """Wulff: tan of half the polar distance; Schmidt: √2 sin of half of it (handbook formulas, from memory)."""
    unit = np.array(direction) / np.linalg.norm(direction)
    polar = np.arccos(np.clip(abs(unit[2]), -1, 1))
    for net, radius in (("wulff", np.tan(polar / 2)), ("schmidt", np.sqrt(2) * np.sin(polar / 2))):
        place, upper = Projection(net).project([unit])
        assert np.hypot(*place[0, :2]) == pytest.approx(radius, abs=1e-7)
        assert place[0, 2] == 0
        if abs(unit[2]) > 1e-6:
            assert upper[0] == (unit[2] > 0)


def test_x_points_to_the_reader_and_y_to_the_right():
    places, _ = Projection().project([[1, 0, 0], [0, 1, 0], [0, 0, 1]])
    assert np.allclose(places[:, :2], [[0, -1], [1, 0], [0, 0]])


@settings(deadline=None)
@given(st.tuples(*[st.floats(-1, 1)] * 3).filter(lambda v: np.linalg.norm(v) > 1e-2))
def test_traces_are_great_circles(normal):
    """In the equal-angle projection every circle stays a circle, and a great one meets the rim at opposite points."""
    places, rim = Projection().trace(normal)
    if rim:
        return
    assert np.linalg.norm(places, axis=1).max() <= 1 + 1e-9
    assert np.allclose(places[0], -places[-1], atol=1e-9)
    x, y = places[:, 0], places[:, 1]
    circle = np.column_stack([x**2 + y**2 - 1, x, y])  # all points: a(x² + y² − 1) + bx + cy = 0
    assert np.linalg.svd(circle, compute_uv=False)[-1] < 1e-7


def test_net_covers_both_families_every_ten_degrees():
    projection = Projection()
    meridians, parallels = projection.meridians(), projection.parallels()
    assert (len(meridians), len(parallels)) == (17, 17)
    assert sum(main for _, main in meridians) == 5
    # The parallel 30° from the top crosses the middle line 60° from the centre: tan 30°.
    heights = [float(places[len(places) // 2, 1]) for places, _ in parallels]
    assert heights[2] == pytest.approx(np.tan(np.radians(30)))


def test_refused_projections():
    with pytest.raises(ProjectionError, match="wulff and schmidt"):
        Projection("mercator")
    with pytest.raises(ProjectionError, match="differ"):
        Projection(up=(0, 0, 1), bottom=(0, 0, 2))


@pytest.mark.parametrize(
    ("symbol", "wanted"),
    # Marks of axes in the stereogram of a group: International Tables A, chapter 10.1 (from memory). Axes that
    # lie in the plane of the picture show at both ends, tilted ones once.
    [
        ("m-3m", {"4": 5, "-3": 4, "2": 8, "-1": 1}),
        ("-43m", {"-4": 5, "3": 4}),
        ("432", {"4": 5, "3": 4, "2": 8}),
        ("6/mmm", {"6": 1, "2": 12, "-1": 1}),
        ("-6m2", {"-6": 1, "2": 6}),
        ("-3m", {"-3": 1, "2": 6}),
        ("-42m", {"-4": 1, "2": 4}),
        ("mm2", {"2": 1}),
        ("2/m", {"2": 2, "-1": 1}),
        ("-1", {"-1": 1}),
        ("m", {}),
    ],
)
def test_axes_carry_their_trade_symbols(symbol, wanted):
    found = {
        mark: len(places) for mark, places in marks(group_stereogram(point_group(symbol)), Role.AXIS).items()
    }
    assert found == wanted


@pytest.mark.parametrize("symbol", ["1", "m", "-3", "-42m", "6/mmm", "m-3m", "5m", "m-3-5"])
def test_general_position_has_a_mark_for_every_operation(symbol):
    group = point_group(symbol)
    drawing = group_stereogram(group)
    keys = [
        key
        for block in drawing.points
        if block.role in (Role.IMAGE_EVEN, Role.IMAGE_ODD)
        for key in block.keys
    ]
    assert sorted(keys) == [("image", k) for k in range(group.order)]
    lines = [line for line in drawing.lines if line.role is Role.GENERATED_MIRROR]
    assert len(lines) == len(group.mirrors)
    assert drawing.flat
    for block in drawing.points:
        assert np.allclose(block.positions[:, 2], 0)
        assert np.linalg.norm(block.positions, axis=1).max() <= 1 + 1e-9


def test_upper_and_lower_marks():
    # The mirror of m11m lies in the plane of the picture: each upper point stands over a lower one.
    group = point_group("11m")
    images = [
        block for block in group_stereogram(group).points if block.role in (Role.IMAGE_EVEN, Role.IMAGE_ODD)
    ]
    assert {block.symbol for block in images} == {"+", "o"}
    assert np.allclose(images[0].positions, images[1].positions)


@settings(deadline=None, max_examples=20)
@given(st.sampled_from(["222", "-3m", "-43m", "m-3m", "6/mmm"]))
def test_clear_direction_is_general(symbol):
    group = point_group(symbol)
    direction = clear_direction(group.cartesian)
    images = group.cartesian @ direction
    assert len(np.unique(np.round(images, 6), axis=0)) == group.order


@pytest.mark.parametrize("angles", FAMILIES, ids=lambda angles: " ".join(angles) or "one mirror")
def test_an_arrangement_keeps_the_keys_of_the_picture_in_space(angles):
    arrangement = ml.Arrangement.from_angles(angles)
    finding = arrangement.finding()
    orbit = arrangement.orbit(heights=[1.0, 2.0, 3.0][: finding.rank])
    for alignment in (None, align(finding)):
        drawing = arrangement_stereogram(arrangement, finding, orbit, alignment)
        typed = [line.key for line in drawing.lines if line.role is Role.TYPED_MIRROR]
        generated = [line.key for line in drawing.lines if line.role is Role.GENERATED_MIRROR]
        assert typed == [("mirror", i) for i in range(arrangement.size)]
        assert len(typed) + len(generated) == finding.mirror_count
        images = {key for block in drawing.points for key in block.keys if key[0] == "image"}
        assert images == {("image", k) for k in range(len(orbit.points))}
        assert len(marks(drawing, Role.SEED)) == 1
        letters = [label.text for label in drawing.labels if label.role is Role.TYPED_MIRROR]
        assert letters == list(arrangement.letters)


def test_no_stereogram_of_a_tube():
    arrangement = ml.Arrangement.from_angles(["60", "60", "60"])
    drawing = arrangement_stereogram(arrangement, arrangement.finding())
    assert not drawing.lines
    assert "stereogram" in drawing.notes[0]


def test_poles_of_a_combination():
    made = combination(point_group("m-3m"), ["100", "111"], [1, 1.2])
    drawing = group_stereogram(made.group, made, options=StereogramOptions(underlay=True))
    blocks = [block for block in drawing.points if block.role is Role.FACE]
    keys = [key for block in blocks for key in block.keys]
    assert sorted(keys) == [("face", k) for k in range(14)]
    texts = {label.text for label in drawing.labels if label.role is Role.FACE}
    assert {"(001)", "(1̅00)", "(111)"} <= texts
    assert sum(line.role is Role.NET for line in drawing.lines) == 34
    # The pole of (111) stands 54.7356° from the middle: tan of half of it.
    octahedron = next(block for block in blocks if block.index == 1 and block.symbol == "+")
    assert np.linalg.norm(octahedron.positions[0]) == pytest.approx(np.tan(np.arccos(1 / np.sqrt(3)) / 2))


def test_long_indices_do_not_lie_over_one_another():
    made = combination(point_group("m-3-5"), ["111", "100"], [1, 1])
    labels = [one for one in group_stereogram(made.group, made).labels if one.role is Role.FACE]
    assert {one.text for one in labels} == {"(111)", "(100)"}


@pytest.mark.parametrize(("symbol", "faces"), [("m-3m", ["100", "111"]), ("4mm", ["101"]), ("1", ["100"])])
def test_form_drawing(symbol, faces):
    made = combination(point_group(symbol), faces)
    drawing = form_drawing(made)
    shown = {key for block in drawing.faces for key in block.keys}
    assert shown == {("face", k) for k, corners in enumerate(made.solid.faces) if corners}
    for block in drawing.faces:
        corners = block.vertices[block.triangles]
        normals = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
        for normal, (_, k) in zip(normals, block.keys, strict=True):
            assert normal @ made.solid.normals[k] > 0
    assert sum(line.key[0] == "edge" for line in drawing.lines) == len(made.solid.edges)
    assert np.linalg.norm(drawing.faces[0].vertices, axis=1).max() == pytest.approx(1)
    assert ("open" in " ".join(drawing.notes)) == (not made.closed)


def test_a_list_with_one_point_moved_flags_it_and_the_mirrors_it_breaks():
    """All images of a point of mmm, the last one moved: mirrors break, and only the moved point stands apart."""
    signs = np.array(np.meshgrid([1, -1], [1, -1], [1, -1])).reshape(3, -1).T
    rows = signs * [0.3, 0.5, 0.9]
    rows[-1] *= [1.2, 0.9, 1.0]
    text = "label,x,y,z\n" + "".join(f"P{k},{x},{y},{z}\n" for k, (x, y, z) in enumerate(rows))
    drawing = list_stereogram(compare_points(parse_points(text, "K-7"), "mmm", 0.01))
    assert "K-7" in drawing.title
    assert [line.role for line in drawing.lines if line.key[0] == "generated"] == [Role.FLAGGED] * 3
    listed = {key: block.role for block in drawing.points for key in block.keys if key[0] == "listed"}
    assert [k for (_, k), role in sorted(listed.items()) if role is Role.FLAGGED] == [7]
    assert len(listed) == 8
    assert drawing.notes
    for block in drawing.points:
        for (kind, k), place in zip(block.keys, block.positions, strict=True):
            if kind == "listed":
                np.testing.assert_allclose(place, Projection().project(rows[k])[0][0], atol=1e-9)


def test_a_list_that_obeys_flags_nothing():
    text = "label,x,y,z\n" + "".join(
        f"P{k},{s},{t},0.5\n" for k, (s, t) in enumerate([(1, 1), (1, -1), (-1, 1), (-1, -1)])
    )
    drawing = list_stereogram(compare_points(parse_points(text, "K-8"), "mm2", 0.01))
    assert not any(part.role is Role.FLAGGED for part in (*drawing.lines, *drawing.points))
    assert not drawing.notes
    assert any(block.role is Role.AXIS and block.symbol == "2" for block in drawing.points)
