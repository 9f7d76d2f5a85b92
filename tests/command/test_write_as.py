"""How angles are written: degrees, fractions of pi, or degrees, minutes and seconds."""

from __future__ import annotations

import math
import re
from collections.abc import Callable

import pytest

from mirrorlab.angles import STYLES, parse_angle, split_angles
from mirrorlab.mirrors import Arrangement

Answer = Callable[..., tuple[int, str, str]]

WRITTEN = {"degrees": r"[\d.]+°", "pi": r"0|\d*pi(/\d+)?", "dms": r"\d+°(\d\d'\d\d(\.\d)?\")?"}
"""A fraction of pi in each style."""

TAKERS = {"check", "fit", "form", "tolerance", "choose"}
"""The verbs whose answer writes angles between mirrors or faces."""


def ways(out: str, title: str) -> list[str]:
    """The angles of each row under a title, as printed."""
    block = out.partition(f"\n{title}\n")[2].partition("\n\n")[0].splitlines()[1:]
    return [re.split(r"\s{2,}", line.strip())[0] for line in block]


@pytest.mark.parametrize("style", STYLES)
@pytest.mark.parametrize(
    "words",
    [["90", "60", "40"], ["51", "90", "90"], ["60", "60", "60"], ["25.3"], ["90", "59.1234567", "45"]],
)
def test_check_writes_the_ways_out_as_asked_and_they_read_back(
    answer: Answer, words: list[str], style: str
) -> None:
    status, out, _ = answer("check", *words, "--write-as", style)
    finding = Arrangement.from_angles(words).finding()
    assert status == 0
    for title, expected in (
        ("nearest that close or tile", finding.suggestions),
        ("the same planes with one angle read from the other side", finding.supplements),
    ):
        printed = [split_angles(text) for text in ways(out, title)]
        assert all(re.fullmatch(WRITTEN[style], part) for parts in printed for part in parts)
        assert [tuple(parse_angle(part).fraction for part in parts) for parts in printed] == [
            way.angles for way in expected
        ]
    assert len(finding.suggestions) >= 3


def test_flags_and_the_sentence_follow(answer: Answer) -> None:
    _, out, _ = answer("check", "90", "60", "2pi/7", "--write-as", "pi")
    assert "bc 2pi/7: 4cos² is 1.5550, not 0, 1, 2 or 3; nearest permitted pi/4 and pi/3" in out
    _, out, _ = answer("check", "90", "60", "2pi/7", "--write-as", "dms")
    assert "bc 51°25'42.9\": 4cos² is 1.5550, not 0, 1, 2 or 3; nearest permitted 45° and 60°" in out
    assert (
        answer("check", "60", "60", "60", "--write-as", "pi")[1]
        .splitlines()[0]
        .endswith("With ab read as 2pi/3 it closes as -43m (A3).")
    )


@pytest.mark.parametrize(
    ("style", "near"),
    [("degrees", "60° (pi/3), "), ("pi", "pi/3, "), ("dms", "60° (pi/3), 59°06'16.1\" (22pi/67)")],
)
def test_the_fraction_that_is_missing_stands_in_every_style(answer: Answer, style: str, near: str) -> None:
    _, out, _ = answer("check", "90", "59.1234567", "45", "--write-as", style)
    assert f"no closing fraction; nearest {near}" in out


def test_changes_in_minutes_are_whole_where_they_are(answer: Answer) -> None:
    _, out, _ = answer("check", "90", "60", "44.9", "--write-as", "dms")
    assert "bc +0°06'00\"\n" in out
    _, out, _ = answer("check", "90", "60", "45d12m", "--write-as", "dms")
    assert "bc -0°12'00\"\n" in out


def test_fit_writes_candidates_as_asked(answer: Answer) -> None:
    words = ["fit", "59.8(3)", "90.1(2)", "44.6(4)"]
    assert answer(*words)[1].startswith("Fits m-3m (B3) at 60°, 90°, 45°:")
    _, out, _ = answer(*words, "--write-as", "pi")
    assert out.startswith("Fits m-3m (B3) at pi/3, pi/2, pi/4:")
    assert "pi/3 (-0.7)" in out
    assert "°" not in out


def test_face_angles_in_minutes_and_seconds(answer: Answer) -> None:
    _, out, _ = answer("form", "m-3m", "111", "100:1.2", "--write-as", "dms")
    seconds = math.degrees(math.acos(1 / math.sqrt(3))) * 3600  # between the normals of (111) and (100)
    minutes = int(seconds // 60)
    assert f"{minutes // 60}°{minutes % 60:02d}'{seconds % 60:04.1f}\"" in out
    _, out, _ = answer("form", "m-3m", "110", "--write-as", "pi")
    assert "{110}  {110}  pi/3" in out
    _, out, _ = answer("form", "m-3m", "111", "--write-as", "pi")
    assert f"{math.degrees(math.acos(1 / 3)):.4f}°" in out  # no fraction of pi


def test_a_workshop_reads_what_it_asked_for(answer: Answer) -> None:
    _, out, _ = answer("choose", "--images", "24", "--opening", "120", "--write-as", "pi")
    assert "corner pi/2 pi/2 pi/7" in out
    _, out, _ = answer("choose", "--images", "24", "--opening", "120")
    assert "corner 90° 90° 25.7143°" in out
    _, out, _ = answer("tolerance", "59.8", "--write-as", "dms")
    assert out.splitlines()[2].split()[:3] == ["ab", "60°", "59°48'00\""]


def test_the_verbs_that_write_angles_take_it_and_no_others(answer: Answer) -> None:
    from mirrorlab.commands import VERBS

    taking = {
        verb.name
        for verb in VERBS
        if "--write-as" in answer(verb.name, "--help")[1].partition("examples:")[0]
    }
    assert taking == TAKERS
    status, out, err = answer("check", "90", "--write-as", "grads")
    assert (status, out, err.count("\n")) == (2, "", 1)
