"""Lattice rows along, or nearly along, the normal of a lattice plane: obliquity and twin index.

The twin index follows from the primitive cell, where one rule holds for every centring: with coprime indices of plane
and row and X = |uh + vk + wl|, the index is X when X is odd and X/2 when it is even [1]_. The reflection in the plane
maps the lattice onto itself exactly when the row stands exactly on the plane and X is 1 or 2: its matrix in the
primitive cell is 1 − 2 u hᵀ/X.

References
----------
.. [1] International Union of Crystallography, Online Dictionary of Crystallography, "Twin index" and "Obliquity".
.. [2] G. Friedel, Leçons de Cristallographie (1926), on twins by reticular merohedry: an index up to 6 and an
   obliquity up to 6° (from memory).
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace
from math import degrees, gcd

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.cell import Cell
from mirrorlab.crystal.measured import write_measured
from mirrorlab.crystal.operations import write_indices
from mirrorlab.crystal.reduction import nearest_in_plane, plane_and_step, reduce_pair

EXACT = 1e-9
"""Radians below which a row counts as standing exactly on a plane: rounding is about 1e-15, and constants typed with
six digits that merely look alike differ by more."""

FRIEDEL_INDEX, FRIEDEL_OBLIQUITY = 6, 6.0
"""Largest twin index and largest obliquity (degrees) at which twins are usually looked for, after reference [2]."""

COVERAGE = 3.0
"""Standard uncertainties within which an obliquity may be none; as the bands of measured angles."""

NO_UNCERTAINTY = 1e-9
"""Degrees below which an uncertainty is rounding of the numerical derivatives: symmetry fixes the angle."""

LARGEST_ROW_INDEX = 2000
"""Exact normals are recognised up to this index in the primitive cell."""


@dataclass(frozen=True, slots=True)
class Row:
    """A lattice row and how it stands on a plane.

    Attributes
    ----------
    indices : tuple of int
        [uvw], coprime, in the axes of the cell.
    layers : int
        X in the primitive cell: the shortest lattice vector of the row leads to the X-th next plane.
    x : int
        |uh + vk + wl| with the indices of the cell as they are written.
    obliquity : float
        Degrees between the row and the normal of the plane.
    uncertainty : float
        Standard uncertainty of the obliquity from that of the cell; for an obliquity below it, the uncertainty in the
        direction that is known worst.
    twin_index : int
    exact : bool
        The row is the normal, to rounding.
    """

    indices: tuple[int, int, int]
    layers: int
    x: int
    obliquity: float
    uncertainty: float
    twin_index: int
    exact: bool

    @property
    def mirror(self) -> bool:
        """Whether the reflection maps the lattice onto itself (exactly)."""
        return self.exact and self.twin_index == 1

    @property
    def square_within_uncertainty(self) -> bool:
        """Whether the cell's uncertainty leaves it open that the row is the normal."""
        return 0 < self.obliquity <= COVERAGE * self.uncertainty

    @property
    def text(self) -> str:
        """``[110]``."""
        return f"[{write_indices(self.indices)}]"

    @property
    def obliquity_text(self) -> str:
        """Degrees with their uncertainty: ``0.12(3)°``."""
        if self.exact and not self.uncertainty:
            return "0°"
        return write_measured(self.obliquity, self.uncertainty, 4) + "°"

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "uvw": list(self.indices),
            "x": self.x,
            "layers": self.layers,
            "obliquity_degrees": self.obliquity,
            "obliquity_uncertainty": self.uncertainty,
            "twin_index": self.twin_index,
            "exact": self.exact,
            "exact_within_uncertainty": self.square_within_uncertainty,
        }


def twin_index(layers: int) -> int:
    """The twin index of X in the primitive cell."""
    return layers if layers % 2 else layers // 2


def tilt(cell: Cell, plane: Iterable[int], row: Iterable[int]) -> NDArray[np.float64]:
    """The part of the unit vector along a row that lies in a plane, as two numbers in axes of the plane.

    Its length is the sine of the obliquity. It is smooth where the obliquity is 0, and the obliquity is not.
    """
    normal = cell.normal(np.array(list(plane)))
    direction = cell.basis @ np.array(list(row), float)
    direction /= np.linalg.norm(direction)
    first = np.cross(normal, np.eye(3)[int(np.argmin(np.abs(normal)))])
    first /= np.linalg.norm(first)
    return np.array([first, np.cross(normal, first)]) @ direction


def row_on(cell: Cell, plane: tuple[int, int, int], row: tuple[int, int, int]) -> Row:
    """A row against a plane, both in the axes of the cell and coprime.

    The row is turned to the side of the plane's normal.
    """
    lattice = cell.lattice
    x = int(np.dot(plane, row))
    if x < 0:
        row = (-row[0], -row[1], -row[2])
    layers = abs(int(lattice.primitive_plane(plane) @ lattice.primitive_row(row)))
    off = tilt(cell, plane, row)
    along = float(cell.normal(plane) @ (cell.basis @ np.array(row, float)))
    whole = float(np.linalg.norm(cell.basis @ np.array(row, float)))
    angle = float(np.arctan2(np.linalg.norm(off), along / whole))
    twin = twin_index(layers) if layers else 0
    return Row(row, layers, abs(x), degrees(angle), 0.0, twin, angle < EXACT)


def with_uncertainty(cell: Cell, plane: tuple[int, int, int], row: Row) -> Row:
    """The same row with the uncertainty of its obliquity."""
    if not cell.uncertain:
        return row
    covariance = cell.propagate(lambda other: tilt(other, plane, row.indices))
    covariance = covariance * np.degrees(1.0) ** 2
    off = tilt(cell, plane, row.indices)
    size = float(np.linalg.norm(off))
    direction = off / size if size > 0 else off
    # d(angle) = d(sine)/cosine
    sigma = float(np.sqrt(max(direction @ covariance @ direction, 0.0))) / np.cos(np.radians(row.obliquity))
    if row.obliquity <= sigma or row.exact:
        sigma = float(np.sqrt(max(np.linalg.eigvalsh(covariance)[-1], 0.0)))
    return replace(row, uncertainty=float(sigma) if sigma > NO_UNCERTAINTY else 0.0)


def exact_row(cell: Cell, plane: tuple[int, int, int]) -> Row | None:
    """The row that is the normal of a plane, or None when the normal is no lattice direction."""
    lattice = cell.lattice
    direction = lattice.to_primitive @ (cell.reciprocal_metric @ np.array(plane, float))
    scaled = direction / np.abs(direction).max()
    times = np.arange(1, LARGEST_ROW_INDEX + 1)
    candidates = np.outer(times, scaled)
    off = np.abs(candidates - np.rint(candidates)).max(axis=1) / times
    fitting = np.flatnonzero(off < 10 * EXACT)
    for k in fitting[:4]:
        whole = lattice.row_of(np.rint(candidates[k]).astype(np.int64))
        row = row_on(cell, plane, (int(whole[0]), int(whole[1]), int(whole[2])))
        if row.exact:
            return row
    return None


def rows_near(cell: Cell, plane: tuple[int, int, int], most_layers: int) -> tuple[Row, ...]:
    """For each X from 1 to `most_layers` the row nearest to the normal of a plane, where it is coprime."""
    lattice = cell.lattice
    primitive = lattice.primitive_plane(plane)
    within, step = plane_and_step(primitive)
    metric = cell.primitive_basis.T @ cell.primitive_basis
    within = within @ reduce_pair(within.T @ metric @ within)
    foot = np.linalg.solve(metric, primitive.astype(float))
    foot = foot / (primitive @ foot)
    flat = within.T @ metric @ within
    place = np.linalg.solve(flat, within.T @ metric @ (foot - step))
    layers = np.arange(1, most_layers + 1)
    nearest = nearest_in_plane(flat, np.outer(layers, place))
    rows = []
    for k, pair in zip(layers.tolist(), nearest, strict=True):
        vector = k * step + within @ pair
        if gcd(*(int(value) for value in vector)) > 1:
            continue  # the same direction as a row with fewer layers
        whole = lattice.row_of(vector)
        rows.append(row_on(cell, plane, (int(whole[0]), int(whole[1]), int(whole[2]))))
    return tuple(rows)


def normal_rows(
    cell: Cell,
    plane: tuple[int, int, int],
    most_index: int = FRIEDEL_INDEX,
    most_obliquity: float = FRIEDEL_OBLIQUITY,
) -> tuple[Row, ...]:
    """The rows worth naming as the normal of a plane, the one to take first.

    The first is the exact normal, where the lattice has one of a twin index up to the largest; otherwise the row of
    lowest twin index within the largest obliquity; where there is none, an exact normal of any index, or else the row
    of least obliquity up to the largest index. Behind it stand rows of higher twin index that stand more squarely.
    """
    near = rows_near(cell, plane, 2 * most_index)
    allowed = sorted(
        (row for row in near if row.twin_index <= most_index), key=lambda r: (r.twin_index, r.obliquity)
    )
    better: list[Row] = []
    for row in allowed:
        if not better or row.obliquity < better[-1].obliquity - 1e-9:
            better.append(row)
    chosen = [row for row in better if row.obliquity <= most_obliquity]
    exact = exact_row(cell, plane)
    if exact is not None:
        others = [row for row in chosen if row.indices != exact.indices]
        chosen = [exact, *others] if exact.twin_index <= most_index else [*others, exact]
    chosen = chosen or better[-1:]
    return tuple(with_uncertainty(cell, plane, row) for row in chosen)
