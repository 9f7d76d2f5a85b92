"""The geometry of panels: cross-sections, corners of three mirrors, and the faces between two outlines."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.assembly import Panel
from mirrorlab.optics.lengths import AssemblyError

Array = NDArray[np.float64]

SIDES_FIT = 1e-3
"""Part of the longest side by which typed sides of a tube may miss those that its angles make: a rounded digit."""

NO_POINT = 1e-9
"""Squared sine of the smallest angle at a corner's point; below it the mirrors share a line, or meet nowhere."""

LETTERS = "abcd"

TUBE_CLOSURE = math.radians(0.02)
"""How far the angles of a tube may miss their sum before it is refused: angles typed to a hundredth of a
degree miss it by up to four half-hundredths. What is missing is shared out evenly."""

SAME_SIDE = 1e-6
"""Relative: a typed side this near to the computed one is the same."""


def cross_section(angles: Sequence[float], sides: Sequence[float]) -> Array:
    """Return the corners of a triangle or quadrilateral, its in-centre (or middle) at the origin.

    Parameters
    ----------
    angles : sequence of float
        Inner angles in radians at the corners ab, bc, ca, or ab, bc, cd, da.
    sides : sequence of float
        Lengths of the sides a, b … in millimetres. For a triangle: one, the longest side, or all three. For a
        quadrilateral: one (a and b alike), two (a and b), or all four.

    Returns
    -------
    ndarray, shape (n, 2)
        Corner k is the start of side k (so the corner ab is row 1); side a runs along x; counter-clockwise.

    Raises
    ------
    AssemblyError
        Angles that do not close, or sides that do not fit them.
    """
    n = len(angles)
    whole = (n - 2) * math.pi
    miss = sum(angles) - whole
    if any(not 0 < angle < math.pi for angle in angles) or abs(miss) > TUBE_CLOSURE:
        names = ", ".join(f"{math.degrees(angle):.6g}°" for angle in angles)
        msg = (
            f"angles {names} do not close the tube: each must be over 0° and below 180°, and together they must"
            f" make {math.degrees(whole):.0f}°, not {math.degrees(sum(angles)):.6g}°"
        )
        raise AssemblyError(msg, "angles")
    inner = [angle - miss / n for angle in angles]
    headings = np.cumsum([0.0] + [math.pi - angle for angle in inner[:-1]])
    ways = np.column_stack([np.cos(headings), np.sin(headings)])
    lengths = _triangle_sides(inner, sides) if n == 3 else _quadrilateral_sides(ways, sides)
    corners = np.vstack([np.zeros(2), np.cumsum(lengths[:-1, None] * ways[:-1], axis=0)])
    result: Array = corners - in_centre(corners)
    return result


def _triangle_sides(angles: Sequence[float], sides: Sequence[float]) -> Array:
    # Side a lies between the corners ca and ab, so it faces the corner bc.
    ratios = np.sin([angles[1], angles[2], angles[0]])
    if len(sides) not in (1, 3):
        msg = f"{len(sides)} sides for three mirrors: give one (the longest) or all three"
        raise AssemblyError(msg, "sides")
    lengths: Array = ratios * (max(sides) / ratios.max())
    if len(sides) == 3:
        _check_sides(np.array(sides), lengths)
    return lengths


def _quadrilateral_sides(ways: Array, sides: Sequence[float]) -> Array:
    if len(sides) not in (1, 2, 4):
        msg = f"{len(sides)} sides for four mirrors: give one (a and b alike), two (a, b) or all four"
        raise AssemblyError(msg, "sides")
    first, second = sides[0], sides[1] if len(sides) > 1 else sides[0]
    rest = np.linalg.solve(ways[2:].T, -(first * ways[0] + second * ways[1]))
    lengths = np.array([first, second, *rest])
    if lengths.min() <= SAME_SIDE * lengths.max():
        msg = f"sides {first:.6g} and {second:.6g} mm leave side {'cd'[int(rest.argmin())]} no length"
        raise AssemblyError(msg, "sides")
    if len(sides) == 4:
        _check_sides(np.array(sides), lengths)
    return lengths


def _check_sides(given: Array, needed: Array) -> None:
    if np.abs(given - needed).max() > SIDES_FIT * needed.max():
        wanted = ", ".join(f"{value:.6g}" for value in needed)
        typed = ", ".join(f"{value:.6g}" for value in given)
        msg = f"sides {typed} mm do not fit the angles; these would: {wanted} mm (or give only the first)"
        raise AssemblyError(msg, "sides")


def in_centre(corners: Array) -> Array:
    """Return the point of a convex polygon that stands before all sides with the most room, shape (2,).

    Exact for triangles; for quadrilaterals the mean of the corners weighted by their two sides.
    """
    after = np.linalg.norm(np.roll(corners, -1, axis=0) - corners, axis=1)
    weights = np.roll(after, -1) if len(corners) == 3 else after + np.roll(after, 1)
    result: Array = weights @ corners / weights.sum()
    return result


def corner_normals(angles: Sequence[float]) -> Array:
    """Return unit inward normals of three mirrors from their angles ab, ac, bc in radians, shape (3, 3).

    Raises
    ------
    AssemblyError
        No three planes meet in one point at these angles.
    """
    ab, ac, bc = angles
    x = -math.cos(ac)
    rest = 1.0 - math.cos(ab) ** 2
    y = (-math.cos(bc) - x * -math.cos(ab)) / math.sqrt(rest) if rest > 0 else 0.0
    left = 1.0 - x * x - y * y
    if rest <= 0 or left < NO_POINT:
        names = ", ".join(f"{math.degrees(angle):.6g}°" for angle in angles)
        msg = (
            f"angles {names}: no three mirrors meet in one point like this; each must be over 0° and below"
            " 180°, together they must exceed 180°, and none may be larger than the other two allow"
        )
        raise AssemblyError(msg, "angles")
    return np.array([[1.0, 0.0, 0.0], [-math.cos(ab), math.sqrt(rest), 0.0], [x, y, math.sqrt(left)]])


def corner_edges(normals: Array) -> Array:
    """Return unit directions of the edges ca, ab, bc (the starts of the sides a, b, c), shape (3, 3)."""
    a, b, c = normals
    edges = np.array([np.cross(c, a), np.cross(a, b), np.cross(b, c)])
    result: Array = edges / np.linalg.norm(edges, axis=1)[:, None]
    return result


def rotation_onto_z(axis: Array, rightwards: Array) -> Array:
    """Return the rotation that takes `axis` to z and what `rightwards` has across it to x, shape (3, 3)."""
    z = axis / np.linalg.norm(axis)
    x = rightwards - (rightwards @ z) * z
    x = x / np.linalg.norm(x)
    return np.array([x, np.cross(z, x), z])


def frustum_panels(far: Array, near: Array) -> tuple[Panel, ...]:
    """Return the panels between a far outline and a near one, side by side.

    Parameters
    ----------
    far, near : ndarray, shape (n, 3)
        Counter-clockwise seen from the eye; row k starts side k. `far` may be one point, n times over.
    """
    n = len(near)
    panels = []
    for k in range(n):
        after = (k + 1) % n
        before, next_ = LETTERS[k - 1 if k else n - 1], LETTERS[after]
        if np.allclose(far[k], far[after]):
            points, edges = [far[k], near[k], near[after]], (before, "", next_)
        else:
            points, edges = [far[after], far[k], near[k], near[after]], ("", before, "", next_)
        panels.append(make_panel(LETTERS[k], np.array(points), edges))
    return tuple(panels)


def make_panel(letter: str, outline: Array, edges: tuple[str, ...]) -> Panel:
    """Return a panel whose normal is the one its outline turns counter-clockwise about."""
    turned = sum(np.cross(p - outline[0], q - outline[0]) for p, q in pairwise(outline[1:]))
    normal = np.asarray(turned) / np.linalg.norm(turned)
    return Panel(letter, outline, normal, edges)


def angle_between(first: Panel, second: Panel) -> float:
    """Dihedral angle on the mirror side, in radians, steady near 0° and 180°."""
    total = float(np.linalg.norm(first.normal + second.normal))
    apart = float(np.linalg.norm(first.normal - second.normal))
    return 2 * math.atan2(total, apart)
