"""What is printed where no window can open."""

from __future__ import annotations

import sys

from mirrorlab.commands.check import print_finding
from mirrorlab.commands.orbit import SHOWN, print_orbit
from mirrorlab.files.samples import samples
from mirrorlab.files.sheet_file import load_sheet


def print_instead(path: str | None, reason: str) -> int:
    """Print the finding and the images of a file or of the first sample, and why no window opened.

    Returns 0 for the sample; for a file that was asked for, 2, because a window was wanted and none came.
    """
    sheet = load_sheet(path) if path is not None else samples()[0]
    finding = sheet.arrangement.finding()
    print(f"{sheet.name}\n" if sheet.name else "")
    print_finding(sheet.arrangement, finding)
    if finding.group is not None:
        print()
        print_orbit(sheet.arrangement.orbit(place="centre"), finding, SHOWN)
    print(f"\nmirrorlab: no window opened: {reason}", file=sys.stderr)
    print("mirrorlab: the verbs work without one; see mirrorlab --help", file=sys.stderr)
    return 0 if path is None else 2
