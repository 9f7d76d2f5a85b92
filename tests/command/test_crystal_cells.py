"""The verbs planes, cell, fit and compare as a person meets them."""

from __future__ import annotations

import csv
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from mirrorlab.command import main

CELL = "5.431(2),5.431(2),5.431(2),90,90,90"

CIF = """data_K-7
_cell_length_a 5.431(2)
_cell_length_b 5.431(2)
_cell_length_c 5.431(2)
_cell_angle_alpha 90
_cell_angle_beta 90
_cell_angle_gamma 90
_space_group_name_H-M_alt 'F m -3 m'
"""

OCTAHEDRON = "label,x,y,z\nA1,1,0.004,0\nA2,-1,0,0\nA3,0,1,0\nA4,0,-1,0\nA5,0,0,1\nA6,0,0,-1\n"


def run(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, str, str]:
    try:
        status = main(words)
    except SystemExit as leave:
        status = int(leave.code or 0)
    captured = capsys.readouterr()
    return status, captured.out, captured.err


def answer(capsys: pytest.CaptureFixture[str], *words: str) -> dict:
    status, out, _ = run(capsys, *words, "--json")
    assert status == 0
    return json.loads(out)


def rows(path: Path) -> list[dict[str, str]]:
    with path.open(newline="", encoding="utf-8") as handle:
        return list(csv.DictReader(handle))


@pytest.fixture
def files(tmp_path: Path) -> Path:
    (tmp_path / "k7.cif").write_text(CIF)
    (tmp_path / "points.csv").write_text(OCTAHEDRON)
    (tmp_path / "bad.csv").write_text(OCTAHEDRON.replace("A4,0,-1", "A4,0,minus"))
    (tmp_path / "damaged.cif").write_text(CIF.replace("beta 90", "beta ninety"))
    return tmp_path


def test_planes_for_a_person(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = run(
        capsys, "planes", "--cell", CELL, "--centring", "F", "--hkl", "1,0,0", "110", "111"
    )
    assert (status, err) == (0, "")
    assert "(100) is a mirror of the lattice: [100] stands exactly on it, twin index 1." in out
    assert "(111) is no mirror of the lattice: [111] stands exactly on it, twin index 3." in out
    assert "one parameter    a = b = c" in out


def test_planes_as_json(capsys: pytest.CaptureFixture[str]) -> None:
    found = answer(
        capsys, "planes", "--cell", CELL, "--centring", "F", "--hkl", "0,0,1", "--hkl", "0,1,-1", "-1,1,0"
    )
    assert [plane["hkl"] for plane in found["planes"]] == [[0, 0, 1], [0, 1, -1], [-1, 1, 0]]
    assert [plane["lattice_mirror"] for plane in found["planes"]] == [True] * 3
    assert found["planes"][0]["normal_row"]["twin_index"] == 1
    assert [round(angle["between_normals"]["value"], 6) for angle in found["angles"]] == [135, 90, 60]
    assert found["finding"]["point_group"] == {"hermann_mauguin": "m-3m", "schoenflies": "Oh"}
    assert found["cell"]["uncertainties"][0] == pytest.approx(0.002)


def test_planes_within_the_uncertainty(capsys: pytest.CaptureFixture[str]) -> None:
    words = ("--cell", "5.1,7.2,9.3,90,90.05(3),90", "--hkl", "100", "010", "001")
    found = answer(capsys, "planes", *words)
    assert found["finding"]["kind"] == "open"
    assert found["finding_within_uncertainty"]["point_group"]["hermann_mauguin"] == "mmm"
    assert "within the uncertainty of the cell: Closes as mmm" in run(capsys, "planes", *words)[1]


def test_four_indices_and_a_table(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    table = tmp_path / "planes.csv"
    words = [
        "planes",
        "--cell",
        "4.9,4.9,5.4,90,90,120",
        "--hkl",
        "1,0,-1,0",
        "-1-120",
        "0001",
        "--csv",
        str(table),
    ]
    status, _, err = run(capsys, *words)
    assert status == 0
    assert "planes.csv-metadata.json" in err
    assert [row["plane"] for row in rows(table)] == ["(10-10)", "(-1-120)", "(0001)"]
    assert {row["exact"] for row in rows(table)} == {"true"}


def test_cell_in_every_way_of_giving_it(capsys: pytest.CaptureFixture[str], files: Path) -> None:
    cif = str(files / "k7.cif")
    ways = [
        ["cell", CELL, "--centring", "F"],
        ["cell", "--cell", CELL, "--centring", "F"],
        ["cell", "5.431(2)", "5.431(2)", "5.431(2)", "90", "90", "90", "--centring", "F"],
        ["cell", cif],
        ["cell", "--cif", cif, "--block", "K-7"],
    ]
    for words in ways:
        found = answer(capsys, *words)
        assert found["exact"]["holohedry"] == "m-3m"
        assert found["exact"]["conventional_cell"]["bravais_type"] == "cF"
        assert len(found["mirrors"]) == 9
        assert found["finding"]["order"] == 48
    assert answer(capsys, "cell", cif)["file"]["point_group"] == "m-3m"
    assert "space group  F m -3 m (number 225)" in run(capsys, "cell", cif)[1]


def test_cell_step_by_step(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    table = tmp_path / "mirrors.csv"
    words = ["cell", "5.00(1),8.67(1),7.00(1),90,90,90", "--centring", "C", "--csv", str(table)]
    status, out, _ = run(capsys, *words)
    assert status == 0
    assert out.startswith("The lattice has symmetry mmm (oS) exactly; within 3° it has 6/mmm (hP)")
    assert [row["symmetry"] for row in rows(table)] == ["exact"] * 3 + ["nearly"] * 4
    strict = answer(capsys, *words[:4], "--tolerance", "0.01")
    assert len(strict["mirrors"]) == 3
    assert strict["within_tolerance"]["holohedry"] == "mmm"


def test_fit(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    status, out, err = run(capsys, "fit", "59.8(3)", "90.1(2)", "44.6(4)")
    assert (status, err) == (0, "")
    assert out.splitlines()[0] == (
        "Fits m-3m (B3) at 60°, 90°, 45°: χ² = 1.69 for 3 angles, probability 0.64."
    )
    table = tmp_path / "fit.csv"
    words = ["fit", "59.8(3) 90.1(2) 44.6(4)", "--most", "4", "--csv", str(table)]
    found = answer(capsys, *words)
    assert found["candidates"][0]["degrees"] == [60, 90, 45]
    assert found["candidates"][0]["pulls"] == pytest.approx([-2 / 3, 0.5, -1])
    assert found["tied_with_best"] == []
    assert [row["symbol"] for row in rows(table)] == [
        one["point_group"]["hermann_mauguin"] for one in found["candidates"]
    ]
    assert answer(capsys, "fit", "59.8", "90.1", "44.6", "--sigma", "0.3")["notes"] == []
    assert run(capsys, "fit", "59.8", "90.1", "44.6")[2].count("note:") == 3


def test_compare(capsys: pytest.CaptureFixture[str], files: Path) -> None:
    points = str(files / "points.csv")
    found = answer(capsys, "compare", points, "--group", "m-3m", "--tolerance", "0.01")
    assert found["subgroup"] == "m-3m"
    assert found["sentence"].startswith("The list obeys m-3m: all 48 operations within 0.01 units")
    first, second = files / "operations.csv", files / "matches.csv"
    words = ["--tolerance", "0.003", "--csv", str(first), "--matches", str(second)]
    status, out, err = run(capsys, "compare", points, "--group", "-43m", *words)
    assert status == 0
    assert "operations of -43m survive within 0.003 units" in out
    assert err.count("wrote") == 4
    assert len(rows(first)) == 24
    assert len(rows(second)) == 24 * 6
    assert "turned by" in run(capsys, "compare", points, "--group", "Oh", "--refine")[1]


def test_compare_names_what_it_cannot_read(capsys: pytest.CaptureFixture[str], files: Path) -> None:
    bad = str(files / "bad.csv")
    status, out, err = run(capsys, "compare", bad, "--group", "m-3m")
    assert (status, out) == (2, "")
    assert 'line 5, "A4,0,minus,0"' in err
    assert err.count("\n") == 1
    status, out, err = run(capsys, "compare", bad, "--group", "m-3m", "--skip-unreadable")
    assert status == 0
    assert "rows left out because they cannot be read: line 5" in err
    assert (
        answer(capsys, "compare", bad, "--group", "m-3m", "--skip-unreadable")["unreadable"][0]["line"] == 5
    )


def test_compare_in_a_cell_of_a_file(capsys: pytest.CaptureFixture[str], files: Path) -> None:
    (files / "fractions.csv").write_text("x,y,z\n0.1,0,0\n-0.1,0,0\n0,0.1,0\n0,-0.1,0\n0,0,0.1\n0,0,-0.1\n")
    words = ["compare", str(files / "fractions.csv"), "--group", "m-3m", "--cif", str(files / "k7.cif")]
    assert answer(capsys, *words)["coordinates"][0] == pytest.approx([0.5431, 0, 0])


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["planes", "--hkl", "100"], "a cell is needed"),
        (["planes", "--cell", "5,5,5,90,90,90"], "--hkl"),
        (["planes", "--cell", "5,5,5,90,90", "--hkl", "100"], "5 constants"),
        (["planes", "--cell", "-5,5,5,90,90,90", "--hkl", "100"], "a of the cell: -5"),
        (["planes", "--cell", "5,5,5,90,90,90", "--hkl", "1,x,0"], '"1,x,0"'),
        (["planes", "--cell", "5,5,5,90,90,90", "--hkl", "1,0,-1,0"], "four indices are for hexagonal axes"),
        (["planes", "--cell", "5,5,5,90,90,90", "--hkl", "100", "-100"], "the same mirror twice"),
        (["planes", "--cell", "5,5,5,90,90,90", "--centring", "Q", "--hkl", "100"], 'centring "Q"'),
        (["planes", "--cell", "5,5,5,90,90,90", "--block", "K-7", "--hkl", "100"], "--block"),
        (["cell"], "a cell is needed"),
        (["cell", "nowhere.cif"], "nowhere.cif"),
        (["cell", "{damaged}"], 'line 6: item _cell_angle_beta: "ninety"'),
        (["cell", "{k7}", "--block", "K-9"], 'no data block "K-9"'),
        (["cell", "{k7}", "--cell", "5,5,5,90,90,90"], "in one way"),
        (["cell", "5,5,5,90,90,90", "--tolerance", "20"], "degrees from 0 to 10"),
        (["cell", "5,5,5,90,90,90", "--tolerance", "x"], "--tolerance"),
        (["cell", "5,5,5,90,90,90", "--csv", "no/such/folder/x.csv"], "cannot be written"),
        (["fit", "59.8(3)", "90.1(2)"], "2 angles fit no number of mirrors"),
        (["fit", "59.8(3)", "6o", "90.1(2)"], "angle 2 of 3"),
        (["fit", "-59.8(3)"], "negative"),
        (["fit", "60", "60", "90"], "no angle has an uncertainty"),
        (["fit", "60(1)", "--sigma", "-1"], "uncertainty -1"),
        (["compare", "nowhere.csv", "--group", "m-3m"], "nowhere.csv"),
        (["compare", "{points}", "--group", "m-3x"], "m-3x"),
        (["compare", "{points}"], "--group"),
        (["compare", "{points}", "--group", "m-3m", "--tolerance", "0"], "tolerance 0"),
        (["compare", "{points}", "--group", "m-3m", "--refine", "--search"], "not allowed with"),
        (["compare", "{points}", "--group", "6/mmm", "--cell", "5,5,5,90,90,90"], "do not have the symmetry"),
    ],
)
def test_bad_input_is_one_line_and_status_2(
    capsys: pytest.CaptureFixture[str], files: Path, words: list[str], said: str
) -> None:
    places = {
        "damaged": files / "damaged.cif",
        "k7": files / "k7.cif",
        "points": files / "points.csv",
    }
    status, out, err = run(capsys, *(word.format(**places) for word in words))
    assert (status, out) == (2, "")
    assert said in err
    assert err.count("\n") == 1


def test_no_window_library_is_loaded(files: Path) -> None:
    code = (
        "import sys; from mirrorlab.command import main\n"
        f"main(['cell', {str(files / 'k7.cif')!r}]); main(['fit', '59.8(3)', '90.1(2)', '44.6(4)'])\n"
        f"main(['compare', {str(files / 'points.csv')!r}, '--group', 'm-3m', '--refine'])\n"
        "heavy = {'PySide6', 'pyqtgraph', 'OpenGL', 'ezdxf', 'numba', 'trimesh'}\n"
        "print('LOADED', sorted(heavy & set(sys.modules)))"
    )
    quiet = {k: v for k, v in os.environ.items() if k not in ("DISPLAY", "WAYLAND_DISPLAY")}
    done = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=False, timeout=120, env=quiet
    )
    assert done.returncode == 0, done.stderr
    assert done.stdout.splitlines()[-1] == "LOADED []"


def test_a_compared_list_as_a_stereogram(capsys, files):
    out = files / "stereogram.svg"
    words = ("compare", str(files / "points.csv"), "--group", "m-3m")
    assert run(capsys, *words, "--picture", str(out))[0] == 0
    assert out.read_text(encoding="utf-8").startswith("<?xml")
    status, _, said = run(capsys, *words, "--picture", str(files / "s.txt"))
    assert status == 2
    assert "a picture ends in" in said
    assert run(capsys, *words, "--net", "wulff")[0] == 2
