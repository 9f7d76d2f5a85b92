"""CSV and its metadata, NumPy files, and writing whole."""

from __future__ import annotations

import csv
import json
import os
import re
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from mirrorlab import Arrangement
from mirrorlab.files.orbit_table import STRETCH, orbit_rows, write_orbit, write_points
from mirrorlab.files.table import Column, write_table
from mirrorlab.files.whole import FileError, make_whole, write_whole

LANTERN = Arrangement.from_angles(["90", "60", "36"])


def test_numbers_read_back_to_the_same_double(tmp_path: Path) -> None:
    orbit = LANTERN.orbit(heights=[1, 2, 3])
    table, _ = write_orbit(tmp_path / "images.csv", orbit, LANTERN.finding())
    with table.open(newline="") as handle:
        rows = list(csv.DictReader(handle))
    assert list(rows[0]) == ["image", "x", "y", "z", "parity", "depth", "word"]
    read = np.array([[float(row[c]) for c in "xyz"] for row in rows])
    assert (read == orbit.points).all()
    assert [row["word"] for row in rows] == orbit.words()
    assert [int(row["depth"]) for row in rows] == orbit.depth.tolist()


def test_a_long_orbit_is_written_in_stretches_that_join() -> None:
    orbit = Arrangement.from_family("B6").orbit(place="centre")
    rows = list(orbit_rows(orbit))
    assert len(rows) == 46080 > 2 * STRETCH
    assert [row[0] for row in rows] == list(range(1, 46081))
    assert [row[1:-3] for row in rows] == orbit.points.tolist()
    assert [row[-1] for row in rows] == orbit.words()


def test_lines_end_as_rfc_4180_has_them(tmp_path: Path) -> None:
    table, _ = write_orbit(tmp_path / "images.csv", LANTERN.orbit(place="centre"), LANTERN.finding())
    raw = table.read_bytes()
    assert raw.count(b"\r\n") == raw.count(b"\n") == 121


@pytest.mark.parametrize(("family", "names"), [("A2", ["x", "y"]), ("D4", ["x1", "x2", "x3", "x4"])])
def test_coordinate_columns_follow_the_rank(tmp_path: Path, family: str, names: list[str]) -> None:
    arrangement = Arrangement.from_family(family)
    table, _ = write_orbit(tmp_path / "o.csv", arrangement.orbit(place="centre"), arrangement.finding())
    header = table.read_text().splitlines()[0].split(",")
    assert header == ["image", *names, "parity", "depth", "word"]


def test_metadata_states_frame_seed_group_and_units(tmp_path: Path) -> None:
    """W3C, Metadata Vocabulary for Tabular Data: context, url, tableSchema with one entry a column."""
    orbit = LANTERN.orbit(heights=[1, 2, 3])
    table, beside = write_orbit(tmp_path / "images.csv", orbit, LANTERN.finding())
    about = json.loads(beside.read_text())
    assert beside.name == "images.csv-metadata.json"
    assert about["@context"] == "http://www.w3.org/ns/csvw"
    assert about["url"] == table.name
    header = table.read_text().splitlines()[0].split(",")
    assert [column["name"] for column in about["tableSchema"]["columns"]] == header
    assert {column["datatype"] for column in about["tableSchema"]["columns"]} == {
        "integer",
        "double",
        "string",
    }
    notes = {note["name"]: note["value"] for note in about["notes"]}
    assert notes["frame"] == orbit.frame
    assert notes["seed"] == orbit.seed.tolist()
    assert notes["group"] == "H3"
    assert notes["units"]


def test_cells_with_commas_and_quotes(tmp_path: Path) -> None:
    table, _ = write_table(tmp_path / "t.csv", [Column("a"), Column("b")], [['x, "y"', None]], {})
    with table.open(newline="") as handle:
        assert list(csv.reader(handle)) == [["a", "b"], ['x, "y"', ""]]


def test_values_are_written_as_xml_schema_has_them(tmp_path: Path) -> None:
    """W3C, XML Schema Part 2: lexical forms of boolean and double."""
    row = [
        np.float64(0.1),
        np.int64(7),
        True,
        np.bool_(False),
        float("nan"),
        float("inf"),
        float("-inf"),
        1e-300,
    ]
    table, _ = write_table(tmp_path / "t.csv", [Column(c) for c in "abcdefgh"], [row], {})
    assert table.read_text().splitlines()[1] == "0.1,7,true,false,NaN,INF,-INF,1e-300"


def test_column_names_fit_a_uri_template(tmp_path: Path) -> None:
    """W3C, Metadata Vocabulary for Tabular Data, 5.6: the name of a column is a variable name of RFC 6570."""
    _, beside = write_table(tmp_path / "t.csv", [Column("4cos² α"), Column("word")], [], {})
    columns = json.loads(beside.read_text())["tableSchema"]["columns"]
    assert [column["titles"] for column in columns] == ["4cos² α", "word"]
    assert all(re.fullmatch(r"[A-Za-z0-9][A-Za-z0-9_]*", column["name"]) for column in columns)


@given(
    st.lists(st.tuples(st.floats(allow_nan=False), st.text(st.characters(exclude_categories=["Cs", "Cc"]))))
)
def test_any_row_reads_back(tmp_path_factory: pytest.TempPathFactory, rows: list[tuple[float, str]]) -> None:
    target = tmp_path_factory.getbasetemp() / "rows.csv"
    write_table(target, [Column("x", "double"), Column("word")], rows, {})
    with target.open(encoding="utf-8", newline="") as stream:
        read = list(csv.reader(stream))
    assert [(float(x), word) for x, word in read[1:]] == rows


def test_numpy_file(tmp_path: Path) -> None:
    orbit = LANTERN.orbit(heights=[1, 2, 3])
    assert (np.load(write_points(tmp_path / "o.npy", orbit)) == orbit.points).all()


def test_a_failure_leaves_the_old_file_and_nothing_else(tmp_path: Path) -> None:
    target = write_whole(tmp_path / "a.txt", "old")

    def fail(beside: Path) -> None:
        beside.write_text("half")
        msg = "no space left"
        raise OSError(28, msg)

    with pytest.raises(FileError, match="no space left"):
        make_whole(target, fail)
    assert target.read_text() == "old"
    assert os.listdir(tmp_path) == ["a.txt"]


def test_a_table_and_its_metadata_come_together_or_not_at_all(tmp_path: Path) -> None:
    write_table(tmp_path / "t.csv", [Column("old")], [], {})
    (tmp_path / "u.csv-metadata.json").mkdir()
    with pytest.raises(FileError, match=r"u\.csv-metadata\.json: cannot be written"):
        write_table(tmp_path / "u.csv", [Column("new")], [], {})
    assert sorted(os.listdir(tmp_path)) == ["t.csv", "t.csv-metadata.json", "u.csv-metadata.json"]


def test_an_interruption_leaves_nothing_behind(tmp_path: Path) -> None:
    def stop(draft: Path) -> None:
        draft.write_text("half")
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        make_whole(tmp_path / "a.txt", stop)
    assert os.listdir(tmp_path) == []


def test_a_file_with_a_very_long_name(tmp_path: Path) -> None:
    assert write_whole(tmp_path / ("a" * 250 + ".csv"), "x").read_text() == "x"


def test_a_folder_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(FileError, match="cannot be written"):
        write_whole(tmp_path / "no" / "a.txt", "x")


def test_a_new_file_has_the_usual_permissions(tmp_path: Path) -> None:
    mask = os.umask(0o022)
    try:
        assert write_whole(tmp_path / "a.txt", "x").stat().st_mode & 0o777 == 0o644
    finally:
        os.umask(mask)
