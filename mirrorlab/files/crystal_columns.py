"""Columns and metadata that the crystallographer's tables share."""

from __future__ import annotations

import os
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mirrorlab.files.table import Column

if TYPE_CHECKING:
    from mirrorlab.crystal.pointgroups import NamedGroup

PathLike = str | os.PathLike[str]
Paths = tuple[Path, Path]

OPERATION = Column("operation", "integer", "number in the list of the group; 1 is the identity")
SYMBOL = Column(
    "symbol", "string", "rotation or rotoinversion with its axis [uvw], mirror with its plane (hkl)"
)
TRIPLET = Column("triplet", "string", "image of x,y,z")


def fraction_columns(group: NamedGroup) -> tuple[Column, ...]:
    """Coordinates x, y, z along the axes of a group."""
    return tuple(
        Column(name, "double", f"coordinate in {group.axes}", "fraction of the axis") for name in "xyz"
    )


def about_setting(title: str, group: NamedGroup, basis: NDArray[np.float64] | None) -> dict[str, object]:
    """What a table in the axes of a group is of; without a `basis` its axes are the group's own."""
    axes = group.basis if basis is None else np.asarray(basis)
    return {
        "title": title,
        "group": group.setting,
        "axes": group.axes,
        "cell axes as columns": axes.tolist(),
    }
