"""The verb ``check``: the finding of an arrangement."""

from __future__ import annotations

import argparse
from typing import Any

from mirrorlab.commands.finding_print import print_evidence, print_finding
from mirrorlab.commands.output import add_mirrors, add_style, add_verb, arrangement_of, print_json

EXAMPLES = """examples:
  mirrorlab check 90 60 45
  mirrorlab check "59.9(2)" 90 pi/4 --evidence
  mirrorlab check --family A1xI2(5) --json
  mirrorlab check --normals 1,0,0 1,1,0 1,1,1
  mirrorlab check "54d40m" 60 60 --write-as dms
"""


def add_check(subparsers: Any) -> None:
    """Add the verb's parser."""
    what = "Say whether the reflections close up, into which group, and whether a lattice can carry it."
    parser = add_verb(subparsers, "check", what, EXAMPLES)
    add_mirrors(parser)
    add_style(parser)
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
    print_finding(arrangement, finding, args.write_as)
    if args.evidence:
        print_evidence(arrangement, finding)
    return 0


ADD = {"check": add_check}
