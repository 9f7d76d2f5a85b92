"""Typed mirrors: from angles, families and normals."""

from __future__ import annotations

import math
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.angles import AngleError, AngleSettings
from mirrorlab.mirrors import Arrangement, ArrangementError, OrbitError


def test_angles_are_pairs_row_by_row():
    arrangement = Arrangement.from_angles(["10", "20", "30", "40", "50", "60"])
    assert arrangement.pairs == ((0, 1), (0, 2), (0, 3), (1, 2), (1, 3), (2, 3))
    assert arrangement.pair_names == ("ab", "ac", "ad", "bc", "bd", "cd")
    assert arrangement.letters == ("a", "b", "c", "d")
    assert arrangement.gram[1, 3] == pytest.approx(-math.cos(math.radians(50)))
    assert arrangement.fractions[3][2] == F(1, 3)


def test_every_notation_makes_the_same_mirrors():
    same = [
        ["90", "60", "45"],
        [90, 60.0, 45],
        [F(1, 2), F(1, 3), F(1, 4)],
        ["pi/2", "π/3", "45°"],
        ["90°", "60d", "45deg"],
    ]
    for angles in same:
        arrangement = Arrangement.from_angles(angles)
        assert [a.fraction for a in arrangement.angles] == [F(1, 2), F(1, 3), F(1, 4)]
        assert arrangement.finding().families == ("B3",)


def test_a_right_angle_is_exactly_square():
    assert Arrangement.from_angles(["90"]).gram[0, 1] == 0.0


@pytest.mark.parametrize("name", ["A1", "I2(7)", "B3", "A1xG2", "H4", "D5", "E8"])
def test_normals_have_the_typed_angles_in_the_stated_frame(name):
    arrangement = Arrangement.from_family(name)
    n = arrangement.normals
    assert n.shape == (arrangement.size, arrangement.size)
    assert np.abs(n @ n.T - arrangement.gram).max() < 1e-12
    assert np.abs(np.triu(n, 1)).max() == 0
    assert (np.diag(n) > 0).all()
    assert n[0, 0] == 1
    assert ("z along the edge of a and b" in arrangement.frame) == (arrangement.size == 3)
    assert (n[:2, 2:] == 0).all()


def test_a_tube_has_normals_in_a_plane():
    arrangement = Arrangement.from_angles(["60", "60", "60"])
    assert arrangement.normals.shape == (3, 2)
    assert np.abs(arrangement.normals @ arrangement.normals.T - arrangement.gram).max() < 1e-12
    assert Arrangement.from_angles(["0"]).normals.tolist() == [[1.0], [-1.0]]


def test_unbuildable_has_none():
    arrangement = Arrangement.from_angles(["60", "60", "45"])
    assert arrangement.normals is None
    with pytest.raises(OrbitError, match="no planes have these angles"):
        arrangement.seed(place="centre")


@pytest.mark.parametrize("count", [2, 4, 5, 29, 36])
def test_counts_that_fit_no_number_of_mirrors(count):
    with pytest.raises(ArrangementError, match=f"{count} angles fit no number of mirrors"):
        Arrangement.from_angles(["90"] * count)


def test_no_angle_is_one_mirror():
    finding = Arrangement.from_angles([]).finding()
    assert (finding.kind, finding.families, finding.order) == ("closed", ("A1",), 2)


def test_one_text_is_no_list():
    with pytest.raises(ArrangementError, match="give a list of angles"):
        Arrangement.from_angles("60 60 90")


@pytest.mark.parametrize("wrong", ["6o", "", "-60", "180", "nan", "inf", None, [60], True, "sixty"])
def test_an_angle_that_cannot_be_read_is_named_by_its_place(wrong):
    with pytest.raises(AngleError, match="angle 2 of 3") as error:
        Arrangement.from_angles(["90", wrong, "45"])
    assert len(str(error.value).splitlines()) == 1


def test_family_with_a_large_m_is_read_as_fine_as_it_needs():
    arrangement = Arrangement.from_family("I2(1001)")
    assert arrangement.finding().families == ("I2(1001)",)
    assert arrangement.finding().order == 2002


def test_the_largest_m_still_fits():
    finding = Arrangement.from_family("I2(100000)").finding()
    assert (finding.families, finding.mirror_count) == (("I2(100000)",), 100_000)


def test_largest_denominator_is_obeyed():
    coarse = Arrangement.from_angles(["40"], AngleSettings(max_denominator=5))
    assert coarse.finding().kind == "open"
    assert Arrangement.from_angles(["40"]).finding().families == ("I2(9)",)


def test_with_angle_changes_one_pair_only():
    first = Arrangement.from_angles(["90", "60", "45"])
    second = first.with_angle(2, "36")
    assert [a.degrees for a in second.angles] == [90, 60, 36]
    assert first.finding().families == ("B3",)
    assert second.finding().families == ("H3",)
    for pair in (-1, 3):
        with pytest.raises(ArrangementError, match="pairs 0 to 2"):
            first.with_angle(pair, "60")
    with pytest.raises(ArrangementError, match="given by normals"):
        Arrangement.from_normals([[1, 0], [0, 1]]).with_angle(0, "60")


def test_finding_is_made_once():
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    assert arrangement.finding() is arrangement.finding()


def test_the_frame_names_the_coordinates_there_are():
    assert "x1 x2 plane" in Arrangement.from_family("A4").frame
    assert "z along" not in Arrangement.from_family("A4").frame
    assert "z along" not in Arrangement.from_angles(["60", "60", "60"]).frame, (
        "a tube's mirrors stand in a plane"
    )


def test_normals_of_any_length_and_their_frame():
    arrangement = Arrangement.from_normals([[2, 0, 0], [0, 1e-200, 0], [0, 1e200, 1e200]])
    assert arrangement.finding().point_group.hermann_mauguin == "4/mmm"
    assert np.allclose(np.linalg.norm(arrangement.normals, axis=1), 1)
    assert "given normals" in arrangement.frame
    assert [a.source for a in arrangement.angles] == ["computed"] * 3


@pytest.mark.parametrize(
    ("normals", "match"),
    [
        ([], "shape"),
        ([1, 2, 3], "shape"),
        ([[1, 2], [3]], "no table of numbers"),
        ([["a", 1]], "no table of numbers"),
        (None, "shape|no table"),
        ([[]], "shape"),
        (np.eye(9), "shape"),
        (np.ones((42, 3)), "shape"),
        ([[0, 0, 0], [1, 0, 0]], "normal 1 of 2"),
        ([[1, 0, 0], [0, math.nan, 0]], "normal 2 of 2"),
        ([[1, 0, 0], [0, math.inf, 0]], "normal 2 of 2"),
        ([[1, 0, 0], [0, 1, 0], [-3, 0, 0]], "normals 1 and 3 of 3.*same mirror twice"),
    ],
)
def test_normals_that_make_no_mirrors(normals, match):
    with pytest.raises(ArrangementError, match=match):
        Arrangement.from_normals(normals)


def test_many_mirrors_of_one_cut():
    """All fifteen mirrors of H3 and all twenty-four of F4, given at once."""
    for name, letters in (("H3", "abcdefghijklmno"), ("F4", "abcdefghijklmnoABCDEFGHI")):
        whole = Arrangement.from_family(name).finding().group
        arrangement = Arrangement.from_normals(whole.mirrors)
        finding = arrangement.finding()
        assert "".join(arrangement.letters) == letters
        assert finding.families == (name,)
        assert finding.mirror_count == len(whole.mirrors)
        assert set(finding.group.letters) <= set(letters)


def test_tolerance_of_given_normals():
    six_decimals = [[1, 0, 0], [-0.5, 0.866025, 0], [0, -0.57735, 0.816497]]
    assert Arrangement.from_normals(six_decimals).finding().kind == "open"
    arrangement = Arrangement.from_normals(six_decimals, tolerance=2e-6)
    assert arrangement.finding().families == ("A3",)
    assert np.abs(arrangement.normals - six_decimals).max() < 1e-6
    for wrong in (0, -1e-9, 0.1, math.nan):
        with pytest.raises(ArrangementError, match="tolerance"):
            Arrangement.from_normals(six_decimals, tolerance=wrong)


def test_orbit_says_why_there_is_none():
    for angles in (["60", "60", "60"], ["90", "60", "31"]):
        arrangement = Arrangement.from_angles(angles)
        point = [1.0] * arrangement.normals.shape[1]
        with pytest.raises(OrbitError, match="no finite orbit"):
            arrangement.orbit(point=point)
        with pytest.raises(OrbitError, match="no finite orbit"):
            arrangement.orbit(heights=[1, 2, 3])
