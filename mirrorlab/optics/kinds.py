"""Which kind of assembly an arrangement makes."""

from __future__ import annotations

from typing import TYPE_CHECKING

from mirrorlab.optics.lengths import AssemblyError

if TYPE_CHECKING:
    from mirrorlab.mirrors import Arrangement


def kind_of(arrangement: Arrangement) -> str:
    """The kind of assembly: "wedge" (two mirrors), "corner" (three) or "tube" (three or four around one direction).

    Raises
    ------
    AssemblyError
        Mirrors that make none of these.
    """
    size = arrangement.size
    if size == 2:
        return "wedge"
    if arrangement.normals is None:
        msg = "angles: no planes have these angles, so nothing can be built of them"
        raise AssemblyError(msg, "angles")
    rank = arrangement.normals.shape[1]
    if size == 3 and rank == 3:
        return "corner"
    if size in (3, 4) and rank == 2 and not arrangement.given_normals:
        return "tube"
    msg = (
        f"{size} mirrors of rank {rank}: an assembly is a wedge of two mirrors, a corner of three that meet in a point,"
        " or a tube of three or four around one direction"
    )
    raise AssemblyError(msg, "angles")
