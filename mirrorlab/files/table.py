"""Tables as CSV (RFC 4180) with a CSV-on-the-Web metadata file beside them.

References
----------
.. [1] RFC 4180, Common Format and MIME Type for CSV Files.
.. [2] W3C Recommendation, Metadata Vocabulary for Tabular Data (2015).
"""

from __future__ import annotations

import csv
import json
import math
import os
import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TextIO

import numpy as np

from mirrorlab.files.whole import make_together

PLAIN = (str, int)


@dataclass(frozen=True, slots=True)
class Column:
    """One column: its name, its datatype ("integer", "double", "string"), and what it holds."""

    name: str
    datatype: str = "string"
    description: str = ""
    unit: str = ""


def write_table(
    path: str | os.PathLike[str],
    columns: Sequence[Column],
    rows: Iterable[Sequence[object]],
    about: Mapping[str, object],
) -> tuple[Path, Path]:
    """Write a table and its metadata; both whole.

    Parameters
    ----------
    path : path-like
        The CSV file; the metadata file is named after it, with ``-metadata.json`` added.
    columns : sequence of Column
    rows : iterable of sequences
        Floats are written so that they read back to the same double.
    about : mapping
        What the table is of, in plain JSON: frame, seed, group and the like.

    Returns
    -------
    table, metadata : Path
    """
    target = Path(path)
    content = json.dumps(metadata(target.name, columns, about), indent=2, ensure_ascii=False, allow_nan=False)

    def write(draft: Path) -> None:
        with draft.open("w", encoding="utf-8", newline="") as stream:
            _write_rows(stream, columns, rows)

    def describe(draft: Path) -> None:
        draft.write_bytes(f"{content}\n".encode())

    beside = target.with_name(target.name + "-metadata.json")
    table_path, metadata_path = make_together([(target, write), (beside, describe)])
    return table_path, metadata_path


def _write_rows(stream: TextIO, columns: Sequence[Column], rows: Iterable[Sequence[object]]) -> None:
    writer = csv.writer(stream, lineterminator="\r\n")
    writer.writerow([column.name for column in columns])
    # the writer writes plain numbers and texts as wanted; the call of `_cell` would take as long as the rest
    writer.writerows(
        [
            value if type(value) in PLAIN or (type(value) is float and math.isfinite(value)) else _cell(value)
            for value in row
        ]
        for row in rows
    )


def _cell(value: object) -> str:
    if isinstance(value, float | np.floating):
        number = float(value)
        if math.isfinite(number):
            return repr(number)
        return (
            "NaN" if math.isnan(number) else ("INF" if number > 0 else "-INF")
        )  # as XML Schema writes doubles
    if isinstance(value, bool | np.bool_):
        return "true" if value else "false"
    return "" if value is None else str(value)


def metadata(name: str, columns: Sequence[Column], about: Mapping[str, object]) -> dict[str, object]:
    """The CSV-on-the-Web description of a table."""
    described = []
    for column in columns:
        name_in_uri = re.sub(r"[^A-Za-z0-9_]", "_", column.name)  # a name is part of a URI template there
        entry: dict[str, object] = {"name": name_in_uri, "titles": column.name, "datatype": column.datatype}
        text = column.description + (f" ({column.unit})" if column.unit else "")
        if text:
            entry["dc:description"] = text
        described.append(entry)
    notes = [{"name": key, "value": value} for key, value in about.items()]
    return {
        "@context": "http://www.w3.org/ns/csvw",
        "url": name,
        "dialect": {"delimiter": ",", "header": True, "lineTerminators": ["\r\n"], "encoding": "utf-8"},
        "dc:title": str(about.get("title", name)),
        "notes": notes,
        "tableSchema": {"columns": described},
    }
