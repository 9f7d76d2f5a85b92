"""Orbits: images, words, stabilisers, limits."""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement, OrbitCancelled, OrbitError, TooLarge, make_orbit
from mirrorlab.mirrors.orbit import ON_WALL, site_families, snap
from mirrorlab.mirrors.place import place_names

NAMES = ["A1", "A2", "I2(5)", "I2(8)", "A3", "B3", "H3", "A1xA2", "A1xA1xA1", "D4", "A4", "B2xI2(5)"]


def keys_of(points):
    return {tuple(np.round(p, 6) + 0.0) for p in points}


def every_place(name):
    arrangement = Arrangement.from_family(name)
    return arrangement, place_names(arrangement.finding().group)


@pytest.mark.parametrize("rotations", [False, True])
@pytest.mark.parametrize("name", NAMES)
def test_images_at_every_kind_of_place(name, rotations, slow):
    arrangement, places = every_place(name)
    group = arrangement.finding().group
    matrices, parity = group.elements()
    if rotations:
        matrices, parity = matrices[parity == 0], parity[parity == 0]
    for place in places:
        orbit = arrangement.orbit(place=place, rotations=rotations)
        assert keys_of(orbit.points) == keys_of(matrices @ orbit.seed)
        assert len(orbit) == len(keys_of(orbit.points)) == orbit.multiplicity
        holders = (np.abs(matrices @ orbit.seed - orbit.seed).max(axis=1) < 1e-9).sum()
        assert orbit.stabiliser_order == holders
        assert len(orbit) * orbit.stabiliser_order == len(matrices)
        assert np.array_equal(orbit.points[0], orbit.seed)
        assert np.allclose(orbit.heights, group.simple @ orbit.seed)


@pytest.mark.parametrize("rotations", [False, True])
@pytest.mark.parametrize("name", NAMES)
def test_words_lead_to_the_images(name, rotations, slow):
    arrangement, places = every_place(name)
    group = arrangement.finding().group
    for place in places:
        orbit = arrangement.orbit(place=place, rotations=rotations)
        words = orbit.words()
        assert words[0] == ""
        assert len(set(words)) == len(words) == len(orbit)
        for word, image, depth in zip(words, orbit.points, orbit.depth, strict=True):
            assert len(word) == depth
            assert np.allclose(slow.apply_word(word, group.letters, group.simple, orbit.seed), image)
            assert not rotations or len(word) % 2 == 0


@pytest.mark.parametrize("name", NAMES)
def test_closed_under_each_mirror(name):
    arrangement = Arrangement.from_family(name)
    group = arrangement.finding().group
    orbit = arrangement.orbit(heights=[1.0 + 0.1 * i for i in range(arrangement.size)])
    for normal in group.mirrors:
        images = orbit.points - 2 * np.outer(orbit.points @ normal, normal)
        assert keys_of(images) == keys_of(orbit.points)


def test_parity_is_the_side_of_an_odd_number_of_mirrors():
    arrangement = Arrangement.from_family("H3")
    orbit = arrangement.orbit(place="centre")
    behind = (orbit.points @ arrangement.finding().group.mirrors.T < 0).sum(axis=1)
    assert np.array_equal(orbit.parity, behind % 2)
    assert np.array_equal(orbit.depth, behind)
    turned = arrangement.orbit(place="centre", rotations=True)
    assert keys_of(turned.points) == keys_of(orbit.points[orbit.parity == 0])
    assert not turned.parity.any()


STABILISERS = {
    "centre": (1, "1", "1", 1, "1", "1"),
    "wall a": (2, "A1", "m", 1, "1", "1"),
    "corner ab": (4, "A1xA1", "mm2", 2, "A1xA1+", "2"),
    "corner ac": (6, "A2", "3m", 3, "A2+", "3"),
    "corner bc": (8, "B2", "4mm", 4, "B2+", "4"),
}


@pytest.mark.parametrize("place", STABILISERS)
def test_stabilisers_with_symbol_and_order(place):
    order, families, symbol, turns, turning, turn_symbol = STABILISERS[place]
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    orbit = arrangement.orbit(place=place)
    assert (orbit.stabiliser_order, orbit.stabiliser) == (order, families)
    assert orbit.stabiliser_symbol.hermann_mauguin == symbol
    rotations = arrangement.orbit(place=place, rotations=True)
    assert (rotations.stabiliser_order, rotations.stabiliser) == (turns, turning)
    assert rotations.stabiliser_symbol.hermann_mauguin == turn_symbol
    assert len(rotations) == 24 // turns


def test_stabiliser_symbol_of_more_than_three_mirrors():
    arrangement = Arrangement.from_family("A5")
    assert arrangement.orbit(place="corner abcd").stabiliser_symbol is None
    assert site_families((), rotations=True) == "1"


def test_the_origin_is_one_image():
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    for rotations in (False, True):
        orbit = arrangement.orbit(point=[0, 0, 0], rotations=rotations)
        assert len(orbit) == 1
        assert orbit.stabiliser_order == (24 if rotations else 48)
        assert orbit.words() == [""]


@pytest.mark.parametrize("scale", [1e-300, 1e-160, 1e-10, 1.0, 1e10, 1e160, 1e290])
def test_size_of_the_seed_does_not_matter(scale):
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    unit = arrangement.orbit(point=[0.3, 0.2, 0.9])
    orbit = arrangement.orbit(point=[0.3 * scale, 0.2 * scale, 0.9 * scale])
    assert len(orbit) == 48
    assert np.allclose(orbit.points / scale, unit.points, rtol=1e-9, atol=1e-12)


@pytest.mark.parametrize("far", [1e305, -1e308, 1e-305, 5e-324])
def test_a_seed_out_of_reach_is_refused(far):
    with pytest.raises(OrbitError, match="so that images can be told"):
        Arrangement.from_angles(["90", "60", "45"]).orbit(point=[far, 0, 0])
    assert len(Arrangement.from_angles(["90", "60", "45"]).orbit(point=[1e-320, 0.5, 1.5])) == 24


def test_a_seed_outside_is_folded_in_and_says_so():
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    inside = arrangement.orbit(heights=[1, 2, 3])
    assert inside.folded == 0
    for image, depth in zip(inside.points, inside.depth, strict=True):
        orbit = arrangement.orbit(point=image)
        assert np.allclose(orbit.seed, inside.seed)
        assert orbit.folded % 2 == depth % 2
        assert keys_of(orbit.points) == keys_of(inside.points)


def test_heights_are_distances_from_the_typed_mirrors():
    arrangement = Arrangement.from_angles(["90", "60", "72"])
    point = arrangement.seed(heights=[0.5, 0.25, 0.75])
    assert np.allclose(arrangement.normals @ point, [0.5, 0.25, 0.75])


@pytest.mark.parametrize(("off", "snaps"), [(0.5, True), (0.99, True), (1.5, False), (10, False)])
def test_snapping_onto_a_wall(off, snaps):
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    point = arrangement.seed(heights=[0, 1, 1])
    point = point + arrangement.normals[0] * off * ON_WALL * np.linalg.norm(point)
    orbit = arrangement.orbit(point=point)
    assert len(orbit) == (24 if snaps else 48)
    assert (orbit.snapped is not None) == snaps
    if snaps:
        assert orbit.snapped == "moved onto wall a (nearer than 1e-06 of its distance)"
        assert abs(orbit.heights[0]) < 1e-15
        assert np.linalg.norm(orbit.seed - point) < 1.01 * ON_WALL * np.linalg.norm(point)


def test_snapping_onto_an_edge_names_both_walls():
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    orbit = arrangement.orbit(heights=[1e-8, -1e-8, 1])
    assert orbit.snapped.startswith("moved onto walls a, b")
    assert len(orbit) == 12


def test_a_seed_exactly_on_a_wall_is_not_moved():
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    orbit = arrangement.orbit(place="wall a")
    assert orbit.snapped is None
    assert orbit.walls == (0,)


def test_snap_leaves_other_points_alone():
    group = Arrangement.from_family("B3").finding().group
    point = group.corners.sum(axis=0)
    moved, walls, was = snap(group, point)
    assert moved is point
    assert (walls, was) == ((), False)


@pytest.mark.parametrize(
    ("given", "match"),
    [
        ({}, "exactly one"),
        ({"place": "centre", "point": [1, 2, 3]}, "exactly one"),
        ({"heights": [1, 2]}, r"heights \[1.0, 2.0\]: 3 finite values"),
        ({"heights": [1, 2, float("nan")]}, "3 finite values"),
        ({"heights": ["x", 1, 2]}, "3 finite values"),
        ({"point": [1, 2]}, "3 finite coordinates"),
        ({"point": [1, 2, float("inf")]}, "3 finite coordinates"),
        ({"point": 5}, "3 finite coordinates"),
        ({"place": "nowhere"}, "accepted are centre, wall a"),
        ({"place": ""}, "accepted are"),
    ],
)
def test_seeds_that_cannot_be_used(given, match):
    with pytest.raises(OrbitError, match=match):
        Arrangement.from_angles(["90", "60", "45"]).orbit(**given)


def test_a_seed_of_another_dimension():
    group = Arrangement.from_family("B3").finding().group
    with pytest.raises(OrbitError, match="give 3 finite coordinates"):
        make_orbit(group, np.ones(2), "")


def test_an_orbit_too_large_is_refused_before_it_is_made():
    arrangement = Arrangement.from_family("E8")
    with pytest.raises(TooLarge, match="images: 696,729,600 of them") as error:
        arrangement.orbit(place="centre")
    assert error.value.size == 696_729_600
    assert error.value.memory == 696_729_600 * (8 * 8 + 32)
    assert len(arrangement.orbit(place="corner bcdefgh")) in (240, 2160, 6720, 17280)
    with pytest.raises(TooLarge, match="the limit is 47"):
        Arrangement.from_family("B3").orbit(place="centre", limit=47)
    assert len(Arrangement.from_family("B3").orbit(place="centre", limit=48)) == 48


def test_a_long_orbit_tells_its_progress_and_can_be_cancelled():
    arrangement = Arrangement.from_family("D6")
    told = []
    orbit = arrangement.orbit(place="centre", progress=lambda done, size: told.append(done / size))
    assert len(orbit) == 23_040
    assert told[-1] == 1
    assert len(told) > 10
    with pytest.raises(OrbitCancelled):
        arrangement.orbit(place="centre", progress=lambda done, size: done < size / 2)


def test_words_of_a_large_fan_are_refused(monkeypatch):
    from mirrorlab.mirrors import orbit as module

    orbit = Arrangement.from_family("I2(100)").orbit(place="centre")
    monkeypatch.setattr(module, "MOST_LETTERS", 9_999)
    assert orbit.depth.sum() == 10_000
    with pytest.raises(TooLarge, match="letters of the words"):
        orbit.words()


def test_images_of_a_star_are_those_of_its_group(slow):
    arrangement = Arrangement.from_angles(["90", "60", "72"])
    orbit = arrangement.orbit(point=[0.2, 0.5, 1.1])
    assert keys_of(orbit.points) == keys_of(slow.elements(arrangement.normals, 200) @ orbit.seed)


def test_given_normals_keep_their_frame():
    normals = [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
        [1, 1, 0],
        [1, -1, 0],
        [1, 0, 1],
        [1, 0, -1],
        [0, 1, 1],
        [0, 1, -1],
    ]
    orbit = Arrangement.from_normals(normals).orbit(point=[1, 2, 3])
    signed = {
        tuple(float(s * v) for s, v in zip(signs, order, strict=True))
        for order in itertools.permutations((1, 2, 3))
        for signs in itertools.product((1, -1), repeat=3)
    }
    assert keys_of(orbit.points) == signed
    assert "given normals" in orbit.frame


@pytest.mark.parametrize("name", NAMES)
def test_the_walk_kept_for_the_elements_leads_to_the_same_images(name):
    """With a progress callback the orbit takes a walk of its own, without one that of the elements."""
    arrangement = Arrangement.from_family(name)
    heights = [0.3 + 0.17 * k for k in range(arrangement.size)]
    kept = arrangement.orbit(heights=heights)
    own = arrangement.orbit(heights=heights, progress=lambda *_: None)
    np.testing.assert_allclose(kept.points, own.points, atol=1e-12)
    assert kept.words() == own.words()
    assert kept.depth.tolist() == own.depth.tolist()
