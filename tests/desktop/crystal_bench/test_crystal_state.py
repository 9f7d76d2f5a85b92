"""What is typed is saved with the arrangement and read back; a damaged section loses only what is damaged."""

from __future__ import annotations

import json

import pytest

from mirrorlab.desktop.crystal.crystal_state import EMPTY, CrystalState, crystal_state, from_mapping
from mirrorlab.desktop.sheets import read_sheet, write_sheet

FULL = CrystalState(
    group="-43m",
    faces=("1,1,1:1.1", "oops"),
    net="schmidt",
    underlay=True,
    marks="poles",
    constants=("5.4(1)", "5.4(1)", "5.4(1)", "90", "90", "90"),
    centring="F",
    cell_name="K-5",
    planes=("1,0,0",),
    tolerance=1.5,
    in_cell=True,
    list_text="label,x,y,z\nA,1,0,0\n",
    list_name="poles.csv",
    list_tolerance="0.25",
    orientation="searched",
    as_poles=True,
    list_in_cell=True,
    fit_sigma="0.3",
    fit_texts=("59.8(3)",),
)


def test_plain_json_and_back():
    assert from_mapping(json.loads(json.dumps(FULL.to_dict()))) == FULL
    assert from_mapping({}) == EMPTY


@pytest.mark.parametrize(
    ("damage", "lost"),
    [
        ({"faces": "111"}, "faces"),
        ({"faces": [1, 2]}, "faces"),
        ({"net": "polar"}, "net"),
        ({"constants": ["4", "4"]}, "constants"),
        ({"tolerance": "wide"}, "tolerance"),
        ({"tolerance": True}, "tolerance"),
        ({"as_poles": 1}, "as_poles"),
        ({"orientation": "sideways"}, "orientation"),
        ({"group": 7}, "group"),
    ],
)
def test_only_what_is_damaged_is_left_out(damage, lost):
    found = from_mapping(FULL.to_dict() | damage)
    assert getattr(found, lost) == getattr(EMPTY, lost)
    kept = {k: v for k, v in found.to_dict().items() if k != lost}
    assert kept == {k: v for k, v in FULL.to_dict().items() if k != lost}


def test_it_travels_in_the_arrangement_file(window, bench, section, tmp_path):
    window.document.set_crystal(FULL, "all of it")
    path = tmp_path / "k5.json"
    write_sheet(path, window.document)
    window.document.undo_stack.undo()
    assert crystal_state(window.document) == EMPTY
    read_sheet(path, window.document)
    assert crystal_state(window.document) == FULL
    forms = section("Forms")
    assert forms.faces.texts() == FULL.faces
    assert forms.faces.fields[1].property("wrong")
    assert section("Cell").fields[0].text() == "5.4(1)"
