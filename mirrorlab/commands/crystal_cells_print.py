"""Planes, lattices, fits and comparisons printed for a person."""

from __future__ import annotations

from typing import TYPE_CHECKING

from mirrorlab.angles import write_angle
from mirrorlab.commands.output import print_table

if TYPE_CHECKING:
    from mirrorlab.crystal.cell import Cell
    from mirrorlab.crystal.cif import CrystalFile
    from mirrorlab.crystal.comparison import Comparison
    from mirrorlab.crystal.fit_result import Fit, FitCandidate
    from mirrorlab.crystal.lattice_mirrors import LatticeSymmetry, Symmetry
    from mirrorlab.crystal.planes import Planes

SHOWN = 48
"""Operations of a comparison printed for a person; all of them go into a file or JSON."""


def print_planes(found: Planes) -> None:
    """Planes one by one, their angles, and what they do together."""
    _print_cell(found.cell)
    print()
    for one in found.planes:
        print(one.sentence)
    print("\nnormal rows")
    rows = [("plane", "d", "row", "obliquity", "twin index", "")]
    for one in found.planes:
        for k, row in enumerate(one.rows):
            name, spacing = (one.label, one.spacing.text) if k == 0 else ("", "")
            rows.append(
                (
                    name,
                    spacing,
                    row.text,
                    row.obliquity_text,
                    str(row.twin_index),
                    "mirror" if row.mirror else "",
                )
            )
    print_table(rows)
    if found.angles:
        print("\nangles")
        head = ("planes", "", "between normals", "between planes")
        print_table(
            [head, *((*one.names, one.normals.text + "°", one.dihedral.text + "°") for one in found.angles)]
        )
    finding = found.arrangement.finding()
    print(f"\ntogether: {finding.sentence}")
    within = found.measured_arrangement
    if within is not None and within.finding().sentence != finding.sentence:
        print(f"within the uncertainty of the cell: {within.finding().sentence}")


def print_file(file: CrystalFile) -> None:
    """What a CIF file says of the symmetry."""
    print(f"{file.source}, data block {file.block}")
    space_group = file.space_group or "not stated"
    if file.number is not None:
        space_group += f" (number {file.number})"
    rows = [("space group", space_group)]
    if file.point_group:
        setting = f", in the setting {file.setting}" if file.setting not in ("", file.point_group) else ""
        rows.append(("point group", f"{file.point_group}{setting}, order {len(file.rotations)}"))
        rows.append(("mirrors", " ".join(f"({_indices(plane)})" for plane in file.mirrors) or "none"))
    print_table(rows)
    print()


def _indices(plane: tuple[int, ...]) -> str:
    return "".join(map(str, plane)) if max(map(abs, plane)) < 10 else ",".join(map(str, plane))


def _print_cell(cell: Cell) -> None:
    print(f"cell {cell.text}, centring {cell.centring}")
    from mirrorlab.crystal.measured import write_measured

    volume = write_measured(cell.volume, cell.uncertainty(lambda other: other.volume), 4)
    reciprocal = ", ".join(f"{value:.6g}" for value in cell.reciprocal_constants)
    rows = [("volume", volume), ("reciprocal cell", reciprocal)]
    if cell.tie_text:
        rows.append(("one parameter", cell.tie_text))
    print_table(rows)


def print_lattice(found: LatticeSymmetry) -> None:
    """The symmetry of a lattice and its mirrors."""
    print(found.sentence)
    print()
    _print_cell(found.cell)
    print("\nsymmetry, and the cell it has")
    rows = [("", "", "obliquity", "cell", "nearest exact cell", "largest strain")]
    for step in found.steps:
        made = step.conventional
        rows.append(
            (
                step.holohedry,
                made.bravais,
                "exact" if step.exact else f"{step.obliquity:.4g}°",
                _constants(made.constants, made.uncertainties),
                "" if step.exact else _constants(made.ideal, (0.0,) * 6),
                "" if step.exact else f"{100 * made.strain:.2g} %",
            )
        )
    print_table(rows)
    print(
        f"\nmirrors within {found.tolerance:g}°"
        if found.mirrors
        else f"\nno mirrors within {found.tolerance:g}°"
    )
    print_table(
        [(one.label, one.row.text, "exact" if one.exact else one.row.obliquity_text) for one in found.mirrors]
    )
    for name, step in _named_steps(found):
        if step.arrangement is not None:
            print(f"{name}: {step.arrangement.finding().sentence}")


def _named_steps(found: LatticeSymmetry) -> list[tuple[str, Symmetry]]:
    exact = ("exact mirrors", found.exact)
    return [exact] if found.within is found.exact else [exact, ("within the tolerance", found.within)]


def _constants(values: tuple[float, ...], uncertainties: tuple[float, ...]) -> str:
    from mirrorlab.crystal.measured import write_measured

    texts = [write_measured(value, sigma, 4) for value, sigma in zip(values, uncertainties, strict=True)]
    return " ".join(texts[:3]) + "  " + " ".join(texts[3:])


def print_fit(found: Fit, style: str) -> None:
    """The candidates with each angle's pull, angles in a style of `write_angle`."""
    print(found.sentence_in(style))
    print()
    names = [one.pair for one in found.measured]
    few = len(names) <= 6
    head = ["", "group", "kind", *(names if few else []), "χ²", "probability", ""]
    rows = [tuple(head)]
    for rank, one in enumerate(found.candidates, 1):
        angles = [_with_pull(one, k, style) for k in range(len(names))] if few else []
        mark = "best" if rank == 1 else "not told apart" if one in found.tied else ""
        if one.misfit:
            mark = f"{mark}, misfit {one.misfit}".lstrip(", ")
        rows.append(
            (
                str(rank),
                one.symbol,
                "through one line" if one.one_line else one.finding.kind,
                *angles,
                f"{one.chi_squared:.4g}",
                f"{one.probability:.2g}",
                mark,
            )
        )
    print_table(rows)
    if few:
        print(
            "  in brackets: measured less candidate, in standard uncertainties; s: taken for the supplement"
        )
    else:
        best = found.best
        worst = sorted(range(len(names)), key=lambda k: -abs(best.pulls[k] or 0.0))[:6]
        print(
            "  largest pulls of the best: "
            + ", ".join(f"{names[k]} {_with_pull(best, k, style)}" for k in worst)
        )
    for other in found.tied[:3]:
        factor = found.sharper(other)
        if factor is not None:
            print(
                f"  uncertainties {factor:.2g} times as large would tell {other.name_in(style)} from the best"
            )


def _with_pull(one: FitCandidate, k: int, style: str) -> str:
    pull = one.pulls[k]
    return (
        write_angle(one.angles[k], style)
        + (" s" if one.supplements[k] else "")
        + (" (exact)" if pull is None else f" ({pull:+.1f})")
    )


def print_comparison(found: Comparison) -> None:
    """The operations of a group applied to a list."""
    print(found.sentence)
    print()
    count = len(found.points.labels)
    turned = found.orientation
    rows = [
        ("list", f"{found.points.source}, {count} {found.points.what}"),
        (
            "allowed",
            "three standard uncertainties"
            if found.tolerance is None
            else f"{found.tolerance:.4g} {found.unit}",
        ),
        ("subgroup", f"{found.symbol}, order {len(found.subgroup)}"),
    ]
    if not found.closed:
        rows.append(("generated", f"{found.generated_symbol}, order {len(found.generated)}"))
    if turned.how != "given":
        axis = ", ".join(f"{value + 0.0:.4f}" for value in turned.axis)
        rows.append(("turned by", f"{turned.angle:.4f}° about ({axis}), {turned.how}"))
    print_table(rows)
    print("\noperations")
    table = [
        (
            str(one.index + 1),
            one.text,
            "survives" if one.survives else "fails",
            "" if one.rms is None else f"{one.rms:.4g}",
            "" if one.largest is None else f"{one.largest:.4g}",
            one.worst,
            _few(one.unmatched),
        )
        for one in found.operations[:SHOWN]
    ]
    print_table([("", "operation", "", "rms", "largest", "at", "without a partner"), *table])
    if found.group.order > SHOWN:
        print(f"  … {found.group.order - SHOWN} more; --json or --csv FILE has all")


def _few(labels: tuple[str, ...], most: int = 4) -> str:
    more = f" and {len(labels) - most} more" if len(labels) > most else ""
    return ", ".join(labels[:most]) + more
