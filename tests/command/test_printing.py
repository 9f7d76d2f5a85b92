"""What a person reads: aligned, complete, and the same numbers as in the JSON."""

from __future__ import annotations

import json
import re
from collections.abc import Callable

import pytest

from mirrorlab.commands.output import print_table

Answer = Callable[..., tuple[int, str, str]]


@pytest.mark.parametrize(
    "words",
    [
        ["90", "60", "40"],
        ["60", "60", "60"],
        ["45", "60", "60"],
        ["59.93", "60", "90"],
        ["0", "60", "60"],
        ["90", "60", "2pi/5"],
        ["90.1(2)", "59.8(3)", "44.6(4)"],
        ["90", "0", "90", "90", "0", "90"],
        ["--family", "E8"],
        ["--family", "A1"],
        ["--normals", "1,0,0", "-1,1,0", "0,-1,1"],
    ],
)
def test_every_kind_can_be_printed_whole(answer: Answer, words: list[str]) -> None:
    status, out, err = answer("check", *words, "--evidence")
    _, data, _ = answer("check", *words, "--json")
    found = json.loads(data)
    assert (status, err) == (0, "")
    lines = out.splitlines()
    assert lines[0] == found["sentence"]
    assert f"kind: {found['kind']}    rank: {found['rank']}" in lines
    assert all(f"  {flag['reason']}" in lines for flag in found["flags"])
    assert all(f"{way['symbol']}  " in out for way in found["suggestions"])
    for bound in [*found["evidence"]["bounds"], *found["evidence"]["broken"]]:
        assert bound in out
    if found["order"] is not None:
        assert re.search(rf"^  order +{found['order']:,}$", out, re.MULTILINE)
        assert re.search(
            rf"^  exponents +{' '.join(map(str, found['group']['exponents']))}$", out, re.MULTILINE
        )
    assert all(line == line.rstrip() for line in lines)


@pytest.mark.parametrize(
    ("words", "moved"),
    [
        (["0"], "moved onto one another"),
        (["60", "60", "60"], "moved through one line"),
        (["90", "60", "60", "60", "60", "90"], "moved through one point"),
    ],
)
def test_the_table_moves_the_mirrors_where_the_sentence_does(
    answer: Answer, words: list[str], moved: str
) -> None:
    lines = answer("check", *words)[1].splitlines()
    assert f"; {moved} the same planes make" in lines[0]
    assert [line for line in lines[1:] if line.startswith(f"  {moved}  ")]


def test_a_measured_angle_shows_how_far_off_it_is(answer: Answer) -> None:
    _, out, _ = answer("check", "59.9(2)", "60.0", "59.93")
    rows = [line.split() for line in out.splitlines() if re.match(r"  [abc]{2} ", line)]
    assert rows[0][:6] == ["ab", "59.9(2)", "pi/3", "60°", "-0.1°", "(-0.5σ)"]
    assert rows[1][:5] == ["ac", "60.0", "pi/3", "60°", "0°"]
    assert rows[2][:3] == ["bc", "59.93", "none"]


@pytest.mark.parametrize(
    ("family", "graph"),
    [("B3", "a–b  b–4–c"), ("A1xI2(5)", "b–5–c  a"), ("D4", "a–b  b–c  b–d"), ("A1xA1", "a  b")],
)
def test_the_graph_in_one_line(answer: Answer, family: str, graph: str) -> None:
    _, out, _ = answer("check", "--family", family)
    shown = re.search(r"^  graph +(.*)$", out, re.MULTILINE)
    assert shown is not None
    assert shown[1] == graph


def test_suggestions_can_be_typed_back(answer: Answer) -> None:
    _, out, _ = answer("check", "90", "60", "40")
    block = out.partition("nearest that close or tile\n")[2].splitlines()[1:]
    assert len(block) >= 3
    for line in block:
        angles, makes = re.match(r"  (\S+ \S+ \S+) +(\S+ \(.*?\))", line).groups()  # type: ignore[union-attr]
        assert makes.removesuffix(" (tube)") in answer("check", angles)[1].splitlines()[0]


def test_orbit_says_what_became_of_the_seed(answer: Answer) -> None:
    _, out, _ = answer("orbit", "90", "60", "45", "--point", "-1,0.2,0.5")
    assert "brought it in" in out
    _, out, _ = answer("orbit", "90", "60", "45", "--heights", "0.0000001,1,1")
    assert "moved onto wall a" in out
    _, out, _ = answer("orbit", "90", "60", "45", "--place", "edge ab")
    assert "12 images; stabiliser A1xA1 (mm2) of order 4" in out
    assert "-0.000000" not in out
    _, out, _ = answer("orbit", "--family", "F4", "--place", "centre")
    assert "1,128 more" in out


@pytest.mark.parametrize(
    ("rows", "lines"),
    [
        ([("n", "word"), ("1", "a"), ("12", "abc")], ["   n  word", "   1  a", "  12  abc"]),
        ([("x",), ("1.5",), ("-10.25",), ("3",)], ["       x", "    1.5", "  -10.25", "    3"]),
        ([("1.25", "a"), ("3", "b")], ["  1.25  a", "  3     b"]),
        ([("a", ""), ("bb", "")], ["  a", "  bb"]),
        ([], []),
    ],
)
def test_columns_of_numbers_stand_under_their_points(
    capsys: pytest.CaptureFixture[str], rows: list[tuple[str, ...]], lines: list[str]
) -> None:
    print_table(rows)
    assert capsys.readouterr().out.splitlines() == lines
