"""Which mirrors do reflections generate: written out in exact whole numbers.

The ring Z[√2] or Z[φ] holds every 2cos(kπ/m) with m up to 5, so two roots are the same only when their integers
are the same, and no tolerance decides whether the set closes.
"""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

LETTERS = "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ"
"""One for each mirror of a part, in its order; `mirrorlab.mirrors.witness` puts the typed letters in their place."""


class Ring:
    """Z[τ] with τ² = p·τ + q, holding 2cos(kπ/m) for m up to 5: τ = √2, or τ = φ when a five is present."""

    def __init__(self, with_five: bool) -> None:
        self.p, self.q = (1, 1) if with_five else (0, 2)
        self.tau = (1 + math.sqrt(5)) / 2 if with_five else math.sqrt(2)
        table = {Fraction(0): (2, 0), Fraction(1, 3): (1, 0), Fraction(1, 2): (0, 0)}
        if with_five:
            table |= {Fraction(1, 5): (0, 1), Fraction(2, 5): (-1, 1)}
        else:
            table |= {Fraction(1, 4): (0, 1)}
        self._table = table | {1 - f: (-a, -b) for f, (a, b) in table.items()}

    def two_cosine(self, fraction: Fraction) -> tuple[int, int]:
        """2cos(fraction·π) as (a, b), meaning a + b·τ."""
        return self._table[fraction]

    def times(self, x: NDArray[np.int64], y: NDArray[np.int64]) -> NDArray[np.int64]:
        """Product, over the last axis of length 2."""
        a, b, c, d = x[..., 0], x[..., 1], y[..., 0], y[..., 1]
        bd = b * d
        return np.stack([a * c + self.q * bd, a * d + b * c + self.p * bd], axis=-1)

    def real(self, x: NDArray[np.int64]) -> NDArray[np.float64]:
        """The real numbers a + b·τ."""
        return x[..., 0] + x[..., 1] * self.tau


def generate_roots(
    matrix: list[list[Fraction]], most: int
) -> tuple[NDArray[np.float64], tuple[str, ...], bool]:
    """Unit normals of all mirrors that reflections in the given ones generate, as heights.

    A root is held by twice its inner products with the given normals, in exact integers of `Ring`, so two
    roots are the same only when they are the same, and dependent normals need no care.

    Parameters
    ----------
    matrix : n by n list of Fraction
        Dihedral angles as fractions of π with denominators up to 5, not both 4 and 5; diagonal 1.
    most : int
        Stop once there are more mirrors than this: the set is then infinite by the bound for its rank.

    Returns
    -------
    heights : ndarray, shape (2N, n)
        Inner products with the given normals; both signs of every root.
    words : tuple of str
        For each root the word of mirrors that carries a given one onto it, e.g. ``"ab:c"`` for ab(c).
    complete : bool
        False when `most` was exceeded.
    """
    n = len(matrix)
    ring = Ring(any(matrix[i][j].denominator == 5 for i in range(n) for j in range(i)))
    gram2 = np.array(
        [
            [(2, 0) if i == j else tuple(-v for v in ring.two_cosine(matrix[i][j])) for j in range(n)]
            for i in range(n)
        ],
        dtype=np.int64,
    )
    seen: dict[bytes, str] = {}
    found: list[NDArray[np.int64]] = []
    fresh: list[str] = []

    def meet(root: NDArray[np.int64], word: str) -> None:
        key = root.tobytes()
        if key not in seen and (-root).tobytes() not in seen:
            seen[key] = word
            found.append(root)
            fresh.append(word)

    for root, letter in zip(gram2, LETTERS[:n], strict=True):
        meet(root, f":{letter}")
    while fresh and len(found) <= most:
        words, fresh = fresh, []
        stack = np.stack(found[-len(words) :])
        images = stack[:, None] - ring.times(stack[:, :, None, :], gram2[None])
        for row, word in zip(images, words, strict=True):
            for image, letter in zip(row, LETTERS[:n], strict=True):
                meet(image, letter + word)
    complete = not fresh and len(found) <= most
    heights = ring.real(np.stack(found)) / 2
    return np.concatenate([heights, -heights]), tuple(seen.values()) * 2, complete
