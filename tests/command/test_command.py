"""The command line as a person meets it."""

from __future__ import annotations

import csv
import json
import os
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from mirrorlab.command import main
from mirrorlab.commands import VERBS

KEYS = [
    "kind", "rank", "families", "order", "mirror_count", "chambers_between", "crystallographic", "flags",
    "point_group", "tube", "suggestions", "evidence",
]  # fmt: skip


def run(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, str, str]:
    try:
        status = main(words)
    except SystemExit as leave:
        status = int(leave.code or 0)
    captured = capsys.readouterr()
    return status, captured.out, captured.err


def test_check_prints_the_sentence_first(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = run(capsys, "check", "90", "60", "45")
    assert (status, err) == (0, "")
    assert out.splitlines()[0] == "Closes as m-3m (B3): 48 images, 9 mirrors; a lattice can carry it."


def test_check_as_json_has_the_keys(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, _ = run(capsys, "check", "90", "60", "36", "--json")
    found = json.loads(out)
    assert status == 0
    assert [key for key in KEYS if key not in found] == []
    assert found["point_group"] == {"hermann_mauguin": "m-3-5", "schoenflies": "Ih"}
    assert found["families"] == ["H3"]


@pytest.mark.parametrize(
    "words",
    [
        ["check", "90", "60", "40", "--evidence"],
        ["check", "60", "60", "60", "--evidence"],
        ["check", "45", "60", "60", "--evidence"],
        ["check", "59.93", "60", "90", "--evidence"],
        ["check", "--family", "E8", "--evidence"],
        ["check", "--normals", "1,0,0", "-1,1,0", "0,-1,1"],
        ["check", "90 60 45"],
        ["orbit", "90", "60", "45", "--point", "-1,0.2,0.5"],
        ["orbit", "--family", "F4", "--place", "edge ab", "--rotations"],
    ],
)
def test_every_kind_can_be_printed(capsys: pytest.CaptureFixture[str], words: list[str]) -> None:
    status, out, err = run(capsys, *words)
    assert (status, err) == (0, "")
    assert out.strip()


def test_orbit_to_csv_and_numpy(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    table, points = tmp_path / "i.csv", tmp_path / "i.npy"
    words = ["orbit", "90", "60", "45", "--heights", "1,2,3", "--csv", str(table), "--npy", str(points)]
    status, _, err = run(capsys, *words)
    assert status == 0
    assert "i.csv-metadata.json" in err
    with table.open(newline="") as handle:
        rows = list(csv.DictReader(handle))
    assert len(rows) == 48
    assert [float(rows[0][c]) for c in "xyz"] == np.load(points)[0].tolist()


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["check"], "in one way"),
        (["check", "90", "--family", "A2"], "in one way"),
        (["check", "90", "60"], "2 angles fit no number"),
        (["check", "60", "6o", "90"], 'angle 2 of 3, "6o"'),
        (["check", "--family", "E9"], "E9"),
        (["check", "--file", "nowhere.json"], "nowhere.json"),
        (["check", "--normals", "1,0", "1,0,0"], "coordinates"),
        (["check", "--normals", "1,x"], "1,x"),
        (["check", "90", "--max-denominator", "0"], "largest denominator 0"),
        (["orbit", "90", "60", "45"], "required"),
        (["orbit", "90", "60", "45", "--heights", "1,2"], "3 finite"),
        (["orbit", "90", "60", "45", "--place", "nowhere"], "centre"),
        (["orbit", "90", "60", "40", "--place", "centre"], "Never closes"),
        (["orbit", "--family", "E8", "--place", "centre"], "696,729,600"),
        (["orbit", "90", "--place", "centre", "--csv", "no/such/folder/x.csv"], "cannot be written"),
        (["frobnicate", "x"], "frobnicate"),
        (["check", "90", "--nonsense"], "--nonsense"),
    ],
)
def test_bad_input_is_one_line_and_status_2(
    capsys: pytest.CaptureFixture[str], words: list[str], said: str
) -> None:
    status, out, err = run(capsys, *words)
    assert status == 2
    assert out == ""
    assert said in err
    assert err.count("\n") == 1


@pytest.mark.parametrize("verb", [verb.name for verb in VERBS])
def test_every_verb_has_help_with_examples(capsys: pytest.CaptureFixture[str], verb: str) -> None:
    status, out, _ = run(capsys, verb, "--help")
    assert status == 0
    assert f"mirrorlab {verb}" in out
    assert "examples" in out


def child(code: str, **extra: str) -> subprocess.CompletedProcess[str]:
    environment = {
        k: v for k, v in os.environ.items() if k not in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM")
    }
    return subprocess.run(
        [sys.executable, "-c", code],
        env={**environment, **extra},
        capture_output=True,
        text=True,
        check=False,
        timeout=120,
    )


def test_check_and_orbit_load_no_qt_and_nothing_heavy() -> None:
    code = (
        "import sys; from mirrorlab.command import main\n"
        "main(['check', '90', '60', '45']); main(['orbit', '90', '60', '45', '--place', 'centre'])\n"
        "heavy = {'PySide6', 'pyqtgraph', 'OpenGL', 'scipy', 'gemmi', 'ezdxf', 'numba', 'trimesh'}\n"
        "print('LOADED', sorted(heavy & set(sys.modules)))"
    )
    done = child(code)
    assert done.returncode == 0, done.stderr
    assert done.stdout.splitlines()[-1] == "LOADED []"


def test_without_a_screen_the_sample_is_printed() -> None:
    done = child("import sys; from mirrorlab.command import main; sys.exit(main([]))")
    assert done.returncode == 0, done.stderr
    assert done.stdout.splitlines()[0] == "Ostrel corner lantern"
    assert "48 images" in done.stdout
    assert "no window opened" in done.stderr
    assert "install" in done.stderr


def test_a_screen_that_does_not_answer() -> None:
    done = child("import sys; from mirrorlab.command import main; sys.exit(main([]))", DISPLAY=":987")
    assert done.returncode == 0, done.stderr
    assert "no window opened" in done.stderr
    assert "Traceback" not in done.stderr


def test_a_reader_that_leaves_early() -> None:
    done = subprocess.run(
        f"{sys.executable} -m mirrorlab orbit --family E6 --place centre --json | head -n 1",
        shell=True, capture_output=True, text=True, check=False, timeout=120,
    )  # fmt: skip
    assert done.stdout.strip() == "{"
    assert done.stderr == ""
