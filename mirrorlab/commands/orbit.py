"""The verb ``orbit``: the images of a seed."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path
from typing import Any

from mirrorlab.commands.output import (
    UsageError,
    add_mirrors,
    add_seed,
    add_verb,
    arrangement_and_seed,
    numbers,
    print_json,
    print_table,
    say_written,
    seed_of,
)
from mirrorlab.mirrors import Finding, Orbit
from mirrorlab.mirrors.orbit import MOST_IMAGES
from mirrorlab.mirrors.walk import Progress

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
    what = "List the images of a seed: coordinates, parity, depth and word."
    parser = add_verb(subparsers, "orbit", what, EXAMPLES)
    add_mirrors(parser)
    add_seed(parser)
    parser.add_argument("--rotations", action="store_true", help="only images of the rotation subgroup")
    parser.add_argument(
        "--limit", type=int, default=MOST_IMAGES, metavar="N", help="refuse more images (2,000,000)"
    )
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
    arrangement, kept = arrangement_and_seed(args)
    seed = seed_of(args, kept)
    if not seed:
        msg = "say where the seed is: --heights, --point or --place"
        raise UsageError(msg)
    finding = arrangement.finding()
    orbit = arrangement.orbit(
        **seed,
        rotations=args.rotations or (args.file is not None and bool(kept.get("rotations"))),
        limit=args.limit,
        progress=_progress(),
    )
    if args.cell is not None:
        from mirrorlab.commands.crystal_orbit import print_in_cell

        return print_in_cell(args, finding, orbit)
    written: list[Path] = []
    if args.csv:
        from mirrorlab.files.orbit_table import write_orbit

        written += write_orbit(args.csv, orbit, finding)
    if args.npy:
        from mirrorlab.files.orbit_table import write_points

        written.append(write_points(args.npy, orbit))
    if args.json:
        print_json(orbit_dict(orbit, finding))
    else:
        print(f"{finding.sentence}\n")
        print_orbit(orbit, 0 if written else SHOWN)
    say_written(written)
    return 0


def _progress() -> Progress | None:
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


def print_orbit(orbit: Orbit, shown: int) -> None:
    """The orbit for a person, with at most `shown` images."""
    from mirrorlab.files.orbit_table import coordinate_names

    site = orbit.stabiliser_symbol
    symbol = f" ({site.hermann_mauguin})" if site is not None and orbit.stabiliser != "1" else ""
    print(f"{len(orbit):,} images; stabiliser {orbit.stabiliser}{symbol} of order {orbit.stabiliser_order}")
    print(f"frame: {orbit.frame}")
    print("seed: " + "  ".join(f"{round(value, 12) + 0.0:.6g}" for value in orbit.seed))
    if orbit.folded:
        times = f"{orbit.folded} reflection{'s' if orbit.folded > 1 else ''}"
        print(f"the seed lay outside the chamber; {times} brought it in")
    if orbit.snapped:
        print(f"the seed was {orbit.snapped}")
    if not shown:
        return
    names = coordinate_names(orbit.points.shape[1])
    words = orbit.words()
    rows = [("image", *names, "parity", "depth", "word")]
    for k in range(min(shown, len(orbit))):
        coordinates = [f"{round(value, 6) + 0.0:.6f}" for value in orbit.points[k]]
        rows.append((str(k + 1), *coordinates, str(orbit.parity[k]), str(orbit.depth[k]), words[k]))
    print()
    print_table(rows)
    if len(orbit) > shown:
        print(f"  … {len(orbit) - shown:,} more; --csv FILE writes all")


ADD = {"orbit": add_orbit}
