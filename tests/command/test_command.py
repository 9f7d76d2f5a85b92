"""The command line as a person meets it: answers, refusals, and ends that come early."""

from __future__ import annotations

import contextlib
import csv
import io
import json
import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from mirrorlab import command
from mirrorlab.commands import VERBS
from mirrorlab.files.samples import assets

KEYS = [
    "kind", "rank", "families", "order", "mirror_count", "chambers_between", "crystallographic", "flags",
    "point_group", "tube", "suggestions", "evidence",
]  # fmt: skip
HEAVY = {"PySide6", "pyqtgraph", "OpenGL", "scipy", "gemmi", "ezdxf", "numba", "trimesh"}

Answer = Callable[..., tuple[int, str, str]]
Child = Callable[..., subprocess.CompletedProcess[str]]


def test_check_prints_the_sentence_first(answer: Answer) -> None:
    status, out, err = answer("check", "90", "60", "45")
    assert (status, err) == (0, "")
    assert out.splitlines()[0] == "Closes as m-3m (B3): 48 images, 9 mirrors; a lattice can carry it."


def test_check_as_json_has_the_keys(answer: Answer) -> None:
    status, out, _ = answer("check", "90", "60", "36", "--json")
    found = json.loads(out)
    assert status == 0
    assert [key for key in KEYS if key not in found] == []
    assert found["point_group"] == {"hermann_mauguin": "m-3-5", "schoenflies": "Ih"}
    assert found["families"] == ["H3"]


@pytest.mark.parametrize(
    ("words", "order"),
    [
        (["90 60 45"], 48),
        (["90, 60, 36"], 120),
        (["90", "59.9 ± 0.2", "45"], 48),
        (["90", "60°", "pi / 4"], 48),
        (["--family", "A1xI2(5)"], 20),
        (["--normals", "1,0,0", "-1,1,0", "0,-1,1"], 48),
        (["--file", str(assets() / "samples" / "02-ostrel-star-lantern.json")], 120),
        (["88.9", "60", "45", "--max-denominator", "4"], None),
        (["88.9(3)", "60", "45", "--sigmas", "4"], 48),
    ],
)
def test_every_way_to_say_which_mirrors(answer: Answer, words: list[str], order: int | None) -> None:
    status, out, _ = answer("check", *words, "--json")
    assert status == 0
    assert json.loads(out)["order"] == order


def test_orbit_to_csv_and_numpy(answer: Answer, tmp_path: Path) -> None:
    table, points = tmp_path / "i.csv", tmp_path / "i.npy"
    words = ["orbit", "90", "60", "45", "--heights", "1,2,3", "--csv", str(table), "--npy", str(points)]
    status, _, err = answer(*words)
    assert status == 0
    assert "i.csv-metadata.json" in err
    with table.open(newline="") as handle:
        rows = list(csv.DictReader(handle))
    assert len(rows) == 48
    assert [[float(row[c]) for c in "xyz"] for row in rows] == np.load(points).tolist()


def test_orbit_as_json_is_what_python_gives(answer: Answer) -> None:
    from mirrorlab import Arrangement

    _, out, _ = answer("orbit", "90", "60", "45", "--point", "1,0.2,0.5", "--rotations", "--json")
    found = json.loads(out)
    orbit = Arrangement.from_angles(["90", "60", "45"]).orbit(point=[1, 0.2, 0.5], rotations=True)
    assert found["points"] == orbit.points.tolist()
    assert found["words"] == orbit.words()
    assert (found["images"], found["multiplicity"], found["rotations only"]) == (24, 24, True)


def test_a_file_brings_its_own_seed(answer: Answer) -> None:
    sample = str(assets() / "samples" / "01-ostrel-corner-lantern.json")
    _, out, _ = answer("orbit", "--file", sample, "--json")
    assert list(json.loads(out)["seed heights above the walls"].values()) == pytest.approx([1, 0.8, 0.6])
    _, out, _ = answer("orbit", "--file", sample, "--place", "edge ab", "--json")
    assert json.loads(out)["images"] == 12


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["check"], "in one way"),
        (["check", "90", "--family", "A2"], "in one way"),
        (["check", "90", "60"], "2 angles fit no number"),
        (["check", "60", "6o", "90"], 'angle 2 of 3, "6o"'),
        (["check", "90,60,45"], "spaces between them"),
        (["images", "50", "50", "50"], "no planes have these angles"),
        (["check", "-5"], "negative"),
        (["check", "9" * 5000], "5000 characters"),
        (["check", "--family", "E9"], "E9"),
        (["check", "--file", "nowhere.json"], "nowhere.json"),
        (["check", "--file", "/"], "cannot be read"),
        (["check", "--normals", "1,0", "1,0,0"], "coordinates"),
        (["check", "--normals", "1,x"], "1,x"),
        (["check", "90", "--max-denominator", "0"], "largest denominator 0"),
        (["check", "90", "--max-denominator", "many"], "'many' is not a whole number"),
        (["check", "90", "--sigmas", "x"], "'x' is not a number"),
        (["orbit", "60", "60", "60", "--heights", "1,2,3"], "no finite orbit: A tube"),
        (["orbit", "90", "60", "45"], "say where the seed is"),
        (["orbit", "90", "--heights", "1,2", "--place", "centre"], "not allowed with"),
        (["orbit", "90", "60", "45", "--heights", "1,2"], "3 finite"),
        (["orbit", "90", "60", "45", "--heights", "1,2,nan"], "3 finite"),
        (["orbit", "90", "60", "45", "--point", "1,2,1e400"], "3 finite"),
        (["orbit", "90", "60", "45", "--place", "nowhere"], "centre"),
        (["orbit", "90", "60", "40", "--place", "centre"], "Never closes"),
        (["orbit", "90", "60", "45", "--place", "centre", "--limit", "47"], "48"),
        (["orbit", "--family", "E8", "--place", "centre"], "696,729,600"),
        (["orbit", "90", "--place", "centre", "--csv", "no/such/folder/x.csv"], "cannot be written"),
        (["frobnicate", "x"], "frobnicate"),
        (["chek"], "neither a file nor a verb"),
        (["check", "90", "--nonsense"], "--nonsense"),
    ],
)
def test_bad_input_is_one_line_and_status_2(answer: Answer, words: list[str], said: str) -> None:
    status, out, err = answer(*words)
    assert status == 2
    assert out == ""
    assert said in err
    assert err.count("\n") == 1


def test_nothing_half_written_where_a_table_cannot_be(answer: Answer, tmp_path: Path) -> None:
    (tmp_path / "i.csv").mkdir()
    status, _, err = answer("orbit", "90", "60", "45", "--place", "centre", "--csv", str(tmp_path / "i.csv"))
    assert (status, err.count("\n")) == (2, 1)
    assert [path.name for path in tmp_path.iterdir()] == ["i.csv"]


@pytest.mark.parametrize("verb", [verb.name for verb in VERBS])
def test_every_verb_has_help_with_examples(answer: Answer, verb: str) -> None:
    status, out, _ = answer(verb, "--help")
    assert status == 0
    assert f"mirrorlab {verb}" in out
    assert "examples" in out


def test_help_and_version(answer: Answer) -> None:
    status, out, _ = answer("--help")
    assert status == 0
    for verb in VERBS:
        below = out.partition(f"\nfor {verb.whom}:\n")[2].partition("\n\n")[0].splitlines()
        assert [line.split() for line in below].count([verb.name, *verb.summary.split()]) == 1
    assert answer("--version")[:2] == (0, f"mirrorlab {command.__version__}\n")


def test_check_and_orbit_load_no_qt_and_nothing_heavy(child: Child) -> None:
    done = child(
        "import sys; from mirrorlab.command import main\n"
        "main(['check', '90', '60', '45', '--evidence']); main(['check', '60', '60', '60', '--json'])\n"
        "main(['orbit', '90', '60', '45', '--place', 'centre'])\n"
        f"print('LOADED', sorted({HEAVY!r} & set(sys.modules)))"
    )
    assert done.returncode == 0, done.stderr
    assert done.stdout.splitlines()[-1] == "LOADED []"


def test_a_stream_that_knows_few_letters(child: Child) -> None:
    code = "import sys; from mirrorlab.command import main; sys.exit(main(['check', '90', '60', '40', {}]))"
    plain = child(code.format("'--evidence'"), PYTHONIOENCODING="ascii", PYTHONUTF8="0")
    assert (plain.returncode, plain.stderr) == (0, "")
    assert "4cos\\xb2" in plain.stdout
    data = child(code.format("'--json'"), PYTHONIOENCODING="ascii", PYTHONUTF8="0")
    assert "°" in json.loads(data.stdout)["flags"][0]["reason"]


@pytest.mark.skipif(os.name != "posix", reason="pipes of a POSIX shell")
@pytest.mark.parametrize("words", ["orbit --family E6 --place centre --json", "check 90 60 45"])
def test_a_reader_that_leaves_early(words: str) -> None:
    line = f"{sys.executable} -m mirrorlab {words} | true"
    done = subprocess.run(line, shell=True, capture_output=True, text=True, check=False, timeout=120)
    assert (done.returncode, done.stderr) == (0, "")


def test_an_interrupt_has_its_own_status(answer: Answer, monkeypatch: pytest.MonkeyPatch) -> None:
    def stop(_: list[str]) -> int:
        raise KeyboardInterrupt

    monkeypatch.setattr(command, "_run", stop)
    status, out, err = answer("check", "90")
    assert (status, out, err.strip()) == (130, "", "mirrorlab: stopped")


@pytest.mark.skipif(os.name != "posix", reason="signals of POSIX")
def test_an_interrupt_of_a_long_orbit_leaves_no_file(tmp_path: Path) -> None:
    words = ["orbit", "--family", "D7", "--place", "centre", "--csv", str(tmp_path / "d7.csv")]
    running = subprocess.Popen(
        [sys.executable, "-m", "mirrorlab", *words], stderr=subprocess.PIPE, stdout=subprocess.PIPE
    )
    deadline = time.monotonic() + 60
    while not list(tmp_path.iterdir()) and time.monotonic() < deadline:  # the draft beside the target
        assert running.poll() is None
    running.send_signal(signal.SIGINT)
    _, err = running.communicate(timeout=60)
    assert running.returncode == 130
    assert b"Traceback" not in err
    assert list(tmp_path.iterdir()) == []


WORDS = st.sampled_from(
    ["90", "60", "45", "59.9(2)", "2pi/5", "0", "6o", "-5", "180", "", " ", "--family", "H3", "A1xI2(7)", "Z9",
     "--normals", "1,0,0", "0,1,0", "1,1", "nan,0,0", "--heights", "1,2,3", "1e300,1,1", "--point", "--place",
     "centre", "wall a", "edge zz", "--rotations", "--json", "--evidence", "--limit", "--sigmas", "--file", "x"]
)  # fmt: skip


@given(st.sampled_from(["check", "orbit"]), st.lists(WORDS, max_size=7))
@settings(deadline=None, max_examples=150)
def test_any_words_are_answered_or_refused_in_one_line(verb: str, words: list[str]) -> None:
    out, err = io.StringIO(), io.StringIO()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        try:
            status = command.main([verb, *words])
        except SystemExit as leave:
            status = int(leave.code or 0)
    assert status in (0, 2)
    assert bool(out.getvalue()) == (status == 0)
    assert err.getvalue().count("\n") == (0 if status == 0 else 1)
