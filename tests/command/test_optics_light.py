"""``images``, ``tolerance`` and ``view`` as a person meets them."""

from __future__ import annotations

import csv
import json
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from mirrorlab.command import main
from mirrorlab.files.raster import read_picture, save_view


def run(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, str, str]:
    try:
        status = main(words)
    except SystemExit as leave:
        status = int(leave.code or 0)
    captured = capsys.readouterr()
    return status, captured.out, captured.err


def test_images_of_two_mirrors(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = run(capsys, "images", "60")
    assert (status, err) == (0, "")
    assert out.startswith("5 images, 5 of them seen")
    assert "6 sectors close without a seam" in out
    status, out, _ = run(capsys, "images", "50", "--list")
    assert status == 0
    assert "cut by the seam: abab, baba" in out
    assert "rule of two mirrors gives 7" in out


def test_images_as_json_and_csv(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    path = tmp_path / "images.csv"
    status, out, err = run(
        capsys, "images", "90", "60", "45", "--depth", "15cm", "--mirror", "household glass", "--faintest", "0.001",
        "--csv", str(path), "--json",
    )  # fmt: skip
    assert status == 0
    assert "wrote" in err
    found = json.loads(out)
    assert found["count"] == 47
    assert found["complete"] is True
    with path.open(newline="", encoding="utf-8") as stream:
        rows = list(csv.DictReader(stream))
    assert len(rows) == 47
    assert float(rows[0]["x"]) == found["images"][0]["position_mm"][0]
    about = json.loads((tmp_path / "images.csv-metadata.json").read_text(encoding="utf-8"))
    assert "mm" in json.dumps(about)


def test_images_with_mirrors_that_really_stand_otherwise(capsys: pytest.CaptureFixture[str]) -> None:
    _, out, _ = run(capsys, "images", "60", "--actual", "62", "--json")
    edge = json.loads(out)["edges"][0]
    assert edge["closes"] is False
    assert edge["leftover_degrees"] == pytest.approx(12)
    _, out, _ = run(capsys, "images", "90", "60", "45", "--actual", "90,60,46", "--json")
    assert [e["closes"] for e in json.loads(out)["edges"]] == [True, True, False]


def test_tolerance_forwards_backwards_and_by_chance(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = run(
        capsys,
        "tolerance",
        "90",
        "60",
        "36.2",
        "--distance",
        "150",
        "--seam",
        "1",
        "--chance",
        "0.05",
        "--draws",
        "2000",
    )
    assert (status, err) == (0, "")
    assert "+2.0000°" in out, "ten sectors, each 0.2° too wide"
    assert "allowed alone" in out
    assert "▪" in out
    status, out, _ = run(capsys, "tolerance", "90", "90", "90", "--actual", "90.1,90.1,90.1", "--json")
    found = json.loads(out)
    assert found["return_error"]["centre_line_degrees"] == pytest.approx(0.3266, rel=0.01)
    assert found["chances"] is None
    same = [run(capsys, "tolerance", "60", "--chance", "0.1", "--seed", "5", "--json")[1] for _ in range(2)]
    assert same[0] == same[1]


def test_view_writes_a_picture_of_the_size_asked_for(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    path = tmp_path / "view.png"
    status, out, err = run(capsys, "view", "60", "60", "60", "--out", str(path), "--size", "160x90", "--json")
    assert status == 0
    assert json.loads(out)["size"] == [160, 90]
    assert "wrote" in err
    assert "direct sun" in err
    pixels = read_picture(path)
    assert pixels.shape == (90, 160, 4)
    assert pixels[..., :3].std() > 30


def test_view_of_a_persons_own_picture(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    own = np.zeros((20, 20, 3), np.uint8)
    own[..., 1] = 200
    save_view(tmp_path / "own.png", own)
    words = ("view", "60", "60", "60", "--size", "80x60", "--joint", "0")
    assert (
        run(capsys, *words, "--object", str(tmp_path / "own.png"), "--out", str(tmp_path / "v.png"))[0] == 0
    )
    seen = read_picture(tmp_path / "v.png")
    assert seen[..., 0].max() == 0
    assert seen[..., 1].max() > 180
    for extra in (["--heights", "10,12,9"], ["--at", "1,2,60", "--shape", "card", "--width", "1cm"]):
        assert run(capsys, *words, *extra, "--out", str(tmp_path / "w.png"))[0] == 0
        assert read_picture(tmp_path / "w.png")[..., :3].std() > 10


@pytest.mark.parametrize(
    ("words", "reason"),
    [
        (["view", "60", "--out", "view.jpg"], "must end in .png"),
        (["view", "60", "--out", "nowhere/view.png"], "no such folder"),
        (["view", "60", "--out", "v.png", "--size", "big"], "not a size"),
        (["view", "60", "--out", "v.png", "--size", "99999x10"], "each side"),
        (["view", "60", "--out", "v.png", "--samples", "20"], "samples"),
        (["view", "60", "--out", "v.png", "--object", "plaid"], "lantern glass"),
        (["view", "60", "--out", "v.png", "--object", "gone.jpg"], "no such picture"),
        (["view", "60", "--out", "v.png", "--eye", "500,0,100"], "behind mirror"),
        (["view", "60", "--out", "v.png", "--eye", "1,2"], "three numbers"),
        (["view", "60", "--out", "v.png", "--at", "0,20,90", "--heights", "1,2"], "not both"),
        (["view", "60", "--out", "v.png", "--at", "90,20,90"], "behind mirror"),
        (["view", "60", "--out", "v.png", "--width", "10"], "--at"),
        (["view", "60", "60", "60", "--out", "v.png", "--look", "into"], "--look"),
        (
            ["view", "60", "--length", "200", "--depth", "60", "--opening", "80", "--out", "v.png"],
            "larger than",
        ),
        (["view", "60", "--thickness", "0", "--mirror", "household glass", "--out", "v.png"], "thickness"),
        (["images", "90", "60"], "angles"),
        (["images", "60", "--point", "500,0,0"], "behind mirror"),
        (["images", "60", "--faintest", "2"], "faintest"),
        (["images", "60", "--actual", "60,61"], "2 actual angles for 1"),
        (["tolerance", "90", "90", "90", "--actual", "90"], "give ab, ac, bc"),
        (["tolerance", "60", "--actual", "90"], "more than 10°"),
        (["tolerance", "60", "--distance", "0"], "distance"),
        (["tolerance", "60", "--chance", "0"], "size"),
    ],
)
def test_bad_input_is_one_line_and_status_2(
    capsys: pytest.CaptureFixture[str],
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    words: list[str],
    reason: str,
) -> None:
    monkeypatch.chdir(tmp_path)
    status, out, err = run(capsys, *words)
    assert (status, out) == (2, "")
    assert reason in err
    assert err.count("\n") == 1
    assert list(tmp_path.iterdir()) == [], "nothing half-written"


def test_counting_loads_no_window_library_and_no_compiler() -> None:
    code = (
        "import sys, io; sys.stdout = io.StringIO(); from mirrorlab.command import main;"
        "main(['images', '60']); main(['tolerance', '90', '60', '45']);"
        "sys.stderr.write(str([n for n in ('numba', 'PySide6') if n in sys.modules]))"
    )
    assert (
        subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stderr
        == "[]"
    )


@pytest.mark.parametrize(
    ("angles", "taken"),
    [("60", "--length 200 --depth 60"), ("90 60 45", "--depth 150"), ("60 60 60", "--length 200 --sides 50")],
)
def test_dimensions_that_were_not_given_are_said(
    capsys: pytest.CaptureFixture[str], angles: str, taken: str
) -> None:
    _, out, _ = run(capsys, "images", *angles.split())
    assert f"note: no dimensions given; taken: {taken}\n" in out
    assert taken in run(capsys, "images", "--help")[1].replace("\n ", "")
    _, typed, _ = run(capsys, "images", *angles.split(), *taken.split())
    assert "no dimensions given" not in typed
    assert typed == out.replace(f"\nnote: no dimensions given; taken: {taken}\n", "")
