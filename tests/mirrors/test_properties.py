"""Whatever is typed: a finding or a clean error, soon, and the same however mirrors are named."""

from __future__ import annotations

import itertools
import json
import time
from fractions import Fraction as F

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

from mirrorlab.angles import AngleError
from mirrorlab.mirrors import Arrangement, ArrangementError, TooLarge

LONG = 10.0
"""Seconds of processor time that no input may take; the usual is some milliseconds."""

KINDS = {"closed", "closed-subdivided", "open", "tube", "unbuildable"}

simple = st.sampled_from(sorted({F(k, m) for m in (2, 3, 4, 5) for k in range(1, m)}))
likely = st.one_of(st.just(F(1, 2)), st.just(F(1, 2)), simple)
any_fraction = st.integers(1, 360).flatmap(lambda m: st.integers(0, m - 1).map(lambda k: F(k, m)))
typed_text = st.one_of(
    st.integers(0, 179).map(str),
    st.floats(0, 179.9).map(lambda v: f"{v:.4f}"),
    st.floats(0.1, 179).map(lambda v: f"{v:.1f}(3)"),
    any_fraction.map(lambda f: f"{f.numerator}pi/{f.denominator}"),
    st.sampled_from(["", "abc", "-4", "180", "1e3", "90°", "54°44'8\"", "1.0472rad"]),
)


def pairs(size):
    return size * (size - 1) // 2


def sets_of(angle, low, high):
    return st.integers(low, high).flatmap(lambda n: st.lists(angle, min_size=pairs(n), max_size=pairs(n)))


def summary(finding):
    """What must not depend on how mirrors are named or numbered."""
    return (
        finding.kind,
        finding.rank,
        tuple(sorted(finding.families)),
        finding.order,
        finding.mirror_count,
        finding.chambers_between,
        finding.crystallographic,
        finding.point_group,
        None
        if finding.tube is None
        else (
            finding.tube.tiling,
            finding.tube.plane_group,
            finding.tube.chambers,
            sorted(finding.tube.moved_families),
        ),
    )


def one_line(error):
    assert len(str(error).splitlines()) == 1


def check(finding):
    assert finding.kind in KINDS
    assert finding.sentence
    json.dumps(finding.evidence.to_dict(), allow_nan=False)
    if finding.kind.startswith("closed"):
        assert finding.order == finding.group.order
        assert len(finding.group.mirrors) == finding.mirror_count
        assert (finding.chambers_between == 1) == (
            finding.kind == "closed"
        ) or finding.chambers_between is None
        assert all(finding.wall_words)
    else:
        assert finding.group is None
    if finding.kind == "open":
        assert finding.evidence.broken
    if finding.kind == "tube":
        assert finding.tube is not None


@settings(max_examples=120, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(st.lists(typed_text, max_size=30))
def test_any_texts(texts):
    start = time.process_time()
    try:
        arrangement = Arrangement.from_angles(texts)
    except (AngleError, ArrangementError) as error:
        one_line(error)
    else:
        check(arrangement.finding())
    assert time.process_time() - start < LONG


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(sets_of(typed_text.filter(lambda t: t not in ("", "abc", "-4", "180", "1e3")), 2, 4))
def test_any_angles_with_all_that_is_said(texts):
    start = time.process_time()
    finding = Arrangement.from_angles(texts).finding()
    json.dumps(finding.to_dict(), allow_nan=False)
    assert time.process_time() - start < LONG


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(sets_of(any_fraction, 2, 8))
def test_any_fractions(fractions):
    start = time.process_time()
    arrangement = Arrangement.from_angles(fractions)
    check(arrangement.finding())
    if arrangement.normals is not None:
        products = arrangement.normals @ arrangement.normals.T
        assert np.abs(products - arrangement.gram).max() < 1e-7
    assert time.process_time() - start < LONG


@settings(max_examples=100, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(sets_of(likely, 2, 8))
def test_likely_angles_of_up_to_eight_mirrors(fractions):
    start = time.process_time()
    check(Arrangement.from_angles(fractions).finding())
    assert time.process_time() - start < LONG


@settings(max_examples=80, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(st.integers(1, 8), st.integers(1, 15), st.integers(0, 10_000), st.booleans())
def test_any_normals(dimension, count, seed, whole):
    rng = np.random.default_rng(seed)
    normals = rng.integers(-2, 3, (count, dimension)) if whole else rng.normal(size=(count, dimension))
    start = time.process_time()
    try:
        arrangement = Arrangement.from_normals(normals)
        finding = arrangement.finding()
    except (ArrangementError, TooLarge) as error:
        one_line(error)
    else:
        check(finding)
        assert finding.kind in ("closed", "closed-subdivided", "open")
        assert finding.rank == np.linalg.matrix_rank(normals)
    assert time.process_time() - start < LONG


@settings(max_examples=80, deadline=None)
@given(sets_of(likely, 2, 6), st.randoms(use_true_random=False))
def test_numbering_does_not_matter(fractions, random):
    size = next(n for n in range(2, 9) if pairs(n) == len(fractions))
    order = list(range(size))
    random.shuffle(order)
    place = {pair: k for k, pair in enumerate(itertools.combinations(range(size), 2))}
    again = [
        fractions[place[tuple(sorted((order[i], order[j])))]]
        for i, j in itertools.combinations(range(size), 2)
    ]
    assert summary(Arrangement.from_angles(again).finding()) == summary(
        Arrangement.from_angles(fractions).finding()
    )


@settings(max_examples=80, deadline=None)
@given(sets_of(likely, 2, 6), st.integers(0, 5))
def test_naming_the_other_side_of_one_mirror_does_not_change_the_group(fractions, which):
    size = next(n for n in range(2, 9) if pairs(n) == len(fractions))
    which %= size
    turned = [
        1 - f if which in pair else f
        for f, pair in zip(fractions, itertools.combinations(range(size), 2), strict=True)
    ]
    one, other = (Arrangement.from_angles(angles).finding() for angles in (fractions, turned))
    closed = {"closed", "closed-subdivided"}
    assert (one.kind in closed) == (other.kind in closed)
    assert one.kind == other.kind or {one.kind, other.kind} <= closed
    assert (one.rank, one.order, one.mirror_count, sorted(one.families)) == (
        other.rank,
        other.order,
        other.mirror_count,
        sorted(other.families),
    )
    assert one.crystallographic == other.crystallographic
    if one.tube is not None:
        assert one.tube.moved_order == other.tube.moved_order
        assert one.tube.plane_group == other.tube.plane_group


@settings(max_examples=50, deadline=None)
@given(sets_of(likely, 2, 5), st.integers(0, 1000))
def test_angles_and_normals_agree(fractions, seed):
    typed = Arrangement.from_angles(fractions)
    finding = typed.finding()
    assume(finding.kind in ("closed", "closed-subdivided", "open"))
    dimension = typed.normals.shape[1]
    turn = np.linalg.qr(np.random.default_rng(seed).normal(size=(dimension, dimension)))[0]
    given_so = Arrangement.from_normals(typed.normals @ turn)
    assert summary(given_so.finding()) == summary(finding)
    if finding.group is not None:
        seed_point = np.linspace(0.3, 0.9, dimension)
        assume(finding.order < 3000)
        one = typed.orbit(point=seed_point).points @ turn
        other = given_so.orbit(point=seed_point @ turn).points
        assert len(one) == len(other)
        apart = np.abs(one[:, None] - other[None]).max(axis=2)
        assert apart.min(axis=1).max() < 1e-9


@settings(max_examples=60, deadline=None)
@given(
    st.sampled_from(["A1", "I2(5)", "I2(9)", "A3", "B3", "H3", "A1xA2", "D4", "A1xB3"]),
    st.lists(
        st.one_of(st.just(0.0), st.floats(-3, 3).filter(lambda v: v == 0 or abs(v) > 1e-300)),
        min_size=4,
        max_size=4,
    ),
    st.booleans(),
)
def test_orbits(name, coordinates, rotations):
    arrangement = Arrangement.from_family(name)
    group = arrangement.finding().group
    orbit = arrangement.orbit(point=coordinates[: group.dimension], rotations=rotations)
    whole = group.rotation_order if rotations else group.order
    assert len(orbit) * orbit.stabiliser_order == whole
    reach = float(np.abs(orbit.seed).max()) or 1.0
    keys = {tuple(np.round(p / reach, 9) + 0.0) for p in orbit.points}
    assert len(keys) == len(orbit)
    assert np.allclose(np.linalg.norm(orbit.points / reach, axis=1), np.linalg.norm(orbit.seed / reach))
    if not rotations:
        for normal in group.simple:
            images = orbit.points - 2 * np.outer(orbit.points @ normal, normal)
            apart = np.abs(images[:, None] - orbit.points[None]).max(axis=2).min(axis=1)
            assert apart.max() < 1e-9 * reach


@pytest.mark.parametrize("size", [4, 5, 6])
def test_flat_sets_of_large_denominators_are_decided_in_time(size):
    lines = [F(1, p) for p in (101, 103, 107, 109, 113, 127)[:size]]
    angles = [1 - abs(u - v) for u, v in itertools.combinations(lines, 2)]
    from mirrorlab.angles import AngleSettings

    start = time.process_time()
    finding = Arrangement.from_angles(angles, AngleSettings(max_denominator=100_000)).finding()
    assert (finding.kind, finding.tube.tiling, finding.tube.moved) == ("tube", "overlap", None)
    assert finding.sentence
    assert time.process_time() - start < LONG
