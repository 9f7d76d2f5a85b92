"""Every kind of finding, against closure by definition."""

from __future__ import annotations

import itertools
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement

FAR = 60
"""Mirrors after which the slow twin calls a set infinite; the largest finite one met here has 15."""


def kind_by_definition(fractions, slow):
    """Kind, mirrors, chambers between and order, by writing everything out."""
    values = np.linalg.eigvalsh(slow.gram(fractions, 3))
    if values[0] < -1e-9:
        return "unbuildable", None, None, None
    normals = slow.normals(fractions, 3)
    made = slow.mirrors(normals, FAR)
    if values[0] < 1e-9:
        return "tube", made, None, None
    if made is None:
        return "open", None, None, None
    inside = np.array([0.61, 0.37, 0.22])
    group = slow.elements(normals, 400)
    between = slow.chambers_between(normals, group, inside)
    return ("closed" if between == 1 else "closed-subdivided"), made, between, len(group)


@pytest.mark.parametrize("first", range(12))
def test_all_triples_of_simple_angles(first, slow):
    options = [F(0), *slow.fractions(6)]
    kinds = set()
    for triple in itertools.combinations_with_replacement(options, 3):
        if triple[0] != options[first]:
            continue
        kind, made, between, order = kind_by_definition(triple, slow)
        finding = Arrangement.from_angles(triple).finding()
        kinds.add(kind)
        assert finding.kind == kind, triple
        if between is not None:
            assert finding.mirror_count == len(made), triple
            assert finding.chambers_between == between, triple
            assert finding.order == order, triple
        if kind == "tube":
            moved = finding.tube.moved
            assert (moved is None) == (made is None), triple
            assert moved is None or moved.mirror_count == len(made)
    assert kinds <= {"closed", "closed-subdivided", "open", "tube", "unbuildable"}


@pytest.mark.parametrize("seed", range(12))
def test_four_mirrors_at_random(seed, slow):
    rng = np.random.default_rng(seed)
    five = [F(1, 2), F(1, 2), F(1, 2), F(1, 3), F(2, 3), F(1, 5), F(2, 5), F(3, 5)]
    four = [F(1, 2), F(1, 2), F(1, 2), F(1, 3), F(2, 3), F(1, 4), F(3, 4)]
    seen = 0
    while seen < 6:
        options = five if rng.random() < 0.5 else four
        angles = [options[k] for k in rng.integers(len(options), size=6)]
        values = np.linalg.eigvalsh(slow.gram(angles, 4))
        finding = Arrangement.from_angles(angles).finding()
        assert (finding.kind == "unbuildable") == (values[0] < -1e-9)
        if values[0] < 1e-9:
            assert finding.kind in ("tube", "unbuildable")
            continue
        seen += 1
        made = slow.mirrors(slow.normals(angles, 4), 61)
        assert (made is None) == (finding.kind == "open"), angles
        if made is not None:
            assert finding.mirror_count == len(made), angles
            assert finding.kind in ("closed", "closed-subdivided")


@pytest.mark.parametrize(("k", "m"), [(1, 2), (1, 7), (2, 5), (3, 7), (5, 12), (179, 180), (100, 359)])
def test_two_mirrors_hold_k_chambers(k, m):
    finding = Arrangement.from_angles([F(k, m)]).finding()
    assert finding.kind == ("closed" if k == 1 else "closed-subdivided")
    assert finding.mirror_count == m
    assert finding.order == 2 * m
    assert finding.chambers_between == k


def test_closed_needs_one_chamber_in_every_part():
    finding = Arrangement.from_angles(["144", "90", "90", "90", "90", "120"]).finding()
    assert finding.kind == "closed-subdivided"
    assert finding.families == ("I2(5)", "A2")
    assert finding.chambers_between == 4 * 2


def test_a_star_names_its_true_chamber(slow):
    finding = Arrangement.from_angles(["90", "60", "72"]).finding()
    group = finding.group
    assert group.families == ("H3",)
    assert np.allclose(-(group.simple @ group.simple.T), np.cos(np.pi / group.coxeter_matrix))
    assert sum(letter in "abc" for letter in group.letters) == 2
    assert len(set(group.letters)) == 3


DEPENDENT = {
    "three through a line": ([[1, 0, 0], [-0.5, 3**0.5 / 2, 0], [0.5, 3**0.5 / 2, 0]], ("A2",), 3),
    "three through a line, square ones": ([[1, 0, 0], [0, 1, 0], [1, 1, 0]], ("B2",), 4),
    "nine of a cube": (
        [
            [1, 0, 0],
            [0, 1, 0],
            [0, 0, 1],
            [1, 1, 0],
            [1, -1, 0],
            [1, 0, 1],
            [1, 0, -1],
            [0, 1, 1],
            [0, 1, -1],
        ],
        ("B3",),
        9,
    ),
    "six of a tetrahedron": (
        [[1, 1, 0], [1, -1, 0], [1, 0, 1], [1, 0, -1], [0, 1, 1], [0, 1, -1]],
        ("A3",),
        6,
    ),
    "four square in a plane and one across": ([[1, 0, 0], [0, 1, 0], [1, 1, 0], [0, 0, 1]], ("B2", "A1"), 5),
}


@pytest.mark.parametrize("name", DEPENDENT)
def test_dependent_normals_make_the_group_they_generate(name):
    normals, families, mirrors = DEPENDENT[name]
    finding = Arrangement.from_normals(normals).finding()
    assert finding.kind == "closed"
    assert finding.families == families
    assert finding.mirror_count == mirrors
    assert finding.chambers_between is None
    assert finding.tube is None
    assert finding.suggestions == ()


def test_dependent_normals_that_never_close():
    open_fan = [[1, 0, 0], [np.cos(1.0), np.sin(1.0), 0], [np.cos(2.0), np.sin(2.0), 0]]
    finding = Arrangement.from_normals(open_fan).finding()
    assert finding.kind == "open"
    assert finding.rank == 2
    mixed = Arrangement.from_normals([[1, 0, 0], [0, 1, 0], [0, 0, 1], [1, 2, 3]]).finding()
    assert mixed.kind == "open"


def test_independent_normals_are_as_good_as_their_angles():
    turn = np.linalg.qr(np.random.default_rng(2).normal(size=(3, 3)))[0]
    typed = Arrangement.from_angles(["90", "60", "45"])
    finding = Arrangement.from_normals(typed.normals @ turn).finding()
    assert finding.kind == "closed"
    assert finding.chambers_between == 1
    assert finding.point_group.schoenflies == "Oh"


def test_fewer_mirrors_than_dimensions():
    finding = Arrangement.from_normals([[0, 0, 2, 0], [0, 0, 1, 1]]).finding()
    assert finding.families == ("B2",)
    assert finding.group.dimension == 4
    assert not finding.group.contains_inversion


def test_angles_read_from_measurements():
    finding = Arrangement.from_angles(["90.1(2)", "59.9(2)", "45.0(2)"]).finding()
    assert finding.families == ("B3",)
    finding = Arrangement.from_angles(["90", "59.9(1)", "45.02"]).finding()
    assert finding.kind in ("open", "closed")


def test_an_angle_without_fraction_makes_it_open():
    finding = Arrangement.from_angles(["90", "59.1234567", "45"]).finding()
    assert finding.kind == "open"
    assert [flag.code for flag in finding.flags] == ["no-closing-fraction"]
    assert finding.order is None
    assert finding.families == ()
