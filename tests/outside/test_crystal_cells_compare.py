"""Lists against groups: gemmi's operations, SciPy's alignment, trying everything, and lists that cannot be read."""

import math
from itertools import permutations

import gemmi
import numpy as np
import pytest
from scipy.spatial.transform import Rotation

from mirrorlab.crystal.closure import product_table
from mirrorlab.crystal.compare import CompareError, compare_points
from mirrorlab.crystal.matching import match_points
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.orientation import kabsch
from mirrorlab.crystal.point_lists import PointList, PointListError, parse_points, read_points
from mirrorlab.crystal.pointgroups import MetricError, point_group
from mirrorlab.crystal.relations import subgroups
from mirrorlab.crystal.subsets import generated_by, largest_subgroup
from mirrorlab.crystal.symbols import SymbolError

RNG = np.random.default_rng(25)
SEEDS = np.array([[0.31, 0.72, 1.13], [1.21, 0.17, 0.53]])


def listed(points: np.ndarray, sigma: float = 0.0, what: str = "points", kinds=None) -> PointList:
    count = len(points)
    return PointList(
        "list", what, np.asarray(points, float), np.full(count, sigma), tuple(f"P{k}" for k in range(1, count + 1)),
        tuple(kinds or [""] * count), tuple(range(2, count + 2)),
    )  # fmt: skip


def orbit_by_gemmi(symbol: str, seeds: np.ndarray) -> np.ndarray:
    """Images of seeds in the cell of a symmorphic space group, without its translations; a cubic or other unit cell."""
    group = gemmi.find_spacegroup_by_name(symbol)
    rotations = [np.array(op.rot) // gemmi.Op.DEN for op in group.operations().sym_ops]
    return np.concatenate([seeds @ rotation.T for rotation in rotations])


@pytest.mark.parametrize(
    ("space_group", "symbol"),
    [("P m -3 m", "m-3m"), ("P -4 3 m", "-43m"), ("P m -3", "m-3"), ("P 4/m m m", "4/mmm"), ("P m m m", "mmm"),
     ("P 2 3", "23"), ("P -4 2 m", "-42m"), ("P 1 2/m 1", "2/m"), ("P 4 3 2", "432")],
)  # fmt: skip
def test_lists_made_with_gemmis_operations_obey_just_their_group(space_group, symbol):
    points = listed(RNG.permutation(orbit_by_gemmi(space_group, SEEDS)))
    own = compare_points(points, symbol)
    assert own.symbol == symbol
    assert own.closed
    assert own.rms == pytest.approx(0, abs=1e-12)
    if point_group(symbol).name.system != "hexagonal":
        assert compare_points(points, "m-3m").symbol == symbol


def test_every_kind_of_subgroup_of_a_cube_is_found():
    group = point_group("m-3m")
    for row in subgroups(group):
        points = np.concatenate([SEEDS @ group.cartesian[k].T for k in row.operations])
        found = compare_points(listed(points), group)
        assert found.surviving == row.operations
        assert found.symbol == row.name.hermann_mauguin


def test_one_point_off_by_hand():
    # The corners of a cube, one moved by 0.03 along x: each operation but the identity sees it twice, once as the point
    # that is moved and once as the one met, unless it stays in place.
    corners = np.array([(x, y, z) for x in (1.0, -1) for y in (1, -1) for z in (1, -1)])
    corners[0, 0] += 0.03
    found = compare_points(listed(corners), "m-3m", tolerance=0.05)
    assert found.symbol == "m-3m"
    for one in found.operations[1:]:
        stays = one.partner[0] == 0
        if not stays:
            assert one.largest == pytest.approx(0.03)
            assert one.rms == pytest.approx(0.03 * math.sqrt(2 / 8))
            assert one.worst in ("P1", f"P{1 + int(np.flatnonzero(one.partner == 0)[0])}")
        elif one.text in ("m (01-1)",):  # keeps the moved corner in place, with its displacement along x
            assert one.largest == pytest.approx(0, abs=1e-12)
    strict = compare_points(listed(corners), "m-3m", tolerance=0.02)
    # What keeps the direction of x and the corner (1, 1, 1): the mirror (01-1) alone.
    assert strict.symbol == "m"
    assert [strict.group.operations[k].text for k in strict.surviving] == ["1", "m (01-1)"]


def test_a_missing_point_is_named():
    points = orbit_by_gemmi("P m m m", SEEDS[:1])[:-1]
    found = compare_points(listed(points), "mmm")
    assert found.symbol == "1"
    for one in found.operations[1:]:
        assert len(one.unmatched) == 1
        k = int(one.unmatched[0][1:]) - 1
        moved = found.group.cartesian[one.index] @ points[k]
        assert np.linalg.norm(points - moved, axis=1).min() > 0.5


def test_kinds_are_kept_apart():
    # The cage of a diatomic cube: corners of two kinds, alternating: tetrahedral, not cubic.
    corners = np.array([(x, y, z) for x in (1.0, -1) for y in (1, -1) for z in (1, -1)])
    kinds = ["A" if np.prod(corner) > 0 else "B" for corner in corners]
    assert compare_points(listed(corners), "m-3m").symbol == "m-3m"
    assert compare_points(listed(corners, kinds=kinds), "m-3m").symbol == "-43m"


def test_survivors_that_are_no_group():
    # Points off at random by about the tolerance: some operations just pass and others just fail.
    table = product_table(point_group("4/mmm").cartesian)
    seen = False
    for _ in range(30):
        points = orbit_by_gemmi("P 4/m m m", SEEDS[:1])
        found = compare_points(
            listed(points + 0.01 * RNG.normal(size=points.shape)), "4/mmm", tolerance=0.045
        )
        inside = set(found.subgroup)
        assert {int(table[i, j]) for i in inside for j in inside} == inside
        assert inside <= set(found.surviving) <= set(found.generated)
        if not found.closed:
            seen = True
            assert "no group" in found.sentence
            assert len(found.generated) > len(found.surviving) > len(found.subgroup)
    assert seen


def test_largest_subgroup_by_trying_every_subset():
    table = product_table(point_group("-42m").cartesian)
    for _ in range(40):
        members = {0, *RNG.permutation(8)[: int(RNG.integers(1, 8))].tolist()}
        best = 1
        for mask in range(256):
            chosen = {k for k in range(8) if mask >> k & 1}
            if (
                0 in chosen
                and chosen <= members
                and {int(table[i, j]) for i in chosen for j in chosen} == chosen
            ):
                best = max(best, len(chosen))
        found = largest_subgroup(members, table)
        assert len(found) == best
        assert set(generated_by(found, table)) == set(found) <= members


def test_matching_by_trying_every_assignment():
    """Least sum of squares over all pairings of up to six points, a point without a partner counted as out of reach."""
    for _ in range(60):
        count = int(RNG.integers(2, 7))
        points = RNG.uniform(-1, 1, (count, 3))
        moved = RNG.permutation(points) + RNG.normal(size=(count, 3)) * 0.4
        allowed, reach = RNG.uniform(0.1, 0.4, count), 3.0
        partner, distance = match_points(moved, points, allowed, reach)
        limit = np.hypot(allowed[:, None], allowed[None])
        ratio = np.linalg.norm(moved[:, None] - points[None], axis=2) / limit
        cost = np.minimum(ratio, reach) ** 2
        slow = min(sum(cost[i, k] for i, k in enumerate(order)) for order in permutations(range(count)))
        there = partner >= 0
        ours = (ratio[there, partner[there]] ** 2).sum() + reach**2 * (~there).sum()
        assert ours == pytest.approx(slow)
        assert np.allclose(distance[there], np.linalg.norm(moved - points[partner], axis=1)[there])
        assert len(set(partner[there].tolist())) == there.sum()


def test_kabsch_is_scipys_alignment():
    for _ in range(20):
        start = RNG.normal(size=(9, 3))
        end = start @ Rotation.from_quat(RNG.normal(size=4)).as_matrix().T + 0.1 * RNG.normal(size=(9, 3))
        theirs, _ = Rotation.align_vectors(end, start)
        assert np.allclose(kabsch(start, end), theirs.as_matrix(), atol=1e-9)


@pytest.mark.parametrize("symbol", ["m-3m", "-43m", "6/mmm", "mmm", "-3m", "23", "m-3-5"])
def test_refinement_takes_a_known_turn_back(symbol):
    group = point_group(symbol)
    points = np.concatenate([SEEDS[:1] @ matrix.T for matrix in group.cartesian])
    turn = Rotation.from_rotvec([0.05, -0.04, 0.06]).as_matrix()
    turned = listed(points @ turn.T)
    assert len(compare_points(turned, symbol).surviving) < group.order
    found = compare_points(turned, symbol, orientation="refined")
    assert found.symbol == symbol
    assert found.rms == pytest.approx(0, abs=1e-8)
    # What is left of the turn moves no operation of the group.
    rest = found.orientation.rotation @ turn
    keys = {tuple(np.round(m, 6).ravel() + 0.0) for m in group.cartesian}
    assert {tuple(np.round(rest @ m @ rest.T, 6).ravel() + 0.0) for m in group.cartesian} == keys


def test_refinement_of_noisy_points_lowers_the_deviation():
    points = orbit_by_gemmi("P m -3 m", SEEDS[:1]) + 0.01 * RNG.normal(size=(48, 3))
    turn = Rotation.from_rotvec([0.004, 0.003, -0.005]).as_matrix()
    before = compare_points(listed(points @ turn.T), "m-3m", tolerance=0.1)
    after = compare_points(listed(points @ turn.T), "m-3m", tolerance=0.1, orientation="refined")
    assert after.rms < before.rms
    assert after.rms == pytest.approx(
        compare_points(listed(points), "m-3m", tolerance=0.1, orientation="refined").rms
    )


@pytest.mark.parametrize("symbol", ["m-3m", "4/mmm", "-3m", "2/m"])
def test_search_finds_any_orientation(symbol):
    group = point_group(symbol)
    for _ in range(2):
        points = np.concatenate([SEEDS @ matrix.T for matrix in group.cartesian])
        points = points + 0.002 * RNG.normal(size=points.shape)
        turned = points @ Rotation.from_quat(RNG.normal(size=4)).as_matrix().T
        found = compare_points(listed(turned), symbol, tolerance=0.03, orientation="searched")
        assert found.symbol == symbol
        assert found.orientation.how == "searched"


def test_deviation_in_uncertainties_is_as_expected():
    # Two points with σ in every coordinate: the difference has σ√2 in each, its length √3 times that, root mean square.
    points = orbit_by_gemmi("P m -3 m", np.concatenate([SEEDS, SEEDS * 1.7])) + 0.01 * RNG.normal(
        size=(192, 3)
    )
    found = compare_points(listed(points, sigma=0.01), "m-3m")
    assert found.tolerance is None
    values = [one.rms_sigmas for one in found.operations[1:] if (one.partner != np.arange(192)).all()]
    assert np.mean(values) == pytest.approx(math.sqrt(3), rel=0.1)


def test_face_poles_in_indices_and_in_angles():
    octahedron = "\n".join(["face,h,k,l", *(f"o{k},{h}" for k, h in enumerate(
        ["1,1,1", "-1,1,1", "1,-1,1", "1,1,-1", "-1,-1,1", "-1,1,-1", "1,-1,-1", "-1,-1,-1"]))])  # fmt: skip
    found = compare_points(parse_points(octahedron), "m-3m")
    assert (found.symbol, found.unit, found.tolerance) == ("m-3m", "degrees", 1.0)
    # The same as angles: 54.7356° from z (arccos 1/√3), one pole off by 0.4°.
    polar = math.degrees(math.acos(1 / math.sqrt(3)))
    rows = [f"{45 + 90 * k} {p:.6f}" for k in range(4) for p in (polar, 180 - polar)]
    rows[0] = f"45 {polar + 0.4:.6f}"
    # A third of a turn about its own axis moves that pole by √3 times as much.
    tilted = parse_points("azimuth polar\n" + "\n".join(rows))
    found = compare_points(tilted, "m-3m", tolerance=0.7)
    assert found.symbol == "m-3m"
    assert max(one.largest for one in found.operations) == pytest.approx(0.4 * math.sqrt(3), abs=1e-4)
    assert compare_points(tilted, "m-3m", tolerance=0.5).symbol == "4/mmm"


def test_fractions_of_a_cell():
    # Hexagonal fractions by gemmi's operations; Cartesian deviations need the cell.
    rotations = [
        np.array(op.rot) // gemmi.Op.DEN for op in gemmi.find_spacegroup_by_name("P 6/m m m").operations()
    ]
    points = np.concatenate([[[0.12, 0.31, 0.2]] @ rotation.T for rotation in rotations])
    cell = gemmi.UnitCell(4.9, 4.9, 5.4, 90, 90, 120)
    basis = np.array(cell.orth.mat.tolist())
    found = compare_points(listed(points), "6/mmm", basis=basis)
    assert (found.symbol, found.unit) == ("6/mmm", "unit of the cell")
    lengths = [cell.orthogonalize(gemmi.Fractional(*point)).length() for point in points]
    assert np.allclose(np.linalg.norm(found.coordinates, axis=1), lengths)
    with pytest.raises(MetricError):
        compare_points(listed(points), "m-3m", basis=basis)


def test_centre_of_gravity():
    points = orbit_by_gemmi("P m -3 m", SEEDS[:1]) + np.array([3.0, -2.0, 1.0])
    assert compare_points(listed(points), "m-3m").symbol != "m-3m"
    found = compare_points(listed(points), "m-3m", centroid=True)
    assert found.symbol == "m-3m"
    assert found.centre == pytest.approx([3, -2, 1])


def test_flat_lists_are_noted():
    square = listed([[1, 0, 0], [-1, 0, 0], [0, 1, 0], [0, -1, 0]])
    found = compare_points(square, "4/mmm")
    assert found.symbol == "4/mmm"
    assert any("in a plane" in note for note in found.notes)


TABLE = """# specimen K-3, invented
label,x,y,z,uncertainty
A1,0.5(1),0.25,1.0,0.02
A2,-0.5,0.25,1.0,
"A 3",1,2,3,0.1
"""


def test_a_table_with_names():
    points = parse_points(TABLE).complete()
    assert points.labels == ("A1", "A2", "A 3")
    assert points.lines == (3, 4, 5)
    assert points.values.tolist() == [[0.5, 0.25, 1.0], [-0.5, 0.25, 1.0], [1, 2, 3]]
    assert points.uncertainties == pytest.approx([0.02, 0, 0.1])


@pytest.mark.parametrize(
    ("text", "labels", "first", "sigma"),
    [
        ("1,2,3\n4,5,6\n", ("line 1", "line 2"), [1, 2, 3], 0),
        ("a,1,2,3\nb,4,5,6\n", ("a", "b"), [1, 2, 3], 0),
        ("1,2,3,0.1\n4,5,6,0.1\n", ("line 1", "line 2"), [1, 2, 3], 0.1),
        ("a;1,5;2;3;0,1\nb;4;5;6;0,1\n", ("a", "b"), [1.5, 2, 3], 0.1),
        ("a\t1\t2\t3\nb\t4\t5\t6\n", ("a", "b"), [1, 2, 3], 0),
        ("a 1 2 3\nb 4 5 6\n", ("a", "b"), [1, 2, 3], 0),
        ("Z,Y,X,Name\n3,2,1,a\n6,5,4,b\n", ("a", "b"), [1, 2, 3], 0),
        ("x,y,z\n1(1),2(1),3(1)\n4,5,6\n", ("line 2", "line 3"), [1, 2, 3], 1.0),
    ],
)
def test_ways_to_write_a_list(text, labels, first, sigma):
    points = parse_points(text).complete()
    assert points.labels == labels
    assert points.values[0].tolist() == first
    assert points.uncertainties[0] == pytest.approx(sigma)


def test_columns_that_are_not_used_are_said():
    assert parse_points("x,y,z,colour\n1,2,3,red\n").notes == ("columns not used: colour",)


@pytest.mark.parametrize(
    ("row", "reason"),
    [
        ("A9,1,2", "3 columns where the row of names has 5"),
        ("A9,1,2,3,0.1,7", "6 columns"),
        ("A9,1,two,3,0.1", 'y: "two"'),
        ("A9,1,,3,0.1", "y is empty"),
        ("A9,1,nan,3,0.1", 'y: "nan"'),
        ("A9,1,1e99,3,0.1", "y: 1e99 is larger"),
        ("A9,1,2,3,-0.1", "uncertainty -0.1: negative"),
        ("A9,1,2,3,x", 'uncertainty: "x"'),
    ],
)
def test_rows_that_cannot_be_read_are_named_by_their_line(row, reason):
    found = parse_points(TABLE + row + "\n", "k3.csv")
    assert [one.line for one in found.unreadable] == [6]
    assert reason in found.unreadable[0].reason
    assert len(found.labels) == 3
    with pytest.raises(PointListError) as caught:
        found.complete()
    assert "k3.csv: 1 row cannot be read: line 6" in str(caught.value)
    assert reason in str(caught.value)
    assert any("line 6" in note for note in compare_points(found, "mmm").notes)


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "no rows"),
        ("# only a remark\n\n", "no rows"),
        ("x,y\n1,2\n", "line 1"),
        ("x,y,z,x\n1,2,3,4\n", "column x stands twice"),
        ("x,y,z\n", "not one row"),
        ("x,y,z\na,b,c\n", "line 2"),
        ("h,k,l\n0,0,0\n", "indices 0"),
        ("azimuth,polar\n0,190\n", "polar lies between"),
        ("1\n2\n", "line 1"),
        ("\0\1", "binary"),
        ("1,2,3\n" * 5001, "5001 rows"),
    ],
)
def test_lists_that_are_refused_say_why(text, said):
    with pytest.raises(PointListError) as caught:
        parse_points(text, "k3.csv").complete()
    assert said in str(caught.value)


def test_files_that_cannot_be_read(tmp_path):
    with pytest.raises(PointListError, match=r"nowhere\.csv: cannot be read"):
        read_points(tmp_path / "nowhere.csv")
    path = tmp_path / "list.csv"
    path.write_bytes(b"\xef\xbb\xbfx,y,z\r\n1,2,3\r\n")
    assert read_points(path).values.tolist() == [[1, 2, 3]]


@pytest.mark.parametrize(
    ("group", "settings", "error", "said"),
    [
        ("m-3x", {}, SymbolError, "m-3x"),
        ("64/mmm", {}, CompareError, "order 256"),
        ("m-3m", {"tolerance": 0.0}, CompareError, "tolerance 0"),
        ("m-3m", {"tolerance": float("nan")}, CompareError, "tolerance nan"),
        ("m-3m", {"orientation": "best"}, CompareError, "best"),
        ("m-3m", {"poles": True}, CompareError, "P1 is at the centre"),
        ("m-3m", {"tolerance": 1e6}, CrystalError, "so wide"),
    ],
)
def test_comparisons_that_are_refused_say_why(group, settings, error, said):
    points = np.concatenate([np.zeros((1, 3)), RNG.normal(size=(1999, 3))])
    with pytest.raises(error) as caught:
        compare_points(listed(points), group, **settings)
    assert said in str(caught.value)
