"""Files against the standards they claim, read by libraries that are not ours."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import numpy as np
import pytest

from mirrorlab import Arrangement
from mirrorlab.files.orbit_table import write_orbit, write_points


@pytest.fixture
def written(tmp_path: Path) -> tuple[Path, Path]:
    arrangement = Arrangement.from_angles(["90", "60", "36"])
    return write_orbit(tmp_path / "images.csv", arrangement.orbit(heights=[1, 2, 3]), arrangement.finding())


def test_a_table_as_rfc_4180_asks(written: tuple[Path, Path]) -> None:
    """RFC 4180, section 2: CRLF after each record, a header, as many fields in each record; read by NumPy and csv."""
    raw = written[0].read_bytes()
    records = raw.split(b"\r\n")
    assert records[-1] == b""
    assert b"\n" not in b"".join(records)
    with written[0].open(newline="") as stream:
        rows = list(csv.reader(stream, strict=True))
    assert {len(row) for row in rows} == {7}
    read = np.loadtxt(written[0], delimiter=",", skiprows=1, usecols=(1, 2, 3))
    assert read.tolist() == [[float(cell) for cell in row[1:4]] for row in rows[1:]]


def test_metadata_as_the_recommendation_asks(written: tuple[Path, Path]) -> None:
    """W3C, Metadata Vocabulary for Tabular Data (2015), 5.3 to 5.6, and Model for Tabular Data, 5.3: the file is found
    at the table's own address with "-metadata.json"; names are unique; datatypes are XML Schema's (from memory).
    """
    table, beside = written
    assert beside.name == f"{table.name}-metadata.json"
    about = json.loads(beside.read_text(encoding="utf-8"))
    assert about["@context"] == "http://www.w3.org/ns/csvw"
    assert about["url"] == table.name
    columns = about["tableSchema"]["columns"]
    names = [column["name"] for column in columns]
    assert len(set(names)) == len(names) == 7
    assert not any(name.startswith("_") for name in names)
    assert {column["datatype"] for column in columns} <= {"integer", "double", "string", "boolean"}
    allowed = {"@context", "url", "dialect", "notes", "tableSchema"}
    assert {key for key in about if ":" not in key} <= allowed  # others must be prefixed, as dc:title is
    assert all(
        {key for key in column if ":" not in key} <= {"name", "titles", "datatype"} for column in columns
    )


def test_coordinates_as_numpy_reads_them(tmp_path: Path) -> None:
    """NumPy (reference library): the .npy format, version 1, without pickled objects."""
    orbit = Arrangement.from_angles(["90", "60", "36"]).orbit(heights=[1, 2, 3])
    read = np.load(write_points(tmp_path / "o.npy", orbit), allow_pickle=False)
    assert (read.shape, read.dtype) == ((120, 3), np.float64)
    assert (read == orbit.points).all()
