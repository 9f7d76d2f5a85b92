"""Definite, singular or indefinite: decided exactly."""

from __future__ import annotations

import itertools
import time
from fractions import Fraction as F

import mpmath
import numpy as np
import pytest
import sympy
from hypothesis import given
from hypothesis import strategies as st

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.exact import coefficient_signs, cosine_scaled, definiteness, triangle_rank

PAIRS = (1, 3, 6, 10, 15, 21, 28)


def size_of(count):
    return 2 + PAIRS.index(count)


def signs_by_sympy(table):
    """Signs of the sums of principal minors, in exact algebraic arithmetic."""
    n = len(table)
    matrix = sympy.Matrix(
        n, n, lambda i, j: 1 if i == j else -sympy.cos(sympy.pi * sympy.Rational(str(table[i][j])))
    )
    result = []
    for k in range(1, n + 1):
        total = sum(
            matrix.extract(list(rows), list(rows)).det() for rows in itertools.combinations(range(n), k)
        )
        gone = sympy.simplify(sympy.expand(total)) == 0
        result.append(0 if gone else int(sympy.sign(sympy.N(total, 60))))
    return tuple(result)


def signs_by_digits(table, digits=900):
    """The same to many digits, and zero below what the conjugates allow for small denominators."""
    n = len(table)
    with mpmath.workdps(digits):
        matrix = mpmath.matrix(n, n)
        for i in range(n):
            for j in range(n):
                f = table[i][j]
                matrix[i, j] = 1 if i == j else -mpmath.cos(mpmath.pi * f.numerator / f.denominator)
        result = []
        for k in range(1, n + 1):
            total = mpmath.mpf(0)
            for rows in itertools.combinations(range(n), k):
                inner = mpmath.matrix(k, k)
                for i, j in itertools.product(range(k), range(k)):
                    inner[i, j] = matrix[rows[i], rows[j]]
                total += determinant(inner)
            tiny = mpmath.mpf(10) ** (20 - digits)
            result.append(0 if abs(total) < tiny else int(mpmath.sign(total)))
    return tuple(result)


def determinant(matrix):
    """By permutations: no pivot to stumble over when it is singular."""
    n = matrix.rows
    total = mpmath.mpf(0)
    for order in itertools.permutations(range(n)):
        sign = 1
        for i, j in itertools.combinations(range(n), 2):
            sign = -sign if order[i] > order[j] else sign
        product = mpmath.mpf(sign)
        for i in range(n):
            product *= matrix[i, order[i]]
        total += product
    return total


@pytest.mark.parametrize("bits", [64, 256, 2048])
@pytest.mark.parametrize(
    "fraction", [F(0), F(1, 3), F(1, 2), F(2, 5), F(359, 360), F(17, 323), F(1, 100_000)]
)
def test_cosine_is_right_to_its_last_units(fraction, bits):
    with mpmath.workprec(bits + 64):
        true = mpmath.cos(mpmath.pi * fraction.numerator / fraction.denominator) * mpmath.mpf(2) ** bits
        assert abs(cosine_scaled(fraction, bits) - true) < 4


SINGULAR = {
    "equilateral": [F(1, 3)] * 3,
    "half a square": [F(1, 2), F(1, 4), F(1, 4)],
    "a side turned over": [F(1, 3), F(2, 3), F(2, 3)],
    "rectangle": [F(1, 2), F(0), F(1, 2), F(1, 2), F(0), F(1, 2)],
    "cell of the cubic lattice": [F(1, 4), F(1, 2), F(1, 2), F(1, 3), F(1, 2), F(1, 4)],
    "ring of four": [F(1, 3), F(1, 2), F(1, 3), F(1, 3), F(1, 2), F(1, 3)],
    "open at one side": [F(1, 3), F(1, 3), F(1, 2), F(1, 3), F(1, 2), F(1, 2)],
}


@pytest.mark.parametrize("name", SINGULAR)
def test_singular_matrices_against_algebra(name, slow):
    fractions = SINGULAR[name]
    table = slow.table(fractions, size_of(len(fractions)))
    signs = coefficient_signs(table)
    assert signs == signs_by_sympy(table)
    assert signs[-1] == 0
    assert min(signs) == 0


@pytest.mark.parametrize(
    "fractions", [[F(1, 5), F(2, 5), F(2, 5)], [F(1, 3), F(1, 4), F(1, 5)], [F(2, 5), F(1, 2), F(1, 3)]]
)
def test_small_matrices_against_algebra(fractions, slow):
    table = slow.table(fractions, 3)
    assert coefficient_signs(table) == signs_by_sympy(table)


@given(st.data())
def test_random_matrices_against_many_digits(data):
    size = data.draw(st.integers(2, 4))
    pairs = size * (size - 1) // 2
    angle = st.sampled_from(sorted({F(k, m) for m in (1, 2, 3, 4, 5, 6, 8, 10, 12) for k in range(m)}))
    fractions = data.draw(st.lists(angle, min_size=pairs, max_size=pairs))
    filled = [[F(1)] * size for _ in range(size)]
    for f, (i, j) in zip(fractions, itertools.combinations(range(size), 2), strict=True):
        filled[i][j] = filled[j][i] = f
    assert coefficient_signs(filled) == signs_by_digits(filled, 300)


@pytest.mark.parametrize(("p", "q"), [(359, 360), (353, 359), (18 * 19, 17 * 19)])
def test_sums_of_exactly_180_and_a_hair_off(p, q, slow):
    rest = 1 - F(1, p) - F(1, q)
    hair = F(1, p * q)
    assert coefficient_signs(slow.table([F(1, p), F(1, q), rest], 3)) == (1, 1, 0)
    assert coefficient_signs(slow.table([F(1, p), F(1, q), rest + hair], 3)) == (1, 1, 1)
    assert coefficient_signs(slow.table([F(1, p), F(1, q), rest - hair], 3)) == (1, 1, -1)
    assert triangle_rank(F(1, p), F(1, q), rest) == (2, True)
    assert triangle_rank(F(1, p), F(1, q), rest + hair) == (3, True)
    assert triangle_rank(F(1, p), F(1, q), rest - hair)[1] is False


@pytest.mark.parametrize("x", [F(7, 40), F(73, 360), F(101, 359), F(1000, 5003)])
def test_four_mirrors_singular_for_every_x_and_a_hair_off(x, slow):
    """A tetrahedron of M. J. M. Hill (1896, from memory) has angles x, x, 180° − 2x, 60°, 90°, 90° for every x."""
    angles = [1 - 2 * x, x, F(1, 2), F(1, 2), x, F(1, 3)]
    assert abs(np.linalg.eigvalsh(slow.gram(angles, 4))[0]) < 1e-12
    assert coefficient_signs(slow.table(angles, 4)) == (1, 1, 1, 0)
    hair = F(1, 360 * 359)
    for k in (0, 1, 4, 5):
        off = [f + hair if i == k else f for i, f in enumerate(angles)]
        least = float(np.linalg.eigvalsh(slow.gram(off, 4))[0])
        assert abs(least) > 1e-8
        assert coefficient_signs(slow.table(off, 4))[-1] == np.sign(least)


def test_mirrors_through_one_line_with_a_large_common_denominator(slow):
    lines = [F(1, p) for p in (3, 5, 7, 11, 13)]
    angles = [1 - abs(u - v) for u, v in itertools.combinations(lines, 2)]
    start = time.process_time()
    assert coefficient_signs(slow.table(angles, 5)) == (1, 1, 0, 0, 0)
    assert time.process_time() - start < 5


def test_a_common_denominator_too_large_for_proof_still_answers(slow):
    lines = [F(1, p) for p in (3, 5, 7, 11, 13, 16, 17, 19)]
    angles = [1 - abs(u - v) for u, v in itertools.combinations(lines, 2)]
    start = time.process_time()
    assert coefficient_signs(slow.table(angles, 8)) == (1, 1, 0, 0, 0, 0, 0, 0)
    assert time.process_time() - start < 5


fraction = st.integers(1, 60).flatmap(lambda m: st.integers(0, m - 1).map(lambda k: F(k, m)))


@given(fraction, fraction, fraction)
def test_three_mirrors_by_quarter_turns_or_by_digits(a, b, c):
    filled = [[F(1), a, b], [a, F(1), c], [b, c, F(1)]]
    signs = coefficient_signs(filled)
    rank, semidefinite = triangle_rank(a, b, c)
    assert semidefinite == (min(signs) >= 0)
    if semidefinite:
        assert rank == max(k for k, sign in enumerate(signs, 1) if sign)


def test_definiteness_without_a_fraction_goes_by_eigenvalues():
    inner = [[F(1), None, F(1, 2)], [None, F(1), F(1, 2)], [F(1, 2), F(1, 2), F(1)]]
    square = np.eye(3)
    square[0, 1] = square[1, 0] = -np.cos(1.0)
    assert definiteness(square, inner) == (3, True)
    bent = np.full((3, 3), -0.9) + 1.9 * np.eye(3)
    assert definiteness(bent, [[None] * 3] * 3)[1] is False


@pytest.mark.parametrize("degrees", ["0.0010000001", "0.4123(1)", "179.9990001"])
def test_two_mirrors_that_are_nearly_parallel_are_not_parallel(degrees):
    finding = Arrangement.from_angles([degrees]).finding()
    assert (finding.kind, finding.rank) == ("open", 2)
    normals = Arrangement.from_angles([degrees]).normals
    assert np.allclose(np.linalg.norm(normals, axis=1), 1, atol=1e-12)
    assert definiteness(np.array([[1.0, -1.0], [-1.0, 1.0]]), [[F(1), F(0)], [F(0), F(1)]]) == (1, True)


def test_definiteness_of_more_than_eight_mirrors():
    turn = np.arange(9) * np.pi / 9
    normals = np.stack([np.cos(turn), np.sin(turn)], axis=1)
    table = [[F(1) if i == j else 1 - abs(F(i - j, 9)) for j in range(9)] for i in range(9)]
    assert definiteness(normals @ normals.T, table) == (2, True)
