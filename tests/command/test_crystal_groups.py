"""The verbs group, form and candidates as a person meets them."""

from __future__ import annotations

import csv
import json
import subprocess
import sys
from pathlib import Path

import pytest

from mirrorlab.command import main


def run(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, str, str]:
    try:
        status = main(words)
    except SystemExit as leave:
        status = int(leave.code or 0)
    captured = capsys.readouterr()
    return status, captured.out, captured.err


def read(path: Path) -> list[dict[str, str]]:
    with path.open(newline="", encoding="utf-8") as handle:
        return list(csv.DictReader(handle))


def test_a_symbol_that_begins_with_a_minus(capsys):
    status, out, err = run(capsys, "group", "-43m")
    assert (status, err) == (0, "")
    assert out.splitlines()[0].split() == ["-43m", "Td", "order", "24", "cubic"]
    assert "-4+ [001]" in out
    assert ".3m" in out


def test_group_as_json(capsys):
    status, out, _ = run(
        capsys, "group", "31m", "--json", "--forms", "--subgroups", "--point", "-0.1,0.2,0.3"
    )
    found = json.loads(out)
    assert status == 0
    assert (found["hermann_mauguin"], found["setting"], found["order"]) == ("3m", "31m", 6)
    assert [row["site_symmetry"] for row in found["positions"]] == ["1", "..m", "3.m"]
    assert found["subgroups_among_the_32"] == ["1", "m", "3"]
    assert [row["symbol"] for row in found["lattices"]["required"]] == ["hR", "hP"]
    assert {"trigonal pyramid", "ditrigonal pyramid"} <= {row["name"] for row in found["forms"]}
    assert found["orbit"]["multiplicity"] == 6
    assert len(found["operations"]) == 6


def test_points_as_csv_with_a_cell(capsys, tmp_path):
    target = tmp_path / "points.csv"
    words = (
        "group",
        "-3m",
        "--point",
        "0.23,0.1,0.3",
        "--cell",
        "4.9,4.9,5.4,90,90,120",
        "--csv",
        str(target),
    )
    status, _, err = run(capsys, *words)
    assert status == 0
    assert "wrote" in err
    rows = read(target)
    assert len(rows) == 12
    first = rows[0]
    assert float(first["x_cartesian"]) == pytest.approx(4.9 * (0.23 - 0.05))
    assert float(first["z_cartesian"]) == pytest.approx(5.4 * 0.3)
    about = json.loads((tmp_path / "points.csv-metadata.json").read_text(encoding="utf-8"))
    assert "hexagonal axes" in json.dumps(about)


def test_operations_as_csv(capsys, tmp_path):
    target = tmp_path / "operations.csv"
    assert run(capsys, "group", "m-3m", "--csv", str(target))[0] == 0
    rows = read(target)
    assert len(rows) == 48
    assert rows[0]["triplet"] == "x,y,z"


def test_one_form(capsys):
    status, out, _ = run(capsys, "form", "m-3m", "1,1,0")
    assert status == 0
    assert "rhomb-dodecahedron" in out
    assert "60.0000°" in out


def test_a_combination_with_negative_faces(capsys, tmp_path):
    target = tmp_path / "faces.csv"
    words = ("form", "-43m", "111", "-1-1-1:1.3", "100:1.1", "--csv", str(target), "--json")
    status, out, _ = run(capsys, *words)
    found = json.loads(out)
    assert status == 0
    assert [row["name"] for row in found["forms"]] == ["tetrahedron", "tetrahedron", "cube"]
    assert [row["distance"] for row in found["forms"]] == [1.0, 1.3, 1.1]
    assert sum(row["area_share"] for row in found["forms"]) == pytest.approx(1)
    assert found["closed"] is True
    rows = read(target)
    assert len(rows) == 14
    assert rows[4]["face"] == "(-1-1-1)"


def test_four_indices_and_a_picture(capsys, tmp_path):
    target = tmp_path / "solid.svg"
    words = ("form", "6/mmm", "10-10", "0,0,0,1:1.6", "1,0,-1,1:1.5", "--picture", str(target))
    status, out, err = run(capsys, *words)
    assert status == 0
    assert "hexagonal dipyramid" in out
    assert str(target) in err
    assert target.read_text(encoding="utf-8").lstrip().startswith("<?xml")


def test_a_stereogram_with_its_net(capsys, tmp_path):
    target = tmp_path / "stereogram.svg"
    status, _, _ = run(capsys, "group", "4/mmm", "--picture", str(target), "--net", "schmidt")
    assert status == 0
    assert target.stat().st_size > 1000


def test_candidates_of_angles(capsys):
    status, out, _ = run(capsys, "candidates", "60")
    assert status == 0
    assert "A centre of symmetry decides between 3m and -3m: only -3m has one." in out


def test_candidates_as_json_and_csv(capsys, tmp_path):
    target = tmp_path / "candidates.csv"
    status, out, _ = run(capsys, "candidates", "--group", "-42m", "--json", "--csv", str(target))
    found = json.loads(out)
    assert status == 0
    assert [row["hermann_mauguin"] for row in found["exactly"]] == ["mm2", "-42m"]
    assert found["decisions"][0]["present_in"] == "-42m"
    rows = read(target)
    assert [row["group"] for row in rows if row["fits"] == "exactly"] == ["mm2", "-42m"]


@pytest.mark.parametrize(
    ("words", "says"),
    [
        (("group", "xx"), '"xx": not a point group'),
        (("group", ""), "not a point group"),
        (("group", "Fm-3m"), "of a space group, write the point group"),
        (("group", "D500h"), "up to order 1440"),
        (("group", "m-3m", "--point", "1,2"), "three finite coordinates"),
        (("group", "m-3m", "--cell", "1,1,2,90,90,90"), "do not have the symmetry m-3m"),
        (("group", "mmm", "--cell", "1,1,2"), "six constants"),
        (("group", "5m", "--forms"), "no lattice"),
        (("group", "mmm", "--net", "wulff"), "--picture"),
        (("form", "m-3m", "111", "--net", "wulff"), "--picture"),
        (("form", "m-3m", "1,1"), "2 numbers"),
        (("form", "m-3m", "1,0,-1,0"), "hexagonal axes"),
        (("form", "m-3m", "111:x"), "not a positive number"),
        (("form", "mmm", "100", "-100"), "same form"),
        (("candidates", "60", "60", "60"), "tube"),
        (("candidates", "--family", "A4"), "rank 4"),
        (("candidates",), "one way"),
        (("candidates", "60", "--group", "3m"), "one way"),
    ],
)
def test_bad_input_is_one_line_and_status_2(capsys, tmp_path, words, says):
    target = tmp_path / "never.csv"
    status, out, err = run(capsys, *words, "--csv", str(target))
    assert (status, out) == (2, "")
    assert says in err
    assert len(err.splitlines()) == 1
    assert not list(tmp_path.iterdir())


def test_a_wrong_picture_ending_leaves_no_file(capsys, tmp_path):
    words = (
        "form",
        "m-3m",
        "111",
        "--csv",
        str(tmp_path / "faces.csv"),
        "--picture",
        str(tmp_path / "solid.xyz"),
    )
    status, _, err = run(capsys, *words)
    assert status == 2
    assert ".svg" in err
    assert not list(tmp_path.iterdir())


def test_no_qt_without_a_picture():
    code = (
        "import sys; from mirrorlab.command import main; main(['form', '-43m', '111', '--json']); "
        "assert not [m for m in sys.modules if m.startswith(('PySide6', 'pyqtgraph'))]"
    )
    subprocess.run([sys.executable, "-c", code], check=True, stdout=subprocess.DEVNULL)


def test_images_as_fractions_of_a_cell(capsys, tmp_path):
    target = tmp_path / "fractions.csv"
    cell = ("--cell", "3,3,5,90,90,120")
    status, _, _ = run(capsys, "orbit", "90", "90", "60", "--heights", "1,2,3", *cell, "--csv", str(target))
    assert status == 0
    rows = read(target)
    assert len(rows) == 12
    # Heights 1 and 2 … are lengths in the unit of the cell: the mirror across c stands at z = 1/5 of it.
    assert {round(abs(float(row["z"])), 9) for row in rows} == {0.2}
    status, out, _ = run(capsys, "orbit", "90", "90", "60", "--heights", "1,2,3", *cell, "--json")
    found = json.loads(out)
    assert (status, found["group"]) == (0, "-6m2")
    assert found["points"][3] == [float(rows[3][name]) for name in "xyz"]


def test_a_cell_without_the_symmetry_is_refused(capsys, tmp_path):
    target = tmp_path / "never.csv"
    words = (
        "orbit",
        "90",
        "60",
        "45",
        "--heights",
        "1,2,3",
        "--cell",
        "3,3,5,90,90,120",
        "--csv",
        str(target),
    )
    status, out, err = run(capsys, *words)
    assert (status, out) == (2, "")
    assert "m-3m" in err
    assert not list(tmp_path.iterdir())
