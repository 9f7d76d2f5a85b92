"""What is printed where no window can open."""

from __future__ import annotations

import sys
from pathlib import Path

from mirrorlab.commands.finding_print import print_finding
from mirrorlab.commands.orbit import SHOWN, print_orbit
from mirrorlab.files.samples import samples
from mirrorlab.files.sheet_file import Sheet, load_sheet

NO_WINDOW = 2
"""Exit status when a file was to be shown in a window and none opened."""


def print_instead(path: str | None, reason: str) -> int:
    """Print the finding and the images of a file or of the first sample, and why no window opened.

    Returns 0 for the sample, `NO_WINDOW` for a file.
    """
    if path is not None and Path(path).suffix.lower() == ".cif":
        msg = f"no window opened: {reason}. Verbs read a CIF file without one: see mirrorlab cell --help"
        raise OSError(msg)
    print_sheet(load_sheet(path) if path is not None else samples()[0])
    sys.stdout.flush()
    print(f"\nmirrorlab: no window opened: {reason}", file=sys.stderr)
    print("mirrorlab: the verbs answer without one; see mirrorlab --help", file=sys.stderr)
    return 0 if path is None else NO_WINDOW


def print_sheet(sheet: Sheet) -> None:
    """The finding of a sheet, and the first images of its seed."""
    if sheet.name:
        print(f"{sheet.name}\n")
    finding = sheet.arrangement.finding()
    print_finding(sheet.arrangement, finding)
    if finding.group is None:
        return
    seed = dict(sheet.seed)
    if not any(key in seed for key in ("heights", "point", "place")):
        seed["place"] = "centre"
    print()
    try:
        orbit = sheet.arrangement.orbit(**seed)
    except (
        ValueError
    ) as error:  # too many images, or a seed that does not fit these mirrors: the finding stands
        print(f"no images: {error}")
    else:
        print_orbit(orbit, SHOWN)
