"""Crystal files in CIF: the cell with its uncertainties, the symmetry operations, and the point group they make.

References
----------
.. [1] International Tables for Crystallography, volume G (2005): the CIF core dictionary; `_cell_*`, `_space_group_*`
   and the older `_symmetry_*` items, and their spelling with a point in mmCIF.
"""

from __future__ import annotations

import os
import re
from dataclasses import dataclass, field
from functools import cached_property
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.cell import Cell, cell_from_texts
from mirrorlab.crystal.cif_symmetry import SymmetryError, SymmetryItems, read_symmetry
from mirrorlab.crystal.file_bytes import file_bytes
from mirrorlab.crystal.lattice_axes import nearest_basis
from mirrorlab.crystal.lattices import CellError
from mirrorlab.crystal.operations import CrystalError, operation, write_triplet
from mirrorlab.mirrors import Arrangement

LARGEST_FILE = 64_000_000
"""Bytes; a larger file holds measured intensities, and cell and symmetry stand in its small sister."""

CELL_ITEMS = ("length_a", "length_b", "length_c", "angle_alpha", "angle_beta", "angle_gamma")

OPERATION_ITEMS = (
    "_space_group_symop_operation_xyz",
    "_space_group_symop.operation_xyz",
    "_symmetry_equiv_pos_as_xyz",
    "_symmetry_equiv.pos_as_xyz",
)
NAME_ITEMS = (
    "_space_group_name_H-M_alt",
    "_space_group.name_H-M_alt",
    "_space_group_name_H-M_full",
    "_symmetry_space_group_name_H-M",
    "_symmetry.space_group_name_H-M",
)
NUMBER_ITEMS = (
    "_space_group_IT_number",
    "_space_group.IT_number",
    "_symmetry_Int_Tables_number",
    "_symmetry.Int_Tables_number",
)

METRIC_NOTE, METRIC_ERROR = 1e-4, 0.02
"""Share by which an operation may change the cell's metric: below the first it is rounding of the constants, above the
second the cell and the operations do not belong together; between them a note says so."""

_AT = re.compile(r"^string:(\d+)(?::\d+(?:\(\d+\))?)?(?: in (\S+))?:?\s*(.*)", re.DOTALL)


class CifError(CrystalError):
    """A CIF file that cannot be used; the message names the file and the line or the item."""


@dataclass(frozen=True, eq=False)
class CrystalFile:
    """What a CIF file says of a crystal's cell and symmetry.

    Attributes
    ----------
    source : str
        Name of the file.
    block : str
        Name of the data block.
    cell : Cell
    cell_texts : tuple of six str
        The constants as they stand in the file.
    space_group : str
        Hermann–Mauguin symbol, "" where the file says none and the operations fit none that is known.
    number : int or None
        In International Tables.
    rotations : ndarray of int, shape (order, 3, 3)
        The point operations on coordinates in the axes of the cell, each once; empty when there is no symmetry.
    point_group : str
        Hermann–Mauguin symbol of its type; "" when the file says nothing of symmetry.
    setting : str
        Symbol with its setting, such as "31m"; "" where the axes are of none of the listed settings.
    notes : tuple of str
        What was not as it should be, and was read nevertheless.
    """

    source: str
    block: str
    cell: Cell
    cell_texts: tuple[str, ...]
    space_group: str
    number: int | None
    rotations: NDArray[np.int64] = field(repr=False)
    point_group: str
    setting: str
    notes: tuple[str, ...]

    @cached_property
    def mirrors(self) -> tuple[tuple[int, int, int], ...]:
        """Planes (hkl) of the mirrors of the point group, in the axes of the cell."""
        made = [operation(matrix) for matrix in self.rotations]
        planes = [one.plane for one in made if one.kind == "m" and one.plane is not None]
        return tuple((int(h), int(k), int(l)) for h, k, l in planes)  # noqa: E741 — the trade's own letters

    @cached_property
    def arrangement(self) -> Arrangement | None:
        """The walls of one chamber of the mirrors, in the Cartesian frame of the cell; None when there are none.

        The cell is taken as the symmetry has it, so that a constant rounded in the file opens no angle.
        """
        if not self.mirrors:
            return None
        metric = np.mean([matrix.T @ self.cell.metric @ matrix for matrix in self.rotations], axis=0)
        reciprocal = np.linalg.inv(nearest_basis(self.cell.basis, metric)).T
        whole = Arrangement.from_normals(np.array(self.mirrors) @ reciprocal.T)
        group = whole.finding().group
        return whole if group is None else Arrangement.from_normals(group.simple)

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "source": self.source,
            "block": self.block,
            "cell": self.cell.to_dict(),
            "space_group": self.space_group or None,
            "space_group_number": self.number,
            "point_group": self.point_group or None,
            "setting": self.setting or None,
            "operations": [write_triplet(matrix) for matrix in self.rotations],
            "mirrors": [list(plane) for plane in self.mirrors],
            "notes": list(self.notes),
        }


def read_cif(path: str | os.PathLike[str], block: str | None = None) -> CrystalFile:
    """Read cell and symmetry from a CIF file.

    Parameters
    ----------
    path : path-like
    block : str, optional
        Name of the data block; the first with a cell when not given.

    Raises
    ------
    CifError
        The file cannot be read, is no CIF, or lacks a usable cell or symmetry; the message names the line or the item.
    """
    content = file_bytes(path, LARGEST_FILE, "give the file with cell and symmetry", CifError)
    return parse_cif(content, Path(path).name, block)


def parse_cif(content: bytes | str, source: str = "CIF", block: str | None = None) -> CrystalFile:
    """Read cell and symmetry from the text of a CIF file. Errors as `read_cif`."""
    text, notes = _decoded(content, source)
    found, more = _block(_parsed(text, source), source, block)
    notes += more
    texts, cell_place = _cell_texts(found, source)
    try:
        symmetry = read_symmetry(_symmetry_items(found), texts)
        cell = cell_from_texts(texts, [f"item {name}" for name in cell_place], symmetry.centring)
        notes += [*symmetry.notes, *_agreement(cell, symmetry.rotations)]
    except (SymmetryError, CellError) as error:
        item = next((name for name in _words(str(error)) if name.startswith("_")), "")
        line = _line(found, item)
        where = f", line {line}" if line else ""
        msg = f"{source}{where}: {error}"
        raise CifError(msg) from None
    return CrystalFile(
        source,
        found.name,
        cell,
        tuple(texts),
        symmetry.space_group,
        symmetry.number,
        symmetry.rotations,
        symmetry.point_group,
        symmetry.setting,
        tuple(notes),
    )


def _words(text: str) -> list[str]:
    return re.findall(r"[\w.\-]+", text)


def _decoded(content: bytes | str, source: str) -> tuple[str, list[str]]:
    if isinstance(content, str):
        text, notes = content, []
    else:
        try:
            text, notes = content.decode("utf-8-sig"), []
        except UnicodeDecodeError:
            text, notes = content.decode("latin-1"), ["the file is not UTF-8; read as Latin-1"]
    if "\0" in text:
        msg = f"{source}: a binary file, no CIF"
        raise CifError(msg)
    if not text.strip():
        msg = f"{source}: the file is empty"
        raise CifError(msg)
    return text, notes


def _parsed(text: str, source: str) -> Any:
    from gemmi import cif

    try:
        return cif.read_string(text)
    except (ValueError, RuntimeError, IndexError) as error:
        match = _AT.match(str(error))
        reason = match[3].strip() if match else str(error)
        where = f", line {match[1]}" if match else ""
        msg = f"{source}{where}: no well-formed CIF ({reason})"
        raise CifError(msg) from None


def _block(document: Any, source: str, wanted: str | None) -> tuple[Any, list[str]]:
    names = [one.name for one in document]
    if wanted is not None:
        for one in document:
            if one.name.lower() == wanted.lower():
                return one, []
        msg = f'{source}: no data block "{wanted}"; there are {", ".join(names) or "none"}'
        raise CifError(msg)
    holding = [one for one in document if any(_values(one, _spellings(name)) for name in CELL_ITEMS)]
    if not holding:
        msg = f"{source}: no data block with a cell; item _cell_length_a is missing"
        raise CifError(msg)
    others = [one.name for one in holding[1:]]
    note = f"data block {holding[0].name} was read; {', '.join(others)} have cells too"
    return holding[0], [note] if others else []


def _spellings(name: str) -> tuple[str, str]:
    return f"_cell_{name}", f"_cell.{name}"


def _values(block: Any, items: tuple[str, ...]) -> list[tuple[str, str]]:
    """(item, value) of the first of these items that has any value, quotes taken off."""
    from gemmi import cif

    for item in items:
        found = [cif.as_string(value) for value in block.find_values(item) if not cif.is_null(value)]
        if found:
            return [(item, value) for value in found]
    return []


def _cell_texts(block: Any, source: str) -> tuple[list[str], list[str]]:
    texts, places = [], []
    for name in CELL_ITEMS:
        values = _values(block, _spellings(name))
        plain = _spellings(name)[0]
        if not values:
            present = any(len(block.find_values(item)) for item in _spellings(name))
            line = _line(block, plain) or _line(block, _spellings(name)[1])
            where = f", line {line}" if line else ""
            what = "has no value (? or .)" if present else "is missing"
            msg = f"{source}{where}: item {plain} {what} in data block {block.name}"
            raise CifError(msg)
        if len(values) > 1:
            msg = f"{source}: item {values[0][0]} has {len(values)} values in data block {block.name}; one is needed"
            raise CifError(msg)
        item, text = values[0]
        separate = _values(block, (f"{item}_esd", f"{item}_su"))
        if separate and "(" not in text:
            text = f"{text}±{separate[0][1]}"
        texts.append(text)
        places.append(item)
    return texts, places


def _line(block: Any, item: str) -> int:
    if not item:
        return 0
    found = block.find_pair_item(item) or block.find_loop_item(item)
    return int(found.line_number) if found is not None else 0


def _symmetry_items(block: Any) -> SymmetryItems:
    name = _values(block, NAME_ITEMS)[:1]
    number = _values(block, NUMBER_ITEMS)[:1]
    return SymmetryItems(
        tuple(_values(block, OPERATION_ITEMS)),
        name[0] if name else None,
        number[0] if number else None,
    )


def _agreement(cell: Cell, rotations: NDArray[np.int64]) -> list[str]:
    """A note when an operation changes the metric a little; an error when it changes it much."""
    if not len(rotations):
        return []
    lengths = np.sqrt(np.diag(cell.metric))
    scale = np.outer(lengths, lengths)
    off = [np.abs((m.T @ cell.metric @ m - cell.metric) / scale).max() for m in rotations]
    worst = int(np.argmax(off))
    triplet = write_triplet(rotations[worst])
    if off[worst] > METRIC_ERROR:
        msg = f"items _cell_length_a to _cell_angle_gamma ({cell.text}) do not have the symmetry {triplet} of the file"
        raise CellError(msg)
    if off[worst] > METRIC_NOTE:
        return [f"the cell misses the symmetry {triplet} by {100 * off[worst]:.2g} % of its metric"]
    return []
