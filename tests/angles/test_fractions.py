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
    read = parse_angle(write_angle(fraction, "degrees"))
    assert abs(read.degrees - float(180 * fraction)) < 1e-6
    dms = parse_angle(write_angle(fraction, "dms"))
    assert abs(dms.degrees - float(180 * fraction)) <= 0.05 / 3600 + 1e-12


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


def test_lists_of_angles() -> None:
    assert split_angles(" 90 60;45\n30 ") == ["90", "60", "45", "30"]
