"""A picture and the net of a stereogram as words of the command line, the same for every verb that draws one."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import TYPE_CHECKING

from mirrorlab.commands.output import UsageError

if TYPE_CHECKING:
    from mirrorlab.drawing.model import Drawing
    from mirrorlab.drawing.stereogram import StereogramOptions

PICTURES = (".png", ".svg", ".pdf")
NETS = {"wulff": "equal angles", "schmidt": "equal areas"}


def add_net(parser: argparse.ArgumentParser) -> None:
    """Add the choice of the net."""
    which = " or ".join(f"{net} ({what})" for net, what in NETS.items())
    parser.add_argument(
        "--net",
        choices=tuple(NETS),
        help=f"draw the stereogram with its net under it: {which}; without it, wulff and no net",
    )


def add_picture(parser: argparse.ArgumentParser, what: str) -> None:
    """Add the picture's file, and the net."""
    parser.add_argument("--picture", metavar="F", help=f"{what}: .png, .svg or .pdf")
    add_net(parser)


def check_picture(args: argparse.Namespace) -> None:
    """Refuse what no picture can be written to, and a net without one."""
    if args.picture and Path(args.picture).suffix.lower() not in PICTURES:
        msg = f'"{args.picture}": a picture ends in {", ".join(PICTURES)}'
        raise UsageError(msg)
    if args.net and not args.picture:
        msg = "--net is drawn under a picture; say with --picture where to write it"
        raise UsageError(msg)


def stereogram_options(args: argparse.Namespace) -> StereogramOptions:
    """How the stereogram is drawn."""
    from mirrorlab.drawing.projection import Projection
    from mirrorlab.drawing.stereogram import StereogramOptions

    return StereogramOptions(Projection(args.net or "wulff"), underlay=args.net is not None)


def save_drawing(drawing: Drawing, path: str) -> Path:
    """Write a picture; its suffix says how."""
    from mirrorlab.files.picture import save_picture

    return save_picture(drawing, path)
