"""Angles whose Gram matrix is singular: mirrors that share a direction, and whether their images tile.

References
----------
.. [1] J. E. Humphreys, *Reflection Groups and Coxeter Groups* (1990), chapter 4: affine reflection groups.
.. [2] *International Tables for Crystallography*, volume A: the plane groups p2mm, p4mm, p3m1, p6mm (from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.closure import Fractions, Part
from mirrorlab.mirrors.counting import chambers_in_region, chambers_in_simplex, is_plain
from mirrorlab.mirrors.flags import Flag
from mirrorlab.mirrors.group import ReflectionGroup, family_of
from mirrorlab.mirrors.symbols import PointGroup, point_group

_PLANE_GROUPS = {"A2": "p3m1", "B2": "p4mm", "G2": "p6mm"}


@dataclass(frozen=True, slots=True, eq=False)
class Tube:
    """What a set of mirrors with a common direction does.

    Attributes
    ----------
    direction : str
        The common direction, in words.
    fills : str
        What the images of the region fill: "strip", "plane", "space", or "rank-n space".
    tiling : str
        "once", "subdivided", "overlap" or "undetermined" (the distances between the mirrors decide).
    plane_group : str or None
        Symbol when the images tile a plane.
    chambers : int or None
        Chambers between the mirrors when they tile and the region is bounded.
    moved_families, moved_order, moved_point_group
        The finite group that the same planes make when each is moved to pass through one line or point;
        None when that one is open too, or has more mirrors than are written out.
    moved : ReflectionGroup or None
        That group.
    """

    direction: str
    fills: str
    tiling: str
    plane_group: str | None
    chambers: int | None
    moved_families: tuple[str, ...]
    moved_order: int | None
    moved_point_group: PointGroup | None
    moved: ReflectionGroup | None

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "direction": self.direction,
            "fills": self.fills,
            "tiling": self.tiling,
            "plane_group": self.plane_group,
            "chambers_between": self.chambers,
            "moved_through_one_point": {
                "families": list(self.moved_families),
                "order": self.moved_order,
                "point_group": None if self.moved_point_group is None else self.moved_point_group.to_dict(),
            },
        }


def describe_tube(
    parts: list[Part],
    fractions: Fractions,
    normals: NDArray[np.float64],
    cycles: tuple[Flag, ...],
    moved: ReflectionGroup | None,
) -> Tube:
    """Decide the tiling of a tube from its parts.

    The images tile exactly when the linear group can be carried by a lattice and no cycle of mirrors has an
    irrational product [1]_; they tile once when, besides, every angle is 180°/m or 0°. Where a part has more
    than one parallel direction to spare, the distances decide and angles alone cannot.
    """
    rank = sum(part.rank for part in parts)
    direction = {
        1: "the mirrors are parallel",
        2: "the mirrors share one direction, the z axis of the frame",
    }.get(rank, "the mirrors share no direction; their images fill the space they stand in")
    fills = {1: "strip", 2: "plane", 3: "space"}.get(rank, f"{rank}-dimensional space")
    if rank == 2 and any(not part.singular for part in parts):
        fills = "strip"
    loose = [part for part in parts if len(part.members) - part.rank > 1]
    tiling, chambers = "overlap", None
    if moved is not None and moved.crystallographic and not cycles:
        if loose:
            tiling = "undetermined"
        else:
            chambers = _count(parts, fractions, normals)
            plain = all(f is not None and (f == 0 or f.numerator == 1) for row in fractions for f in row)
            tiling = "once" if plain else "subdivided"
    plane_group = None
    if tiling in ("once", "subdivided") and fills == "plane" and moved is not None:
        families = [component.family.name for component in moved.components]
        plane_group = _PLANE_GROUPS.get(families[0]) if len(families) == 1 else "p2mm"
    families_moved = () if moved is None else tuple(component.family for component in moved.components)
    return Tube(
        direction,
        fills,
        tiling,
        plane_group,
        chambers,
        () if moved is None else moved.families,
        None if moved is None else moved.order,
        None if moved is None else point_group(families_moved),
        moved,
    )


def _count(parts: list[Part], fractions: Fractions, normals: NDArray[np.float64]) -> int | None:
    counts: list[int | None] = []
    for part in parts:
        if part.roots is None:
            return None
        mine = normals[list(part.members)]
        known = [[fractions[i][j] or Fraction(0) for j in part.members] for i in part.members]
        if part.singular:
            counts.append(_simplex(part, known, mine))
        else:
            counts.append(chambers_in_region(known, mine, part.roots))
    return None if any(count is None for count in counts) else math.prod(c for c in counts if c is not None)


def _simplex(part: Part, known: list[list[Fraction]], normals: NDArray[np.float64]) -> int | None:
    if is_plain(known):
        return 1
    if part.roots is None:
        return None
    basis = np.linalg.svd(normals)[2][: part.rank]
    flat_normals, flat_roots = normals @ basis.T, part.roots @ basis.T
    return chambers_in_simplex(flat_normals, flat_roots, family_of(part.roots).order)
