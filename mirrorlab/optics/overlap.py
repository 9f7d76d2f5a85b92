"""Which images of the whole assembly claim the same space: there one cuts the other, wherever the eye is."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.beams import Beams, clip, solid_angles

Array = NDArray[np.float64]

SHARE = 1e-6
"""Part of a chamber: two that have less in common only touch."""

MOST_CHAMBERS = 250
"""Chambers compared with each other, those of fewest bounces first; in a tube there is no end of them."""

MOST_OVERLAPS = 200


@dataclass(frozen=True, slots=True)
class Overlap:
    """Two images of the space between the mirrors that overlap.

    Attributes
    ----------
    first, second : str
        Their words, "" for the space itself.
    share : float
        Common part, of one of them.
    """

    first: str
    second: str
    share: float

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {"words": [self.first, self.second], "share": self.share}


def overlaps_of(assembly: Assembly, beams: Beams) -> tuple[Overlap, ...]:
    """Return the pairs of images of the space between three or four mirrors that overlap, most first."""
    if assembly.kind == "wedge":
        return ()
    order = np.argsort(beams.bounces, kind="stable")
    cones, flat = chambers(assembly, beams, order)
    first = _distinct(cones)[:MOST_CHAMBERS]
    order, cones = order[first], cones[first]
    k = cones.shape[1]
    middles = cones.mean(axis=1)
    middles = middles / np.linalg.norm(middles, axis=1)[:, None]
    rays = cones / np.linalg.norm(cones, axis=2)[:, :, None]
    reach = np.arccos(np.clip(np.einsum("nki,ni->nk", rays, middles), -1, 1)).max(axis=1)
    apart = np.arccos(np.clip(middles @ middles.T, -1, 1))
    one, two = np.nonzero(np.triu(apart < reach[:, None] + reach[None, :], 1))
    counts = np.full(len(one), k, dtype=np.int64)
    sub = cones[one]
    for side in range(k):
        walls = np.cross(cones[two, side], cones[two, (side + 1) % k])
        walls *= np.sign(np.einsum("ni,ni->n", walls, middles[two]))[:, None]
        sub, counts = clip(sub, counts, walls)
    whole = _measure(cones[:1], np.array([k]), flat)[0]
    shares = _measure(sub, counts, flat) / whole
    found = [
        Overlap(
            beams.word(int(order[i]), assembly.letters),
            beams.word(int(order[j]), assembly.letters),
            float(share),
        )
        for i, j, share in zip(one, two, shares, strict=True)
        if share > SHARE
    ]
    found.sort(key=lambda overlap: -overlap.share)
    return tuple(found[:MOST_OVERLAPS])


def chambers(assembly: Assembly, beams: Beams, order: NDArray[np.int64]) -> tuple[Array, bool]:
    """Images of the space between the mirrors as cones, shape (N, k, 3), and whether they are flat polygons.

    Where the mirrors meet in a point the cones stand on it. Where they are parallel to one direction the
    cross-section is put at distance 1 from a point instead, so that its sides are planes through that too.
    """
    rest, level = np.linalg.lstsq(assembly.normals, assembly.offsets, rcond=None)[:2]
    meet = np.linalg.matrix_rank(assembly.normals, tol=1e-9) == 3
    turns, shifts = beams.turns[order], beams.shifts[order]
    if meet and (not len(level) or level[0] < 1e-6):
        rays = assembly.mouth - rest
        return np.einsum("nij,kj->nki", turns, rays), False
    moved = np.einsum("nij,kj->nki", turns, assembly.mouth) + shifts[:, None]
    moved[..., 2] = 1.0
    return moved, True


def _distinct(cones: Array) -> NDArray[np.int64]:
    # One of each chamber, the first; corners are compared, for a chamber may come in two orientations.
    corners = np.sort(np.round(cones / np.abs(cones).max() * 1e6).astype(np.int64), axis=1).reshape(
        len(cones), -1
    )
    _, first = np.unique(corners, axis=0, return_index=True)
    return np.sort(first)


def _measure(cones: Array, counts: NDArray[np.int64], flat: bool) -> Array:
    if not flat:
        return solid_angles(cones, counts)
    depth = cones[..., 2:3]
    plane = np.divide(cones, depth, out=np.zeros_like(cones), where=depth > 0)
    if cones.shape[1] < 3:
        return np.zeros(len(cones))
    edges = plane[:, 1:] - plane[:, :1]
    area = np.cross(edges[:, :-1], edges[:, 1:])[..., 2]
    there = np.arange(2, cones.shape[1])[None, :] < counts[:, None]
    result: Array = np.abs(np.where(there, area, 0).sum(axis=1)) / 2
    return result
