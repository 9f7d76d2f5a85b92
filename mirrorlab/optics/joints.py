"""How two panes meet at an edge: where each face of the glass ends, and the bevel that follows.

Every offset is counted in the pane's own plane from the ideal edge, the line where the two reflecting planes
meet: positive is cut back, negative runs past it. The glass stands outside the wedge for a first-surface
mirror and inside it for a second-surface one, because the coating is what must lie in the ideal plane.

With thickness t and dihedral angle θ, plane geometry in the section across the edge gives

===========  =========================  =========================
joint        first surface              second surface
===========  =========================  =========================
mitred       0 / −t·cot(θ/2)            0 / t·cot(θ/2)
butted over  −t/sin θ, square           min(0, t·cot θ), square
butted       0 / −t·cot θ               t/sin θ / t·cot(θ/2)
square       0, square                  t·cot(θ/2), square
===========  =========================  =========================

as offset of the coated face / of the other face.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum

import numpy as np

SQUARE_TOLERANCE = math.radians(0.05)
"""A bevel below this is called square: no glass bevel is ground closer."""

FEATHER_ANGLE = math.radians(40.0)
"""Included angle of the glass at an edge below which the arris is a feather edge that chips and cuts:
common practice, no source."""


class Surface(StrEnum):
    """Which face of the glass carries the coating."""

    FIRST = "first"
    SECOND = "second"


class JointKind(StrEnum):
    """How the two panes of an edge are joined."""

    MITRED = "mitred"
    BUTTED = "butted"
    SQUARE = "square"


JOINT_WORDS = {
    JointKind.MITRED: "both edges bevelled, meeting in the plane that halves the angle",
    JointKind.BUTTED: "one pane runs past, the other is bevelled to stand on its face",
    JointKind.SQUARE: "both edges cut square and touching along a line; the open groove is filled or taped",
}


class JointError(ValueError):
    """A joint that can't be made with this glass."""


@dataclass(frozen=True, slots=True)
class SideCut:
    """How one side of a pane is cut.

    Attributes
    ----------
    role : str
        "free", "mitred", "over" (runs past its neighbour), "under" (stands on its neighbour) or "square".
    neighbour : str
        Letter of the pane it meets, "" when free.
    dihedral : float or None
        Angle between the two reflecting planes, radians.
    mirror_offset, other_offset : float
        mm, of the coated and of the other face, from the ideal edge; positive is cut back.
    bevel : float
        Radians off square, 0 for a square edge; positive when the coated face is the longer one.
    glass_angle : float
        Included angle of the glass at the sharper arris, radians: π/2 for a square edge.
    blind : float
        mm from the ideal edge to where the mirror starts to show.
    """

    role: str
    neighbour: str
    dihedral: float | None
    mirror_offset: float
    other_offset: float
    bevel: float
    glass_angle: float
    blind: float

    @property
    def longer_face(self) -> str:
        """ "coated", "clear" or "" for a square edge; "clear" is the uncoated face."""
        if abs(self.bevel) < SQUARE_TOLERANCE:
            return ""
        return "coated" if self.bevel > 0 else "clear"

    @property
    def is_feather(self) -> bool:
        """Whether the sharper arris is a feather edge."""
        return self.glass_angle < FEATHER_ANGLE

    def to_dict(self) -> dict[str, object]:
        """Plain JSON; angles in degrees."""
        return {
            "role": self.role,
            "meets": self.neighbour,
            "dihedral_degrees": None if self.dihedral is None else float(np.degrees(self.dihedral)),
            "coated_face_offset_mm": self.mirror_offset,
            "clear_face_offset_mm": self.other_offset,
            "bevel_degrees": float(np.degrees(abs(self.bevel))),
            "longer_face": self.longer_face,
            "glass_angle_degrees": float(np.degrees(self.glass_angle)),
            "feather_edge": self.is_feather,
            "blind_strip_mm": self.blind,
        }


def free_side() -> SideCut:
    """A side that meets no other pane: cut square on the outline."""
    return SideCut("free", "", None, 0.0, 0.0, 0.0, np.pi / 2, 0.0)


def joint_sides(
    kind: JointKind,
    dihedral: float,
    thickness: float,
    surfaces: tuple[Surface, Surface],
    letters: tuple[str, str],
    gap: float = 0.0,
) -> tuple[SideCut, SideCut]:
    """The cuts on both sides of one edge.

    Parameters
    ----------
    kind : JointKind
        In a butted joint the first pane runs past and the second stands on it.
    dihedral : float
        Angle between the reflecting planes, radians, 0 < dihedral < π.
    thickness : float
        mm, of both panes; 0 for a film.
    surfaces : tuple of Surface
        Where the coating is on the first and second pane. With one of each only one joint can be made: the
        second-surface pane stands on the coated face of the other, whatever `kind` says.
    letters : tuple of str
        Letters of the two panes.
    gap : float
        mm of clearance for tape or sealant, measured square to the joint.

    Raises
    ------
    JointError
        When the angle, thickness or gap is out of range.
    """
    if not 0 < dihedral < np.pi:
        msg = (
            f"mirrors {letters[0]} and {letters[1]} at {np.degrees(dihedral):.4g}°: "
            "a joint needs more than 0° and less than 180°"
        )
        raise JointError(msg)
    if thickness < 0 or gap < 0:
        msg = f"thickness {thickness:g} mm, gap {gap:g} mm: neither may be negative"
        raise JointError(msg)
    first, second = surfaces
    if first is not second:
        return _mixed(dihedral, thickness, surfaces, letters, gap)
    half = thickness / np.tan(dihedral / 2)
    inside = first is Surface.SECOND
    back = gap / (2 * np.sin(dihedral / 2))
    if kind is JointKind.MITRED:
        cut = (back, back + (half if inside else -half), back)
        roles = ("mitred", "mitred")
        cuts = (cut, cut)
    elif kind is JointKind.SQUARE:
        level = back + (half if inside else 0.0)
        roles = ("square", "square")
        cuts = ((level, level, level),) * 2
    else:
        roles = ("over", "under")
        cuts = _butted(dihedral, thickness, inside, gap)
    one, two = (
        _side(role, letters[1 - i], dihedral, thickness, *cut)
        for i, (role, cut) in enumerate(zip(roles, cuts, strict=True))
    )
    return one, two


def _butted(
    dihedral: float, thickness: float, inside: bool, gap: float
) -> tuple[tuple[float, float, float], ...]:
    """(coated offset, other offset, blind strip) of the pane that runs past and of the one on it."""
    slope, foot = thickness / np.tan(dihedral), thickness / np.sin(dihedral)
    lift = gap / np.sin(dihedral)
    if inside:
        past = min(0.0, slope)
        # The strip under the neighbour's foot is hidden: it ends where the neighbour's front face comes down.
        hidden = (thickness + gap) / np.tan(dihedral) + foot
        return (past, past, max(hidden, 0.0)), (foot + lift, foot + slope + lift, foot + lift)
    return (-foot, -foot, 0.0), (lift, lift - slope, lift)


def _mixed(
    dihedral: float, thickness: float, surfaces: tuple[Surface, Surface], letters: tuple[str, str], gap: float
) -> tuple[SideCut, SideCut]:
    """The second-surface pane stands, inside the wedge, on the coated face of the first-surface pane."""
    slope, foot, lift = thickness / np.tan(dihedral), thickness / np.sin(dihedral), gap / np.sin(dihedral)
    hidden = max(foot + gap / np.tan(dihedral), 0.0)
    sides = []
    for i, surface in enumerate(surfaces):
        if surface is Surface.FIRST:
            sides.append(_side("over", letters[1 - i], dihedral, thickness, 0.0, 0.0, hidden))
        else:
            sides.append(_side("under", letters[1 - i], dihedral, thickness, lift, lift + slope, lift))
    return sides[0], sides[1]


def _side(
    role: str, neighbour: str, dihedral: float, thickness: float, mirror: float, other: float, blind: float
) -> SideCut:
    bevel = float(np.arctan2(other - mirror, thickness)) if thickness > 0 else 0.0
    return SideCut(
        role, neighbour, dihedral, float(mirror), float(other), bevel, np.pi / 2 - abs(bevel), float(blind)
    )
