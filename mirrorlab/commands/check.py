"""The verb ``check``: the finding of an arrangement."""

from __future__ import annotations

import argparse
from typing import Any

from mirrorlab.commands.output import add_mirrors, arrangement_of, print_json, print_table
from mirrorlab.mirrors import Arrangement, Finding

EXAMPLES = """examples:
  mirrorlab check 90 60 45
  mirrorlab check "59.9(2)" 90 pi/4 --evidence
  mirrorlab check --family A1xI2(5) --json
  mirrorlab check --normals 1,0,0 1,1,0 1,1,1
"""


def add_check(subparsers: Any) -> None:
    """Add the verb's parser."""
    parser = subparsers.add_parser(
        "check",
        help="what a set of mirrors does",
        description="Say whether the reflections close up, into which group, and whether a lattice can carry it.",
        epilog=EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    add_mirrors(parser)
    parser.add_argument("--evidence", action="store_true", help="the numbers behind the finding")
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Print the finding."""
    arrangement = arrangement_of(args)
    finding = arrangement.finding()
    if args.json:
        print_json(finding.to_dict())
        return 0
    print_finding(arrangement, finding)
    if args.evidence:
        print_evidence(arrangement, finding)
    return 0


def print_finding(arrangement: Arrangement, finding: Finding) -> None:
    """The finding for a person: sentence, angles as read, flags, suggestions."""
    print(finding.sentence)
    print(f"\nkind: {finding.kind}    rank: {finding.rank}")
    if arrangement.angles:
        print("\nangles as read")
        rows = []
        for name, angle, (_, value, order) in zip(
            arrangement.pair_names, arrangement.angles, finding.evidence.four_cos, strict=True
        ):
            read = "no closing fraction" if angle.fraction is None else f"{angle.fraction}·180°"
            rows.append(
                (name, angle.text, read, f"4cos² {value:.6g}", f"order {'∞' if order is None else order}")
            )
        print_table(rows)
    if finding.group is not None:
        group = finding.group
        print("\ngroup")
        rows = [
            ("degrees", " ".join(map(str, group.degrees))),
            ("rotations", f"{group.rotation_order:,}"),
            ("−1 in the group", "yes" if group.contains_inversion else "no"),
        ]
        walls = [f"{a} = {w}" for a, w in zip(group.letters, finding.wall_words, strict=True) if a != w]
        if walls:
            rows.append(("walls of the true chamber", ", ".join(group.letters) + "; " + ", ".join(walls)))
        symbols = finding.point_group
        if symbols is not None:
            rows.insert(0, ("point group", f"{symbols.hermann_mauguin}, {symbols.schoenflies}"))
        print_table(rows)
    if finding.flags:
        print("\nflags")
        for flag in finding.flags:
            print(f"  {flag.reason}")
    ways = [*finding.supplements, *finding.suggestions]
    if ways:
        print("\nnearest that close")
        print_table(
            [
                (
                    " ".join(way.texts()),
                    f"largest change {way.largest_change:.4g}°",
                    way.name,
                    "" if way.kind == "closed" else f"{way.chambers_between} chambers between",
                )
                for way in ways
            ]
        )


def print_evidence(arrangement: Arrangement, finding: Finding) -> None:
    """Gram matrix, determinant, bounds, and what breaks them."""
    evidence = finding.evidence
    print("\nevidence\n  Gram matrix (−cos of the angles)")
    letters = arrangement.letters
    print_table(
        [
            ("", *letters),
            *[(a, *(f"{v:+.6f}" for v in row)) for a, row in zip(letters, evidence.gram, strict=True)],
        ],
        indent="    ",
    )
    print(f"  determinant {evidence.determinant:.9g}")
    print("  eigenvalues " + " ".join(f"{value:.6g}" for value in evidence.eigenvalues))
    for bound in evidence.bounds:
        print(f"  bound: {bound}")
    for broken in evidence.broken:
        print(f"  broken: {broken}")
    if evidence.witness is not None:
        one, other, apart = evidence.witness
        print(f"  witness: mirrors {one} and {other} stand {apart:.6g}° apart")
    if finding.group is not None:
        letters = finding.group.letters
        print("  Cartan matrix of the chamber's walls")
        rows = [
            (a, *(f"{v:+.5g}" for v in row)) for a, row in zip(letters, finding.group.cartan, strict=True)
        ]
        print_table([("", *letters), *rows], indent="    ")


ADD = {"check": add_check}
