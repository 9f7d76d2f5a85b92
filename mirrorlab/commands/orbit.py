"""The verb ``orbit``: the images of a seed."""

from __future__ import annotations

import argparse
import sys
from typing import Any

from mirrorlab.commands.output import add_mirrors, arrangement_of, numbers, print_json, print_table
from mirrorlab.mirrors import Finding, Orbit
from mirrorlab.mirrors.orbit import MOST_IMAGES

SHOWN = 24
"""Images printed when no file is asked for; all of them go into a file or JSON."""

EXAMPLES = """examples:
  mirrorlab orbit 90 60 45 --heights 1,2,3
  mirrorlab orbit 90 60 36 --place "corner bc" --csv images.csv
  mirrorlab orbit --family E6 --place centre --npy images.npy
  mirrorlab orbit 90 60 45 --point 1,0.2,0.5 --rotations --json
  mirrorlab orbit 90 90 60 --heights 1,2,3 --cell 4.9,4.9,5.4,90,90,120 --csv fractions.csv
"""


def add_orbit(subparsers: Any) -> None:
    """Add the verb's parser."""
    parser = subparsers.add_parser(
        "orbit",
        help="the images of a point",
        description="List the images of a seed: coordinates, parity, depth and word.",
        epilog=EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    add_mirrors(parser)
    seed = parser.add_mutually_exclusive_group(required=True)
    seed.add_argument(
        "--heights", type=numbers, metavar="1,2,3", help="distances of the seed from a, b, c, …"
    )
    seed.add_argument("--point", type=numbers, metavar="x,y,z", help="coordinates of the seed")
    seed.add_argument(
        "--place", metavar="NAME", help='a named place: centre, "wall a", "edge ab", "corner bc"'
    )
    parser.add_argument("--rotations", action="store_true", help="only images of the rotation subgroup")
    parser.add_argument("--limit", type=int, default=MOST_IMAGES, help="refuse more images than this")
    parser.add_argument("--csv", metavar="F", help="write all images to a CSV file, with its metadata file")
    parser.add_argument("--npy", metavar="F", help="write the coordinates to a NumPy file")
    parser.add_argument(
        "--cell",
        type=numbers,
        metavar="a,b,c,α,β,γ",
        help="coordinates as fractions of this cell, in the standard setting of the group",
    )
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Make the images; print or write them."""
    arrangement = arrangement_of(args)
    finding = arrangement.finding()
    orbit = arrangement.orbit(
        heights=args.heights,
        point=args.point,
        place=args.place,
        rotations=args.rotations,
        limit=args.limit,
        progress=_progress(),
    )
    if args.cell is not None:
        from mirrorlab.commands.crystal_orbit import print_in_cell

        return print_in_cell(args, finding, orbit)
    written = []
    if args.csv:
        from mirrorlab.files.orbit_table import write_orbit

        written += write_orbit(args.csv, orbit, finding)
    if args.npy:
        from mirrorlab.files.orbit_table import write_points

        written.append(write_points(args.npy, orbit))
    if args.json:
        print_json(orbit_dict(orbit, finding))
    else:
        print_orbit(orbit, finding, 0 if written else SHOWN)
    for path in written:
        print(f"wrote {path}", file=sys.stderr)
    return 0


def _progress():  # type: ignore[no-untyped-def]
    """Progress on standard error when a person watches and the orbit is long."""
    if not sys.stderr.isatty():
        return None

    def show(done: int, size: int) -> None:
        if size > 200_000:
            sys.stderr.write(f"\r{done:,} of {size:,} images" + ("\n" if done == size else ""))

    return show


def orbit_dict(orbit: Orbit, finding: Finding) -> dict[str, Any]:
    """The orbit as plain JSON."""
    from mirrorlab.files.orbit_table import orbit_about

    return {
        **orbit_about(orbit, finding),
        "snapped": orbit.snapped,
        "folded": orbit.folded,
        "multiplicity": orbit.multiplicity,
        "points": orbit.points.tolist(),
        "parity": orbit.parity.tolist(),
        "depth": orbit.depth.tolist(),
        "words": orbit.words(),
    }


def print_orbit(orbit: Orbit, finding: Finding, shown: int) -> None:
    """The orbit for a person, with at most `shown` images."""
    from mirrorlab.files.orbit_table import coordinate_names

    print(finding.sentence)
    print(f"\n{len(orbit):,} images; stabiliser {orbit.stabiliser} of order {orbit.stabiliser_order}")
    print(f"frame: {orbit.frame}")
    if orbit.folded:
        times = f"{orbit.folded} reflection{'s' if orbit.folded > 1 else ''}"
        print(f"the seed lay outside the chamber; {times} brought it in")
    if orbit.snapped:
        print(f"the seed was {orbit.snapped}")
    if not shown:
        return
    names = coordinate_names(orbit.points.shape[1])
    rows = [("image", *names, "parity", "depth", "word")]
    for k in range(min(shown, len(orbit))):
        coordinates = [f"{value + 0.0:+.6f}" for value in orbit.points[k]]
        rows.append((str(k + 1), *coordinates, str(orbit.parity[k]), str(orbit.depth[k]), orbit.words()[k]))
    print()
    print_table(rows)
    if len(orbit) > shown:
        print(f"  … {len(orbit) - shown:,} more; --csv FILE writes all")


ADD = {"orbit": add_orbit}
