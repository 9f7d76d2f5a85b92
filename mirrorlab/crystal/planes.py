"""Lattice planes of a cell as mirrors: their normal rows, the angles between them, and what they do together."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from mirrorlab.angles import Angle, AngleSettings, parse_angle
from mirrorlab.crystal.cell import Cell
from mirrorlab.crystal.indices import check_indices, parse_indices, write_face
from mirrorlab.crystal.measured import Measured, write_measured
from mirrorlab.crystal.normal_rows import FRIEDEL_INDEX, FRIEDEL_OBLIQUITY, NO_UNCERTAINTY, Row, normal_rows
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.arrangement import DEFAULT_SETTINGS
from mirrorlab.mirrors.normals import MOST_NORMALS

Array = NDArray[np.float64]
Plane = tuple[int, int, int]

INDEPENDENT = 1e-6
"""Sine of the angle to the plane of the others above which a normal is independent of them."""


class PlanesError(CrystalError):
    """Lattice planes that cannot be taken together."""


@dataclass(frozen=True, slots=True)
class LatticePlane:
    """One family of lattice planes.

    Attributes
    ----------
    indices : tuple of int
        (hkl), coprime, in the axes of the cell.
    label : str
        ``(110)``, with four indices on hexagonal axes.
    spacing : Measured
        d(hkl), from the indices as they stand.
    layer_spacing : float
        Distance of neighbouring lattice planes; a fraction of d(hkl) where the centring halves it.
    rows : tuple of Row
        Normal rows, the one to take first.
    """

    indices: Plane
    label: str
    spacing: Measured
    layer_spacing: float
    rows: tuple[Row, ...]

    @property
    def row(self) -> Row:
        """The row to take as the normal."""
        return self.rows[0]

    @property
    def mirror(self) -> bool:
        """Whether the reflection maps the lattice onto itself (exactly)."""
        return self.row.mirror

    @property
    def near_mirror(self) -> bool:
        """Not a mirror, but a row of twin index 1 stands on it within the largest obliquity."""
        return not self.mirror and any(row.twin_index == 1 and not row.exact for row in self.rows)

    @property
    def sentence(self) -> str:
        """What the plane is to the lattice, in one sentence."""
        row = self.row
        exactly = row.exact and not row.uncertainty
        stands = "stands exactly on it" if exactly else f"stands on it with obliquity {row.obliquity_text}"
        near = f"{row.text} {stands}, twin index {row.twin_index}"
        if row.mirror:
            return f"{self.label} is a mirror of the lattice: {near}."
        if row.twin_index == 1 and row.square_within_uncertainty:
            return f"{self.label} is a mirror of the lattice within the uncertainty of the cell: {near}."
        if row.twin_index == 1 and row.obliquity <= FRIEDEL_OBLIQUITY:
            return f"{self.label} is nearly a mirror of the lattice: {near}."
        return f"{self.label} is no mirror of the lattice: {near}."

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "hkl": list(self.indices),
            "label": self.label,
            "spacing": self.spacing.to_dict(),
            "layer_spacing": self.layer_spacing,
            "normal_row": self.row.to_dict(),
            "other_rows": [row.to_dict() for row in self.rows[1:]],
            "lattice_mirror": self.mirror,
            "near_mirror": self.near_mirror,
            "sentence": self.sentence,
        }


@dataclass(frozen=True, slots=True)
class PlaneAngle:
    """The angle between two planes.

    Attributes
    ----------
    pair : tuple of int
        Numbers of the planes, from 0.
    names : tuple of str
    normals : Measured
        Angle between the normals as their indices are signed, in degrees.
    dihedral : Measured
        180° less that: the angle of the region on the inner side of both, as arrangements are typed.
    """

    pair: tuple[int, int]
    names: tuple[str, str]
    normals: Measured
    dihedral: Measured

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "planes": list(self.names),
            "between_normals": self.normals.to_dict(),
            "dihedral": self.dihedral.to_dict(),
        }


@dataclass(frozen=True, eq=False)
class Planes:
    """Lattice planes of one cell.

    Attributes
    ----------
    cell : Cell
    planes : tuple of LatticePlane
    angles : tuple of PlaneAngle
        Pair by pair, row by row.
    """

    cell: Cell
    planes: tuple[LatticePlane, ...]
    angles: tuple[PlaneAngle, ...]
    settings: AngleSettings = DEFAULT_SETTINGS

    @cached_property
    def normals(self) -> Array:
        """Unit normals in the Cartesian frame of the cell, shape (n, 3)."""
        return np.array([self.cell.normal(plane.indices) for plane in self.planes])

    @cached_property
    def arrangement(self) -> Arrangement:
        """The planes moved to pass through one point, from the cell as it stands."""
        return Arrangement.from_normals(self.normals, self.settings)

    @cached_property
    def measured_arrangement(self) -> Arrangement | None:
        """Two or three independent planes with their angles read within the uncertainty of the cell.

        None when the cell has no uncertainty, or for other numbers of planes: their angles are not independent.
        """
        n = len(self.planes)
        if not self.cell.uncertain or n not in (2, 3):
            return None
        if np.linalg.svd(self.normals, compute_uv=False)[-1] < INDEPENDENT:
            return None
        return Arrangement.from_angles([self._angle(angle) for angle in self.angles], self.settings)

    def _angle(self, angle: PlaneAngle) -> Angle:
        value, sigma = angle.dihedral.value, angle.dihedral.uncertainty
        if not sigma:
            return Angle.from_radians(math.radians(value), 1e-9, self.settings)
        return parse_angle(f"{value:.9f}±{sigma:.9f}", self.settings)

    def to_dict(self) -> dict:
        """Plain JSON."""
        within = self.measured_arrangement
        return {
            "cell": self.cell.to_dict(),
            "planes": [plane.to_dict() for plane in self.planes],
            "angles": [angle.to_dict() for angle in self.angles],
            "normals": self.normals.tolist(),
            "finding": self.arrangement.finding().to_dict(),
            "finding_within_uncertainty": None if within is None else within.finding().to_dict(),
        }


def parse_planes(cell: Cell, texts: Sequence[str]) -> tuple[Plane, ...]:
    """Read ``1,0,0``, ``(1-10)``, and on hexagonal axes ``1,0,-1,0``.

    Raises
    ------
    IndicesError
        Names the text that cannot be read.
    """
    return tuple(_whole(parse_indices(text, cell.hexagonal)) for text in texts)


def _whole(indices: Sequence[float]) -> Plane:
    return int(indices[0]), int(indices[1]), int(indices[2])


def lattice_plane(
    cell: Cell,
    plane: Plane,
    most_index: int = FRIEDEL_INDEX,
    most_obliquity: float = FRIEDEL_OBLIQUITY,
) -> LatticePlane:
    """One family of lattice planes and its normal rows; indices must be coprime."""
    layers = cell.lattice.primitive_plane(plane) @ cell.lattice.to_primitive  # in the axes of the cell
    spacing = Measured(cell.spacing(plane), cell.uncertainty(lambda other: other.spacing(plane)))
    return LatticePlane(
        plane,
        write_face(plane, cell.hexagonal),
        spacing,
        cell.spacing(layers),
        normal_rows(cell, plane, most_index, most_obliquity),
    )


def planes_of(
    cell: Cell,
    planes: Sequence[Sequence[int]],
    most_index: int = FRIEDEL_INDEX,
    most_obliquity: float = FRIEDEL_OBLIQUITY,
    settings: AngleSettings = DEFAULT_SETTINGS,
) -> Planes:
    """Lattice planes of a cell, one by one and together.

    Parameters
    ----------
    cell : Cell
    planes : sequence of (h, k, l)
        No two parallel; a common divisor is taken out.
    most_index : int
        Largest twin index of the rows that are looked for.
    most_obliquity : float
        In degrees.

    Raises
    ------
    PlanesError
        None, too many, or two that are parallel; limits that make no sense.
    IndicesError
        Indices that are no lattice plane.
    """
    if not 1 <= len(planes) <= MOST_NORMALS:
        msg = f"{len(planes)} planes: give 1 to {MOST_NORMALS}"
        raise PlanesError(msg)
    if not 1 <= most_index <= 100:
        msg = f"largest twin index {most_index}: a whole number from 1 to 100"
        raise PlanesError(msg)
    if not 0 < most_obliquity < 90:
        msg = f"largest obliquity {most_obliquity:g}: degrees above 0, below 90"
        raise PlanesError(msg)
    whole = [_whole(check_indices(list(plane), cell.hexagonal)) for plane in planes]
    made = tuple(lattice_plane(cell, plane, most_index, most_obliquity) for plane in whole)
    for j, later in enumerate(whole):
        for i in range(j):
            if whole[i] == later or tuple(-value for value in whole[i]) == later:
                msg = (
                    f"planes {i + 1} and {j + 1}, {made[i].label} and {made[j].label}: the same mirror twice"
                )
                raise PlanesError(msg)
    angles = tuple(
        _angle_between(cell, made, i, j) for i in range(len(made)) for j in range(i + 1, len(made))
    )
    return Planes(cell, made, angles, settings)


def _angle_between(cell: Cell, planes: tuple[LatticePlane, ...], i: int, j: int) -> PlaneAngle:
    first, second = planes[i].indices, planes[j].indices

    def degrees(other: Cell) -> float:
        u, v = other.normal(first), other.normal(second)
        return math.degrees(2 * math.atan2(np.linalg.norm(u - v), np.linalg.norm(u + v)))

    value, sigma = degrees(cell), cell.uncertainty(degrees)
    sigma = sigma if sigma > NO_UNCERTAINTY else 0.0
    between = Measured(value, sigma)
    return PlaneAngle((i, j), (planes[i].label, planes[j].label), between, Measured(180 - value, sigma))


def angle_text(angle: Measured) -> str:
    """Degrees with their uncertainty: ``59.98(3)°``."""
    return write_measured(angle.value, angle.uncertainty, 4) + "°"
