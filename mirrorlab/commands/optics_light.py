"""The verbs ``images``, ``tolerance`` and ``view``: what an assembly of real mirrors does with light."""

from __future__ import annotations

import argparse
import math
import sys
from typing import TYPE_CHECKING, Any

from mirrorlab.commands.assembly_words import USUAL, add_dimensions, dimensions_of, usual_words
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
    size_of,
)

if TYPE_CHECKING:
    from pathlib import Path

    import numpy as np
    from numpy.typing import NDArray

    from mirrorlab.mirrors import Arrangement
    from mirrorlab.optics.assembly import Assembly

IMAGES_EXAMPLES = """examples:
  mirrorlab images 60
  mirrorlab images 50 --length 200 --depth 60 --list
  mirrorlab images 90 60 36 --depth 150 --mirror "household glass" --csv images.csv
  mirrorlab images 60 60 60 --length 8in --sides 2in --faintest 0.1 --json
"""

TOLERANCE_EXAMPLES = """examples:
  mirrorlab tolerance 59.8 --distance 250
  mirrorlab tolerance 90 60 45 --distance 150 --seam 0.5
  mirrorlab tolerance 90 90 90 --actual 90.02,89.99,90 --distance 1m
  mirrorlab tolerance 90 60 36 --distance 150 --seam 1 --chance 0.05 --draws 20000
"""

VIEW_EXAMPLES = """examples:
  mirrorlab view 60 60 60 --length 200 --sides 50 --out tube.png
  mirrorlab view 90 60 36 --depth 200 --truncated 60 --out lantern.png --size 1920x1080 --samples 3
  mirrorlab view 60 --length 200 --depth 60 --actual 61 --out seam.png
  mirrorlab view 90 60 45 --depth 150 --heights 10,14,12 --out dot.png
  mirrorlab view 90 45 45 --length 200 --sides 60 --object photo.jpg --out mine.png
"""


def _add_place(parser: argparse.ArgumentParser) -> None:
    parser.add_argument(
        "--actual", type=numbers, metavar="D,D", help="angles in degrees at which the mirrors really stand"
    )
    parser.add_argument(
        "--look", choices=("along", "into"), help="a wedge: along its edge, or into it from the side"
    )
    parser.add_argument(
        "--eye",
        type=numbers,
        metavar="x,y,z",
        help="where the eye is, in mm: x right, y up, z towards the eye, 0 at the far end or the corner's point",
    )
    parser.add_argument(
        "--target", type=numbers, metavar="x,y,z", help="what it looks at, in mm, on the same axes"
    )


def add_images(subparsers: Any) -> None:
    """Add the parser of ``images``."""
    what = "How many images of a point light makes in finite mirrors, where, how bright; which are cut or overlap."
    parser = add_verb(subparsers, "images", what, IMAGES_EXAMPLES)
    add_mirrors(parser)
    add_dimensions(parser, usual=True)
    _add_place(parser)
    parser.add_argument(
        "--point", type=numbers, metavar="x,y,z", help="the point, in mm; by default on the object"
    )
    parser.add_argument(
        "--faintest", type=float, default=0.02, metavar="R", help="dimmer images are not counted (0.02)"
    )
    parser.add_argument("--list", action="store_true", help="print the images one by one")
    parser.add_argument("--csv", metavar="F", help="write them all, with a metadata file beside")
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run_images)


def add_tolerance(subparsers: Any) -> None:
    """Add the parser of ``tolerance``."""
    what = "The turn that angles leave over around each edge and the whole corner, and the seam it opens."
    parser = add_verb(subparsers, "tolerance", what, TOLERANCE_EXAMPLES)
    add_mirrors(parser)
    parser.add_argument(
        "--actual",
        type=numbers,
        metavar="D,D",
        help="actual angles in degrees, edge by edge; the typed are meant",
    )
    parser.add_argument(
        "--distance",
        default="1000",
        metavar="L",
        help="from the edge or point to where the seam is (1000 mm)",
    )
    parser.add_argument("--seam", metavar="L", help="largest seam wanted: says how far off angles may be")
    parser.add_argument(
        "--chance",
        type=float,
        metavar="D",
        help="draw errors at random, in degrees: their standard deviation, or with --spread uniform the largest",
    )
    parser.add_argument(
        "--spread",
        choices=("normal", "uniform"),
        default="normal",
        help="how the errors drawn are spread (normal)",
    )
    parser.add_argument("--draws", type=int, default=10_000, metavar="N", help="assemblies drawn (10000)")
    parser.add_argument("--seed", type=int, default=1, metavar="N", help="the same seed draws the same (1)")
    add_style(parser)
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run_tolerance)


def add_view(subparsers: Any) -> None:
    """Add the parser of ``view``."""
    what = "Trace what the eye sees in the mirrors, and write it as a PNG picture."
    parser = add_verb(subparsers, "view", what, VIEW_EXAMPLES)
    add_mirrors(parser)
    parser.add_argument("--out", required=True, metavar="F.png", help="the file to write")
    parser.add_argument("--size", default="1280x720", metavar="WxH", help="pixels (1280x720)")
    parser.add_argument("--samples", type=int, default=2, metavar="N", help="N×N rays a pixel, 1 to 8 (2)")
    add_dimensions(parser, usual=True)
    _add_place(parser)
    parser.add_argument("--field", type=float, metavar="DEG", help="field of view across the shorter side")
    what = parser.add_argument_group("object")
    what.add_argument(
        "--object",
        metavar="NAME|FILE",
        help="a picture file, or a pattern: lantern glass, lantern globe, pennant, ruled card",
    )
    what.add_argument("--at", type=numbers, metavar="x,y,z", help="stand it free between the mirrors, in mm")
    what.add_argument(
        "--heights", type=numbers, metavar="a,b,…", help="the same by distances from the mirrors"
    )
    what.add_argument(
        "--shape", choices=("ball", "card"), default="ball", help="of an object that stands free"
    )
    what.add_argument("--width", metavar="L", help="its size")
    parser.add_argument(
        "--joint", default="0.3", metavar="L", help="dark line on each panel along a joint (0.3 mm)"
    )
    parser.add_argument("--json", action="store_true", help="what was traced, as JSON")
    parser.set_defaults(run=run_view)


def assembly_of(args: argparse.Namespace, arrangement: Arrangement) -> tuple[Assembly, tuple[str, ...]]:
    """The assembly that the words say, with the usual dimensions and a note of them where none were typed."""
    import numpy as np

    from mirrorlab.optics.build import assembly_for, with_angles
    from mirrorlab.optics.kinds import kind_of
    from mirrorlab.optics.lengths import AssemblyError

    kind = kind_of(arrangement)
    notes: tuple[str, ...] = ()
    if all(getattr(args, name) is None for name in ("length", "depth", "sides", "opening")):
        notes = (f"no dimensions given; taken: {usual_words(kind)}",)
        for name, value in USUAL[kind].items():
            setattr(args, name, value)
    dimensions = dimensions_of(args, kind)
    if args.look is not None:
        if kind != "wedge":
            msg = f"--look: a {kind} is looked into through its mouth; only a wedge has a choice"
            raise UsageError(msg)
        dimensions["look"] = args.look
    assembly = assembly_for(arrangement, **dimensions)
    if args.actual is not None:
        assembly = with_angles(assembly, args.actual)
    if args.eye is not None or args.target is not None or getattr(args, "field", None) is not None:
        for name in ("eye", "target"):
            if getattr(args, name) is not None and len(getattr(args, name)) != 3:
                msg = f"{name}: give three numbers, x,y,z in mm"
                raise AssemblyError(msg, name)
        field = getattr(args, "field", None)
        assembly = assembly.with_view(
            None if args.eye is None else np.array(args.eye),
            None if args.target is None else np.array(args.target),
            field_of_view=None if field is None else math.radians(field),
        )
    return assembly, notes


def run_images(args: argparse.Namespace) -> int:
    """Count the images, print and write them."""
    from mirrorlab.commands.light_print import print_images
    from mirrorlab.optics.images import count_images

    arrangement = arrangement_of(args)
    assembly, notes = assembly_of(args, arrangement)
    count = count_images(assembly, None if args.point is None else args.point, args.faintest)
    written: tuple[Path, ...] = ()
    if args.csv is not None:
        from mirrorlab.files.images_table import write_images

        written = write_images(args.csv, assembly, count)
    if args.json:
        print_json({**count.to_dict(), "assembly": assembly.to_dict()})
    else:
        print_images(count, args.list, notes)
    say_written(written)
    return 0


def run_tolerance(args: argparse.Namespace) -> int:
    """Say what errors of the angles do."""
    from mirrorlab.commands.light_print import print_chances, print_tolerance
    from mirrorlab.optics.intent import intent_of
    from mirrorlab.optics.montecarlo import seam_chances
    from mirrorlab.optics.tolerance import tolerance_of

    intent, actual = intent_of(arrangement_of(args))
    if args.actual is not None:
        actual = tuple(math.radians(value) for value in args.actual)
    found = tolerance_of(intent, actual, args.distance, args.seam)
    chances = None
    if args.chance is not None:
        chances = seam_chances(intent, args.chance, args.spread, args.draws, args.seed, args.distance)
    if args.json:
        print_json({**found.to_dict(), "chances": None if chances is None else chances.to_dict()})
        return 0
    print_tolerance(found, args.write_as)
    if chances is not None:
        print_chances(chances, found.limit)
    return 0


def run_view(args: argparse.Namespace) -> int:
    """Trace the view and write it."""
    from mirrorlab.files.raster import check_view_name, save_view
    from mirrorlab.optics.cautions import Place, cautions_for, hazards_of
    from mirrorlab.optics.lengths import parse_length
    from mirrorlab.optics.scene import make_scene
    from mirrorlab.optics.tracer import trace

    size = size_of(args.size)
    check_view_name(args.out)
    bare, notes = assembly_of(args, arrangement_of(args))
    assembly = _with_object(args, bare)
    scene = make_scene(assembly, _picture(args.object), joint=parse_length(args.joint, "joint"))
    pixels = trace(assembly, scene, size, args.samples, _progress if sys.stderr.isatty() else None)
    save_view(args.out, pixels)
    if args.json:
        print_json(
            {"file": args.out, "size": list(size), "samples": args.samples, "assembly": assembly.to_dict()}
        )
    say_written([args.out], notes)
    for caution in cautions_for(Place.EYE, hazards_of(assembly)):
        print(f"{caution.title}: {caution.text}", file=sys.stderr)
    return 0


def _with_object(args: argparse.Namespace, assembly: Assembly) -> Assembly:
    import numpy as np

    from mirrorlab.optics.lengths import positive_length
    from mirrorlab.optics.scene import spot_at_heights, with_ball, with_card

    if args.at is not None and args.heights is not None:
        msg = "say where the object is by --at or by --heights, not both"
        raise UsageError(msg)
    size = None if args.width is None else positive_length(args.width, "width")
    if args.at is None and args.heights is None:
        if size is not None:
            msg = "--width: an object that closes the far end is as wide as the mirrors; place it with --at"
            raise UsageError(msg)
        return assembly
    spot = np.array(args.at) if args.heights is None else spot_at_heights(assembly, args.heights)
    return (with_ball if args.shape == "ball" else with_card)(assembly, spot, size)


def _picture(name: str | None) -> str | NDArray[np.uint8] | None:
    from mirrorlab.files.raster import read_picture
    from mirrorlab.optics.pattern import PATTERNS

    if name is None or plain(name) in PATTERNS:
        return None if name is None else plain(name)
    if "." not in name and "/" not in name:
        msg = f'object "{name}": neither a picture file nor a pattern; patterns are {", ".join(PATTERNS)}'
        raise UsageError(msg)
    return read_picture(name)


def _progress(done: int, total: int) -> bool:
    end = "\n" if done == total else ""
    print(f"\rtraced {done} of {total} rows", end=end, file=sys.stderr, flush=True)
    return True


ADD = {"images": add_images, "tolerance": add_tolerance, "view": add_view}
"""Parser of each verb."""
