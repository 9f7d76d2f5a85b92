"""Cells against gemmi, the uncertainties against derivatives done by hand, and the reading of cells."""

import math

import gemmi
import numpy as np
import pytest

from mirrorlab.crystal.cell import Cell, parse_cell
from mirrorlab.crystal.centring import CENTRINGS, centring_with
from mirrorlab.crystal.lattices import CellError
from mirrorlab.crystal.measured import NumberError, parse_measured, write_measured
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.planes import planes_of
from mirrorlab.crystal.reduction import nearest_in_plane, plane_and_step, reduce_lattice, reduce_pair

RNG = np.random.default_rng(20)

CELLS = [
    (5.431, 5.431, 5.431, 90, 90, 90),
    (4.9, 4.9, 5.4, 90, 90, 120),
    (5.1, 7.2, 9.3, 90, 102.4, 90),
    (5.0, 6.0, 7.0, 80.0, 95.0, 103.0),
    (3.1, 12.7, 31.4, 71.3, 84.9, 66.6),
    (6.1, 6.1, 6.1, 55.3, 55.3, 55.3),
]


def reference(cell: Cell) -> gemmi.UnitCell:
    return gemmi.UnitCell(*cell.constants)


@pytest.mark.parametrize("constants", CELLS)
def test_metric_reciprocal_and_volume_are_those_of_gemmi(constants):
    cell, theirs = Cell(constants), reference(Cell(constants))
    assert np.allclose(cell.metric, np.array(theirs.metric_tensor().as_mat33().tolist()), rtol=1e-12)
    assert np.allclose(cell.basis, np.array(theirs.orth.mat.tolist()), atol=1e-12)
    assert cell.volume == pytest.approx(theirs.volume, rel=1e-12)
    assert np.allclose(cell.reciprocal_constants, theirs.reciprocal().parameters, rtol=1e-10)


@pytest.mark.parametrize("constants", CELLS)
def test_spacings_are_those_of_gemmi(constants):
    cell, theirs = Cell(constants), reference(Cell(constants))
    for plane in RNG.integers(-6, 7, size=(40, 3)).tolist():
        if any(plane):
            assert cell.spacing(plane) == pytest.approx(theirs.calculate_d(plane), rel=1e-10)


@pytest.mark.parametrize("constants", CELLS)
def test_normals_are_square_to_two_rows_of_the_plane(constants):
    cell = Cell(constants)
    for plane in [(1, 2, 3), (1, -1, 0), (0, 0, 1), (-2, 3, 5)]:
        within, step = plane_and_step(plane)
        assert np.abs(cell.normal(plane) @ cell.basis @ within).max() < 1e-12 * max(constants)
        assert np.dot(plane, step) == 1
        assert abs(round(np.linalg.det(np.column_stack([within, step])))) == 1


@pytest.mark.parametrize("letter", list(CENTRINGS))
def test_centrings_hold_the_points_of_gemmis_symmorphic_groups(letter):
    # gemmi: the centring vectors of P 1, C 2 … in units of 1/24.
    name = {
        "P": "P 1",
        "A": "A 1 2 1",
        "B": "B 1 1 2",
        "C": "C 1 2 1",
        "I": "I 2 2 2",
        "F": "F 2 2 2",
        "R": "R 3 :H",
    }
    theirs = gemmi.find_spacegroup_by_name(name[letter]).operations().cen_ops
    made = CENTRINGS[letter]
    ours = {tuple(row) for row in (made.translations * 24 // made.over).tolist()}
    assert ours == {tuple(vector) for vector in theirs}
    assert centring_with(np.array(theirs) / 24) is made


@pytest.mark.parametrize("letter", list(CENTRINGS))
def test_primitive_vectors_span_just_the_lattice(letter):
    made = CENTRINGS[letter]
    vectors = made.primitive / made.over
    assert np.linalg.det(vectors) == pytest.approx(1 / made.points)
    for vector in vectors.T:  # each leads to a point of the cell, moved by whole axes
        assert any(np.allclose((vector - point / made.over) % 1.0 % 1.0, 0) for point in made.translations)
    assert np.allclose(made.to_primitive @ vectors, np.eye(3))
    for point in made.translations:
        assert made.holds(point / made.over)
    assert not made.holds([0.25, 0.0, 0.0])


def test_reduced_lengths_are_those_of_gemmis_reduction():
    # gemmi's GruberVector: the Niggli cell has the three shortest non-coplanar vectors, as a Buerger cell has.
    for k in range(200):
        letter = "PABCIF"[k % 6]
        constants = (*RNG.uniform(3, 25, 3), *RNG.uniform(65, 115, 3))
        try:
            cell = Cell(constants, centring=letter)
        except CellError:
            continue
        theirs = gemmi.GruberVector(reference(cell), letter)
        theirs.niggli_reduce()
        metric = cell.primitive_basis.T @ cell.primitive_basis
        matrix = reduce_lattice(metric)
        lengths = np.sqrt(np.diag(matrix.T @ metric @ matrix))
        assert round(np.linalg.det(matrix)) == 1
        assert np.allclose(lengths, theirs.cell_parameters()[:3], rtol=1e-6)


def test_reduction_of_skew_vectors_by_trying_everything():
    for _ in range(50):
        skew = np.eye(3, dtype=int)
        for _ in range(6):
            i, j = RNG.permutation(3)[:2]
            skew[:, i] += int(RNG.integers(-3, 4)) * skew[:, j]
        metric = Cell((5, 5.5, 6.5, 75, 82, 88)).metric
        metric = skew.T @ metric @ skew
        matrix = reduce_lattice(metric)
        lengths = np.sort(np.sqrt(np.diag(matrix.T @ metric @ matrix)))
        assert np.allclose(lengths, [5, 5.5, 6.5])


def test_nearest_point_of_a_plane_lattice_by_trying_everything():
    for _ in range(60):
        table = np.array([[4.0, RNG.uniform(-9, 9)], [0, 30.0]])
        table[1, 0] = table[0, 1]
        pair = reduce_pair(table)
        reduced = pair.T @ table @ pair
        target = RNG.uniform(-3, 3, 2)
        found = nearest_in_plane(reduced, target)[0] - target
        every = np.array([(i, j) for i in range(-9, 10) for j in range(-9, 10)]) - target
        assert found @ reduced @ found == pytest.approx(np.einsum("ki,ij,kj->k", every, reduced, every).min())


def test_uncertainty_of_the_volume_by_hand():
    # V = a b c sin β of a monoclinic cell: relative variances add, and (σβ cos β/sin β)².
    cell = parse_cell("5.10(1), 7.20(2), 9.30(3), 90, 102.4(1), 90")
    beta = math.radians(102.4)
    share = (
        (0.01 / 5.1) ** 2 + (0.02 / 7.2) ** 2 + (0.03 / 9.3) ** 2 + (math.radians(0.1) / math.tan(beta)) ** 2
    )
    assert cell.uncertainty(lambda c: c.volume) == pytest.approx(cell.volume * math.sqrt(share), rel=1e-6)


def test_equal_axes_of_a_cubic_cell_are_one_measurement():
    # V = a³: σ(V) = 3a²σ(a) when a = b = c is one parameter, √3·a²σ(a) when they are three.
    text = "5.431(2),5.431(2),5.431(2),90,90,90"
    one, three = parse_cell(text), parse_cell(text, tied=False)
    assert one.tie_text == "a = b = c"
    assert one.uncertainty(lambda c: c.volume) == pytest.approx(3 * 5.431**2 * 0.002, rel=1e-6)
    assert three.uncertainty(lambda c: c.volume) == pytest.approx(math.sqrt(3) * 5.431**2 * 0.002, rel=1e-6)


def test_angles_that_symmetry_fixes_have_no_uncertainty():
    cell = parse_cell("5.431(2),5.431(2),5.431(2),90,90,90")
    angle = planes_of(cell, [(1, 0, 0), (1, 1, 0)]).angles[0]
    assert angle.normals.value == pytest.approx(45)
    assert angle.normals.uncertainty == 0
    # Independent lengths: φ = atan(a/b), dφ = (σ/a)/√2 radians.
    loose = planes_of(
        parse_cell("5.431(2),5.431(2),5.431(2),90,90,90", tied=False), [(1, 0, 0), (1, 1, 0)]
    ).angles[0]
    assert loose.normals.uncertainty == pytest.approx(math.degrees(0.002 / 5.431 / math.sqrt(2)), rel=1e-6)


def test_angle_of_a_monoclinic_cell_by_hand():
    # The normals of (100) and (001) stand at β* = 180° − β.
    angle = planes_of(parse_cell("5.1(1),7.2,9.3,90,102.4(1),90"), [(1, 0, 0), (0, 0, 1)]).angles[0]
    assert angle.normals.value == pytest.approx(77.6)
    assert angle.dihedral.value == pytest.approx(102.4)
    assert angle.dihedral.uncertainty == pytest.approx(0.1, rel=1e-6)


@pytest.mark.parametrize(
    ("text", "tie"),
    [
        ("5.0(1),5.0(1),7.0(1),90,90,90", "a = b"),
        ("5.0(1),5.0(1),7.0(1),90,90,120", "a = b"),
        ("6.1(1),6.1(1),6.1(1),55.3(2),55.3(2),55.3(2)", "a = b = c; α = β = γ"),
        ("7.0(1),5.0(1),5.0(1),90,90,90", "b = c"),
        ("5.0(1),5.0(2),7.0(1),90,90,90", ""),  # different uncertainties: measured apart
        (
            "5.0(1),5.0(1),7.0(1),90.0(1),90.0(1),90",
            "",
        ),  # measured right angles: no symmetry was taken for granted
        ("5,5,7,90,90,90", ""),
    ],
)
def test_which_constants_are_one_parameter(text, tie):
    assert parse_cell(text).tie_text == tie


# CIF notation (GUM 7.2.2): digits in brackets are units of the last decimal written.
@pytest.mark.parametrize(
    ("text", "value", "uncertainty"),
    [
        ("5.431(2)", 5.431, 0.002),
        ("5.431", 5.431, 0.0),
        ("90", 90.0, 0.0),
        ("102.40(13)", 102.40, 0.13),
        ("5431(2)", 5431.0, 2.0),
        ("5.431±0.002", 5.431, 0.002),
        ("5.431 +- 0.002", 5.431, 0.002),
        ("1.2e1(3)", 12.0, 3.0),
        (".5(1)", 0.5, 0.1),
        ("−3.2(1)", -3.2, 0.1),
    ],
)
def test_numbers_in_cif_notation(text, value, uncertainty):
    read = parse_measured(text)
    assert read.value == pytest.approx(value)
    assert read.uncertainty == pytest.approx(uncertainty)


@pytest.mark.parametrize(
    "text", ["", "abc", "5.4.3", "5.431(", "5.431()", "5.431(0)", "1e999", "nan", "inf", "5,4", "?"]
)
def test_texts_that_are_no_number(text):
    with pytest.raises(NumberError, match=r"write a number|uncertainty of 0"):
        parse_measured(text)


@pytest.mark.parametrize(
    ("value", "uncertainty", "text"),
    [
        (5.431, 0.002, "5.431(2)"),
        (5.431, 0.0016, "5.4310(16)"),
        (59.9, 0.2, "59.9(2)"),
        (0.0, 0.03, "0.00(3)"),
        (1234.5, 25.0, "1230(30)"),
        (5.431, 0.0, "5.431"),
        (90.0, 0.0, "90"),
        (2.0, 0.0195, "2.00(2)"),
    ],
)
def test_numbers_written(value, uncertainty, text):
    assert write_measured(value, uncertainty) == text


@pytest.mark.parametrize("constants", CELLS)
def test_a_written_cell_reads_back(constants):
    cell = Cell(constants, (0.002, 0.002, 0.013, 0.0, 0.1, 0.0))
    again = parse_cell(cell.text)
    assert np.allclose(again.constants, constants, atol=1e-6)
    assert np.allclose(again.uncertainties, cell.uncertainties)


@pytest.mark.parametrize(
    ("text", "centring", "said"),
    [
        ("", "P", "0 constants"),
        ("5,5,5,90,90", "P", "5 constants"),
        ("5,5,5,90,90,90,90", "P", "7 constants"),
        ("5,b,5,90,90,90", "P", 'b of the cell: "b"'),
        ("5,5,-5,90,90,90", "P", "c of the cell: -5"),
        ("5,5,5,90,90,190", "P", "γ of the cell: 190"),
        ("5,5,5,0,90,90", "P", "α of the cell: 0"),
        ("5,5,5,20,20,90", "P", "no three axes"),
        ("5,5,5,120,120,120", "P", "no three axes"),
        ("5,5,1e7,90,90,90", "P", "1e"),
        ("0.001,5,500,90,90,90", "P", "longest axis"),
        ("5.0(90),5,5,90,90,90", "P", "uncertainty of 9"),
        ("5,5,5,90,90,90", "X", 'centring "X"'),
        ("5,5,5,90,90,90", "", 'centring ""'),
        ("5,5,5,60,60,60", "R", "hexagonal axes"),
    ],
)
def test_cells_that_are_refused_say_why(text, centring, said):
    with pytest.raises(CrystalError) as caught:
        parse_cell(text, centring)
    assert said in str(caught.value)
