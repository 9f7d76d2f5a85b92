"""Lattices that carry a group, and the group of some mirrors brought to its standard setting.

The fourteen Bravais types and their holohedries: International Tables for Crystallography, volume A, table 2.1.2.1
(from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.mirror_match import RankError, in_space, lay_on
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.pointgroups import METRIC_TOLERANCE, MetricError, NamedGroup, point_group
from mirrorlab.crystal.relations import subgroups_among_the_32
from mirrorlab.crystal.symbols import GroupName, parse_symbol

if TYPE_CHECKING:
    from mirrorlab.mirrors.finding import Finding

SQUARE = 1e-15
"""Cosines below this are 0: that of 90° in radians comes out as 6e-17."""

FLAT_AXES = 1e-9
"""Smallest eigenvalue of the axes' cosines; below it they lie in a plane, or no axes have these angles."""

WHOLE_INDEX = 1e-6
"""How far a ratio of plane indices may be from a whole number: they are computed, not measured."""

_LARGEST_PLANE_INDEX = 12


class CellError(CrystalError):
    """Cell constants that make no cell."""


@dataclass(frozen=True, slots=True)
class BravaisType:
    """One of the fourteen lattices.

    Attributes
    ----------
    symbol : str
        Such as "cF" (cubic, face-centred).
    name : str
    holohedry : str
        Point group of the lattice.
    """

    symbol: str
    name: str
    holohedry: str

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {"symbol": self.symbol, "name": self.name, "holohedry": self.holohedry}


BRAVAIS_TYPES = (
    BravaisType("aP", "triclinic primitive", "-1"),
    BravaisType("mP", "monoclinic primitive", "2/m"),
    BravaisType("mS", "monoclinic base-centred", "2/m"),
    BravaisType("oP", "orthorhombic primitive", "mmm"),
    BravaisType("oS", "orthorhombic base-centred", "mmm"),
    BravaisType("oI", "orthorhombic body-centred", "mmm"),
    BravaisType("oF", "orthorhombic face-centred", "mmm"),
    BravaisType("tP", "tetragonal primitive", "4/mmm"),
    BravaisType("tI", "tetragonal body-centred", "4/mmm"),
    BravaisType("hR", "rhombohedral", "-3m"),
    BravaisType("hP", "hexagonal primitive", "6/mmm"),
    BravaisType("cP", "cubic primitive", "m-3m"),
    BravaisType("cI", "cubic body-centred", "m-3m"),
    BravaisType("cF", "cubic face-centred", "m-3m"),
)


@dataclass(frozen=True, slots=True)
class Lattices:
    """Which lattices have room for a group.

    Attributes
    ----------
    group : str
    required : tuple of BravaisType
        Those of a crystal with this point group: no more symmetric than it asks for.
    also : tuple of BravaisType
        More symmetric lattices whose holohedry contains the group.
    """

    group: str
    required: tuple[BravaisType, ...]
    also: tuple[BravaisType, ...]

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "group": self.group,
            "required": [lattice.to_dict() for lattice in self.required],
            "also": [lattice.to_dict() for lattice in self.also],
        }


_OF_SYSTEM = {
    "triclinic": "a",
    "monoclinic": "m",
    "orthorhombic": "o",
    "tetragonal": "t",
    "trigonal": "h",
    "hexagonal": "hP",
    "cubic": "c",
}


def lattices_of(group: NamedGroup | str) -> Lattices:
    """Bravais types that carry a point group; none for a group without a lattice."""
    named = point_group(group) if isinstance(group, str) else group
    symbol = named.hermann_mauguin
    if not named.name.crystallographic:
        return Lattices(symbol, (), ())
    carrying = [
        lattice
        for lattice in BRAVAIS_TYPES
        if symbol == lattice.holohedry or symbol in subgroups_among_the_32(point_group(lattice.holohedry))
    ]
    letter = _OF_SYSTEM[named.name.system]
    required = tuple(lattice for lattice in carrying if lattice.symbol.startswith(letter))
    return Lattices(symbol, required, tuple(lattice for lattice in carrying if lattice not in required))


def axes_from_constants(constants: Sequence[float]) -> NDArray[np.float64]:
    """Cell axes as the columns of a matrix: a along x, b in the xy plane.

    Parameters
    ----------
    constants : sequence of float
        a, b, c in any unit of length, α, β, γ in degrees.

    Raises
    ------
    CellError
    """
    values = np.asarray(constants, float)
    if values.shape != (6,) or not np.isfinite(values).all():
        msg = f"{list(constants)}: a cell has six constants: a, b, c and α, β, γ in degrees"
        raise CellError(msg)
    if not (values[:3] > 0).all() or not ((values[3:] > 0) & (values[3:] < 180)).all():
        msg = (
            f"{list(constants)}: the lengths of a cell are positive and its angles between 0 and 180 degrees"
        )
        raise CellError(msg)
    cosines = np.cos(np.radians(values[3:]))
    cosines[np.abs(cosines) < SQUARE] = 0.0
    angles = np.array([[1, cosines[2], cosines[1]], [cosines[2], 1, cosines[0]], [cosines[1], cosines[0], 1]])
    if np.linalg.eigvalsh(angles).min() < FLAT_AXES:
        msg = f"{list(constants)}: no three axes have these angles (each is less than the sum of the others)"
        raise CellError(msg)
    return np.linalg.cholesky(angles).T * values[:3]


def check_cell(group: NamedGroup, basis: ArrayLike) -> NDArray[np.float64]:
    """The axes (columns) when they have the symmetry of the group and stand as its unit axes do.

    Raises
    ------
    MetricError
    """
    frame = np.asarray(basis, float)
    moved = group.cartesian_in(frame)
    if np.abs(moved - group.cartesian).max() > 10 * METRIC_TOLERANCE:
        msg = f"these axes do not stand as the {group.axes} of {group.setting} do (a along x, b in the xy plane)"
        raise MetricError(msg)
    return frame


@dataclass(frozen=True, eq=False)
class Alignment:
    """A finding's group in its standard setting.

    Attributes
    ----------
    group : NamedGroup
    rotation : ndarray, shape (3, 3)
        From the frame of the arrangement to the Cartesian frame of the standard setting.
    mirrors : ndarray, shape (N, 3)
        Normals of all mirrors in the frame of the arrangement.
    """

    group: NamedGroup
    rotation: NDArray[np.float64]
    mirrors: NDArray[np.float64]

    def to_standard(self, points: ArrayLike) -> NDArray[np.float64]:
        """Points of the arrangement's frame, shape (…, 2 or 3), in Cartesian axes of the standard setting."""
        rows = np.asarray(points, float)
        flat = in_space(rows.reshape(-1, rows.shape[-1]))
        return (flat @ self.rotation.T).reshape(*rows.shape[:-1], 3)

    def fractions(self, points: ArrayLike, basis: ArrayLike | None = None) -> NDArray[np.float64]:
        """Points of the arrangement's frame as fractions of a cell.

        Parameters
        ----------
        points : array_like, shape (…, 2 or 3)
            In the unit of length of the cell.
        basis : array_like, shape (3, 3), optional
            Columns a, b, c, as from `axes_from_constants`; unit axes when not given.

        Raises
        ------
        MetricError
            When the cell does not have the symmetry of the group.
        """
        frame = self.group.basis if basis is None else check_cell(self.group, basis)
        return self.to_standard(points) @ np.linalg.inv(frame).T

    @cached_property
    def mirror_indices(self) -> tuple[tuple[int, int, int] | None, ...]:
        """Indices (hkl) of each mirror in unit axes; None where there is no lattice and they are not whole."""
        rows = self.to_standard(self.mirrors) @ self.group.basis
        return tuple(_whole(row) for row in rows)

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "group": self.group.setting,
            "axes": self.group.axes,
            "rotation_to_standard": self.rotation.tolist(),
            "mirror_indices": [None if row is None else list(row) for row in self.mirror_indices],
        }


def _whole(row: NDArray) -> tuple[int, int, int] | None:
    largest = np.abs(row).max()
    for times in range(1, _LARGEST_PLANE_INDEX + 1):
        scaled = row / largest * times
        if np.abs(scaled - np.rint(scaled)).max() < WHOLE_INDEX * times:
            whole = np.rint(scaled).astype(int)
            if next(value for value in whole if value) < 0:
                whole = -whole
            return int(whole[0]), int(whole[1]), int(whole[2])
    return None


def align(finding: Finding) -> Alignment:
    """Bring the group of a finding to its standard setting.

    Raises
    ------
    RankError
        When the finding has no finite group of rank 3 or less.
    """
    if finding.group is None or finding.point_group is None:
        msg = f"this finding ({finding.kind}, rank {finding.rank}) has no finite group in space to bring to a setting"
        raise RankError(msg)
    name: GroupName = parse_symbol(finding.point_group.schoenflies)[0]
    group = point_group(name)
    rotation = lay_on(in_space(finding.group.simple), group)
    if rotation is None:
        msg = f"the mirrors of this finding do not lie on those of {name.hermann_mauguin}"
        raise RankError(msg)
    return Alignment(group, rotation, in_space(finding.group.mirrors))
