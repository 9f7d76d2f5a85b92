"""From generators to all operations, and from operations to the table of their products."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.operations import CrystalError

LARGEST_ORDER = 1440
"""Groups above this order are not listed. It is that of 360/mmm, which the finest closing angle (180°/360) leads to."""

_DIGITS = 5


class NotAGroupError(CrystalError):
    """A set of operations that is not closed, or that does not become closed within the largest order."""


def matrix_keys(matrices: ArrayLike) -> list[bytes]:
    """One key per matrix (or row of numbers), equal when they agree within round-off."""
    stack = np.asarray(matrices, float)
    rounded = np.rint(stack.reshape(len(stack), -1) * 10**_DIGITS).astype(np.int64)
    return [row.tobytes() for row in rounded]


def generate(generators: Sequence[ArrayLike], limit: int = LARGEST_ORDER) -> NDArray:
    """All products of the generators.

    Parameters
    ----------
    generators : sequence of array_like, shape (3, 3)
        Whole numbers stay whole.

    Returns
    -------
    ndarray, shape (order, 3, 3)
        The identity first.

    Raises
    ------
    NotAGroupError
        When there are more than `limit`.
    """
    steps = [np.asarray(generator) for generator in generators]
    whole = all(np.issubdtype(step.dtype, np.integer) for step in steps)
    identity = np.eye(3, dtype=np.int64 if whole else np.float64)
    found = {matrix_keys([identity])[0]: identity}
    front = np.array([identity])
    while len(front) and steps:
        products = np.concatenate([step @ front for step in steps])
        before = len(found)
        for key, product in zip(matrix_keys(products), products, strict=True):
            found.setdefault(key, product)
        if len(found) > limit:
            msg = f"the operations multiply to more than {limit} different ones: no group that is listed here"
            raise NotAGroupError(msg)
        front = np.array(list(found.values())[before:])
    return np.array(list(found.values()))


def product_table(matrices: NDArray) -> NDArray[np.int64]:
    """`table[i, j]` is the index of operation i times operation j.

    Raises
    ------
    NotAGroupError
        When a product is not among `matrices`, naming the two.
    """
    index = {key: place for place, key in enumerate(matrix_keys(matrices))}
    table = np.empty((len(matrices), len(matrices)), np.int64)
    for row, matrix in enumerate(matrices):
        for column, key in enumerate(matrix_keys(matrix @ matrices)):
            if key not in index:
                msg = f"operation {row + 1} times operation {column + 1} is not among the {len(matrices)}: no group"
                raise NotAGroupError(msg)
            table[row, column] = index[key]
    return table
