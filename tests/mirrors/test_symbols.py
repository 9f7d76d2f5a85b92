"""Point-group symbols of mirror groups."""

from __future__ import annotations

import pytest

from mirrorlab.mirrors.families import parse_family
from mirrorlab.mirrors.symbols import point_group, rotation_group

SYMBOLS = {
    "A1": ("m", "Cs", "1", "C1"),
    "A1xA1": ("mm2", "C2v", "2", "C2"),
    "A2": ("3m", "C3v", "3", "C3"),
    "B2": ("4mm", "C4v", "4", "C4"),
    "I2(5)": ("5m", "C5v", "5", "C5"),
    "G2": ("6mm", "C6v", "6", "C6"),
    "I2(7)": ("7m", "C7v", "7", "C7"),
    "I2(8)": ("8mm", "C8v", "8", "C8"),
    "I2(12)": ("12mm", "C12v", "12", "C12"),
    "A1xA1xA1": ("mmm", "D2h", "222", "D2"),
    "A1xA2": ("-6m2", "D3h", "32", "D3"),
    "B2xA1": ("4/mmm", "D4h", "422", "D4"),
    "A1xI2(5)": ("-10m2", "D5h", "52", "D5"),
    "A1xG2": ("6/mmm", "D6h", "622", "D6"),
    "I2(8)xA1": ("8/mmm", "D8h", "822", "D8"),
    "A3": ("-43m", "Td", "23", "T"),
    "B3": ("m-3m", "Oh", "432", "O"),
    "H3": ("m-3-5", "Ih", "235", "I"),
}


@pytest.mark.parametrize("name", SYMBOLS)
def test_symbols(name):
    families = parse_family(name)
    whole, rotations = point_group(families), rotation_group(families)
    found = (whole.hermann_mauguin, whole.schoenflies, rotations.hermann_mauguin, rotations.schoenflies)
    assert found == SYMBOLS[name]
    assert whole.to_dict() == {"hermann_mauguin": found[0], "schoenflies": found[1]}


def test_no_mirror_and_too_many():
    assert point_group(()).hermann_mauguin == "1"
    assert rotation_group(()).schoenflies == "C1"
    assert point_group(parse_family("A4")) is None
    assert rotation_group(parse_family("A2xA2")) is None
