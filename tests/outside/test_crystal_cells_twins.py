"""Normal rows, obliquities and twin indices: published rules, cells that can be done by hand, and counting."""

import math
from itertools import pairwise, product

import gemmi
import numpy as np
import pytest

from mirrorlab.crystal.cell import Cell, parse_cell
from mirrorlab.crystal.indices import IndicesError
from mirrorlab.crystal.normal_rows import exact_row, normal_rows, row_on, rows_near
from mirrorlab.crystal.planes import PlanesError, lattice_plane, parse_planes, planes_of
from mirrorlab.mirrors.normals import MOST_NORMALS

RNG = np.random.default_rng(21)
CUBIC = (5.0, 5.0, 5.0, 90, 90, 90)


def coprime_vectors(count: int, largest: int) -> list[tuple[int, int, int]]:
    found = []
    while len(found) < count:
        vector = RNG.integers(-largest, largest + 1, 3)
        if np.gcd.reduce(vector) == 1:
            found.append(tuple(vector.tolist()))
    return found


def index_by_parity(letter: str, plane, row) -> int:
    """The IUCr rule for P (X odd: X, even: X/2), and its parity rules for centred lattices.

    International Union of Crystallography, Online Dictionary of Crystallography, "Twin index": the rule for P is
    confirmed from its text, those for the centred lattices are derived here. (hkl) coprime is the next plane but one
    where the centring puts a lattice plane between (X doubles), and [uvw] coprime is twice the shortest vector where
    half of it leads to a lattice point (X halves); thirds for R.
    """
    h, k, l = plane  # noqa: E741
    u, v, w = row
    x = abs(h * u + k * v + l * w)
    numerator, denominator = 1, 1
    if letter == "C":
        numerator = 2 if (h + k) % 2 else 1
        denominator = 2 if (u + v) % 2 == 0 and w % 2 == 0 else 1
    elif letter == "A":
        numerator = 2 if (k + l) % 2 else 1
        denominator = 2 if (v + w) % 2 == 0 and u % 2 == 0 else 1
    elif letter == "B":
        numerator = 2 if (h + l) % 2 else 1
        denominator = 2 if (u + w) % 2 == 0 and v % 2 == 0 else 1
    elif letter == "I":
        numerator = 2 if (h + k + l) % 2 else 1
        denominator = 2 if u % 2 and v % 2 and w % 2 else 1
    elif letter == "F":
        numerator = 1 if h % 2 and k % 2 and l % 2 else 2
        denominator = 2 if (u + v + w) % 2 == 0 else 1
    elif letter == "R":
        numerator = 3 if (-h + k + l) % 3 else 1
        denominator = 3 if (u - 2 * w) % 3 == 0 and (v - w) % 3 == 0 else 1
    x = x * numerator // denominator
    return x if x % 2 else x // 2


@pytest.mark.parametrize("letter", list("PABCIFR"))
def test_twin_index_by_the_parity_rules(letter):
    constants = (5.0, 5.0, 7.0, 90, 90, 120) if letter == "R" else (5.0, 6.0, 7.0, 80.0, 95.0, 103.0)
    cell = Cell(constants, centring=letter)
    seen = 0
    for plane, row in zip(coprime_vectors(300, 6), coprime_vectors(300, 6), strict=True):
        if np.dot(plane, row):
            seen += 1
            assert row_on(cell, plane, row).twin_index == index_by_parity(letter, plane, row)
    assert seen > 250


# Handbook values of twins on lattices with an exact normal (Friedel, Leçons de Cristallographie, from memory: the
# spinel twin on (111), n = 3 in all three cubic lattices); the others by the IUCr rule, by hand.
@pytest.mark.parametrize(
    ("constants", "letter", "plane", "row", "index"),
    [
        (CUBIC, "P", (1, 1, 1), (1, 1, 1), 3),
        (CUBIC, "F", (1, 1, 1), (1, 1, 1), 3),
        (CUBIC, "I", (1, 1, 1), (1, 1, 1), 3),
        (CUBIC, "P", (2, 1, 0), (2, 1, 0), 5),
        (CUBIC, "I", (2, 1, 1), (2, 1, 1), 3),
        (CUBIC, "P", (2, 1, 1), (2, 1, 1), 3),
        (CUBIC, "P", (3, 1, 1), (3, 1, 1), 11),
        (CUBIC, "P", (3, 2, 1), (3, 2, 1), 7),
        (CUBIC, "F", (3, 3, 1), (3, 3, 1), 19),
        ((5, 5, 7.3, 90, 90, 120), "R", (0, 0, 1), (0, 0, 1), 3),  # the twin that turns obverse into reverse
        ((5, 5, 7.3, 90, 90, 120), "P", (0, 0, 1), (0, 0, 1), 1),
        ((5, 5, 7.3, 90, 90, 120), "P", (1, 0, 0), (2, 1, 0), 1),
        ((5, 5, 7.3, 90, 90, 120), "R", (1, 0, 0), (2, 1, 0), 3),
    ],
)
def test_twin_index_of_known_twins(constants, letter, plane, row, index):
    made = lattice_plane(Cell(constants, centring=letter), plane)
    assert made.row.indices == row
    assert made.row.exact
    assert made.row.twin_index == index
    assert made.mirror == (index == 1)


def share_of_points_kept(cell: Cell, plane, size: int) -> float:
    """By counting: the share of lattice points in a block that the reflection brings to lattice points."""
    basis = cell.basis @ (cell.lattice.primitive / cell.lattice.over)
    normal = np.array(gemmi.UnitCell(*cell.constants).frac.mat.tolist()).T @ np.array(plane, float)
    normal /= np.linalg.norm(normal)
    points = np.array(list(product(range(size), repeat=3))) @ basis.T
    moved = (points - 2 * np.outer(points @ normal, normal)) @ np.linalg.inv(basis).T
    return float((np.abs(moved - np.rint(moved)).max(axis=1) < 1e-6).mean())


@pytest.mark.parametrize("letter", list("PCIF"))
@pytest.mark.parametrize(
    "plane", [(1, 0, 0), (1, 1, 0), (1, 1, 1), (2, 1, 0), (2, 1, 1), (2, 2, 1), (3, 1, 0), (1, 1, 3)]
)
def test_twin_index_by_counting_points(letter, plane):
    constants = CUBIC if letter != "C" else (5.0, 5.0, 7.123457, 90, 90, 90)  # a tetragonal cell, C-centred
    cell = Cell(constants, centring=letter)
    row = exact_row(cell, plane)
    if row is None:
        assert letter == "C"
        assert plane[2]
        return
    share = share_of_points_kept(cell, plane, 2 * row.layers)
    assert 1 / share == pytest.approx(row.twin_index)


@pytest.mark.parametrize("letter", ["P", "R"])
@pytest.mark.parametrize("plane", [(0, 0, 1), (1, 0, 0), (1, 1, 0), (2, 1, 0), (3, -1, 0)])
def test_twin_index_on_hexagonal_axes_by_counting_points(letter, plane):
    cell = Cell((5.0, 5.0, 7.123457, 90, 90, 120), centring=letter)
    row = exact_row(cell, plane)
    assert 1 / share_of_points_kept(cell, plane, 2 * row.layers) == pytest.approx(row.twin_index)


def test_mirrors_of_lattices_by_counting_points():
    """Whether the reflection maps the lattice onto itself, for each plane with small indices: all points or not."""
    cells = [
        Cell(CUBIC, centring="P"),
        Cell(CUBIC, centring="I"),
        Cell(CUBIC, centring="F"),
        Cell((5, 5, 7.3, 90, 90, 120), centring="R"),
        Cell((5, 5, 7.3, 90, 90, 120)),
        Cell((5, 6, 7, 90, 101, 90), centring="C"),
        Cell((5, 6, 7, 90, 90, 90), centring="F"),
    ]
    expected = [9, 9, 9, 3, 7, 1, 3]  # mirrors of m-3m, -3m, 6/mmm, 2/m, mmm
    for cell, count in zip(cells, expected, strict=True):
        planes = [v for v in product(range(-2, 3), repeat=3) if v > (0, 0, 0) and np.gcd.reduce(v) == 1]
        mirrors = [v for v in planes if lattice_plane(cell, v).mirror]
        assert mirrors == [v for v in planes if share_of_points_kept(cell, v, 4) == 1.0]
        assert len(mirrors) == count


def test_all_nine_mirrors_of_a_cubic_cell():
    planes = [v for v in product((-1, 0, 1), repeat=3) if v > (0, 0, 0) and 0 < sum(map(abs, v)) < 3]
    found = planes_of(Cell(CUBIC, centring="F"), planes)
    assert len(planes) == 9
    assert all(plane.mirror and plane.row.obliquity < 1e-9 for plane in found.planes)
    finding = found.arrangement.finding()
    assert finding.point_group.hermann_mauguin == "m-3m"
    assert (finding.mirror_count, finding.order, finding.chambers_between) == (9, 48, None)


# Obliquities that can be done by hand.
def test_obliquity_of_a_monoclinic_cell_is_beta_less_a_right_angle():
    made = lattice_plane(parse_cell("5.1,7.2,9.3,90,90.05(3),90"), (1, 0, 0))
    assert made.row.indices == (1, 0, 0)
    assert made.row.obliquity == pytest.approx(0.05, abs=1e-9)
    assert made.row.uncertainty == pytest.approx(0.03, rel=1e-5)
    assert made.row.twin_index == 1
    assert not made.mirror
    assert made.near_mirror
    assert "within the uncertainty" in made.sentence


def test_obliquity_of_an_orthorhombic_diagonal():
    # [110] stands at atan(b/a) to a, the normal of (110) at atan(a/b): ω = |2 atan(b/a) − 90°|.
    made = lattice_plane(parse_cell("5.00(1),5.05(1),7,90,90,90"), (1, 1, 0))
    assert made.row.indices == (1, 1, 0)
    assert made.row.obliquity == pytest.approx(abs(2 * math.degrees(math.atan(5.05 / 5.0)) - 90))
    sigma = 2 * math.hypot(5.0 * 0.01, 5.05 * 0.01) / (5.0**2 + 5.05**2)
    assert made.row.uncertainty == pytest.approx(math.degrees(sigma), rel=1e-4)


def test_obliquity_of_a_pseudohexagonal_cell():
    # C-centred, b near a√3: [310] stands at atan(b/3a) to a, the normal of (110) at atan(a/b).
    a, b = 5.0, 8.67
    made = lattice_plane(Cell((a, b, 7, 90, 90, 90), centring="C"), (1, 1, 0))
    assert made.row.indices == (3, 1, 0)
    assert made.row.twin_index == 1
    assert made.row.obliquity == pytest.approx(math.degrees(abs(math.atan(b / (3 * a)) - math.atan(a / b))))
    exact = lattice_plane(Cell((a, a * math.sqrt(3), 7, 90, 90, 90), centring="C"), (1, 1, 0))
    assert exact.mirror


@pytest.mark.parametrize("alpha", [89.2, 89.99, 90.7])
def test_obliquity_of_a_rhombohedral_cell_near_a_cube(alpha):
    # cos ω = a·a*/(|a||a*|) = V/(a |b × c|) = √(1 − 3 cos²α + 2 cos³α)/sin α.
    made = lattice_plane(Cell((5, 5, 5, alpha, alpha, alpha)), (1, 0, 0))
    c = math.cos(math.radians(alpha))
    wanted = math.degrees(math.acos(math.sqrt(1 - 3 * c**2 + 2 * c**3) / math.sin(math.radians(alpha))))
    assert made.row.indices == (1, 0, 0)
    assert made.row.obliquity == pytest.approx(wanted, abs=1e-6)
    assert lattice_plane(
        Cell((5, 5, 5, alpha, alpha, alpha)), (1, -1, 0)
    ).mirror  # of -3m, exact at any angle


@pytest.mark.parametrize(
    ("letter", "constants"), [("P", (5, 6, 7, 80, 95, 103)), ("I", (4, 5, 9, 90, 99, 90)), ("F", CUBIC)]
)
def test_nearest_rows_by_trying_everything(letter, constants):
    """For each X the row of least obliquity among all rows of small indices."""
    cell = Cell(constants, centring=letter)
    lattice = cell.lattice
    every = np.array([v for v in product(range(-7, 8), repeat=3) if np.gcd.reduce(v) == 1])
    directions = every @ cell.primitive_basis.T
    for plane in [(1, 0, 0), (1, 1, 0), (1, 2, 1)]:
        cosines = directions @ cell.normal(plane) / np.linalg.norm(directions, axis=1)
        layers = every @ lattice.primitive_plane(plane)
        for row in rows_near(cell, plane, 6):
            best = np.degrees(np.arccos(np.clip(cosines[layers == row.layers].max(), -1, 1)))
            assert row.obliquity == pytest.approx(best, abs=1e-5)


def test_rows_offered_get_squarer_with_their_index():
    for plane in coprime_vectors(40, 4):
        rows = normal_rows(Cell((5, 6, 7, 80, 95, 103)), plane)
        assert [row.twin_index for row in rows] == sorted(row.twin_index for row in rows)
        assert all(a.obliquity > b.obliquity for a, b in pairwise(rows))


def test_an_exact_normal_of_high_index_stands_behind_a_useful_row():
    # c²/a² = 49/25: the normal of (101) is [49 0 25], X = 74 (by hand); [201] is the row of lowest index near it.
    rows = lattice_plane(Cell((5, 5, 7, 90, 90, 90)), (1, 0, 1)).rows
    assert (rows[-1].indices, rows[-1].exact, rows[-1].twin_index) == ((49, 0, 25), True, 37)
    assert (rows[0].indices, rows[0].twin_index) == ((2, 0, 1), 3)
    assert lattice_plane(Cell(CUBIC), (11, 9, 5)).row.indices == (11, 9, 5)


def test_four_indices_on_hexagonal_axes():
    cell = parse_cell("4.9,4.9,5.4,90,90,120")
    assert parse_planes(cell, ["1,0,-1,0", "(10-10)", "1 0 0"]) == ((1, 0, 0),) * 3
    assert planes_of(cell, [(1, 0, 0)]).planes[0].label == "(10-10)"


def test_planes_make_an_arrangement():
    cell = parse_cell("5.431(2),5.431(2),5.431(2),90,90,90", "F")
    found = planes_of(cell, parse_planes(cell, ["0,0,1", "0,1,-1", "1,-1,0"]))
    assert found.arrangement.finding().point_group.hermann_mauguin == "m-3m"
    near = planes_of(parse_cell("5.1,7.2,9.3,90,90.05(3),90"), [(1, 0, 0), (0, 1, 0), (0, 0, 1)])
    assert near.arrangement.finding().kind == "open"
    assert near.measured_arrangement.finding().point_group.hermann_mauguin == "mmm"


@pytest.mark.parametrize(
    ("planes", "limits", "said"),
    [
        ([], {}, "0 planes"),
        ([(0, 0, 0)], {}, "no face has all indices 0"),
        ([(1, 0, 0), (1, 1, 0), (-2, 0, 0)], {}, "planes 1 and 3, (100) and (-100)"),
        ([(1, 0, 0)], {"most_index": 0}, "largest twin index 0"),
        ([(1, 0, 0)], {"most_obliquity": 90.0}, "largest obliquity 90"),
        ([(k, 1, 0) for k in range(MOST_NORMALS + 1)], {}, f"{MOST_NORMALS + 1} planes"),
        ([(1.5, 0, 0)], {}, "whole numbers"),
    ],
)
def test_planes_that_are_refused_say_why(planes, limits, said):
    with pytest.raises((PlanesError, IndicesError)) as caught:
        planes_of(Cell(CUBIC), planes, **limits)
    assert said in str(caught.value)


@pytest.mark.parametrize("text", ["1,0", "1,0,-1,0", "a,b,c", "1.5,0,0", "0,0,0", "1,0,0,0,0", ""])
def test_indices_that_are_refused(text):
    with pytest.raises(IndicesError, match="indices"):
        parse_planes(Cell(CUBIC), [text])
