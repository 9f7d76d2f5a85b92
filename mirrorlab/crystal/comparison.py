"""What a list of points or face poles and a point group have to do with each other: one answer an operation."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.closure import product_table
from mirrorlab.crystal.identify import classify
from mirrorlab.crystal.orientation import Orientation
from mirrorlab.crystal.point_lists import PointList
from mirrorlab.crystal.pointgroups import NamedGroup
from mirrorlab.crystal.subsets import generated_by, largest_subgroup

Array = NDArray[np.float64]
Whole = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class OperationMatch:
    """One operation of the group applied to the list.

    Attributes
    ----------
    index : int
        Place in ``group.operations``.
    text, triplet : str
        As `mirrorlab.crystal.operations.Operation` writes them.
    partner : ndarray of int, shape (n,)
        The point that each point is moved to; -1 where none is in reach.
    deviation : ndarray, shape (n,)
        How far beside it, NaN where there is none: in the unit of the coordinates, in degrees for poles.
    rms, largest : float or None
        Over the points that have a partner; None when none has.
    rms_sigmas : float or None
        Root mean square of the deviations over the standard uncertainty of the two points together; None when not all
        points have one. About √3 is to be expected of points and √2 of poles.
    worst : str
        Label of the point with the largest deviation.
    unmatched : tuple of str
        Labels of the points without a partner.
    survives : bool
        Every point has a partner within what is allowed.
    """

    index: int
    text: str
    triplet: str
    partner: Whole = field(repr=False)
    deviation: Array = field(repr=False)
    rms: float | None
    largest: float | None
    rms_sigmas: float | None
    worst: str
    unmatched: tuple[str, ...]
    survives: bool

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "operation": self.index + 1,
            "symbol": self.text,
            "triplet": self.triplet,
            "partners": [None if k < 0 else int(k) for k in self.partner],
            "deviations": [None if np.isnan(d) else float(d) for d in self.deviation],
            "rms": self.rms,
            "largest": self.largest,
            "rms_in_uncertainties": self.rms_sigmas,
            "worst": self.worst,
            "unmatched": list(self.unmatched),
            "survives": self.survives,
        }


@dataclass(frozen=True, eq=False)
class Comparison:
    """A list compared with a group.

    Attributes
    ----------
    group : NamedGroup
    points : PointList
    coordinates : ndarray, shape (n, 3)
        Cartesian, in the frame of the group's standard setting, about the centre; unit vectors for poles.
    centre : ndarray, shape (3,)
        What was taken for the centre, in the Cartesian frame of the list.
    tolerance : float or None
        Largest deviation allowed; None when the points' own uncertainties say it.
    unit : str
        "degrees" for poles, else "unit of the coordinates" or "unit of the cell".
    orientation : Orientation
    operations : tuple of OperationMatch
        One for each operation of the group, in its order.
    notes : tuple of str
    """

    group: NamedGroup
    points: PointList
    coordinates: Array
    centre: Array
    tolerance: float | None
    unit: str
    orientation: Orientation
    operations: tuple[OperationMatch, ...]
    notes: tuple[str, ...]

    @cached_property
    def surviving(self) -> tuple[int, ...]:
        """Places of the operations that survive."""
        return tuple(one.index for one in self.operations if one.survives)

    @cached_property
    def _table(self) -> Whole:
        return product_table(self.group.cartesian)

    @cached_property
    def generated(self) -> tuple[int, ...]:
        """The operations that the surviving ones make together."""
        return generated_by(self.surviving, self._table)

    @property
    def closed(self) -> bool:
        """Whether the surviving operations are a group; a product may fail where its factors just pass."""
        return len(self.generated) == len(self.surviving)

    @cached_property
    def subgroup(self) -> tuple[int, ...]:
        """The largest subgroup all of whose operations survive."""
        return self.surviving if self.closed else largest_subgroup(self.surviving, self._table)

    def _symbol(self, members: Sequence[int]) -> str:
        return classify(self.group.cartesian[list(members)]).hermann_mauguin

    @cached_property
    def symbol(self) -> str:
        """Hermann–Mauguin symbol of the subgroup."""
        return self._symbol(self.subgroup)

    @cached_property
    def generated_symbol(self) -> str:
        """Symbol of what the surviving operations generate; the same when they are closed."""
        return self._symbol(self.generated)

    @cached_property
    def rms(self) -> float | None:
        """Root-mean-square deviation over all operations of the subgroup but the identity; None when it is trivial."""
        off = np.concatenate(
            [self.operations[k].deviation for k in self.subgroup if self.operations[k].text != "1"] or [[]]
        )
        off = off[~np.isnan(off)]
        return float(np.sqrt(np.mean(off**2))) if len(off) else None

    @property
    def sentence(self) -> str:
        """The answer in words."""
        count, order = len(self.surviving), self.group.order
        allowed = (
            "within the uncertainties"
            if self.tolerance is None
            else f"within {self.tolerance:.4g} {self._short}"
        )
        if count == order:
            text = f"The list obeys {self.group.setting}: all {order} operations {allowed}"
        else:
            text = f"{count} of {order} operations of {self.group.setting} survive {allowed}"
            if self.closed:
                text += f"; they form {self.symbol}"
            else:
                text += (
                    f"; they are no group: together they generate {self.generated_symbol}, and the largest group among "
                    f"them is {self.symbol}"
                )
        return f"{text}." if self.rms is None else f"{text} (rms {self.rms:.3g} {self._short})."

    @property
    def _short(self) -> str:
        return "°" if self.unit == "degrees" else "units"

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "group": self.group.setting,
            "order": self.group.order,
            "source": self.points.source,
            "points": len(self.points.labels),
            "labels": list(self.points.labels),
            "lines": list(self.points.lines),
            "unreadable": [one.to_dict() for one in self.points.unreadable],
            "tolerance": self.tolerance,
            "unit": self.unit,
            "centre": self.centre.tolist(),
            "orientation": self.orientation.to_dict(),
            "operations": [one.to_dict() for one in self.operations],
            "surviving": [k + 1 for k in self.surviving],
            "closed": self.closed,
            "subgroup": self.symbol,
            "subgroup_operations": [k + 1 for k in self.subgroup],
            "generated": self.generated_symbol,
            "rms": self.rms,
            "coordinates": self.coordinates.tolist(),
            "notes": list(self.notes),
            "sentence": self.sentence,
        }
