"""A list of points or face poles against a point group: which operations the list obeys, how well, and what they form.

Each operation moves the list; the moved points are paired with the points there are (`matching`). An operation survives
when every point has a partner within what is allowed.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.comparison import Comparison, OperationMatch
from mirrorlab.crystal.matching import REACH, match_points
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.orientation import Orientation, refine_orientation, search_orientation
from mirrorlab.crystal.point_lists import PointList
from mirrorlab.crystal.pointgroups import NamedGroup, point_group

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

LARGEST_GROUP = 120
"""Order up to which a list is compared: for larger groups no list tells one operation from the next."""

COVERAGE = 3.0
"""Standard uncertainties that two points together may be apart when no tolerance is given."""

SHARE_OF_RADIUS = 0.01
"""Tolerance for points when none is given and they have no uncertainty: this share of their root-mean-square distance
from the centre. A choice of ours; it is shown with every answer."""

POLE_DEGREES = 1.0
"""The same for face poles, in degrees."""

ORIENTATIONS = ("given", "refined", "searched")


class CompareError(CrystalError):
    """A list and a group that cannot be compared."""


def compare_points(
    points: PointList,
    group: NamedGroup | str,
    tolerance: float | None = None,
    orientation: str = "given",
    centroid: bool = False,
    poles: bool = False,
    basis: ArrayLike | None = None,
) -> Comparison:
    """Compare a list with a group.

    Parameters
    ----------
    points : PointList
    group : NamedGroup or str
        In the setting of its symbol; order up to 120.
    tolerance : float, optional
        Largest deviation: in the unit of the coordinates (of the cell, where one is given), in degrees for faces and
        poles. When not given: three standard uncertainties of both points where all have one, otherwise 1 % of the
        list's size (1° for poles).
    orientation : str
        "given": the list stands as the standard setting does. "refined": it is turned to obey the group best, from
        where it stands (Kabsch). "searched": the same from any orientation.
    centroid : bool
        Take the centre of gravity of the points for the centre, instead of the origin.
    poles : bool
        Points count by their direction only, as face poles.
    basis : array_like, shape (3, 3), optional
        Columns a, b, c: then x, y, z are fractions of this cell and h, k, l its indices. Otherwise x, y, z are
        Cartesian and h, k, l refer to the group's unit axes.

    Raises
    ------
    CompareError, MetricError, MatchingError, SymbolError
    """
    named = point_group(group) if isinstance(group, str) else group
    if named.order > LARGEST_GROUP:
        msg = f"{named.setting} has order {named.order}; lists are compared with groups up to order {LARGEST_GROUP}"
        raise CompareError(msg)
    if orientation not in ORIENTATIONS:
        msg = f'orientation "{orientation}": accepted are {", ".join(ORIENTATIONS)}'
        raise CompareError(msg)
    if tolerance is not None and not (np.isfinite(tolerance) and tolerance > 0):
        msg = f"tolerance {tolerance:g}: a number above 0"
        raise CompareError(msg)
    matrices = named.cartesian if basis is None else named.cartesian_in(basis)
    directions = poles or points.directions
    where, centre = _coordinates(points, named, basis, directions, centroid)
    allowed, used = _allowed(points, where, tolerance, directions, basis)
    kinds = _kinds(points.kinds)
    found = Orientation.as_given()
    if orientation == "refined":
        found = refine_orientation(where, matrices, allowed, kinds)
    elif orientation == "searched":
        found = search_orientation(where, matrices, allowed, kinds)
    where = where @ found.rotation.T
    operations = tuple(
        _match(named, k, matrix, where, allowed, kinds, points, directions)
        for k, matrix in enumerate(matrices)
    )
    notes = [*points.notes, *_notes(points, where, used is not None)]
    if points.what == "faces" and basis is None and named.name.system != "cubic":
        notes.append(f"h, k, l refer to unit {named.axes}; give the cell if its axes differ in length")
    return Comparison(
        named,
        points,
        where,
        centre,
        used,
        _unit(directions, basis is not None),
        found,
        operations,
        tuple(notes),
    )


def _unit(directions: bool, in_cell: bool) -> str:
    return "degrees" if directions else "unit of the cell" if in_cell else "unit of the coordinates"


def _coordinates(
    points: PointList, group: NamedGroup, basis: ArrayLike | None, directions: bool, centroid: bool
) -> tuple[Array, Array]:
    """Cartesian coordinates about the centre, and the centre."""
    frame = None if basis is None else np.asarray(basis, float)
    where = points.values
    if points.what == "faces":
        where = where @ np.linalg.inv(group.basis if frame is None else frame)
    elif points.what == "points" and frame is not None:
        where = where @ frame.T
    centre = where.mean(axis=0) if centroid and not directions else np.zeros(3)
    where = where - centre
    if directions:
        lengths = np.linalg.norm(where, axis=1)
        if not lengths.all():
            k = int(np.argmin(lengths))
            msg = f"line {points.lines[k]}: {points.labels[k]} is at the centre, so it has no direction"
            raise CompareError(msg)
        where = where / lengths[:, None]
    return np.asarray(where), centre


def _allowed(
    points: PointList, where: Array, tolerance: float | None, directions: bool, basis: ArrayLike | None
) -> tuple[Array, float | None]:
    """What each point allows, as a length; and the tolerance, None when uncertainties say it."""
    sigmas = points.uncertainties
    if tolerance is None and (sigmas > 0).all():
        if basis is not None and points.what == "points":
            msg = "uncertainties in fractions of a cell differ along its axes; give a tolerance"
            raise CompareError(msg)
        return COVERAGE * (_chord(sigmas) if directions else sigmas), None
    if tolerance is None:
        radius = float(np.sqrt(np.mean(np.sum(where**2, axis=1))))
        tolerance = POLE_DEGREES if directions else SHARE_OF_RADIUS * (radius or 1.0)
    length = float(_chord(np.array(min(tolerance, 180.0)))) if directions else tolerance
    return np.full(len(where), length / np.sqrt(2)), tolerance


def _chord(degrees: Array) -> Array:
    return np.asarray(2 * np.sin(np.radians(degrees) / 2))


def _kinds(kinds: Sequence[str]) -> Whole:
    return np.unique(np.array(kinds), return_inverse=True)[1].astype(np.int64)


def _match(
    group: NamedGroup,
    index: int,
    matrix: Array,
    where: Array,
    allowed: Array,
    kinds: Whole,
    points: PointList,
    directions: bool,
) -> OperationMatch:
    partner, distance = match_points(where @ matrix.T, where, allowed, REACH, kinds)
    there = partner >= 0
    limit = np.hypot(allowed, allowed[partner])
    survives = bool(there.all() and (distance <= limit).all())
    if directions:
        distance = np.degrees(2 * np.arcsin(np.clip(distance / 2, 0, 1)))
    labels, sigmas = points.labels, points.uncertainties
    off = distance[there]
    sigma = np.hypot(sigmas, sigmas[partner])[there]
    worst = labels[int(np.nanargmax(distance))] if len(off) else ""
    element = group.operations[index]
    return OperationMatch(
        index,
        element.text,
        element.triplet,
        partner,
        distance,
        float(np.sqrt(np.mean(off**2))) if len(off) else None,
        float(off.max()) if len(off) else None,
        float(np.sqrt(np.mean((off / sigma) ** 2))) if len(off) and (sigmas > 0).all() else None,
        worst,
        tuple(labels[k] for k in np.flatnonzero(~there)),
        survives,
    )


def _notes(points: PointList, where: Array, by_tolerance: bool) -> list[str]:
    notes = []
    given = int((points.uncertainties > 0).sum())
    if by_tolerance and 0 < given < len(points.labels):
        notes.append(
            f"{given} of {len(points.labels)} points have an uncertainty; the tolerance counts for all"
        )
    if points.unreadable:
        lines = ", ".join(str(one.line) for one in points.unreadable)
        notes.append(f"rows left out because they cannot be read: line {lines}")
    rank = int(np.linalg.matrix_rank(where, tol=1e-6 * max(float(np.abs(where).max()), 1e-12)))
    if rank < 3:
        shape = {0: "at the centre", 1: "on a line through the centre", 2: "in a plane through the centre"}[
            rank
        ]
        notes.append(f"all points lie {shape}, so operations that leave it in place survive by themselves")
    return notes
