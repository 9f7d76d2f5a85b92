"""A cell: its constants with uncertainties, its centring, and the numbers that follow from them.

Axes stand in Cartesian coordinates with a along x and b in the xy plane. Lengths are in the unit of the constants
(ångström as a rule), angles of the constants in degrees. Uncertainties are propagated to first order [1]_.

References
----------
.. [1] JCGM 100:2008 (GUM), 5.1.2 and 5.2.2.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.centring import Centring, centring_of
from mirrorlab.crystal.lattices import CellError, axes_from_constants
from mirrorlab.crystal.measured import Measured, NumberError, parse_measured, write_measured

Array = NDArray[np.float64]

NAMES = ("a", "b", "c", "α", "β", "γ")

SHORTEST, LONGEST = 1e-3, 1e6
"""Lengths outside are slips of the keyboard, in any unit in use."""

LARGEST_RATIO = 1e4
"""Longest over shortest axis: squares of larger ratios leave too few digits for the metric's other entries."""

HEXAGONAL_LENGTHS, HEXAGONAL_ANGLES = 0.02, 2.0
"""How far (share of a, degrees) a cell may be from hexagonal axes to be read as such: measured cells of rhombohedral
crystals are nearer by far, and rhombohedral axes typed by mistake are not."""

STEP = 1e-5
"""Step of the numerical derivatives, relative for lengths and in degrees times ten for angles: the error of a central
difference is of its square."""

EXAMPLE = (
    "write six constants: 5.431,5.431,5.431,90,90,90, each with its uncertainty if there is one: 5.431(2)"
)


@dataclass(frozen=True)
class Cell:
    """A unit cell.

    Attributes
    ----------
    constants : tuple of six float
        a, b, c and α, β, γ in degrees.
    uncertainties : tuple of six float
        Standard uncertainties, 0 where none was given.
    centring : str
        P, A, B, C, I, F, or R (obverse setting on hexagonal axes).
    tied : bool
        Constants that the shape of the cell makes equal, with equal uncertainties, are one parameter: a = b = c of a
        cubic cell are not three independent measurements. False: every constant is independent.

    Raises
    ------
    CellError
        Constants that make no cell, or do not suit the centring.
    """

    constants: tuple[float, ...]
    uncertainties: tuple[float, ...] = (0.0,) * 6
    centring: str = "P"
    tied: bool = True

    def __post_init__(self) -> None:
        object.__setattr__(self, "constants", tuple(float(value) for value in self.constants))
        object.__setattr__(self, "uncertainties", tuple(float(value) for value in self.uncertainties))
        object.__setattr__(self, "centring", centring_of(self.centring).letter)
        axes_from_constants(self.constants)
        lengths = self.constants[:3]
        for name, value in zip(NAMES, lengths, strict=False):
            if not SHORTEST <= value <= LONGEST:
                msg = f"{name} = {value:g}: lengths of a cell lie between {SHORTEST:g} and {LONGEST:g}"
                raise CellError(msg)
        if max(lengths) > LARGEST_RATIO * min(lengths):
            msg = f"lengths {lengths}: the longest axis is more than {LARGEST_RATIO:g} times the shortest"
            raise CellError(msg)
        if len(self.uncertainties) != 6:
            msg = f"{len(self.uncertainties)} uncertainties for six constants"
            raise CellError(msg)
        for name, value, uncertainty in zip(NAMES, self.constants, self.uncertainties, strict=True):
            if not 0 <= uncertainty < value:
                msg = (
                    f"{name} = {value:g}: an uncertainty of {uncertainty:g} must be from 0 to below the value"
                )
                raise CellError(msg)
        if self.centring == "R" and not self._hexagonal(HEXAGONAL_LENGTHS, HEXAGONAL_ANGLES):
            msg = (
                f"{self.text}: centring R is for hexagonal axes (a = b, α = β = 90°, γ = 120°); "
                "rhombohedral axes (a = b = c, α = β = γ) take centring P"
            )
            raise CellError(msg)

    def _hexagonal(self, lengths: float, angles: float) -> bool:
        a, b, _, alpha, beta, gamma = self.constants
        off = max(abs(alpha - 90), abs(beta - 90), abs(gamma - 120))
        return abs(a - b) <= lengths * a and off <= angles

    @property
    def hexagonal(self) -> bool:
        """Whether four-index symbols apply: exactly hexagonal axes, or centring R."""
        return self.centring == "R" or self._hexagonal(0.0, 0.0)

    @property
    def lattice(self) -> Centring:
        """The centring with its points and primitive vectors."""
        return centring_of(self.centring)

    @cached_property
    def basis(self) -> Array:
        """Columns a, b, c in Cartesian coordinates."""
        return axes_from_constants(self.constants)

    @cached_property
    def reciprocal_basis(self) -> Array:
        """Columns a*, b*, c* in Cartesian coordinates; a*·a = 1."""
        return np.asarray(np.linalg.inv(self.basis).T)

    @cached_property
    def metric(self) -> Array:
        """Products of the axes, shape (3, 3)."""
        return self.basis.T @ self.basis

    @cached_property
    def reciprocal_metric(self) -> Array:
        """Products of the reciprocal axes, shape (3, 3)."""
        return self.reciprocal_basis.T @ self.reciprocal_basis

    @property
    def volume(self) -> float:
        """In the cube of the unit of length."""
        return float(np.prod(np.diag(self.basis)))

    @cached_property
    def reciprocal_constants(self) -> tuple[float, ...]:
        """a*, b*, c* and α*, β*, γ* in degrees."""
        return constants_of(self.reciprocal_metric)

    @cached_property
    def primitive_basis(self) -> Array:
        """Columns: vectors of a primitive cell in Cartesian coordinates."""
        return self.basis @ self.lattice.primitive / self.lattice.over

    def spacing(self, plane: ArrayLike) -> float:
        """Distance d(hkl): the inverse of the length of h a* + k b* + l c*."""
        return float(1 / np.linalg.norm(self.reciprocal_basis @ np.asarray(plane, float)))

    def normal(self, plane: ArrayLike) -> Array:
        """Unit normal of (hkl) in Cartesian coordinates."""
        vector = self.reciprocal_basis @ np.asarray(plane, float)
        return vector / np.linalg.norm(vector)

    @cached_property
    def parameters(self) -> tuple[tuple[int, ...], ...]:
        """Constants that vary together, by their numbers; those without uncertainty left out."""
        groups: list[list[int]] = [[k] for k in range(6)]
        pairs = [tuple(sorted(pair)) for pair in self._equal_axes()] if self.tied else []
        for i, j in pairs:
            _join(groups, i, j)
            _join(groups, i + 3, j + 3)
        return tuple(tuple(group) for group in groups if self.uncertainties[group[0]] > 0)

    def _equal_axes(self) -> list[tuple[int, int]]:
        both = list(zip(self.constants, self.uncertainties, strict=True))
        if len(set(both[:3])) == 1 and len(set(both[3:])) == 1:
            return [(0, 1), (1, 2)]
        return [
            (i, j)
            for i, j in ((0, 1), (0, 2), (1, 2))
            if both[i] == both[j] and both[i + 3] == both[j + 3] and both[i + 3][1] == 0
        ]

    @property
    def uncertain(self) -> bool:
        """Whether any constant has an uncertainty."""
        return any(self.uncertainties)

    @cached_property
    def _moved(self) -> list[tuple[tuple[Cell, Cell], float, float]]:
        """For each parameter the cells a step above and below, the step, and the standard uncertainty."""
        made = []
        for group in self.parameters:
            step = STEP * self.constants[group[0]] if group[0] < 3 else 10 * STEP
            ends = []
            for sign in (1, -1):
                moved = list(self.constants)
                for k in group:
                    moved[k] += sign * step
                ends.append(replace(self, constants=tuple(moved)))
            made.append(((ends[0], ends[1]), step, self.uncertainties[group[0]]))
        return made

    def propagate(self, function: Callable[[Cell], ArrayLike]) -> Array:
        """Covariance of numbers that follow from the cell, shape (m, m), to first order.

        Parameters
        ----------
        function : callable
            From a cell to m numbers.
        """
        columns = []
        for ends, step, sigma in self._moved:
            values = [np.atleast_1d(np.asarray(function(end), float)) for end in ends]
            columns.append((values[0] - values[1]) / (2 * step) * sigma)
        if not columns:
            count = np.atleast_1d(np.asarray(function(self), float)).size
            return np.zeros((count, count))
        rows = np.array(columns)
        return rows.T @ rows

    def uncertainty(self, function: Callable[[Cell], float]) -> float:
        """Standard uncertainty of one number that follows from the cell."""
        return float(np.sqrt(max(self.propagate(function)[0, 0], 0.0)))

    @property
    def text(self) -> str:
        """The constants as they are written: ``5.431(2), 5.431(2), 5.431(2), 90, 90, 90``."""
        return ", ".join(
            write_measured(v, u) for v, u in zip(self.constants, self.uncertainties, strict=True)
        )

    @property
    def tie_text(self) -> str:
        """Which constants are one parameter, ``a = b = c``; empty when all are independent."""
        return "; ".join(" = ".join(NAMES[k] for k in group) for group in self.parameters if len(group) > 1)

    def to_dict(self) -> dict:
        """Plain JSON."""
        volume = Measured(self.volume, self.uncertainty(lambda cell: cell.volume))
        return {
            "constants": list(self.constants),
            "uncertainties": list(self.uncertainties),
            "text": self.text,
            "centring": self.centring,
            "points_per_cell": self.lattice.points,
            "one_parameter": self.tie_text,
            "volume": volume.to_dict(),
            "metric": self.metric.tolist(),
            "reciprocal_constants": list(self.reciprocal_constants),
            "reciprocal_metric": self.reciprocal_metric.tolist(),
            "axes_as_columns": self.basis.tolist(),
            "frame": "Cartesian, a along x, b in the xy plane",
        }


def _join(groups: list[list[int]], i: int, j: int) -> None:
    first = next(group for group in groups if i in group)
    second = next(group for group in groups if j in group)
    if first is not second:
        first.extend(second)
        groups.remove(second)


def constants_of(metric: ArrayLike) -> tuple[float, ...]:
    """a, b, c and α, β, γ (degrees) of the axes with these products."""
    table = np.asarray(metric, float)
    lengths = np.sqrt(np.diag(table))
    cosines = np.clip(table / np.outer(lengths, lengths), -1, 1)
    angles = np.degrees(np.arccos([cosines[1, 2], cosines[0, 2], cosines[0, 1]]))
    return tuple(float(value) for value in (*lengths, *angles))


def parse_cell(text: str, centring: str = "P", tied: bool = True) -> Cell:
    """Read ``5.431(2),5.431(2),5.431(2),90,90,90``; commas, semicolons or spaces between the constants.

    Raises
    ------
    CellError
        Names the constant that cannot be read, or says what makes it no cell.
    CentringError
        For the centring.
    """
    parts = [part for part in re.split(r"[,;\s]+", re.sub(r"\s+\(", "(", text.strip().strip("[]"))) if part]
    if len(parts) != 6:
        msg = f'cell "{text.strip()}": {len(parts)} constants; {EXAMPLE}'
        raise CellError(msg)
    return cell_from_texts(parts, [f"{name} of the cell" for name in NAMES], centring, tied)


def cell_from_texts(
    texts: Sequence[str], names: Sequence[str], centring: str = "P", tied: bool = True
) -> Cell:
    """A cell from six texts; an error names the constant by the name given for it."""
    read = []
    for name, part in zip(names, texts, strict=True):
        try:
            read.append(parse_measured(part.rstrip("°")))
        except NumberError as error:
            msg = f"{name}: {error}"
            raise CellError(msg) from None
        if read[-1].value <= 0 or (len(read) > 3 and read[-1].value >= 180):
            what = (
                "an angle of a cell lies between 0 and 180 degrees"
                if len(read) > 3
                else "a length is positive"
            )
            msg = f"{name}: {part}; {what}"
            raise CellError(msg)
    return Cell(tuple(one.value for one in read), tuple(one.uncertainty for one in read), centring, tied)
