"""How many chambers of the group lie in the region between the typed mirrors."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.families import Family
from mirrorlab.mirrors.group import generic_point, simple_of

Array = NDArray[np.float64]
SAME = 1e-7


def chambers_in_region(
    family: Family, fractions: list[list[Fraction]], normals: Array, roots: Array, inside: Array
) -> int:
    """Chambers of an irreducible finite group in the cone between independent typed mirrors.

    Parameters
    ----------
    family : Family
    fractions : n by n list of Fraction
        Dihedral angles of the typed mirrors over π.
    normals : ndarray, shape (n, d)
    roots : ndarray, shape (2N, d)
        All unit normals, both signs.
    inside : ndarray, shape (d,)
        A point off every mirror.

    Notes
    -----
    Two mirrors: kπ/m holds k chambers. Three: the area of the spherical triangle against that of a chamber.
    More: a chamber w(C) lies in the region exactly when w carries the typed normals to positive roots, so
    the tuples of positive roots with the typed Gram matrix are counted, and divided by the automorphisms of
    the Coxeter–Dynkin graph, which permute such tuples.
    """
    n = len(normals)
    if n == 1:
        return 1
    if n == 2:
        return fractions[0][1].numerator
    if all(fractions[i][j].numerator == 1 for i in range(n) for j in range(i + 1, n)):
        return 1  # no obtuse or skipped angle: the typed mirrors are themselves a chamber's walls
    if n == 3:
        excess = fractions[0][1] + fractions[0][2] + fractions[1][2] - 1
        return int(excess * family.order / 4)
    return count_positive_tuples(normals, roots, inside) // family.diagram_symmetries


def count_positive_tuples(normals: Array, roots: Array, inside: Array) -> int:
    """Tuples of positive roots with the same inner products as the typed normals."""
    positive = roots[roots @ inside > 0]
    products = positive @ positive.T
    gram = normals @ normals.T
    order = _connected_order(gram)
    size = len(positive)
    masks: dict[float, list[int]] = {}
    for value in {round(float(gram[i, j]), 6) for i in range(len(gram)) for j in range(i)}:
        hits = np.abs(products - value) < 1e-5
        masks[value] = [sum(1 << int(k) for k in np.flatnonzero(row)) for row in hits]
    wanted = [[round(float(gram[order[k], order[i]]), 6) for i in range(k)] for k in range(len(order))]
    everything = (1 << size) - 1

    def extend(chosen: list[int]) -> int:
        k = len(chosen)
        allowed = everything
        for value, root in zip(wanted[k], chosen, strict=True):
            allowed &= masks[value][root]
        if k == len(order) - 1:
            return allowed.bit_count()
        total = 0
        while allowed:
            low = allowed & -allowed
            allowed ^= low
            total += extend([*chosen, low.bit_length() - 1])
        return total

    return extend([])


def _connected_order(gram: Array) -> list[int]:
    """The mirrors in an order in which each meets an earlier one at a slant, where possible."""
    order = [0]
    while len(order) < len(gram):
        rest = [k for k in range(len(gram)) if k not in order]
        order.append(max(rest, key=lambda k: float((np.abs(gram[k, order]) > SAME).sum())))
    return order


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
        return round(volume * order / lattice)
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
