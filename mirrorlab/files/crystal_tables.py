"""Tables of the crystallographer: operations, equivalent points, faces, candidates, images as fractions of a cell."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.candidates import Candidates
from mirrorlab.crystal.combinations import Combination
from mirrorlab.crystal.lattices import Alignment
from mirrorlab.crystal.pointgroups import NamedGroup
from mirrorlab.crystal.positions import GroupOrbit
from mirrorlab.files.crystal_columns import (
    OPERATION,
    SYMBOL,
    TRIPLET,
    PathLike,
    Paths,
    about_setting,
    fraction_columns,
)
from mirrorlab.files.orbit_table import image_columns, orbit_rows
from mirrorlab.files.table import Column, write_table
from mirrorlab.mirrors import Orbit


def write_operations(path: PathLike, group: NamedGroup) -> Paths:
    """Write the operations of a group: number, symbol with its place, triplet, matrix row by row."""
    columns = (
        OPERATION,
        SYMBOL,
        TRIPLET,
        *(Column(f"m{i}{j}", "double", "entry of the matrix") for i in (1, 2, 3) for j in (1, 2, 3)),
    )
    rows = (
        [number, element.text, element.triplet, *element.matrix.astype(float).ravel().tolist()]
        for number, element in enumerate(group.operations, 1)
    )
    about = {"title": f"Operations of {group.setting}", "group": group.setting, "axes": group.axes}
    return write_table(path, columns, rows, about)


def write_group_orbit(
    path: PathLike, group: NamedGroup, orbit: GroupOrbit, basis: NDArray[np.float64] | None = None
) -> Paths:
    """Write equivalent points, in the axes of the group and in Cartesian coordinates of the cell `basis`."""
    frame = group.basis if basis is None else basis
    cartesian = orbit.points @ np.asarray(frame).T
    columns = (
        Column("point", "integer", "number of the point; 1 is the one given"),
        *fraction_columns(group),
        *(
            Column(f"{name}_cartesian", "double", "a along x, b in the xy plane", "unit of the cell")
            for name in "xyz"
        ),
        Column("operation", "string", "operation that leads there"),
        TRIPLET,
    )
    rows = (
        [number, *point, *flat, group.operations[index].text, group.operations[index].triplet]
        for number, (point, flat, index) in enumerate(
            zip(orbit.points.tolist(), cartesian.tolist(), orbit.operations, strict=True), 1
        )
    )
    about = {
        **about_setting(f"Points equivalent under {group.setting}", group, basis),
        "site symmetry": orbit.site_symmetry,
        "multiplicity": len(orbit.points),
    }
    return write_table(path, columns, rows, about)


def write_faces(path: PathLike, combination: Combination) -> Paths:
    """Write the faces of a combination: form, indices, normal, distance, area (0 for a face cut away)."""
    columns = (
        Column("form", "string", "the form the face belongs to"),
        Column("name", "string", "name of the form"),
        Column("face", "string", "indices of the face"),
        *(Column(name, "double", "index of the face") for name in "hkl"),
        *(Column(f"n{name}", "double", "Cartesian component of the unit normal") for name in "xyz"),
        Column("distance", "double", "from the centre"),
        Column("area", "double", "in squared units of the distances; 0 where other forms cut the face away"),
    )
    faces = np.concatenate([made.faces for made in combination.forms]).astype(float).tolist()
    body = combination.solid
    rows = (
        [
            combination.forms[form].symbol,
            combination.forms[form].name,
            combination.labels[k],
            *faces[k],
            *body.normals[k].tolist(),
            float(body.distances[k]),
            float(body.areas[k]),
        ]
        for k, form in enumerate(combination.owners.tolist())
    )
    about = {
        **about_setting(
            f"Faces of forms of {combination.group.setting}", combination.group, combination.basis
        ),
        "closed": combination.closed,
    }
    return write_table(path, columns, rows, about)


def write_candidates(path: PathLike, candidates: Candidates) -> Paths:
    """Write the candidates, exact ones first."""
    columns = (
        Column("group", "string", "Hermann–Mauguin symbol"),
        Column("schoenflies", "string", "Schoenflies symbol"),
        Column("system", "string", "crystal system"),
        Column("order", "integer", "number of operations"),
        Column("mirrors", "integer", "number of mirrors"),
        Column("fits", "string", "exactly, or at least"),
    )
    rows = (
        [
            one.group.hermann_mauguin,
            one.group.schoenflies,
            one.group.name.system,
            one.group.order,
            len(one.group.mirrors),
            "exactly" if one.exact else "at least",
        ]
        for one in (*candidates.exactly, *candidates.at_least)
    )
    about = {
        "title": f"Point groups with the mirrors of {candidates.mirror_group.hermann_mauguin}",
        "decisions": [decision.sentence for decision in candidates.decisions],
    }
    return write_table(path, columns, rows, about)


def write_fractions(
    path: PathLike, orbit: Orbit, alignment: Alignment, basis: NDArray[np.float64] | None = None
) -> Paths:
    """Write the images of a seed as fractions of a cell, in the standard setting of their group."""
    group = alignment.group
    about = {
        **about_setting(f"Images of a seed in the standard setting of {group.setting}", group, basis),
        "rotation from the frame of the arrangement": alignment.rotation.tolist(),
    }
    rows = orbit_rows(orbit, alignment.fractions(orbit.points, basis))
    return write_table(path, image_columns(fraction_columns(group)), rows, about)
