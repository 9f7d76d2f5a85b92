"""How many chambers of the group lie in the region between the typed mirrors.

All chambers are alike, so the count is the group's order times the share of all space that the region takes.
"""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.chamber import generic_point, simple_of
from mirrorlab.mirrors.group import family_of

Array = NDArray[np.float64]
SAME = 1e-7


def share_of_space(fractions: list[list[Fraction]], normals: Array, roots: Array) -> Fraction:
    """The part of all space that lies between independent typed mirrors of an irreducible finite group.

    Parameters
    ----------
    fractions : n by n list of Fraction
        Dihedral angles of the typed mirrors over π.
    normals : ndarray, shape (n, d)
    roots : ndarray, shape (2N, d)
        All unit normals, both signs.

    Notes
    -----
    One mirror leaves half; two at kπ/m leave k/2m; three leave the area of a spherical triangle. For more, look
    from each root along its direction: a chamber holds as many images of a point as any other, so the share is
    the mean, over the orbits that the roots are, of the share that the mirrors through that root leave there;
    none where the root lies outside. That takes one mirror away at least, until three are left.
    """
    heights = normals @ roots.T
    outside, through = heights < -SAME, np.abs(heights) <= SAME
    known: dict[tuple[int, ...], Fraction] = {}

    def share(chosen: tuple[int, ...]) -> Fraction:
        if chosen not in known:
            known[chosen] = _few(chosen, fractions) if len(chosen) < 4 else mean(chosen)
        return known[chosen]

    def mean(chosen: tuple[int, ...]) -> Fraction:
        rows = list(chosen)
        seen = through[rows][:, ~outside[rows].any(axis=0)]
        patterns, counts = np.unique(seen, axis=1, return_counts=True)
        total, blind = Fraction(0), 0
        for pattern, count in zip(patterns.T, counts.tolist(), strict=True):
            if pattern.all():
                blind = count  # square to all the chosen mirrors: looks on them as the origin does
            else:
                left = tuple(k for k, met in zip(chosen, pattern, strict=True) if met)
                total += count * share(left)
        return total / (len(roots) - blind)

    return share(tuple(range(len(normals))))


def chambers_in_region(fractions: list[list[Fraction]], normals: Array, roots: Array) -> int:
    """Chambers of an irreducible finite group in the cone between independent typed mirrors.

    See `share_of_space` for the parameters.
    """
    if is_plain(fractions):
        return 1
    count = family_of(roots).order * share_of_space(fractions, normals, roots)
    if count.denominator != 1:
        msg = f"a region of {count} chambers"
        raise AssertionError(msg)
    return int(count)


def is_plain(fractions: list[list[Fraction]]) -> bool:
    """Whether every angle is 180°/m or 0: then no mirror stands between the typed ones, they are chamber walls."""
    return all(f.numerator == 1 or f == 0 for row in fractions for f in row)


def _few(chosen: tuple[int, ...], fractions: list[list[Fraction]]) -> Fraction:
    """The share of space between up to three mirrors."""
    if len(chosen) < 2:
        return Fraction(1, 1 + len(chosen))
    angles = [fractions[i][j] for i in chosen for j in chosen if i < j]
    return angles[0] / 2 if len(chosen) == 2 else (sum(angles, Fraction(0)) - 1) / 4


def chambers_in_simplex(normals: Array, roots: Array, order: int) -> int | None:
    """Chambers of the affine group in the bounded simplex between n = r + 1 mirrors in r dimensions.

    Needs a corner of the simplex where the mirrors through it generate the whole linear group; None where
    there is none, or where the region is not bounded.

    Parameters
    ----------
    normals : ndarray, shape (r + 1, r)
        Unit inward normals.
    roots : ndarray, shape (2N, r)
        Roots of the linear group of the given order.
    """
    n = len(normals)
    null = np.linalg.svd(normals.T)[2][-1]
    null = null * np.sign(null[np.abs(null).argmax()])
    if (null < SAME).any():
        return None
    for apex in range(n):
        others = [k for k in range(n) if k != apex]
        if len(_closed_set(normals[others], roots)) != len(roots):
            continue
        height = 1 / null[apex]
        volume = (
            float(np.prod(1 / null[others])) / abs(np.linalg.det(normals[others])) / math.factorial(n - 1)
        )
        orbit = _closed_set(normals[[apex]], roots, of=normals[others])
        lattice = abs(np.linalg.det(_basis(orbit))) * (2 * height) ** (n - 1)
        return round(float(volume * order / lattice))
    return None


def _closed_set(start: Array, roots: Array, of: Array | None = None) -> Array:
    """Those roots that reflections in `of` (by default the starting ones) carry the starting normals to."""
    mirrors = start if of is None else of
    reached = {int(np.abs(roots - row).max(axis=1).argmin()) for sign in (1, -1) for row in sign * start}
    frontier = set(reached)
    while frontier:
        block = roots[sorted(frontier)]
        images = np.concatenate([block - 2 * np.outer(block @ m, m) for m in mirrors])
        fresh = {int(np.abs(roots - row).max(axis=1).argmin()) for row in images} - reached
        reached |= fresh
        frontier = fresh
    return roots[sorted(reached)]


def _basis(roots: Array) -> Array:
    """Simple roots of a root system: a basis of the lattice it spans."""
    inside = generic_point(roots, np.eye(roots.shape[1]))
    positive = roots[roots @ inside > 0]
    return positive[simple_of(positive, inside)]
