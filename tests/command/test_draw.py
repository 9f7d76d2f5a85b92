"""The verb draw: every kind of file, and refusals that leave none."""

from __future__ import annotations

import json
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

from mirrorlab.files.samples import assets

Answer = Callable[..., tuple[int, str, str]]
Child = Callable[..., subprocess.CompletedProcess[str]]

HEADS = {
    "png": b"\x89PNG\r\n",
    "svg": b"<?xml",
    "pdf": b"%PDF-",
    "glb": b"glTF",
}


@pytest.mark.parametrize("ending", list(HEADS))
def test_the_ending_of_the_file_chooses_its_kind(answer: Answer, tmp_path: Path, ending: str) -> None:
    target = tmp_path / f"lantern.{ending}"
    status, out, err = answer("draw", "90", "60", "45", "--heights", "1,2,3", "--out", str(target))
    assert (status, out) == (0, "")
    assert err.splitlines()[-1] == f"wrote {target}"
    assert target.read_bytes().startswith(HEADS[ending])
    assert [path.name for path in tmp_path.iterdir()] == [target.name]


def test_what_was_drawn_as_json(answer: Answer, tmp_path: Path) -> None:
    target = tmp_path / "tube.svg"
    status, out, err = answer("draw", "60", "60", "60", "--out", str(target), "--json")
    said = json.loads(out)
    assert (status, said["file"]) == (0, str(target))
    assert said["notes"] == err.splitlines()[:-1] != []


@pytest.mark.parametrize(
    "words",
    [
        ["30", "--picture", "flat"],
        ["30"],
        ["90", "60", "45", "--picture", "stereogram"],
        ["90", "60", "45", "--net", "wulff"],
        ["90", "60", "45", "--picture", "chamber", "--place", "centre"],
        ["90", "60", "45", "--picture", "plane", "--place", "centre"],
        ["90", "60", "40"],
        ["60", "60", "60", "--look", "dark"],
        ["90", "0", "90", "90", "0", "90"],
        ["--family", "E7", "--place", "corner abcdef"],
        ["--file", str(assets() / "samples" / "08-room-9-as-first-drawn.json")],
        ["--file", str(assets() / "samples" / "11-seven-walls-e7.json")],
    ],
)
def test_a_picture_shows_something(answer: Answer, tmp_path: Path, words: list[str]) -> None:
    from PySide6.QtGui import QImage

    status, _, err = answer("draw", *words, "--out", str(tmp_path / "p.png"), "--size", "240x200")
    assert status == 0, err
    image = QImage(str(tmp_path / "p.png"))
    assert (image.width(), image.height()) == (240, 200)
    tints = {image.pixel(x, y) for x in range(0, 240, 4) for y in range(0, 200, 4)}
    assert len(tints) > 5


def test_a_net_lies_under_the_stereogram(answer: Answer, tmp_path: Path) -> None:
    pictures = {}
    for name, words in {
        "plain": ["--picture", "stereogram"],
        "wulff": ["--picture", "stereogram", "--net", "wulff"],
        "schmidt": ["--picture", "stereogram", "--net", "schmidt"],
        "alone": ["--net", "schmidt"],
    }.items():
        assert answer("draw", "90", "60", "45", *words, "--out", str(tmp_path / f"{name}.svg"))[0] == 0
        pictures[name] = (tmp_path / f"{name}.svg").read_text()
    assert len(pictures["plain"]) < len(pictures["wulff"])
    assert pictures["wulff"] != pictures["schmidt"] == pictures["alone"]


def test_the_seed_of_a_file_is_drawn(answer: Answer, tmp_path: Path) -> None:
    sample = str(assets() / "samples" / "01-ostrel-corner-lantern.json")
    pictures = []
    for name, words in {
        "kept": [],
        "same": ["--heights", "1,0.8,0.6"],
        "other": ["--place", "corner bc"],
    }.items():
        assert answer("draw", "--file", sample, *words, "--out", str(tmp_path / f"{name}.svg"))[0] == 0
        pictures.append((tmp_path / f"{name}.svg").read_text())
    assert pictures[0] == pictures[1] != pictures[2]


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["90", "60", "45", "--out", "{}/a.txt"], "a picture ends in"),
        (["90", "60", "45", "--out", "{}/no/a.png"], "cannot be written"),
        (["90", "60", "45", "--out", "{}/a.png", "--size", "5x5"], "each side must be"),
        (["90", "60", "45", "--out", "{}/a.png", "--size", "large"], "not a size"),
        (["90", "60", "45", "--out", "{}/a.png", "--picture", "flat"], "no flat view"),
        (["0", "60", "60", "--out", "{}/a.png"], "nothing to draw"),
        (["90", "60", "40", "--out", "{}/a.png", "--picture", "stereogram"], "nothing to draw"),
        (["90", "60", "40", "--out", "{}/a.png", "--place", "centre"], "Never closes"),
        (["--family", "E7", "--out", "{}/a.svg", "--picture", "space"], "nothing to draw"),
        (["90", "60", "45", "--out", "{}/a.glb", "--picture", "stereogram"], "no mesh"),
        (
            ["90", "60", "45", "--out", "{}/a.svg", "--picture", "chamber", "--net", "wulff"],
            "--net is of a stereogram",
        ),
        (["90", "60", "45", "--out", "{}/a.svg", "--net", "square"], "invalid choice"),
        (["90", "60", "45"], "--out"),
    ],
)
def test_a_refusal_is_one_line_and_leaves_no_file(
    answer: Answer, tmp_path: Path, words: list[str], said: str
) -> None:
    status, out, err = answer("draw", *(word.format(tmp_path) for word in words))
    assert (status, out, err.count("\n")) == (2, "", 1)
    assert said in err
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("extra", [{}, {"DISPLAY": ":987"}, {"QT_QPA_PLATFORM": "xcb"}])
def test_no_screen_is_needed(child: Child, tmp_path: Path, extra: dict[str, str]) -> None:
    target = tmp_path / "a.png"
    words = ["draw", "90", "60", "45", "--out", str(target), "--size", "64x64"]
    done = child(f"import sys; from mirrorlab.command import main; sys.exit(main({words!r}))", **extra)
    assert done.returncode == 0, done.stderr
    assert target.read_bytes().startswith(HEADS["png"])
