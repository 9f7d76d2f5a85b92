"""Which point group a set of orthogonal matrices is, and how it stands.

The type follows from counting axes; the orientation from laying two characteristic directions on those of the
standard setting and checking that every operation then falls on one.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.closure import NotAGroupError, matrix_keys, product_table
from mirrorlab.crystal.operations import ROUND_OFF, CrystalError, rotation_order
from mirrorlab.crystal.symbols import GroupName

OPPOSITE = 1e-12
"""Directions whose cosine is this near to −1 are opposite: the axis between them is lost in rounding, one is chosen."""

SAME_DIRECTION = 1e-5
"""Sine of the angle below which two axes are one; axes of a group of order 1440 are at least 0.25° (4e-3) apart."""


class IdentifyError(CrystalError):
    """Matrices that are no point group."""


@dataclass(frozen=True, eq=False)
class Element:
    """One symmetry direction.

    Attributes
    ----------
    direction : ndarray, shape (3,)
    rotation : int
        Highest order of a rotation about it (1 if none).
    rotoinversion : int
        Highest n of a rotoinversion -n about it, n > 2 (0 if none).
    mirror : bool
        A mirror stands across it.
    """

    direction: NDArray[np.float64]
    rotation: int
    rotoinversion: int
    mirror: bool

    @property
    def signature(self) -> tuple[int, int, bool]:
        """What tells this direction from others."""
        return self.rotation, self.rotoinversion, self.mirror

    @property
    def symbol(self) -> str:
        """Hermann–Mauguin symbol of the direction: ``4/m``, ``-6``, ``3``, ``m`` …"""
        n, bar = self.rotation, self.rotoinversion
        if bar > n or (bar == n and n % 2 == 1):
            return f"-{bar}"
        if self.mirror:
            return f"{n}/m" if n > 1 else "m"
        return f"{n}"


@dataclass(frozen=True, eq=False)
class Identification:
    """A point group found in a set of matrices.

    Attributes
    ----------
    name : GroupName
    rotation : ndarray, shape (3, 3)
        Proper rotation Q from the given frame to the Cartesian frame of the standard setting: Q R Qᵀ is an
        operation there for each given R. Of all that do, one close to the identity.
    """

    name: GroupName
    rotation: NDArray[np.float64]

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "hermann_mauguin": self.name.hermann_mauguin,
            "schoenflies": self.name.schoenflies,
            "order": self.name.order,
            "rotation_to_standard": self.rotation.tolist(),
        }


def elements_of(matrices: ArrayLike) -> tuple[Element, ...]:
    """The symmetry directions of a set of orthogonal matrices, each once."""
    directions: list[NDArray] = []
    facts: list[list] = []
    stack = np.asarray(matrices, float)
    signs = np.where(np.linalg.det(stack) > 0, 1, -1)
    for sign, rotation in zip(signs.tolist(), signs[:, None, None] * stack, strict=True):
        order, _ = rotation_order(rotation)
        if order == 1:
            continue
        axis = _axis(rotation, order)
        place = _place(axis, directions)
        if place == len(directions):
            directions.append(axis)
            facts.append([1, 0, False])
        if sign > 0:
            facts[place][0] = max(facts[place][0], order)
        elif order == 2:
            facts[place][2] = True
        else:
            facts[place][1] = max(facts[place][1], order)
    return tuple(Element(axis, *fact) for axis, fact in zip(directions, facts, strict=True))


def _axis(rotation: NDArray, order: int) -> NDArray[np.float64]:
    if order == 2:
        projector = rotation + np.eye(3)
        column = projector[:, int(np.argmax(np.abs(projector).sum(axis=0)))]
    else:
        skew = rotation - rotation.T
        column = np.array([skew[2, 1], skew[0, 2], skew[1, 0]])
    axis = column / np.linalg.norm(column)
    return axis if next(value for value in axis if abs(value) > ROUND_OFF) > 0 else -axis


def _place(axis: NDArray, directions: list[NDArray]) -> int:
    if not directions:
        return 0
    # The distance between unit vectors along one line, either way round, is the sine for small angles.
    known = np.array(directions)
    apart = np.minimum(np.abs(known - axis).max(axis=1), np.abs(known + axis).max(axis=1))
    nearest = int(np.argmin(apart))
    return nearest if apart[nearest] < SAME_DIRECTION else len(directions)


def orthogonal(matrices: ArrayLike, basis: ArrayLike | None = None) -> NDArray[np.float64]:
    """Matrices given in the axes of `basis`, as orthogonal ones.

    Raises
    ------
    IdentifyError
        When one of them is not.
    """
    stack = np.asarray(matrices, float)
    if stack.ndim != 3 or stack.shape[1:] != (3, 3) or not len(stack):
        msg = f"a point group is a stack of 3 × 3 matrices, not an array of shape {stack.shape}"
        raise IdentifyError(msg)
    if basis is not None:
        frame = np.asarray(basis, float)
        stack = frame @ stack @ np.linalg.inv(frame)
    errors = np.abs(stack @ np.swapaxes(stack, 1, 2) - np.eye(3)).max(axis=(1, 2))
    worst = int(np.argmax(errors))
    if not errors[worst] < ROUND_OFF:
        msg = f"matrix {worst + 1} of {len(stack)} is not orthogonal (off by {errors[worst]:.2g}): no point operation"
        raise IdentifyError(msg)
    return stack


def classify(matrices: ArrayLike, basis: ArrayLike | None = None) -> GroupName:
    """The type of a point group, by counting its axes.

    Parameters
    ----------
    matrices : array_like, shape (order, 3, 3)
        All operations; orthogonal, or in the axes of `basis` (columns).

    Raises
    ------
    IdentifyError
        When they can be no group: not orthogonal, or counts that no point group has.
    """
    stack = orthogonal(matrices, basis)
    name = _type(stack)
    if name.order != len(stack):
        msg = f"{len(stack)} operations with the axes of {name.hermann_mauguin}, which has {name.order}: no point group"
        raise IdentifyError(msg)
    return name


def _type(stack: NDArray[np.float64]) -> GroupName:
    elements = elements_of(stack)
    rotations = int((np.linalg.det(stack) > 0).sum())
    centre = bool((np.abs(stack + np.eye(3)).max(axis=(1, 2)) < ROUND_OFF).any())
    improper = len(stack) > rotations
    if sum(element.rotation >= 3 for element in elements) > 1:
        letter = {12: "T", 24: "O", 60: "I"}.get(rotations, "T")
        return GroupName(letter + ("" if not improper else "h" if centre else "d" if letter == "T" else "h"))
    main = max(
        elements, key=lambda e: (max(e.rotation, e.rotoinversion), e.rotoinversion, e.rotation), default=None
    )
    if main is None:
        return GroupName("S", 2) if centre else GroupName("C", 1)
    n = main.rotation
    if rotations > n:
        return GroupName("D" if not improper else "Dh" if main.mirror else "Dd", n)
    if not improper:
        return GroupName("C", n)
    if main.mirror:
        return GroupName("Ch", n)
    return GroupName("Cv", n) if any(element.mirror for element in elements) else GroupName("S", 2 * n)


def identify_group(matrices: ArrayLike, basis: ArrayLike | None = None) -> Identification:
    """Name a point group and find the rotation to its standard setting.

    Parameters
    ----------
    matrices : array_like, shape (order, 3, 3)
        All operations of the group, orthogonal, or in the axes given by the columns of `basis`.

    Raises
    ------
    IdentifyError
        When the matrices are no group.
    """
    from mirrorlab.crystal.pointgroups import point_group

    stack = orthogonal(matrices, basis)
    name = classify(stack)
    try:
        if len(stack) <= 240:  # the axes' counts and orders above leave no doubt for larger ones
            product_table(stack)
    except NotAGroupError as error:
        raise IdentifyError(str(error)) from error
    standard = point_group(name).cartesian
    wanted = set(matrix_keys(standard))
    for rotation in _candidate_rotations(elements_of(stack), elements_of(standard)):
        if set(matrix_keys(rotation @ stack @ rotation.T)) == wanted:
            return Identification(name, rotation)
    msg = f"the operations have the counts of {name.hermann_mauguin} but not its directions: no group"
    raise IdentifyError(msg)


def _candidate_rotations(
    given: tuple[Element, ...], standard: tuple[Element, ...]
) -> list[NDArray[np.float64]]:
    """Rotations that lay characteristic directions of `given` on those of `standard`, the smallest turn first."""
    if not given:
        return [np.eye(3)]
    counts = {s: sum(e.signature == s for e in standard) for s in {e.signature for e in standard}}
    first = min(standard, key=lambda e: (counts[e.signature], -max(e.rotation, e.rotoinversion)))
    others = [e for e in standard if abs(e.direction @ first.direction) < 1 - ROUND_OFF]
    firsts = [(sign * e.direction) for e in given if e.signature == first.signature for sign in (1, -1)]
    if not others:
        turns = [shortest_turn(direction, first.direction) for direction in firsts]
        return sorted(turns, key=lambda turn: -np.trace(turn))
    second = min(others, key=lambda e: (counts[e.signature], abs(e.direction @ first.direction)))
    seconds = [(sign * e.direction) for e in given if e.signature == second.signature for sign in (1, -1)]
    cosine = first.direction @ second.direction
    target = _frame(first.direction, second.direction)
    turns = [target.T @ _frame(u, v) for u, v in product(firsts, seconds) if abs(u @ v - cosine) < ROUND_OFF]
    return sorted(turns, key=lambda turn: -np.trace(turn))


def _frame(first: NDArray, second: NDArray) -> NDArray[np.float64]:
    across = np.cross(first, second)
    across /= np.linalg.norm(across)
    return np.stack([first, across, np.cross(first, across)])


def shortest_turn(start: ArrayLike, end: ArrayLike) -> NDArray[np.float64]:
    """The rotation by the smallest angle that brings one direction onto another."""
    a, b = (np.asarray(v, float) / np.linalg.norm(v) for v in (start, end))
    axis, cosine = np.cross(a, b), float(a @ b)
    if cosine < -1 + OPPOSITE:
        side = np.cross(a, np.eye(3)[int(np.argmin(np.abs(a)))])
        side /= np.linalg.norm(side)
        return 2 * np.outer(side, side) - np.eye(3)
    cross = np.array([[0, -axis[2], axis[1]], [axis[2], 0, -axis[0]], [-axis[1], axis[0], 0]])
    return np.eye(3) + cross + cross @ cross / (1 + cosine)
