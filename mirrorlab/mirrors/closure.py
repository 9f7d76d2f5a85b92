"""Do the reflections close? Decided part by part, by proof.

Mirrors that are not square to each other belong to one part. A part whose normals span a plane closes exactly
when every pair has a closing fraction. In a part of higher rank the classification of finite reflection groups
gives bounds [1]_: no two mirrors closer than 36°, never both 45° and 36° between mirrors, and at most
`MOST_MIRRORS` mirrors; a part that breaks one never closes, and one that keeps them all has been written out in
full, in exact integers.

References
----------
.. [1] J. E. Humphreys, *Reflection Groups and Coxeter Groups* (1990), sections 2.4 to 2.7.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.exact import definiteness
from mirrorlab.mirrors.families import LARGEST_PAIR_ORDER, MOST_MIRRORS
from mirrorlab.mirrors.generation import generate_roots
from mirrorlab.mirrors.group import connected
from mirrorlab.mirrors.witness import Witness, close_pair, closest, too_close

Array = NDArray[np.float64]
Fractions = list[list[Fraction | None]]

HALF = Fraction(1, 2)

MOST_THROUGH_A_LINE = 100_000
"""Most mirrors through one line that are written out: as many as the smallest angle that can be read makes."""


@dataclass(frozen=True, slots=True, eq=False)
class Part:
    """An irreducible part of the typed mirrors.

    Attributes
    ----------
    members : tuple of int
        Indices of the typed mirrors.
    rank : int
        Dimension that their normals span.
    semidefinite : bool
        False when no planes have these angles.
    finite : bool
        Whether the linear group (all mirrors through one point) is finite.
    roots : ndarray, shape (2N, d), or None
        Normals of all mirrors, both signs, when finite.
    broken : str
        Which bound is broken, in words, when not finite.
    witness : tuple or None
        Two generated mirrors that stand too close, as (word, word, degrees).
    fan : int
        Number of mirrors through one line where they are too many to write out (`roots` is None then), else 0.
    """

    members: tuple[int, ...]
    rank: int
    semidefinite: bool
    finite: bool = False
    roots: Array | None = None
    broken: str = ""
    bound: str = ""
    witness: Witness | None = None
    fan: int = 0

    @property
    def singular(self) -> bool:
        """Whether the Gram matrix of the part is singular."""
        return self.rank < len(self.members)


def split(fractions: Fractions) -> list[list[int]]:
    """The typed mirrors in parts that are square to each other."""
    size = len(fractions)
    edges = [(i, j) for i in range(size) for j in range(i + 1, size) if fractions[i][j] != HALF]
    return connected(size, edges)


def decide_part(
    members: list[int], gram: Array, fractions: Fractions, normals: Array | None, letters: str
) -> Part:
    """Decide one part.

    Parameters
    ----------
    members : list of int
    gram : ndarray, shape (n, n)
        Of all typed mirrors.
    fractions : n by n list of Fraction or None
    normals : ndarray, shape (n, d), or None
        None when there are none (then only definiteness is decided).
    letters : str
        Letters of the typed mirrors, for words.
    """
    inner_gram = gram[np.ix_(members, members)]
    inner = [[fractions[i][j] for j in members] for i in members]
    rank, semidefinite = definiteness(inner_gram, inner)
    own = tuple(members)
    if not semidefinite or normals is None:
        return Part(own, rank, semidefinite)
    mine = normals[members]
    names = [letters[i] for i in members]
    unread = [(i, j) for i in range(len(own)) for j in range(i + 1, len(own)) if inner[i][j] is None]
    if rank == 1:
        return Part(own, 1, True, True, np.concatenate([mine[:1], -mine[:1]]), bound="one mirror plane")
    if unread:
        i, j = unread[0]
        text = f"{names[i]}{names[j]} has no closing fraction, so the images in {names[i]} and {names[j]} never close"
        return Part(own, rank, True, broken=text, bound="two mirrors close only at a fraction of 180°")
    known = [[f for f in row if f is not None] for row in inner]
    if rank == 2:
        m = math.lcm(*(f.denominator for row in known for f in row))
        if m > MOST_THROUGH_A_LINE:
            return Part(own, 2, True, True, bound=f"mirrors through one line at multiples of 180°/{m}", fan=m)
        return Part(
            own, 2, True, True, _star(mine, m), bound=f"mirrors through one line at multiples of 180°/{m}"
        )
    return _decide_high(own, rank, known, mine, names)


def _star(normals: Array, m: int) -> Array:
    """Normals of the m mirrors through one line, both signs, shape (2m, d)."""
    x = normals[0]
    across = normals - np.outer(normals @ x, x)
    y = across[np.linalg.norm(across, axis=1).argmax()]
    y = y / np.linalg.norm(y)
    turn = np.arange(2 * m) * math.pi / m
    return np.asarray(np.outer(np.cos(turn), x) + np.outer(np.sin(turn), y))


def _decide_high(
    own: tuple[int, ...], rank: int, known: list[list[Fraction]], normals: Array, names: list[str]
) -> Part:
    pairs = [(i, j) for i in range(len(own)) for j in range(i + 1, len(own))]
    for i, j in pairs:
        m = known[i][j].denominator
        if m > LARGEST_PAIR_ORDER:
            a, b = names[i], names[j]
            text = f"{a} and {b} make mirrors {180 / m:.4g}° apart"
            law = (
                f"in a finite group of rank {rank} that does not split, no two mirrors stand closer than 36°"
            )
            return Part(own, rank, True, broken=text, bound=law, witness=close_pair(known[i][j], a, b))
    orders = {known[i][j].denominator: (i, j) for i, j in pairs}
    if 4 in orders and 5 in orders:
        (i, j), (u, v) = orders[4], orders[5]
        text = (
            f"{names[i]}{names[j]} makes mirrors 45° apart and {names[u]}{names[v]} makes mirrors 36° apart"
        )
        law = f"no finite group of rank {rank} that does not split has both"
        return Part(own, rank, True, broken=text, bound=law, witness=too_close(normals, names))
    most = MOST_MIRRORS[rank]
    heights, words, complete = generate_roots(known, most)
    roots = heights @ np.linalg.pinv(normals).T
    law = f"a finite group of rank {rank} that does not split has at most {most} mirrors"
    if complete:
        return Part(own, rank, True, True, roots, bound=f"{law}; here {len(roots) // 2}")
    text = f"the reflections make more than {most} mirrors"
    return Part(own, rank, True, broken=text, bound=law, witness=closest(roots, words, names))
