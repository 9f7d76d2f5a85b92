"""Chambers between the typed mirrors."""

from __future__ import annotations

import itertools
import time
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.counting import chambers_in_region, share_of_space

INSIDE = np.sqrt([2.0, 3.0, 5.0, 7.0, 11.0, 13.0, 17.0, 19.0]) - 0.7


def irreducible_picks(slow, name, count, seed, size=None):
    """Arrangements of mirrors of a group, sides chosen at random, that make the whole of it."""
    whole = Arrangement.from_family(name).finding().group
    rng = np.random.default_rng(seed)
    size = size or whole.rank
    found = []
    while len(found) < count:
        chosen = rng.choice(len(whole.mirrors), size, replace=False)
        typed = whole.mirrors[chosen] * rng.choice([-1, 1], size)[:, None]
        if np.linalg.svd(typed)[1][-1] < 1e-6:
            continue
        made = slow.mirrors(typed, 200)
        if len(made) == len(whole.mirrors):
            found.append(typed)
    return whole, found


def fractions_of(typed):
    size = len(typed)
    table = [[F(1)] * size for _ in range(size)]
    for i, j in itertools.combinations(range(size), 2):
        angle = np.arccos(np.clip(-(typed[i] @ typed[j]), -1, 1)) / np.pi
        table[i][j] = table[j][i] = F(float(angle)).limit_denominator(60)
    return table


@pytest.mark.parametrize(
    ("name", "count"), [("A3", 12), ("B3", 12), ("H3", 12), ("A4", 8), ("B4", 8), ("D4", 8), ("F4", 6)]
)
def test_against_all_elements(name, count, slow):
    whole, picks = irreducible_picks(slow, name, count, seed=11)
    group = slow.elements(whole.simple, 2000)
    roots = np.concatenate([whole.mirrors, -whole.mirrors])
    for typed in picks:
        expected = slow.chambers_between(typed, group, INSIDE[: whole.dimension])
        share = share_of_space(fractions_of(typed), typed, roots)
        assert share * whole.order == expected
        assert chambers_in_region(fractions_of(typed), typed, roots) == expected


def test_against_all_elements_of_the_largest_group_of_four_mirrors(slow):
    whole, picks = irreducible_picks(slow, "H4", 3, seed=2)
    matrices, _ = whole.elements()
    assert len({slow.key(m) for m in matrices}) == 14_400
    roots = np.concatenate([whole.mirrors, -whole.mirrors])
    for typed in picks:
        expected = slow.chambers_between(typed, matrices, INSIDE[:4])
        assert share_of_space(fractions_of(typed), typed, roots) * whole.order == expected


@pytest.mark.parametrize(("name", "symmetries"), [("A5", 2), ("B5", 1), ("D5", 2), ("E6", 2)])
def test_against_tuples_of_roots(name, symmetries, slow):
    whole, picks = irreducible_picks(slow, name, 5, seed=4)
    roots = np.concatenate([whole.mirrors, -whole.mirrors])
    small = 0
    for typed in picks:
        found = share_of_space(fractions_of(typed), typed, roots) * whole.order
        if found < 3000:  # the slow twin lists them one by one
            small += 1
            assert slow.count_tuples(typed, roots, symmetries) == found
    assert small


def test_three_mirrors_by_area_and_by_tuples(slow):
    whole, picks = irreducible_picks(slow, "H3", 20, seed=8)
    roots = np.concatenate([whole.mirrors, -whole.mirrors])
    for typed in picks:
        table = fractions_of(typed)
        area = (table[0][1] + table[0][2] + table[1][2] - 1) * whole.order / 4
        assert slow.count_tuples(typed, roots, 1) == area == chambers_in_region(table, typed, roots)


def test_shares_of_all_regions_of_four_mirrors_make_up_space(slow):
    whole, picks = irreducible_picks(slow, "B4", 2, seed=3)
    roots = np.concatenate([whole.mirrors, -whole.mirrors])
    for typed in picks:
        signs = itertools.product([1, -1], repeat=4)
        sides = [typed * np.array(sign)[:, None] for sign in signs]
        assert sum(share_of_space(fractions_of(side), side, roots) for side in sides) == 1


def test_a_wide_region_of_the_largest_group_is_counted_at_once():
    whole = Arrangement.from_family("E8").finding().group
    roots = np.concatenate([whole.mirrors, -whole.mirrors])
    rng = np.random.default_rng(6)
    picks = []
    while len(picks) < 4:
        typed = roots[rng.choice(len(roots), 8, replace=False)]
        if np.linalg.svd(typed)[1][-1] > 1e-6:
            picks.append(typed)
    start = time.process_time()
    counts = [round(whole.order * share_of_space(fractions_of(t), t, roots)) for t in picks]
    assert time.process_time() - start < 4
    assert max(counts) > 1_000_000
    # Each share, by chance: a hundred thousand random directions.
    directions = rng.normal(size=(100_000, 8))
    for typed, count in zip(picks, counts, strict=True):
        seen = (directions @ typed.T > 0).all(axis=1).mean()
        share = count / whole.order
        assert abs(seen - share) < 5 * np.sqrt(share / 100_000) + 1e-5


@pytest.mark.parametrize("name", ["A4", "D5", "H4", "E8"])
def test_a_chamber_holds_itself(name):
    arrangement = Arrangement.from_family(name)
    group = arrangement.finding().group
    roots = np.concatenate([group.mirrors, -group.mirrors])
    assert share_of_space(arrangement.fractions, arrangement.normals, roots) == F(1, group.order)


def cells_by_sampling(typed, samples=60_000):
    """Cells that all generated mirrors cut a bounded region into, in the plane or in space.

    The mirrors are written out as (normal, distance) within reach of the region; each cell has its own signs.
    """
    d = typed.shape[1]
    null = np.linalg.svd(typed.T)[2][-1]
    null = np.abs(null)
    distances = np.zeros(len(typed))
    distances[-1] = -1.0  # all but the last through the origin; the last one unit off, facing it
    corners = []
    for k in range(len(typed)):
        rows = [i for i in range(len(typed)) if i != k]
        corners.append(np.linalg.solve(typed[rows], distances[rows]))
    corners = np.array(corners)
    assert (corners @ typed.T - distances > -1e-9).all()
    reach = 1.01 * np.abs(corners).max() * d
    planes = [(n, c) for n, c in zip(typed, distances, strict=True)]
    known = {tuple(np.round([*n, c], 6) + 0.0) for n, c in planes}
    at = 0
    while at < len(planes):
        n, c = planes[at]
        for m, e in planes[: len(typed)]:
            normal, distance = n - 2 * (n @ m) * m, c - 2 * (n @ m) * e
            sign = np.sign(normal[np.abs(normal) > 1e-9][0])
            key = tuple(np.round([*(sign * normal), sign * distance], 6) + 0.0)
            other = tuple(np.round([*(-sign * normal), -sign * distance], 6) + 0.0)
            if abs(distance) < 3 * reach and key not in known and other not in known:
                known.add(key)
                planes.append((sign * normal, sign * distance))
        at += 1
    rng = np.random.default_rng(0)
    weights = rng.dirichlet(np.ones(len(corners)), samples)
    points = weights @ corners
    normals = np.array([n for n, _ in planes])
    offsets = np.array([c for _, c in planes])
    crossing = ((corners @ normals.T - offsets).min(axis=0) < -1e-9) & (
        (corners @ normals.T - offsets).max(axis=0) > 1e-9
    )
    return len(np.unique(points @ normals[crossing].T > offsets[crossing], axis=0))


CELLS = {
    "equilateral": [F(1, 3)] * 3,
    "half a square": [F(1, 2), F(1, 4), F(1, 4)],
    "half an equilateral": [F(1, 2), F(1, 3), F(1, 6)],
    "two halves, wide": [F(2, 3), F(1, 6), F(1, 6)],
    "cubic": [F(1, 4), F(1, 2), F(1, 2), F(1, 3), F(1, 2), F(1, 4)],
    "two cubic": [F(1, 2), F(1, 3), F(1, 2), F(1, 3), F(1, 2), F(1, 4)],
    "four cubic": [F(1, 3), F(1, 2), F(1, 3), F(1, 3), F(1, 2), F(1, 3)],
    "three round an edge": [F(1, 2), F(1, 4), F(1, 2), F(1, 2), F(1, 4), F(1, 3)],
}


@pytest.mark.parametrize("name", CELLS)
def test_cells_that_fill_space_against_sampling(name, slow):
    angles = CELLS[name]
    size = 3 if len(angles) == 3 else 4
    finding = Arrangement.from_angles(angles).finding()
    assert finding.kind == "tube"
    assert finding.tube.chambers == cells_by_sampling(slow.normals(angles, size))
