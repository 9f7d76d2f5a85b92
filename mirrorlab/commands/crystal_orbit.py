"""The images of a seed as fractions of a cell, for the verb ``orbit`` with ``--cell``."""

from __future__ import annotations

import argparse

from mirrorlab.commands.output import UsageError, print_json, print_table, say_written
from mirrorlab.crystal.lattices import align, axes_from_constants
from mirrorlab.mirrors import Finding, Orbit

SHOWN = 24
"""Images printed when no file is asked for; all of them go into a file or JSON."""


def print_in_cell(args: argparse.Namespace, finding: Finding, orbit: Orbit) -> int:
    """Print or write the images in the standard setting of their group, as fractions of a cell."""
    if args.npy:
        msg = "--npy holds the coordinates of the arrangement's own frame; use --csv or --json with --cell"
        raise UsageError(msg)
    aligned = align(finding)
    basis = axes_from_constants(args.cell)
    fractions = aligned.fractions(orbit.points, basis)
    if args.csv:
        from mirrorlab.files.crystal_tables import write_fractions

        say_written(write_fractions(args.csv, orbit, aligned, basis))
    if args.json:
        print_json(
            {
                **aligned.to_dict(),
                "cell": list(args.cell),
                "points": fractions.tolist(),
                "parity": orbit.parity.tolist(),
                "depth": orbit.depth.tolist(),
                "words": orbit.words(),
            }
        )
        return 0
    print(finding.sentence)
    print(
        f"\n{len(orbit):,} images as fractions of the cell, {aligned.group.axes} of {aligned.group.setting}"
    )
    words = orbit.words()
    rows = [("image", "x", "y", "z", "word")]
    for k, point in enumerate(fractions[: 0 if args.csv else SHOWN]):
        rows.append((str(k + 1), *(f"{value + 0.0:+.6f}" for value in point), words[k]))
    if len(rows) > 1:
        print_table(rows)
    if len(orbit) > len(rows) - 1 and not args.csv:
        print(f"  … {len(orbit) - len(rows) + 1:,} more; --csv FILE writes all")
    return 0
