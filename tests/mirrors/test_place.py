"""Seeds by name and by height."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement, OrbitError
from mirrorlab.mirrors.place import named_place, place_names


def group_of(name):
    return Arrangement.from_family(name).finding().group


def test_names_by_rank():
    assert place_names(group_of("A1")) == ("centre",)
    assert place_names(group_of("B2")) == ("centre", "wall a", "wall b")
    assert place_names(group_of("B3"))[1:] == (
        "wall a",
        "wall b",
        "wall c",
        "corner ab",
        "corner ac",
        "corner bc",
    )
    four = place_names(group_of("A4"))
    assert "edge ab" in four
    assert "corner abc" in four
    assert len(four) == 1 + 4 + 6 + 4


@pytest.mark.parametrize("name", ["A1", "I2(5)", "B3", "D4", "A1xB2", "A5"])
def test_each_lies_on_its_walls_at_equal_heights_above_the_others(name):
    group = group_of(name)
    for place in place_names(group):
        point = named_place(group, place)
        heights = group.simple @ point
        on = place.split()[-1] if place != "centre" else ""
        assert np.linalg.norm(point) == pytest.approx(1)
        for letter, height in zip(group.letters, heights, strict=True):
            assert (abs(height) < 1e-12) == (letter in on)
        above = heights[[letter not in on for letter in group.letters]]
        assert np.allclose(above, above[0])
        assert above[0] > 0


def test_other_spellings():
    group = group_of("B3")
    for same in (
        ("centre", "center"),
        ("wall a", "a"),
        ("corner ab", "edge ab", "ab", "corner ba", "EDGE AB"),
    ):
        for text in same:
            assert np.array_equal(named_place(group, text), named_place(group, same[0]))


@pytest.mark.parametrize(
    "wrong",
    [
        "",
        " ",
        "wall",
        "wall d",
        "wall ab",
        "edge a",
        "corner a",
        "corner abc",
        "wall aa",
        "banana ab",
        "wall a b",
        "centre a",
    ],
)
def test_places_that_are_not_there(wrong):
    with pytest.raises(OrbitError, match="accepted are centre, wall a") as error:
        named_place(group_of("B3"), wrong)
    assert f'"{wrong}"' in str(error.value)


def test_corners_need_all_walls_but_one():
    with pytest.raises(OrbitError, match="accepted are"):
        named_place(group_of("A4"), "corner ab")
    assert named_place(group_of("A4"), "edge ab").shape == (4,)


def test_places_on_walls_that_were_not_typed():
    arrangement = Arrangement.from_angles(["90", "60", "72"])
    group = arrangement.finding().group
    extra = next(letter for letter in group.letters if letter not in "abc")
    orbit = arrangement.orbit(place=f"wall {extra}")
    assert len(orbit) == 60


def test_heights_above_dependent_mirrors_must_agree():
    arrangement = Arrangement.from_normals([[1, 0], [0, 1], [1, 1]])
    good = arrangement.seed(heights=[1e-9, 2e-9, 3e-9 / 2**0.5])
    assert np.allclose(good, [1e-9, 2e-9], rtol=1e-9, atol=0)
    for scale in (1e-9, 1, 1e9):
        with pytest.raises(OrbitError, match="no point has these"):
            arrangement.seed(heights=[scale, 2 * scale, 5 * scale])
    assert np.allclose(arrangement.seed(heights=[0, 0, 0]), 0)


def test_no_place_where_reflections_never_close():
    with pytest.raises(OrbitError, match="no named place: Never closes"):
        Arrangement.from_angles(["90", "60", "31"]).seed(place="centre")
    assert Arrangement.from_angles(["90", "60", "31"]).seed(heights=[1, 1, 1]).shape == (3,)
