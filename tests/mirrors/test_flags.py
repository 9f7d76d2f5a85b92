"""Why no lattice can carry it."""

from __future__ import annotations

import itertools
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.flags import PERMITTED, cycle_flags, four_cos_squared, permitted_near

LATTICE_ANGLES = [F(1, 2), F(1, 3), F(2, 3), F(1, 4), F(3, 4), F(1, 6), F(5, 6)]


def flags(angles):
    return Arrangement.from_angles(angles).finding().flags


@pytest.mark.parametrize(
    "fraction", [F(k, m) for m in range(1, 13) for k in range(m) if F(k, m).denominator == m]
)
def test_four_cosine_squares(fraction):
    value = four_cos_squared(fraction)
    assert value == pytest.approx(4 * np.cos(np.pi * float(fraction)) ** 2, abs=1e-12)
    assert isinstance(value, int) == (fraction.denominator in (1, 2, 3, 4, 6))


def test_a_pair_at_fault_is_named_with_its_number_and_the_nearest_permitted():
    (flag,) = flags(["90", "60", "36"])
    assert (flag.code, flag.letters, flag.mirrors) == ("no-lattice", "bc", (1, 2))
    assert "2.6180, not 0, 1, 2 or 3" in flag.reason
    assert flag.nearest == (F(1, 6), F(1, 4))
    assert flag.to_dict()["nearest"] == ["30°", "45°"]


@pytest.mark.parametrize("fraction", [F(1, 5), F(2, 5), F(3, 7), F(1, 100), F(99, 100)])
def test_nearest_permitted(fraction):
    apart = sorted(abs(f - fraction) for f in LATTICE_ANGLES)
    assert [abs(f - fraction) for f in permitted_near(fraction)] == apart[:2]
    assert set(PERMITTED) == set(LATTICE_ANGLES)


def test_an_unread_angle_has_its_own_flag():
    (flag,) = flags(["90", "59.1234567", "45"])
    assert flag.code == "no-closing-fraction"
    assert "ac 59.1234567: no closing fraction" in flag.reason
    assert F(1, 3) in flag.nearest


def test_parallel_mirrors_are_no_fault():
    assert flags(["0"]) == ()
    assert flags(["90", "0", "90", "90", "0", "90"]) == ()


def test_a_cycle_at_fault_though_each_pair_is_fine():
    (flag,) = flags(["60", "60", "45"])
    assert flag.code == "cycle"
    assert sorted(flag.letters) == ["a", "b", "c"]
    assert "√2" in flag.reason
    assert flags(["60", "45", "45"]) == ()


def test_a_cycle_through_a_bad_pair_is_not_told_twice():
    assert [flag.code for flag in flags(["72", "60", "45"])] == ["no-lattice"]


def cycles_by_trial(table):
    """Whether the product of 4cos² round every cycle is a square: its root, the product of 2cos, is then whole."""
    size = len(table)
    for length in range(3, size + 1):
        for cycle in itertools.permutations(range(size), length):
            product = 1
            for i, j in zip(cycle, cycle[1:] + cycle[:1], strict=True):
                product *= four_cos_squared(table[i][j])
            if product and round(product**0.5) ** 2 != product:
                return False
    return True


@pytest.mark.parametrize("seed", range(40))
def test_cycles_against_all_cycles(seed, slow):
    rng = np.random.default_rng(seed)
    size = int(rng.integers(3, 6))
    angles = [LATTICE_ANGLES[k] for k in rng.integers(7, size=size * (size - 1) // 2)]
    table = slow.table(angles, size)
    found = cycle_flags(table, "abcde")
    assert (found == ()) == cycles_by_trial(table)
    for flag in found:
        product = 1
        cycle = flag.mirrors
        for i, j in zip(cycle, cycle[1:] + cycle[:1], strict=True):
            product *= four_cos_squared(table[i][j])
        assert product > 0
        assert round(product**0.5) ** 2 != product


def lattice_angles_that_close(slow, size, count):
    rng = np.random.default_rng(size)
    found = []
    while len(found) < count:
        angles = [
            LATTICE_ANGLES[k] if rng.random() < 0.5 else F(1, 2)
            for k in rng.integers(7, size=size * (size - 1) // 2)
        ]
        if np.linalg.eigvalsh(slow.gram(angles, size))[0] > 1e-9:
            found.append(angles)
    return found


@pytest.mark.parametrize("size", [2, 3, 4, 5])
def test_definite_and_unflagged_is_finite_and_carried_by_a_lattice(size, slow):
    """Permitted pairs and cycles make a lattice that all reflections keep; definite, so the group is finite."""
    flagged = 0
    for angles in lattice_angles_that_close(slow, size, 30):
        finding = Arrangement.from_angles(angles).finding()
        if finding.flags:
            flagged += 1
            assert finding.crystallographic is False
        else:
            assert finding.kind in ("closed", "closed-subdivided")
            assert finding.crystallographic is True
    assert flagged or size == 2


def test_finite_and_flagged_is_not_carried(slow):
    for triple in itertools.combinations_with_replacement(slow.fractions(5), 3):
        finding = Arrangement.from_angles(triple).finding()
        if finding.kind.startswith("closed"):
            assert finding.crystallographic == (finding.flags == ())
