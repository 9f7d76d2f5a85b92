"""The dimensions of an assembly as words of the command line."""

from __future__ import annotations

import argparse
import textwrap
from typing import Any

from mirrorlab.commands.output import UsageError

TAKES = {
    "wedge": ("length", "depth", "opening"),
    "corner": ("depth", "truncated", "opening", "cut"),
    "tube": ("length", "sides", "taper", "opening"),
}
"""Which dimensions each kind has."""

NEEDS = {"wedge": ("length",), "corner": (), "tube": ("length",)}


USUAL = {
    "wedge": {"length": "200", "depth": "60"},
    "corner": {"depth": "150"},
    "tube": {"length": "200", "sides": "50"},
}
"""Dimensions in mm of an assembly for which none were typed: something that is held in the hand."""


WIDE = 100
"""Letters of a line that argparse leaves as it is."""


def usual_words(kind: str) -> str:
    """The usual dimensions as they would be typed."""
    return " ".join(f"--{name} {value}" for name, value in USUAL[kind].items())


def add_dimensions(parser: argparse.ArgumentParser, usual: bool = False) -> None:
    """Add the dimensions; lengths are millimetres or carry a unit: 120, 12cm, 4.5in.

    With `usual` the help says what is taken where none is given.
    """
    about = (
        "lengths in mm, or with a unit: 12cm, 4.5in. A wedge has a length, and a depth or an opening; a corner a "
        "depth or an opening; a tube a length, and sides or an opening."
    )
    if usual:
        taken = "; ".join(f"{kind} {usual_words(kind)}" for kind in USUAL)
        about += f" Where none is given: {taken}."
    group = parser.add_argument_group("dimensions", textwrap.fill(about, WIDE))
    group.add_argument("--opening", metavar="L", help="longest side of the opening one looks through")
    group.add_argument("--length", metavar="L", help="of a wedge's edge, or of a tube")
    group.add_argument("--depth", metavar="L", help="how far a wedge's mirrors or a corner's point reach")
    group.add_argument("--truncated", metavar="L", help="cut a corner's point off at this depth")
    group.add_argument(
        "--cut", choices=("equal edges", "centre line"), help="how a corner's mouth is cut (equal edges)"
    )
    group.add_argument("--sides", metavar="L,L", help="sides of a tube's mouth")
    group.add_argument(
        "--taper", type=float, metavar="R", help="size of a tube's far end over that of its mouth (1)"
    )
    group.add_argument("--thickness", metavar="L", help="of the glass (3 mm)")
    group.add_argument(
        "--mirror",
        metavar="NAME",
        help="for all mirrors, or one each with commas between: first-surface aluminium (if not given), first-surface "
        "enhanced, household glass, perfect",
    )


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
