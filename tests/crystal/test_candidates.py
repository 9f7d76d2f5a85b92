"""Candidates against the definition, and the words that decide."""

import numpy as np
import pytest

import mirrorlab as ml
from mirrorlab.crystal.candidates import candidates_for, candidates_of
from mirrorlab.crystal.closure import matrix_keys
from mirrorlab.crystal.generators import THE_32
from mirrorlab.crystal.lattices import CellError, align, axes_from_constants, lattices_of
from mirrorlab.crystal.mirror_match import RankError, in_space
from mirrorlab.crystal.pointgroups import MetricError, point_group
from mirrorlab.crystal.positions import orbit_under

CLOSED = [
    [], ["90"], ["60"], ["45"], ["30"], ["90", "90", "90"], ["90", "90", "60"], ["90", "90", "45"], ["90", "90", "30"],
    ["90", "60", "60"], ["90", "60", "45"], ["120", "90", "45"], ["36"], ["90", "60", "36"], ["22.5"],
    ["90", "90", "36"],
]  # fmt: skip


@pytest.mark.parametrize("angles", CLOSED, ids=lambda angles: " ".join(angles) or "one mirror")
def test_candidates_contain_the_mirrors_of_the_finding(angles):
    finding = ml.Arrangement.from_angles(angles).finding()
    found = candidates_of(finding)
    mirrors = in_space(finding.group.mirrors)
    for one in (*found.exactly, *found.at_least):
        laid = mirrors @ one.rotation.T
        cosines = np.abs(laid @ one.group.mirror_normals.T)
        assert cosines.max(axis=1) == pytest.approx(1)
        assert one.exact == (len(one.group.mirrors) == len(mirrors))
        assert np.linalg.det(one.rotation) == pytest.approx(1)
    assert found.exactly[0].group.hermann_mauguin == finding.point_group.hermann_mauguin


def test_exact_candidates_of_a_group_share_its_mirror_subgroup():
    for symbol in THE_32:
        own = point_group(symbol).mirror_subgroup
        wanted = [other for other in THE_32 if point_group(other).mirror_subgroup == own]
        assert [one.group.hermann_mauguin for one in candidates_for(symbol).exactly] == wanted


def test_at_least_means_the_mirror_subgroup_has_them_among_its_subgroups():
    from mirrorlab.crystal.relations import subgroups_among_the_32

    for symbol in ("m", "mm2", "3m", "mmm", "4mm", "6mm", "-6m2"):
        found = {one.group.hermann_mauguin for one in candidates_for(symbol).at_least}
        wanted = {other for other in THE_32 if symbol in subgroups_among_the_32(point_group(other))}
        exact = {one.group.hermann_mauguin for one in candidates_for(symbol).exactly}
        assert found == wanted - exact


@pytest.mark.parametrize(
    ("symbol", "pair", "operation", "present"),
    [
        ("3m", ("3m", "-3m"), "centre of symmetry", "-3m"),
        ("mm2", ("mm2", "-42m"), "fourfold rotoinversion axis", "-42m"),
        ("mmm", ("mmm", "m-3"), "threefold axis", "m-3"),
        ("m", ("m", "-6"), "sixfold rotoinversion axis", "-6"),
        ("m", ("m", "2/m"), "centre of symmetry", "2/m"),
        ("1", ("2", "222"), "twofold axis, number of", "222"),
        ("1", ("32", "23"), "threefold axis, number of", "23"),
        ("1", ("23", "432"), "fourfold axis", "432"),
    ],
)
def test_what_decides(symbol, pair, operation, present):
    decision = next(row for row in candidates_for(symbol).decisions if (row.first, row.second) == pair)
    assert (decision.operation, decision.present_in) == (operation, present)
    assert all(part in decision.sentence for part in pair)


def test_every_decision_is_true_of_the_groups():
    for symbol in ("1", "m"):
        for row in candidates_for(symbol).decisions:
            having, other = row.present_in, row.second if row.present_in == row.first else row.first
            if row.operation == "centre of symmetry":
                assert point_group(having).centrosymmetric > point_group(other).centrosymmetric
                continue
            fold = {"twofold": 2, "threefold": 3, "fourfold": 4, "sixfold": 6}[row.operation.split()[0]]
            first, second = (axes_of(one, fold, "rotoinversion" in row.operation) for one in (having, other))
            assert first > second
            assert ("number" in row.operation) == (second > 0)


def axes_of(symbol, fold, inverted):
    """How many axes of this order a group has, counted from its operations: none of a higher order on the same line."""
    group = point_group(symbol)
    bars = {e.axis for e in group.operations if e.kind == f"-{fold}"} if not group.centrosymmetric else set()
    if inverted:
        return len(bars)
    highest: dict[tuple, int] = {}
    for element in group.operations:
        if element.axis is not None and element.kind != "m" and (element.proper or not group.centrosymmetric):
            highest[element.axis] = max(highest.get(element.axis, 0), element.fold)
    proper = {e.axis for e in group.operations if e.kind == f"{fold}"}
    return sum(highest[axis] == fold for axis in proper)


def test_an_axis_is_placed_by_the_typed_mirrors():
    found = candidates_of(ml.Arrangement.from_angles(["90"]).finding())
    assert "along the line of mirrors a and b" in found.decisions[0].sentence


@pytest.mark.parametrize("angles", [["60", "60", "60"], ["72", "90", "90", "90", "60", "90"]])
def test_no_candidates_without_a_group_in_space(angles):
    with pytest.raises(RankError):
        candidates_of(ml.Arrangement.from_angles(angles).finding())
    with pytest.raises(RankError):
        align(ml.Arrangement.from_angles(angles).finding())


@pytest.mark.parametrize("angles", CLOSED, ids=lambda angles: " ".join(angles) or "one mirror")
def test_aligned_images_are_the_group_orbit(angles):
    arrangement = ml.Arrangement.from_angles(angles)
    finding = arrangement.finding()
    orbit = arrangement.orbit(heights=[1.0, 2.0, 3.0][: finding.rank])
    aligned = align(finding)
    fractions = aligned.fractions(orbit.points)
    reference = orbit_under(aligned.group, fractions[0]).points
    assert len(fractions) == len(reference)
    assert np.abs(fractions[:, None] - reference[None]).max(axis=2).min(axis=1).max() < 1e-9
    elements, _ = finding.group.elements()
    space = np.broadcast_to(np.eye(3), (len(elements), 3, 3)).copy()
    space[:, : elements.shape[1], : elements.shape[1]] = elements
    turned = aligned.rotation @ space @ aligned.rotation.T
    assert set(matrix_keys(turned)) == set(matrix_keys(aligned.group.cartesian))


def test_mirror_indices_are_those_of_the_group():
    aligned = align(ml.Arrangement.from_angles(["90", "60", "45"]).finding())
    planes = {tuple(mirror.plane) for mirror in aligned.group.mirrors}
    found = {row if row in planes else tuple(-value for value in row) for row in aligned.mirror_indices}
    assert found == planes


def test_fractions_of_a_cell():
    finding = ml.Arrangement.from_angles(["90", "90", "60"]).finding()
    cell = axes_from_constants([3, 3, 5, 90, 90, 120])
    points = np.array([[1.0, 2.0, 3.0], [0.0, 0.0, 0.0]])
    aligned = align(finding)
    assert np.allclose(aligned.fractions(points, cell) @ cell.T, aligned.to_standard(points))
    with pytest.raises(MetricError, match="-6m2"):
        aligned.fractions(points, axes_from_constants([3, 4, 5, 90, 90, 90]))


@pytest.mark.parametrize(
    "constants",
    [
        [1, 1, 1, 90, 90],
        [0, 1, 1, 90, 90, 90],
        [1, 1, 1, 120, 120, 120],
        [1, 1, 1, 90, 90, 180],
        [1, 1, float("nan"), 90, 90, 90],
    ],
)
def test_refused_cells(constants):
    with pytest.raises(CellError):
        axes_from_constants(constants)


@pytest.mark.parametrize(
    ("symbol", "required"),
    # Bravais types of a crystal with this point group: International Tables A, table 2.1.2.1 (from memory).
    [
        ("1", "aP"), ("m", "mP mS"), ("mm2", "oP oS oI oF"), ("4mm", "tP tI"), ("3m", "hR hP"), ("6mm", "hP"),
        ("-6m2", "hP"), ("-43m", "cP cI cF"), ("m-3m", "cP cI cF"), ("5m", ""), ("m-3-5", ""),
    ],
)  # fmt: skip
def test_lattices(symbol, required):
    found = lattices_of(symbol)
    assert " ".join(row.symbol for row in found.required) == required


def test_more_symmetric_lattices_contain_the_group():
    assert [row.symbol for row in lattices_of("3m").also] == ["cP", "cI", "cF"]
    assert [row.symbol for row in lattices_of("6mm").also] == []
    assert len(lattices_of("m").also) == 11
