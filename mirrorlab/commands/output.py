"""What the verbs share: reading the mirrors, and printing for a person or as JSON."""

from __future__ import annotations

import argparse
import json
import sys
from collections.abc import Mapping, Sequence
from typing import Any

from mirrorlab.angles import AngleSettings, split_angles
from mirrorlab.mirrors import Arrangement


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


def add_mirrors(parser: argparse.ArgumentParser) -> None:
    """Add the ways to say which mirrors are meant."""
    parser.add_argument("angles", nargs="*", metavar="ANGLE", help="angles pair by pair: 12, 13, …, 23, …")
    parser.add_argument("--family", metavar="NAME", help="walls of a named group: E7, A1xI2(5)")
    parser.add_argument("--file", metavar="FILE", help="an arrangement file")
    parser.add_argument(
        "--normals", metavar="x,y,z", nargs="+", type=numbers, help="mirrors through one point"
    )
    parser.add_argument(
        "--max-denominator", type=int, default=360, metavar="M", help="largest m of a fraction k/m"
    )
    parser.add_argument("--sigmas", type=float, default=3.0, help="width of a measured angle's band")


def arrangement_of(args: argparse.Namespace) -> Arrangement:
    """The mirrors that the words say."""
    settings = AngleSettings(args.max_denominator, args.sigmas)
    angles = [part for word in args.angles for part in split_angles(plain(word))]
    ways = [bool(angles), args.family is not None, args.file is not None, args.normals is not None]
    if sum(ways) != 1:
        msg = "give the mirrors in one way: angles, --family, --file or --normals"
        raise UsageError(msg)
    if args.family is not None:
        return Arrangement.from_family(args.family, settings)
    if args.file is not None:
        from mirrorlab.files.sheet_file import load_sheet

        return load_sheet(args.file).arrangement
    if args.normals is not None:
        widths = {len(row) for row in args.normals}
        if len(widths) != 1:
            msg = f"normals with {sorted(widths)} coordinates; all need as many"
            raise UsageError(msg)
        return Arrangement.from_normals(args.normals, settings)
    return Arrangement.from_angles(angles, settings)


def print_json(value: Mapping[str, Any]) -> None:
    """Print plain JSON."""
    json.dump(value, sys.stdout, indent=2, ensure_ascii=False)
    sys.stdout.write("\n")


def print_table(rows: Sequence[Sequence[str]], indent: str = "  ") -> None:
    """Print rows of text in aligned columns."""
    if not rows:
        return
    widths = [max(len(row[k]) for row in rows) for k in range(len(rows[0]))]
    for row in rows:
        line = "  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True))
        print(indent + line.rstrip())
