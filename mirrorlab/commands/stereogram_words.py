"""The net of a stereogram as words of the command line, the same for every verb that draws one."""

from __future__ import annotations

import argparse
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from mirrorlab.drawing.stereogram import StereogramOptions

NETS = {"wulff": "equal angles", "schmidt": "equal areas"}


def add_net(parser: argparse.ArgumentParser) -> None:
    """Add the choice of the net."""
    which = " or ".join(f"{net} ({what})" for net, what in NETS.items())
    parser.add_argument(
        "--net",
        choices=tuple(NETS),
        help=f"draw the stereogram with its net under it: {which}; without it, wulff and no net",
    )


def stereogram_options(args: argparse.Namespace) -> StereogramOptions:
    """How the stereogram is drawn."""
    from mirrorlab.drawing.projection import Projection
    from mirrorlab.drawing.stereogram import StereogramOptions

    return StereogramOptions(Projection(args.net or "wulff"), underlay=args.net is not None)
