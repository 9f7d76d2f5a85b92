"""Lists of points or face poles from CSV: every row read, or named with its line and the reason.

Columns by their names, in any order: ``label`` (or name, point, site, face, image), one of ``x, y, z`` (points),
``h, k, l`` (indices of faces) or ``azimuth, polar`` (poles in degrees: from x towards y, and from z), and where wanted
``uncertainty`` (or sigma, su) and ``kind`` (or type, element): points of different kinds are never matched. Without a
row of names: three numbers, a label in front of them or not, an uncertainty behind them or not. Commas, semicolons,
tabs or spaces part the columns; a decimal comma is read where commas do not. Lines that start with # are remarks.
"""

from __future__ import annotations

import csv
import os
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.file_bytes import file_bytes
from mirrorlab.crystal.measured import Measured, NumberError, parse_measured
from mirrorlab.crystal.operations import CrystalError

Array = NDArray[np.float64]

MOST_POINTS = 5000
LARGEST_LIST = 8_000_000
"""Bytes of a list of so many points with long labels, ten times over."""

LARGEST_COORDINATE = 1e9
"""Coordinates beyond are slips of the keyboard, and their squares would swamp the others."""

COORDINATES = {
    ("x_cartesian", "y_cartesian", "z_cartesian"): "points",
    ("x", "y", "z"): "points",
    ("h", "k", "l"): "faces",
    ("azimuth", "polar"): "poles",
}
_ROLES = {
    "label": ("label", "name", "point", "site", "face", "image", "id", "atom"),
    "kind": ("kind", "type", "element", "species"),
    "uncertainty": ("uncertainty", "sigma", "su", "s.u.", "σ"),
}
ACCEPTED = (
    "a row is x,y,z or h,k,l or azimuth,polar under a row of names, or three numbers without one; "
    "label, kind and uncertainty may be added"
)


class PointListError(CrystalError):
    """A list that cannot be read; the message names the lines."""


@dataclass(frozen=True, slots=True)
class Unreadable:
    """A row that cannot be read: its line in the file, its text, and why."""

    line: int
    text: str
    reason: str

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {"line": self.line, "text": self.text, "reason": self.reason}


@dataclass(frozen=True, eq=False)
class PointList:
    """Points or face poles as they were read.

    Attributes
    ----------
    source : str
        Name of the file.
    what : str
        "points" (x, y, z), "faces" (h, k, l) or "poles" (unit vectors made of azimuth and polar angle).
    values : ndarray, shape (n, 3)
    uncertainties : ndarray, shape (n,)
        Standard uncertainties, 0 where none was given: in the unit of the coordinates, in degrees for faces and poles.
    labels, kinds : tuple of str
        The line number stands for a label that was not given.
    lines : tuple of int
        Line in the file, from 1.
    unreadable : tuple of Unreadable
        Rows that were left out.
    notes : tuple of str
        Columns that were not used.
    """

    source: str
    what: str
    values: Array
    uncertainties: Array
    labels: tuple[str, ...]
    kinds: tuple[str, ...]
    lines: tuple[int, ...]
    unreadable: tuple[Unreadable, ...] = ()
    notes: tuple[str, ...] = ()

    @property
    def directions(self) -> bool:
        """Whether only directions count."""
        return self.what != "points"

    def complete(self) -> PointList:
        """This list, when every row could be read.

        Raises
        ------
        PointListError
            Names the lines that could not.
        """
        if self.unreadable:
            shown = "; ".join(f'line {one.line}, "{one.text}": {one.reason}' for one in self.unreadable[:5])
            more = f"; and {len(self.unreadable) - 5} more lines" if len(self.unreadable) > 5 else ""
            rows = f"{len(self.unreadable)} row{'s' if len(self.unreadable) > 1 else ''}"
            msg = f"{self.source}: {rows} cannot be read: {shown}{more}"
            raise PointListError(msg)
        return self


def read_points(path: str | os.PathLike[str]) -> PointList:
    """Read a list from a CSV file; see `parse_points`."""
    content = file_bytes(path, LARGEST_LIST, f"at most {MOST_POINTS} points", PointListError)
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError:
        text = content.decode("latin-1")
    return parse_points(text, Path(path).name)


def parse_points(text: str, source: str = "list") -> PointList:
    """Read a list of points or poles.

    Returns
    -------
    PointList
        Rows that cannot be read are in its `unreadable`; call `complete` where they must not be.

    Raises
    ------
    PointListError
        No rows, a row of names without coordinates, too many points, or not one row that can be read.
    """
    if "\0" in text:
        msg = f"{source}: a binary file, no list of points"
        raise PointListError(msg)
    rows = list(_rows(text))
    if not rows:
        msg = f"{source}: no rows; {ACCEPTED}"
        raise PointListError(msg)
    names, notes = _header(rows[0], source)
    if names is not None:
        rows = rows[1:]
    if len(rows) > MOST_POINTS:
        msg = f"{source}: {len(rows)} rows; at most {MOST_POINTS} points are compared"
        raise PointListError(msg)
    reader = _Reader(names)
    points, bad = [], []
    for line, cells, raw in rows:
        try:
            points.append((line, *reader.read(cells)))
        except NumberError as error:
            bad.append(Unreadable(line, raw, str(error)))
    if not points:
        first = f'; line {bad[0].line}, "{bad[0].text}": {bad[0].reason}' if bad else ""
        msg = f"{source}: not one row that can be read{first}; {ACCEPTED}"
        raise PointListError(msg)
    return PointList(
        source,
        reader.what,
        np.array([point[1] for point in points]),
        np.array([point[2] for point in points]),
        tuple(point[3] or f"line {point[0]}" for point in points),
        tuple(point[4] for point in points),
        tuple(point[0] for point in points),
        tuple(bad),
        notes,
    )


def _rows(text: str) -> Iterator[tuple[int, list[str], str]]:
    """Line number, cells and text of each row; remarks and empty lines are passed over."""
    lines = text.splitlines()
    first = next((line for line in lines if line.strip() and not line.lstrip().startswith("#")), "")
    part = next((sign for sign in (";", "\t", ",") if sign in first), None)
    for number, line in enumerate(lines, 1):
        raw = line.strip()
        if not raw or raw.startswith("#"):
            continue
        if part is None:
            cells = raw.split()
        else:
            cells = next(csv.reader([raw], delimiter=part, skipinitialspace=True))
            if part != ",":
                cells = [re.sub(r"(?<=\d),(?=\d)", ".", cell) for cell in cells]
        yield number, [cell.strip() for cell in cells], raw


def _header(row: tuple[int, list[str], str], source: str) -> tuple[list[str] | None, tuple[str, ...]]:
    """Names of the columns, or None when the first row holds values; and which columns are not used."""
    line, cells, raw = row
    names = [cell.lower() for cell in cells]
    known = {name for names in _ROLES.values() for name in names} | {n for trio in COORDINATES for n in trio}
    if not any(name in known for name in names) and any(_is_number(cell) for cell in cells):
        return None, ()
    trio = next((trio for trio in COORDINATES if all(name in names for name in trio)), None)
    if trio is None:
        msg = f'{source}, line {line}, "{raw}": no columns x,y,z, h,k,l or azimuth,polar; {ACCEPTED}'
        raise PointListError(msg)
    twice = [name for name in trio if names.count(name) > 1]
    if twice:
        msg = f'{source}, line {line}, "{raw}": column {twice[0]} stands twice'
        raise PointListError(msg)
    used = {*trio, *(next((n for n in words if n in names), "") for words in _ROLES.values())}
    left = [cell for cell, name in zip(cells, names, strict=True) if name not in used]
    return names, (f"columns not used: {', '.join(left)}",) if left else ()


def _is_number(text: str) -> bool:
    try:
        parse_measured(text)
    except NumberError:
        return False
    return True


class _Reader:
    """Reads the cells of one row after another."""

    def __init__(self, names: list[str] | None) -> None:
        self.names = names
        self.trio: tuple[str, ...] = ("x", "y", "z")
        if names is not None:
            self.trio = next(trio for trio in COORDINATES if all(name in names for name in trio))
        self.what = COORDINATES[self.trio]

    def read(self, cells: Sequence[str]) -> tuple[list[float], float, str, str]:
        """Coordinates, uncertainty, label and kind. Raises `NumberError`."""
        of_name = self._named(cells)
        numbers = [self._number(of_name[name], name) for name in self.trio]
        own = [one.uncertainty for one in numbers if one.uncertainty]
        uncertainty = float(np.sqrt(np.mean(np.square(own)))) if own else 0.0
        text = of_name.get("uncertainty", "")
        if text:
            uncertainty = self._number(text, "uncertainty").value
            if uncertainty < 0:
                msg = f"uncertainty {text}: negative"
                raise NumberError(msg)
        values = [one.value for one in numbers]
        if self.what == "poles":
            values = self._unit(*values)
        elif self.what == "faces" and not any(values):
            msg = "no face has all indices 0"
            raise NumberError(msg)
        return values, uncertainty, of_name.get("label", ""), of_name.get("kind", "")

    def _named(self, cells: Sequence[str]) -> dict[str, str]:
        """Cells by name of their column."""
        if self.names is None:
            return _by_position(cells)
        if len(cells) != len(self.names):
            msg = f"{len(cells)} columns where the row of names has {len(self.names)}"
            raise NumberError(msg)
        found = dict(zip(self.names, cells, strict=True))
        for role, words in _ROLES.items():
            name = next((word for word in words if word in found), None)
            if name is not None:
                found[role] = found[name]
        return found

    @staticmethod
    def _number(text: str, name: str) -> Measured:
        if not text:
            msg = f"{name} is empty"
            raise NumberError(msg)
        try:
            read = parse_measured(text)
        except NumberError as error:
            msg = f"{name}: {error}"
            raise NumberError(msg) from None
        if abs(read.value) > LARGEST_COORDINATE:
            msg = f"{name}: {text} is larger than {LARGEST_COORDINATE:g}"
            raise NumberError(msg)
        return read

    @staticmethod
    def _unit(azimuth: float, polar: float) -> list[float]:
        if not 0 <= polar <= 180 or not -360 <= azimuth <= 360:
            msg = "polar lies between 0 and 180 degrees, azimuth between -360 and 360"
            raise NumberError(msg)
        a, p = np.radians([azimuth, polar])
        return [float(np.sin(p) * np.cos(a)), float(np.sin(p) * np.sin(a)), float(np.cos(p))]


def _by_position(cells: Sequence[str]) -> dict[str, str]:
    """Without a row of names: label or not, three numbers, uncertainty or not."""
    count = len(cells)
    labelled = count == 5 or (count == 4 and not _is_number(cells[0]))
    if not 3 <= count <= 5:
        msg = f"{count} columns; without a row of names a row is x,y,z with a label in front or an uncertainty behind"
        raise NumberError(msg)
    found = dict(zip(("x", "y", "z"), cells[labelled : labelled + 3], strict=True))
    if labelled:
        found["label"] = cells[0]
    if count - labelled == 4:
        found["uncertainty"] = cells[-1]
    return found
