"""The dimensions of an assembly as words of the command line."""

from __future__ import annotations

import argparse
from typing import Any

from mirrorlab.commands.output import UsageError
from mirrorlab.mirrors import Arrangement

TAKES = {
    "wedge": ("length", "depth", "opening"),
    "corner": ("depth", "truncated", "opening", "cut"),
    "tube": ("length", "sides", "taper", "opening"),
}
"""Which dimensions each kind has."""

NEEDS = {"wedge": ("length",), "corner": (), "tube": ("length",)}


def add_dimensions(parser: argparse.ArgumentParser) -> None:
    """Add the dimensions; lengths are millimetres or carry a unit: 120, 12cm, 4.5in."""
    group = parser.add_argument_group("dimensions", "lengths in mm, or with a unit: 12cm, 4.5in")
    group.add_argument("--opening", metavar="L", help="longest side of the opening one looks through")
    group.add_argument("--length", metavar="L", help="of a wedge's edge, or of a tube")
    group.add_argument("--depth", metavar="L", help="how far a wedge's mirrors or a corner's point reach")
    group.add_argument("--truncated", metavar="L", help="cut a corner's point off at this depth")
    group.add_argument("--cut", choices=("equal edges", "centre line"), help="how a corner's mouth is cut")
    group.add_argument("--sides", metavar="L,L", help="sides of a tube's mouth")
    group.add_argument("--taper", type=float, metavar="R", help="a tube's far end over its mouth")
    group.add_argument("--thickness", metavar="L", help="of the glass (3 mm)")
    group.add_argument("--mirror", metavar="NAME", help="a preset for all mirrors, or one each: x,y,z")


def kind_of(arrangement: Arrangement) -> str:
    """The kind of assembly an arrangement makes.

    Raises
    ------
    UsageError
        When it makes none.
    """
    rank = 0 if arrangement.normals is None else arrangement.normals.shape[1]
    if arrangement.size == 2:
        return "wedge"
    if arrangement.size == 3 and rank == 3:
        return "corner"
    if arrangement.size in (3, 4) and rank == 2:
        return "tube"
    msg = f"{arrangement.size} mirrors of rank {rank}: give two mirrors (wedge), three (corner, tube) or four (tube)"
    raise UsageError(msg)


def dimensions_of(args: argparse.Namespace, kind: str) -> dict[str, Any]:
    """The dimensions typed for an assembly of this kind.

    Raises
    ------
    UsageError
        A dimension this kind doesn't have, or one that is missing.
    """
    known = {name for names in TAKES.values() for name in names}
    given = {name: getattr(args, name) for name in known if getattr(args, name) is not None}
    strange = sorted(set(given) - set(TAKES[kind]))
    if strange:
        msg = f"--{strange[0]}: a {kind} has no such dimension; it takes {', '.join('--' + n for n in TAKES[kind])}"
        raise UsageError(msg)
    missing = [name for name in NEEDS[kind] if name not in given]
    if missing:
        msg = f"a {kind} needs --{missing[0]}"
        raise UsageError(msg)
    if "sides" in given:
        given["sides"] = [side.strip() for side in given["sides"].split(",")]
    if args.thickness is not None:
        given["thickness"] = args.thickness
    if args.mirror is not None:
        names = [name.strip() for name in args.mirror.split(",")]
        given["mirrors"] = names[0] if len(names) == 1 else names
    return given
