"""Listing and choosing closing assemblies."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from mirrorlab.optics.build import assembly_from
from mirrorlab.optics.chooser import FAINTEST, SORTS, bright_images, choices, nearest
from mirrorlab.optics.closing import Closing, ClosingError, closing_assemblies, spelled
from mirrorlab.optics.images import count_images
from mirrorlab.optics.mirror import MirrorSpec
from mirrorlab.optics.panels import flatten_panels


@pytest.fixture(scope="module")
def listed():
    return choices(120.0)


def test_every_listed_assembly_really_closes(listed):
    for choice in listed:
        finding = choice.closing.arrangement().finding()
        if choice.closing.kind == "tube":
            assert finding.kind == "tube"
            assert finding.tube.tiling == ("once" if choice.closing.chambers == 1 else "subdivided")
            assert finding.tube.chambers == choice.closing.chambers
            continue
        assert finding.kind == ("closed" if choice.closing.chambers == 1 else "closed-subdivided")
        assert finding.order == choice.closing.order
        assert finding.chambers_between == choice.closing.chambers
        assert finding.families == choice.closing.families
        assert finding.point_group.hermann_mauguin == choice.closing.symbol


def test_all_can_be_made_and_the_opening_is_what_was_asked_for(listed):
    for choice in listed:
        assert not choice.problem, choice.closing.name
        assembly = assembly_from(choice.dimensions)
        mouth = assembly.mouth if choice.closing.kind != "wedge" else assembly.mouth[1:3]
        sides = np.linalg.norm(np.roll(mouth, -1, axis=0) - mouth, axis=1)
        assert sides.max() == pytest.approx(120.0)
        assert choice.area == pytest.approx(sum(p.area for p in flatten_panels(assembly)) / 1e6)
        assert [p[0] for p in choice.panels] == list("abcd"[: len(choice.panels)])


def test_nothing_is_listed_twice(listed):
    keys = [(c.closing.kind, tuple(sorted(c.closing.fractions))) for c in listed]
    assert len(set(keys)) == len(keys)


def test_about_so_many_images(listed):
    for wanted in (3, 7, 11, 23, 47, 119):
        found = nearest(listed, wanted)
        assert len(found) == 6
        gaps = [abs(choice.images - wanted) for choice in found]
        assert gaps == sorted(gaps)
        assert gaps[0] == min(abs(choice.images - wanted) for choice in listed)
    assert nearest(listed, 24)[0].images == 23
    assert nearest(listed, 119)[0].closing.families == ("H3",)


def test_whole_leaves_only_undivided_regions():
    found = choices(120.0, whole=True)
    assert {choice.closing.chambers for choice in found} == {1}
    corners = [c.closing.name for c in found if c.closing.kind == "corner" and c.closing.families[0] != "A1"]
    assert corners == ["corner 90° 60° 60°", "corner 90° 60° 45°", "corner 90° 60° 36°"]
    assert sum(c.closing.kind == "tube" for c in found) == 4


def test_bright_images_of_closed_assemblies_are_all_that_few_bounces_reach(listed):
    for choice in listed:
        if choice.closing.order and choice.closing.chambers == 1:
            assert bright_images(choice.closing, 200) == choice.closing.order - 1
            assert choice.bright <= choice.closing.order - 1


def test_no_more_images_are_bright_than_are_seen(listed):
    """Where chambers overlap, light finds images in more places than an eye sees at one time."""
    assert all(c.bright <= c.closing.images for c in listed if c.closing.images is not None)
    choice = next(c for c in listed if c.closing.name == "corner 120° 45° 45°")
    found = count_images(assembly_from(choice.dimensions), faintest=FAINTEST)
    assert found.count > sum(image.seen for image in found.images) == choice.bright == choice.images


def test_bright_images_of_tubes_by_hand():
    """Growth of the affine groups: 3n images at n bounces for 60/60/60, 4n for the rectangle."""
    tubes = {c.symbol: c for c in closing_assemblies() if c.kind == "tube" and c.chambers == 1}
    for bounces in (1, 2, 5, 9):
        triangle = bounces * (bounces + 1) // 2
        assert bright_images(tubes["p3m1"], bounces) == 3 * triangle
        assert bright_images(tubes["p2mm"], bounces) == 4 * triangle


@pytest.mark.parametrize("name", ["wedge 60°", "wedge 36°", "corner 90° 90° 90°", "corner 90° 60° 60°"])
def test_light_that_is_followed_meets_as_many_images_as_are_listed(listed, name):
    choice = next(c for c in listed if c.closing.name == name)
    assert count_images(assembly_from(choice.dimensions)).count == choice.images


@pytest.mark.parametrize("name", ["tube 60° 60° 60°", "tube 90° 45° 45°", "tube 90° 90° 90° 90°"])
def test_light_that_is_followed_meets_as_many_bright_images_as_are_listed(name):
    choice = next(c for c in choices(50.0, reflectance=0.75, kinds=("tube",)) if c.closing.name == name)
    mirror = MirrorSpec("first", 0.75)
    assembly = assembly_from({**choice.dimensions, "mirrors": [mirror] * len(choice.panels)})
    assert count_images(assembly, faintest=FAINTEST).count == choice.bright


def test_brightness_follows_the_reflectance():
    few = {c.closing.name: c.bright for c in choices(50.0, reflectance=0.8, kinds=("tube",))}
    many = {c.closing.name: c.bright for c in choices(50.0, reflectance=0.95, kinds=("tube",))}
    assert all(few[name] < many[name] for name in few)
    bounces = int(np.log(FAINTEST) / np.log(0.8))
    assert few["tube 60° 60° 60°"] == 3 * bounces * (bounces + 1) // 2


def test_sorts_give_a_number_for_every_choice(listed):
    for key in SORTS.values():
        assert sorted(listed, key=key)


def test_edge_angles_stand_in_the_listing(listed):
    choice = next(c for c in listed if c.closing.angles == ("90", "60", "45"))
    assert sorted(np.degrees(choice.edge_angles)) == pytest.approx([35.2644, 45, 54.7356], abs=1e-4)
    assert choice.to_dict()["chambers_between"] == 1


def test_spelling_of_angles():
    assert spelled(Fraction(1, 3)) == "60"
    assert spelled(Fraction(2, 7)) == "2pi/7"
    assert spelled(Fraction(1, 7)) == "pi/7"
    assert Closing("wedge", (Fraction(2, 7),), (), "", 14, 2).images == 6


@pytest.mark.parametrize(
    ("words", "message"),
    [
        ({"opening": 0.0}, "opening 0"),
        ({"opening": float("nan")}, "opening nan"),
        ({"opening": 10.0, "reflectance": 1.0}, "reflectance"),
        ({"opening": 10.0, "largest": 1}, "largest denominator 1"),
        ({"opening": 10.0, "largest": 1000}, "largest denominator 1000"),
        ({"opening": 10.0, "kinds": ("dome",)}, "'dome'.*wedge, corner, tube"),
    ],
)
def test_nonsense_is_named(words, message):
    with pytest.raises(ClosingError, match=message):
        choices(**words)
