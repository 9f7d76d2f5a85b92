"""A point operation: its matrix, its symbol with the axis, and its coordinate triplet.

Matrices act on coordinates in the axes at hand (whole numbers when those are crystal axes). The symbol of
an operation follows International Tables for Crystallography, volume A: the rotation or rotoinversion with
its sense, and the direction it leaves in place (for a mirror: the plane).
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from math import gcd

import numpy as np
from numpy.typing import ArrayLike, NDArray

ROUND_OFF = 1e-6
"""Two entries of a matrix closer than this are one number: products of a hundred exact rotations stay within 1e-13,
and matrices of two different operations of a group of order 1440 differ by more than 1e-2."""

_LARGEST_ROTATION = 1440
_TERM = re.compile(r"([+-]?)(\d*\.?\d*)\*?([xyz])")


class CrystalError(ValueError):
    """What all errors of this room have in common: something given can not be read or does not fit."""


class OperationError(CrystalError):
    """A matrix or a triplet that is no point operation."""


@dataclass(frozen=True, eq=False)
class Operation:
    """One operation of a point group.

    Attributes
    ----------
    matrix : ndarray, shape (3, 3)
        Acts on column coordinates; whole numbers in crystal axes.
    kind : str
        "1", "2", "3" … rotations; "-1", "m", "-3" … rotoinversions (a mirror is written "m").
    sense : str
        "" (order 1 and 2), "+" and "-" for the first turn either way, "^k" for k turns.
    axis : tuple or None
        The direction [uvw] along the axis, or normal to the mirror; None for 1 and -1.
    plane : tuple or None
        Indices (hkl) of a mirror.
    """

    matrix: NDArray
    kind: str
    sense: str
    axis: tuple[float, ...] | None
    plane: tuple[float, ...] | None

    @property
    def proper(self) -> bool:
        """True for a rotation."""
        return self.kind != "m" and not self.kind.startswith("-")

    @property
    def fold(self) -> int:
        """The number n of the rotation n or the rotoinversion -n (2 for a mirror, 1 for the centre)."""
        return 2 if self.kind == "m" else int(self.kind.lstrip("-"))

    @property
    def triplet(self) -> str:
        """The image of x,y,z, such as ``-y,x-y,z``."""
        return write_triplet(self.matrix)

    @property
    def text(self) -> str:
        """Symbol with its place, such as ``3+ [111]`` or ``m (1-10)``."""
        if self.axis is None:
            return self.kind
        where = (
            f"({write_indices(self.plane)})" if self.plane is not None else f"[{write_indices(self.axis)}]"
        )
        return f"{self.kind}{self.sense} {where}"

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "symbol": self.text,
            "kind": self.kind,
            "sense": self.sense,
            "axis": None if self.axis is None else list(self.axis),
            "plane": None if self.plane is None else list(self.plane),
            "triplet": self.triplet,
            "matrix": self.matrix.tolist(),
        }


def write_indices(indices: tuple[float, ...], gap: str = "") -> str:
    """Indices as one reads them: ``1-10`` for whole single digits, else with commas."""
    texts = [f"{value:g}" if value == round(value) else f"{value:.4f}" for value in indices]
    simple = all(len(text.lstrip("-")) == 1 for text in texts)
    return (gap if simple else ",").join(texts)


def write_triplet(matrix: ArrayLike) -> str:
    """The image of x,y,z under `matrix`, whole numbers as ``x-y``, others with four decimals."""
    rows = []
    for row in np.asarray(matrix):
        text = ""
        for value, letter in zip(row, "xyz", strict=True):
            if abs(value) < ROUND_OFF:
                continue
            size = abs(value)
            number = "" if abs(size - 1) < ROUND_OFF else f"{size:.4g}"
            text += ("-" if value < 0 else "+" if text else "") + number + letter
        rows.append(text or "0")
    return ",".join(rows)


def parse_triplet(text: str) -> NDArray:
    """Read ``-y,x-y,z``.

    Raises
    ------
    OperationError
        When it is no three expressions in x, y and z, or their matrix has no determinant of 1 or -1.
    """
    rows = text.replace(" ", "").replace("−", "-").lower().split(",")
    matrix = np.zeros((3, 3))
    for index, row in enumerate(rows):
        matched = "".join(match.group(0) for match in _TERM.finditer(row))
        if index > 2 or not row or matched != row:
            msg = f'operation "{text}": not a triplet of x, y and z such as "-y,x-y,z"'
            raise OperationError(msg)
        for sign, number, letter in _TERM.findall(row):
            matrix[index, "xyz".index(letter)] += float(number or 1) * (-1 if sign == "-" else 1)
    if len(rows) != 3 or abs(abs(np.linalg.det(matrix)) - 1) > ROUND_OFF:
        msg = f'operation "{text}": its matrix has no determinant of 1 or -1, so it is no point operation'
        raise OperationError(msg)
    whole = np.rint(matrix)
    return whole.astype(np.int64) if np.allclose(whole, matrix) else matrix


def rotation_order(rotation: NDArray) -> tuple[int, float]:
    """Order n of a proper rotation given in any axes, and its angle in (0, π] from the trace."""
    angle = float(np.arccos(np.clip((np.trace(rotation) - 1) / 2, -1, 1)))
    order = Fraction(angle / (2 * np.pi)).limit_denominator(_LARGEST_ROTATION).denominator
    if np.abs(np.linalg.matrix_power(rotation, order) - np.eye(3)).max() > ROUND_OFF:
        msg = f"a rotation by {np.degrees(angle):g}° returns in no whole number of turns up to {_LARGEST_ROTATION}"
        raise OperationError(msg)
    return order, angle


def operation(matrix: ArrayLike) -> Operation:
    """Read a matrix as a point operation.

    Parameters
    ----------
    matrix : array_like, shape (3, 3)
        In crystal axes (whole numbers) or Cartesian (orthogonal).

    Raises
    ------
    OperationError
        When its determinant is not 1 or -1, or no power of it is the identity.
    """
    matrix = np.asarray(matrix)
    if matrix.shape != (3, 3):
        msg = f"an operation is a 3 × 3 matrix, not an array of shape {matrix.shape}"
        raise OperationError(msg)
    determinant = float(np.linalg.det(matrix))
    if abs(abs(determinant) - 1) > ROUND_OFF:
        msg = f"determinant {determinant:g}: a point operation has 1 or -1"
        raise OperationError(msg)
    sign = 1 if determinant > 0 else -1
    rotation = sign * matrix
    order, angle = rotation_order(rotation)
    kind = "m" if sign < 0 and order == 2 else f"{'-' if sign < 0 else ''}{order}"
    if order == 1:
        return Operation(matrix, kind, "", None, None)
    # R + 1/R = 2 cos θ + 2 (1 − cos θ) × (projection on the axis), in any axes; the trace is 1 + 2 cos θ.
    inverse = np.linalg.matrix_power(rotation, order - 1)
    projector = rotation + inverse - (np.trace(rotation) - 1) * np.eye(3, dtype=matrix.dtype)
    axis = _direction(projector)
    plane = _direction(projector.T) if kind == "m" else None
    return Operation(matrix, kind, _sense(rotation, order, angle, axis), axis, plane)


def _sense(rotation: NDArray, order: int, angle: float, axis: tuple[float, ...]) -> str:
    if order == 2:
        return ""
    turns = round(angle * order / (2 * np.pi))
    probe = np.eye(3)[int(np.argmin(np.abs(axis)))]
    if np.linalg.det(np.stack([probe, rotation @ probe, np.asarray(axis, float)])) < 0:
        turns = order - turns
    return "+" if turns == 1 else "-" if turns == order - 1 else f"^{turns}"


def _direction(projector: NDArray) -> tuple[float, ...]:
    """The line a rank-one projector maps on: coprime whole numbers, or a unit vector."""
    column = projector[:, int(np.argmax(np.abs(projector).sum(axis=0)))]
    if np.issubdtype(projector.dtype, np.integer):
        whole = [int(value) for value in column]
        divisor = gcd(*whole)
        direction: tuple[float, ...] = tuple(value // divisor for value in whole)
    else:
        unit = column / np.linalg.norm(column)
        direction = tuple(float(value) for value in np.round(unit, 12) + 0.0)
    return tuple(-value for value in direction) if _turned_round(direction) else direction


def _turned_round(direction: tuple[float, ...]) -> bool:
    """Whether an axis should be named by its opposite.

    Space diagonals are the four whose product is positive ([111], [1-1-1] …), as International Tables names the
    threefold axes of the cubic groups; every other axis starts with a positive number.
    """
    if len({abs(value) for value in direction}) == 1:
        return bool(np.prod(direction) < 0)
    return next(value for value in direction if abs(value) > ROUND_OFF) < 0
