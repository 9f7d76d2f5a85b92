"""Centred cells: the lattice points they hold besides the corners, and their primitive vectors, in whole numbers."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.operations import CrystalError

Whole = NDArray[np.int64]


class CentringError(CrystalError):
    """A letter that names no centring."""


@dataclass(frozen=True, eq=False)
class Centring:
    """A centring of a cell.

    Attributes
    ----------
    letter : str
        P, A, B, C, I, F, or R (obverse setting on hexagonal axes).
    over : int
        Denominator of all coordinates below.
    translations : ndarray of int, shape (k, 3)
        Lattice points in the cell, times `over`; the origin first.
    primitive : ndarray of int, shape (3, 3)
        Columns: vectors of a primitive cell in the axes of the cell, times `over`; right-handed.
    """

    letter: str
    over: int
    translations: Whole
    primitive: Whole

    @property
    def points(self) -> int:
        """Lattice points per cell."""
        return len(self.translations)

    @cached_property
    def to_primitive(self) -> Whole:
        """Matrix Q, whole numbers: a vector u of the cell is Q u in the primitive cell."""
        return np.rint(np.linalg.inv(self.primitive / self.over)).astype(np.int64)

    def holds(self, vector: ArrayLike) -> bool:
        """Whether a vector in the axes of the cell leads from lattice point to lattice point, within 1e-6."""
        moved = self.to_primitive @ np.asarray(vector, float)
        return bool(np.abs(moved - np.rint(moved)).max() < 1e-6)

    def primitive_row(self, row: ArrayLike) -> Whole:
        """The shortest lattice vector along [uvw], in the primitive cell: coprime whole numbers."""
        return coprime(self.to_primitive @ np.asarray(row, np.int64))

    def primitive_plane(self, plane: ArrayLike) -> Whole:
        """The lattice planes (hkl), in the primitive cell: coprime whole numbers."""
        return coprime(np.asarray(plane, np.int64) @ self.primitive)

    def row_of(self, primitive: ArrayLike) -> Whole:
        """The direction [uvw], coprime, of a vector of the primitive cell."""
        return coprime(self.primitive @ np.asarray(primitive, np.int64))

    def plane_of(self, primitive: ArrayLike) -> Whole:
        """The indices (hkl), coprime, of a plane of the primitive cell."""
        return coprime(np.asarray(primitive, np.int64) @ self.to_primitive)


def coprime(whole: ArrayLike) -> Whole:
    """Whole numbers without their common divisor."""
    values = np.asarray(whole, np.int64)
    divisor = int(np.gcd.reduce(values))
    return values // divisor if divisor > 1 else values


def _centring(letter: str, over: int, translations: list[list[int]], vectors: list[list[int]]) -> Centring:
    points = np.array([[0, 0, 0], *translations], np.int64)
    return Centring(letter, over, points, np.array(vectors, np.int64).T)


CENTRINGS = {
    made.letter: made
    for made in (
        _centring("P", 1, [], [[1, 0, 0], [0, 1, 0], [0, 0, 1]]),
        _centring("A", 2, [[0, 1, 1]], [[2, 0, 0], [0, 1, 1], [0, -1, 1]]),
        _centring("B", 2, [[1, 0, 1]], [[1, 0, 1], [0, 2, 0], [-1, 0, 1]]),
        _centring("C", 2, [[1, 1, 0]], [[1, -1, 0], [1, 1, 0], [0, 0, 2]]),
        _centring("I", 2, [[1, 1, 1]], [[-1, 1, 1], [1, -1, 1], [1, 1, -1]]),
        _centring("F", 2, [[0, 1, 1], [1, 0, 1], [1, 1, 0]], [[0, 1, 1], [1, 0, 1], [1, 1, 0]]),
        _centring("R", 3, [[2, 1, 1], [1, 2, 2]], [[2, 1, 1], [-1, 1, 1], [-1, -2, 1]]),
    )
}
"""The centrings by their letters; R is the obverse setting: (2/3, 1/3, 1/3) and (1/3, 2/3, 2/3)."""


def centring_of(letter: str) -> Centring:
    """The centring of a letter, upper or lower case.

    Raises
    ------
    CentringError
    """
    found = CENTRINGS.get(letter.strip().upper())
    if found is None:
        msg = f'centring "{letter}": accepted are {", ".join(CENTRINGS)} (R: obverse, on hexagonal axes)'
        raise CentringError(msg)
    return found


def centring_with(translations: ArrayLike) -> Centring | None:
    """The centring that has exactly these lattice points in the cell, or None.

    Parameters
    ----------
    translations : array_like, shape (k, 3)
        As fractions of the cell; the origin may be left out, whole cells do not matter.
    """
    given = np.asarray(translations, float).reshape(-1, 3)
    wanted = {tuple(row) for row in np.rint(given % 1.0 * 24).astype(int) % 24} | {(0, 0, 0)}
    if np.abs(given * 24 - np.rint(given * 24)).max(initial=0.0) > 0.05:
        return None
    for made in CENTRINGS.values():
        if {tuple(row) for row in made.translations * 24 // made.over} == wanted:
            return made
    return None
