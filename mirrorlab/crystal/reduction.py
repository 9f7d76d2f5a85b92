"""Reduced vectors of a lattice: the shortest ones that span it, and the nearest lattice point in a plane.

References
----------
.. [1] M. J. Buerger, Z. Kristallogr. 109 (1957) 42–60: the cell of the three shortest non-coplanar vectors.
.. [2] I. Semaev, A 3-dimensional lattice reduction algorithm, in CaLC 2001, Springer: the pair first, then the third
   vector against its nearest neighbours in their plane.
"""

from __future__ import annotations

from itertools import product

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

SHORTER = 1e-9
"""A vector replaces another only when its squared length is less by this share, so that ties end the reduction."""

MOST_ROUNDS = 10_000
"""Rounds of a reduction; each shortens a vector, and cells within the allowed ratio of axes take some tens."""


def reduce_pair(metric: ArrayLike) -> Whole:
    """Two shortest vectors of a plane lattice, as columns, shape (2, 2).

    Parameters
    ----------
    metric : array_like, shape (2, 2)
        Products of the vectors given.
    """
    table = np.asarray(metric, float)
    u, v = np.array([1, 0], np.int64), np.array([0, 1], np.int64)
    for _ in range(MOST_ROUNDS):
        if v @ table @ v < u @ table @ u * (1 - SHORTER):
            u, v = v, u
        times = int(np.rint(u @ table @ v / (u @ table @ u)))
        shorter = v - times * u
        if shorter @ table @ shorter >= v @ table @ v * (1 - SHORTER):
            break
        v = shorter
    pair = np.array([u, v]).T
    if round(np.linalg.det(pair)) < 0:
        pair[:, 1] = -pair[:, 1]
    return pair


def nearest_in_plane(metric: ArrayLike, targets: ArrayLike) -> Whole:
    """The nearest lattice point to each of some points of a plane, shape (k, 2).

    Parameters
    ----------
    metric : array_like, shape (2, 2)
        Of two reduced vectors; the nearest point is then among the neighbours of the rounded coordinates.
    targets : array_like, shape (k, 2)
        In the axes of these vectors.
    """
    table, points = np.asarray(metric, float), np.atleast_2d(np.asarray(targets, float))
    around = np.array(list(product((-1, 0, 1), repeat=2)))
    choices = np.rint(points).astype(np.int64)[:, None] + around
    off = choices - points[:, None]
    lengths = np.einsum("kij,jl,kil->ki", off, table, off)
    return choices[np.arange(len(points)), np.argmin(lengths, axis=1)]


def reduce_lattice(metric: ArrayLike) -> Whole:
    """Three shortest vectors that span a lattice, as columns, shape (3, 3), right-handed.

    Parameters
    ----------
    metric : array_like, shape (3, 3)
        Products of the vectors of a primitive cell.

    Returns
    -------
    ndarray of int, shape (3, 3)
        Whole numbers with determinant 1: the reduced vectors in the axes given, shortest first.
    """
    table = np.asarray(metric, float)
    vectors = np.eye(3, dtype=np.int64)
    for _ in range(MOST_ROUNDS):
        lengths = np.einsum("ik,ij,jk->k", vectors, table, vectors)
        vectors = vectors[:, np.argsort(lengths, kind="stable")]
        now = vectors.T @ table @ vectors
        vectors[:, :2] = vectors[:, :2] @ reduce_pair(now[:2, :2])
        now = vectors.T @ table @ vectors
        foot = np.linalg.solve(now[:2, :2], now[:2, 2])
        steps = nearest_in_plane(now[:2, :2], foot)[0]
        shorter = vectors[:, 2] - vectors[:, :2] @ steps
        length = float(shorter @ table @ shorter)
        if length >= now[2, 2] * (1 - SHORTER):
            break
        vectors[:, 2] = shorter
    if round(np.linalg.det(vectors)) < 0:
        vectors[:, 2] = -vectors[:, 2]
    return vectors


def plane_and_step(plane: ArrayLike) -> tuple[Whole, Whole]:
    """Vectors of the lattice plane h·u = 0, and one that leads to the next plane, h·u = 1.

    Parameters
    ----------
    plane : array_like of int, shape (3,)
        Coprime.

    Returns
    -------
    within : ndarray of int, shape (3, 2)
    step : ndarray of int, shape (3,)
        Together with `within` it spans the lattice.
    """
    left = [int(value) for value in np.asarray(plane)]
    columns = [[int(i == j) for i in range(3)] for j in range(3)]
    while True:  # Euclid's steps on the three indices, done to the columns as well
        used = sorted((k for k in range(3) if left[k]), key=lambda k: abs(left[k]))
        if len(used) == 1:
            break
        smallest = used[0]
        for other in used[1:]:
            times = left[other] // left[smallest]
            left[other] -= times * left[smallest]
            columns[other] = [c - times * s for c, s in zip(columns[other], columns[smallest], strict=True)]
    last = used[0]
    step = np.array(columns[last], np.int64) * (1 if left[last] > 0 else -1)
    within = np.array([columns[k] for k in range(3) if k != last], np.int64).T
    return within, step
