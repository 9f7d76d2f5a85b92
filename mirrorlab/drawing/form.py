"""The polyhedron of one or several forms."""

from __future__ import annotations

from itertools import pairwise

import numpy as np

from mirrorlab.crystal.combinations import Combination
from mirrorlab.crystal.indices import printed
from mirrorlab.drawing.model import Drawing, Faces, Key, Label, Line, Role

_AXIS_LENGTH = 1.28


def form_drawing(combination: Combination, labels: bool = True, axes: bool = True) -> Drawing:
    """The solid that forms make together.

    Parameters
    ----------
    combination : Combination
    labels : bool
        Indices on every face.
    axes : bool
        The crystal axes x, y, z, thin.

    Returns
    -------
    Drawing
        Scaled so that the farthest corner of a closed solid (or the largest distance of an open one) lies at 1.
        Keys: ("face", k) by face of ``combination.solid``, for its triangles, outline and label; ("edge", k);
        `index` of faces is the number of the form.
    """
    solid = combination.solid
    vertices = solid.vertices / np.linalg.norm(solid.vertices, axis=1).max()
    faces = tuple(_faces_of_form(combination, form, vertices) for form in range(len(combination.forms)))
    edges = [
        Line(Role.FACE, vertices[[start, end]], ("edge", k))
        for k, (start, end, _, _) in enumerate(solid.edges)
    ]
    ends = [Line(Role.GUIDE, vertices[list(pair)], ("cut", k)) for k, pair in enumerate(solid.outline)]
    marks = _labels(combination, vertices) if labels else ()
    lines, letters = _axes(combination, vertices) if axes else ((), ())
    notes = [f"{symbol} does not show: other forms lie nearer to the centre" for symbol in combination.hidden]
    if not combination.closed:
        notes.append("open: the faces do not close, the picture ends them")
    names = " + ".join(f"{made.symbol} {made.name}" for made in combination.forms)
    return Drawing(
        title=f"{combination.group.setting}: {names}",
        faces=tuple(block for block in faces if block is not None),
        lines=(*edges, *ends, *lines),
        labels=(*marks, *letters),
        frame=f"Cartesian: {combination.group.axes}, a along x, b in the xy plane",
        notes=tuple(notes),
        toward=np.array([0.84, 0.36, 0.40]),
    )


def _faces_of_form(combination: Combination, form: int, vertices: np.ndarray) -> Faces | None:
    triangles: list[tuple[int, int, int]] = []
    keys: list[Key] = []
    for k in np.flatnonzero(combination.owners == form).tolist():
        corners = combination.solid.faces[k]
        for second, third in pairwise(corners[1:]):
            triangles.append((corners[0], second, third))
            keys.append(("face", k))
    if not triangles:
        return None
    return Faces(Role.FACE, vertices, np.array(triangles, np.int64), tuple(keys), form)


def _labels(combination: Combination, vertices: np.ndarray) -> tuple[Label, ...]:
    found = []
    for k, corners in enumerate(combination.solid.faces):
        if corners:
            middle = vertices[list(corners)].mean(axis=0)
            lifted = middle + 0.02 * combination.solid.normals[k]
            form = int(combination.owners[k])
            found.append(Label(printed(combination.labels[k]), lifted, Role.FACE, ("face", k), form))
    return tuple(found)


def _axes(combination: Combination, vertices: np.ndarray) -> tuple[tuple[Line, ...], tuple[Label, ...]]:
    lines, labels = [], []
    for number, (letter, axis) in enumerate(zip("xyz", combination.basis.T, strict=True)):
        unit = axis / np.linalg.norm(axis)
        reach = _AXIS_LENGTH * float((vertices @ unit).max())
        lines.append(Line(Role.AXIS, np.array([-reach * unit, reach * unit]), ("axis", number)))
        labels.append(Label(letter, 1.07 * reach * unit, Role.AXIS, ("axis", number)))
    return tuple(lines), tuple(labels)
