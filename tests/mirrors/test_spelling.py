"""Walls that were not typed, named by the typed mirror that reflections carry onto them."""

from __future__ import annotations

from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.spelling import LONGEST_WORD

ARRANGEMENTS = [
    ["90", "60", "72"],
    ["144", "144", "144"],
    ["2pi/5"],
    ["3pi/7"],
    ["60", "60", "120"],
    ["120", "90", "90", "60", "90", "60"],
    [F(101, 360)],
]


@pytest.mark.parametrize("angles", ARRANGEMENTS, ids=str)
def test_words_lead_to_the_walls(angles, slow):
    arrangement = Arrangement.from_angles(angles)
    finding = arrangement.finding()
    group = finding.group
    assert len(finding.wall_words) == group.rank
    for wall, letter, word in zip(group.simple, group.letters, finding.wall_words, strict=True):
        before, _, last = word.partition("(")
        if not last:
            assert word == letter
            before, last = "", word
        else:
            assert letter not in arrangement.letters
        normal = arrangement.normals[arrangement.letters.index(last.rstrip(")"))]
        image = slow.apply_word(before, arrangement.letters, arrangement.normals, normal)
        assert min(np.abs(image - wall).max(), np.abs(image + wall).max()) < 1e-9


def test_shortest_words():
    # a at 0°, b at 72°, the wall between at 36°: a(b) is at 108° and b(a) at 144°, so it takes one more reflection.
    finding = Arrangement.from_angles(["2pi/5"]).finding()
    assert finding.wall_words == ("a", "ab(a)")


def test_a_word_too_long_to_follow_is_left_out():
    finding = Arrangement.from_angles([F(499, 1001)]).finding()
    assert finding.kind == "open"  # finer than angles are read
    from mirrorlab.angles import AngleSettings

    fine = Arrangement.from_angles([F(499, 1001)], AngleSettings(max_denominator=2000)).finding()
    words = fine.wall_words
    assert words[0] in ("a", "b")
    assert words[1] == "" or len(words[1]) <= LONGEST_WORD + 3
