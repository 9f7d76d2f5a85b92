"""Mirrors and symmetries of lattices against gemmi, by hand, and by trying everything."""

import math
from itertools import product

import gemmi
import numpy as np
import pytest

from mirrorlab.crystal.cell import Cell, parse_cell
from mirrorlab.crystal.lattice_mirrors import ToleranceError, lattice_symmetry, near_square_pairs
from mirrorlab.crystal.lattices import CellError
from mirrorlab.crystal.pointgroups import point_group
from mirrorlab.crystal.reduction import reduce_lattice

RNG = np.random.default_rng(22)

# One cell of each Bravais type in its conventional setting, International Tables A (types and holohedries).
BRAVAIS = {
    "aP": ((5.1, 6.2, 7.3, 81, 86, 77), "P", "-1"),
    "mP": ((5.1, 6.2, 7.3, 90, 103, 90), "P", "2/m"),
    "mS": ((8.1, 6.2, 5.3, 90, 103, 90), "C", "2/m"),
    "oP": ((5.1, 6.2, 7.3, 90, 90, 90), "P", "mmm"),
    "oS": ((5.1, 6.2, 7.3, 90, 90, 90), "C", "mmm"),
    "oI": ((5.1, 6.2, 7.3, 90, 90, 90), "I", "mmm"),
    "oF": ((5.1, 6.2, 7.3, 90, 90, 90), "F", "mmm"),
    "tP": ((5.1, 5.1, 7.3, 90, 90, 90), "P", "4/mmm"),
    "tI": ((5.1, 5.1, 7.3, 90, 90, 90), "I", "4/mmm"),
    "hR": ((5.1, 5.1, 11.3, 90, 90, 120), "R", "-3m"),
    "hP": ((5.1, 5.1, 7.3, 90, 90, 120), "P", "6/mmm"),
    "cP": ((5.1, 5.1, 5.1, 90, 90, 90), "P", "m-3m"),
    "cI": ((5.1, 5.1, 5.1, 90, 90, 90), "I", "m-3m"),
    "cF": ((5.1, 5.1, 5.1, 90, 90, 90), "F", "m-3m"),
}


def skewed(cell: Cell) -> Cell:
    """The same lattice by a primitive cell that shows nothing of its symmetry."""
    skew = np.eye(3, dtype=int)
    for _ in range(4):
        i, j = RNG.permutation(3)[:2]
        skew[:, i] += int(RNG.integers(-1, 2)) * skew[:, j]
    basis = cell.primitive_basis @ skew
    lengths = np.linalg.norm(basis, axis=0)
    angles = [
        math.degrees(math.acos(basis[:, i] @ basis[:, j] / lengths[i] / lengths[j]))
        for i, j in ((1, 2), (0, 2), (0, 1))
    ]
    return Cell((*lengths, *angles))


@pytest.mark.parametrize("bravais", list(BRAVAIS))
def test_bravais_type_and_cell_come_back_from_any_primitive_cell(bravais):
    constants, letter, holohedry = BRAVAIS[bravais]
    for cell in (
        Cell(constants, centring=letter),
        *(skewed(Cell(constants, centring=letter)) for _ in range(5)),
    ):
        found = lattice_symmetry(cell, 0.0).exact
        assert found.holohedry == holohedry
        assert len(found.mirrors) == len(point_group(holohedry).mirrors)
        made = found.conventional
        assert made.bravais == bravais
        assert made.strain < 1e-9
        # The same volume; and the same constants, but for the choice of monoclinic and triclinic axes.
        assert made.cell.volume == pytest.approx(Cell(constants).volume, rel=1e-9)
        if bravais[0] not in "am":
            assert np.allclose(made.ideal, constants, rtol=1e-8)
        shape = made.transformation
        back = constants_of_columns(cell.basis @ shape)
        assert np.allclose(back, made.constants, rtol=1e-8)


def constants_of_columns(columns: np.ndarray) -> list[float]:
    lengths = np.linalg.norm(columns, axis=0)
    return [
        *lengths,
        *(
            math.degrees(math.acos(np.clip(columns[:, i] @ columns[:, j] / lengths[i] / lengths[j], -1, 1)))
            for i, j in ((1, 2), (0, 2), (0, 1))
        ),
    ]


def nearly(base: tuple[float, ...], share: float) -> Cell:
    return Cell(tuple(np.array(base) * (1 + share * RNG.normal(size=6))))


BASES = [(5, 5, 5, 90, 90, 90), (5, 5, 5, 60, 60, 60), (5, 5, 5, 109.47, 109.47, 109.47), (5, 5, 8, 90, 90, 120),
         (5, 6, 7, 90, 100, 90), (4, 4, 9, 90, 90, 90), (5, 8.66, 7, 90, 90, 90)]  # fmt: skip


@pytest.mark.parametrize("base", BASES)
@pytest.mark.parametrize("tolerance", [1.0, 3.0])
def test_twofold_axes_and_obliquities_are_those_of_gemmi(base, tolerance):
    # gemmi.find_lattice_2fold_ops on the Niggli cell: Le Page's method, with its angles in degrees.
    for _ in range(12):
        cell = nearly(base, 0.006)
        theirs = gemmi.GruberVector(gemmi.UnitCell(*cell.constants), "P")
        theirs.niggli_reduce()
        angles = sorted(angle for _, angle in gemmi.find_lattice_2fold_ops(theirs.get_cell(), tolerance))
        ours = sorted(mirror.row.obliquity for mirror in lattice_symmetry(cell, tolerance).mirrors)
        assert len(ours) == len(angles)
        assert np.allclose(ours, angles, atol=1e-3)


@pytest.mark.parametrize("bravais", list(BRAVAIS))
def test_exact_symmetry_is_that_of_gemmi(bravais):
    constants, letter, holohedry = BRAVAIS[bravais]
    theirs = gemmi.find_lattice_symmetry(gemmi.UnitCell(*constants), letter, 0.001)
    # gemmi gives the rotations; the lattice's centre doubles them.
    assert 2 * len(theirs.sym_ops) == point_group(holohedry).order


def test_highest_symmetry_within_the_tolerance_is_that_of_gemmi():
    for k in range(40):
        cell = nearly(BASES[k % len(BASES)], 0.004)
        theirs = gemmi.find_lattice_symmetry(gemmi.UnitCell(*cell.constants), "P", 4.0)
        ours = lattice_symmetry(cell, 4.0).within
        assert point_group(ours.holohedry).order == 2 * len(theirs.sym_ops)


def test_larger_indices_in_the_reduced_cell_find_no_more_mirrors():
    # Le Page 1982: indices up to 2 suffice. By trying all up to 5, with exact and near mirrors.
    every = np.array([v for v in product(range(-5, 6), repeat=3) if np.gcd.reduce(v) == 1])
    planes = every[[next(k for k in v if k) > 0 for v in every.tolist()]]
    layers = planes @ every.T
    for k in range(35):
        cell = nearly(BASES[k % len(BASES)], 0.0 if k < 7 else 0.01)
        matrix = reduce_lattice(cell.metric)
        basis = np.linalg.cholesky(matrix.T @ cell.metric @ matrix).T
        rows = every @ basis.T
        normals = planes @ np.linalg.inv(basis)
        cosines = normals @ rows.T / np.outer(np.linalg.norm(normals, axis=1), np.linalg.norm(rows, axis=1))
        slow = ((layers == 1) | (layers == 2)) & (cosines > math.cos(math.radians(3.0)))
        assert len(near_square_pairs(basis.T @ basis, math.radians(3.0))) == slow.sum()


def test_a_monoclinic_cell_close_to_orthorhombic_by_hand():
    found = lattice_symmetry(parse_cell("5.1,7.2,9.3,90,90.05(3),90"))
    assert [(m.indices, m.row.indices) for m in found.mirrors] == [
        ((0, 1, 0), (0, 1, 0)), ((1, 0, 0), (1, 0, 0)), ((0, 0, 1), (0, 0, 1)),
    ]  # fmt: skip
    assert [m.row.obliquity for m in found.mirrors] == pytest.approx([0, 0.05, 0.05], abs=1e-9)
    assert [m.row.uncertainty for m in found.mirrors] == pytest.approx([0, 0.03, 0.03], rel=1e-4)
    assert (found.exact.holohedry, found.within.holohedry) == ("2/m", "mmm")
    assert found.within.conventional.bravais == "oP"
    assert found.exact.arrangement.finding().point_group.hermann_mauguin == "m"
    assert found.within.arrangement.finding().point_group.hermann_mauguin == "mmm"


def test_a_primitive_rhombus_is_a_centred_rectangle():
    # a = b, γ = 117.3°: the diagonals are square; a monoclinic net becomes orthorhombic, C-centred.
    found = lattice_symmetry(parse_cell("5,5,7,90,90,117.3"), 0.0)
    assert found.exact.holohedry == "mmm"
    assert found.exact.conventional.bravais == "oS"
    half = math.radians(117.3 / 2)
    assert found.exact.conventional.ideal[:3] == pytest.approx((10 * math.cos(half), 10 * math.sin(half), 7))


def test_rhombohedral_at_sixty_degrees_is_face_centred_cubic():
    # The primitive cell of a face-centred cube has a = a_c/√2 and 60° (geometry).
    found = lattice_symmetry(parse_cell("5,5,5,60,60,60"), 0.0).exact
    assert found.conventional.bravais == "cF"
    assert found.conventional.ideal == pytest.approx((5 * math.sqrt(2),) * 3 + (90,) * 3)
    near = lattice_symmetry(parse_cell("5,5,5,60.05,60.05,60.05"))
    assert (near.exact.holohedry, near.within.holohedry) == ("-3m", "m-3m")
    assert len(near.mirrors) == 9


def test_pseudohexagonal_step_by_step():
    found = lattice_symmetry(Cell((5.0, 8.67, 7.0, 90, 90, 90), centring="C"))
    assert [(s.holohedry, s.conventional.bravais) for s in found.steps] == [("mmm", "oS"), ("6/mmm", "hP")]
    wanted = math.degrees(abs(math.atan(8.67 / 15) - math.atan(5 / 8.67)))
    assert found.within.obliquity == pytest.approx(wanted)
    assert (
        lattice_symmetry(Cell((5.0, 8.67, 7.0, 90, 90, 90), centring="C"), 0.9 * wanted).within.holohedry
        == "mmm"
    )


def test_every_step_is_closed_and_within_its_obliquity():
    for k in range(30):
        cell = nearly(BASES[k % len(BASES)], 0.008)
        found = lattice_symmetry(cell, 6.0)
        orders = [point_group(step.holohedry).order for step in found.steps]
        assert orders == sorted(set(orders))
        for step in found.steps:
            matrices = {m.matrix.tobytes() for m in step.mirrors}
            assert {
                (a.matrix @ b.matrix @ a.matrix).tobytes() for a in step.mirrors for b in step.mirrors
            } <= matrices
            assert all(m.row.obliquity <= step.obliquity + 1e-9 for m in step.mirrors if not step.exact)
            if step.mirrors:
                theirs = step.arrangement.finding()
                expected = point_group(step.holohedry).mirror_subgroup.hermann_mauguin
                assert theirs.point_group.hermann_mauguin == expected


def test_long_and_flat_cells_stay_quick_and_right():
    for text in ("5,5,500,90,90,90", "1,60,60,90,90,90"):
        assert lattice_symmetry(parse_cell(text), 10.0).exact.holohedry == "4/mmm"


@pytest.mark.parametrize("tolerance", [-1.0, 10.5, float("nan")])
def test_tolerances_that_are_refused(tolerance):
    with pytest.raises(ToleranceError, match="degrees from 0 to 10"):
        lattice_symmetry(parse_cell("5,6,7,90,90,90"), tolerance)


def test_three_of_the_seven_mirrors_of_a_hexagonal_lattice_are_no_symmetry_of_their_own():
    """Cells near a hexagonal one, at tolerances between the obliquities of their mirrors."""
    types = {"-1": "a", "2/m": "m", "mmm": "o", "4/mmm": "t", "-3m": "hR", "6/mmm": "hP", "m-3m": "c"}
    for _ in range(25):
        cell = nearly((5, 5, 8, 90, 90, 120), 0.01)
        for mirror in lattice_symmetry(cell, 6.0).mirrors:
            for step in lattice_symmetry(cell, min(6.0, mirror.row.obliquity * 1.0001)).steps:
                assert step.conventional.bravais.startswith(types[step.holohedry])


def test_cells_of_any_shape_give_an_answer():
    for k in range(120):
        constants = (
            (*np.exp(RNG.uniform(-2, 5, 3)), *RNG.uniform(20, 150, 3))
            if k % 2
            else (5, 5, 5, *[RNG.uniform(1, 119.9)] * 3)
        )
        try:
            cell = Cell(constants, centring="PABCIF"[k % 6])
        except CellError:
            continue
        found = lattice_symmetry(cell, 10.0)
        for step in found.steps:
            assert step.conventional.cell.volume > 0
            assert step.arrangement is None or step.arrangement.finding().group is not None
