"""The symmetry that a CIF file states, by its operations or by the name or number of the space group."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.centring import CENTRINGS, centring_with
from mirrorlab.crystal.generators import IN_CRYSTAL_AXES
from mirrorlab.crystal.identify import classify
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.pointgroups import point_group

MOST_OPERATIONS = 192
"""As many as the largest space group has in a cell (48 point operations, F)."""

Item = tuple[str, str]


class SymmetryError(CrystalError):
    """Items of a file that state no symmetry; the message names the item."""


@dataclass(frozen=True, slots=True)
class SymmetryItems:
    """Items and values as they stand in the file; None or empty where there are none."""

    operations: tuple[Item, ...]
    name: Item | None
    number: Item | None


@dataclass(frozen=True, eq=False)
class FileSymmetry:
    """What the items come to; see `mirrorlab.crystal.cif.CrystalFile`."""

    rotations: NDArray[np.int64]
    centring: str
    space_group: str
    number: int | None
    point_group: str
    setting: str
    notes: tuple[str, ...]


def read_symmetry(items: SymmetryItems, cell_texts: Sequence[str]) -> FileSymmetry:
    """The symmetry of a file; the operations count where name and operations differ.

    Parameters
    ----------
    items : SymmetryItems
    cell_texts : sequence of str
        Constants of the cell: γ tells hexagonal from rhombohedral axes where a name leaves it open.

    Raises
    ------
    SymmetryError
    """
    named = _named(items, cell_texts)
    notes: list[str] = []
    if items.operations:
        item = items.operations[0][0]
        operations = [_operation(text, item, k) for k, (_, text) in enumerate(items.operations, 1)]
        rotations, translations = _split(operations, item)
        found = _space_group_of(operations)
        if named is not None and found is not None and found.number != named.number:
            given = items.name or items.number or ("", "")
            notes.append(
                f'the operations are those of {found.hm}, item {given[0]} says "{given[1]}"; the operations count'
            )
        space_group = found or (named if named is not None and found is None else None)
    elif named is not None:
        item = (items.name or items.number or ("", ""))[0]
        rotations, translations = _split(list(named.operations()), item)
        space_group = named
    else:
        if items.name is not None or items.number is not None:
            given = items.name or items.number or ("", "")
            msg = f'item {given[0]}: "{given[1]}" is no space group that is known, and the file lists no operations'
            raise SymmetryError(msg)
        return FileSymmetry(
            np.zeros((0, 3, 3), np.int64),
            "P",
            "",
            None,
            "",
            "",
            ("the file says nothing of symmetry; centring P is taken",),
        )
    if named is None and items.name is not None:
        notes.append(
            f'item {items.name[0]}: "{items.name[1]}" is no space group that is known; the operations count'
        )
    centring = centring_with(translations)
    if centring is None:
        shown = "; ".join(",".join(f"{value:.3g}" for value in row) for row in translations)
        msg = f"item {item}: centring by {shown}; accepted are {', '.join(CENTRINGS)} (R: obverse, on hexagonal axes)"
        raise SymmetryError(msg)
    symbol, setting = _point_group(rotations)
    return FileSymmetry(
        rotations,
        centring.letter,
        "" if space_group is None else space_group.hm,
        None if space_group is None else int(space_group.number),
        symbol,
        setting,
        tuple(notes),
    )


def _named(items: SymmetryItems, cell_texts: Sequence[str]) -> Any:
    """The space group of the name, or of the number where there is no name; None when there is none."""
    import gemmi

    try:
        alpha, gamma = (float(cell_texts[k].partition("(")[0]) for k in (3, 5))
    except ValueError:
        alpha, gamma = 0.0, 0.0
    if items.name is not None:
        name = items.name[1].replace("_", "").strip()
        found = gemmi.find_spacegroup_by_name(name, alpha, gamma)
        if found is not None:
            return found
    if items.number is not None:
        text = items.number[1].strip()
        if not re.fullmatch(r"\d{1,3}", text) or not 1 <= int(text) <= 230:
            msg = f'item {items.number[0]}: "{text}" is no number of a space group; it is a whole number from 1 to 230'
            raise SymmetryError(msg)
        found = gemmi.find_spacegroup_by_number(int(text))
        if items.name is None and found is not None and found.ext == "H" and alpha == gamma:
            return gemmi.find_spacegroup_by_name(found.hm, alpha, gamma) or found
        return found if items.name is None else None
    return None


def _operation(text: str, item: str, row: int) -> Any:
    """One operation; the error names the item and the row."""
    import gemmi

    plain = re.sub(r"\s+", "", text).lower()
    accepted = "write it as -x,y+1/2,-z+1/2"
    made = None
    if re.fullmatch(r"[xyz0-9+\-*/.]+(,[xyz0-9+\-*/.]+){2}", plain):
        try:
            made = gemmi.Op(plain)
        except (RuntimeError, ValueError):
            made = None
    if made is None:
        msg = f'item {item}, row {row}: "{text}" is no symmetry operation; {accepted}'
        raise SymmetryError(msg)
    if abs(made.det_rot()) != gemmi.Op.DEN**3 or np.any(np.array(made.rot) % gemmi.Op.DEN):
        msg = f'item {item}, row {row}: "{text}" does not map a lattice onto itself; {accepted}'
        raise SymmetryError(msg)
    return made


def _split(operations: list[Any], item: str) -> tuple[NDArray[np.int64], NDArray[np.float64]]:
    """Point operations, each once with the identity first, and the centring translations."""
    import gemmi

    if len(operations) > MOST_OPERATIONS:
        msg = f"item {item}: {len(operations)} operations; no space group has more than {MOST_OPERATIONS} in a cell"
        raise SymmetryError(msg)
    over = gemmi.Op.DEN
    parts = {
        (tuple(np.array(one.rot).ravel() // over), tuple(np.array(one.tran) % over)): None
        for one in operations
    }
    _complete(list(parts), over, item)
    identity = tuple(np.eye(3, dtype=int).ravel())
    translations = np.array([tran for rot, tran in parts if rot == identity], float) / over
    rotations = dict.fromkeys([identity, *(rot for rot, _ in parts)])
    return np.array(list(rotations), np.int64).reshape(-1, 3, 3), translations


def _complete(parts: list[tuple[tuple, tuple]], over: int, item: str) -> None:
    """An error when the product of two operations is missing from the list."""
    rotations = np.array([rot for rot, _ in parts], np.int64).reshape(-1, 3, 3)
    translations = np.array([tran for _, tran in parts], np.int64)
    known = _keys(rotations, translations, over)
    for k in range(len(parts)):
        moved = (translations @ rotations[k].T + translations[k]) % over
        missing = ~np.isin(_keys(rotations[k] @ rotations, moved, over), known)
        if missing.any():
            pair = f"row {k + 1} times row {int(np.argmax(missing)) + 1}"
            msg = f"item {item}: {pair} is not in the list, so operations are missing or wrong"
            raise SymmetryError(msg)


def _keys(rotations: NDArray[np.int64], translations: NDArray[np.int64], over: int) -> NDArray[np.int64]:
    """One number for each operation; entries of a lattice's operations lie well within ±10 in any usual axes."""
    digits = np.clip(rotations.reshape(-1, 9), -10, 10) + 10
    rotation = digits @ 21 ** np.arange(9)
    return np.asarray(rotation * over**3 + translations @ over ** np.arange(3), np.int64)


def _space_group_of(operations: list[Any]) -> Any:
    import gemmi

    return gemmi.find_spacegroup_by_ops(gemmi.GroupOps(operations))


def _point_group(rotations: NDArray[np.int64]) -> tuple[str, str]:
    """Symbol of the type, and of the setting when the matrices are those of a listed one."""
    metric = np.mean([matrix.T @ matrix for matrix in rotations], axis=0)  # any metric that the group keeps
    symbol = classify(rotations, np.linalg.cholesky(metric).T).hermann_mauguin
    own = {matrix.tobytes() for matrix in rotations}
    for setting in IN_CRYSTAL_AXES:
        group = point_group(setting)
        if group.hermann_mauguin == symbol and {m.astype(np.int64).tobytes() for m in group.matrices} == own:
            return symbol, setting
    return symbol, ""
