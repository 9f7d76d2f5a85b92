"""Pictures in space: what is in them, and that it stands where it should."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable

import numpy as np
import pytest

import mirrorlab as ml
from mirrorlab.drawing.model import Drawing, Role
from mirrorlab.drawing.openspace import first_images
from mirrorlab.drawing.space import MOST_DRAWN, SpaceOptions, image_points, space_drawing

Drawn = Callable[..., Drawing]


def area(drawing: Drawing, roles: tuple[Role, ...]) -> float:
    total = 0.0
    for faces in drawing.faces:
        if faces.role in roles:
            p = faces.vertices[faces.triangles]
            total += 0.5 * float(np.linalg.norm(np.cross(p[:, 1] - p[:, 0], p[:, 2] - p[:, 0]), axis=1).sum())
    return total


def keys_of(drawing: Drawing, kind: str) -> set[tuple[str, int]]:
    found = {key for faces in drawing.faces for key in faces.keys}
    found |= {line.key for line in drawing.lines} | {key for p in drawing.points for key in p.keys}
    return {key for key in found if key[0] == kind}


CHAMBERS = (Role.CHAMBER_EVEN, Role.CHAMBER_ODD, Role.REGION)


@pytest.mark.parametrize(
    ("angles", "order", "mirrors"),
    [(["90", "60", "45"], 48, 9), (["90", "60", "36"], 120, 15), (["90", "90", "20"], 36, 10)],
)
def test_the_sphere_is_cut_into_all_chambers(drawn: Drawn, angles: list[str], order: int, mirrors: int):
    drawing = drawn(angles)
    assert len(keys_of(drawing, "chamber")) == order
    assert len(keys_of(drawing, "generated")) + 3 == mirrors
    assert keys_of(drawing, "mirror") == {("mirror", i) for i in range(3)}
    assert area(drawing, CHAMBERS) == pytest.approx(4 * np.pi, rel=4e-3)
    assert area(drawing, (Role.REGION,)) == pytest.approx(4 * np.pi / order, rel=8e-3)
    even, odd = area(drawing, (Role.CHAMBER_EVEN,)), area(drawing, (Role.CHAMBER_ODD,))
    assert odd - even == pytest.approx(area(drawing, (Role.REGION,)), rel=2e-2), "the region itself is even"
    assert not drawing.flat
    assert drawing.seed_on == "sphere"


def test_parity_changes_across_every_mirror(drawn: Drawn):
    drawing = drawn(["90", "60", "45"])
    finding = ml.Arrangement.from_angles(["90", "60", "45"]).finding()
    middles, parity = [], []
    for faces in drawing.faces:
        if faces.role in CHAMBERS:
            odd = faces.role is Role.CHAMBER_ODD or (faces.role is Role.REGION and faces.index == 1)
            for key in dict.fromkeys(faces.keys):
                rows = [t for t, k in zip(faces.triangles, faces.keys, strict=True) if k == key]
                middles.append(faces.vertices[np.array(rows)].mean(axis=(0, 1)))
                parity.append(int(odd))
    middles = np.array(middles) / np.linalg.norm(middles, axis=1, keepdims=True)
    for mirror in finding.group.simple:
        images = middles - 2 * (middles @ mirror)[:, None] * mirror
        partner = np.linalg.norm(images[:, None] - middles[None], axis=2).argmin(axis=1)
        assert np.abs(images - middles[partner]).max() < 1e-9
        assert (np.array(parity)[partner] != np.array(parity)).all()


def test_image_k_lies_in_chamber_k(drawn: Drawn):
    for angles in (["90", "60", "45"], ["90", "60", "72"]):
        drawing = drawn(angles, weights=[0.3, 0.5, 0.2])
        middles = {}
        for faces in drawing.faces:
            if faces.role in CHAMBERS:
                for t, key in zip(faces.triangles, faces.keys, strict=True):
                    middles.setdefault(key[1], []).append(faces.vertices[t].mean(axis=0))
        middles = {k: np.mean(v, axis=0) for k, v in middles.items()}
        mirrors = ml.Arrangement.from_angles(angles).finding().group.mirrors
        images = {
            key[1]: place for p in drawing.points for key, place in zip(p.keys, p.positions, strict=True)
        }
        assert images.keys() == middles.keys()
        for k, place in images.items():
            assert ((mirrors @ place > 0) == (mirrors @ middles[k] > 0)).all(), k


def test_images_stand_in_their_directions(drawn: Drawn):
    arrangement = ml.Arrangement.from_angles(["90", "60", "45"])
    orbit = arrangement.orbit(heights=[1, 2, 3])
    drawing = drawn(["90", "60", "45"], heights=[1, 2, 3])
    unit = orbit.points / np.linalg.norm(orbit.points, axis=1, keepdims=True)
    counts = Counter()
    for p in drawing.points:
        for key, place in zip(p.keys, p.positions, strict=True):
            np.testing.assert_allclose(place, unit[key[1]], atol=1e-12)
            counts[p.role] += 1
            if p.role in (Role.IMAGE_EVEN, Role.IMAGE_ODD):
                assert orbit.parity[key[1]] == int(p.role is Role.IMAGE_ODD)
    assert counts == {Role.SEED: 1, Role.IMAGE_EVEN: 23, Role.IMAGE_ODD: 24}


def test_a_subdivided_region_holds_its_chambers(drawn: Drawn):
    angles = ["90", "60", "72"]
    finding = ml.Arrangement.from_angles(angles).finding()
    assert finding.kind == "closed-subdivided"
    drawing = drawn(angles)
    inside = {k for faces in drawing.faces if faces.role is Role.REGION for k in faces.keys}
    assert len(inside) == finding.chambers_between
    assert {faces.index for faces in drawing.faces if faces.role is Role.REGION} == {0, 1}


def test_the_letters_stand_on_their_mirrors_apart(drawn: Drawn):
    arrangement = ml.Arrangement.from_angles(["90", "60", "36"])
    drawing = drawn(["90", "60", "36"])
    assert {label.text for label in drawing.labels} == {"a", "b", "c"}
    for label in drawing.labels:
        assert label.position @ arrangement.normals[label.index] == pytest.approx(0, abs=1e-9)
    places = np.array([label.position for label in drawing.labels])
    apart = np.linalg.norm(places[:, None] - places[None], axis=2) + 9 * np.eye(len(places))
    assert apart.min() > 0.15


def test_options_leave_parts_out(drawn: Drawn):
    bare = drawn(["90", "60", "45"], chambers=False, mirrors=False, discs=False, images=False, region=False)
    assert not bare.faces
    assert not bare.points
    assert {line.role for line in bare.lines} == {Role.TYPED_MIRROR}
    assert drawn(["90", "60", "45"], chambers=False).faces[0].role is Role.TYPED_MIRROR


def test_unbuildable_is_an_empty_drawing_with_a_note(drawn: Drawn):
    drawing = drawn(["30", "30", "30"])
    assert not drawing.faces
    assert not drawing.lines
    assert not drawing.points
    assert drawing.notes[0]


def test_open_says_how_many_of_endlessly_many(drawn: Drawn):
    drawing = drawn(["90", "60", "50"])
    assert ml.Arrangement.from_angles(["90", "60", "50"]).finding().kind == "open"
    count = sum(len(p.positions) for p in drawing.points)
    assert count == 200
    assert "first 200 of endlessly many" in drawing.notes[0]
    assert any(line.role is Role.GENERATED_MIRROR for line in drawing.lines)
    few = drawn(["90", "60", "50"], first=30)
    assert sum(len(p.positions) for p in few.points) == 30


def test_first_images_are_those_of_fewest_reflections():
    normals = ml.Arrangement.from_angles(["90", "60", "45"]).normals
    orbit = ml.Arrangement.from_angles(["90", "60", "45"]).orbit(heights=[0.3, 0.4, 0.5])
    points, depth, parent = first_images(normals, orbit.seed, 1000)
    assert len(points) == 48, "a closed arrangement has no more"
    for point, deep, before in zip(points, depth, parent, strict=True):
        k = int(np.linalg.norm(orbit.points - point, axis=1).argmin())
        np.testing.assert_allclose(orbit.points[k], point, atol=1e-9)
        assert orbit.depth[k] == deep
        assert depth[before] == max(deep - 1, 0)


@pytest.mark.parametrize("angles", [["60"], ["36"], ["72"], ["1"]])
def test_two_mirrors_stand_on_a_table_of_sectors(drawn: Drawn, angles: list[str]):
    finding = ml.Arrangement.from_angles(angles).finding()
    for flat in (False, True):
        drawing = drawn(angles, flat=flat)
        assert drawing.flat is flat
        assert len(keys_of(drawing, "chamber")) == finding.order
        assert area(drawing, CHAMBERS) == pytest.approx(np.pi, rel=4e-3)
        region = area(drawing, (Role.REGION,))
        assert region == pytest.approx(np.pi * finding.chambers_between / finding.order, rel=4e-3)
        if flat:
            assert all((faces.vertices[:, 2] == 0).all() for faces in drawing.faces)
    upright = [faces for faces in drawn(angles).faces if faces.role is Role.TYPED_MIRROR]
    normals = ml.Arrangement.from_angles(angles).normals
    for faces in upright:
        np.testing.assert_allclose(faces.vertices[:, :2] @ normals[faces.index], 0, atol=1e-12)


def test_one_mirror(drawn: Drawn):
    drawing = drawn(ml.Arrangement.from_normals([[1.0, 0, 0]]))
    assert len(keys_of(drawing, "chamber")) == 2
    assert area(drawing, CHAMBERS) == pytest.approx(np.pi, rel=4e-3)


def test_planes_through_one_line_in_space_keep_their_frame(drawn: Drawn):
    normals = np.array([[0.0, 1, 0], [0, 0, 1]])
    drawing = drawn(ml.Arrangement.from_normals(normals))
    edge = next(line for line in drawing.lines if line.key == ("edge", 0))
    np.testing.assert_allclose(edge.points[:, 1:], 0, atol=1e-12)


def test_rank_three_in_more_dimensions(drawn: Drawn):
    rows = ml.Arrangement.from_angles(["90", "60", "45"]).normals
    axes = np.linalg.qr(np.random.default_rng(3).normal(size=(5, 3)))[0].T
    drawing = drawn(ml.Arrangement.from_normals(rows @ axes))
    assert len(keys_of(drawing, "chamber")) == 48
    assert area(drawing, CHAMBERS) == pytest.approx(4 * np.pi, rel=4e-3)


def test_nine_mirrors_at_once(drawn: Drawn):
    group = ml.Arrangement.from_angles(["90", "60", "45"]).finding().group
    drawing = drawn(ml.Arrangement.from_normals(group.mirrors))
    assert keys_of(drawing, "mirror") == {("mirror", i) for i in range(9)}
    assert not keys_of(drawing, "generated")
    assert {label.text for label in drawing.labels} == set("abcdefghi")


def test_higher_ranks_say_where_to_look(drawn: Drawn):
    drawing = drawn("B4")
    assert not drawing.faces
    assert "Coxeter plane" in drawing.notes[0]


def test_too_many_chambers_or_images_are_told(drawn: Drawn):
    assert not drawn(["90", "90", "pi/360"]).notes, "1440 chambers are drawn"
    many = drawn("A1xI2(800)")
    assert "3,200 chambers are too many" in many.notes[0]
    assert not keys_of(many, "chamber")
    arrangement = ml.Arrangement.from_family("F4")
    orbit = arrangement.orbit(place="centre")
    three = type(orbit)(
        **{**orbit.__dict__, "points": np.tile(orbit.points[:, :3], (20, 1))[: MOST_DRAWN + 5]}
    )
    assert len(three.points) == MOST_DRAWN + 5
    parity = np.resize(orbit.parity, len(three.points))
    three = type(orbit)(**{**three.__dict__, "parity": parity})
    blocks, note = image_points(three)
    assert sum(len(p.positions) for p in blocks) == MOST_DRAWN
    assert f"{MOST_DRAWN:,} of {MOST_DRAWN + 5:,}" in note


def test_dragging_a_seed_keeps_the_same_faces():
    arrangement = ml.Arrangement.from_angles(["90", "60", "45"])
    finding = arrangement.finding()
    one = space_drawing(arrangement, finding, arrangement.orbit(heights=[1, 1, 1]), SpaceOptions())
    two = space_drawing(arrangement, finding, arrangement.orbit(heights=[1, 2, 1]), SpaceOptions())
    same = [a is b for a, b in zip(one.faces, two.faces, strict=True) if a.role in CHAMBERS]
    assert same
    assert all(same)
