"""General and special positions of a point group, and the orbit of a point under it.

A position belongs to a flat of the group: all of space, a mirror plane, an axis, or the origin. Its points are
moved by one operation of each coset of those that leave the flat in place, so the multiplicity is the order of
the group over the order of the site symmetry (International Tables for Crystallography, volume A, chapter 10.1).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.closure import matrix_keys
from mirrorlab.crystal.operations import ROUND_OFF, CrystalError, write_triplet
from mirrorlab.crystal.pointgroups import NamedGroup
from mirrorlab.crystal.site_symmetry import oriented_symbol

SAME_POINT = 1e-6
"""Points closer than this times their distance from the origin are one: coordinates are typed with six digits."""


class PointError(CrystalError):
    """A point that has no three finite coordinates."""


@dataclass(frozen=True, eq=False)
class Position:
    """One row of the table of positions.

    Attributes
    ----------
    multiplicity : int
        Number of equivalent points.
    site_symmetry : str
        Oriented symbol, such as ``.3m``.
    site_order : int
        Order of the site symmetry.
    freedom : int
        Free coordinates: 3 general, 2 on a mirror, 1 on an axis, 0 in the origin.
    place : str
        Where it is, in words.
    triplets : tuple of str
        All equivalent points, such as ``x,x,z``.
    images : ndarray, shape (multiplicity, 3, 3)
        The same as matrices acting on (x, y, z).
    stabiliser : tuple of int
        The operations that leave the first point in place.
    """

    multiplicity: int
    site_symmetry: str
    site_order: int
    freedom: int
    place: str
    triplets: tuple[str, ...]
    images: NDArray
    stabiliser: tuple[int, ...]

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "multiplicity": self.multiplicity,
            "site_symmetry": self.site_symmetry,
            "site_order": self.site_order,
            "freedom": self.freedom,
            "place": self.place,
            "coordinates": list(self.triplets),
        }


@dataclass(frozen=True, eq=False)
class GroupOrbit:
    """The equivalent points of one point.

    Attributes
    ----------
    points : ndarray, shape (multiplicity, 3)
        In the axes of the group's setting; the given point first.
    operations : tuple of int
        For each point the operation that leads there.
    position : Position
        The row of the table it belongs to.
    site_symmetry : str
        Oriented symbol at the given point.
    """

    points: NDArray[np.float64]
    operations: tuple[int, ...]
    position: Position
    site_symmetry: str
    axes: str

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "axes": self.axes,
            "points": self.points.tolist(),
            "operations": list(self.operations),
            "multiplicity": len(self.points),
            "site_symmetry": self.site_symmetry,
            "position": self.position.to_dict(),
        }


@lru_cache(maxsize=128)
def positions_of(group: NamedGroup) -> tuple[Position, ...]:
    """All general and special positions, the general one first.

    Examples
    --------
    >>> from mirrorlab.crystal import point_group
    >>> [(row.multiplicity, row.site_symmetry, row.triplets[0]) for row in positions_of(point_group("-43m"))]
    [(24, '1', 'x,y,z'), (12, '..m', 'x,x,z'), (6, '2.mm', 'x,0,0'), (4, '.3m', 'x,x,x'), (1, '-43m', '0,0,0')]
    """
    flats = _flats(group)
    rows = []
    done: set[bytes] = set()
    for flat in flats:
        if matrix_keys([_projector(flat)])[0] in done:
            continue
        orbit = _orbit_of_flat(group, flat)
        done |= {matrix_keys([_projector(other)])[0] for other in orbit}
        rows.append(_position(group, min(orbit, key=lambda other: _preference(group, _parametrised(other)))))
    return tuple(
        sorted(rows, key=lambda row: (-row.multiplicity, -row.freedom, _preference(group, row.images[0])))
    )


def _flats(group: NamedGroup) -> list[NDArray[np.float64]]:
    """A basis (rows, in the axes of the setting) for all space, each mirror, each axis, and the origin."""
    flats = [np.eye(3)]
    for element in group.operations:
        if element.kind == "m":
            flats.append(_null_space(np.asarray([element.plane], float)))
        elif element.proper and element.axis is not None:
            flats.append(np.asarray([element.axis], float))
    if not group.polar:
        flats.append(np.zeros((0, 3)))
    return flats


def _null_space(rows: NDArray) -> NDArray[np.float64]:
    _, _, turned = np.linalg.svd(rows)
    return turned[len(rows) :]


def _projector(flat: NDArray) -> NDArray[np.float64]:
    """Orthogonal projector on the span of the rows: the same for every basis of one flat."""
    if not len(flat):
        return np.zeros((3, 3))
    frame, _ = np.linalg.qr(flat.T)
    return frame @ frame.T


def _orbit_of_flat(group: NamedGroup, flat: NDArray) -> list[NDArray[np.float64]]:
    moved = {}
    for matrix in group.matrices:
        image = flat @ matrix.T
        moved.setdefault(matrix_keys([_projector(image)])[0], image)
    return list(moved.values())


def _parametrised(flat: NDArray) -> NDArray[np.float64]:
    """The matrix that takes (x, y, z) to a point of the flat, with the free coordinates standing for themselves."""
    rows = np.array(flat, float)
    pivots: list[int] = []
    for column in range(3):
        used = len(pivots)
        if used == len(rows):
            break
        pivot = used + int(np.argmax(np.abs(rows[used:, column])))
        if abs(rows[pivot, column]) < ROUND_OFF:
            continue
        rows[[used, pivot]] = rows[[pivot, used]]
        rows[used] /= rows[used, column]
        for other in range(len(rows)):
            if other != used:
                rows[other] -= rows[other, column] * rows[used]
        pivots.append(column)
    matrix = np.zeros((3, 3))
    for row, column in zip(rows, pivots, strict=False):
        matrix[:, column] = np.where(np.abs(row) < ROUND_OFF, 0, row)
    whole = np.rint(matrix)
    return whole if np.allclose(whole, matrix, atol=ROUND_OFF) else matrix


def _preference(group: NamedGroup, matrix: NDArray) -> tuple:
    """Which of equivalent flats stands for all: the one with the plainest coordinates, as International Tables does."""
    entries = np.abs(matrix[np.abs(matrix) > ROUND_OFF])
    fractional = bool((np.abs(matrix - np.rint(matrix)) > ROUND_OFF).any())
    zeros = [not row.any() for row in np.abs(matrix) > ROUND_OFF]
    leading_zero_first = group.name.system == "cubic" and sum(zeros) == 1
    order = tuple(not zero if leading_zero_first else zero for zero in zeros)
    return fractional, int((matrix < -ROUND_OFF).sum()), float(entries.sum()), order, write_triplet(matrix)


def _position(group: NamedGroup, flat: NDArray) -> Position:
    first = _parametrised(flat)
    keeping = np.abs(group.matrices @ first - first).max(axis=(1, 2)) < ROUND_OFF
    stabiliser = tuple(int(index) for index in np.flatnonzero(keeping))
    images = group.matrices @ first
    distinct = dict(zip(reversed(matrix_keys(images)), reversed(range(len(images))), strict=True))
    kept = images[sorted(distinct.values())]
    if np.allclose(kept, np.rint(kept)):
        kept = np.rint(kept).astype(np.int64)
    mirrors = sum(group.operations[index].kind == "m" for index in stabiliser)
    place = {3: "anywhere", 2: "on a mirror", 1: "on an axis where mirrors meet" if mirrors else "on an axis"}
    return Position(
        multiplicity=len(kept),
        site_symmetry=oriented_symbol(group, stabiliser),
        site_order=len(stabiliser),
        freedom=len(flat),
        place=place.get(len(flat), "in the origin"),
        triplets=tuple(write_triplet(matrix) for matrix in kept),
        images=kept,
        stabiliser=stabiliser,
    )


def orbit_under(group: NamedGroup, point: ArrayLike) -> GroupOrbit:
    """The equivalent points of a point, in the axes of the group's setting.

    Parameters
    ----------
    point : array_like, shape (3,)

    Raises
    ------
    PointError
        When it has no three finite numbers.
    """
    seed = np.asarray(point, float)
    if seed.shape != (3,) or not np.isfinite(seed).all():
        msg = f"a point has three finite coordinates, not {np.asarray(point).tolist()}"
        raise PointError(msg)
    images = group.matrices @ seed
    tolerance = SAME_POINT * max(float(np.abs(images).max()), 1e-300)
    first_of = [int(np.argmax(np.abs(images - image).max(axis=1) < tolerance)) for image in images]
    distinct = sorted(set(first_of))
    stabiliser = tuple(index for index, first in enumerate(first_of) if first == 0)
    row = next(
        row
        for row in sorted(positions_of(group), key=lambda row: row.freedom)
        if row.site_order == len(stabiliser) and _lies_on(images, row, tolerance)
    )
    symbol = oriented_symbol(group, stabiliser)
    return GroupOrbit(images[distinct], tuple(distinct), row, symbol, group.axes)


def _lies_on(images: NDArray, row: Position, tolerance: float) -> bool:
    """Whether some image lies on the row's first flat: the flat's matrix leaves such a point in place."""
    if row.freedom == 0:
        return bool((np.abs(images).max(axis=1) <= tolerance).any())
    return bool((np.abs(images @ row.images[0].T - images).max(axis=1) <= 4 * tolerance).any())
