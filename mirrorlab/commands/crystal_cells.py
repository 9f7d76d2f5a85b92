"""The verbs ``planes``, ``cell``, ``fit`` and ``compare``: a crystallographer's own numbers in, symmetry out."""

from __future__ import annotations

import argparse
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from mirrorlab.commands.crystal_cells_print import (
    print_comparison,
    print_file,
    print_fit,
    print_lattice,
    print_planes,
)
from mirrorlab.commands.output import UsageError, add_style, add_verb, plain, print_json, say_written
from mirrorlab.commands.stereogram_words import add_picture, check_picture, save_drawing, stereogram_options

if TYPE_CHECKING:
    from mirrorlab.crystal.cell import Cell
    from mirrorlab.crystal.cif import CrystalFile

PLANES_EXAMPLES = """examples:
  mirrorlab planes --cell 5.43,5.43,5.43,90,90,90 --centring F --hkl 1,0,0 1,1,0 1,1,1
  mirrorlab planes --cell "5.10(1),7.20(1),9.30(2),90,90.05(3),90" --hkl 100 -1,0,1 --json
  mirrorlab planes --cell 4.9,4.9,5.4,90,90,120 --hkl 1,0,-1,0 0001 --csv planes.csv
  mirrorlab planes --cif specimen.cif --hkl 1,1,0
"""

CELL_EXAMPLES = """examples:
  mirrorlab cell 5.431,5.431,5.431,90,90,90 --centring F
  mirrorlab cell "5.00(1),8.67(1),7.00(1),90,90,90" --centring C --tolerance 0.5
  mirrorlab cell specimen.cif --json
  mirrorlab cell --cif specimen.cif --block K-7 --csv mirrors.csv
"""

FIT_EXAMPLES = """examples:
  mirrorlab fit "59.8(3)" "90.1(2)" "44.6(4)"
  mirrorlab fit 59.8 90.1 44.6 --sigma 0.3
  mirrorlab fit "36.4(5)" --most 5 --json
  mirrorlab fit "70d32m" --sigma 0.1 --write-as dms
"""

COMPARE_EXAMPLES = """examples:
  mirrorlab compare points.csv --group m-3m
  mirrorlab compare poles.csv --group -43m --poles --tolerance 0.5 --search
  mirrorlab compare atoms.csv --group mmm --cell 5.1,7.2,9.3,90,90,90 --tolerance 0.02 --json
  mirrorlab compare points.csv --group m-3m --picture stereogram.svg --net schmidt
  mirrorlab compare points.csv --group 4/mmm --refine --csv operations.csv --matches matches.csv

points.csv has a row of names (label, x, y, z, uncertainty, kind; or h, k, l; or azimuth, polar in degrees) or rows of
x, y, z with a label in front and an uncertainty behind where wanted.
"""


def add_planes(subparsers: Any) -> None:
    """Add the parser of ``planes``."""
    what = "Say of lattice planes which are mirrors, how they lie to the nearest rows, and what they do together."
    parser = add_verb(subparsers, "planes", what, PLANES_EXAMPLES)
    _add_cell(parser)
    parser.add_argument(
        "--hkl",
        metavar="h,k,l",
        nargs="+",
        action="extend",
        required=True,
        help="planes; h,k,i,l on hexagonal axes",
    )
    parser.add_argument(
        "--max-index", type=int, default=6, metavar="N", help="largest twin index of a row (6)"
    )
    parser.add_argument(
        "--max-obliquity", type=float, default=6.0, metavar="DEG", help="largest obliquity of a row (6)"
    )
    _add_output(parser, "write the planes and their rows as CSV")
    parser.set_defaults(run=run_planes)


def add_cell(subparsers: Any) -> None:
    """Add the parser of ``cell``."""
    what = "Find all mirrors of a lattice, exact and nearly, and the symmetry they make."
    parser = add_verb(subparsers, "cell", what, CELL_EXAMPLES)
    parser.add_argument(
        "given",
        nargs="*",
        metavar="a,b,c,α,β,γ | FILE.cif",
        help="constants, with uncertainties, or a CIF file",
    )
    _add_cell(parser)
    parser.add_argument(
        "--tolerance", type=float, default=3.0, metavar="DEG", help="largest obliquity of a mirror (3)"
    )
    _add_output(parser, "write the mirrors as CSV")
    parser.set_defaults(run=run_cell)


def add_fit(subparsers: Any) -> None:
    """Add the parser of ``fit``."""
    what = "Rank closed arrangements against measured angles; each angle may be its supplement."
    parser = add_verb(subparsers, "fit", what, FIT_EXAMPLES)
    parser.add_argument(
        "angles",
        nargs="+",
        metavar="ANGLE",
        help="measured angles pair by pair: ab, ac, …, bc, …; as 59.8(3)",
    )
    parser.add_argument(
        "--sigma", type=float, metavar="DEG", help="standard uncertainty of angles without one"
    )
    parser.add_argument(
        "--walls",
        action="store_true",
        help="only arrangements without generated mirrors between the measured ones",
    )
    parser.add_argument("--most", type=int, default=12, metavar="N", help="how many candidates (12)")
    add_style(parser)
    _add_output(parser, "write the candidates as CSV")
    parser.set_defaults(run=run_fit)


def add_compare(subparsers: Any) -> None:
    """Add the parser of ``compare``."""
    what = "Compare a list of points or face poles with a point group, operation by operation."
    parser = add_verb(subparsers, "compare", what, COMPARE_EXAMPLES)
    parser.add_argument("file", metavar="FILE.csv", help="the list")
    parser.add_argument(
        "--group", required=True, metavar="GROUP", help="Hermann–Mauguin or Schoenflies symbol"
    )
    parser.add_argument(
        "--tolerance",
        type=float,
        metavar="T",
        help="largest deviation: in the list's unit, degrees for poles; if not given, from the uncertainties in the "
        "list, else 1 percent of its radius or 1 degree",
    )
    turn = parser.add_mutually_exclusive_group()
    turn.add_argument("--refine", action="store_true", help="turn the list to obey the group best")
    turn.add_argument("--search", action="store_true", help="the same, from any orientation")
    parser.add_argument("--centroid", action="store_true", help="take the centre of gravity for the centre")
    parser.add_argument("--poles", action="store_true", help="only directions count, as of face poles")
    _add_cell(parser, "x,y,z are fractions of this cell, h,k,l its indices")
    parser.add_argument(
        "--skip-unreadable", action="store_true", help="leave out rows that cannot be read, and name them"
    )
    parser.add_argument(
        "--matches", metavar="F", help="write the partner of each point under each operation as CSV"
    )
    add_picture(parser, "write a stereogram of the list, what it does not obey flagged")
    _add_output(parser, "write one row an operation as CSV")
    parser.set_defaults(run=run_compare)


def _add_cell(
    parser: argparse.ArgumentParser, what: str = "constants of the cell, 5.431(2) where uncertain"
) -> None:
    parser.add_argument("--cell", metavar="a,b,c,α,β,γ", help=what)
    parser.add_argument("--centring", metavar="P|A|B|C|I|F|R", help="centring of the cell (P)")
    parser.add_argument("--cif", metavar="FILE", help="take the cell from a CIF file")
    parser.add_argument(
        "--block", metavar="NAME", help="data block of the CIF file; the first with a cell if not given"
    )
    parser.add_argument(
        "--independent",
        action="store_true",
        help="equal constants are separate measurements, not one parameter",
    )


def _add_output(parser: argparse.ArgumentParser, what: str) -> None:
    parser.add_argument("--csv", metavar="F", help=f"{what}, with its metadata file")
    parser.add_argument("--json", action="store_true", help="everything as JSON")


def _cell_of(args: argparse.Namespace, given: Sequence[str] = ()) -> tuple[Cell | None, CrystalFile | None]:
    """The cell that the words say, and the file it came from."""
    from dataclasses import replace

    from mirrorlab.crystal.cell import parse_cell

    words = [plain(word) for word in given]
    file = args.cif
    if len(words) == 1 and (words[0].lower().endswith((".cif", ".mmcif")) or Path(words[0]).is_file()):
        file, words = words[0], []
        if args.cif is not None:
            msg = "give one CIF file"
            raise UsageError(msg)
    if sum((bool(words), file is not None, args.cell is not None)) > 1:
        msg = "give the cell in one way: constants, --cell or --cif"
        raise UsageError(msg)
    if file is not None:
        from mirrorlab.crystal.cif import read_cif

        made = read_cif(file, args.block)
        cell = replace(made.cell, centring=args.centring or made.cell.centring, tied=not args.independent)
        return cell, made
    if args.block is not None:
        msg = "--block names a data block of a CIF file; give the file with --cif"
        raise UsageError(msg)
    text = ",".join(words) if words else args.cell
    if text is None:
        return None, None
    return parse_cell(plain(text), args.centring or "P", not args.independent), None


def _needed(cell: Cell | None) -> Cell:
    if cell is None:
        msg = "a cell is needed: --cell 5.431,5.431,5.431,90,90,90 or --cif FILE"
        raise UsageError(msg)
    return cell


def run_planes(args: argparse.Namespace) -> int:
    """Say what lattice planes are to their lattice."""
    from mirrorlab.crystal.planes import parse_planes, planes_of

    cell, file = _cell_of(args)
    cell = _needed(cell)
    planes = parse_planes(cell, [plain(word) for word in args.hkl])
    found = planes_of(cell, planes, args.max_index, args.max_obliquity)
    answer = found.to_dict()  # makes the findings, so that nothing fails once a file is written
    written: list[Path] = []
    if args.csv:
        from mirrorlab.files.cell_tables import write_planes

        written += write_planes(args.csv, found)
    if args.json:
        print_json({**answer, "file": None if file is None else file.to_dict()})
    else:
        print_planes(found)
    say_written(written, () if file is None else file.notes)
    return 0


def run_cell(args: argparse.Namespace) -> int:
    """Find the mirrors of a lattice."""
    from mirrorlab.crystal.lattice_mirrors import lattice_symmetry

    cell, file = _cell_of(args, args.given)
    found = lattice_symmetry(_needed(cell), args.tolerance)
    answer = found.to_dict()
    written: list[Path] = []
    if args.csv:
        from mirrorlab.files.cell_tables import write_lattice_mirrors

        written += write_lattice_mirrors(args.csv, found)
    if args.json:
        for key, step in (("finding", found.exact), ("finding_within_tolerance", found.within)):
            answer[key] = None if step.arrangement is None else step.arrangement.finding().to_dict()
        print_json({**answer, "file": None if file is None else file.to_dict()})
    else:
        if file is not None:
            print_file(file)
        print_lattice(found)
    say_written(written, () if file is None else file.notes)
    return 0


def run_fit(args: argparse.Namespace) -> int:
    """Rank closed arrangements."""
    from mirrorlab.angles import split_angles
    from mirrorlab.crystal.fit import fit_angles

    angles = [part for word in args.angles for part in split_angles(plain(word))]
    found = fit_angles(angles, args.sigma, not args.walls, args.most)
    answer = found.to_dict()
    written: list[Path] = []
    if args.csv:
        from mirrorlab.files.cell_tables import write_fit

        written += write_fit(args.csv, found)
    if args.json:
        print_json(answer)
    else:
        print_fit(found, args.write_as)
    say_written(written, () if args.json else found.notes)
    return 0


def run_compare(args: argparse.Namespace) -> int:
    """Compare a list with a group."""
    from mirrorlab.crystal.compare import compare_points
    from mirrorlab.crystal.point_lists import read_points

    check_picture(args)
    points = read_points(args.file)
    if not args.skip_unreadable:
        points = points.complete()
    cell, file = _cell_of(args)
    orientation = "searched" if args.search else "refined" if args.refine else "given"
    found = compare_points(
        points,
        plain(args.group),
        args.tolerance,
        orientation,
        args.centroid,
        args.poles,
        None if cell is None else cell.basis,
    )
    answer = found.to_dict()
    written: list[Path] = []
    if args.csv:
        from mirrorlab.files.cell_tables import write_comparison

        written += write_comparison(args.csv, found)
    if args.matches:
        from mirrorlab.files.cell_tables import write_matches

        written += write_matches(args.matches, found)
    if args.picture:
        from mirrorlab.drawing.stereogram import list_stereogram

        written.append(save_drawing(list_stereogram(found, stereogram_options(args)), args.picture))
    if args.json:
        print_json(answer)
    else:
        print_comparison(found)
    say_written(written, (*(() if file is None else file.notes), *found.notes))
    return 0


ADD = {"planes": add_planes, "cell": add_cell, "fit": add_fit, "compare": add_compare}
