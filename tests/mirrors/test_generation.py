"""Mirrors written out in exact integers."""

from __future__ import annotations

import math
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors.families import family_angles, parse_family
from mirrorlab.mirrors.generation import LETTERS, Ring, generate_roots

FAMILIES = ["A3", "A4", "A8", "B3", "B5", "D4", "D6", "F4", "H3", "H4", "E6", "E7"]


@pytest.mark.parametrize("with_five", [False, True])
def test_ring_holds_the_cosines(with_five):
    ring = Ring(with_five)
    for m in (1, 2, 3, 5 if with_five else 4):
        for k in range(m + 1):
            a, b = ring.two_cosine(F(k, m))
            assert a + b * ring.tau == pytest.approx(2 * math.cos(math.pi * k / m), abs=1e-12)


@pytest.mark.parametrize("with_five", [False, True])
def test_ring_multiplies(with_five):
    ring = Ring(with_five)
    rng = np.random.default_rng(3)
    x, y = rng.integers(-9, 10, (2, 40, 2))
    assert np.allclose(ring.real(ring.times(x, y)), ring.real(x) * ring.real(y))


@pytest.mark.parametrize("name", FAMILIES)
def test_the_same_mirrors_as_by_definition(name, slow):
    angles = family_angles(parse_family(name))
    size = parse_family(name)[0].rank
    normals = slow.normals(angles, size)
    heights, words, complete = generate_roots(slow.table(angles, size), 120)
    assert complete
    roots = heights @ np.linalg.pinv(normals).T
    assert np.allclose(np.linalg.norm(roots, axis=1), 1)
    expected = slow.mirrors(normals, 200)
    both = np.concatenate([expected, -expected])
    assert len(roots) == len(both)
    apart = np.abs(roots[:, None, :] - both[None]).max(axis=2)
    assert (np.sort(apart, axis=1)[:, 0] < 1e-9).all()
    assert len(set(apart.argmin(axis=1))) == len(both)
    for root, word in zip(roots, words, strict=True):
        before, last = word.split(":")
        image = slow.apply_word(before, LETTERS, normals, normals[LETTERS.index(last)])
        assert min(np.abs(image - root).max(), np.abs(image + root).max()) < 1e-9


def test_dependent_mirrors_need_no_care(slow):
    # 60/60/60: three mirrors round one line, when moved there.
    heights, _, complete = generate_roots(slow.table([F(1, 3)] * 3, 3), 15)
    assert complete
    assert len(heights) == 6


@pytest.mark.parametrize(
    "angles", [[F(2, 5), F(1, 3), F(1, 3)], [F(1, 2), F(2, 5), F(2, 5)], [F(2, 3), F(1, 4), F(1, 4)]]
)
def test_stops_beyond_the_bound(angles, slow):
    closed = slow.mirrors(slow.normals(angles, 3), 100)
    heights, words, complete = generate_roots(slow.table(angles, 3), 15)
    assert complete == (closed is not None and len(closed) <= 15)
    if not complete:
        assert len(heights) > 30
        assert len(words) == len(heights)
