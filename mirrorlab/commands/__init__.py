"""The verbs of the command line, one entry each; a verb's module loads only when the verb is used.

A module serves one or more verbs. For each it has, in `ADD`, a function that adds the verb's parser to argparse's
subparsers and sets ``run`` (``parser.set_defaults(run=function)``): ``run(args)`` prints the answer and returns
the exit status. Wrong input raises a `ValueError` (all of Mirrorlab's errors are) or an `OSError`; the caller
turns it into one line on standard error and status 2. Heavy imports stand inside ``run``. Arguments that begin
with a minus and a digit (``-43m``, ``-1,1,0``) reach the module with a leading space: read them with
`mirrorlab.commands.output.plain`.
"""

from __future__ import annotations

from typing import NamedTuple


class Verb(NamedTuple):
    """A verb: its name, the module that serves it, one line of help, and whom it is for."""

    name: str
    module: str
    summary: str
    whom: str


ANY, CRYSTALS, GLASS = "any mirrors", "a crystallographer", "a maker"

VERBS = (
    Verb("check", "mirrorlab.commands.check", "what a set of mirrors does, with evidence", ANY),
    Verb("orbit", "mirrorlab.commands.orbit", "the images of a point, as a list, CSV or NumPy file", ANY),
    Verb("draw", "mirrorlab.commands.draw", "a picture of the mirrors, or a mesh", ANY),
    Verb(
        "group",
        "mirrorlab.commands.crystal_groups",
        "a point group: operations, positions, relatives",
        CRYSTALS,
    ),
    Verb(
        "form", "mirrorlab.commands.crystal_groups", "the form of a face, or a combination of forms", CRYSTALS
    ),
    Verb(
        "candidates",
        "mirrorlab.commands.crystal_groups",
        "the point groups that fit a set of mirrors",
        CRYSTALS,
    ),
    Verb("planes", "mirrorlab.commands.crystal_cells", "lattice planes of a cell as mirrors", CRYSTALS),
    Verb("cell", "mirrorlab.commands.crystal_cells", "all mirrors of a lattice, exact and nearly", CRYSTALS),
    Verb(
        "fit",
        "mirrorlab.commands.crystal_cells",
        "closed arrangements ranked against measured angles",
        CRYSTALS,
    ),
    Verb("compare", "mirrorlab.commands.crystal_cells", "a list of points against a point group", CRYSTALS),
    Verb(
        "images",
        "mirrorlab.commands.optics_light",
        "how many images an assembly shows, and how bright",
        GLASS,
    ),
    Verb(
        "tolerance",
        "mirrorlab.commands.optics_light",
        "how far off an angle may be before a seam shows",
        GLASS,
    ),
    Verb("view", "mirrorlab.commands.optics_light", "what the eye sees, as a picture", GLASS),
    Verb("build", "mirrorlab.commands.optics_workshop", "panels to cut: list, DXF, SVG, PDF", GLASS),
    Verb("choose", "mirrorlab.commands.optics_workshop", "assemblies that close, by number of images", GLASS),
)
