"""The verb ``draw``: a picture of the mirrors, or a mesh."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

from mirrorlab.commands.output import (
    UsageError,
    add_mirrors,
    add_seed,
    add_verb,
    arrangement_and_seed,
    print_json,
    say_written,
    seed_of,
    size_of,
)
from mirrorlab.commands.stereogram_words import add_net, stereogram_options
from mirrorlab.drawing.model import Drawing
from mirrorlab.mirrors import Arrangement, Finding, Orbit

if TYPE_CHECKING:
    from mirrorlab.drawing.stereogram import StereogramOptions

MESHES = (".glb", ".stl", ".obj")
STEREOGRAM = "stereogram"

EXAMPLES = """examples:
  mirrorlab draw 90 60 45 --out lantern.png
  mirrorlab draw 90 60 36 --heights 1,2,3 --out lantern.svg --size 1600x1600
  mirrorlab draw 60 60 60 --out tube.pdf --look dark
  mirrorlab draw 90 60 45 --picture stereogram --net schmidt --out stereogram.svg
  mirrorlab draw --family E7 --picture plane --out e7.svg
  mirrorlab draw 90 60 45 --out lantern.glb
"""


def add_draw(subparsers: Any) -> None:
    """Add the verb's parser."""
    what = "Write a picture (PNG, SVG, PDF) or a mesh (GLB, STL, OBJ), chosen by the ending of the file."
    parser = add_verb(subparsers, "draw", what, EXAMPLES)
    add_mirrors(parser)
    parser.add_argument("--out", required=True, metavar="F", help="the file to write")
    parser.add_argument(
        "--picture",
        choices=(*MAKERS, STEREOGRAM),
        help="space: mirrors and chambers in 3D; flat: mirrors through one line, seen along it; chamber: flat map of "
        "one chamber; plane: mirrors and images projected on the Coxeter plane, for any rank; stereogram: mirrors, "
        "axes and images as poles. By default space, or plane above rank 3",
    )
    add_net(parser)
    add_seed(parser)
    parser.add_argument("--size", default="1200x1200", metavar="WxH", help="pixels (1200x1200)")
    parser.add_argument("--look", choices=("light", "dark"), default="light", help="tints (light)")
    parser.add_argument("--json", action="store_true", help="what was drawn, as JSON")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Make the drawing and let the translator for the file's ending write it."""
    size = size_of(args.size)
    drawing = drawing_of(args)
    if Path(args.out).suffix.lower() in MESHES:
        from mirrorlab.files.mesh import save_mesh

        written = save_mesh(drawing, args.out)
    else:
        from mirrorlab.files.picture import save_picture

        written = save_picture(drawing, args.out, size, args.look)
    if args.json:
        print_json(
            {
                "file": str(written),
                "title": drawing.title,
                "frame": drawing.frame,
                "notes": list(drawing.notes),
            }
        )
    for note in drawing.notes:
        print(note, file=sys.stderr)
    say_written([written])
    return 0


def drawing_of(args: argparse.Namespace) -> Drawing:
    """The drawing that the words ask for.

    Raises
    ------
    UsageError
        There is no such picture of these mirrors.
    """
    arrangement, kept = arrangement_and_seed(args)
    finding = arrangement.finding()
    seed = seed_of(args, kept)
    asked = seed_of(
        args, {}
    )  # a seed asked for where nothing closes is refused; one that a file keeps is passed over
    orbit = arrangement.orbit(**seed) if asked or (seed and finding.group is not None) else None
    picture = _picture(args, finding)
    if picture == STEREOGRAM:
        drawing = _stereogram(arrangement, finding, orbit, stereogram_options(args))
    else:
        drawing = MAKERS[picture](arrangement, finding, orbit)
    if not (drawing.faces or drawing.lines or drawing.points):
        msg = f"nothing to draw: {' '.join(drawing.notes) or drawing.title}"
        raise UsageError(msg)
    return drawing


def _picture(args: argparse.Namespace, finding: Finding) -> str:
    """Which picture the words ask for."""
    if args.net and args.picture not in (None, STEREOGRAM):
        msg = f"--net is of a stereogram; there is none under --picture {args.picture}"
        raise UsageError(msg)
    if args.picture == "flat" and finding.rank > 2:
        msg = (
            f"rank {finding.rank} has no flat view; that is of mirrors through one line. Take --picture space"
        )
        raise UsageError(msg)
    if args.net:
        return STEREOGRAM
    usual = "plane" if finding.rank > 3 and finding.group is not None else "space"
    return str(args.picture or usual)


def _space(arrangement: Arrangement, finding: Finding, orbit: Orbit | None) -> Drawing:
    from mirrorlab.drawing.space import space_drawing

    return space_drawing(arrangement, finding, orbit)


def _flat(arrangement: Arrangement, finding: Finding, orbit: Orbit | None) -> Drawing:
    from mirrorlab.drawing.space import SpaceOptions, space_drawing

    return space_drawing(arrangement, finding, orbit, SpaceOptions(flat=True))


def _stereogram(
    arrangement: Arrangement, finding: Finding, orbit: Orbit | None, options: StereogramOptions
) -> Drawing:
    from mirrorlab.drawing.stereogram import arrangement_stereogram

    return arrangement_stereogram(arrangement, finding, orbit, options=options)


def _chamber(arrangement: Arrangement, finding: Finding, orbit: Orbit | None) -> Drawing:
    from mirrorlab.drawing.chambermap import chamber_drawing

    return chamber_drawing(arrangement, finding, orbit)


def _plane(arrangement: Arrangement, finding: Finding, orbit: Orbit | None) -> Drawing:
    from mirrorlab.drawing.coxeterplane import coxeter_drawing

    return coxeter_drawing(arrangement, finding, orbit)


MAKERS = {"space": _space, "flat": _flat, "chamber": _chamber, "plane": _plane}
ADD = {"draw": add_draw}
