"""Seeds by name and by height."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.orbit import OrbitError

if TYPE_CHECKING:
    from mirrorlab.mirrors.arrangement import Arrangement
    from mirrorlab.mirrors.group import ReflectionGroup

Array = NDArray[np.float64]

MISFIT = 1e-9
"""Heights above dependent mirrors must agree to this part of the largest height."""


def seed_point(
    arrangement: Arrangement,
    heights: Sequence[float] | None,
    point: Sequence[float] | None,
    place: str | None,
) -> Array:
    """A seed from exactly one of heights, coordinates or a named place. See `Arrangement.seed`."""
    if sum(given is not None for given in (heights, point, place)) != 1:
        msg = "give exactly one of heights, point and place"
        raise OrbitError(msg)
    normals = arrangement.normals
    if normals is None:
        msg = f"no seed: {arrangement.finding().sentence}"
        raise OrbitError(msg)
    if point is not None:
        return _values(point, normals.shape[1], "point", "coordinates")
    if heights is not None:
        wanted = _values(heights, len(normals), "heights", "values above the typed mirrors")
        found = np.linalg.pinv(normals) @ wanted
        if np.abs(normals @ found - wanted).max() > MISFIT * float(np.abs(wanted).max()):
            msg = f"heights {wanted.tolist()}: no point has these; the mirrors are dependent, give a point instead"
            raise OrbitError(msg)
        return np.asarray(found)
    group = arrangement.finding().group
    if group is None:
        msg = f"no named place: {arrangement.finding().sentence}"
        raise OrbitError(msg)
    return named_place(group, place or "")


def place_names(group: ReflectionGroup) -> tuple[str, ...]:
    """Names of the centre, walls, edges and corners of a group's true chamber."""
    if not group.rank:
        return ("centre",)
    from itertools import combinations

    names = ["centre"]
    for count in range(1, group.rank):
        kind = "wall" if count == 1 else "corner" if count == group.rank - 1 else "edge"
        names += [f"{kind} {''.join(c)}" for c in combinations(group.letters, count)]
    return tuple(names)


def named_place(group: ReflectionGroup, name: str) -> Array:
    """The unit vector to a named place of the true chamber: "centre", "wall a", "edge ab", "corner abc".

    The letters name the walls it lies on; above the others it stands at equal heights. A corner lies on all walls
    but one, so with three walls "edge ab" and "corner ab" are the same place.

    Raises
    ------
    OrbitError
        No such place.
    """
    words = name.lower().split()
    kind = words[0] if len(words) == 2 else ""
    on = "" if words in (["centre"], ["center"]) else (words[-1] if words else "?")
    kinds = {"": True, "wall": len(on) == 1, "edge": len(on) > 1, "corner": len(on) == group.rank - 1}
    known = set(on) <= set(group.letters) and len(set(on)) == len(on) < max(group.rank, 1)
    if not known or len(words) > 2 or not kinds.get(kind, False):
        msg = f'place "{name}": accepted are {", ".join(place_names(group)[:12])}'
        raise OrbitError(msg)
    heights = np.array([0.0 if letter in on else 1.0 for letter in group.letters])
    found = np.linalg.pinv(group.simple) @ heights
    return np.asarray(found / max(float(np.linalg.norm(found)), 1e-300))


def _values(given: Sequence[float], count: int, what: str, meaning: str) -> Array:
    try:
        values = np.array(given, dtype=np.float64)
    except (TypeError, ValueError) as error:
        msg = f"{what} {given!r}: {count} finite {meaning} are wanted"
        raise OrbitError(msg) from error
    if values.shape != (count,) or not np.isfinite(values).all():
        msg = f"{what} {values.tolist()}: {count} finite {meaning} are wanted"
        raise OrbitError(msg)
    return values
