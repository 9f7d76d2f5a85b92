"""Subgroups against the definition: every closed set of operations."""

from itertools import combinations

import numpy as np
import pytest

from mirrorlab.crystal.closure import product_table
from mirrorlab.crystal.generators import THE_32
from mirrorlab.crystal.identify import classify
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.pointgroups import point_group
from mirrorlab.crystal.relations import subgroups, subgroups_among_the_32, supergroups_among_the_32


def all_closed_sets(table: np.ndarray) -> set[frozenset[int]]:
    """By definition, trying every set of operations with the identity."""
    order = len(table)
    found = set()
    for size in range(order):
        if order % (size + 1):
            continue
        for others in combinations(range(1, order), size):
            members = {0, *others}
            if all(int(table[a, b]) in members for a in members for b in members):
                found.add(frozenset(members))
    return found


@pytest.mark.parametrize("symbol", ["1", "2/m", "mmm", "-42m", "4/m", "-3", "32", "-3m", "622", "-6m2", "23"])
def test_every_subgroup_is_found(symbol):
    group = point_group(symbol)
    closed = all_closed_sets(product_table(group.matrices))
    rows = subgroups(group)
    assert sum(row.conjugates for row in rows) == len(closed)
    assert {frozenset(row.operations) for row in rows} <= closed
    proper = [other for other in closed if len(other) < group.order]
    for row in rows:
        mine = frozenset(row.operations)
        by_definition = len(mine) < group.order and not any(mine < other for other in proper)
        assert row.maximal == by_definition
        assert classify(group.cartesian[list(row.operations)]) == row.name


def test_subgroup_and_supergroup_are_the_same_relation():
    for first in THE_32:
        for second in THE_32:
            below = first in subgroups_among_the_32(point_group(second))
            assert below == (second in supergroups_among_the_32(point_group(first)))


def test_oriented_symbols_tell_subgroups_of_one_type_apart():
    # Site symmetries and subgroups of m-3m as International Tables A writes them (from memory).
    oriented = {row.oriented for row in subgroups(point_group("m-3m"))}
    printed = (
        "mmm.. m.mm -42.m -4m.2 4/mm.m .-3m 42.2 222.. 2.22 mm2.. m.m2 2.mm 4m.m .3m .32 4/m.. ..m m.. ..2"
    )
    assert set(printed.split()) <= oriented


def test_large_groups_are_not_listed():
    with pytest.raises(CrystalError, match="up to order 120"):
        subgroups(point_group("32/mmm"))
    assert supergroups_among_the_32(point_group("m-3-5")) == ()
