"""Part by part: does it close, and what breaks the bound."""

from __future__ import annotations

from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement, TooLarge
from mirrorlab.mirrors.closure import MOST_THROUGH_A_LINE, decide_part, split


def parts(angles):
    arrangement = Arrangement.from_angles(angles)
    return arrangement, arrangement.finding().parts


def test_split_by_right_angles():
    table = Arrangement.from_angles(["90", "60", "90", "90", "45", "90"]).fractions
    assert split(table) == [[0, 2], [1, 3]]


def mirror_named(word, arrangement, slow):
    """The normal of a mirror written like "ab(c)": c seen in b, and that in a."""
    before, _, last = word.partition("(")
    if not last:
        before, last = "", word
    normal = arrangement.normals[arrangement.letters.index(last.rstrip(")"))]
    return slow.apply_word(before, arrangement.letters, arrangement.normals, normal)


OPEN = {
    "close pair": ["90", "60", "31"],
    "close pair, 30": ["120", "60", "30"],
    "close pair, star": ["90", "60", F(3, 7)],
    "close pair of a large star": ["90", "60", F(101, 360)],
    "too many": ["72", "72", "90"],
    "45 and 36": ["90", "45", "72"],
    "45 and 36 beside": ["36", "60", "135"],
    "45 and 36 of four": ["90", "72", "90", "60", "90", "45"],
    "too many of four": ["90", "72", "90", "72", "90", "72"],
    "too many of five": ["60", "90", "90", "72", "90", "72", "90", "60", "72", "90"],
}


@pytest.mark.parametrize("name", OPEN)
def test_open_shows_two_mirrors_that_really_stand_so_close(name, slow):
    arrangement = Arrangement.from_angles(OPEN[name])
    finding = arrangement.finding()
    assert finding.kind == "open"
    first, second, apart = finding.evidence.witness
    u, v = (mirror_named(word, arrangement, slow) for word in (first, second))
    found = slow.degrees(u, v)
    assert min(found, 180 - found) == pytest.approx(apart, abs=1e-6)
    assert apart > 1e-6


@pytest.mark.parametrize("name", ["too many", "too many of four"])
def test_too_many_are_more_than_the_bound(name, slow):
    arrangement = Arrangement.from_angles(OPEN[name])
    most = {3: 15, 4: 60}[arrangement.size]
    assert f"more than {most} mirrors" in arrangement.finding().evidence.broken[0]
    assert slow.mirrors(arrangement.normals, most) is None


@pytest.mark.parametrize("name", [name for name in OPEN if name.startswith("45")])
def test_both_45_and_36_never_close(name, slow):
    arrangement = Arrangement.from_angles(OPEN[name])
    finding = arrangement.finding()
    assert "45°" in finding.evidence.broken[0]
    assert "36°" in finding.evidence.broken[0]
    assert finding.evidence.witness[2] < 36
    assert slow.mirrors(arrangement.normals, 60) is None


def test_an_angle_without_fraction_is_named():
    finding = Arrangement.from_angles(["90", "59.123456", "90"]).finding()
    assert finding.kind == "open"
    assert "ac has no closing fraction" in finding.evidence.broken[0]


def test_parts_keep_their_members_and_ranks():
    _, (first, second) = parts(["90", "60", "90", "90", "45", "90"])
    assert (first.members, first.rank, first.finite, first.singular) == ((0, 2), 2, True, False)
    assert (second.members, second.rank) == ((1, 3), 2)
    assert len(first.roots) == 6
    assert len(second.roots) == 8
    _, (tube,) = parts(["60", "60", "60"])
    assert (tube.rank, tube.singular, tube.finite) == (2, True, True)


def test_parallel_mirrors_are_one_direction():
    _, (part,) = parts(["0"])
    assert (part.rank, part.singular, len(part.roots)) == (1, True, 2)


def test_unbuildable_part_without_normals():
    arrangement = Arrangement.from_angles(["60", "60", "45"])
    part = decide_part([0, 1, 2], arrangement.gram, arrangement.fractions, None, "abc")
    assert not part.semidefinite
    assert part.roots is None


def test_mirrors_through_one_line_beyond_the_limit():
    turn = [np.pi / p for p in (3, 5, 7, 11, 13, 17)]
    arrangement = Arrangement.from_normals([[np.cos(t), np.sin(t)] for t in turn])
    with pytest.raises(TooLarge, match="mirrors through one line") as error:
        arrangement.finding()
    assert error.value.size == 3 * 5 * 7 * 11 * 13 * 17 > MOST_THROUGH_A_LINE
    assert error.value.memory == error.value.size * 2 * 8 * 2
