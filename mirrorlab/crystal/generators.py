"""Generators of every point group in its standard setting.

The 32 stand in crystal axes, with the generators of the symmorphic space groups in International Tables for
Crystallography, volume A (from memory; the groups they generate are checked against a reference library).
All others stand in Cartesian axes: the main axis along z, the secondary direction along x.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.operations import parse_triplet
from mirrorlab.crystal.symbols import GroupName

_TWO_Z, _TWO_Y, _CENTRE = "-x,-y,z", "-x,y,-z", "-x,-y,-z"
_FOUR, _BAR_FOUR, _THREE, _SIX, _BAR_SIX = "-y,x,z", "y,-x,-z", "-y,x-y,z", "x-y,x,z", "-x+y,-x,-z"
_DIAGONAL = "z,x,y"

IN_CRYSTAL_AXES: dict[str, tuple[str, ...]] = {
    "1": (),
    "-1": (_CENTRE,),
    "2": (_TWO_Y,),
    "m": ("x,-y,z",),
    "2/m": (_TWO_Y, _CENTRE),
    "211": ("x,-y,-z",),
    "m11": ("-x,y,z",),
    "2/m11": ("x,-y,-z", _CENTRE),
    "112": (_TWO_Z,),
    "11m": ("x,y,-z",),
    "112/m": (_TWO_Z, _CENTRE),
    "222": (_TWO_Z, _TWO_Y),
    "mm2": (_TWO_Z, "x,-y,z"),
    "m2m": (_TWO_Y, "x,y,-z"),
    "2mm": ("x,-y,-z", "x,-y,z"),
    "mmm": (_TWO_Z, _TWO_Y, _CENTRE),
    "4": (_FOUR,),
    "-4": (_BAR_FOUR,),
    "4/m": (_FOUR, _CENTRE),
    "422": (_FOUR, _TWO_Y),
    "4mm": (_FOUR, "x,-y,z"),
    "-42m": (_BAR_FOUR, _TWO_Y),
    "-4m2": (_BAR_FOUR, "x,-y,z"),
    "4/mmm": (_FOUR, _TWO_Y, _CENTRE),
    "3": (_THREE,),
    "-3": (_THREE, _CENTRE),
    "32": (_THREE, "y,x,-z"),
    "312": (_THREE, "-y,-x,-z"),
    "3m": (_THREE, "-y,-x,z"),
    "31m": (_THREE, "y,x,z"),
    "-3m": (_THREE, "y,x,-z", _CENTRE),
    "-31m": (_THREE, "-y,-x,-z", _CENTRE),
    "6": (_SIX,),
    "-6": (_BAR_SIX,),
    "6/m": (_SIX, _CENTRE),
    "622": (_SIX, "y,x,-z"),
    "6mm": (_SIX, "-y,-x,z"),
    "-6m2": (_BAR_SIX, "-y,-x,z"),
    "-62m": (_BAR_SIX, "y,x,z"),
    "6/mmm": (_SIX, "y,x,-z", _CENTRE),
    "23": (_TWO_Z, _TWO_Y, _DIAGONAL),
    "m-3": (_TWO_Z, _TWO_Y, _DIAGONAL, _CENTRE),
    "432": (_TWO_Z, _TWO_Y, _DIAGONAL, "y,x,-z"),
    "-43m": (_TWO_Z, _TWO_Y, _DIAGONAL, "y,x,z"),
    "m-3m": (_TWO_Z, _TWO_Y, _DIAGONAL, "y,x,-z", _CENTRE),
}
"""Generators of the 32 and of their other settings."""

SAME_SETTING = {"121": "2", "1m1": "m", "12/m1": "2/m", "321": "32", "3m1": "3m", "-3m1": "-3m"}
"""Symbols that spell out the standard setting."""

THE_32 = (
    "1", "-1", "2", "m", "2/m", "222", "mm2", "mmm", "4", "-4", "4/m", "422", "4mm", "-42m", "4/mmm",
    "3", "-3", "32", "3m", "-3m", "6", "-6", "6/m", "622", "6mm", "-6m2", "6/mmm", "23", "m-3", "432", "-43m", "m-3m",
)  # fmt: skip
"""The 32 crystallographic point groups in the order of International Tables."""


def turn(angle: float, axis: tuple[float, float, float] = (0, 0, 1)) -> NDArray[np.float64]:
    """Rotation by `angle` (radians, right-handed) about `axis`."""
    unit = np.asarray(axis, float) / np.linalg.norm(axis)
    cross = np.array([[0, -unit[2], unit[1]], [unit[2], 0, -unit[0]], [-unit[1], unit[0], 0]])
    return np.cos(angle) * np.eye(3) + np.sin(angle) * cross + (1 - np.cos(angle)) * np.outer(unit, unit)


def cartesian_generators(name: GroupName) -> list[NDArray[np.float64]]:
    """Generators of a group without a lattice, in Cartesian axes."""
    centre, two_x, mirror_x, mirror_z = (
        -np.eye(3),
        np.diag([1.0, -1, -1]),
        np.diag([-1.0, 1, 1]),
        np.diag([1.0, 1, -1]),
    )
    if not name.n:
        golden = (1 + 5**0.5) / 2
        turns = [parse_triplet(_DIAGONAL).astype(float), turn(2 * np.pi / 5, (0, 1, golden))]
        return turns if name.family == "I" else [*turns, centre]
    n = name.n
    main = turn(2 * np.pi / n)
    match name.family:
        case "C":
            return [main]
        case "Ch":
            return [main, mirror_z]
        case "Cv":
            return [main, mirror_x]
        case "D":
            return [main, two_x]
        case "Dh":
            return [main, mirror_x, mirror_z]
        case "S":
            return [turn(4 * np.pi / n), centre] if (n // 2) % 2 else [-main]
    return [main, centre, mirror_x] if n % 2 else [-turn(np.pi / n), two_x]
