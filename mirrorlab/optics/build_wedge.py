"""Making a wedge: two mirrors along a common edge."""

from __future__ import annotations

import math

import numpy as np

from mirrorlab.optics.assembly import Assembly, ObjectPlace
from mirrorlab.optics.lengths import AssemblyError, positive_length
from mirrorlab.optics.shapes import in_centre, make_panel
from mirrorlab.optics.stand import (
    DEFAULT_MIRROR,
    MARGIN,
    AngleLike,
    Length,
    Mirrors,
    as_given,
    finish,
    floor_card,
    to_radians,
)


def wedge(
    angle: AngleLike,
    length: Length,
    depth: Length | None = None,
    *,
    opening: Length | None = None,
    look: str = "along",
    thickness: Length = 3.0,
    mirrors: Mirrors = DEFAULT_MIRROR,
) -> Assembly:
    """Two mirrors along a common edge, the z axis; a on the left, b on the right, open towards y.

    Parameters
    ----------
    angle : Angle, str, Fraction or number
        Between the mirrors. Text is read as `parse_angle` reads it, a number is degrees exactly as given.
    length : str or number
        Of the common edge; as all lengths, millimetres or with a unit.
    depth : str or number, optional
        How far each mirror reaches from the edge. Left out, it follows from `opening`.
    opening : str or number, optional
        Width between the outer edges that is left open to look through; the whole, when left out.
    look : str
        "along": down the edge, as through an eyepiece, the object closing the far end. "into": from the open
        side towards the edge, the object standing between the mirrors.
    thickness : str or number
        Of the glass.
    mirrors : str, MirrorSpec or a sequence of two
        Preset names or mirrors.

    Raises
    ------
    AssemblyError
        With `field` naming the dimension at fault.
    """
    theta = to_radians(angle, "angle")
    if not 0 < theta < math.pi:
        msg = f"angle {math.degrees(theta):.6g}°: two mirrors of a wedge need more than 0° and less than 180°"
        raise AssemblyError(msg, "angle")
    long = positive_length(length, "length")
    half_chord = math.sin(theta / 2)
    if depth is None:
        if opening is None:
            msg = "depth: give how far the mirrors reach from the edge, or the opening between them"
            raise AssemblyError(msg, "depth")
        reach = positive_length(opening, "opening") / (2 * half_chord)
    else:
        reach = positive_length(depth, "depth")
    if look not in ("along", "into"):
        msg = f"look {look!r}: must be 'along' or 'into'"
        raise AssemblyError(msg, "look")
    left = reach * np.array([-half_chord, math.cos(theta / 2), 0.0])
    right = left * [-1, 1, 1]
    edge, rise = np.zeros(3), np.array([0.0, 0.0, long])
    a = make_panel("a", np.array([edge, left, left + rise, edge + rise]), ("", "", "", "b"))
    b = make_panel("b", np.array([right, edge, edge + rise, right + rise]), ("", "a", "", ""))
    middle = np.array([0.0, left[1], long / 2])
    if look == "along":
        flat = np.array([edge, right, left])
        centre = np.append(in_centre(flat[:, :2]), 0.0)
        mouth = flat + rise
        place = floor_card(flat)
        # Images stand around the end of the edge, so that is what the eye looks at.
        eye, target, up = centre + rise, edge, np.array([0.0, 1, 0])
        field = 2 * MARGIN * math.atan(reach / long)
    else:
        mouth = np.array([left, left + rise, right + rise, right])
        spot = np.array([0.0, 0.5 * left[1], 0.38 * long])
        size = 1.3 * min(spot[1] * half_chord, 0.38 * long, 0.4 * left[1])
        place = ObjectPlace(spot, np.array([-1.0, 0, 0]), np.array([0.0, 0, 1]), size, size, "ball", True)
        back = max(long, 2 * right[0])
        eye, target, up = middle + np.array([0, 1.5 * back, 0.3 * back]), middle, np.array([0.0, 0, 1])
        field = 2 * math.atan(MARGIN * max(long, right[0]) / 2 / (1.5 * back))
    half = theta / 2
    axes = np.array(
        [[math.cos(half), -math.sin(half), 0], [math.sin(half), math.cos(half), 0], [0, 0, 1]], dtype=float
    )
    given = as_given("wedge", angle=angle, length=length, depth=depth, opening=opening, look=look)
    chord = 2 * right[0]
    return finish(
        "wedge", (a, b), mouth, chord, opening, thickness, mirrors, place, eye, target, up, field, axes, given
    )
