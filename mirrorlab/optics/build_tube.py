"""Making a tube: three or four mirrors around one direction, straight or tapered."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.lengths import AssemblyError, positive_length
from mirrorlab.optics.shapes import cross_section, frustum_panels
from mirrorlab.optics.stand import (
    DEFAULT_MIRROR,
    WIDE_FIELD,
    AngleLike,
    Length,
    Mirrors,
    as_given,
    field_for,
    finish,
    floor_card,
    longest_side,
    to_radians,
)

LARGEST_TAPER = 50.0
"""Far end over mouth, or the other way: beyond it one end is a point for all that glass can show."""


def tube(
    angles: Sequence[AngleLike],
    length: Length,
    sides: Length | Sequence[Length] | None = None,
    *,
    taper: float = 1.0,
    opening: Length | None = None,
    thickness: Length = 3.0,
    mirrors: Mirrors = DEFAULT_MIRROR,
) -> Assembly:
    """Three or four mirrors around a common direction, the z axis; side a at the bottom.

    Parameters
    ----------
    angles : sequence
        Angles of the cross-section: three (ab, ac, bc), four (ab, bc, cd, da), or the six of an arrangement
        of four mirrors (ab, ac, ad, bc, bd, cd). In a tapered tube the mirrors' dihedral angles differ from
        these; `Assembly.dihedrals` has them.
    length : str or number
        Along z.
    sides : length or sequence of lengths, optional
        Sides of the mouth: see `cross_section`. Left out, the longest follows from `opening`.
    taper : float
        Size of the far end over that of the mouth; 1 is straight.
    opening : str or number, optional
        Longest side of the opening that one looks through; the whole mouth, when left out.
    """
    typed = [to_radians(angle, "angles") for angle in angles]
    if len(typed) == 3:
        around = [typed[0], typed[2], typed[1]]
    elif len(typed) == 6:
        around = [typed[0], typed[3], typed[5], typed[2]]
    elif len(typed) == 4:
        around = typed
    else:
        msg = (
            f"{len(typed)} angles for a tube: give three (ab, ac, bc), four (ab, bc, cd, da) or six, by pairs"
        )
        raise AssemblyError(msg, "angles")
    long = positive_length(length, "length")
    if isinstance(taper, bool) or not (math.isfinite(taper) and 1 / LARGEST_TAPER <= taper <= LARGEST_TAPER):
        least = 1 / LARGEST_TAPER
        msg = f"taper {taper!r}: far end over mouth, from {least:g} to {LARGEST_TAPER:g}; 1 is straight"
        raise AssemblyError(msg, "taper")
    if sides is None:
        if opening is None:
            msg = "sides: give the width of the mirrors at the mouth, or the opening"
            raise AssemblyError(msg, "sides")
        flat = cross_section(around, [1.0])
        flat = flat * (positive_length(opening, "opening") / longest_side(flat))
    else:
        listed = [sides] if isinstance(sides, str | int | float) else list(sides)
        flat = cross_section(around, [positive_length(side, "sides") for side in listed])
    mouth = np.column_stack([flat, np.full(len(flat), long)])
    far = np.column_stack([flat * taper, np.zeros(len(flat))])
    place = floor_card(far)
    field = WIDE_FIELD
    if taper < 1:
        # The images of the far end make a ball around the point that the mirrors lead to.
        beyond = long * taper / (1 - taper)
        field = field_for(math.hypot(beyond, float(np.linalg.norm(far[0, :2]))), long + beyond)
    axes = np.array([[0.0, -1, 0], [1, 0, 0], [0, 0, 1]])
    given = as_given("tube", angles=list(angles), length=length, sides=sides, taper=taper, opening=opening)
    return finish(
        "tube",
        frustum_panels(far, mouth),
        mouth,
        longest_side(mouth),
        opening,
        thickness,
        mirrors,
        place,
        np.array([0.0, 0, long]),
        np.zeros(3),
        np.array([0.0, 1, 0]),
        field,
        axes,
        given,
    )
