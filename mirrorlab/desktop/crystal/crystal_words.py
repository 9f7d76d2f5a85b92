"""Faces, axes, mirrors and points of the crystallographer's pictures in words, for the status line."""

from __future__ import annotations

import numpy as np

from mirrorlab.crystal.operations import CrystalError
from mirrorlab.desktop.crystal.crystal_pictures import axis_directions
from mirrorlab.desktop.crystal.crystal_state import crystal_state
from mirrorlab.desktop.crystal.libraries import loaded
from mirrorlab.desktop.crystal.workings import SAME_PLACE, read_list, solid_of, working_of
from mirrorlab.desktop.document import Document


def face(document: Document, index: int) -> str:
    """A face of the solid, or its pole."""
    try:
        made = solid_of(document) if loaded(document) else None
    except CrystalError:
        return ""
    if made is None:
        return ""
    one = made.forms[int(made.owners[index])]
    return f"Face {made.labels[index]} of {one.symbol}, {one.name}"


def axis(document: Document, index: int) -> str:
    """A symmetry axis, by the operations about it."""
    try:
        work = working_of(document)
    except CrystalError:
        return ""
    if index < 0:
        return "Centre of symmetry"
    direction = axis_directions(document, work)[index]
    names: list[str] = []
    for one in work.group.operations:
        if one.axis is None or one.kind == "m":
            continue
        along = work.group.basis @ np.asarray(one.axis, float)
        if abs(along @ direction) > (1 - SAME_PLACE) * np.linalg.norm(along):
            names.append(one.text)
    return f"Axis: {', '.join(dict.fromkeys(names))}" if names else "Axis"


def equivalent(document: Document, index: int) -> str:
    """An equivalent point that the mirrors on the sheet do not lead to."""
    try:
        one = working_of(document).group.operations[index]
    except CrystalError:
        return ""
    return f"Point {one.triplet}, by {one.text}"


def group_mirror(document: Document, index: int) -> str:
    """A mirror of the working group that the mirrors on the sheet do not make."""
    try:
        group = working_of(document).group
    except CrystalError:
        return ""
    return f"Mirror {group.mirrors[index].text} of {group.typographic}"


def listed(document: Document, index: int) -> str:
    """A point of the compared list."""
    state = crystal_state(document)
    points = read_list(state.list_text, state.list_name)
    if isinstance(points, str):
        return ""
    return f"{points.labels[index]}, line {points.lines[index]} of {points.source}"


TELLERS = {
    "face": face,
    "axis": axis,
    "equivalent": equivalent,
    "group mirror": group_mirror,
    "listed": listed,
}
