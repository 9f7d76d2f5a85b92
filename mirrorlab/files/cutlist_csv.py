"""The cut list as CSV, with its description beside it."""

from __future__ import annotations

import os
from dataclasses import astuple
from pathlib import Path

import numpy as np

from mirrorlab.files.table import Column, write_table
from mirrorlab.optics.cutjob import CutJob
from mirrorlab.optics.cutlist import COLUMNS

DIGITS = {"mm": 3, "degree": 4, "m2": 6, "kg": 4}
"""Digits after the point, by unit: a micrometre, half a second of arc, a square millimetre, a tenth of a gram.
Finer than any cutter, so nothing is lost, and still readable in a spreadsheet."""

_COLUMNS: dict[str, tuple[str, str, str]] = {
    "part": ("string", "letter of the mirror", ""),
    "quantity": ("integer", "how many to cut", ""),
    "thickness_mm": ("double", "thickness of the glass", "mm"),
    "surface": ("string", "which face is coated: first is towards the light, second is behind the glass", ""),
    "blank_width_mm": ("double", "box around the blank, along its longest side", "mm"),
    "blank_height_mm": ("double", "box around the blank, across it", "mm"),
    "blank_area_m2": ("double", "area of the blank", "m2"),
    "weight_kg": ("double", "weight of the blank", "kg"),
    "side": ("string", "side as on the drawing, counter-clockwise with the mirror side up", ""),
    "length_mm": ("double", "length of this side of the blank", "mm"),
    "corner_degrees": ("double", "inside angle of the blank at the corner where the side starts", "degree"),
    "coated_length_mm": ("double", "length of this side on the coated face, after bevelling", "mm"),
    "clear_length_mm": ("double", "length of this side on the uncoated face, after bevelling", "mm"),
    "meets": ("string", "the pane it meets; empty at a free side", ""),
    "between_degrees": ("double", "angle between the two mirrors", "degree"),
    "joint": ("string", "mitred, over (runs past), under (stands on the other), square or free", ""),
    "bevel_degrees": ("double", "how far off square the edge is ground; 0 is square", "degree"),
    "longer_face": ("string", "face that stays longer: coated or clear; empty when square", ""),
    "glass_degrees": ("double", "sharper angle of the glass at this edge", "degree"),
    "coated_cut_back_mm": ("double", "from the ideal edge to the coated face; negative runs past", "mm"),
    "clear_cut_back_mm": ("double", "from the ideal edge to the uncoated face; negative runs past", "mm"),
    "blind_strip_mm": ("double", "from the ideal edge to where the mirror starts to show", "mm"),
}


def cut_list_columns() -> tuple[Column, ...]:
    """The columns of the file."""
    return tuple(Column(name, *_COLUMNS[name]) for name in COLUMNS)


def write_cut_list(path: str | os.PathLike[str], job: CutJob) -> tuple[Path, Path]:
    """Write the list and its metadata; both whole or not at all."""
    columns = cut_list_columns()
    digits = [DIGITS.get(column.unit) for column in columns]
    rows = [
        [
            round(v, d) if d is not None and isinstance(v, float) else v
            for v, d in zip(astuple(row), digits, strict=True)
        ]
        for row in job.rows
    ]
    about = {
        "title": f"Cut list: {job.title}",
        "kind": job.kind,
        "angles between the mirrors in degrees": {
            p: round(float(np.degrees(a)), 6) for p, a in job.dihedrals.items()
        },
        "joint": str(job.joints.kind),
        "gap in mm": job.joints.gap,
        "kerf in mm": job.kerf,
        "assemblies": job.copies,
        "notes": list(job.notes),
    }
    return write_table(path, columns, rows, about)
