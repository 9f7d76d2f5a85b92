"""Flat shapes, joints with thickness, and folding back together."""

from __future__ import annotations

import dataclasses
from itertools import pairwise
from types import SimpleNamespace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.spatial import ConvexHull

from mirrorlab.optics import polygon
from mirrorlab.optics.folding import fold_by_bevels, fold_by_shapes
from mirrorlab.optics.glass import JointSettings, Order, make_panes
from mirrorlab.optics.joints import JointError, JointKind, Surface, joint_sides
from mirrorlab.optics.panels import PanelError, edge_angles, flatten_panels

# Assemblies from first principles, so that these tests lean on no other module's geometry.


def _panel(letter, outline, inside, edges):
    outline = np.asarray(outline, dtype=float)
    normal = np.cross(outline[1] - outline[0], outline[2] - outline[0])
    normal /= np.linalg.norm(normal)
    if normal @ (inside - outline[0]) < 0:
        outline, normal = outline[::-1], -normal
        edges = tuple(edges[(len(edges) - 2 - i) % len(edges)] for i in range(len(edges)))
    return SimpleNamespace(letter=letter, outline=outline, normal=normal, edges=tuple(edges))


def _assembly(kind, panels):
    dihedrals = {}
    for i, p in enumerate(panels):
        for j, q in enumerate(panels):
            if i < j and q.letter in p.edges:
                dihedrals[i, j] = float(np.arccos(np.clip(-p.normal @ q.normal, -1, 1)))
    return SimpleNamespace(kind=kind, panels=tuple(panels), dihedrals=dihedrals)


def wedge(degrees, width=120.0, length=200.0):
    angle = np.radians(degrees)
    far = width * np.array([np.cos(angle), np.sin(angle), 0])
    up = np.array([0, 0, length])
    near = np.array([width, 0, 0])
    zero = np.zeros(3)
    inside = (near + far) / 2 + up / 2
    return _assembly(
        "wedge",
        [
            _panel("a", [zero, near, near + up, up], inside, ("", "", "", "b")),
            _panel("b", [zero, far, far + up, up], inside, ("", "", "", "a")),
        ],
    )


def corner(ab, ac, bc, size=150.0, cut=0.0):
    """Three mirrors to a point, angles in degrees; `cut` is the part of each edge cut off at the tip."""
    gram = -np.cos(np.radians([[180, ab, ac], [ab, 180, bc], [ac, bc, 180]]))
    normals = np.linalg.cholesky(gram)
    edges = {}
    for i, j in ((0, 1), (0, 2), (1, 2)):
        k = 3 - i - j
        direction = np.cross(normals[i], normals[j])
        direction *= np.sign(direction @ normals[k])
        edges[i, j] = edges[j, i] = size * direction / np.linalg.norm(direction)
    inside = sum(edges[pair] for pair in ((0, 1), (0, 2), (1, 2))) / 3
    panels = []
    for i in range(3):
        j, k = (m for m in range(3) if m != i)
        one, two = edges[i, j], edges[i, k]
        if cut:
            outline, names = [one * cut, one, two, two * cut], ("abc"[j], "", "abc"[k], "")
        else:
            outline, names = [np.zeros(3), one, two], ("abc"[j], "", "abc"[k])
        panels.append(_panel("abc"[i], outline, inside, names))
    return _assembly("corner", panels)


def tube(cross_section, length=200.0, taper=1.0):
    """Mirrors around a polygon (counter-clockwise, mm); `taper` scales the far end about the centroid."""
    base = np.asarray(cross_section, dtype=float)
    centre = base.mean(axis=0)
    low = np.column_stack([base, np.zeros(len(base))])
    high = np.column_stack([centre + taper * (base - centre), np.full(len(base), length)])
    inside = np.append(centre, length / 2)
    letters, panels = "abcd"[: len(base)], []
    for i in range(len(base)):
        j = (i + 1) % len(base)
        names = ("", letters[(i + 1) % len(base)], "", letters[i - 1])
        panels.append(_panel(letters[i], [low[i], low[j], high[j], high[i]], inside, names))
    return _assembly("tube", panels)


EQUILATERAL = [(0, 0), (60, 0), (30, 60 * np.sqrt(0.75))]
RECTANGLE = [(0, 0), (80, 0), (80, 50), (0, 50)]
SHAPES = {
    "wedge 30": lambda: wedge(30),
    "wedge 72": lambda: wedge(72),
    "wedge 120": lambda: wedge(120),
    "corner 90 60 60": lambda: corner(90, 60, 60),
    "corner 90 60 45": lambda: corner(90, 60, 45),
    "corner 90 60 36 cut": lambda: corner(90, 60, 36, cut=0.3),
    "right corner": lambda: corner(90, 90, 90),
    "tube 60": lambda: tube(EQUILATERAL),
    "tube 60 tapered": lambda: tube(EQUILATERAL, taper=0.5),
    "tube 90 45 45": lambda: tube([(0, 0), (70, 0), (0, 70)]),
    "tube rectangle": lambda: tube(RECTANGLE),
    "tube rectangle tapered": lambda: tube(RECTANGLE, taper=0.6),
}


# The order says which pane runs past which: it matters to butted joints only.
WAYS = [
    (JointKind.MITRED, Order.ROUND),
    (JointKind.BUTTED, Order.ROUND),
    (JointKind.BUTTED, Order.FIRST),
    (JointKind.SQUARE, Order.ROUND),
]


@pytest.mark.parametrize("name", SHAPES)
def test_flat_shape_is_the_shape_in_space(name):
    assembly = SHAPES[name]()
    for panel, flat in zip(assembly.panels, flatten_panels(assembly), strict=True):
        back = flat.in_space(flat.outline)
        assert min(np.abs(np.roll(back, k, axis=0) - panel.outline).max() for k in range(len(back))) < 1e-9
        assert flat.area > 0
        assert np.allclose(np.cross(flat.axes[0], flat.axes[1]), panel.normal)
        assert np.isclose(flat.corner_angles.sum(), (len(flat.outline) - 2) * np.pi)


@pytest.mark.parametrize(("kind", "order"), WAYS)
@pytest.mark.parametrize("surface", Surface)
@pytest.mark.parametrize("name", SHAPES)
def test_folded_panes_return_the_dihedral_angles(name, kind, surface, order):
    flat = flatten_panels(SHAPES[name]())
    panes = make_panes(flat, 3.0, [surface] * len(flat), JointSettings(kind, order))
    bevels, shapes = fold_by_bevels(panes), fold_by_shapes(flat)
    if kind is not JointKind.SQUARE:
        joints = sum(bool(n) for panel in flat for n in panel.neighbours) // 2
        assert len(bevels.dihedrals) == joints
        assert bevels.angle_error < 1e-9
        assert bevels.opening < 1e-6
    if len(flat) == 3:
        assert len(shapes.dihedrals) == 3
        assert shapes.angle_error < 1e-6
        assert shapes.opening < 1e-6


@pytest.mark.parametrize("meets", ["a", "c"])
def test_a_wrong_bevel_does_not_fold_shut(meets):
    flat = flatten_panels(corner(90, 60, 45))
    panes = make_panes(flat, 3.0, [Surface.FIRST] * 3)
    slip = np.array([0.2 if n == meets else 0.0 for n in flat[1].neighbours])
    wrong = dataclasses.replace(panes[1], clear=polygon.move_sides(panes[1].clear, slip))
    assert fold_by_bevels([panes[0], wrong, panes[2]]).angle_error > np.radians(0.5)


def test_a_wrong_shape_does_not_fold_to_the_angles():
    flat = flatten_panels(corner(90, 60, 45))
    wrong = dataclasses.replace(flat[1], outline=flat[1].outline * np.array([1.05, 1.0]))
    fold = fold_by_shapes([flat[0], wrong, flat[2]])
    assert fold.angle_error > np.radians(0.5) or fold.opening > 0.5


def _solid(pane):
    """Corners of the glass in space."""
    shift = pane.clear_height * pane.flat.axes[2]
    return np.vstack([pane.flat.in_space(pane.coated), pane.flat.in_space(pane.clear) + shift])


def _overlap(one, other):
    """How deep two convex solids stand in each other: the best of all separating directions (mm)."""
    hulls = [ConvexHull(points) for points in (one, other)]
    directions = np.vstack([hull.equations[:, :3] for hull in hulls])
    edges = []
    for hull, points in zip(hulls, (one, other), strict=True):
        pairs = {tuple(sorted((s[i], s[j]))) for s in hull.simplices for i, j in ((0, 1), (1, 2), (0, 2))}
        edges.append(np.array([points[j] - points[i] for i, j in pairs]))
    crosses = np.cross(edges[0][:, None], edges[1][None]).reshape(-1, 3)
    crosses = crosses[np.linalg.norm(crosses, axis=1) > 1e-6]
    directions = np.vstack([directions, crosses / np.linalg.norm(crosses, axis=1, keepdims=True)])
    directions = np.vstack([directions, -directions])
    return float(np.min(np.max(one @ directions.T, axis=0) - np.min(other @ directions.T, axis=0)))


@pytest.mark.parametrize(("kind", "order"), WAYS)
@pytest.mark.parametrize("surface", Surface)
@pytest.mark.parametrize("name", SHAPES)
def test_no_two_panes_stand_in_each_other_and_joints_touch(name, kind, surface, order):
    flat = flatten_panels(SHAPES[name]())
    panes = make_panes(flat, 3.0, [surface] * len(flat), JointSettings(kind, order))
    solids = [_solid(pane) for pane in panes]
    for i, pane in enumerate(panes):
        for j in range(i):
            depth = _overlap(solids[i], solids[j])
            assert depth < 1e-6
            if panes[j].letter in pane.flat.neighbours:
                assert depth > -1e-6


@pytest.mark.parametrize("surfaces", [("first", "second", "first"), ("second", "first", "second")])
@pytest.mark.parametrize("name", ["corner 90 60 45", "tube 60", "right corner"])
def test_panes_of_both_surfaces_do_not_stand_in_each_other(name, surfaces):
    flat = flatten_panels(SHAPES[name]())
    panes = make_panes(flat, 4.0, [Surface(s) for s in surfaces])
    solids = [_solid(pane) for pane in panes]
    for i in range(3):
        for j in range(i):
            assert _overlap(solids[i], solids[j]) < 1e-6


def test_a_gap_stands_between_the_panes():
    flat = flatten_panels(tube(EQUILATERAL))
    for kind in JointKind:
        for surface in Surface:
            panes = make_panes(flat, 3.0, [surface] * 3, JointSettings(kind, gap=0.8))
            solids = [_solid(pane) for pane in panes]
            # Square edges face each other with parallel arrises, so their nearest corners measure the gap.
            nearest = np.linalg.norm(solids[0][:, None] - solids[1][None], axis=2).min()
            found = nearest if kind is JointKind.SQUARE else -_overlap(solids[0], solids[1])
            assert found == pytest.approx(0.8, abs=1e-6), (kind, surface)


def test_right_angle_with_3_mm_glass_by_hand():
    for surface, sign in ((Surface.FIRST, -1), (Surface.SECOND, 1)):
        one, two = joint_sides(JointKind.MITRED, np.pi / 2, 3.0, (surface, surface), ("a", "b"))
        assert one.other_offset == two.other_offset == pytest.approx(sign * 3.0)
        assert np.degrees(abs(one.bevel)) == pytest.approx(45)
    over, under = joint_sides(JointKind.BUTTED, np.pi / 2, 3.0, (Surface.FIRST,) * 2, ("a", "b"))
    assert (over.mirror_offset, under.mirror_offset) == pytest.approx((-3, 0))
    assert under.bevel == pytest.approx(0, abs=1e-12)
    assert (over.role, under.role) == ("over", "under")
    over, under = joint_sides(JointKind.BUTTED, np.pi / 2, 3.0, (Surface.SECOND,) * 2, ("a", "b"))
    assert (over.mirror_offset, under.mirror_offset) == pytest.approx((0, 3), abs=1e-12)


def test_bevel_angles_of_a_60_degree_tube():
    flat = flatten_panels(tube(EQUILATERAL))
    mitred = make_panes(flat, 3.0, [Surface.FIRST] * 3)
    assert np.degrees([abs(s.bevel) for p in mitred for s in p.sides if s.neighbour]) == pytest.approx(
        [60] * 6
    )
    assert all(s.is_feather for p in mitred for s in p.sides if s.neighbour)
    assert {s.longer_face for p in mitred for s in p.sides if s.neighbour} == {"clear"}
    blank = np.sort(polygon.side_lengths(mitred[0].blank))
    assert blank == pytest.approx([60 + 2 * 3 * np.sqrt(3)] * 2 + [200] * 2)


def test_round_order_keeps_equal_panels_equal():
    flat = flatten_panels(tube(EQUILATERAL))
    panes = make_panes(flat, 3.0, [Surface.FIRST] * 3, JointSettings(JointKind.BUTTED, Order.ROUND))
    assert {tuple(sorted(s.role for s in p.sides)) for p in panes} == {("free", "free", "over", "under")}
    sizes = [np.sort(polygon.side_lengths(p.blank)) for p in panes]
    assert all(np.allclose(a, b) for a, b in pairwise(sizes))
    panes = make_panes(flat, 3.0, [Surface.FIRST] * 3, JointSettings(JointKind.BUTTED, Order.FIRST))
    assert [sorted(s.role for s in p.sides if s.neighbour) for p in panes] == [
        ["over", "over"],
        ["over", "under"],
        ["under", "under"],
    ]


def test_zero_thickness_leaves_the_ideal_shape():
    flat = flatten_panels(corner(90, 60, 36))
    for kind in JointKind:
        for pane in make_panes(flat, 0.0, [Surface.FIRST] * 3, JointSettings(kind)):
            assert np.allclose(pane.blank, pane.flat.outline)
            assert not any(side.longer_face for side in pane.sides)


def test_too_thick_glass_is_named():
    flat = flatten_panels(corner(90, 60, 36, size=20))
    with pytest.raises(JointError, match=r"panel [abc]: 30 mm glass leaves nothing"):
        make_panes(flat, 30.0, [Surface.SECOND] * 3)


@pytest.mark.parametrize("angle", [0.0, np.pi, -1.0])
def test_joint_refuses_impossible_angles(angle):
    with pytest.raises(JointError, match="mirrors a and b"):
        joint_sides(JointKind.MITRED, angle, 3.0, (Surface.FIRST,) * 2, ("a", "b"))


def test_joint_words_are_checked():
    with pytest.raises(JointError, match=r"dovetail.*mitred, butted, square"):
        JointSettings.named("dovetail")
    with pytest.raises(JointError, match="zigzag"):
        JointSettings.named("butted", "zigzag")
    with pytest.raises(JointError, match="negative"):
        joint_sides(JointKind.MITRED, 1.0, 3.0, (Surface.FIRST,) * 2, ("a", "b"), gap=-1)


def test_three_mirrors_that_meet_in_no_point():
    with pytest.raises(PanelError, match="60°, 60°, 60°"):
        edge_angles(*np.radians([60, 60, 60]))


def test_broken_panels_are_named():
    good = wedge(60)
    good.panels[1].outline[0] += [0, 0, 1.0]
    with pytest.raises(PanelError):
        flatten_panels(good)
    twisted = wedge(60)
    twisted.panels[0].outline[0] += 2.0 * twisted.panels[0].normal
    with pytest.raises(PanelError, match="panel a: corners lie"):
        flatten_panels(twisted)
    lying = wedge(60)
    lying.dihedrals[0, 1] = np.radians(61)
    with pytest.raises(PanelError, match="mirrors a and b"):
        flatten_panels(lying)
    reversed_ = wedge(60)
    reversed_.panels[0].outline = reversed_.panels[0].outline[::-1]
    with pytest.raises(PanelError, match="counter-clockwise"):
        flatten_panels(reversed_)


@given(st.tuples(*[st.floats(25, 150)] * 3))
@settings(max_examples=60, deadline=None)
def test_edge_angles_agree_with_vectors(angles):
    """Against the corner built from its Gram matrix, for any angles that make one."""
    gram = -np.cos(
        np.radians([[180, angles[0], angles[1]], [angles[0], 180, angles[2]], [angles[1], angles[2], 180]])
    )
    if np.linalg.eigvalsh(gram)[0] < 1e-3:
        return
    panels = flatten_panels(corner(*angles))
    expected = edge_angles(*np.radians(angles))
    for panel, angle in zip(panels, expected, strict=True):
        tip = next(i for i in range(3) if panel.neighbours[i] and panel.neighbours[i - 1])
        assert panel.corner_angles[tip] == pytest.approx(angle, abs=1e-7)


@given(st.floats(0.2, 2.8), st.floats(0.2, 1.4))
@settings(max_examples=40, deadline=None)
def test_minkowski_sum_is_the_hull_of_all_sums(turn, narrow):
    one = polygon.turned(np.array([(0, 0), (3, 0), (3, 1.0), (0, 1)]), turn)
    two = np.array([(0, 0), (2, 0), (narrow, 1.5)])
    sums = (one[:, None] + two[None]).reshape(-1, 2)
    hull = ConvexHull(sums)
    assert polygon.area(polygon.minkowski_sum(one, two)) == pytest.approx(hull.volume)


def test_largest_circle_touches_and_stays_inside():
    outline = np.array([(0, 0), (10, 0), (10, 4.0), (0, 4)])
    centre, radius = polygon.largest_circle(outline)
    assert radius == pytest.approx(2)
    assert centre[1] == pytest.approx(2)
    triangle = np.array([(0, 0), (4, 0), (0, 3.0)])
    assert polygon.largest_circle(triangle)[1] == pytest.approx(1)
