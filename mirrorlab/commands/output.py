"""What the verbs share: reading the mirrors, and printing for a person or as JSON."""

from __future__ import annotations

import argparse
import json
import math
import re
import sys
from collections.abc import Iterable, Mapping, Sequence
from typing import Any

from mirrorlab.angles import STYLES, Angle, AngleSettings, split_angles, write_angle
from mirrorlab.mirrors import Arrangement

SEED_WAYS = ("heights", "point", "place")

ROUNDING = 1e-9
"""Radians; an angle computed on doubles that is this near to a fraction of π is that fraction."""


class UsageError(ValueError):
    """Words of a command that do not fit together."""


def plain(text: str) -> str:
    """A word of the command line as it was typed (see `mirrorlab.command`)."""
    return text.strip()


def numbers(text: str) -> list[float]:
    """Read ``1,2,3`` as numbers."""
    try:
        return [float(part) for part in plain(text).split(",")]
    except ValueError:
        msg = f'"{plain(text)}": not a list of numbers; write 1,2,3'
        raise argparse.ArgumentTypeError(msg) from None


def add_verb(subparsers: Any, name: str, description: str, examples: str) -> argparse.ArgumentParser:
    """Add the parser of a verb; its examples stand below its options as they are written."""
    parser: argparse.ArgumentParser = subparsers.add_parser(
        name, description=description, epilog=examples, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    return parser


def add_mirrors(parser: argparse.ArgumentParser) -> None:
    """Add the ways to say which mirrors are meant."""
    parser.add_argument(
        "angles",
        nargs="*",
        metavar="ANGLE",
        help="angles between the mirrors a, b, c, … pair by pair: ab, ac, …, bc, …; each in degrees (60, 59.9(2)), "
        "degrees, minutes and seconds (54d44m8s), a fraction of pi (2pi/5) or radians (1.0472rad)",
    )
    parser.add_argument("--family", metavar="NAME", help="walls of a named group: E7, A1xI2(5)")
    parser.add_argument("--file", metavar="FILE", help="an arrangement file, as the window saves it")
    parser.add_argument(
        "--normals", metavar="x,y,z", nargs="+", type=numbers, help="normals of mirrors through one point"
    )
    parser.add_argument(
        "--max-denominator",
        type=int,
        default=360,
        metavar="M",
        help="largest m of a closing fraction k/m (360)",
    )
    parser.add_argument(
        "--sigmas",
        type=float,
        default=3.0,
        metavar="S",
        help="band of a measured angle, in standard uncertainties (3)",
    )


def add_seed(parser: argparse.ArgumentParser) -> None:
    """Add the ways to say where the seed is."""
    group = parser.add_argument_group("seed", "the point whose images are made, given in one of these ways")
    seed = group.add_mutually_exclusive_group()
    seed.add_argument(
        "--heights", type=numbers, metavar="1,2,3", help="seed by its distances from a, b, c, …"
    )
    seed.add_argument("--point", type=numbers, metavar="x,y,z", help="seed by its coordinates")
    seed.add_argument(
        "--place", metavar="NAME", help='seed at a named place: centre, "wall a", "edge ab", "corner bc"'
    )


def add_style(parser: argparse.ArgumentParser) -> None:
    """Add the choice of how angles between mirrors or faces are written in the answer for a person."""
    parser.add_argument(
        "--write-as",
        choices=STYLES,
        default="degrees",
        help="how angles are written: degrees (60.5°), pi (2pi/5; in degrees what is no fraction of pi) or dms "
        "(60°30'00\"); degrees if not given",
    )


def computed(degrees: float, style: str, digits: str) -> str:
    """An angle computed on doubles, in a style of `write_angle`; a format such as ``.4f`` says its digits in degrees.

    For "pi" an angle that is no fraction of π is written in degrees.
    """
    angle = Angle.from_radians(math.radians(degrees), ROUNDING)
    if style == "degrees" or (style == "pi" and angle.fraction is None):
        return f"{degrees:{digits}}°"
    return write_angle(angle, style)


def arrangement_of(args: argparse.Namespace) -> Arrangement:
    """The mirrors that the words say."""
    return arrangement_and_seed(args)[0]


def arrangement_and_seed(args: argparse.Namespace) -> tuple[Arrangement, Mapping[str, Any]]:
    """The mirrors that the words say, and the seed that an arrangement file keeps with them."""
    settings = AngleSettings(args.max_denominator, args.sigmas)
    angles = [part for word in args.angles for part in split_angles(plain(word))]
    ways = [bool(angles), args.family is not None, args.file is not None, args.normals is not None]
    if sum(ways) != 1:
        msg = "give the mirrors in one way: angles, --family, --file or --normals"
        raise UsageError(msg)
    if args.file is not None:
        from mirrorlab.files.sheet_file import load_sheet

        sheet = load_sheet(args.file)
        return sheet.arrangement, sheet.seed
    if args.family is not None:
        return Arrangement.from_family(args.family, settings), {}
    if args.normals is not None:
        widths = {len(row) for row in args.normals}
        if len(widths) != 1:
            msg = f"normals with {sorted(widths)} coordinates; all need as many"
            raise UsageError(msg)
        return Arrangement.from_normals(args.normals, settings), {}
    return Arrangement.from_angles(angles, settings), {}


def size_of(text: str) -> tuple[int, int]:
    """Width and height in pixels, from a text such as 1200x800."""
    match = re.fullmatch(r"(\d+)[x×](\d+)", text)
    if match is None:
        msg = f'"{text}": not a size; write 1200x800'
        raise UsageError(msg)
    return int(match[1]), int(match[2])


def seed_of(args: argparse.Namespace, kept: Mapping[str, Any]) -> dict[str, Any]:
    """Where the seed is: as the words say, else as the file keeps it, else empty."""
    given = {key: getattr(args, key) for key in SEED_WAYS if getattr(args, key) is not None}
    return given or {key: kept[key] for key in SEED_WAYS if kept.get(key) is not None}


def say_written(written: Iterable[object], notes: Iterable[str] = ()) -> None:
    """Say on standard error what is to be noted and which files were written."""
    for note in notes:
        print(f"note: {note}", file=sys.stderr)
    for path in written:
        print(f"wrote {path}", file=sys.stderr)


def print_json(value: Mapping[str, Any]) -> None:
    """Print plain JSON."""
    encoding = (getattr(sys.stdout, "encoding", None) or "utf-8").lower().replace("-", "")
    json.dump(value, sys.stdout, indent=2, ensure_ascii=encoding != "utf8")
    sys.stdout.write("\n")


def print_table(rows: Sequence[Sequence[str]], indent: str = "  ") -> None:
    """Print rows of text in aligned columns; a column of numbers stands under each other by its decimal points.

    Whether a column holds numbers is seen below its first row, which may be the heads.
    """
    if not rows:
        return
    columns = [_aligned([row[k] for row in rows]) for k in range(len(rows[0]))]
    for cells in zip(*columns, strict=True):
        print(indent + "  ".join(cells).rstrip())


_NUMBER = re.compile(r"[+\-−]?[\d,]*(\.\d*)?(e[+-]?\d+)?°?\Z")


def _aligned(cells: list[str]) -> list[str]:
    below = [cell for cell in cells[1:] if cell]
    if not below or not all(map(_is_number, below)):
        width = max(map(len, cells))
        return [cell.ljust(width) for cell in cells]
    numeric = [*cells[1:], *([cells[0]] if _is_number(cells[0]) else [])]
    most = max(map(_after_point, numeric))
    padded = [cell + " " * (most - _after_point(cell)) if cell in numeric else cell for cell in cells]
    width = max(map(len, padded))
    return [cell.rjust(width) for cell in padded]


def _is_number(cell: str) -> bool:
    return _NUMBER.match(cell) is not None and any(c.isdigit() for c in cell)


def _after_point(cell: str) -> int:
    """Characters from the decimal point on."""
    return len(cell) - cell.find(".") if "." in cell else 0
