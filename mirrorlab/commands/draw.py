"""The verb ``draw``: a picture of the mirrors, or a mesh."""

from __future__ import annotations

import argparse
import re
import sys
from pathlib import Path
from typing import Any

from mirrorlab.commands.output import UsageError, add_mirrors, arrangement_of, numbers
from mirrorlab.drawing.model import Drawing

PICTURES = ("space", "flat", "stereogram", "chamber", "plane")
MESHES = (".glb", ".stl", ".obj")

EXAMPLES = """examples:
  mirrorlab draw 90 60 45 --out lantern.png
  mirrorlab draw 90 60 36 --heights 1,2,3 --out lantern.svg --size 1600x1600
  mirrorlab draw 60 60 60 --out tube.pdf --look dark
  mirrorlab draw 90 60 45 --picture stereogram --out stereogram.svg
  mirrorlab draw --family E7 --picture plane --out e7.svg
  mirrorlab draw 90 60 45 --out lantern.glb
"""


def add_draw(subparsers: Any) -> None:
    """Add the verb's parser."""
    parser = subparsers.add_parser(
        "draw",
        help="a picture of the mirrors, or a mesh",
        description="Write a picture (PNG, SVG, PDF) or a mesh (GLB, STL, OBJ), chosen by the ending of the file.",
        epilog=EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    add_mirrors(parser)
    parser.add_argument("--out", required=True, metavar="F", help="the file to write")
    parser.add_argument("--picture", choices=PICTURES, help="which picture; by default space, or plane above rank 3")
    parser.add_argument("--heights", type=numbers, metavar="1,2,3", help="seed by its distances from the mirrors")
    parser.add_argument("--place", metavar="NAME", help="seed by a named place")
    parser.add_argument("--size", default="1200x1200", metavar="WxH", help="pixels")
    parser.add_argument("--look", choices=("light", "dark"), default="light")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Make the drawing and let the translator for the file's ending write it."""
    match = re.fullmatch(r"(\d+)[x×](\d+)", args.size)
    if match is None:
        msg = f'"{args.size}": not a size; write 1200x800'
        raise UsageError(msg)
    drawing = drawing_of(args)
    if Path(args.out).suffix.lower() in MESHES:
        from mirrorlab.files.mesh import save_mesh

        written = save_mesh(drawing, args.out)
    else:
        from mirrorlab.files.picture import save_picture

        written = save_picture(drawing, args.out, (int(match[1]), int(match[2])), args.look)
    print(f"wrote {written}", file=sys.stderr)
    return 0


def drawing_of(args: argparse.Namespace) -> Drawing:
    """The drawing that the words ask for."""
    arrangement = arrangement_of(args)
    finding = arrangement.finding()
    orbit = None
    if args.heights is not None or args.place is not None:
        orbit = arrangement.orbit(heights=args.heights, place=args.place)
    picture = args.picture or ("plane" if finding.rank > 3 and finding.group is not None else "space")
    if picture == "plane":
        from mirrorlab.drawing.coxeterplane import coxeter_plane_drawing

        return coxeter_plane_drawing(arrangement, finding, orbit)
    if picture == "chamber":
        from mirrorlab.drawing.chambermap import chamber_map

        return chamber_map(arrangement, finding, orbit)
    if picture == "stereogram":
        from mirrorlab.drawing.stereogram import arrangement_stereogram

        return arrangement_stereogram(arrangement, finding, orbit)
    from mirrorlab.drawing.space import SpaceOptions, space_drawing

    return space_drawing(arrangement, finding, orbit, SpaceOptions(flat=picture == "flat"))


ADD = {"draw": add_draw}
