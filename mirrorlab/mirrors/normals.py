"""Unit normals of the typed mirrors: from a Gram matrix, or from rows that a person gave."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.mirrors.closure import Fractions
from mirrorlab.mirrors.families import TOP_RANK

Array = NDArray[np.float64]

LETTERS = "abcdefghijklmnoABCDEFGHIJKLMNOPQRSTUVWXYZ"
"""Names of the typed mirrors, one sign each so that words stay readable; p to z is kept for walls not typed."""

MOST_NORMALS = len(LETTERS)

FLAT = 1e-12
"""A pivot below this counts as zero when normals are made from a Gram matrix: it is above the rounding of a pivot
(about 1e-14 after an angle of half a degree), and its square root, 1e-6, below any mirror angle worth typing."""

AGREED = 1e-14
"""Products of unit normals that agree with their angles to this are left as they are."""

TOGETHER = 0.05
"""Normals that need a turn x to have the angles that were read, where the products are off by y, are at odds with them
when x² is above this part of y. A misread lean of x out of a plane changes products by x²/2 only; a rounding error
turns them by about its own size."""


class ArrangementError(ValueError):
    """Angles or normals that do not make an arrangement."""


def normals_from_gram(gram: Array, rank: int) -> Array:
    """Rows with the given inner products, lower triangular as far as the rank allows, shape (n, rank)."""
    n = len(gram)
    rows = np.zeros((n, rank))
    pivots: list[int] = []
    for i in range(n):
        for k, p in enumerate(pivots):
            rows[i, k] = (gram[i, p] - rows[i, :k] @ rows[p, :k]) / rows[p, k]
        rest = gram[i, i] - rows[i] @ rows[i]
        if rest > FLAT and len(pivots) < rank:
            rows[i, len(pivots)] = math.sqrt(rest)
            pivots.append(i)
    return rows


def settle(normals: Array, gram: Array, fractions: Fractions) -> Array:
    """Normals turned as little as can be, to have the angles that were read from them.

    Left as they are when an angle was not read, or when they agree to the last digits.

    Parameters
    ----------
    normals : ndarray, shape (n, d)
        Unit normals as given.
    gram : ndarray, shape (n, n)
        Their products by the angles that were read.
    fractions : n by n list of Fraction or None

    Raises
    ------
    ArrangementError
        The angles that were read do not belong together.
    """
    from mirrorlab.mirrors.decide import buildable

    off = float(np.abs(normals @ normals.T - gram).max())
    if off < AGREED or any(f is None for row in fractions for f in row):
        return normals
    rank = buildable(gram, fractions)
    if rank is not None and rank <= normals.shape[1]:
        exact = normals_from_gram(gram, rank)
        u, _, vt = np.linalg.svd(exact.T @ normals, full_matrices=False)
        turned = np.asarray(exact @ u @ vt, dtype=np.float64)
        if float(np.abs(turned - normals).max()) ** 2 < TOGETHER * off:
            return turned
    msg = (
        f"{len(normals)} normals: each angle is within the tolerance of a closing fraction, but no mirrors have all "
        "these angles at once; give more digits or a smaller tolerance"
    )
    raise ArrangementError(msg)


def unit_rows(normals: ArrayLike) -> Array:
    """Rows of length 1, or an error that names the row at fault."""
    shape = f"give 1 to {MOST_NORMALS} rows of 1 to {TOP_RANK} coordinates"
    try:
        given = np.array(normals, dtype=np.float64)
    except (TypeError, ValueError) as error:
        msg = f"normals that are no table of numbers ({error}); {shape}"
        raise ArrangementError(msg) from error
    if given.ndim != 2 or not 1 <= given.shape[1] <= TOP_RANK or not 1 <= len(given) <= MOST_NORMALS:
        msg = f"normals of shape {given.shape}: {shape}"
        raise ArrangementError(msg)
    sizes = np.abs(given).max(axis=1)
    for i, size in enumerate(sizes):
        if not (math.isfinite(size) and size > 0):
            msg = f"normal {i + 1} of {len(given)}, {given[i].tolist()}: must be finite and not zero"
            raise ArrangementError(msg)
    scaled = given / sizes[:, None]  # squares of very long or short rows would overflow or vanish
    return np.asarray(scaled / np.linalg.norm(scaled, axis=1, keepdims=True))
