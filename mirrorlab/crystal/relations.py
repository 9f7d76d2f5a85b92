"""Subgroups of a point group, and which of the 32 are sub- and supergroups of which.

Every subgroup is found: all joins of cyclic ones. Among the 32 a group lies below another when the other has a
subgroup of its type; since all 32 are subgroups of m-3m or 6/mmm, those two lists of subgroups settle it.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from mirrorlab.crystal.closure import product_table
from mirrorlab.crystal.generators import THE_32
from mirrorlab.crystal.identify import classify
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.pointgroups import NamedGroup, point_group
from mirrorlab.crystal.site_symmetry import oriented_symbol
from mirrorlab.crystal.symbols import GroupName

LARGEST_LISTED = 120
"""Above this order the subgroups are not listed: their number grows faster than a person can read."""


@dataclass(frozen=True)
class SubgroupClass:
    """Subgroups that operations of the group turn into one another.

    Attributes
    ----------
    name : GroupName
    oriented : str
        Symbol with its orientation in the group, such as ``m.m2``.
    index : int
        Order of the group over that of the subgroup.
    conjugates : int
        How many there are; 1 means the subgroup is normal.
    maximal : bool
        No other subgroup lies between it and the group.
    operations : tuple of int
        Operations of one of them (indices into ``group.operations``).
    """

    name: GroupName
    oriented: str
    index: int
    conjugates: int
    maximal: bool
    operations: tuple[int, ...]

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "hermann_mauguin": self.name.hermann_mauguin,
            "schoenflies": self.name.schoenflies,
            "oriented": self.oriented,
            "order": self.name.order,
            "index": self.index,
            "conjugates": self.conjugates,
            "maximal": self.maximal,
            "operations": list(self.operations),
        }


def _all_subgroups(table: np.ndarray) -> set[frozenset[int]]:
    """Every subgroup as a set of indices: cyclic ones, joined until nothing new appears."""
    order = len(table)
    identity = int(np.flatnonzero((table == np.arange(order)).all(axis=1))[0])
    cyclic = set()
    for element in range(order):
        powers, power = {identity}, element
        while power not in powers:
            powers.add(power)
            power = int(table[power, element])
        cyclic.add(frozenset(powers))
    found = {frozenset([identity])} | cyclic
    front = list(found)
    while front:
        fresh = []
        for subgroup in front:
            for other in cyclic:
                if not other <= subgroup:
                    joined = _join(table, subgroup, other)
                    if joined not in found:
                        found.add(joined)
                        fresh.append(joined)
        front = fresh
    return found


def _join(table: np.ndarray, first: frozenset[int], second: frozenset[int]) -> frozenset[int]:
    inside = np.zeros(len(table), bool)
    inside[list(first | second)] = True
    while True:
        members = np.flatnonzero(inside)
        before = len(members)
        inside[table[np.ix_(members, members)].ravel()] = True
        if inside.sum() == before:
            return frozenset(members.tolist())


@lru_cache(maxsize=64)
def subgroups(group: NamedGroup) -> tuple[SubgroupClass, ...]:
    """All classes of subgroups, the largest first; the group itself and 1 included.

    Raises
    ------
    CrystalError
        When the order is above 120.
    """
    if group.order > LARGEST_LISTED:
        msg = f"{group.setting} has order {group.order}; subgroups are listed up to order {LARGEST_LISTED}"
        raise CrystalError(msg)
    table = product_table(group.matrices)
    inverse = np.argmax(table == table[0, 0], axis=1)
    everything = _all_subgroups(table)
    proper = [other for other in everything if len(other) < group.order]
    rows, done = [], set()
    for subgroup in sorted(everything, key=lambda other: (-len(other), sorted(other))):
        if subgroup in done:
            continue
        members = np.array(sorted(subgroup))
        class_ = {frozenset(table[table[g, members], inverse[g]].tolist()) for g in range(group.order)}
        done |= class_
        maximal = len(subgroup) < group.order and not any(subgroup < other for other in proper)
        name = classify(group.cartesian[members])
        oriented = oriented_symbol(group, members.tolist())
        index = group.order // len(subgroup)
        rows.append(SubgroupClass(name, oriented, index, len(class_), maximal, tuple(members.tolist())))
    return tuple(rows)


@lru_cache(maxsize=1)
def _below() -> dict[str, frozenset[str]]:
    """For each of the 32, the symbols of those it contains (itself included)."""
    return {
        symbol: frozenset(row.name.hermann_mauguin for row in subgroups(point_group(symbol)))
        for symbol in THE_32
    }


def subgroups_among_the_32(group: NamedGroup) -> tuple[str, ...]:
    """Symbols of the crystallographic point groups below this one, in the order of International Tables."""
    below = {row.name.hermann_mauguin for row in subgroups(group)} - {group.hermann_mauguin}
    return tuple(symbol for symbol in THE_32 if symbol in below)


def supergroups_among_the_32(group: NamedGroup) -> tuple[str, ...]:
    """Symbols of the crystallographic point groups above this one; empty for a group without a lattice."""
    own = group.hermann_mauguin
    return tuple(symbol for symbol in THE_32 if symbol != own and own in _below()[symbol])
