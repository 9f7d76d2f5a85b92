"""Angles as published sources and a reference library write them."""

from __future__ import annotations

import math
from fractions import Fraction

import gemmi
import pytest

from mirrorlab import parse_angle, write_angle


@pytest.mark.parametrize("text", ["100.02147(35)", "100.02147 ± 0.00035", "(100.02147 ± 0.00035)"])
def test_the_three_ways_of_the_guide_say_the_same(text: str) -> None:
    """JCGM 100:2008 (GUM), 7.2.2: its example 100.02147 with standard uncertainty 0.00035 (from memory)."""
    angle = parse_angle(text)
    assert (angle.degrees, angle.uncertainty) == (100.02147, 0.00035)


@pytest.mark.parametrize("text", ["59.9(2)", "90.00(15)", "120", "44.6(4)", "109.47"])
def test_numbers_of_crystal_files(text: str) -> None:
    """gemmi (reference library) reads numbers of the CIF standard, the standard uncertainty in brackets."""
    assert parse_angle(text).degrees == gemmi.cif.as_number(text)


@pytest.mark.parametrize(
    ("text", "p", "q"),
    [
        ("20°54'19\"", 5, 3),
        ("31°43'3\"", 3, 5),
        ("35°15'52\"", 4, 3),
        ("54° 44′ 08″", 3, 3),
    ],
)
def test_edges_of_characteristic_triangles(text: str, p: int, q: int) -> None:
    """H. S. M. Coxeter, Regular Polytopes (3rd ed. 1973): right triangles with cos φ = cos(π/p)/sin(π/q).

    The printed seconds are from memory; each is confirmed here by the formula, within half a second.
    """
    edge = math.degrees(math.acos(math.cos(math.pi / p) / math.sin(math.pi / q)))
    angle = parse_angle(text)
    assert angle.uncertainty == pytest.approx(0.5 / 3600)
    assert abs(angle.degrees - edge) <= angle.uncertainty
    assert angle.fraction is None


@pytest.mark.parametrize(("text", "p", "q"), [("37°22'39\"", 5, 3), ("54°44'8\"", 4, 3)])
def test_longest_edges_of_characteristic_triangles(text: str, p: int, q: int) -> None:
    """Napier's rule for a right spherical triangle: cos of the side opposite to 90° is cot(π/p)·cot(π/q)."""
    edge = math.degrees(math.acos(1 / (math.tan(math.pi / p) * math.tan(math.pi / q))))
    assert abs(parse_angle(text).degrees - edge) <= 0.5 / 3600


def test_minutes_and_seconds() -> None:
    """SI Brochure (9th ed. 2019), table 8: 1' = (1/60)°, 1" = (1/60)'; radian: 1° = π/180 rad (from memory)."""
    assert Fraction(parse_angle("1°").low) == 60 * (parse_angle("0°1'").low + parse_angle("0°1'").high) / 2
    assert parse_angle("0°0'1\"").degrees == pytest.approx(1 / 3600, rel=1e-15)
    assert parse_angle("1.57079632679rad").degrees == pytest.approx(90, abs=1e-9)
    assert write_angle(Fraction(1, 32), "dms") == "5°37'30\""


def test_the_best_fractions_of_an_irrational_angle() -> None:
    """Continued fractions: the tetrahedral edge's arccos(1/3)/π is irrational (I. Niven, Irrational Numbers, 1956,
    corollary 3.12, from memory), so no fraction closes it, and its convergents are the best nearby.
    """
    value = math.acos(1 / 3) / math.pi
    angle = parse_angle(f"{180 * value:.12f}")
    assert angle.fraction is None
    rest, convergents, (h0, h1), (k0, k1) = value, [], (0, 1), (1, 0)
    for _ in range(5):
        whole = math.floor(rest)
        (h0, h1), (k0, k1) = (h1, whole * h1 + h0), (k1, whole * k1 + k0)
        convergents.append(Fraction(h1, k1))
        rest = 1 / (rest - whole)
    last = [fraction for fraction in convergents if fraction.denominator <= 360][-1]
    assert abs(angle.nearest(9)[-1].deviation_degrees) <= abs(float(180 * last) - 180 * value) + 1e-9
