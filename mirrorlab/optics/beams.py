"""Beams of light from a point: through every row of finite mirrors that it can meet, one after another.

The source stays where it is and the assembly is unfolded: past a mirror stands the mirrored assembly, and light
goes straight on. A beam is the cone of directions from the source that pass through one row of panels; at each
step it is parted among the panels of the next assembly. So a word is there exactly when light can meet its
mirrors in that order.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.assembly import Assembly

Array = NDArray[np.float64]
Ints = NDArray[np.int64]
Progress: TypeAlias = Callable[[int, int], object]

SLIVER = 1e-9
"""Square radians: a narrower beam is rounding at an edge. An eye's pupil 1 m away takes in about 1e-5."""

MOST_BEAMS = 200_000
"""Beams followed before counting is stopped: about two seconds."""


MOST_BOUNCES = 1000
"""Bounces in one row; two mirrors half a degree apart need 360."""


@dataclass(frozen=True, slots=True, eq=False)
class Beams:
    """Every row of mirrors that light from a point can meet.

    Attributes
    ----------
    parent : ndarray of int, shape (B,)
        The beam before the last mirror; −1 for the light that meets none.
    mirror : ndarray of int, shape (B,)
        The last mirror met.
    bounces : ndarray of int, shape (B,)
    brightness : ndarray, shape (B,)
        What is left of the light, by the mirrors' reflectances.
    turns, shifts : ndarray, shape (B, 3, 3) and (B, 3)
        ``turns @ x + shifts`` is where the last mirror's side sees a point x: the image.
    width : ndarray, shape (B,)
        Solid angle of the beam, as parted from its parent.
    complete : bool
        False where counting was stopped by `faintest`, `most_bounces` or `most`.
    """

    parent: Ints
    mirror: Ints
    bounces: Ints
    brightness: Array
    turns: Array
    shifts: Array
    width: Array
    complete: bool
    stopped_by: str

    def word(self, index: int, letters: tuple[str, ...]) -> str:
        """The mirrors as a product of reflections: the eye's ray meets the first letter first."""
        word = ""
        while self.parent[index] >= 0:
            word += letters[self.mirror[index]]
            index = int(self.parent[index])
        return word


def beams_from(
    assembly: Assembly,
    point: Array,
    faintest: float = 0.02,
    most_bounces: int = MOST_BOUNCES,
    most: int = MOST_BEAMS,
    progress: Progress | None = None,
) -> Beams:
    """Follow the light from a point between the mirrors.

    Parameters
    ----------
    point : ndarray, shape (3,)
    faintest : float
        Beams with less of their light left are not followed.
    progress : callable, optional
        Called with (bounces, most_bounces); a return of False stops the count, which is then not complete.
    """
    normals, offsets = assembly.normals, assembly.offsets
    reflectances = np.array([mirror.reflectance for mirror in assembly.mirrors])
    outlines = _padded([panel.outline for panel in assembly.panels])
    mirrors = np.eye(3) - 2 * np.einsum("ni,nj->nij", normals, normals)
    moves = 2 * offsets[:, None] * normals
    rows: list[tuple[Array, ...]] = [
        (
            np.array([-1]),
            np.array([-1]),
            np.zeros(1),
            np.ones(1),
            np.eye(3)[None],
            np.zeros((1, 3)),
            np.array([4 * np.pi]),
        )
    ]
    # The assembly past a beam's mirrors stands at ``turn @ x + shift``; the image is seen by the inverse.
    turn, shift = np.eye(3)[None], np.zeros((1, 3))
    last, brightness, index = np.array([-1]), np.ones(1), np.array([0])
    cones, counts = np.zeros((1, 0, 3)), np.zeros(1, dtype=np.int64)
    total, stopped = 1, ""
    for depth in range(1, most_bounces + 1):
        new: list[tuple[Any, ...]] = []
        for panel in range(len(normals)):
            ask = last != panel
            bright = brightness * reflectances[panel] >= faintest
            if (ask & ~bright).any():
                stopped = f"brightness below {faintest:g}"
            chosen = np.flatnonzero(ask & bright)
            if not len(chosen):
                continue
            corners = np.einsum("bij,kj->bki", turn[chosen], outlines[panel]) + shift[chosen, None] - point
            sub, count = part(cones[chosen], counts[chosen], corners, depth > 1)
            width = solid_angles(sub, count)
            kept = width > SLIVER
            chosen, sub, count, width = chosen[kept], sub[kept], count[kept], width[kept]
            further = np.einsum("bij,jk->bik", turn[chosen], mirrors[panel])
            moved = np.einsum("bij,j->bi", turn[chosen], moves[panel]) + shift[chosen]
            new.append(
                (
                    index[chosen],
                    np.full(len(chosen), panel),
                    further,
                    moved,
                    brightness[chosen] * reflectances[panel],
                    sub,
                    count,
                    width,
                )
            )
        if not new or not sum(len(row[0]) for row in new):
            break
        if depth == most_bounces:
            stopped = f"{most_bounces - 1} bounces"
            break
        parent, last, turn, shift, brightness, width = (
            np.concatenate([row[k] for row in new]) for k in (0, 1, 2, 3, 4, 7)
        )
        counts = np.concatenate([row[6] for row in new])
        wide = max(row[5].shape[1] for row in new)
        cones = np.concatenate([np.pad(row[5], ((0, 0), (0, wide - row[5].shape[1]), (0, 0))) for row in new])
        if total + len(parent) > most:
            stopped = f"{most:,} beams"
            break
        index = np.arange(total, total + len(parent))
        total += len(parent)
        back = np.swapaxes(turn, 1, 2)
        rows.append(
            (
                parent,
                last,
                np.full(len(parent), depth),
                brightness,
                back,
                -np.einsum("bij,bj->bi", back, shift),
                width,
            )
        )
        if progress is not None and progress(depth, most_bounces) is False:
            stopped = "a cancel"
            break
    columns = [np.concatenate([row[k] for row in rows]) for k in range(7)]
    parent, mirror, bounces = (column.astype(np.int64) for column in columns[:3])
    brightness, turns, shifts, width = columns[3:]
    return Beams(parent, mirror, bounces, brightness, turns, shifts, width, not stopped, stopped)


def _padded(outlines: list[Array]) -> Array:
    # A repeated corner makes a side of no length, which clips nothing.
    wide = max(len(outline) for outline in outlines)
    return np.array(
        [np.vstack([outline, np.repeat(outline[-1:], wide - len(outline), axis=0)]) for outline in outlines]
    )


def part(cones: Array, counts: Ints, corners: Array, clipped: bool) -> tuple[Array, Ints]:
    """Return the part of each cone that goes through a panel.

    Parameters
    ----------
    cones : ndarray, shape (B, V, 3)
        Edges of the cones as directions from the source, `counts` of them each.
    corners : ndarray, shape (B, k, 3)
        The panel's corners seen from the source.
    clipped : bool
        False when there is no cone yet, all directions being open.
    """
    b, k, _ = corners.shape
    if not clipped:
        return corners.copy(), np.full(b, k, dtype=np.int64)
    middle = corners.mean(axis=1)
    sub, count = cones, counts
    for i in range(k):
        walls = np.cross(corners[:, i], corners[:, (i + 1) % k])
        walls *= np.sign(np.einsum("bi,bi->b", walls, middle))[:, None]
        size = np.linalg.norm(walls, axis=1, keepdims=True)
        walls = np.divide(walls, size, out=np.zeros_like(walls), where=size > 0)
        sub, count = clip(sub, count, walls)
    return sub, count


def clip(cones: Array, counts: Ints, walls: Array) -> tuple[Array, Ints]:
    """Return each cone's part on the inner side of a plane through its point (Sutherland and Hodgman 1974)."""
    b, v, _ = cones.shape
    place = np.arange(v)
    valid = place[None, :] < counts[:, None]
    after = np.where(place[None, :] + 1 < counts[:, None], place[None, :] + 1, 0)
    height = np.einsum("bvi,bi->bv", cones, walls)
    next_height = np.take_along_axis(height, after, axis=1)
    inside, next_inside = height >= 0, next_height >= 0
    crossing = valid & (inside != next_inside)
    with np.errstate(divide="ignore", invalid="ignore"):
        share = np.where(crossing, height / (height - next_height), 0.0)
    following = np.take_along_axis(cones, after[:, :, None], axis=1)
    cut = cones + share[:, :, None] * (following - cones)
    points = np.stack([cones, cut], axis=2).reshape(b, 2 * v, 3)
    wanted = np.stack([valid & inside, crossing], axis=2).reshape(b, 2 * v)
    found = wanted.sum(axis=1)
    result = np.zeros((b, max(int(found.max(initial=0)), 1), 3))
    rows, columns = np.nonzero(wanted)
    result[rows, (np.cumsum(wanted, axis=1) - 1)[rows, columns]] = points[rows, columns]
    return result, found


def solid_angles(cones: Array, counts: Ints) -> Array:
    """Return the solid angle of each convex cone, shape (B,) (Van Oosterom and Strackee 1983)."""
    if cones.shape[1] < 3:
        return np.zeros(len(cones))
    length = np.linalg.norm(cones, axis=2, keepdims=True)
    rays = np.divide(cones, length, out=np.zeros_like(cones), where=length > 0)
    first, second, third = rays[:, :1], rays[:, 1:-1], rays[:, 2:]
    volume = np.einsum("bvi,bvi->bv", first.repeat(second.shape[1], axis=1), np.cross(second, third))
    one, two, three = (first * second).sum(axis=2), (second * third).sum(axis=2), (first * third).sum(axis=2)
    angle = 2 * np.arctan2(np.abs(volume), 1 + one + two + three)
    there = np.arange(2, cones.shape[1])[None, :] < counts[:, None]
    result: Array = np.where(there, angle, 0).sum(axis=1)
    return result
