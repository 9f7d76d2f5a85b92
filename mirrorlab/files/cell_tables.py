"""Lattice planes, lattice mirrors, fits and comparisons as CSV with their metadata."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from mirrorlab.angles import write_angle
from mirrorlab.files.crystal_columns import OPERATION, SYMBOL, TRIPLET, PathLike, Paths
from mirrorlab.files.table import Column, write_table

if TYPE_CHECKING:
    from mirrorlab.crystal.comparison import Comparison
    from mirrorlab.crystal.fit_result import Fit
    from mirrorlab.crystal.lattice_mirrors import LatticeSymmetry
    from mirrorlab.crystal.normal_rows import Row
    from mirrorlab.crystal.planes import Planes

_PLANE = (
    Column("plane", "string", "indices of the plane"),
    *(Column(name, "integer", "index of the plane") for name in "hkl"),
    *(Column(name, "integer", "index of the row that stands on it") for name in "uvw"),
    Column("obliquity", "double", "between the row and the normal", "degrees"),
    Column("obliquity_uncertainty", "double", "standard uncertainty", "degrees"),
    Column("twin_index", "integer", "1 for a mirror of the lattice, exact or near"),
    Column("exact", "boolean", "the row is the normal"),
)


def _plane_row(label: str, indices: tuple[int, int, int], row: Row) -> list[object]:
    return [
        label,
        *indices,
        *row.indices,
        row.obliquity,
        row.uncertainty,
        row.twin_index,
        row.exact,
    ]


def write_planes(path: PathLike, planes: Planes) -> Paths:
    """Write planes with their normal rows, all that are worth naming."""
    columns = (
        *_PLANE,
        Column("d", "double", "spacing d(hkl)", "unit of the cell"),
        Column("d_uncertainty", "double", "standard uncertainty", "unit of the cell"),
    )
    rows = (
        [*_plane_row(one.label, one.indices, row), one.spacing.value, one.spacing.uncertainty]
        for one in planes.planes
        for row in one.rows
    )
    about = {
        "title": "Lattice planes and their normal rows",
        "cell": planes.cell.text,
        "centring": planes.cell.centring,
        "angles between normals, degrees": [
            [*angle.names, angle.normals.value, angle.normals.uncertainty] for angle in planes.angles
        ],
    }
    return write_table(path, columns, rows, about)


def write_lattice_mirrors(path: PathLike, found: LatticeSymmetry) -> Paths:
    """Write the mirrors of a lattice."""
    exact = {mirror.indices for mirror in found.exact.mirrors}
    within = {mirror.indices for mirror in found.within.mirrors}
    columns = (*_PLANE, Column("symmetry", "string", "exact, nearly (within the tolerance), or alone"))
    rows = (
        [
            *_plane_row(one.label, one.indices, one.row),
            "exact" if one.indices in exact else "nearly" if one.indices in within else "alone",
        ]
        for one in found.mirrors
    )
    about = {
        "title": "Mirrors of a lattice",
        "cell": found.cell.text,
        "centring": found.cell.centring,
        "tolerance, degrees": found.tolerance,
        "result": found.sentence,
    }
    return write_table(path, columns, rows, about)


def write_fit(path: PathLike, fit: Fit) -> Paths:
    """Write the ranked candidates, with each angle's pull."""
    columns = (
        Column("rank", "integer", "1 fits best"),
        Column("symbol", "string", "point group, or families for more than three mirrors"),
        Column("kind", "string", "closed, or closed-subdivided"),
        Column("through_one_line", "boolean", "all three mirrors pass through one line"),
        *(Column(f"{one.pair}", "string", "angle of the candidate") for one in fit.measured),
        *(
            Column(f"{one.pair}_pull", "double", "measured less candidate", "standard uncertainties")
            for one in fit.measured
        ),
        Column("chi_squared", "double"),
        Column(
            "probability", "double", "of so large a chi-squared or a larger one, if the candidate is true"
        ),
        Column("misfit", "string", "the angle that is at odds, where the others fit without it"),
        Column("tied", "boolean", "not told from the best at this precision"),
    )
    rows = (
        [
            rank,
            one.symbol,
            one.finding.kind,
            one.one_line,
            *(write_angle(f) for f in one.angles),
            *one.pulls,
            one.chi_squared,
            one.probability,
            one.misfit,
            one in fit.tied,
        ]
        for rank, one in enumerate(fit.candidates, 1)
    )
    about = {
        "title": "Closed arrangements ranked against measured angles",
        "measured": [f"{one.pair} = {one.text}, sigma {one.sigma:g} degrees" for one in fit.measured],
        "result": fit.sentence,
        "notes": list(fit.notes),
    }
    return write_table(path, columns, rows, about)


def write_comparison(path: PathLike, found: Comparison) -> Paths:
    """Write one row an operation."""
    columns = (
        OPERATION,
        SYMBOL,
        TRIPLET,
        Column("survives", "boolean", "every point has a partner within what is allowed"),
        Column("rms", "double", "of the deviations", found.unit),
        Column("largest", "double", "deviation", found.unit),
        Column("worst", "string", "point with the largest deviation"),
        Column("unmatched", "string", "points without a partner"),
    )
    rows = (
        [
            one.index + 1,
            one.text,
            one.triplet,
            one.survives,
            one.rms,
            one.largest,
            one.worst,
            "; ".join(one.unmatched),
        ]
        for one in found.operations
    )
    return write_table(path, columns, rows, _about_comparison(found))


def write_matches(path: PathLike, found: Comparison) -> Paths:
    """Write one row for each point under each operation."""
    columns = (
        OPERATION,
        SYMBOL,
        Column("point", "string", "label"),
        Column("line", "integer", "of the point in its file"),
        Column("partner", "string", "point it is moved to; empty where there is none"),
        Column("deviation", "double", "between the moved point and its partner", found.unit),
    )
    return write_table(path, columns, _matches(found), _about_comparison(found))


def _matches(found: Comparison) -> Iterable[list[object]]:
    labels, lines = found.points.labels, found.points.lines
    for one in found.operations:
        for k, (partner, deviation) in enumerate(
            zip(one.partner.tolist(), one.deviation.tolist(), strict=True)
        ):
            there = partner >= 0
            yield [
                one.index + 1,
                one.text,
                labels[k],
                lines[k],
                labels[partner] if there else None,
                deviation if there else None,
            ]


def _about_comparison(found: Comparison) -> dict[str, object]:
    return {
        "title": f"{found.points.source} compared with {found.group.setting}",
        "group": found.group.setting,
        "tolerance": found.tolerance,
        "unit": found.unit,
        "centre": found.centre.tolist(),
        "orientation": found.orientation.to_dict(),
        "result": found.sentence,
        "notes": list(found.notes),
    }
