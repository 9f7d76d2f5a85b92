"""All mirrors of a lattice within an obliquity, and the symmetry they make: exactly, and at a tolerance.

A lattice has a centre at every point, so each of its twofold axes stands on a mirror. Le Page [1]_ finds all of them
in a reduced primitive cell: pairs of a row u and a plane h with |h·u| = 1 or 2 that stand nearly square, with small
indices. The reflection is then a matrix of whole numbers, 1 − 2 u hᵀ/(h·u), so products and conjugates of near mirrors
are found exactly, whatever the obliquity.

References
----------
.. [1] Y. Le Page, J. Appl. Cryst. 15 (1982) 255–259.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from itertools import product

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.cell import Cell
from mirrorlab.crystal.indices import write_face
from mirrorlab.crystal.lattice_axes import ConventionalCell, conventional_cell, ideal_normals, is_holohedry
from mirrorlab.crystal.mirror_sets import closed_sets, reflection_in
from mirrorlab.crystal.normal_rows import EXACT, Row, row_on, with_uncertainty
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.reduction import reduce_lattice
from mirrorlab.mirrors import Arrangement

Whole = NDArray[np.int64]

TOLERANCE = 3.0
"""Obliquity in degrees up to which mirrors are looked for when nothing else is asked for."""

LARGEST_TOLERANCE = 10.0
"""Above it nearly every lattice would be called symmetric, and the indices below no longer suffice."""

INDEX = 2
"""Largest index of an axis or a plane in the reduced cell, after reference [1]. Larger ones stand square only within
degrees in very long or flat cells, and belong to shears of mirrors with smaller ones."""

HOLOHEDRIES = {0: "-1", 1: "2/m", 3: "mmm", 5: "4/mmm", 7: "6/mmm", 9: "m-3m"}
"""Number of mirrors → symmetry of the lattice; three mirrors that are not square to each other make -3m."""


class ToleranceError(CrystalError):
    """An obliquity that makes no sense as a tolerance."""


@dataclass(frozen=True, eq=False)
class LatticeMirror:
    """A plane that is a mirror of the lattice, exactly or nearly.

    Attributes
    ----------
    indices : tuple of int
        (hkl), coprime, in the axes of the cell.
    label : str
    row : Row
        The twofold axis [uvw] with its obliquity.
    primitive_plane, primitive_row : ndarray of int, shape (3,)
        Both in the reduced primitive cell.
    """

    indices: tuple[int, int, int]
    label: str
    row: Row
    primitive_plane: Whole = field(repr=False)
    primitive_row: Whole = field(repr=False)

    @property
    def exact(self) -> bool:
        """To rounding."""
        return self.row.exact

    @property
    def matrix(self) -> Whole:
        """The reflection in the axes of the reduced primitive cell, whole numbers."""
        return reflection_in(self.primitive_plane, self.primitive_row)

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {"hkl": list(self.indices), "label": self.label, **self.row.to_dict()}


@dataclass(frozen=True, eq=False)
class Symmetry:
    """A symmetry of the lattice and what it costs.

    Attributes
    ----------
    holohedry : str
        One of -1, 2/m, mmm, 4/mmm, -3m, 6/mmm, m-3m.
    mirrors : tuple of LatticeMirror
        The least oblique first.
    reduced : ndarray of int, shape (3, 3)
        Columns: the reduced primitive vectors in those of the primitive cell.
    cell : Cell
    """

    holohedry: str
    mirrors: tuple[LatticeMirror, ...]
    reduced: Whole = field(repr=False)
    cell: Cell = field(repr=False)

    @property
    def obliquity(self) -> float:
        """Largest obliquity of its mirrors, in degrees; 0 for an exact symmetry."""
        return 0.0 if self.exact else max(mirror.row.obliquity for mirror in self.mirrors)

    @property
    def exact(self) -> bool:
        """Whether all its mirrors are exact."""
        return all(mirror.exact for mirror in self.mirrors)

    @cached_property
    def conventional(self) -> ConventionalCell:
        """The conventional cell of this symmetry: axes, centring, Bravais type."""
        return conventional_cell(self)

    @cached_property
    def arrangement(self) -> Arrangement | None:
        """Its mirrors, in the nearest lattice that has them exactly; None when there are none."""
        return Arrangement.from_normals(ideal_normals(self)) if self.mirrors else None

    @property
    def sentence(self) -> str:
        """In words: ``mmm (oI) with all mirrors within 0.12°``."""
        made = f"{self.holohedry} ({self.conventional.bravais})"
        return f"{made} exactly" if self.exact else f"{made} with all mirrors within {self.obliquity:.4g}°"

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "holohedry": self.holohedry,
            "exact": self.exact,
            "obliquity_degrees": self.obliquity,
            "mirrors": [mirror.label for mirror in self.mirrors],
            "conventional_cell": self.conventional.to_dict(),
        }


@dataclass(frozen=True, eq=False)
class LatticeSymmetry:
    """What a lattice's mirrors are.

    Attributes
    ----------
    cell : Cell
    tolerance : float
        Largest obliquity, in degrees.
    mirrors : tuple of LatticeMirror
        All within the tolerance, the least oblique first; each plane once, with its least oblique row.
    steps : tuple of Symmetry
        From the exact symmetry on: each more symmetric than the one before, at a larger obliquity.
    """

    cell: Cell
    tolerance: float
    mirrors: tuple[LatticeMirror, ...]
    steps: tuple[Symmetry, ...]

    @property
    def exact(self) -> Symmetry:
        """The symmetry of the lattice as its constants stand."""
        return self.steps[0]

    @property
    def within(self) -> Symmetry:
        """The highest symmetry whose mirrors all lie within the tolerance."""
        return self.steps[-1]

    @property
    def sentence(self) -> str:
        """Both symmetries in words."""
        exact = f"The lattice has symmetry {self.exact.sentence}"
        if self.within is self.exact:
            return f"{exact}, and no higher one within {self.tolerance:g}°."
        return f"{exact}; within {self.tolerance:g}° it has {self.within.sentence}."

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "cell": self.cell.to_dict(),
            "tolerance_degrees": self.tolerance,
            "mirrors": [mirror.to_dict() for mirror in self.mirrors],
            "exact": self.exact.to_dict(),
            "within_tolerance": self.within.to_dict(),
            "steps": [step.to_dict() for step in self.steps],
            "sentence": self.sentence,
        }


def lattice_symmetry(cell: Cell, tolerance: float = TOLERANCE) -> LatticeSymmetry:
    """All mirrors of a lattice within an obliquity, and its symmetry.

    Parameters
    ----------
    cell : Cell
    tolerance : float
        Degrees, from 0 (exact mirrors only) to 10.

    Raises
    ------
    ToleranceError
    """
    if not 0 <= tolerance <= LARGEST_TOLERANCE:
        msg = f"tolerance {tolerance:g}: degrees from 0 to {LARGEST_TOLERANCE:g}"
        raise ToleranceError(msg)
    metric = cell.primitive_basis.T @ cell.primitive_basis
    reduced = reduce_lattice(metric)
    pairs = near_square_pairs(reduced.T @ metric @ reduced, max(np.radians(tolerance), EXACT))
    every = sorted(
        (_mirror(cell, reduced, plane, row) for plane, row in pairs),
        key=lambda m: (round(m.row.obliquity, 9), sum(map(abs, m.indices)), [-i for i in m.indices]),
    )
    first: dict[tuple[int, int, int], LatticeMirror] = {}
    for mirror in every:
        first.setdefault(mirror.indices, mirror)
    return LatticeSymmetry(cell, tolerance, tuple(first.values()), _steps(cell, every, reduced))


def near_square_pairs(metric: NDArray[np.float64], tolerance: float) -> list[tuple[Whole, Whole]]:
    """Planes and rows of a reduced cell with h·u = 1 or 2 that stand square within `tolerance` (radians)."""
    every = [v for v in product(range(-INDEX, INDEX + 1), repeat=3) if any(v)]
    rows = np.array([v for v in every if np.gcd.reduce(v) == 1], np.int64)
    planes = rows[[next(value for value in v if value) > 0 for v in rows.tolist()]]
    basis = np.linalg.cholesky(metric).T
    directions = rows @ basis.T
    directions /= np.linalg.norm(directions, axis=1, keepdims=True)
    normals = planes @ np.linalg.inv(basis)
    normals /= np.linalg.norm(normals, axis=1, keepdims=True)
    layers = planes @ rows.T
    cosines = normals @ directions.T
    found = []
    for i, j in np.argwhere((layers >= 1) & (layers <= 2) & (cosines > np.cos(tolerance) - 1e-12)):
        apart = 2 * np.arctan2(*(np.linalg.norm(normals[i] - s * directions[j]) for s in (1, -1)))
        if apart <= tolerance:
            found.append((planes[i], rows[j]))
    return found


def _mirror(cell: Cell, reduced: Whole, plane: Whole, row: Whole) -> LatticeMirror:
    back = np.rint(np.linalg.inv(reduced)).astype(np.int64)
    whole = cell.lattice.plane_of(plane @ back)
    direction = cell.lattice.row_of(reduced @ row)
    if _turned(whole):
        whole, plane = -whole, -plane
    indices = (int(whole[0]), int(whole[1]), int(whole[2]))
    along = (int(direction[0]), int(direction[1]), int(direction[2]))
    if np.dot(indices, along) < 0:
        row = -row
    made = with_uncertainty(cell, indices, row_on(cell, indices, along))
    return LatticeMirror(indices, write_face(indices, cell.hexagonal), made, plane, row)


def _turned(indices: Whole) -> bool:
    """Whether a plane is better named by the opposite indices: the first that is not 0 is positive."""
    return bool(next(value for value in indices.tolist() if value) < 0)


def _steps(cell: Cell, mirrors: Sequence[LatticeMirror], reduced: Whole) -> tuple[Symmetry, ...]:
    """The exact symmetry, then each higher one that needs more obliquity than the one before."""

    def symmetry(chosen: Iterable[int]) -> Symmetry:
        members = tuple(mirrors[k] for k in sorted(chosen))
        return Symmetry(_holohedry(members), members, reduced, cell)

    exact = frozenset(k for k, mirror in enumerate(mirrors) if mirror.exact)
    closed = closed_sets([mirror.matrix for mirror in mirrors])
    inside = sorted((symmetry(one) for one in closed if one <= exact), key=_size, reverse=True)
    steps = [next(one for one in inside if is_holohedry(one))]
    first = frozenset(steps[0].mirrors)
    higher = [made for made in map(symmetry, closed) if first < frozenset(made.mirrors)]
    for one in sorted(higher, key=lambda s: (s.obliquity, -_size(s))):
        if _size(one) > _size(steps[-1]) and is_holohedry(one):
            steps.append(one)
    return tuple(steps)


def _size(symmetry: Symmetry) -> int:
    from mirrorlab.crystal.pointgroups import point_group

    return point_group(symmetry.holohedry).order


def _holohedry(mirrors: Sequence[LatticeMirror]) -> str:
    symbol = HOLOHEDRIES[len(mirrors)]
    if symbol == "mmm":
        first, second = mirrors[0].matrix, mirrors[1].matrix
        if (first @ second != second @ first).any():
            return "-3m"
    return symbol
