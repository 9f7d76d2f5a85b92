"""Making a corner: three mirrors that meet in a point."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from mirrorlab.optics.assembly import Assembly, ObjectPlace
from mirrorlab.optics.lengths import AssemblyError, parse_length, positive_length
from mirrorlab.optics.shapes import corner_edges, corner_normals, frustum_panels, in_centre, rotation_onto_z
from mirrorlab.optics.stand import (
    DEFAULT_MIRROR,
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

SQUARE_EDGE = 1e-6
"""Cosine between an edge and the centre line below which the mouth lies further out than anyone builds."""


def corner(
    angles: Sequence[AngleLike],
    depth: Length | None = None,
    *,
    truncated: Length = 0.0,
    opening: Length | None = None,
    cut: str = "equal edges",
    thickness: Length = 3.0,
    mirrors: Mirrors = DEFAULT_MIRROR,
) -> Assembly:
    """Three mirrors that meet in a point, the origin, cut off by planes across z.

    Parameters
    ----------
    angles : sequence of three
        Dihedral angles ab, ac, bc; see `wedge`.
    depth : str or number, optional
        From the point to the plane of the mouth. Left out, it follows from `opening`.
    truncated : str or number
        From the point to the plane that cuts it off; the object closes that end. 0 leaves the point whole.
    opening : str or number, optional
        Longest side of the opening that one looks through; the whole mouth, when left out.
    cut : str
        "equal edges": the mouth's plane cuts the three edges at one length, so each panel has two equal legs.
        "centre line": the plane stands square to the line that keeps the same distance from all mirrors.
    """
    typed = [to_radians(angle, "angles") for angle in angles]
    if len(typed) != 3:
        msg = f"{len(typed)} angles for a corner: give three, ab, ac and bc"
        raise AssemblyError(msg, "angles")
    normals = corner_normals(typed)
    edges = corner_edges(normals)
    if cut == "equal edges":
        axis = np.linalg.solve(edges, np.ones(3))
    elif cut == "centre line":
        axis = np.linalg.solve(normals, np.ones(3))
    else:
        msg = f"cut {cut!r}: must be 'equal edges' or 'centre line'"
        raise AssemblyError(msg, "cut")
    if (edges @ axis).min() <= SQUARE_EDGE * np.linalg.norm(axis):
        msg = "cut 'centre line': an edge of this corner stands square to the centre line; use 'equal edges'"
        raise AssemblyError(msg, "cut")
    axes = rotation_onto_z(axis, edges[1] / (edges[1] @ axis) - edges[0] / (edges[0] @ axis))
    legs = edges @ axes.T
    unit = legs / legs[:, 2:]
    longest = longest_side(unit)
    if depth is None:
        if opening is None:
            msg = "depth: give how far the mouth is from the point, or the opening"
            raise AssemblyError(msg, "depth")
        deep = positive_length(opening, "opening") / longest
    else:
        deep = positive_length(depth, "depth")
    tip = parse_length(truncated, "truncated")
    if tip >= deep:
        msg = f"truncated at {tip:.6g} mm: must be nearer to the point than the mouth, at {deep:.6g} mm"
        raise AssemblyError(msg, "truncated")
    mouth, far = unit * deep, unit * tip
    centre = np.append(in_centre(unit[:, :2]), 1.0)
    if tip > 0:
        place, ball = floor_card(far), float(np.linalg.norm(far, axis=1).max())
    else:
        inner = axes @ np.linalg.solve(normals, np.ones(3))
        inner = inner / inner[2] * 0.45 * deep
        clear = float((normals @ axes.T @ inner).min())
        place = ObjectPlace(
            inner, np.array([1.0, 0, 0]), np.array([0, 1.0, 0]), 1.3 * clear, 1.3 * clear, "ball", True
        )
        ball = float(np.linalg.norm(inner)) + clear
    eye = centre * deep
    field = field_for(ball, float(np.linalg.norm(eye)))
    given = as_given(
        "corner", angles=list(angles), depth=depth, truncated=truncated, opening=opening, cut=cut
    )
    return finish(
        "corner",
        frustum_panels(far, mouth),
        mouth,
        longest * deep,
        opening,
        thickness,
        mirrors,
        place,
        eye,
        np.zeros(3),
        np.array([0.0, 1, 0]),
        field,
        axes,
        given,
    )
