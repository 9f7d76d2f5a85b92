"""The document as an arrangement file, and back."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from pathlib import Path
from typing import Any

from mirrorlab.desktop.document import (
    FEWEST_MIRRORS,
    MOST_MIRRORS,
    Document,
    Seed,
    Settings,
    State,
    fitted,
)
from mirrorlab.files.sheet_file import Sheet, load_sheet, save_sheet


class SheetError(ValueError):
    """A file whose arrangement this window cannot show."""


def write_sheet(path: Path, document: Document) -> None:
    """Write the document's state. Raises `FileError` (a ValueError) or OSError."""
    state = document.state
    save_sheet(
        path,
        Sheet(
            state.arrangement,
            name=state.name,
            seed=seed_section(state.seed),
            crystal=section_of(state.crystal),
            glass=section_of(state.glass),
        ),
    )


def read_sheet(path: Path, document: Document, keep_path: bool = True) -> None:
    """Put a file's arrangement into the document, as one step; a wrong file changes nothing.

    Parameters
    ----------
    keep_path : bool
        False opens it as a sheet that has no file yet.

    Raises
    ------
    ValueError
        What is wrong with the file.
    """
    show_sheet(load_sheet(path), document, path if keep_path else None, path.stem)


def show_sheet(sheet: Sheet, document: Document, path: Path | None = None, name: str = "") -> None:
    """Put a sheet into the document, as one step. Raises `SheetError` when the window cannot show it."""
    size = sheet.arrangement.size
    if not FEWEST_MIRRORS <= size <= MOST_MIRRORS:
        msg = f"it holds {size} mirror{'s' if size != 1 else ''}; the window shows 2 to {MOST_MIRRORS}"
        raise SheetError(msg)
    state = state_of(sheet, document.settings)
    document.put_sheet(
        state.arrangement,
        sheet.name or name,
        path,
        seed=state.seed,
        settings=state.settings,
        crystal=state.crystal,
        glass=state.glass,
    )


def state_of(sheet: Sheet, settings: Settings) -> State:
    """A sheet as a state of the document."""
    arrangement = sheet.arrangement
    return State(
        arrangement,
        fitted(seed_from(sheet.seed), arrangement),
        replace(settings, reading=arrangement.settings),
        crystal=dict(sheet.crystal) or None,
        glass=dict(sheet.glass) or None,
        name=sheet.name,
    )


def section_of(value: Any) -> Mapping[str, Any]:
    """A bench's value as a section of the file: a mapping as it is, else by its ``to_dict()``."""
    if value is None:
        return {}
    return value if isinstance(value, Mapping) else value.to_dict()


def seed_section(seed: Seed) -> dict[str, Any]:
    """A seed as a section of the file."""
    section: dict[str, Any] = {"rotations": seed.rotations}
    if seed.heights is not None:
        section["heights"] = list(seed.heights)
    elif seed.point is not None:
        section["point"] = list(seed.point)
    else:
        section["place"] = seed.place
    return section


def seed_from(section: Mapping[str, Any]) -> Seed:
    """A seed from its section; none stands in the centre."""
    heights, point = section.get("heights"), section.get("point")
    return Seed(
        heights=None if heights is None else tuple(map(float, heights)),
        point=None if point is None else tuple(map(float, point)),
        place=section.get("place") or ("centre" if heights is None and point is None else None),
        rotations=bool(section.get("rotations", False)),
    )
