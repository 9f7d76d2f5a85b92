"""The nearest sets of angles that close."""

from __future__ import annotations

import functools
import itertools
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.tiling_tubes import tubes_of
from mirrorlab.mirrors.usable import DENOMINATORS, NARROWEST, usable_near


@pytest.fixture(scope="module")
def closing(slow):
    """Every triple of kπ/m, m up to 5, in every order, that closes by definition."""
    found = set()
    for triple in itertools.combinations_with_replacement(slow.fractions(5), 3):
        if (
            np.linalg.eigvalsh(slow.gram(triple, 3))[0] > 1e-9
            and slow.mirrors(slow.normals(triple, 3), 40) is not None
        ):
            found |= set(itertools.permutations(triple))
    assert len(found) > 100
    return found


def changes(candidate, typed):
    return [abs(float(180 * f) - t) for f, t in zip(candidate, typed, strict=True)]


def with_two_right_angles(typed):
    """Two right angles leave the third free: its own value, or a usable one beside it."""
    return {
        tuple(f if i == k else F(1, 2) for i in range(3))
        for k, value in enumerate(typed)
        for f in (F(value, 180), *usable_near(value))
    }


@functools.cache
def tubes_that_tile():
    """Every triple of kπ/m, m up to 12, that adds up to a flat triangle and whose images tile by its finding."""
    fractions = sorted({F(k, m) for m in range(2, 13) for k in range(1, m)})
    found = []
    for a, b in itertools.product(fractions, repeat=2):
        if (c := 1 - a - b) > 0 and c.denominator <= 12:
            tube = Arrangement.from_angles([a, b, c]).finding().tube
            if tube.tiling in ("once", "subdivided"):
                found.append((a, b, c))
    return tuple(found)


def test_the_tubes_that_tile_are_all_listed():
    assert sorted(tubes_of(3)) == sorted(tubes_that_tile())
    for angles in tubes_of(4):
        tube = Arrangement.from_angles(angles).finding().tube
        assert (tube.tiling, tube.plane_group) == ("once", "p2mm")


TYPED = [
    (61, 60, 90),
    (90, 60, 40),
    (50, 50, 50),
    (59, 61, 89),
    (100, 100, 100),
    (10, 20, 30),
    (144, 100, 93),
    (90, 60, 72),
    (60, 60, 60),
    (33, 45, 91),
    (170, 170, 170),
]


@pytest.mark.parametrize("typed", TYPED, ids=str)
def test_three_mirrors_against_all_triples(typed, closing):
    finding = Arrangement.from_angles([str(t) for t in typed]).finding()
    every = closing | with_two_right_angles(typed) | set(tubes_that_tile())
    candidates = [c for c in every if max(changes(c, typed)) > 1e-9]
    expected = sorted(round(max(changes(c, typed)), 9) for c in candidates)[:6]
    assert [round(s.largest_change, 9) for s in finding.suggestions] == expected


@pytest.mark.parametrize("typed", TYPED, ids=str)
def test_each_really_closes_and_says_so(typed, slow):
    finding = Arrangement.from_angles([str(t) for t in typed]).finding()
    assert 0 < len(finding.suggestions) <= 6
    assert len({s.angles for s in finding.suggestions}) == len(finding.suggestions)
    for suggestion in finding.suggestions:
        found = Arrangement.from_angles(suggestion.texts()).finding()
        assert (found.kind, found.families, found.order) == (
            suggestion.kind,
            suggestion.families,
            suggestion.order,
        )
        if suggestion.kind == "tube":
            assert found.tube.chambers == suggestion.chambers_between
            assert suggestion.name == f"{found.tube.plane_group} (tube)"
            continue
        assert found.chambers_between == suggestion.chambers_between
        made = slow.mirrors(slow.normals(suggestion.angles, 3), 400)
        assert len(made) == found.mirror_count
        for change, angle, value in zip(suggestion.changes, suggestion.angles, typed, strict=True):
            assert change == pytest.approx(float(180 * angle) - value)


def test_ranked_by_largest_change_then_closed_first():
    for typed in TYPED:
        found = Arrangement.from_angles([str(t) for t in typed]).finding().suggestions
        keys = [(round(s.largest_change, 9), s.kind != "closed") for s in found]
        assert keys == sorted(keys)


def test_none_when_nothing_is_wrong():
    assert Arrangement.from_angles(["90", "60", "45"]).finding().suggestions == ()
    assert Arrangement.from_angles([]).finding().suggestions == ()
    assert Arrangement.from_normals([[1, 0, 0], [1, 2, 3]]).finding().suggestions == ()


def test_two_mirrors():
    found = Arrangement.from_angles(["59.1234567"]).finding().suggestions
    assert all(s.kind.startswith("closed") for s in found)
    assert F(1, 3) in [s.angles[0] for s in found]
    star = Arrangement.from_angles(["72"]).finding().suggestions
    assert [s.angles[0] for s in star if s.kind == "closed"] == [F(1, 3), F(1, 2)]
    assert all(s.kind.startswith("closed") for s in Arrangement.from_angles(["0"]).finding().suggestions)
    # The nearest simple fraction is 0, parallel mirrors, which do not close.
    narrow = Arrangement.from_angles(["0.2"]).finding().suggestions
    assert narrow
    assert all(s.kind.startswith("closed") for s in narrow)


MESSY = [
    ["0"], ["0.2"], ["2.7123456"], ["7.3"], ["29.7"], ["59.8"], ["60.1234567"], ["133.3"], ["178.9"],
    ["0", "90", "90"], ["0", "59", "61"], ["90", "90", "0.4"], ["90", "89.7", "12.9"], ["90", "90", "59.8"],
    ["90.2", "90", "133.1"], ["0", "0", "0"], ["88", "90", "51"], ["0.3", "90", "90", "90", "90", "90"],
]  # fmt: skip


@pytest.mark.parametrize("typed", MESSY, ids=" ".join)
def test_a_changed_angle_becomes_one_that_is_of_use(typed):
    found = Arrangement.from_angles(typed).finding().suggestions
    assert found
    for suggestion in found:
        for pair, change, f in zip(suggestion.pair_names, suggestion.changes, suggestion.angles, strict=True):
            whole_part = f.numerator == 1 and 180 * f >= NARROWEST
            assert change == pytest.approx(0, abs=1e-9) or f.denominator in DENOMINATORS or whole_part, pair


@pytest.mark.parametrize(
    ("typed", "first"),
    [
        (["59.8"], "60°"),
        (["90", "90", "60.1234567"], "90° 90° 60°"),
        (["7.3"], "7.2°"),
        (["0", "90", "90"], "15° 90° 90°"),
        (["2.7123456"], "3°"),
        (["59", "60", "60"], "60° 60° 60°"),
        (["90", "46", "45"], "90° 45° 45°"),
        (["90", "60", "30.5"], "90° 60° 30°"),
        (["90", "1", "89", "90", "0", "91"], "90° 0° 90° 90° 0° 90°"),
        (["51"], "51.428571°"),
        (
            ["88", "90", "7"],
            "90° 90° 6.923077°",
        ),  # 7° would cut the region up, and no angle changes more for it
        (["88", "90", "51"], "90° 90° 51°"),  # an angle that stays as typed may be any
    ],
)
def test_what_a_person_meant_comes_first(typed, first):
    assert " ".join(Arrangement.from_angles(typed).finding().suggestions[0].texts("degrees")) == first


@pytest.mark.parametrize(
    "typed",
    ["90 0 90 90 0 90", "0 90 90 90 90 0", "90 60 60 60 60 90", "90 90 90 90 90 0", "50 0 90 89 0 90"],
)
def test_nothing_is_suggested_that_needs_more_dimensions_than_a_room_has(typed):
    assert Arrangement.from_angles(typed.split()).finding().suggestions == ()


@pytest.mark.parametrize("value", [0, 0.4, 1.6, 2, 7.3, 29.7, 45, 51, 61, 90, 100, 133.3, 176.5])
def test_usable_angles_by_trial(value):
    def beside(options):
        below = [f for f in options if 180 * f <= value]
        above = [f for f in options if 180 * f >= value]
        return {*([max(below)] if below else []), *([min(above)] if above else [])}

    every = {F(k, m) for m in DENOMINATORS for k in range(1, m)}
    fans = [F(1, m) for m in range(2, 61)]
    expected = beside(every) | beside([f for f in every if f.denominator <= 6])
    if value > 1.5:
        expected |= beside(fans)
    assert set(usable_near(value)) == expected
    assert len(usable_near(value)) <= 6


def nearest_of_four(typed):
    """Smallest (largest, total) change over every graph of 180°/m on four mirrors."""
    options = [
        sorted({F(1, m) for m in (2, 3, 4, 5, max(2, int(180 // t)), max(2, -int(-180 // t)))}) for t in typed
    ]
    grids = np.meshgrid(*[np.array([float(f) for f in o]) for o in options], indexing="ij")
    table = np.stack([g.ravel() for g in grids], axis=1)
    gram = np.broadcast_to(np.eye(4), (len(table), 4, 4)).copy()
    for k, (i, j) in enumerate(itertools.combinations(range(4), 2)):
        gram[:, i, j] = gram[:, j, i] = -np.cos(np.pi * table[:, k])
    closed = table[np.linalg.eigvalsh(gram)[:, 0] > 1e-9]
    moved = np.abs(180 * closed - typed)
    keys = np.round(np.stack([moved.max(axis=1), moved.sum(axis=1)], axis=1), 6)
    return min(map(tuple, keys.tolist()))


@pytest.mark.parametrize("seed", range(6))
def test_four_mirrors_against_all_graphs(seed):
    rng = np.random.default_rng(seed)
    typed = [int(v) for v in rng.choice([90, 90, 90, 60, 61, 47, 72, 80, 34], 6)]
    finding = Arrangement.from_angles(typed).finding()
    if finding.kind == "closed":
        pytest.fail("the sample must not close by itself")
    best = finding.suggestions[0]
    assert best.kind == "closed"
    assert (round(best.largest_change, 6), round(sum(map(abs, best.changes)), 6)) <= nearest_of_four(
        np.array(typed)
    )


def test_obtuse_angles_may_stay_obtuse():
    found = Arrangement.from_angles(["120", "90", "90", "61", "90", "60"]).finding().suggestions
    assert found[0].largest_change == pytest.approx(1)
    assert found[0].angles[0] == F(2, 3)
    assert found[0].families == ("A4",)
    assert found[0].kind == "closed-subdivided"


@pytest.mark.parametrize("size", [5, 6, 7, 8])
def test_many_mirrors(size):
    rng = np.random.default_rng(size)
    typed = [90] * (size * (size - 1) // 2)
    for k in range(size - 1):
        typed[sum(size - 1 - i for i in range(k))] = int(rng.choice([59, 61, 62]))
    finding = Arrangement.from_angles(typed).finding()
    best = finding.suggestions[0]
    assert best.families == (f"A{size}",)
    assert best.largest_change <= 2
    assert set(best.changed_pairs) <= set(Arrangement.from_angles(typed).pair_names)


def test_supplement_of_a_tube():
    finding = Arrangement.from_angles(["60", "60", "60"]).finding()
    assert [s.degrees_of(s.changed_pairs[0]) for s in finding.supplements] == ["120°"] * 3
    assert {s.changed_pairs[0] for s in finding.supplements} == {"ab", "ac", "bc"}
    assert all(s.families == ("A3",) and s.kind == "closed-subdivided" for s in finding.supplements)
    assert "With ab read as 120° it closes as -43m (A3)." in finding.sentence


@pytest.mark.parametrize("typed", [t for t in TYPED if t != (90, 60, 72)], ids=str)
def test_supplements_against_trial(typed):
    finding = Arrangement.from_angles([str(t) for t in typed]).finding()
    expected = set()
    for k, value in enumerate(typed):
        turned = [180 - v if i == k else v for i, v in enumerate(typed)]
        if value != 90 and Arrangement.from_angles(turned).finding().kind.startswith("closed"):
            expected.add(tuple(F(v, 180) for v in turned))
    assert {s.angles for s in finding.supplements} == expected


def test_suggestion_as_plain_values():
    finding = Arrangement.from_angles(["60", "60", "60"]).finding()
    plain = finding.supplements[0].to_dict()
    assert plain["degrees"][0] == pytest.approx(120)
    assert plain["angles"][0] == "2pi/3"
    assert plain["largest_change"] == pytest.approx(60)
    assert plain["symbol"] == "-43m (A3)"
