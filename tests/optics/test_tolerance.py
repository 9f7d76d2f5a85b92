"""Left-over turns and seams, against the mirrors' own products and against plane geometry."""

from __future__ import annotations

import json
import math
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import mirrorlab as ml
from mirrorlab import optics
from mirrorlab.optics.intent import Intent
from mirrorlab.optics.loops import corner_loops, coxeter_loop, parted
from mirrorlab.optics.shapes import corner_normals
from mirrorlab.optics.tolerance import chord, seam_turns, turn_for

SMALL = st.floats(-0.5, 0.5)


def corner_intent(*orders: int) -> Intent:
    return Intent("corner", ("ab", "ac", "bc"), tuple(Fraction(1, m) for m in orders))


def reflections(normals):
    return np.eye(len(normals[0])) - 2 * np.einsum("ni,nj->nij", normals, normals)


def turn_of(matrix) -> float:
    return 2 * math.asin(min(1.0, np.linalg.norm(matrix - np.eye(len(matrix))) / (2 * math.sqrt(2))))


@given(st.integers(2, 40), SMALL)
def test_the_turn_around_an_edge_is_the_product_of_its_reflections(m: int, off: float) -> None:
    """(ab) m times turns by 2m times the angle; for 180°/m that is nothing, else 2m times the error."""
    intent = Intent("wedge", ("ab",), (Fraction(1, m),))
    off = off / m
    found = optics.tolerance_of(intent, [math.pi / m + math.radians(off)], 500).edges[0]
    theta = math.pi / m + math.radians(off)
    first, second = reflections(np.array([[1.0, 0], [-math.cos(theta), math.sin(theta)]]))
    home = np.linalg.matrix_power(first @ second, m)
    assert abs(found.leftover) == pytest.approx(
        math.degrees(abs(math.atan2(home[1, 0], home[0, 0]))), abs=1e-6
    )
    assert abs(found.seam) == pytest.approx(float(np.linalg.norm(home @ [500, 0] - [500, 0])), abs=1e-6)
    assert found.sectors == 2 * m


@given(st.floats(0.001, 50), st.floats(100, 5000))
def test_backwards_is_the_inverse_of_forwards(limit: float, distance: float) -> None:
    intent = Intent("wedge", ("ab",), (Fraction(1, 6),))
    allowed = optics.tolerance_of(intent, [math.pi / 6], distance, limit).edges[0].allowed
    assert allowed is not None
    again = optics.tolerance_of(intent, [math.pi / 6 + math.radians(allowed)], distance)
    assert again.seam == pytest.approx(limit)
    assert chord(turn_for(limit, distance), distance) == pytest.approx(limit)


@pytest.mark.parametrize("orders", [(2, 2, 2), (2, 2, 5), (2, 3, 3), (2, 3, 4), (2, 3, 5), (4, 3, 2)])
def test_exact_corners_leave_nothing_over(orders: tuple[int, int, int]) -> None:
    intent = corner_intent(*orders)
    found = optics.tolerance_of(intent, intent.radians, 1000, 1)
    assert found.whole is not None
    assert found.seam == 0
    assert found.whole.rounds > 0
    assert found.allowed_together is not None
    assert found.allowed_together <= min(edge.allowed for edge in found.edges if edge.allowed is not None)


@settings(max_examples=40, deadline=None)
@given(st.sampled_from([(2, 2, 2), (2, 3, 3), (2, 3, 4), (2, 3, 5)]), SMALL, SMALL, SMALL)
def test_first_order_agrees_with_the_exact_products(orders, ab: float, ac: float, bc: float) -> None:
    """The forms from which chance and allowances are drawn, against whole products of reflections."""
    intent = corner_intent(*orders)
    errors = np.radians([ab, ac, bc]) / 10
    actual = tuple(a + e for a, e in zip(intent.radians, errors, strict=True))
    exact = parted(actual, intent.radians)[0]
    first = float(corner_loops(intent.radians).turns(errors).max())
    assert first == pytest.approx(exact, rel=0.03, abs=1e-9)


@settings(max_examples=25, deadline=None)
@given(st.sampled_from([(2, 2, 2), (2, 3, 4), (2, 3, 5)]), SMALL, SMALL, SMALL)
def test_the_parted_words_are_what_they_say(orders, ab: float, ac: float, bc: float) -> None:
    intent = corner_intent(*orders)
    actual = tuple(a + math.radians(e) for a, e in zip(intent.radians, (ab, ac, bc), strict=True))
    turn, one, two = parted(actual, intent.radians)
    if not one:
        return
    mirrors = dict(zip("abc", reflections(corner_normals(actual)), strict=True))
    meant = dict(zip("abc", reflections(corner_normals(intent.radians)), strict=True))

    def product(table, word):
        result = np.eye(3)
        for letter in word:
            result = result @ table[letter]
        return result

    assert np.allclose(product(meant, one), product(meant, two)), "one image when the angles are right"
    assert turn_of(product(mirrors, one) @ product(mirrors, two).T) == pytest.approx(turn, abs=1e-9)
    _, rounds, left = coxeter_loop(actual, intent.radians)
    assert left == pytest.approx(turn_of(np.linalg.matrix_power(product(mirrors, "abc"), rounds)), abs=1e-9)


def test_going_around_the_corner_is_worse_than_around_an_edge() -> None:
    intent = corner_intent(2, 3, 5)
    found = optics.tolerance_of(intent, [a + math.radians(0.05) for a in intent.radians])
    assert found.whole is not None
    assert found.whole.worst > max(abs(edge.leftover) for edge in found.edges)
    assert found.whole.worst >= found.whole.leftover - 1e-9


@pytest.mark.parametrize(
    ("typed", "kind", "fractions", "errors"),
    [
        (["60"], "wedge", [(1, 3)], [0]),
        (["59.5"], "wedge", [(1, 3)], [-0.5]),
        (["72"], "wedge", [(2, 5)], [0]),
        (["90", "60", "36.3"], "corner", [(1, 2), (1, 3), (1, 5)], [0, 0, 0.3]),
        (["90.2", "59.9", "45"], "corner", [(1, 2), (1, 3), (1, 4)], [0.2, -0.1, 0]),
        (["90", "90", "59.8"], "corner", [(1, 2), (1, 2), (1, 3)], [0, 0, -0.2]),
        (["72", "60", "60"], "corner", [(2, 5), (1, 3), (1, 3)], [0, 0, 0]),
        (["60", "60", "60"], "tube", [(1, 3)] * 3, [0, 0, 0]),
        (["90", "45", "45"], "tube", [(1, 2), (1, 4), (1, 4)], [0, 0, 0]),
        (["91", "30", "59"], "tube", [(1, 2), (1, 6), (1, 3)], [1, 0, -1]),
        (["90", "0", "90", "90", "0", "90"], "tube", [(1, 2)] * 4, [0, 0, 0, 0]),
    ],
)
def test_what_was_meant(typed: list[str], kind: str, fractions, errors) -> None:
    intent, actual = optics.intent_of(ml.Arrangement.from_angles(typed))
    assert intent.kind == kind
    assert intent.fractions == tuple(Fraction(*f) for f in fractions)
    found = np.degrees(np.array(actual) - np.array(intent.radians))
    assert found == pytest.approx(errors, abs=1e-9)


def test_what_no_planes_make_is_said_so() -> None:
    with pytest.raises(optics.AssemblyError, match="no planes have these angles"):
        optics.intent_of(ml.Arrangement.from_angles(["50", "50", "50"]))


def test_star_angles_have_a_seam_even_when_exact() -> None:
    intent, actual = optics.intent_of(ml.Arrangement.from_angles(["72"]))
    edge = optics.tolerance_of(intent, actual).edges[0]
    assert edge.always
    assert edge.sectors == 10
    assert edge.leftover == 0


def test_what_is_no_error_is_refused() -> None:
    intent = corner_intent(2, 3, 4)
    for wrong in ([1.0, 1.0], [math.pi / 2, math.pi / 3, math.pi / 3], [math.pi / 2, math.pi / 3, math.nan]):
        with pytest.raises(optics.AssemblyError) as caught:
            optics.tolerance_of(intent, wrong)
        assert caught.value.field == "actual"
    with pytest.raises(optics.AssemblyError, match="distance"):
        optics.tolerance_of(intent, intent.radians, 0)
    with pytest.raises(optics.AssemblyError):
        optics.intent_of(ml.Arrangement.from_angles(["90"] * 6))


def test_chance_is_repeatable_and_counts_everything() -> None:
    intent = corner_intent(2, 3, 4)
    one, two, other = (optics.seam_chances(intent, 0.05, seed=seed) for seed in (7, 7, 8))
    assert np.array_equal(one.seams, two.seams)
    assert not np.array_equal(one.seams, other.seams)
    assert one.counts.sum() == len(one.seams) == one.draws
    assert one.edges[0] == 0
    assert one.edges[-1] == pytest.approx(one.seams[-1])
    assert (np.diff(one.seams) >= 0).all()
    assert one.share_below(one.percentile(95)) == pytest.approx(0.95, abs=1e-3)


def test_chance_of_one_wedge_is_the_normal_law() -> None:
    """One angle: the seam is 2m times a normal error, so 68.27 and 95.45 of 100 lie within one and two sigma."""
    intent = Intent("wedge", ("ab",), (Fraction(1, 6),))
    found = optics.seam_chances(intent, 0.01, draws=100_000, distance=1000)
    sigma = chord(12 * math.radians(0.01), 1000)
    for sigmas in (1, 2, 3):
        assert found.share_below(sigmas * sigma) == pytest.approx(math.erf(sigmas / math.sqrt(2)), abs=0.006)
    flat = optics.seam_chances(intent, 0.01, "uniform", draws=100_000)
    assert flat.share_below(chord(6 * math.radians(0.01), 1000)) == pytest.approx(0.5, abs=0.006)
    assert flat.seams[-1] <= chord(12 * math.radians(0.01), 1000) * (1 + 1e-12)


def test_no_draw_within_the_allowance_is_over_the_limit() -> None:
    for intent in (corner_intent(2, 3, 4), Intent("tube", ("ab", "ac", "bc"), (Fraction(1, 3),) * 3)):
        allowed = optics.tolerance_of(intent, intent.radians, 1000, 0.5).allowed_together
        assert allowed is not None
        found = optics.seam_chances(intent, allowed, "uniform", draws=20_000)
        # What a tube's errors add up to is shared out, so one angle's may grow by a third.
        assert found.seams[-1] <= 0.5 * (1 if intent.kind == "corner" else 4 / 3) * (1 + 1e-9)
    ends = np.array([[1.0, 1, 1], [1, 1, -1], [1, -1, 1], [1, -1, -1]]) * math.radians(1)
    assert seam_turns(corner_intent(2, 3, 4), ends).shape == (4,)


@pytest.mark.parametrize(
    ("field", "ask"),
    [
        ("size", {"size": 0}),
        ("size", {"size": math.nan}),
        ("spread", {"size": 0.1, "spread": "round"}),
        ("draws", {"size": 0.1, "draws": 0}),
        ("distance", {"size": 0.1, "distance": "far"}),
    ],
)
def test_what_cannot_be_drawn_is_refused(field: str, ask: dict[str, object]) -> None:
    with pytest.raises(optics.AssemblyError) as caught:
        optics.seam_chances(corner_intent(2, 2, 2), **ask)
    assert caught.value.field == field


def test_to_dict_is_plain_json() -> None:
    intent, actual = optics.intent_of(ml.Arrangement.from_angles(["90.1", "90", "90"]))
    found = optics.tolerance_of(intent, actual, "1 m", 1)
    assert json.loads(json.dumps(found.to_dict()))["return_error"]["worst_degrees"] > 0
    chances = json.loads(json.dumps(optics.seam_chances(intent, 0.1).to_dict()))
    assert sum(chances["histogram"]["counts"]) == chances["draws"]
