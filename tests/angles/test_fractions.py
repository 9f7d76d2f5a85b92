"""The closing fraction against a slow twin, and writing back."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from mirrorlab.angles import AngleError, closing_fraction, parse_angle, split_angles, write_angle


def slow_closing_fraction(low: Fraction, high: Fraction, most: int) -> Fraction | None:
    """By definition: the smallest m for which some k·180/m lies in the band and in [0, 180)."""
    for m in range(1, most + 1):
        for k in range(m):
            if low <= Fraction(180 * k, m) <= high:
                return Fraction(k, m)
    return None


@given(
    st.fractions(min_value=0, max_value=180, max_denominator=5000),
    st.fractions(min_value=0, max_value=3, max_denominator=5000),
    st.integers(1, 40),
)
def test_the_fraction_has_the_smallest_denominator(value: Fraction, reach: Fraction, most: int) -> None:
    low, high = value - reach, value + reach
    assert closing_fraction(low, high, most) == slow_closing_fraction(low, high, most)


@given(st.integers(2, 360).flatmap(lambda m: st.tuples(st.integers(0, m - 1), st.just(m))))
def test_every_fraction_reads_back_in_each_style(pair: tuple[int, int]) -> None:
    fraction = Fraction(*pair)
    assert parse_angle(write_angle(fraction, "pi")).fraction == fraction
    # fractions with m up to 360 stand at least 180°/(360·359) = 0.0014° apart, wider than what is cut off
    assert parse_angle(write_angle(fraction, "degrees")).fraction == fraction
    assert parse_angle(write_angle(fraction, "dms")).fraction == fraction


@given(st.floats(0, 180, exclude_max=True), st.sampled_from(["degrees", "dms"]))
def test_a_written_value_reads_back_within_its_own_band(degrees: float, style: str) -> None:
    read = parse_angle(write_angle(degrees, style))
    cut = Fraction(1, 10**6) if style == "degrees" else Fraction(1, 36000)
    reach = cut if degrees > 179.99 else cut / 2  # the last step below 180° is cut, not rounded
    assert abs(Fraction(read.degrees) - Fraction(degrees)) <= reach + Fraction(1, 10**12)
    assert read.source != "exact" or Fraction(read.degrees) == Fraction(degrees)


@pytest.mark.parametrize(
    ("fraction", "degrees", "pi", "dms"),
    [
        (Fraction(1, 3), "60°", "pi/3", "60°"),
        (Fraction(2, 5), "72°", "2pi/5", "72°"),
        (Fraction(0), "0°", "0", "0°"),
        (Fraction(1, 16), "11.25°", "pi/16", "11°15'00\""),
        (Fraction(1, 7), "25.714286°", "pi/7", "25°42'51.4\""),
    ],
)
def test_writing_in_three_styles(fraction: Fraction, degrees: str, pi: str, dms: str) -> None:
    assert [write_angle(fraction, style) for style in ("degrees", "pi", "dms")] == [degrees, pi, dms]


def test_an_angle_without_a_fraction_is_written_by_its_value() -> None:
    angle = parse_angle("54.7356")
    assert angle.fraction is None
    assert write_angle(angle, "pi") == "54.7356°"
    assert write_angle(math.degrees(math.atan(math.sqrt(2))), "dms") == "54°44'08.2\""


def test_an_unknown_style() -> None:
    with pytest.raises(AngleError, match="grad"):
        write_angle(Fraction(1, 3), "grad")


@pytest.mark.parametrize(
    ("value", "degrees", "dms"),
    [
        (59.9999999, "60.000000°", "60°00'00.0\""),
        (60.0, "60°", "60°"),
        (59.9, "59.9°", "59°54'00\""),
        (179.99999999, "179.999999°", "179°59'59.9\""),
    ],
)
def test_what_was_cut_off_never_reads_as_exact(value: float, degrees: str, dms: str) -> None:
    assert (write_angle(value), write_angle(value, "dms")) == (degrees, dms)


@pytest.mark.parametrize(
    ("text", "parts"),
    [
        (" 90 60;45\n30 ", ["90", "60", "45", "30"]),
        ("90, 60, 45", ["90", "60", "45"]),
        ("90,5 60,5", ["90,5", "60,5"]),
        ("90 59.9 ± 0.2 pi / 3", ["90", "59.9±0.2", "pi/3"]),
        ("59.9 +- 0.2; 60 (2) 45", ["59.9+-0.2", "60(2)", "45"]),
        ("54° 44' 8\" 60 ° 45 deg 60", ["54°44'8\"", "60°", "45deg", "60"]),
        ("1.0472 rad 60° 30'", ["1.0472rad", "60°30'"]),
        ("90 (59.9±0.2)° 45", ["90", "(59.9±0.2)°", "45"]),
        ("", []),
    ],
)
def test_lists_of_angles(text: str, parts: list[str]) -> None:
    assert split_angles(text) == parts


NOTATIONS = [
    "60",
    "59.9(2)",
    "59,9(2)",
    "59.9±0.2",
    "pi/3",
    "2*pi/5",
    "54°44'8\"",
    "54d44m8s",
    "1.0472rad",
    "6o",
]


@given(st.lists(st.tuples(st.sampled_from(NOTATIONS), st.sampled_from([" ", "  ", ";", "; ", ", ", "\n"]))))
def test_a_list_comes_apart_where_it_was_joined(parts: list[tuple[str, str]]) -> None:
    assert split_angles("".join(map("".join, parts))) == [part for part, _ in parts]


@given(st.integers(1, 400), st.integers(0, 399))
def test_the_nearest_fractions_are_simple_first_and_ever_nearer(m: int, k: int) -> None:
    angle = parse_angle(Fraction(k % m, m) if m > 360 else f"{180 * (k % m) / m + 0.003:.5f}")
    near = angle.nearest(5)
    assert len({n.fraction for n in near}) == len(near) >= 1
    assert all(0 <= n.fraction < 1 and n.fraction.denominator <= 360 for n in near)
    assert all(n.deviation_degrees == pytest.approx(180 * n.fraction - angle.degrees) for n in near)
    gaps = [abs(n.deviation_degrees) for n in near if n.fraction != Fraction(359, 360)]
    assert gaps == sorted(gaps, reverse=True)
