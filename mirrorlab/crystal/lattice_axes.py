"""The conventional cell of a lattice symmetry: axes along its symmetry directions, centring and Bravais type.

Conventions as in International Tables for Crystallography, volume A, chapters 2.1 and 3.1 (from memory): c along the
main axis; b along the axis of a monoclinic cell, with β obtuse and the centring C; a ≤ b ≤ c for an orthorhombic cell,
with the centring C where one pair of faces is centred; hexagonal axes, obverse, for a rhombohedral lattice; the reduced
cell for a triclinic one.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import permutations
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.cell import Cell, constants_of
from mirrorlab.crystal.centring import Centring, centring_with
from mirrorlab.crystal.closure import generate
from mirrorlab.crystal.operations import CrystalError, operation
from mirrorlab.crystal.reduction import plane_and_step, reduce_pair

if TYPE_CHECKING:
    from mirrorlab.crystal.lattice_mirrors import Symmetry

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

_FAMILY = {"-1": "a", "2/m": "m", "mmm": "o", "4/mmm": "t", "-3m": "h", "6/mmm": "h", "m-3m": "c"}


class AxesError(CrystalError):
    """A symmetry without conventional axes; a sign of a fault, not of wrong input."""


@dataclass(frozen=True, eq=False)
class ConventionalCell:
    """The conventional cell of a lattice symmetry.

    Attributes
    ----------
    bravais : str
        Such as ``oI``; base-centred types with S, as ``mS``.
    centring : str
    transformation : ndarray, shape (3, 3)
        Columns: the conventional axes in the axes of the cell given.
    constants : tuple of six float
        Of these axes as they are.
    uncertainties : tuple of six float
    ideal : tuple of six float
        Of the nearest cell that has the symmetry exactly (the mean over its operations).
    strain : float
        Largest change of a length, as a share of it, from the one to the other.
    """

    bravais: str
    centring: str
    transformation: Array
    constants: tuple[float, ...]
    uncertainties: tuple[float, ...]
    ideal: tuple[float, ...]
    strain: float

    @property
    def cell(self) -> Cell:
        """The ideal cell."""
        return Cell(self.ideal, centring=self.centring)

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "bravais_type": self.bravais,
            "centring": self.centring,
            "constants": list(self.constants),
            "uncertainties": list(self.uncertainties),
            "ideal_constants": list(self.ideal),
            "strain": self.strain,
            "axes_as_columns_in_the_cell": self.transformation.tolist(),
        }


def conventional_cell(symmetry: Symmetry) -> ConventionalCell:
    """The conventional cell of a symmetry."""
    cell = symmetry.cell
    basis = cell.primitive_basis @ symmetry.reduced
    metric = basis.T @ basis
    matrices, ideal = ideal_metric(symmetry, metric)
    axes = _axes(symmetry.holohedry, _directions(matrices), ideal)
    settled = _settled(symmetry.holohedry, axes, ideal)
    if settled is None:
        msg = f"no conventional axes for {symmetry.holohedry} from {axes.tolist()}"
        raise AxesError(msg)
    axes, centring = settled
    letter = "S" if centring.letter in "ABC" else centring.letter
    to_given = cell.lattice.primitive @ symmetry.reduced @ axes / cell.lattice.over

    def constants(other: Cell) -> tuple[float, ...]:
        return constants_of(to_given.T @ other.metric @ to_given)

    uncertainties = np.sqrt(np.maximum(np.diag(cell.propagate(constants)), 0.0))
    change = np.maximum(np.linalg.eigvals(np.linalg.solve(metric, ideal)).real, 0.0)
    return ConventionalCell(
        _FAMILY[symmetry.holohedry] + letter,
        centring.letter,
        np.round(to_given, 12) + 0.0,
        constants(cell),
        tuple(float(value) if value > 1e-12 else 0.0 for value in uncertainties),
        _clean(constants_of(axes.T @ ideal @ axes)),
        float(np.abs(np.sqrt(change) - 1).max()),
    )


def ideal_metric(symmetry: Symmetry, metric: Array) -> tuple[NDArray, Array]:
    """All operations in the reduced primitive cell, and the mean of its metric over them, which has the symmetry."""
    matrices = generate([-np.eye(3, dtype=np.int64), *(mirror.matrix for mirror in symmetry.mirrors)])
    return matrices, np.mean([matrix.T @ metric @ matrix for matrix in matrices], axis=0)


def ideal_normals(symmetry: Symmetry) -> Array:
    """Unit normals of the mirrors in the nearest lattice that has the symmetry exactly, shape (n, 3).

    In the Cartesian frame of the cell given; that lattice is turned to lie on the given one as well as it can.
    """
    basis = symmetry.cell.primitive_basis @ symmetry.reduced
    _, ideal = ideal_metric(symmetry, basis.T @ basis)
    turned = nearest_basis(basis, ideal)
    rows = np.array([m.primitive_plane for m in symmetry.mirrors]).reshape(-1, 3) @ np.linalg.inv(turned)
    return np.asarray(rows / np.linalg.norm(rows, axis=1, keepdims=True))


def nearest_basis(basis: Array, metric: Array) -> Array:
    """Axes (columns) with the products `metric`, turned to lie on those of `basis` as well as they can."""
    own = np.linalg.cholesky(metric).T
    left, _, right = np.linalg.svd(basis @ np.linalg.inv(own))
    return np.asarray(left @ right @ own)


def _clean(constants: tuple[float, ...]) -> tuple[float, ...]:
    """Equal lengths and right or 120° angles free of rounding."""
    whole = [round(value, 9) if abs(value - round(value, 9)) < 1e-9 else value for value in constants[3:]]
    lengths = list(constants[:3])
    for i in (1, 2):
        for j in range(i):
            if abs(lengths[i] / lengths[j] - 1) < 1e-10:
                lengths[i] = lengths[j]
    return (*lengths, *whole)


def _directions(matrices: NDArray) -> dict[int, list[Whole]]:
    """Axes by the highest order of their rotation."""
    order: dict[tuple[float, ...], int] = {}
    for matrix in matrices:
        element = operation(matrix)
        if element.proper and element.axis is not None:
            order[element.axis] = max(order.get(element.axis, 1), element.fold)
    found: dict[int, list[Whole]] = {2: [], 3: [], 4: [], 6: []}
    for axis, fold in order.items():
        found[fold].append(np.array(axis, np.int64))
    return found


def _axes(holohedry: str, of_order: dict[int, list[Whole]], metric: Array) -> Whole:
    """Columns: axes along symmetry directions, the shortest lattice vectors in them."""

    def size(vector: Whole) -> float:
        return float(vector @ metric @ vector)

    if holohedry == "m-3m":
        return np.array(of_order[4]).T
    if holohedry == "mmm":
        return np.array(sorted(of_order[2], key=size)).T
    if holohedry in ("4/mmm", "6/mmm", "-3m"):
        main = of_order[{"4/mmm": 4, "6/mmm": 6, "-3m": 3}[holohedry]][0]
        first = min(of_order[2], key=lambda v: (round(size(v) / size(main), 9), [-int(k) for k in v]))
        wanted = 0.0 if holohedry == "4/mmm" else -0.5
        second = next(
            sign * v
            for v in of_order[2]
            for sign in (1, -1)
            if abs(size(v) / size(first) - 1) < 1e-6
            and abs(sign * (first @ metric @ v) / size(first) - wanted) < 1e-6
        )
        return np.array([first, second, main]).T
    if holohedry == "2/m":
        unique = of_order[2][0]
        plane = metric @ unique
        plane = np.rint(plane / np.abs(plane[np.abs(plane) > 1e-9 * np.abs(plane).max()]).min() * 12).astype(
            np.int64
        )
        within, _ = plane_and_step(plane // np.gcd.reduce(plane))
        pair = within @ reduce_pair(within.T @ metric @ within)
        return np.array([pair[:, 0], unique, pair[:, 1]]).T
    if holohedry == "-1":
        return np.eye(3, dtype=np.int64)
    msg = f"{holohedry} is no symmetry of a lattice"
    raise AxesError(msg)


def is_holohedry(symmetry: Symmetry) -> bool:
    """Whether a lattice can have this symmetry and no more.

    Three mirrors through a threefold axis of a hexagonal lattice are not: exact, they bring the other four with them.
    """
    if symmetry.holohedry != "-3m":
        return True
    basis = symmetry.cell.primitive_basis @ symmetry.reduced
    matrices, ideal = ideal_metric(symmetry, basis.T @ basis)
    return _settled("-3m", _axes("-3m", _directions(matrices), ideal), ideal) is not None


def _settled(holohedry: str, axes: Whole, metric: Array) -> tuple[Whole, Centring] | None:
    """The axes right-handed, in the setting that the conventions ask for, with their centring."""
    wanted = {"m-3m": "PIF", "mmm": "PCIF", "4/mmm": "PI", "6/mmm": "P", "-3m": "R", "2/m": "PC", "-1": "P"}[
        holohedry
    ]
    for choice in _choices(holohedry, axes, metric):
        turned = choice if round(np.linalg.det(choice)) > 0 else -choice
        centring = _centring(turned)
        if centring is not None and centring.letter in wanted:
            return turned, centring
    return None


def _choices(holohedry: str, axes: Whole, metric: Array) -> Sequence[Whole]:
    """Axes in the order in which they are to be tried."""
    a, b, c = axes.T
    if holohedry == "-1":
        return [_same_kind_of_angles(axes, metric)]
    if holohedry == "2/m":
        pairs = [(p, q) for p, q in permutations((a, c, a + c, a - c), 2)]
        pairs = [(p, q if p @ metric @ q <= 0 else -q) for p, q in pairs]
        pairs = [(p, q) for p, q in pairs if abs(_area(p, q, metric) / _area(a, c, metric) - 1) < 1e-6]
        pairs.sort(key=lambda pair: round(sum(float(v @ metric @ v) for v in pair), 9))
        return [np.array([p, b, q]).T for p, q in pairs]
    if holohedry == "mmm":
        return [axes, *(axes[:, list(order)] for order in ((0, 2, 1), (1, 2, 0)))]
    if holohedry == "-3m":
        return [axes, np.array([-a, -b, c]).T]
    return [axes]


def _area(p: Whole, q: Whole, metric: Array) -> float:
    return float((p @ metric @ p) * (q @ metric @ q) - (p @ metric @ q) ** 2) ** 0.5


def _same_kind_of_angles(axes: Whole, metric: Array) -> Whole:
    """Signs that make all three angles acute, or else none of them (right angles count either way)."""
    signs = [np.array(s) for s in ((1, 1, 1), (1, 1, -1), (1, -1, 1), (-1, 1, 1))]
    made = [axes * sign for sign in signs]

    def products(one: Whole) -> tuple[float, float, float]:
        table = one.T @ metric @ one
        return float(table[1, 2]), float(table[0, 2]), float(table[0, 1])

    small = 1e-9 * float(np.trace(metric))
    acute = [one for one in made if min(products(one)) > small]
    obtuse = [one for one in made if max(products(one)) <= small]
    return (acute or obtuse or made)[0]


def _centring(axes: Whole) -> Centring | None:
    """The centring of a cell with these axes in a primitive cell."""
    count = round(abs(np.linalg.det(axes)))
    back = np.linalg.inv(axes)
    corners = np.array([(i, j, k) for i in range(count) for j in range(count) for k in range(count)])
    fractions = np.unique(np.round(corners @ back.T % 1.0, 6) % 1.0, axis=0)
    return centring_with(fractions)
