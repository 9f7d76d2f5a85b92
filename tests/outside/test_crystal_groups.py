"""The 32 point groups against gemmi, SciPy, and tables of the trade."""

import gemmi
import numpy as np
import pytest
from scipy.spatial.transform import Rotation

from mirrorlab.crystal.closure import matrix_keys
from mirrorlab.crystal.generators import IN_CRYSTAL_AXES, SAME_SETTING, THE_32
from mirrorlab.crystal.identify import classify, identify_group
from mirrorlab.crystal.operations import parse_triplet
from mirrorlab.crystal.pointgroups import point_group
from mirrorlab.crystal.relations import subgroups, subgroups_among_the_32
from mirrorlab.crystal.symbols import GroupName

# International Tables for Crystallography A, table 10.1.2.2 (from memory): Hermann–Mauguin, Schoenflies, order.
TABLE = """
1 C1 1, -1 Ci 2, 2 C2 2, m Cs 2, 2/m C2h 4, 222 D2 4, mm2 C2v 4, mmm D2h 8,
4 C4 4, -4 S4 4, 4/m C4h 8, 422 D4 8, 4mm C4v 8, -42m D2d 8, 4/mmm D4h 16,
3 C3 3, -3 C3i 6, 32 D3 6, 3m C3v 6, -3m D3d 12,
6 C6 6, -6 C3h 6, 6/m C6h 12, 622 D6 12, 6mm C6v 12, -6m2 D3h 12, 6/mmm D6h 24,
23 T 12, m-3 Th 24, 432 O 24, -43m Td 24, m-3m Oh 48
"""
ROWS = [tuple(row.split()) for row in TABLE.replace("\n", " ").split(",")]

# Mirrors and the groups they generate: derived from gemmi's space-group table once, listed here as values.
MIRROR_SUBGROUPS = {
    "1": "1 -1 2 222 3 -3 32 4 -4 422 6 622 23 432",
    "m": "m 2/m 4/m -6 6/m",
    "mm2": "mm2 -42m",
    "3m": "3m -3m",
    "4mm": "4mm",
    "6mm": "6mm",
    "mmm": "mmm m-3",
    "-6m2": "-6m2",
    "4/mmm": "4/mmm",
    "6/mmm": "6/mmm",
    "-43m": "-43m",
    "m-3m": "m-3m",
}
MIRROR_COUNTS = {
    "m": 1, "2/m": 1, "mm2": 2, "mmm": 3, "4/m": 1, "4mm": 4, "-42m": 2, "4/mmm": 5, "3m": 3, "-3m": 3, "-6": 1,
    "6/m": 1, "6mm": 6, "-6m2": 4, "6/mmm": 7, "m-3": 3, "-43m": 6, "m-3m": 9,
}  # fmt: skip

# International Tables A, table 3.2.1.3 and chapter 10.2 (from memory).
POLAR = ["1", "2", "m", "mm2", "4", "4mm", "3", "3m", "6", "6mm"]
CENTROSYMMETRIC = ["-1", "2/m", "mmm", "4/m", "4/mmm", "-3", "-3m", "6/m", "6/mmm", "m-3", "m-3m"]
CHIRAL = ["1", "2", "222", "4", "422", "3", "32", "6", "622", "23", "432"]


def space_group_name(setting: str) -> str:
    """The symmorphic primitive space group of a setting, in gemmi's spelling."""
    spaced = {
        "3": "P 3", "-3": "P -3", "32": "P 3 2 1", "3m": "P 3 m 1", "-3m": "P -3 m 1", "312": "P 3 1 2",
        "31m": "P 3 1 m", "-31m": "P -3 1 m", "2": "P 1 2 1", "m": "P 1 m 1", "2/m": "P 1 2/m 1",
        "211": "P 2 1 1", "m11": "P m 1 1", "2/m11": "P 2/m 1 1", "112": "P 1 1 2", "11m": "P 1 1 m",
        "112/m": "P 1 1 2/m",
    }  # fmt: skip
    if setting in spaced:
        return spaced[setting]
    parts, rest = [], setting
    while rest:
        size = 3 if rest[1:2] == "/" else 2 if rest[0] == "-" else 1
        parts.append(rest[:size])
        rest = rest[size:]
    return "P " + " ".join(parts)


def rotation_parts(group: gemmi.SpaceGroup) -> np.ndarray:
    """Rotation parts of a space group, each once."""
    parts = np.array([op.rot for op in group.operations().sym_ops]) // gemmi.Op.DEN
    return np.unique(parts, axis=0)


def orthogonal(matrices: np.ndarray) -> np.ndarray:
    """Whole-number operations in a basis that makes them orthogonal: the metric averaged over the group."""
    stack = matrices.astype(float)
    metric = (np.swapaxes(stack, 1, 2) @ stack).mean(axis=0)
    basis = np.linalg.cholesky(metric).T
    return basis @ stack @ np.linalg.inv(basis)


@pytest.mark.parametrize(("symbol", "schoenflies", "order"), ROWS)
def test_symbols_and_orders(symbol, schoenflies, order):
    group = point_group(symbol)
    assert group.schoenflies == schoenflies
    assert group.order == int(order)
    assert point_group(schoenflies) is group


def test_there_are_32_in_the_tables_order():
    assert tuple(row[0] for row in ROWS) == THE_32


@pytest.mark.parametrize("setting", list(IN_CRYSTAL_AXES))
def test_operations_are_those_of_the_symmorphic_space_group(setting):
    reference = gemmi.find_spacegroup_by_name(space_group_name(setting))
    assert reference is not None
    ours = {tuple(matrix.ravel().tolist()) for matrix in point_group(setting).matrices}
    assert ours == {tuple(matrix.ravel().tolist()) for matrix in rotation_parts(reference)}


@pytest.mark.parametrize("symbol", THE_32)
def test_triplets_are_read_by_gemmi_as_the_same_matrices(symbol):
    for element in point_group(symbol).operations:
        rot = np.array(gemmi.Op(element.triplet).rot) // gemmi.Op.DEN
        assert (rot == element.matrix).all()
        assert (parse_triplet(element.triplet) == element.matrix).all()


def test_every_space_group_of_gemmi_is_classified_as_gemmi_says():
    for space_group in gemmi.spacegroup_table():
        name = classify(orthogonal(rotation_parts(space_group)))
        assert point_group(name).hermann_mauguin == point_group(space_group.point_group_hm()).hermann_mauguin
        assert point_group(name).laue_class == point_group(space_group.laue_str()).hermann_mauguin
        assert point_group(name).centrosymmetric == space_group.is_centrosymmetric()


def test_determinant_and_axis_agree_with_gemmi_rotation_types():
    # gemmi's Op.rot_type(): the order of the rotation with the sign of the determinant.
    for symbol in THE_32:
        for element in point_group(symbol).operations:
            expected = -2 if element.kind == "m" else int(element.kind)
            assert gemmi.Op(element.triplet).rot_type() == expected


@pytest.mark.parametrize("symbol", THE_32)
def test_mirror_subgroups_and_counts(symbol):
    group = point_group(symbol)
    below = next(mirrors for mirrors, groups in MIRROR_SUBGROUPS.items() if symbol in groups.split())
    assert group.mirror_subgroup.hermann_mauguin == below
    assert len(group.mirrors) == MIRROR_COUNTS.get(symbol, 0)


@pytest.mark.parametrize("symbol", THE_32)
def test_polar_chiral_centrosymmetric(symbol):
    group = point_group(symbol)
    assert group.polar == (symbol in POLAR)
    assert group.chiral == (symbol in CHIRAL)
    assert group.centrosymmetric == (symbol in CENTROSYMMETRIC)


def test_eleven_laue_classes():
    assert sorted({point_group(symbol).laue_class for symbol in THE_32}) == sorted(CENTROSYMMETRIC)


@pytest.mark.parametrize(
    ("scipy_name", "symbol"),
    [
        *((f"C{n}", f"C{n}") for n in (1, 2, 3, 4, 5, 6, 7, 12)),
        *((f"D{n}", f"D{n}") for n in (2, 3, 4, 5, 6, 8, 9)),
        ("T", "23"),
        ("O", "432"),
        ("I", "235"),
    ],
)
def test_rotation_groups_against_scipy(scipy_name, symbol):
    # SciPy Rotation.create_group: the finite rotation groups in orientations of its own.
    matrices = Rotation.create_group(scipy_name).as_matrix()
    found = identify_group(matrices)
    group = point_group(symbol)
    assert found.name == group.name
    turned = found.rotation @ matrices @ found.rotation.T
    assert set(matrix_keys(turned)) == set(matrix_keys(group.cartesian))


@pytest.mark.parametrize(
    ("symbol", "count"),
    # Numbers of subgroups of S4×C2, D6×C2, S4, A4, A5 and A5×C2 (common knowledge of finite groups, from memory).
    [("m-3m", 98), ("6/mmm", 54), ("432", 30), ("-43m", 30), ("23", 10), ("235", 59), ("m-3-5", 164)],
)
def test_numbers_of_subgroups(symbol, count):
    assert sum(row.conjugates for row in subgroups(point_group(symbol))) == count


@pytest.mark.parametrize(
    ("symbol", "maximal"),
    # International Tables A, figure 10.1.3.2 (from memory).
    [
        ("m-3m", "-3m -43m 4/mmm 432 m-3"),
        ("6/mmm", "-3m -6m2 6/m 622 6mm mmm"),
        ("-43m", "-42m 23 3m"),
        ("432", "23 32 422"),
        ("m-3", "-3 23 mmm"),
        ("4/mmm", "-42m 4/m 422 4mm mmm"),
        ("-3m", "-3 2/m 32 3m"),
        ("-6m2", "-6 32 3m mm2"),
        ("23", "222 3"),
        ("mm2", "2 m"),
    ],
)
def test_maximal_subgroups(symbol, maximal):
    found = {row.name.hermann_mauguin for row in subgroups(point_group(symbol)) if row.maximal}
    assert " ".join(sorted(found)) == maximal


def test_subgroup_relation_agrees_with_gemmi_matrices():
    """A group lies below another if some choice of the other's operations has its type: checked for sub-settings."""
    for symbol in ("4/mmm", "6/mmm", "m-3m"):
        whole = {
            tuple(m.ravel().tolist())
            for m in rotation_parts(gemmi.find_spacegroup_by_name(space_group_name(symbol)))
        }
        below = subgroups_among_the_32(point_group(symbol))
        for other in THE_32:
            if other == symbol:
                continue
            parts = rotation_parts(gemmi.find_spacegroup_by_name(space_group_name(other)))
            if {tuple(m.ravel().tolist()) for m in parts} <= whole:
                assert other in below


@pytest.mark.parametrize(
    ("symbol", "schoenflies", "order"),
    # International Tables A, tables 10.1.4.1 to 10.1.4.3: groups without a lattice (from memory).
    [
        ("5", "C5", 5), ("-5", "C5i", 10), ("52", "D5", 10), ("5m", "C5v", 10), ("-5m", "D5d", 20),
        ("8", "C8", 8), ("-8", "S8", 8), ("8/m", "C8h", 16), ("822", "D8", 16), ("8mm", "C8v", 16),
        ("-82m", "D4d", 16), ("8/mmm", "D8h", 32), ("-10", "C5h", 10), ("-10m2", "D5h", 20), ("10/mmm", "D10h", 40),
        ("12/mmm", "D12h", 48), ("-12", "S12", 12), ("-122m", "D6d", 24), ("235", "I", 60), ("m-3-5", "Ih", 120),
    ],
)  # fmt: skip
def test_groups_without_a_lattice(symbol, schoenflies, order):
    group = point_group(symbol)
    assert (group.schoenflies, group.order) == (schoenflies, order)
    assert point_group(schoenflies) is group
    assert not group.name.crystallographic
    assert classify(group.cartesian) == group.name


def test_standard_spellings_mean_the_same_group():
    for spelled, plain in SAME_SETTING.items():
        assert point_group(spelled) is point_group(plain)
    assert point_group("C1v").name == GroupName("Ch", 1)
