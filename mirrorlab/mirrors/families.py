"""The irreducible finite reflection groups: their names, degrees, orders and diagrams.

A family is written as its letter and rank (``"A3"``, ``"E7"``, ``"H4"``) or, for two mirrors, as
``"I2(m)"``; ``I2(3)``, ``I2(4)`` and ``I2(6)`` are written ``A2``, ``B2`` and ``G2``. A product is joined
by ``x``: ``"A1xI2(5)"``.

References
----------
.. [1] J. E. Humphreys, *Reflection Groups and Coxeter Groups* (1990), sections 2.4, 2.7 and 3.7.
.. [2] N. Bourbaki, *Lie Groups and Lie Algebras*, chapters IV to VI, plates I to IX (numbering of nodes).
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from fractions import Fraction

MOST_MIRRORS = {1: 1, 3: 15, 4: 60, 5: 25, 6: 36, 7: 63, 8: 120}
"""Most mirrors a finite irreducible group of that rank can have (rank 2 has no such bound): H3, H4, B5,
B6 and E6, E7, E8. Reference [1], table in section 3.7: the sum of the exponents."""

LARGEST_PAIR_ORDER = 5
"""In a finite irreducible group of rank 3 or more, two mirrors never stand closer than 180/5 degrees."""

LARGEST_M = 100_000
"""The largest m of an I2(m) that is read; angles are read no finer."""

TOP_RANK = 8
"""The highest rank Mirrorlab decides."""

_LOWEST = {"A": 1, "B": 2, "D": 4, "E": 6, "F": 4, "G": 2, "H": 3}
_HIGHEST = {"A": TOP_RANK, "B": TOP_RANK, "D": TOP_RANK, "E": 8, "F": 4, "G": 2, "H": 4}
_EXCEPTIONAL = {
    "E6": (2, 5, 6, 8, 9, 12),
    "E7": (2, 6, 8, 10, 12, 14, 18),
    "E8": (2, 8, 12, 14, 18, 20, 24, 30),
    "F4": (2, 6, 8, 12),
    "G2": (2, 6),
    "H3": (2, 6, 10),
    "H4": (2, 12, 20, 30),
}
_PART = re.compile(r"(?:I2\((?P<m>\d+)\)|(?P<letter>[ABCDEFGH])(?P<rank>\d))\Z")


class FamilyError(ValueError):
    """A family name that is not one of the finite reflection groups."""


@dataclass(frozen=True, slots=True)
class Family:
    """One irreducible finite reflection group.

    Attributes
    ----------
    letter : str
        One of A B D E F H I; G2 is held as I with m = 6, A2 and B2 as I with m = 3 and 4.
    rank : int
    m : int
        The product order for rank 2 (``letter == "I"``); 0 otherwise.
    """

    letter: str
    rank: int
    m: int = 0

    @property
    def name(self) -> str:
        """The name as it is written: ``"A3"``, ``"G2"``, ``"I2(5)"``."""
        if self.letter == "I":
            return {3: "A2", 4: "B2", 6: "G2"}.get(self.m, f"I2({self.m})")
        return f"{self.letter}{self.rank}"

    @property
    def degrees(self) -> tuple[int, ...]:
        """Degrees of the basic invariants, ascending (reference [1], section 3.7)."""
        n = self.rank
        if self.letter == "I":
            return (2, self.m)
        if self.letter == "A":
            return tuple(range(2, n + 2))
        if self.letter == "B":
            return tuple(range(2, 2 * n + 1, 2))
        if self.letter == "D":
            return tuple(sorted([*range(2, 2 * n - 1, 2), n]))
        return _EXCEPTIONAL[self.name]

    @property
    def order(self) -> int:
        """Number of elements: the product of the degrees."""
        return math.prod(self.degrees)

    @property
    def mirror_count(self) -> int:
        """Number of mirrors: the sum of the exponents (degree − 1)."""
        return sum(self.degrees) - self.rank

    @property
    def exponents(self) -> tuple[int, ...]:
        """The exponents, ascending: each degree less one."""
        return tuple(degree - 1 for degree in self.degrees)

    @property
    def coxeter_number(self) -> int:
        """The Coxeter number: the largest degree."""
        return self.degrees[-1]

    @property
    def contains_inversion(self) -> bool:
        """Whether −1 is in the group: all degrees are even (rank 1: the reflection itself)."""
        return all(degree % 2 == 0 for degree in self.degrees)

    @property
    def crystallographic(self) -> bool:
        """Whether a lattice of this rank can carry the group."""
        return self.letter != "H" and (self.letter != "I" or self.m in (2, 3, 4, 6))

    @property
    def edges(self) -> tuple[tuple[int, int, int], ...]:
        """Edges (i, j, m) of the Coxeter–Dynkin graph, nodes from 0 in Bourbaki's order, H5-end first."""
        n = self.rank
        if self.letter == "I":
            return ((0, 1, self.m),) if self.m > 2 else ()
        path = [(i, i + 1, 3) for i in range(n - 1)]
        if self.letter == "B":
            path[-1] = (n - 2, n - 1, 4)
        elif self.letter == "F":
            path[1] = (1, 2, 4)
        elif self.letter == "H":
            path[0] = (0, 1, 5)
        elif self.letter == "D":
            path[-1] = (n - 3, n - 1, 3)
        elif self.letter == "E":
            path = [(0, 2, 3), (1, 3, 3), *((i, i + 1, 3) for i in range(2, n - 1))]
        return tuple(path)


def parse_family(text: str) -> tuple[Family, ...]:
    """Read a family name or a product of them.

    Parameters
    ----------
    text : str
        ``"E7"``, ``"I2(5)"``, ``"A1xI2(5)"`` (``x``, ``×`` or ``*`` between the parts).

    Raises
    ------
    FamilyError
        Not a name, or a rank that the family does not have, or a product of more than rank 8.
    """
    parts = [_parse_part(part, text) for part in re.split(r"[x×*]", text.replace(" ", ""))]
    flat = tuple(family for part in parts for family in part)
    rank = sum(family.rank for family in flat)
    if rank > TOP_RANK:
        msg = f'family "{text}": rank {rank} is above {TOP_RANK}, the highest that Mirrorlab decides'
        raise FamilyError(msg)
    return flat


def _parse_part(part: str, text: str) -> tuple[Family, ...]:
    match = _PART.match(part.upper())
    accepted = (
        "write A1 to A8, B2 to B8, D4 to D8, E6 to E8, F4, G2, H3, H4, I2(m), or a product such as A1xI2(5)"
    )
    if match is None:
        msg = f'family "{text}": "{part}" is not a family; {accepted}'
        raise FamilyError(msg)
    if match["m"]:
        m = int(match["m"])
        if not 2 <= m <= LARGEST_M:
            msg = f'family "{text}": I2({m}) needs m from 2 to {LARGEST_M}'
            raise FamilyError(msg)
        return (Family("A", 1), Family("A", 1)) if m == 2 else (Family("I", 2, m),)
    letter, rank = match["letter"], int(match["rank"])
    if letter == "C":
        letter = "B"  # the same mirrors: B and C differ only in the lengths of roots
    if not _LOWEST[letter] <= rank <= _HIGHEST[letter]:
        msg = f'family "{text}": there is no {match["letter"]}{rank}; {accepted}'
        raise FamilyError(msg)
    if rank == 2:
        return (Family("I", 2, {"A": 3, "B": 4, "G": 6}[letter]),)
    return (Family(letter, rank),)


def family_angles(families: tuple[Family, ...]) -> list[Fraction]:
    """The angles between neighbouring mirrors as fractions of π, pair by pair, row by row."""
    size = sum(family.rank for family in families)
    order = {}
    start = 0
    for family in families:
        order.update({(start + i, start + j): m for i, j, m in family.edges})
        start += family.rank
    return [Fraction(1, order.get((i, j), 2)) for i in range(size) for j in range(i + 1, size)]


def recognise(labels: dict[tuple[int, int], int], size: int) -> tuple[Family, tuple[int, ...]]:
    """The family of a connected Coxeter–Dynkin graph, and its nodes in the family's order.

    Parameters
    ----------
    labels : dict
        ``{(i, j): m}`` with i < j for every pair whose product order m is above 2.
    size : int
        Number of nodes.

    Raises
    ------
    ValueError
        The graph is not that of a finite group.
    """
    for family in _of_rank(size, labels):
        placing = _match(family, labels)
        if placing is not None:
            return family, placing
    msg = f"no finite family has the graph {labels}"
    raise ValueError(msg)


def _of_rank(size: int, labels: dict[tuple[int, int], int]) -> list[Family]:
    if size == 2:
        return [Family("I", 2, next(iter(labels.values()), 2))]
    letters = [letter for letter in "ABDEFH" if _LOWEST[letter] <= size <= _HIGHEST[letter]]
    wanted = sorted(labels.values())
    return [
        family
        for family in (Family(letter, size) for letter in letters)
        if sorted(m for _, _, m in family.edges) == wanted
    ]


def _match(family: Family, labels: dict[tuple[int, int], int]) -> tuple[int, ...] | None:
    """Place the family's nodes on the graph's, by backtracking; graphs have at most eight nodes."""
    wanted = {(i, j): m for i, j, m in family.edges}

    def label(i: int, j: int) -> int:
        return labels.get((min(i, j), max(i, j)), 2)

    def place(done: tuple[int, ...]) -> tuple[int, ...] | None:
        if len(done) == family.rank:
            return done
        new = len(done)
        for node in range(family.rank):
            if node in done:
                continue
            if all(label(done[i], node) == wanted.get((i, new), 2) for i in range(new)):
                found = place((*done, node))
                if found is not None:
                    return found
        return None

    return place(())
