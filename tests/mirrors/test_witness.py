"""Two mirrors that stand too close."""

from __future__ import annotations

import itertools
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.witness import too_close


def named(word, arrangement, slow):
    before, _, last = word.partition("(")
    if not last:
        before, last = "", word
    normal = arrangement.normals[arrangement.letters.index(last.rstrip(")"))]
    return slow.apply_word(before, arrangement.letters, arrangement.normals, normal)


def test_every_open_triple_shows_two_mirrors_below_36_degrees(slow):
    seen = 0
    for triple in itertools.combinations_with_replacement(slow.fractions(6), 3):
        arrangement = Arrangement.from_angles(triple)
        finding = arrangement.finding()
        if finding.kind != "open":
            continue
        seen += 1
        first, second, apart = finding.evidence.witness
        u, v = named(first, arrangement, slow), named(second, arrangement, slow)
        found = np.degrees(np.arcsin(np.linalg.norm(u - (u @ v) * v)))
        assert found == pytest.approx(apart, abs=1e-6)
        assert 0.01 < apart < 35.99
    assert seen > 50


def test_finite_groups_have_none():
    for name in ("A3", "B3", "H3", "F4", "H4", "E6"):
        arrangement = Arrangement.from_family(name)
        assert too_close(arrangement.normals, list(arrangement.letters)) is None


@pytest.mark.parametrize("fraction", [F(1, 7), F(2, 7), F(3, 7), F(5, 12), F(89, 360), F(271, 360)])
def test_two_mirrors_alone_make_a_close_pair(fraction, slow):
    arrangement = Arrangement.from_angles([F(1, 2), F(3, 5), fraction])
    finding = arrangement.finding()
    assert finding.kind == "open"
    first, second, apart = finding.evidence.witness
    assert apart == pytest.approx(180 / fraction.denominator)
    u, v = named(first, arrangement, slow), named(second, arrangement, slow)
    assert np.degrees(np.arcsin(np.linalg.norm(u - (u @ v) * v))) == pytest.approx(apart, abs=1e-6)
    letters = sum(c.isalpha() for c in second)
    assert letters <= fraction.denominator // 2 + 1  # round the shorter way
