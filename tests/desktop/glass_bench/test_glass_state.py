"""What is typed is saved with the arrangement and read back; a damaged section loses only what is damaged."""

from __future__ import annotations

import json

import pytest

from mirrorlab.desktop.glass.glass_state import EMPTY, GlassState, from_mapping, glass_state
from mirrorlab.desktop.sheets import read_sheet, write_sheet

FULL = GlassState(
    images="30",
    kinds="corner",
    whole=True,
    opening="4.5in",
    depth="oops",
    presets=("household glass", "", "perfect"),
    surfaces=("", "second"),
    reflectances=("0.8",),
    thing="picture",
    picture="lantern.png",
    eye=("1", "", "90 mm"),
    turn=("3", "-2"),
    field="40",
    errors=("", "0.1"),
    joint="butted",
    stock="1200 x 800",
    page="Letter",
    unit="in",
)


def test_plain_json_and_back():
    assert from_mapping(json.loads(json.dumps(FULL.to_dict()))) == FULL
    assert from_mapping({}) == EMPTY


@pytest.mark.parametrize(
    ("damage", "lost"),
    [
        ({"opening": 120}, "opening"),
        ({"opening": "1" * 10_000}, "opening"),
        ({"whole": "yes"}, "whole"),
        ({"eye": ["1", "2"]}, "eye"),
        ({"turn": "12"}, "turn"),
        ({"presets": ["a"] * 1000}, "presets"),
        ({"errors": [0.1]}, "errors"),
        ({"joint": "glued"}, "joint"),
        ({"page": "B5"}, "page"),
    ],
)
def test_only_what_is_damaged_is_left_out(damage, lost):
    found = from_mapping(FULL.to_dict() | damage)
    assert getattr(found, lost) == getattr(EMPTY, lost)
    kept = {k: v for k, v in found.to_dict().items() if k != lost}
    assert kept == {k: v for k, v in FULL.to_dict().items() if k != lost}


def test_it_travels_in_the_arrangement_file(window, section, tmp_path):
    window.document.set_glass(FULL, "all of it")
    path = tmp_path / "lantern.json"
    write_sheet(path, window.document)
    window.document.undo_stack.undo()
    assert glass_state(window.document) == EMPTY
    read_sheet(path, window.document)
    assert glass_state(window.document) == FULL
    assembly = section("Assembly")
    entries = assembly.rows[0].entries
    assert entries["opening"].field.text() == "4.5in"
    assert entries["depth"].field.text() == "oops"
    assert entries["depth"].field.property("wrong")


def test_unknown_presets_of_a_file_fall_back(window, section):
    window.document.set_glass(GlassState(presets=("obsidian",), surfaces=("third",)), "odd glass")
    assembly = section("Assembly")
    assert assembly.mirrors.presets[0].currentText() == "Aluminium"
    assert "Mirror a" in assembly.mirrors.error.text()
