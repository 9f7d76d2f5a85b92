"""Files of the crystallographer's trade, taken into the document as one step."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from mirrorlab.crystal.symbols import typographic
from mirrorlab.desktop.crystal.crystal_state import crystal_state
from mirrorlab.desktop.document import FEWEST_MIRRORS, MOST_MIRRORS, Document

if TYPE_CHECKING:
    from mirrorlab.crystal.cif import CrystalFile
    from mirrorlab.crystal.point_lists import PointList


def take_cif(document: Document, file: CrystalFile) -> str:
    """Take cell, working group and mirrors from a CIF file; says what was taken.

    The mirrors on the sheet stay when those of the file do not fit the triangle.
    """
    state = replace(
        crystal_state(document),
        group=file.setting or file.point_group,
        faces=(),
        marks="images",
        constants=file.cell_texts,
        centring=file.cell.centring,
        cell_name=file.block,
        planes=(),
    )
    mirrors = file.arrangement
    taken = mirrors is not None and FEWEST_MIRRORS <= mirrors.size <= MOST_MIRRORS
    if taken:
        document.put_sheet(mirrors, file.block, crystal=state)
    else:
        document.set_crystal(state, f"open {file.source}")
    group = f", point group {typographic(state.group)}" if state.group else ", no symmetry stated"
    space = f", space group {file.space_group}" if file.space_group else ""
    mirrored = "" if taken else "; its mirrors are too few for the triangle, so the sheet keeps its own"
    notes = "".join(f" Note: {note}." for note in file.notes)
    return f"Opened {file.source}: cell of {file.block}{group}{space}{mirrored}.{notes}"


def take_list(document: Document, points: PointList, path: Path) -> str:
    """Take a list of points to compare; says how many rows were read and which were not."""
    text = path.read_text(encoding="utf-8-sig", errors="replace")
    state = replace(crystal_state(document), list_text=text, list_name=path.name)
    document.set_crystal(state, f"open {path.name}")
    count, bad = len(points.labels), len(points.unreadable)
    left = f"; {bad} row{'s' if bad != 1 else ''} cannot be read, see the bench" if bad else ""
    return f"Opened {path.name}: {count} {points.what}{left}."
