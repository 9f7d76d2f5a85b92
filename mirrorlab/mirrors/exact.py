"""Exact decisions about Gram matrices whose angles are fractions of π: definite, singular or indefinite.

Three mirrors are decided in whole numbers of quarter turns. For more, the sums of principal minors are computed
to as many digits as their signs need; one that could be zero is tested at all its conjugates modulo a prime, where
zero is exact.
"""

from __future__ import annotations

import math
from fractions import Fraction
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.conjugates import MOST_DENOMINATOR, vanishing

CERTAIN = 1e-9
"""Eigenvalues of a double-precision Gram matrix of up to 8 mirrors err by less than 1e-14; beyond this
distance from zero their sign is certain without exact arithmetic."""

FIRST_BITS = 128
"""Working precision at which minors are looked at first."""

MOST_BITS = 1 << 13
"""Working precision above which a minor that still shows no digit is taken as zero. Only angles whose common
denominator is above `MOST_DENOMINATOR` come here: for the others zero is proved."""


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
        Dihedral angles as fractions of π, n up to 8; the diagonal is not read.

    Notes
    -----
    G is positive semidefinite exactly when no sign is negative, and its rank is then the largest k with
    a positive sign.
    """
    n = len(matrix)
    common = math.lcm(1, *(matrix[i][j].denominator for i in range(n) for j in range(i)))
    zero: tuple[bool, ...] = (False,) * n
    bits, asked = FIRST_BITS, False
    while True:
        # Each step multiplies rounding by at most 144 (eight products of 2G, nine terms) and there are eight
        # steps: below 2^90 units.
        slack = 1 << 100
        values = _coefficients(matrix, bits + 128)
        unclear = [not gone and abs(value) <= slack for value, gone in zip(values, zero, strict=True)]
        if any(unclear) and not asked and common <= MOST_DENOMINATOR:
            zero, asked = vanishing(matrix, common), True
            unclear = [small and not gone for small, gone in zip(unclear, zero, strict=True)]
        if not any(unclear) or (bits >= MOST_BITS and not asked):
            return tuple(
                0 if gone or abs(value) <= slack else (1 if value > 0 else -1)
                for value, gone in zip(values, zero, strict=True)
            )
        bits *= 4


def definiteness(gram: NDArray[np.float64], fractions: list[list[Fraction | None]]) -> tuple[int, bool]:
    """Rank of a Gram matrix, and whether it is positive semidefinite.

    Where an angle between three mirrors or more has no closing fraction the decision is made on the
    double-precision eigenvalues with `CERTAIN` as the limit; otherwise it is exact.
    """
    if len(gram) == 2:
        return (1 if gram[0, 1] == -1 else 2), True
    known = [[f for f in row if f is not None] for row in fractions]
    readable = all(len(row) == len(gram) for row in known)
    if readable and len(gram) == 3:
        return triangle_rank(known[0][1], known[0][2], known[1][2])
    eigenvalues = np.linalg.eigvalsh(gram)
    if eigenvalues[0] > CERTAIN:
        return len(gram), True
    if eigenvalues[0] < -CERTAIN:
        return int((np.abs(eigenvalues) > CERTAIN).sum()), False
    if not readable or len(gram) > 8:
        return int((eigenvalues > CERTAIN).sum()), True
    signs = coefficient_signs(known)
    rank = max((k for k, sign in enumerate(signs, 1) if sign), default=0)
    return rank, min(signs) >= 0


def triangle_rank(a: Fraction, b: Fraction, c: Fraction) -> tuple[int, bool]:
    """`definiteness` for three mirrors, from their angles as fractions of π.

    With s half the sum, det G = −4 cos s · cos(s − a) · cos(s − b) · cos(s − c) (the determinant of a spherical
    triangle's angles), so whole numbers of quarter turns decide its sign.
    """
    s = (a + b + c) / 2
    sign = -math.prod(_cosine_sign(x) for x in (s, s - a, s - b, s - c))
    if sign:
        return 3, sign > 0
    return 2, True  # never 1: three mirrors parallel to one another cannot all face one another


def _cosine_sign(fraction: Fraction) -> int:
    """Sign of cos(fraction·π)."""
    turn = abs(fraction) % 2
    if turn.denominator == 2:
        return 0
    return 1 if turn < Fraction(1, 2) or turn > Fraction(3, 2) else -1
