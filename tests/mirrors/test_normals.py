"""Normals from Gram matrices, and given normals settled onto the angles that were read."""

from __future__ import annotations

from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.normals import normals_from_gram, settle


@pytest.mark.parametrize(("rank", "size"), [(1, 2), (2, 3), (2, 5), (3, 4), (5, 8)])
def test_rows_with_given_products(rank, size):
    rng = np.random.default_rng(rank * 10 + size)
    rows = rng.normal(size=(size, rank))
    rows /= np.linalg.norm(rows, axis=1, keepdims=True)
    found = normals_from_gram(rows @ rows.T, rank)
    assert found.shape == (size, rank)
    assert np.abs(found @ found.T - rows @ rows.T).max() < 1e-9


def test_settling_turns_little_and_makes_the_angles_exact():
    exact = Arrangement.from_family("H3")
    rng = np.random.default_rng(4)
    turn = np.linalg.qr(rng.normal(size=(3, 3)))[0]
    rough = exact.normals @ turn + 1e-7 * rng.normal(size=(3, 3))
    rough /= np.linalg.norm(rough, axis=1, keepdims=True)
    settled = settle(rough, exact.gram, exact.fractions)
    assert np.abs(settled @ settled.T - exact.gram).max() < 1e-14
    assert np.abs(settled - rough).max() < 1e-6


def test_settling_keeps_dependent_normals_dependent():
    given = np.round([[1, 0, 0], [-0.5, 0.8660254037, 0], [0.5, 0.8660254037, 0]], 7)
    arrangement = Arrangement.from_normals(given, tolerance=1e-6)
    assert arrangement.finding().rank == 2
    assert arrangement.finding().families == ("A2",)
    assert np.linalg.svd(arrangement.normals)[1][2] < 1e-15


def test_clean_normals_stay_as_they_are():
    given = np.array([[1.0, 0, 0], [0, 0.6, 0.8]])
    assert settle(given, given @ given.T, [[F(1), F(1, 2)], [F(1, 2), F(1)]]) is given


def test_angles_that_do_not_belong_together_leave_normals_as_given():
    given = np.eye(3)
    table = [[F(1), F(1, 3), F(1, 3)], [F(1, 3), F(1), F(1, 4)], [F(1, 3), F(1, 4), F(1)]]
    gram = -np.cos(np.pi * np.array(table, dtype=float))
    assert settle(given, gram, table) is given
    unread = [[F(1), None], [None, F(1)]]
    assert settle(given[:2], np.array([[1.0, 0.1], [0.1, 1.0]]), unread) is not None
