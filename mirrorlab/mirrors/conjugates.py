"""Is a sum of principal minors of a Gram matrix exactly zero?

Each such sum e_k of 2G is a polynomial in the 2cos(kπ/m) with whole coefficients, so an algebraic integer of the
real cyclotomic field. All its conjugates are below 2^20, so its norm is below 2^(20·degree). Modulo a prime
p > 2^21 that splits completely, the conjugates are whole numbers modulo p; when every one of them is zero, p
divides the norm as often as the degree, which is too often for any number but zero.
"""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

CONJUGATE_BITS = 20
"""Each conjugate of a coefficient of det(λ + 2G), up to eight mirrors, is at most 2^20 (Hadamard's bound:
at most C(8, k) minors of size k, each at most (2√k)^k)."""

MOST_DENOMINATOR = 1 << 18
"""Largest common denominator of the angles whose conjugates are all looked at (then about ten seconds)."""

CHUNK = 4096
"""Conjugates looked at in one go; most numbers that are not zero show it in the first."""


def vanishing(matrix: list[list[Fraction]], common: int) -> tuple[bool, ...]:
    """Which of e_1 … e_n, the sums of the principal minors of each size, are exactly zero.

    Parameters
    ----------
    matrix : n by n list of Fraction
        Dihedral angles as fractions of π; the diagonal is not read.
    common : int
        A common denominator of theirs, up to `MOST_DENOMINATOR`.
    """
    n = len(matrix)
    turn = 2 * common
    prime = _splitting_prime(turn)
    powers = _powers(_root_of_unity(turn, prime), turn, prime)
    two_cosines = (powers + powers[-np.arange(turn) % turn]) % prime
    steps = np.array([[int(matrix[i][j] * common) if i != j else 0 for j in range(n)] for i in range(n)])
    units = np.flatnonzero(np.gcd(np.arange(common + 1), turn) == 1)
    zero = np.ones(n, dtype=bool)
    for start in range(0, len(units), CHUNK):
        turned = units[start : start + CHUNK, None, None] * steps % turn
        minors = _minor_sums((-two_cosines[turned]) % prime, prime)
        zero &= (minors == 0).all(axis=0)
        if not zero.any():
            break
    return tuple(bool(gone) for gone in zero)


def _minor_sums(two_gram: NDArray[np.int64], prime: int) -> NDArray[np.int64]:
    """e_1 … e_n modulo a prime of a stack of matrices, shape (N, n) (Faddeev–LeVerrier); the diagonal is 2."""
    n = two_gram.shape[1]
    diagonal = np.arange(n)
    two_gram[:, diagonal, diagonal] = 2
    power = two_gram.copy()
    result = np.empty((len(two_gram), n), dtype=np.int64)
    for k in range(1, n + 1):
        trace = power[:, diagonal, diagonal].sum(axis=1) % prime
        result[:, k - 1] = trace * pow(k, -1, prime) % prime
        shifted = -power
        shifted[:, diagonal, diagonal] += result[:, k - 1, None]
        shifted %= prime
        power = np.zeros_like(power)
        for t in range(
            n
        ):  # one product at a time: two numbers below 2^31 just fit, a sum of products would not
            power += two_gram[:, :, t, None] * shifted[:, None, t, :] % prime
        power %= prime
    return result


def _splitting_prime(turn: int) -> int:
    """The smallest prime above 2^21 that is 1 modulo `turn`."""
    candidate = (1 << (CONJUGATE_BITS + 1)) // turn * turn + 1
    while True:
        candidate += turn
        if candidate % 2 and all(candidate % q for q in range(3, math.isqrt(candidate) + 1, 2)):
            return candidate


def _root_of_unity(turn: int, prime: int) -> int:
    """A number whose order modulo the prime is exactly `turn`."""
    factors = [
        q for q in range(2, turn + 1) if turn % q == 0 and all(q % r for r in range(2, math.isqrt(q) + 1))
    ]
    for base in range(2, prime):
        root = pow(base, (prime - 1) // turn, prime)
        if all(pow(root, turn // q, prime) != 1 for q in factors):
            return root
    msg = f"no root of unity of order {turn} modulo {prime}"
    raise AssertionError(msg)


def _powers(root: int, count: int, prime: int) -> NDArray[np.int64]:
    """root^0 … root^(count − 1) modulo a prime."""
    result = np.ones(1, dtype=np.int64)
    while len(result) < count:
        result = np.concatenate([result, result * pow(root, len(result), prime) % prime])
    return result[:count]
