"""CIF files against gemmi's space-group table; damaged files give an error that names the item or the line."""

import gemmi
import numpy as np
import pytest

from mirrorlab.crystal.cif import CifError, parse_cif, read_cif
from mirrorlab.crystal.pointgroups import point_group

RNG = np.random.default_rng(23)

# All settings that gemmi knows, thinned; and one of each point group.
TABLE = list(gemmi.spacegroup_table())
CHOSEN = {sg.xhm(): sg for sg in TABLE[::9]} | {
    sg.xhm(): sg for sg in {s.point_group_hm(): s for s in TABLE}.values()
}


def cell_for(space_group: gemmi.SpaceGroup) -> list[float]:
    """A cell of the crystal system, in the setting of the space group."""
    system = space_group.crystal_system_str()
    if system == "cubic":
        return [6.1, 6.1, 6.1, 90, 90, 90]
    if system in ("trigonal", "hexagonal"):
        rhombohedral = space_group.ext == "R"
        return [6.1, 6.1, 6.1, 77, 77, 77] if rhombohedral else [6.1, 6.1, 7.7, 90, 90, 120]
    if system == "tetragonal":
        return [6.1, 6.1, 7.7, 90, 90, 90]
    if system == "orthorhombic":
        return [5.1, 6.1, 7.7, 90, 90, 90]
    angles = [81.0, 86.0, 77.0]
    if system == "monoclinic":
        axis = "abc".index(space_group.monoclinic_unique_axis())
        angles = [103.0 if k == axis else 90.0 for k in range(3)]
    return [5.1, 6.1, 7.7, *angles]


def cif_text(space_group: gemmi.SpaceGroup, operations: bool, name: bool = True) -> str:
    keys = ["length_a", "length_b", "length_c", "angle_alpha", "angle_beta", "angle_gamma"]
    lines = [
        "data_K-3",
        *(f"_cell_{key} {value}" for key, value in zip(keys, cell_for(space_group), strict=True)),
    ]
    if name:
        lines.append(f"_space_group_name_H-M_alt '{space_group.xhm()}'")
    if operations:
        lines += [
            "loop_",
            "_space_group_symop_operation_xyz",
            *(f"'{op.triplet()}'" for op in space_group.operations()),
        ]
    return "\n".join(lines) + "\n"


@pytest.mark.parametrize("name", list(CHOSEN))
def test_point_group_and_centring_are_those_of_gemmi(name):
    space_group = CHOSEN[name]
    theirs = space_group.operations()
    found = parse_cif(cif_text(space_group, operations=True, name=False), "k3.cif")
    assert found.point_group == point_group(space_group.point_group_hm()).hermann_mauguin
    assert found.cell.lattice.points == len(theirs.cen_ops)
    assert len(found.rotations) == len(theirs.sym_ops)
    assert found.number == space_group.number
    assert len(found.mirrors) == len(point_group(found.point_group).mirrors)
    by_name = parse_cif(cif_text(space_group, operations=False), "k3.cif")
    assert {m.tobytes() for m in by_name.rotations} == {m.tobytes() for m in found.rotations}
    assert by_name.cell == found.cell
    if found.mirrors:
        symbol = found.arrangement.finding().point_group.hermann_mauguin
        assert symbol == point_group(found.point_group).mirror_subgroup.hermann_mauguin
    else:
        assert found.arrangement is None


CUBE = """data_K-7
_cell_length_a 5.431(2)
_cell_length_b 5.431(2)
_cell_length_c 5.431(2)
_cell_angle_alpha 90
_cell_angle_beta 90
_cell_angle_gamma 90
_symmetry_space_group_name_H-M 'P m -3'
_symmetry_Int_Tables_number 200
loop_
_symmetry_equiv_pos_as_xyz
"""
CUBE += "".join(f"  '{op.triplet()}'\n" for op in gemmi.find_spacegroup_by_name("P m -3").operations())


def test_a_whole_file():
    found = parse_cif(CUBE, "k7.cif")
    assert (found.block, found.point_group, found.setting, found.space_group) == (
        "K-7",
        "m-3",
        "m-3",
        "P m -3",
    )
    assert found.cell.text == "5.431(2), 5.431(2), 5.431(2), 90, 90, 90"
    assert found.cell.tie_text == "a = b = c"
    assert sorted(found.mirrors) == [(0, 0, 1), (0, 1, 0), (1, 0, 0)]
    assert found.notes == ()


def test_uncertainties_in_items_of_their_own_and_names_with_a_point():
    text = CUBE.replace("_cell_length_", "_cell.length_").replace("_cell_angle_", "_cell.angle_")
    text = text.replace("5.431(2)", "5.431") + "_cell.length_a_esd 0.004\n"
    found = parse_cif(text, "k7.cif")
    assert found.cell.uncertainties[:2] == (0.004, 0.0)


def test_rhombohedral_axes_and_hexagonal_axes_of_one_name():
    hexagonal = "data_h\n" + "\n".join(CUBE.splitlines()[1:7]).replace(
        "5.431(2)\n_cell_angle_alpha", "9.1\n_cell_angle_alpha"
    )
    hexagonal = (
        hexagonal.replace("_cell_angle_gamma 90", "_cell_angle_gamma 120") + "\n_space_group_IT_number 166\n"
    )
    found = parse_cif(hexagonal)
    assert (found.cell.centring, found.point_group, found.setting) == ("R", "-3m", "-3m")
    rhombohedral = (
        "data_r\n"
        + "\n".join(CUBE.splitlines()[1:7]).replace(" 90", " 77")
        + "\n_space_group_IT_number 166\n"
    )
    found = parse_cif(rhombohedral)
    assert (found.cell.centring, found.point_group, found.setting) == ("P", "-3m", "")


@pytest.mark.parametrize(
    ("change", "note"),
    [
        (
            lambda t: t.replace("P m -3'", "P n m a'").replace("number 200", "number 62"),
            "the operations count",
        ),
        (
            lambda t: t.replace("P m -3'", "Q q q'").replace("_symmetry_Int_Tables_number 200\n", ""),
            "no space group",
        ),
        (lambda t: t.replace("length_c 5.431(2)", "length_c 5.436(2)"), "misses the symmetry"),
        (lambda t: "\n".join(t.splitlines()[:7]), "nothing of symmetry"),
        (lambda t: t + t.replace("data_K-7", "data_K-8"), "K-8 have cells too"),
    ],
)
def test_oddities_are_read_and_noted(change, note):
    assert any(note in one for one in parse_cif(change(CUBE), "k7.cif").notes)


@pytest.mark.parametrize(
    ("change", "said"),
    [
        (lambda t: "", "k7.cif: the file is empty"),
        (lambda t: "\0\1\2", "binary"),
        (lambda t: "hello", "k7.cif, line 1: no well-formed CIF"),
        (lambda t: "data_K-7\n", "_cell_length_a is missing"),
        (
            lambda t: t.replace("_cell_length_b 5.431(2)\n", ""),
            "item _cell_length_b is missing in data block K-7",
        ),
        (lambda t: t.replace("beta 90", "beta ?"), "line 6: item _cell_angle_beta has no value"),
        (lambda t: t.replace("beta 90", "beta"), "line 6"),
        (lambda t: t.replace("beta 90", "beta ninety"), 'line 6: item _cell_angle_beta: "ninety"'),
        (lambda t: t.replace("beta 90", "beta 190"), "line 6: item _cell_angle_beta: 190"),
        (
            lambda t: t.replace("length_c 5.431(2)", "length_c -5.431(2)"),
            "line 4: item _cell_length_c: -5.431(2)",
        ),
        (lambda t: t.replace("length_c 5.431(2)", "length_c 5.431(2"), "line 4: item _cell_length_c"),
        (lambda t: t.replace("length_c 5.431(2)", "length_c 6.5(2)"), "do not have the symmetry"),
        (lambda t: t.replace("'P m -3'", "'P m -3"), "line 8: no well-formed CIF"),
        (lambda t: t.replace("'-x,-y,z'", "'-x,-y,q'"), 'item _symmetry_equiv_pos_as_xyz, row 2: "-x,-y,q"'),
        (lambda t: t.replace("'-x,-y,z'", "'-x,-y,2z'"), "row 2"),
        (lambda t: t.replace("'-x,-y,z'", "'-x,-y'"), "row 2"),
        (lambda t: t.replace("'-x,-y,z'\n", "\n"), "item _symmetry_equiv_pos_as_xyz: row"),
        (
            lambda t: t.partition("loop_")[0].replace("P m -3'", "Q'").replace("number 200", "number 999"),
            "999",
        ),
        (lambda t: t.partition("loop_")[0].replace("P m -3'", "Q'").replace("number 200", "number x"), '"x"'),
        (lambda t: t.partition("loop_")[0].replace("P m -3'", "Q q'"), "no space group that is known"),
        (lambda t: t + "_cell_length_a 5\n", "_cell_length_a"),
    ],
)
def test_damaged_files_name_what_is_wrong(change, said):
    with pytest.raises(CifError) as caught:
        parse_cif(change(CUBE), "k7.cif")
    assert said in str(caught.value)
    assert str(caught.value).startswith("k7.cif")


def test_blocks_by_name():
    both = CUBE + CUBE.replace("data_K-7", "data_K-8").replace("5.431", "5.6")
    assert parse_cif(both, block="k-8").cell.constants[0] == 5.6
    with pytest.raises(CifError, match="there are K-7, K-8"):
        parse_cif(both, block="K-9")


def test_files_that_cannot_be_read(tmp_path):
    with pytest.raises(CifError, match=r"nowhere\.cif: cannot be read"):
        read_cif(tmp_path / "nowhere.cif")
    with pytest.raises(CifError, match="cannot be read"):
        read_cif(tmp_path)
    path = tmp_path / "latin.cif"
    path.write_bytes(CUBE.encode() + "# Köhler\n".encode("latin-1"))
    assert any("Latin-1" in note for note in read_cif(path).notes)


def test_nothing_crashes_on_damage_anywhere():
    """Whatever is cut, doubled or scrambled: an answer or an error of ours."""
    signs = [*"'\"();_?.,-+*/xyz0123456789 \n#", "loop_", "data_", "\n;", "\t"]
    answers, messages = 0, []
    for _ in range(400):
        text = CUBE
        for _ in range(int(RNG.integers(1, 4))):
            k = int(RNG.integers(0, len(text)))
            kind = int(RNG.integers(0, 4))
            length = int(RNG.integers(1, 30))
            sign = signs[int(RNG.integers(0, len(signs)))]
            text = (
                text[:k] if kind == 0 and k > 20 else text[:k] + text[k + length :] if kind == 1
                else text[:k] + sign + text[k:] if kind == 2 else text[:k] + sign + text[k + 1 :]
            )  # fmt: skip
        try:
            parse_cif(text, "k7.cif")
            answers += 1
        except CifError as error:
            messages.append(str(error))
    assert all(message.startswith("k7.cif") for message in messages)
    assert 20 < answers < 380
