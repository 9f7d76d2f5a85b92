"""Facts of the trade marked "common practice, no source", and point and plane groups of International Tables."""

from __future__ import annotations

import itertools
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement

FAMILIES = ["A3", "B3", "H3", "A1xA2", "A4", "D4", "F4", "H4", "A5", "D6", "E6", "E7", "E8", "A2xI2(7)"]


@pytest.mark.parametrize("name", FAMILIES)
def test_neighbouring_walls_meet_at_a_divisor_of_180(name):
    """Common practice, no source: neighbouring mirrors of a closed chamber meet at 180°/m, never obtuse."""
    simple = Arrangement.from_family(name).finding().group.simple
    for u, v in itertools.combinations(simple, 2):
        angle = np.degrees(np.arccos(np.clip(-(u @ v), -1, 1)))
        assert angle <= 90 + 1e-9
        assert 180 / angle == pytest.approx(round(180 / angle), abs=1e-6)


@pytest.mark.parametrize("name", FAMILIES)
def test_a_chamber_in_n_dimensions_has_n_walls(name):
    """Common practice, no source."""
    group = Arrangement.from_family(name).finding().group
    assert len(group.simple) == group.dimension == group.rank


@pytest.mark.parametrize("seed", range(8))
def test_the_chamber_of_a_star_has_acute_or_right_corners(seed):
    """Common practice, no source: however the typed mirrors stand, two walls of a true chamber never meet obtusely."""
    rng = np.random.default_rng(seed)
    whole = Arrangement.from_family(["H3", "B4", "F4", "E6", "H4", "D5", "A6", "E7"][seed]).finding().group
    while True:
        chosen = rng.choice(len(whole.mirrors), whole.rank, replace=False)
        if np.linalg.svd(whole.mirrors[chosen])[1][-1] > 1e-6:
            break
    group = Arrangement.from_normals(whole.mirrors[chosen]).finding().group
    products = group.simple @ group.simple.T
    assert (products[~np.eye(group.rank, dtype=bool)] < 1e-9).all()


@pytest.mark.parametrize(
    "angle", [F(k, m) for m in range(1, 13) for k in range(m) if F(k, m).denominator == m]
)
def test_four_cosine_squares_of_a_lattice(angle):
    """Common practice, no source: two mirrors fit a lattice when 4cos² of their angle is 0, 1, 2 or 3 (4: parallel)."""
    flags = Arrangement.from_angles([angle]).finding().flags
    value = 4 * np.cos(np.pi * float(angle)) ** 2
    assert (flags == ()) == (abs(value - round(value)) < 1e-12)


@pytest.mark.parametrize("name", ["A3", "B3", "D4", "F4", "E6", "E8", "G2"])
def test_projections_are_half_whole_multiples(name):
    """Common practice, no source: a root's projection on another is a half-integer multiple of it."""
    group = Arrangement.from_family(name).finding().group
    cosines = group.mirrors @ group.mirrors.T
    squares = 4 * cosines**2
    assert np.abs(squares - np.round(squares)).max() < 1e-9


def test_60_degrees_alone_make_six_sectors():
    """Common practice, no source."""
    finding = Arrangement.from_angles(["60"]).finding()
    assert finding.order == 6
    assert len(finding.group.elements()[0]) == 6


def test_90_60_60_make_24_chambers():
    """Common practice, no source."""
    finding = Arrangement.from_angles(["90", "60", "60"]).finding()
    assert finding.order == 24
    assert len(Arrangement.from_angles(["90", "60", "60"]).orbit(place="centre")) == 24


@pytest.mark.parametrize("n", [n for n in range(1, 180) if 180 % n == 0])
def test_two_mirrors_at_a_divisor_of_360(n):
    """Common practice, no source: at 360°/2m two mirrors show 2m − 1 images of an object between them."""
    images = len(Arrangement.from_angles([n]).orbit(heights=[1, 1.7])) - 1
    assert images == 360 // n - 1


# angles: Hermann–Mauguin, Schoenflies, order, mirrors, can a lattice carry it
POINT_GROUPS = {
    (): ("m", "Cs", 2, 1, True),
    ("90",): ("mm2", "C2v", 4, 2, True),
    ("60",): ("3m", "C3v", 6, 3, True),
    ("45",): ("4mm", "C4v", 8, 4, True),
    ("30",): ("6mm", "C6v", 12, 6, True),
    ("90", "90", "90"): ("mmm", "D2h", 8, 3, True),
    ("90", "90", "60"): ("-6m2", "D3h", 12, 4, True),
    ("90", "90", "45"): ("4/mmm", "D4h", 16, 5, True),
    ("90", "90", "30"): ("6/mmm", "D6h", 24, 7, True),
    ("90", "60", "60"): ("-43m", "Td", 24, 6, True),
    ("90", "60", "45"): ("m-3m", "Oh", 48, 9, True),
    ("36",): ("5m", "C5v", 10, 5, False),
    ("22.5",): ("8mm", "C8v", 16, 8, False),
    ("90", "90", "36"): ("-10m2", "D5h", 20, 6, False),
    ("90", "90", "22.5"): ("8/mmm", "D8h", 32, 9, False),
    ("90", "60", "36"): ("m-3-5", "Ih", 120, 15, False),
}


@pytest.mark.parametrize("angles", POINT_GROUPS)
def test_point_groups_of_mirrors(angles):
    """International Tables for Crystallography, volume A, tables 10.1.2 and 10.1.4 (from memory)."""
    finding = Arrangement.from_angles(angles).finding()
    symbols = finding.point_group
    found = (
        symbols.hermann_mauguin,
        symbols.schoenflies,
        finding.order,
        finding.mirror_count,
        finding.crystallographic,
    )
    assert found == POINT_GROUPS[angles]


@pytest.mark.parametrize(
    ("angles", "symbol", "point_group"),
    [
        (["60", "60", "60"], "p3m1", "3m"),
        (["90", "45", "45"], "p4mm", "4mm"),
        (["90", "60", "30"], "p6mm", "6mm"),
        (["90", "0", "90", "90", "0", "90"], "p2mm", "mm2"),
    ],
)
def test_plane_groups_made_by_reflections(angles, symbol, point_group):
    """International Tables, volume A, part 6: of the 17 plane groups these four are generated by reflections alone
    with a bounded region between the mirrors (from memory)."""
    tube = Arrangement.from_angles(angles).finding().tube
    assert (tube.plane_group, tube.tiling, tube.chambers) == (symbol, "once", 1)
    assert tube.moved_point_group.hermann_mauguin == point_group
