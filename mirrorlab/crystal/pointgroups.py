"""The point groups as objects: the 32 in crystal axes, any other in Cartesian axes.

Sources: settings, symbols and classes as in International Tables for Crystallography, volume A, chapter 10.1
(from memory); all operations are computed from the generators.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.closure import LARGEST_ORDER, generate
from mirrorlab.crystal.generators import IN_CRYSTAL_AXES, SAME_SETTING, THE_32, cartesian_generators
from mirrorlab.crystal.operations import ROUND_OFF, CrystalError, Operation, operation
from mirrorlab.crystal.symbols import GroupName, SymbolError, parse_symbol, typographic

HEXAGONAL_BASIS = np.array([[1.0, -0.5, 0.0], [0.0, 3**0.5 / 2, 0.0], [0.0, 0.0, 1.0]])
"""Columns a, b, c of hexagonal axes of unit length: a along x, b at 120° to it, c along z."""

METRIC_TOLERANCE = 1e-4
"""Relative change of a metric tensor under an operation that still counts as none: cell constants are given to four
or five digits."""


class MetricError(CrystalError):
    """A cell whose shape the group does not keep."""


@dataclass(frozen=True, eq=False)
class NamedGroup:
    """A point group in a setting.

    Attributes
    ----------
    name : GroupName
        Its type.
    setting : str
        The symbol with its setting, such as "31m"; equals `hermann_mauguin` in the standard setting.
    operations : tuple of Operation
        The identity first, rotations before rotoinversions.
    basis : ndarray, shape (3, 3)
        Columns a, b, c of unit axes in Cartesian coordinates (hexagonal for the trigonal and hexagonal groups).
    """

    name: GroupName
    setting: str
    operations: tuple[Operation, ...]
    basis: NDArray[np.float64]

    def __repr__(self) -> str:
        return f"point_group({self.setting!r})"

    @property
    def hermann_mauguin(self) -> str:
        """Short symbol, such as ``-43m``."""
        return self.name.hermann_mauguin

    @property
    def schoenflies(self) -> str:
        """Such as ``Td``."""
        return self.name.schoenflies

    @property
    def typographic(self) -> str:
        """The symbol in this setting with bars over the digits."""
        return typographic(self.setting)

    @property
    def order(self) -> int:
        """Number of operations."""
        return len(self.operations)

    @property
    def axes(self) -> str:
        """Which axes coordinates and indices are in."""
        if not self.name.crystallographic:
            return (
                "Cartesian axes, main axis along z"
                if self.name.n
                else "Cartesian axes along three twofold axes"
            )
        return "hexagonal axes" if self.hexagonal else f"{self.name.system} axes"

    @property
    def hexagonal(self) -> bool:
        """True when indices refer to hexagonal axes, so that four-index symbols apply."""
        return self.name.crystallographic and self.name.system in ("trigonal", "hexagonal")

    @cached_property
    def matrices(self) -> NDArray:
        """All operations in the axes of the setting, shape (order, 3, 3)."""
        return np.array([element.matrix for element in self.operations])

    @cached_property
    def cartesian(self) -> NDArray[np.float64]:
        """All operations as orthogonal matrices, shape (order, 3, 3), for unit axes."""
        return self.cartesian_in(self.basis)

    def cartesian_in(self, basis: ArrayLike) -> NDArray[np.float64]:
        """All operations as orthogonal matrices for the axes in the columns of `basis`.

        Raises
        ------
        MetricError
            When an operation changes lengths or angles of these axes.
        """
        frame = np.asarray(basis, float)
        if self.order == 0 or frame.shape != (3, 3):
            msg = f"a basis has three columns of three numbers, not shape {frame.shape}"
            raise MetricError(msg)
        metric = frame.T @ frame
        moved = np.swapaxes(self.matrices, 1, 2) @ metric @ self.matrices
        worst = int(np.argmax(np.abs(moved - metric).max(axis=(1, 2))))
        if np.abs(moved[worst] - metric).max() > METRIC_TOLERANCE * np.abs(metric).max():
            msg = f"these axes do not have the symmetry {self.setting}: {self.operations[worst].text} changes them"
            raise MetricError(msg)
        return frame @ self.matrices @ np.linalg.inv(frame)

    @cached_property
    def mirrors(self) -> tuple[Operation, ...]:
        """The mirrors."""
        return tuple(element for element in self.operations if element.kind == "m")

    @cached_property
    def mirror_normals(self) -> NDArray[np.float64]:
        """Unit normals of the mirrors in Cartesian coordinates (unit axes), shape (mirrors, 3)."""
        rows = [np.asarray(mirror.axis, float) @ self.basis.T for mirror in self.mirrors]
        return np.array([row / np.linalg.norm(row) for row in rows]).reshape(-1, 3)

    @property
    def centrosymmetric(self) -> bool:
        """Contains the centre −1."""
        return any(element.kind == "-1" for element in self.operations)

    @property
    def chiral(self) -> bool:
        """Contains rotations only, so that a left- and a right-handed form exist."""
        return all(element.proper for element in self.operations)

    @cached_property
    def polar(self) -> bool:
        """Leaves some direction unlike its opposite: a direction that no operation moves."""
        return bool(np.linalg.matrix_rank(self.cartesian.mean(axis=0), tol=ROUND_OFF) > 0)

    @cached_property
    def laue_class(self) -> str:
        """The group with a centre added."""
        from mirrorlab.crystal.identify import classify

        return classify(self._with_centre()).hermann_mauguin

    @cached_property
    def mirror_subgroup(self) -> GroupName:
        """What the mirrors alone generate."""
        from mirrorlab.crystal.identify import classify

        if not self.mirrors:
            return GroupName("C", 1)
        return classify(generate([mirror.matrix for mirror in self.mirrors]), self.basis)

    def _with_centre(self) -> NDArray[np.float64]:
        if self.centrosymmetric:
            return self.cartesian
        return np.concatenate([self.cartesian, -self.cartesian])

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "hermann_mauguin": self.hermann_mauguin,
            "setting": self.setting,
            "typographic": self.typographic,
            "schoenflies": self.schoenflies,
            "system": self.name.system,
            "axes": self.axes,
            "order": self.order,
            "crystallographic": self.name.crystallographic,
            "laue_class": self.laue_class,
            "centrosymmetric": self.centrosymmetric,
            "chiral": self.chiral,
            "polar": self.polar,
            "mirror_count": len(self.mirrors),
            "mirror_subgroup": self.mirror_subgroup.hermann_mauguin,
            "operations": [element.to_dict() for element in self.operations],
        }


def point_group(symbol: str | GroupName) -> NamedGroup:
    """The point group of a Hermann–Mauguin or Schoenflies symbol.

    Parameters
    ----------
    symbol : str or GroupName
        "-43m", "4̄3m", "Td", "31m", "-10m2", "m-3-5" …; a setting is kept, otherwise the standard one is taken.

    Raises
    ------
    SymbolError
        When it is no point group, or its order is above 1440.

    Examples
    --------
    >>> point_group("-43m").order
    24
    >>> point_group("D3d").setting
    '-3m'
    """
    name, setting = (
        (symbol, symbol.hermann_mauguin) if isinstance(symbol, GroupName) else parse_symbol(symbol)
    )
    if name.order > LARGEST_ORDER:
        msg = f'"{setting}": order {name.order}; groups are listed up to order {LARGEST_ORDER}'
        raise SymbolError(msg)
    return _build(name, SAME_SETTING.get(setting, setting))


@lru_cache(maxsize=256)
def _build(name: GroupName, setting: str) -> NamedGroup:
    if name.crystallographic:
        from mirrorlab.crystal.operations import parse_triplet

        matrices = generate([parse_triplet(text) for text in IN_CRYSTAL_AXES[setting]])
        basis = HEXAGONAL_BASIS if name.system in ("trigonal", "hexagonal") else np.eye(3)
    else:
        matrices, basis = generate(cartesian_generators(name)), np.eye(3)
    elements = sorted((operation(matrix) for matrix in matrices), key=_listing_order)
    for element in elements:
        element.matrix.setflags(write=False)
    return NamedGroup(name, setting, tuple(elements), basis)


def _listing_order(element: Operation) -> tuple:
    axis = element.axis or (0, 0, 0)
    main_first = tuple(-abs(value) for value in reversed(axis))
    return (
        not element.proper,
        element.fold,
        element.kind,
        main_first,
        tuple(-v for v in axis),
        element.sense,
    )


def the_32() -> tuple[NamedGroup, ...]:
    """The 32 crystallographic point groups in the order of International Tables."""
    return tuple(point_group(symbol) for symbol in THE_32)


@lru_cache(maxsize=8)
def without_lattice(largest_order: int = 120) -> tuple[GroupName, ...]:
    """Names of all point groups up to an order that no lattice has."""
    names = {
        GroupName(family, n)
        for n in range(2, largest_order + 1)
        for family in ("C", "Ch", "Cv", "D", "Dh", "Dd", "S")
        if not (family == "S" and n % 2)
    }
    names |= {GroupName("I"), GroupName("Ih")}
    fitting = (name for name in names if not name.crystallographic and name.order <= largest_order)
    return tuple(sorted(fitting, key=lambda name: (name.order, name.family, name.n)))
