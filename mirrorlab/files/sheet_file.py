"""The arrangement file: mirrors as they were typed, the seed, and what the benches keep.

JSON with a name and a version number, checked on reading. A file that does not fit gives a `FileError` that
names the key, what stands there and what is accepted.
"""

from __future__ import annotations

import json
import os
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from mirrorlab.angles import AngleError, AngleSettings
from mirrorlab.files.whole import FileError, write_whole
from mirrorlab.mirrors import Arrangement

FORMAT = "mirrorlab arrangement"
VERSION = 1
MOST_BYTES = 4_000_000
"""A larger file is refused unread: the largest sheet with all its sections stays below a megabyte."""

LARGEST = 1e100
"""Larger coordinates are refused: their squares would overflow."""

SEED_KEYS = ("heights", "point", "place", "rotations")


@dataclass(frozen=True, slots=True, eq=False)
class Sheet:
    """What an arrangement file holds.

    Attributes
    ----------
    arrangement : Arrangement
    name : str
    note : str
    seed : dict
        One of "heights" (list), "point" (list), "place" (str); and "rotations" (bool). May be empty.
    crystal, glass : dict
        Sections of the benches, plain JSON.
    """

    arrangement: Arrangement
    name: str = ""
    note: str = ""
    seed: Mapping[str, Any] = field(default_factory=dict)
    crystal: Mapping[str, Any] = field(default_factory=dict)
    glass: Mapping[str, Any] = field(default_factory=dict)


def sheet_to_text(sheet: Sheet) -> str:
    """A sheet as the text of its file."""
    arrangement = sheet.arrangement
    mirrors: dict[str, Any]
    if arrangement.given_normals and arrangement.normals is not None:
        mirrors = {"normals": arrangement.normals.tolist()}
    else:
        mirrors = {"angles": [angle.text for angle in arrangement.angles]}
    reading = arrangement.settings
    content = {
        "format": FORMAT,
        "version": VERSION,
        "name": sheet.name,
        "note": sheet.note,
        "mirrors": mirrors,
        "reading": {"max_denominator": reading.max_denominator, "sigmas": reading.sigmas},
        "seed": dict(sheet.seed),
        "crystal": dict(sheet.crystal),
        "glass": dict(sheet.glass),
    }
    return json.dumps(content, indent=2, ensure_ascii=False, allow_nan=False) + "\n"


def save_sheet(path: str | os.PathLike[str], sheet: Sheet) -> Path:
    """Write an arrangement file, whole or not at all."""
    return write_whole(path, sheet_to_text(sheet))


def load_sheet(path: str | os.PathLike[str]) -> Sheet:
    """Read an arrangement file.

    Raises
    ------
    FileError
        It cannot be read, is not such a file, is of a newer version, or holds something that does not fit.
    """
    source = Path(path)
    try:
        if source.stat().st_size > MOST_BYTES:
            msg = f"{source}: larger than {MOST_BYTES // 1_000_000} MB; not an arrangement file"
            raise FileError(msg)
        text = source.read_text(encoding="utf-8-sig")  # some editors put a byte order mark before UTF-8
    except OSError as error:
        msg = f"{source}: cannot be read ({error.strerror})"
        raise FileError(msg) from error
    except UnicodeDecodeError as error:
        msg = f"{source}: not text; an arrangement file is JSON in UTF-8"
        raise FileError(msg) from error
    return sheet_from_text(text, str(source))


def sheet_from_text(text: str, where: str = "arrangement") -> Sheet:
    """Read a sheet from the text of its file; `where` stands at the head of messages."""
    try:
        content = json.loads(text, parse_constant=_no_constant)
    except (ValueError, RecursionError) as error:
        msg = f"{where}: not JSON ({error})"
        raise FileError(msg) from error
    if not isinstance(content, dict) or content.get("format") != FORMAT:
        msg = f'{where}: not an arrangement file; it must say "format": "{FORMAT}"'
        raise FileError(msg)
    version = content.get("version")
    if not isinstance(version, int) or isinstance(version, bool) or version < 1:
        msg = f'{where}: "version" is {version!r}; a whole number from 1 to {VERSION} is accepted'
        raise FileError(msg)
    if version > VERSION:
        msg = (
            f"{where}: written by a newer Mirrorlab (file version {version}, this one reads up to {VERSION})"
        )
        raise FileError(msg)
    settings = _reading(_section(content, "reading", where), where)
    return Sheet(
        arrangement=_mirrors(_section(content, "mirrors", where), settings, where),
        name=_words(content, "name", where),
        note=_words(content, "note", where),
        seed=_seed(_section(content, "seed", where), where),
        crystal=_section(content, "crystal", where),
        glass=_section(content, "glass", where),
    )


def _no_constant(name: str) -> float:
    msg = f"{name} is not a JSON number"
    raise ValueError(msg)


def _section(content: dict[str, Any], key: str, where: str) -> dict[str, Any]:
    value = content.get(key, {})
    if not isinstance(value, dict):
        msg = f'{where}: "{key}" is {_short(value)}; an object is accepted'
        raise FileError(msg)
    return value


def _words(content: dict[str, Any], key: str, where: str) -> str:
    value = content.get(key, "")
    if not isinstance(value, str):
        msg = f'{where}: "{key}" is {_short(value)}; a text is accepted'
        raise FileError(msg)
    return value


def _reading(section: dict[str, Any], where: str) -> AngleSettings:
    most, sigmas = section.get("max_denominator", 360), section.get("sigmas", 3.0)
    whole = isinstance(most, int) and not isinstance(most, bool)
    if not whole or not isinstance(sigmas, int | float) or isinstance(sigmas, bool):
        msg = f'{where}: "reading" is {_short(section)}; max_denominator is a whole number, sigmas a number'
        raise FileError(msg)
    try:
        return AngleSettings(most, float(sigmas))
    except AngleError as error:
        msg = f'{where}: "reading": {error}'
        raise FileError(msg) from error


def _mirrors(section: dict[str, Any], settings: AngleSettings, where: str) -> Arrangement:
    accepted = 'give "angles" (texts, pair by pair), "normals" (rows of numbers) or "family" (a name)'
    keys = [key for key in ("angles", "normals", "family") if key in section]
    if len(keys) != 1:
        msg = f'{where}: "mirrors" has {" and ".join(keys) or "none of its keys"}; {accepted}'
        raise FileError(msg)
    value = section[keys[0]]
    try:
        if keys[0] == "family" and isinstance(value, str):
            return Arrangement.from_family(value, settings)
        if keys[0] == "angles" and _list_of(value, (str, int, float)):
            return Arrangement.from_angles(value, settings)
        if (
            keys[0] == "normals"
            and _list_of(value, list)
            and all(_list_of(row, (int, float)) and all(abs(v) <= LARGEST for v in row) for row in value)
        ):
            return Arrangement.from_normals(value, settings)
    except ValueError as error:
        msg = f'{where}: "mirrors": {error}'
        raise FileError(msg) from error
    msg = f'{where}: "mirrors": "{keys[0]}" is {_short(value)}; {accepted}'
    raise FileError(msg)


def _seed(section: dict[str, Any], where: str) -> dict[str, Any]:
    unknown = [key for key in section if key not in SEED_KEYS]
    places = [key for key in ("heights", "point", "place") if section.get(key) is not None]
    numbers = all(
        _list_of(section[key], (int, float)) and all(abs(v) <= LARGEST for v in section[key])
        for key in places
        if key != "place"
    )
    named = not isinstance(section.get("place", ""), str) and "place" in places
    if (
        unknown
        or len(places) > 1
        or not numbers
        or named
        or not isinstance(section.get("rotations", False), bool)
    ):
        msg = f'{where}: "seed" is {_short(section)}; one of heights, point (lists of numbers) and place (a text)'
        raise FileError(msg)
    return {key: section[key] for key in (*places, "rotations") if key in section}


def _list_of(value: object, kind: type | tuple[type, ...]) -> bool:
    return isinstance(value, list) and all(isinstance(v, kind) and not isinstance(v, bool) for v in value)


def _short(value: object) -> str:
    text = json.dumps(value, ensure_ascii=False)
    return text if len(text) <= 60 else text[:57] + "…"
