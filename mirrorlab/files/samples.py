"""Samples to start from, all invented: the Ostrel workshop's lanterns and rooms, the Ostrel cabinet's specimens."""

from __future__ import annotations

from functools import lru_cache
from importlib.resources import files
from pathlib import Path

from mirrorlab.files.sheet_file import Sheet, sheet_from_text


def assets() -> Path:
    """The folder of assets: inside an installed package, or beside it in a checkout."""
    inside = Path(str(files("mirrorlab"))) / "assets"
    return inside if inside.is_dir() else inside.parent.parent / "assets"


@lru_cache(maxsize=1)
def samples() -> tuple[Sheet, ...]:
    """All samples, in the order of their file names; the first is on the stage at the start."""
    found = sorted((assets() / "samples").glob("*.json"))
    return tuple(sheet_from_text(path.read_text(encoding="utf-8"), path.name) for path in found)
