"""Exact decisions about Gram matrices whose angles are fractions of π.

Two kinds of question are decided here without tolerance: is a Gram matrix positive definite, singular
or indefinite; and which mirrors do reflections generate. The first uses that the coefficients of the
characteristic polynomial of 2G are algebraic integers: one that is smaller than the product of its
conjugates allows is zero. The second works in the ring Z[√2] or Z[φ], which holds every 2cos(kπ/m) with
m up to 5.
"""

from __future__ import annotations

import math
from fractions import Fraction
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

CONJUGATE_BITS = 20
"""Each conjugate of a coefficient of det(λ + 2G), up to eight mirrors, is below 2^20 (Hadamard's bound:
at most C(8, k) minors of size k, each at most (2√k)^k)."""

CERTAIN = 1e-9
"""Eigenvalues of a double-precision Gram matrix of up to 8 mirrors err by less than 1e-14; beyond this
distance from zero their sign is certain without exact arithmetic."""

MOST_BITS = 1 << 16
"""Working precision above which a coefficient that is still zero is taken as zero (never reached by angles
whose common denominator is below about 6,000)."""

Row = tuple[Fraction | None, ...]


@lru_cache(maxsize=64)
def _pi_scaled(bits: int) -> int:
    """π·2^bits, by Machin's formula."""

    def arctan_inverse(x: int) -> int:
        term = total = (1 << (bits + 16)) // x
        k, square = 1, x * x
        while term:
            term //= -square
            k += 2
            total += term // k
        return total

    return (4 * (4 * arctan_inverse(5) - arctan_inverse(239))) >> 16


@lru_cache(maxsize=4096)
def cosine_scaled(fraction: Fraction, bits: int) -> int:
    """cos(fraction·π)·2^bits, rounded; the error is below 4 units."""
    work, halvings = bits + 64, 16
    x = (_pi_scaled(work) * fraction.numerator // fraction.denominator) >> halvings
    square = (x * x) >> work
    term, total, k = 1 << work, 1 << work, 0
    while term:
        k += 2
        term = -((term * square) >> work) // (k * (k - 1))
        total += term
        if abs(term) <= 1:
            break
    for _ in range(halvings):
        total = ((total * total) >> (work - 1)) - (1 << work)
    return total >> (work - bits)


def _degree(fractions: list[Fraction]) -> int:
    """Degree over Q of the real field that holds all 2cos(k/m·π)."""
    n = 2 * math.lcm(*(f.denominator for f in fractions)) if fractions else 1
    phi, rest, p = n, n, 2
    while p * p <= rest:
        if rest % p == 0:
            phi -= phi // p
            while rest % p == 0:
                rest //= p
        p += 1
    if rest > 1:
        phi -= phi // rest
    return max(1, phi // 2)


def _coefficients(matrix: list[list[Fraction]], bits: int) -> list[int]:
    """e_1 … e_n of 2G scaled by 2^bits (Faddeev–LeVerrier)."""
    n = len(matrix)
    two_g = [
        [(2 << bits) if i == j else -2 * cosine_scaled(matrix[i][j], bits) for j in range(n)]
        for i in range(n)
    ]
    power = [row[:] for row in two_g]
    result: list[int] = []
    for k in range(1, n + 1):
        e = sum(power[i][i] for i in range(n)) // k
        result.append(e)
        shifted = [[(e if i == j else 0) - power[i][j] for j in range(n)] for i in range(n)]
        power = [
            [sum(two_g[i][t] * shifted[t][j] for t in range(n)) >> bits for j in range(n)] for i in range(n)
        ]
    return result


def coefficient_signs(matrix: list[list[Fraction]]) -> tuple[int, ...]:
    """Signs of e_1 … e_n, the sums of the principal minors of G of each size, decided exactly.

    Parameters
    ----------
    matrix : n by n list of Fraction
        Dihedral angles as fractions of π; the diagonal is not read.

    Notes
    -----
    G is positive semidefinite exactly when no sign is negative, and its rank is then the largest k with
    a positive sign.
    """
    n = len(matrix)
    degree = _degree([matrix[i][j] for i in range(n) for j in range(i)])
    enough = CONJUGATE_BITS * degree + 64
    bits = 128
    while True:
        bits = min(bits, enough, MOST_BITS)
        slack = (
            1 << 100
        )  # rounding grows at most 16-fold a step (the row sums of 2G) over 8 steps: below 2^70 units
        values = _coefficients(matrix, bits + 128)
        if bits in (enough, MOST_BITS) or all(abs(value) > slack for value in values):
            return tuple(0 if abs(value) <= slack else (1 if value > 0 else -1) for value in values)
        bits *= 4


def definiteness(gram: NDArray[np.float64], fractions: list[list[Fraction | None]]) -> tuple[int, bool]:
    """Rank of a Gram matrix, and whether it is positive semidefinite.

    Where an angle has no closing fraction the decision is made on the double-precision eigenvalues with
    `CERTAIN` as the limit; otherwise it is exact.
    """
    eigenvalues = np.linalg.eigvalsh(gram)
    if eigenvalues[0] > CERTAIN:
        return len(gram), True
    if eigenvalues[0] < -CERTAIN:
        return int((np.abs(eigenvalues) > CERTAIN).sum()), False
    known = [[f for f in row if f is not None] for row in fractions]
    if any(len(row) != len(gram) for row in known) or len(gram) > 8:
        return int((eigenvalues > CERTAIN).sum()), True
    signs = coefficient_signs(known)
    rank = max((k for k, sign in enumerate(signs, 1) if sign), default=0)
    return rank, min(signs) >= 0


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
    letters = "abcdefghijklmnopqrstuvwxyz" * 20
    seen: dict[bytes, str] = {}
    found: list[NDArray[np.int64]] = []
    frontier: list[tuple[NDArray[np.int64], str]] = []
    for i in range(n):
        for root in (gram2[i], -gram2[i]):
            if root.tobytes() not in seen:
                seen[root.tobytes()] = f":{letters[i]}"
                found.append(root)
                frontier.append((root, f":{letters[i]}"))
    while frontier and len(found) <= 2 * most:
        stack = np.stack([root for root, _ in frontier])
        fresh: list[tuple[NDArray[np.int64], str]] = []
        for j in range(n):
            images = stack - ring.times(stack[:, j, None, :], gram2[j][None])
            for image, (_, word) in zip(images, frontier, strict=True):
                key = image.tobytes()
                if key not in seen:
                    seen[key] = letters[j] + word
                    found.append(image)
                    fresh.append((image, letters[j] + word))
        frontier = fresh
    complete = not frontier and len(found) <= 2 * most
    return ring.real(np.stack(found)) / 2, tuple(seen.values()), complete
