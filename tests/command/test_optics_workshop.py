"""``build`` and ``choose`` as a person meets them."""

from __future__ import annotations

import csv
import json
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from mirrorlab.command import main


def run(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, str, str]:
    try:
        status = main(words)
    except SystemExit as leave:
        status = int(leave.code or 0)
    captured = capsys.readouterr()
    return status, captured.out, captured.err


def test_build_prints_panes_sides_and_cautions(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = run(capsys, "build", "90", "60", "36", "--opening", "120")
    assert (status, err) == (0, "")
    lines = out.splitlines()
    assert lines[0] == "Corner of 3 mirrors, 90° / 60° / 36°"
    assert any(line.split()[:3] == ["a1", "210.2", "20.91°"] for line in lines)
    assert any("Wear cut-resistant gloves" in line for line in lines)


def test_build_writes_every_file_asked_for(
    capsys: pytest.CaptureFixture[str], tmp_path: Path, qapp: object
) -> None:
    import ezdxf

    names = {
        "dxf": "l.dxf",
        "svg": "l.svg",
        "pdf": "l.pdf",
        "csv": "l.csv",
        "layout": "s.pdf",
        "report": "r.pdf",
    }
    words = [w for key, name in names.items() for w in (f"--{key}", str(tmp_path / name))]
    status, out, err = run(
        capsys, "build", "90", "60", "45", "--depth", "10cm", "--truncated", "30", "--mirror", "household glass",
        "--joint", "butted", "--stock", "600x400", "--kerf", "1", "--copies", "2", *words, "--json",
    )  # fmt: skip
    assert status == 0
    found = json.loads(out)
    expected = {*names.values(), "l.csv-metadata.json"}
    assert {path.name for path in tmp_path.iterdir()} == expected
    assert {Path(path).name for path in found["files"]} == expected
    assert err.count("wrote ") == len(expected)
    for name in ("l.pdf", "s.pdf", "r.pdf"):
        assert (tmp_path / name).read_bytes().startswith(b"%PDF-")
    with (tmp_path / "l.csv").open(newline="") as lines:
        rows = list(csv.DictReader(lines))
    assert len(rows) == 12
    assert {row["quantity"] for row in rows} == {"2"}
    document = ezdxf.readfile(tmp_path / "l.dxf")
    outlines = [e for e in document.modelspace().query('LWPOLYLINE[layer=="CUT"]') if e.closed]
    assert len(outlines) == 3 + 6
    assert found["layout"]["waste_percent"] > 0
    assert found["folded_by_bevels"]["largest_angle_error_degrees"] < 1e-6


def test_layout_and_report_in_other_formats(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    for suffix in ("dxf", "svg"):
        target = tmp_path / f"s.{suffix}"
        words = ("--stock", "24inx18in", "--cutting", "free", "--layout", str(target))
        assert run(capsys, "build", "60", "60", "60", "--length", "200", "--opening", "60", *words)[0] == 0
        assert target.stat().st_size > 1000
    assert (
        run(capsys, "build", "30", "--length", "200", "--depth", "80", "--report", str(tmp_path / "r.txt"))[0]
        == 0
    )
    assert "CAUTION" in (tmp_path / "r.txt").read_text()


def test_lengths_may_carry_units(capsys: pytest.CaptureFixture[str]) -> None:
    sizes = []
    for words in (("--length", "8in", "--depth", "3 1/2 in"), ("--length", "203.2", "--depth", "88.9mm")):
        status, out, _ = run(capsys, "build", "30", *words, "--json")
        assert status == 0
        sizes.append([row["length_mm"] for row in json.loads(out)["cut_list"]])
    assert sizes[0] == pytest.approx(sizes[1])


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["60", "60", "60", "--opening", "50"], "a tube needs --length"),
        (["90", "60", "36", "--opening", "50", "--taper", "0.5"], "a corner has no such dimension"),
        (["90", "60", "36"], "depth: give how far"),
        (["90", "60", "36", "--opening", "50", "--joint", "glued"], "mitred, butted, square"),
        (["90", "60", "36", "--opening", "50", "--joint", "butted", "--order", "x"], "round, first"),
        (["90", "60", "36", "--opening", "50", "--stock", "600"], "width x height"),
        (["90", "60", "36", "--opening", "50", "--stock", "40x40"], "larger stock"),
        (
            ["90", "60", "36", "--opening", "50", "--stock", "600x400", "--cutting", "bend"],
            "straight or free",
        ),
        (["90", "60", "36", "--opening", "50", "--layout", "x.pdf"], "--stock 1200x800"),
        (["90", "60", "36", "--opening", "50", "--report", "x.doc"], ".pdf, .txt"),
        (["90", "60", "36", "--opening", "50", "--page", "B5"], "A4, A3, Letter"),
        (["90", "60", "36", "--opening", "50", "--copies", "0"], "0 copies"),
        (
            ["90", "60", "36", "--opening", "20", "--thickness", "20", "--mirror", "household glass"],
            "thinner glass",
        ),
        (["90", "60", "36", "--opening", "50", "--mirror", "tin"], "not a preset"),
        (["90", "60", "36", "--opening", "five"], "not a length"),
        (["90", "90", "90", "90", "90", "90", "--opening", "50"], "wedge"),
        (["60", "60", "30", "--opening", "50"], ""),
    ],
)
def test_bad_words_are_one_line_and_status_2(
    capsys: pytest.CaptureFixture[str],
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    words: list[str],
    message: str,
) -> None:
    monkeypatch.chdir(tmp_path)
    status, out, err = run(capsys, "build", *words, "--csv", "l.csv")
    assert status == 2
    assert out == ""
    assert err.count("\n") == 1
    assert message in err
    assert list(tmp_path.iterdir()) == []


def test_choose_gives_the_nearest(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, _ = run(capsys, "choose", "--images", "24", "--opening", "120", "--json")
    assert status == 0
    found = json.loads(out)["choices"]
    assert len(found) == 6
    gaps = [abs((c["images"] or c["bright_images"]) - 24) for c in found]
    assert gaps == sorted(gaps)
    assert {c["opening_mm"] for c in found} == {120.0}
    for choice in found:  # picking one loads it
        dimensions = ["--opening", "120"] + (["--length", "240"] if choice["kind"] != "corner" else [])
        status, out, _ = run(capsys, "build", *choice["angles"], *dimensions, "--json")
        assert status == 0
        angles = json.loads(out)["dihedrals_degrees"].values()
        assert sorted(angles) == pytest.approx(sorted(a for a in choice["angles_degrees"] if a))


def test_choose_lists_and_sorts(capsys: pytest.CaptureFixture[str]) -> None:
    words = ("choose", "--opening", "4in", "--kind", "corner", "--whole", "--sort", "depth")
    status, out, _ = run(capsys, *words, "--json")
    depths = [choice["depth_mm"] for choice in json.loads(out)["choices"]]
    assert status == 0
    assert depths == sorted(depths)
    assert len(depths) == 11 + 3
    status, out, _ = run(capsys, *words)
    assert "corner 90° 60° 36°" in out
    assert "20.91° 31.72° 37.38°" in out


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--opening", "0"], "more than zero"),
        (["--opening", "120", "--kind", "dome"], "'dome'"),
        (["--opening", "120", "--sort", "beauty"], "images, bright"),
        (["--opening", "120", "--images", "0"], "1 or more"),
        (["--opening", "120", "--reflectance", "2"], "reflectance 2"),
        ([], "--opening"),
    ],
)
def test_choose_refuses_nonsense(capsys: pytest.CaptureFixture[str], words: list[str], message: str) -> None:
    status, out, err = run(capsys, "choose", *words)
    assert status == 2
    assert out == ""
    assert message in err
    assert err.count("\n") == 1


def test_without_a_pdf_no_window_library_is_loaded(tmp_path: Path) -> None:
    code = (
        "import sys; from mirrorlab.command import main;"
        f"main(['build', '90', '60', '36', '--opening', '120', '--dxf', r'{tmp_path / 'l.dxf'}']);"
        "main(['choose', '--images', '24', '--opening', '120']);"
        "sys.exit(any(name.startswith('PySide6') for name in sys.modules))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, check=False)
    assert done.returncode == 0, done.stderr
    assert np.isfinite((tmp_path / "l.dxf").stat().st_size)
