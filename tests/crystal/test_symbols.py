"""Symbols read and written, and what is refused."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from mirrorlab.crystal.pointgroups import point_group, without_lattice
from mirrorlab.crystal.symbols import GroupName, SymbolError, normal_name, parse_symbol, typographic


@pytest.mark.parametrize(
    ("text", "symbol", "setting"),
    [
        ("-43m", "-43m", "-43m"),
        ("4̅3m", "-43m", "-43m"),
        ("m3̄m", "m-3m", "m-3m"),
        ("−43m", "-43m", "-43m"),
        (r"\bar{4}3m", "-43m", "-43m"),
        ("4/m 2/m 2/m", "4/mmm", "4/mmm"),
        ("m3m", "m-3m", "m-3m"),
        ("3 1 m", "3m", "31m"),
        ("112/m", "2/m", "112/m"),
        ("3/m", "-6", "-6"),
        ("D5h", "-10m2", "-10m2"),
        ("c3i", "-3", "-3"),
        ("S6", "-3", "-3"),
        ("S3", "-6", "-6"),
        ("C1h", "m", "m"),
        ("D1d", "2/m", "2/m"),
        ("52", "52", "52"),
        ("532", "235", "235"),
    ],
)
def test_reading(text, symbol, setting):
    name, found = parse_symbol(text)
    assert (name.hermann_mauguin, found) == (symbol, setting)


@pytest.mark.parametrize(
    "text", ["", " ", "x", "0", "-0", "5mm", "mm", "C0", "C5x", "4m", "m-3-3", "1/0", "--4", "4-"]
)
def test_refused_with_the_text_and_what_is_accepted(text):
    with pytest.raises(SymbolError, match="Hermann–Mauguin") as caught:
        parse_symbol(text)
    assert f'"{text}"' in str(caught.value)


@settings(deadline=None)
@given(st.text(max_size=8))
def test_any_text_is_read_or_refused_cleanly(text):
    try:
        name, _ = parse_symbol(text)
    except SymbolError:
        return
    assert name.order > 0


@settings(deadline=None)
@given(st.sampled_from(["C", "Ch", "Cv", "D", "Dh", "Dd", "S"]), st.integers(1, 400))
def test_every_name_reads_back_from_schoenflies(family, n):
    name = normal_name(family, 2 * n if family == "S" else n)
    assert parse_symbol(name.schoenflies)[0] == name


def test_hermann_mauguin_reads_back():
    # Digits run together: C52 is written 52, which stands for 5 2, and a few long names are those of settings or
    # of groups with several threefold axes. All others are told apart.
    shared = {"11m", "112", "31m", "312", "432", "532"}
    names = without_lattice()
    assert len(names) > 300
    for name in names:
        read, _ = parse_symbol(name.hermann_mauguin)
        assert read == name or (name.family == "C" and name.n > 9) or name.hermann_mauguin in shared


def test_large_groups_are_refused():
    assert point_group("360/mmm").order == 1440
    with pytest.raises(SymbolError, match="up to order 1440"):
        point_group("-722m2")
    with pytest.raises(SymbolError, match="up to order 1440"):
        point_group("C1441")


@pytest.mark.parametrize(
    ("plain", "printed"),
    [
        ("-43m", "4̅3m"),
        ("m-3m", "m3̅m"),
        ("-42m", "4̅2m"),
        ("-10m2", "1̅0̅m2"),
        ("m-3-5", "m3̅5̅"),
        (".-3m", ".3̅m"),
        ("mm2", "mm2"),
    ],
)
def test_typographic(plain, printed):
    assert typographic(plain) == printed
    assert parse_symbol(printed)[0] == parse_symbol(plain)[0] if "." not in plain else True


def test_crystallographic_is_one_two_three_four_six():
    assert [n for n in range(1, 13) if GroupName("C", n).crystallographic] == [1, 2, 3, 4, 6]
    assert [n for n in range(2, 13) if normal_name("Dd", n).crystallographic] == [2, 3]
