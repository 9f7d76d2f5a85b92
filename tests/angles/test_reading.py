"""Reading an angle: every notation, every refusal."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from mirrorlab.angles import Angle, AngleError, AngleSettings, parse_angle


@pytest.mark.parametrize(
    "text", ["60", "60°", "60deg", "60 °", "pi/3", "π/3", "1/3pi", "1/3*pi", "60 degrees", "60d"]
)
def test_exact_notations_of_sixty_degrees(text: str) -> None:
    angle = parse_angle(text)
    assert (angle.source, angle.uncertainty, angle.fraction) == ("exact", 0, Fraction(1, 3))


@pytest.mark.parametrize("text", ["2pi/5", "2*pi/5", "2π/5", "72"])
def test_two_fifths_of_pi(text: str) -> None:
    assert parse_angle(text).fraction == Fraction(2, 5)


@pytest.mark.parametrize(
    ("text", "value", "half"),
    [
        ("60.0", 60, 0.05),
        ("60,0", 60, 0.05),
        ("54°44'8\"", 54 + 44 / 60 + 8 / 3600, 0.5 / 3600),
        ("54d44m8s", 54 + 44 / 60 + 8 / 3600, 0.5 / 3600),
        ("54deg44min8sec", 54 + 44 / 60 + 8 / 3600, 0.5 / 3600),
        ("60°00'00\"", 60, 0.5 / 3600),
        ("54° 44′ 8.2″", 54 + 44 / 60 + 8.2 / 3600, 0.05 / 3600),
        ("45°30'", 45.5, 0.5 / 60),
        ("1.0472rad", math.degrees(1.0472), math.degrees(0.00005)),
    ],
)
def test_rounded_angles_are_uncertain_by_half_their_last_digit(text: str, value: float, half: float) -> None:
    angle = parse_angle(text)
    assert angle.source == "rounded"
    assert angle.degrees == pytest.approx(value, abs=1e-12)
    assert angle.uncertainty == pytest.approx(half, rel=1e-12)


@pytest.mark.parametrize(
    "text", ["59.9(2)", "59.9±0.2", "59.9+-0.2", "59.9+/-0.2", "59,9(2)", "59.9°±0.2", "59.9(2)°", "59.9 ± 0.2 deg",
     "(59.9±0.2)°", "(59.9 +/- 0.2)"],
)  # fmt: skip
def test_standard_uncertainty_in_each_notation(text: str) -> None:
    """JCGM 100:2008 (GUM), 7.2.2: 59.9(2) means 59.9 with standard uncertainty 0.2."""
    angle = parse_angle(text)
    assert (angle.source, angle.degrees, angle.uncertainty) == ("measured", 59.9, 0.2)
    assert (float(angle.low), float(angle.high)) == pytest.approx((59.3, 60.5))
    assert angle.fraction == Fraction(1, 3)


def test_the_digits_in_brackets_count_in_the_last_place() -> None:
    assert parse_angle("59.90(12)").uncertainty == pytest.approx(0.12)
    assert parse_angle("60(2)").uncertainty == 2


def test_the_band_follows_the_setting() -> None:
    assert parse_angle("59.5(2)", AngleSettings(sigmas=3)).fraction == Fraction(1, 3)
    assert parse_angle("59.5(2)", AngleSettings(sigmas=1)).fraction != Fraction(1, 3)


def test_sixty_is_not_guessed_from_59_9() -> None:
    angle = parse_angle("59.9")
    assert angle.fraction != Fraction(1, 3)
    nearest = {near.fraction: near for near in angle.nearest()}
    assert nearest[Fraction(1, 3)].deviation_degrees == pytest.approx(0.1)


def test_an_exact_angle_beyond_the_largest_denominator_has_no_closing_fraction() -> None:
    assert parse_angle("pi/1000").fraction is None
    assert parse_angle("pi/1000", AngleSettings(max_denominator=1000)).fraction == Fraction(1, 1000)


def test_parallel_mirrors_are_allowed() -> None:
    assert parse_angle("0").fraction == 0
    assert parse_angle("0").radians == 0


def test_a_band_that_reaches_180_never_reads_180() -> None:
    angle = parse_angle("179.9(1)")
    assert angle.fraction is None
    assert all(near.fraction < 1 for near in angle.nearest())
    assert parse_angle("179.5(1)").fraction == Fraction(224, 225)


@pytest.mark.parametrize(
    ("typed", "said"),
    [
        ("", "empty"),
        ("   ", "empty"),
        ("-5", "negative"),
        ("−5", "negative"),
        ("180", "180 degrees"),
        ("200.5", "200.5 degrees"),
        ("pi", "180 degrees"),
        ("nan", "not an angle"),
        ("inf", "not an angle"),
        ("6o", "not an angle"),
        ("sixty", "not an angle"),
        ("60 60", "two numbers"),
        ("1,2.3", "one decimal sign"),
        ("1,2,3", "one decimal sign"),
        ("pi/0", "0 below the line"),
        ("54°70'", "below 60"),
        ("59.9(0)", "uncertainty of 0"),
        ("60±0", "uncertainty of 0"),
        ("60°±0.1rad", "different units"),
        (float("nan"), "not an angle"),
        (float("inf"), "not an angle"),
        ("59.9(2", "not an angle"),
        ("(60)", "not an angle"),
        ("1e1", "not an angle"),
        ("60_0", "not an angle"),
        (-1e-7, "negative"),
        (None, "not an angle"),
        (True, "not an angle"),
    ],
)
def test_what_is_no_angle_is_refused_with_what_was_typed(typed: object, said: str) -> None:
    with pytest.raises(AngleError) as caught:
        parse_angle(typed)  # type: ignore[arg-type]
    assert said in str(caught.value)
    assert str(typed) in str(caught.value) or typed == -1e-7  # printed without its exponent


@pytest.mark.parametrize("text", ["9" * 400, "9" * 5000, "60±" + "9" * 400, "pi/" + "9" * 5000])
def test_endless_digits_are_refused_at_once(text: str) -> None:
    with pytest.raises(AngleError, match=f"{len(text)} characters") as caught:
        parse_angle(text)
    assert len(str(caught.value)) < 100


@given(st.text(alphabet="0123456789.,±()+-/*πpi°'\"dmsrag e", max_size=20) | st.text(max_size=80))
def test_any_text_is_an_angle_or_a_clear_error(text: str) -> None:
    angle, said = None, '"'
    try:
        angle = parse_angle(text)
    except AngleError as error:
        said = str(error)
    assert said.startswith('"')
    if angle is not None:
        assert 0 <= angle.degrees < 180
        assert angle.fraction is None or angle.low <= 180 * angle.fraction <= angle.high


def test_settings_out_of_range() -> None:
    with pytest.raises(AngleError, match="largest denominator 0"):
        AngleSettings(max_denominator=0)
    with pytest.raises(AngleError, match="standard uncertainties"):
        AngleSettings(sigmas=0)


def test_numbers_that_are_no_text() -> None:
    assert parse_angle(60).source == "exact"
    assert parse_angle(59.9) == parse_angle("59.9")
    assert parse_angle(Fraction(2, 5)).degrees == 72
    assert parse_angle(np.int64(60)).source == "exact"
    assert parse_angle(np.float32(59.9)) == parse_angle("59.9")
    assert parse_angle(1e-7).degrees == 1e-7


def test_an_angle_from_radians() -> None:
    assert Angle.from_radians(math.pi / 7, 1e-9).fraction == Fraction(1, 7)
    assert Angle.from_radians(math.acos(1 / 3), 1e-9).fraction is None
