"""Names, numbers and graphs of the families."""

from __future__ import annotations

import math

import pytest

from mirrorlab.mirrors.families import (
    LARGEST_PAIR_ORDER,
    MOST_MIRRORS,
    Family,
    FamilyError,
    family_angles,
    parse_family,
    recognise,
)

EVERY = [
    *(f"A{n}" for n in range(1, 9)),
    *(f"B{n}" for n in range(2, 9)),
    *(f"D{n}" for n in range(4, 9)),
    "E6",
    "E7",
    "E8",
    "F4",
    "G2",
    "H3",
    "H4",
    *(f"I2({m})" for m in (5, 7, 8, 12, 360)),
]


@pytest.mark.parametrize("name", EVERY)
def test_names_are_read_back(name):
    (family,) = parse_family(name)
    assert family.name == name
    assert parse_family(name.lower()) == (family,)


@pytest.mark.parametrize(
    ("text", "name"), [("I2(3)", "A2"), ("I2(4)", "B2"), ("I2(6)", "G2"), ("C3", "B3"), (" A 3 ", "A3")]
)
def test_other_names_of_the_same(text, name):
    assert parse_family(text)[0].name == name


def test_products():
    names = [[f.name for f in parse_family(text)] for text in ("A1xI2(5)", "A1×I2(5)", "A1 * i2(5)")]
    assert names == [["A1", "I2(5)"]] * 3
    assert [f.name for f in parse_family("I2(2)")] == ["A1", "A1"]


@pytest.mark.parametrize(
    "text",
    [
        "",
        "x",
        "A0",
        "A9",
        "B1",
        "D3",
        "E5",
        "E9",
        "F3",
        "G3",
        "H2",
        "H5",
        "I2(1)",
        "I2(0)",
        "I2(100001)",
        "I2",
        "I3(5)",
        "Q4",
        "A1x",
        "A33",
        "E8xA1",
    ],
)
def test_what_is_no_family_is_refused_with_what_was_typed(text):
    with pytest.raises(FamilyError, match=r'family "') as error:
        parse_family(text)
    assert f'"{text}"' in str(error.value)


@pytest.mark.parametrize("name", EVERY)
def test_the_graph_is_recognised_however_its_nodes_are_numbered(name):
    (family,) = parse_family(name)
    if family.rank == 1:
        return
    step = 5 if family.rank % 5 else 3  # any permutation will do: k → step·k + 1
    turn = [(step * k + 1) % family.rank for k in range(family.rank)]
    if len(set(turn)) < family.rank:
        turn = list(reversed(range(family.rank)))
    labels = {tuple(sorted((turn[i], turn[j]))): m for i, j, m in family.edges}
    found, nodes = recognise(labels, family.rank)
    assert found == family
    for i, j, m in family.edges:
        assert labels[tuple(sorted((nodes[i], nodes[j])))] == m


@pytest.mark.parametrize(
    "labels",
    [
        {(0, 1): 3, (1, 2): 3, (0, 2): 3},
        {(0, 1): 4, (1, 2): 4},
        {(0, 1): 5, (1, 2): 3, (2, 3): 3, (3, 4): 3},
        {(0, 1): 3, (0, 2): 3, (0, 3): 3, (0, 4): 3},
        {(0, 1): 6, (1, 2): 3},
    ],
)
def test_graphs_of_infinite_groups_are_not_recognised(labels):
    with pytest.raises(ValueError, match="no finite family"):
        recognise(labels, 1 + max(j for _, j in labels))


@pytest.mark.parametrize("rank", [1, 3, 4, 5, 6, 7, 8])
def test_the_bound_is_the_largest_of_the_rank(rank):
    counts = [parse_family(n)[0].mirror_count for n in EVERY if parse_family(n)[0].rank == rank]
    assert MOST_MIRRORS[rank] == max(counts)


def test_the_bound_on_pairs_is_reached_and_not_passed():
    orders = [m for name in EVERY for f in parse_family(name) if f.rank > 2 for _, _, m in f.edges]
    assert max(orders) == LARGEST_PAIR_ORDER


def test_angles_of_a_product_put_parts_square():
    angles = family_angles(parse_family("A2xI2(7)"))
    assert [str(a) for a in angles] == ["1/3", "1/2", "1/2", "1/2", "1/2", "1/7"]


def test_numbers_of_rank_two_follow_m():
    family = Family("I", 2, 11)
    assert (family.order, family.mirror_count, family.coxeter_number) == (22, 11, 11)
    assert family.exponents == (1, 10)
    assert not family.crystallographic
    assert not family.contains_inversion
    assert math.prod(family.degrees) == family.order
