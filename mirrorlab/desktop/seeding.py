"""Where a dragged seed comes to stand: inside its chamber, and on a wall, edge or corner when close to one."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.desktop.document import Document, Seed
from mirrorlab.mirrors import Arrangement

DRAG_REACH = 0.035
"""Radians within which a dragged seed snaps to a wall: about two degrees, a few pixels of a picture 500 wide."""

DIGITS = 5
"""Decimals kept of a dragged seed: finer than a pixel, short enough to read."""


@dataclass(frozen=True, slots=True)
class Landing:
    """Where a drag ended: the seed, and the letters of the walls it snapped to."""

    seed: Seed
    walls: tuple[str, ...]


def land(arrangement: Arrangement, point: NDArray[np.float64], rotations: bool = False) -> Landing | None:
    """The seed for a point under the pointer, None where a seed means nothing.

    Parameters
    ----------
    point : ndarray, shape (d,)
        In the arrangement's frame, of any length but zero. Outside its chamber it is held at the wall.
    """
    group = arrangement.finding().group
    length = float(np.linalg.norm(point))
    if group is None or not group.rank or len(point) != group.dimension or length < 1e-9:
        return None
    unit = np.asarray(point, dtype=np.float64) / length
    heights = np.maximum(group.simple @ unit, 0.0)
    near = [int(i) for i in np.argsort(heights) if heights[i] < DRAG_REACH]
    for i in near[: group.rank - 1]:
        heights[i] = 0.0
    if not heights.any():
        return None
    inside = np.linalg.pinv(group.simple) @ heights
    inside *= 1.0 / np.linalg.norm(inside)
    walls = tuple(group.letters[i] for i in range(group.rank) if heights[i] == 0.0)
    normals = arrangement.normals
    assert normals is not None
    typed = [_same_mirror(normals, wall) for wall in group.simple]
    if len(normals) == group.rank and None not in typed:
        kept = [round(float(h), DIGITS) + 0.0 for h in normals @ inside]
        return Landing(Seed(heights=tuple(kept), place=None, rotations=rotations), walls)
    return Landing(Seed(point=tuple(map(float, inside)), place=None, rotations=rotations), walls)


def drag(document: Document, point: NDArray[np.float64], gesture: str) -> str:
    """Move the document's seed under the pointer, as part of a gesture; says where it stands."""
    landing = land(document.arrangement, point, document.seed.rotations)
    if landing is None:
        return ""
    document.set_seed(landing.seed, "drag seed", gesture)
    return f"The seed is {where(landing.walls, document.finding.rank)}"


def _same_mirror(normals: NDArray[np.float64], wall: NDArray[np.float64]) -> int | None:
    """Which typed mirror has this inward normal."""
    found = np.flatnonzero(np.abs(normals - wall).max(axis=1) < 1e-9)
    return int(found[0]) if len(found) else None


def where(walls: tuple[str, ...], rank: int) -> str:
    """The place of a seed in words: "on wall a", "on edge ab", "on corner abc"."""
    if not walls:
        return "inside its chamber"
    kind = "wall" if len(walls) == 1 else "corner" if len(walls) == rank - 1 else "edge"
    return f"on {kind} {''.join(walls)}"
