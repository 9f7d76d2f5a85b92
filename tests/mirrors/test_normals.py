"""Normals from Gram matrices, and given normals settled onto the angles that were read."""

from __future__ import annotations

from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement, ArrangementError
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


def test_angles_that_do_not_belong_together():
    table = [[F(1), F(1, 3), F(1, 3)], [F(1, 3), F(1), F(1, 4)], [F(1, 3), F(1, 4), F(1)]]
    gram = -np.cos(np.pi * np.array(table, dtype=float))
    with pytest.raises(ArrangementError, match="no mirrors have all these angles at once"):
        settle(np.eye(3), gram, table)


@pytest.mark.parametrize("lean", [2e-5, 1e-5])
def test_planes_that_lean_a_little_out_of_a_line_are_not_taken_for_a_fan(lean):
    given = [[1, 0, 0], [-0.5, 3**0.5 / 2, 0], [0.5, 3**0.5 / 2, lean]]
    with pytest.raises(ArrangementError, match="give more digits or a smaller tolerance"):
        Arrangement.from_normals(given)
    assert Arrangement.from_normals(given, tolerance=1e-12).finding().kind == "open"


def test_an_unread_angle_leaves_normals_as_given():
    given = np.array([[1.0, 0], [np.cos(1.0), np.sin(1.0)]])
    assert settle(given, given @ given.T + 1e-10, [[F(1), None], [None, F(1)]]) is given


@pytest.mark.parametrize("m", [7, 90, 360])
def test_settling_narrow_wedges(m):
    exact = Arrangement.from_angles([F(1, m), "90", "90"])
    rng = np.random.default_rng(m)
    rough = exact.normals + 2e-10 * rng.normal(size=(3, 3))
    arrangement = Arrangement.from_normals(rough)
    assert arrangement.finding().order == 4 * m
    assert np.abs(arrangement.normals @ arrangement.normals.T - exact.gram).max() < 1e-14
