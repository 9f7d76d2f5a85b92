"""Zero is proved at all conjugates modulo a prime."""

from __future__ import annotations

import itertools
from fractions import Fraction as F

import numpy as np
import pytest
import sympy

from mirrorlab.mirrors import conjugates
from mirrorlab.mirrors.conjugates import vanishing


@pytest.mark.parametrize("turn", [2, 4, 60, 720, 2 * 359 * 360])
def test_prime_and_root_of_unity(turn):
    prime = conjugates._splitting_prime(turn)
    assert sympy.isprime(prime)
    assert prime % turn == 1
    assert 2 ** (conjugates.CONJUGATE_BITS + 1) < prime < 2**31
    root = conjugates._root_of_unity(turn, prime)
    assert sympy.n_order(root, prime) == turn
    powers = conjugates._powers(root, turn, prime)
    assert powers.tolist()[:50] == [pow(root, k, prime) for k in range(min(turn, 50))]
    assert len(set(powers.tolist())) == turn


def test_minor_sums_of_whole_matrices():
    rng = np.random.default_rng(7)
    prime = 2097169
    assert sympy.isprime(prime)
    for n in (1, 2, 5, 8):
        stack = rng.integers(-9, 10, (3, n, n))
        stack[:, np.arange(n), np.arange(n)] = 2
        found = conjugates._minor_sums(stack % prime, prime)
        for matrix, row in zip(stack, found, strict=True):
            coefficients = sympy.Matrix(matrix.tolist()).charpoly().all_coeffs()[1:]
            assert row.tolist() == [int((-1) ** (k + 1) * c) % prime for k, c in enumerate(coefficients)]


def test_coefficient_bound_holds():
    # Hadamard: a k by k minor of 2G is at most (2√k)^k, and there are C(8, k).
    from math import comb, sqrt

    assert max(comb(8, k) * (2 * sqrt(k)) ** k for k in range(1, 9)) <= 2**conjugates.CONJUGATE_BITS * (
        1 + 1e-12
    )


def test_zero_and_not_zero(slow):
    assert vanishing(slow.table([F(1, 3)] * 3, 3), 3) == (False, False, True)
    assert vanishing(slow.table([F(1, 3)] * 3, 3), 360) == (False, False, True)
    assert vanishing(slow.table([F(1, 3), F(1, 3), F(1, 2)], 3), 6) == (False, False, False)
    assert vanishing(slow.table([F(0)], 2), 1) == (False, True)


def test_a_number_that_is_zero_at_some_places_only_is_not_zero(slow):
    # 60°, 72° and 48° sum to 180°; replaced by conjugates such as 60°, 144°, 24° they do not all.
    angles = [F(1, 3), F(2, 5), F(4, 15)]
    assert vanishing(slow.table(angles, 3), 15) == (False, False, True)
    near = [F(1, 3), F(2, 5), F(1, 4)]
    assert vanishing(slow.table(near, 3), 60) == (False, False, False)


def test_every_chunk_is_looked_at(slow, monkeypatch):
    # Zero at the first conjugates alone must not be taken for zero.
    monkeypatch.setattr(conjugates, "CHUNK", 1)
    for m in (7, 9, 11):
        for angles in itertools.product([F(k, m) for k in range(1, m)], repeat=3):
            flat = sum(angles) == 1 or any(2 * x + 1 == sum(angles) for x in angles)
            assert vanishing(slow.table(angles, 3), m)[2] == flat
