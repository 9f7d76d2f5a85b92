"""The verbs ``group``, ``form`` and ``candidates``: point groups, face forms, and which group mirrors leave open."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import TYPE_CHECKING, Any

from mirrorlab.commands.crystal_print import (
    SHOWN,
    print_candidates,
    print_combination,
    print_group,
    print_orbit,
)
from mirrorlab.commands.output import (
    UsageError,
    add_mirrors,
    add_style,
    add_verb,
    arrangement_of,
    numbers,
    plain,
    print_json,
    say_written,
)
from mirrorlab.commands.stereogram_words import add_picture, check_picture, save_drawing, stereogram_options

if TYPE_CHECKING:
    from mirrorlab.crystal.combinations import Combination
    from mirrorlab.crystal.pointgroups import NamedGroup
    from mirrorlab.crystal.positions import GroupOrbit
    from mirrorlab.drawing.model import Drawing


GROUP_EXAMPLES = """examples:
  mirrorlab group -43m
  mirrorlab group 31m --forms --subgroups
  mirrorlab group m-3m --point 0.1,0.1,0.3 --csv points.csv
  mirrorlab group D5h --json
  mirrorlab group 4/mmm --picture stereogram.svg --net schmidt
"""

FORM_EXAMPLES = """examples:
  mirrorlab form m-3m 1,1,0
  mirrorlab form -43m 111 -1-1-1:1.3 100:1.1 --picture crystal.png
  mirrorlab form 6/mmm 10-10 0001:1.6 1,0,-1,1:1.5 --cell 4.9,4.9,5.4,90,90,120
  mirrorlab form m-3-5 0,1,1.6180339887 --json
  mirrorlab form m-3m 111 100:1.2 --write-as dms
"""

CANDIDATES_EXAMPLES = """examples:
  mirrorlab candidates 60
  mirrorlab candidates 90 60 45 --json
  mirrorlab candidates --group -42m
  mirrorlab candidates --group 1
"""


def add_group(subparsers: Any) -> None:
    """Add the parser of ``group``."""
    parser = add_verb(subparsers, "group", "Show a point group in its setting.", GROUP_EXAMPLES)
    parser.add_argument(
        "symbol", metavar="GROUP", help="Hermann–Mauguin or Schoenflies symbol: -43m, 31m, D5h"
    )
    parser.add_argument(
        "--point", type=numbers, metavar="x,y,z", help="list the points equivalent to this one"
    )
    parser.add_argument("--cell", type=numbers, metavar="a,b,c,α,β,γ", help="cell for Cartesian coordinates")
    parser.add_argument("--forms", action="store_true", help="one form of each kind")
    parser.add_argument("--subgroups", action="store_true", help="all classes of subgroups")
    parser.add_argument("--csv", metavar="F", help="write the operations, or with --point the points, as CSV")
    add_picture(parser, "write a stereogram")
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run_group)


def add_form(subparsers: Any) -> None:
    """Add the parser of ``form``."""
    parser = add_verb(subparsers, "form", "Name the form of a face, or put several together.", FORM_EXAMPLES)
    parser.add_argument("symbol", metavar="GROUP", help="Hermann–Mauguin or Schoenflies symbol")
    parser.add_argument(
        "faces", metavar="h,k,l[:distance]", nargs="+", help="a face of each form; distance 1 if not given"
    )
    parser.add_argument("--cell", type=numbers, metavar="a,b,c,α,β,γ", help="axes; unit axes if not given")
    parser.add_argument("--csv", metavar="F", help="write all faces as CSV, with its metadata file")
    add_style(parser)
    add_picture(parser, "write a picture of the solid")
    parser.add_argument(
        "--stereogram", action="store_true", help="let the picture be a stereogram of the poles"
    )
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run_form)


def add_candidates(subparsers: Any) -> None:
    """Add the parser of ``candidates``."""
    what = "List the point groups that have these mirrors, and what decides between them."
    parser = add_verb(subparsers, "candidates", what, CANDIDATES_EXAMPLES)
    add_mirrors(parser)
    parser.add_argument(
        "--group", metavar="GROUP", help="take the mirrors of this group (1: no mirrors at all)"
    )
    parser.add_argument("--csv", metavar="F", help="write the list as CSV, with its metadata file")
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run_candidates)


def run_group(args: argparse.Namespace) -> int:
    """Show a point group."""
    from mirrorlab.crystal.pointgroups import point_group

    group = point_group(plain(args.symbol))
    basis = _basis(args)
    if basis is not None:
        from mirrorlab.crystal.lattices import check_cell

        check_cell(group, basis)
    orbit = None
    if args.point is not None:
        from mirrorlab.crystal.positions import orbit_under

        orbit = orbit_under(group, args.point)
    _check_before_writing(args, group)
    written: list[Path] = []
    if args.csv:
        from mirrorlab.files.crystal_tables import write_group_orbit, write_operations

        tables = (
            write_operations(args.csv, group)
            if orbit is None
            else write_group_orbit(args.csv, group, orbit, basis)
        )
        written += tables
    if args.picture:
        from mirrorlab.drawing.stereogram import group_stereogram

        point = None if orbit is None else orbit.points[0] @ group.basis.T
        written.append(
            save_drawing(group_stereogram(group, None, point, stereogram_options(args)), args.picture)
        )
    if args.json:
        print_json(group_dict(group, orbit, args.subgroups, args.forms))
    else:
        print_group(group, args.subgroups, args.forms, operations=orbit is None and not written)
        if orbit is not None:
            print_orbit(group, orbit, 0 if args.csv else SHOWN)
    say_written(written)
    return 0


def _check_before_writing(args: argparse.Namespace, group: NamedGroup) -> None:
    """Meet every error that the words can lead to before the first file or line is written."""
    check_picture(args)
    if args.forms:
        from mirrorlab.crystal.forms import forms_of

        forms_of(group)
    if args.subgroups:
        from mirrorlab.crystal.relations import subgroups

        subgroups(group)


def group_dict(
    group: NamedGroup, orbit: GroupOrbit | None, with_subgroups: bool, with_forms: bool
) -> dict[str, Any]:
    """A point group and what belongs to it as plain JSON."""
    from mirrorlab.crystal.forms import forms_of
    from mirrorlab.crystal.lattices import lattices_of
    from mirrorlab.crystal.positions import positions_of
    from mirrorlab.crystal.relations import subgroups, subgroups_among_the_32, supergroups_among_the_32

    answer = group.to_dict()
    answer["positions"] = [row.to_dict() for row in positions_of(group)]
    answer["subgroups_among_the_32"] = list(subgroups_among_the_32(group)) if _listed(group) else None
    answer["supergroups_among_the_32"] = list(supergroups_among_the_32(group))
    answer["lattices"] = lattices_of(group).to_dict()
    if with_subgroups:
        answer["subgroups"] = [row.to_dict() for row in subgroups(group)]
    if with_forms:
        answer["forms"] = [made.to_dict() for made in forms_of(group)]
    if orbit is not None:
        answer["orbit"] = orbit.to_dict()
    return answer


def _listed(group: NamedGroup) -> bool:
    from mirrorlab.crystal.relations import LARGEST_LISTED

    return group.order <= LARGEST_LISTED


def run_form(args: argparse.Namespace) -> int:
    """Name forms and put them together."""
    from mirrorlab.crystal.combinations import combination
    from mirrorlab.crystal.indices import parse_form
    from mirrorlab.crystal.pointgroups import point_group

    group = point_group(plain(args.symbol))
    pairs = [parse_form(plain(word), group.hexagonal, group.name.crystallographic) for word in args.faces]
    made = combination(
        group, [indices for indices, _ in pairs], [distance for _, distance in pairs], _basis(args)
    )
    check_picture(args)
    written: list[Path] = []
    if args.csv:
        from mirrorlab.files.crystal_tables import write_faces

        written += write_faces(args.csv, made)
    if args.picture:
        written.append(save_drawing(_form_picture(args, group, made), args.picture))
    if args.json:
        print_json(made.to_dict())
    else:
        print_combination(made, not args.csv, args.write_as)
    say_written(written)
    return 0


def _form_picture(args: argparse.Namespace, group: NamedGroup, made: Combination) -> Drawing:
    if args.stereogram or args.net:
        from mirrorlab.drawing.stereogram import group_stereogram

        return group_stereogram(group, made, None, stereogram_options(args))
    from mirrorlab.drawing.form import form_drawing

    return form_drawing(made)


def run_candidates(args: argparse.Namespace) -> int:
    """List the groups that mirrors leave open."""
    from mirrorlab.crystal.candidates import candidates_for, candidates_of

    if args.group is not None:
        if args.angles or args.family or args.file or args.normals:
            msg = "give the mirrors in one way: angles, --family, --file, --normals or --group"
            raise UsageError(msg)
        found = candidates_for(plain(args.group))
    else:
        found = candidates_of(arrangement_of(args).finding())
    written: list[Path] = []
    if args.csv:
        from mirrorlab.files.crystal_tables import write_candidates

        written += write_candidates(args.csv, found)
    if args.json:
        print_json(found.to_dict())
    else:
        print_candidates(found)
    say_written(written)
    return 0


def _basis(args: argparse.Namespace) -> Any:
    if args.cell is None:
        return None
    from mirrorlab.crystal.lattices import axes_from_constants

    return axes_from_constants(args.cell)


ADD = {"group": add_group, "form": add_form, "candidates": add_candidates}
