"""An assembly: flat panels standing at their angles, the opening one looks through, and where the eye is.

Frame of every assembly, in millimetres: right-handed; z runs towards the eye. The mouth is at the top (z is
the length or depth), the object's end, or the point where three mirrors meet, at z = 0; x is right and y is
up for an eye that looks down the z axis. Mirrors a, b, c … go counter-clockwise seen from the eye.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.mirror import SECOND, MirrorSpec

Array = NDArray[np.float64]

TOUCH = 1e-6
"""Millimetres: an eye nearer than this to a mirror's plane stands on it. Far below what glass is set to."""


@dataclass(frozen=True, slots=True, eq=False)
class Panel:
    """One flat mirror.

    Attributes
    ----------
    letter : str
    outline : ndarray, shape (k, 3)
        The reflecting face in millimetres, counter-clockwise seen from the mirror side.
    normal : ndarray, shape (3,)
        Unit, pointing to where the light is.
    edges : tuple of str
        The letter of the mirror met along side i (from vertex i to vertex i + 1), "" for a free side.
    """

    letter: str
    outline: Array
    normal: Array
    edges: tuple[str, ...]

    @property
    def offset(self) -> float:
        """``normal @ x`` of every point x of the plane, in millimetres."""
        return float(self.normal @ self.outline[0])

    def height(self, point: Array) -> float:
        """How far a point stands before the mirror, in millimetres; negative behind it."""
        return float(self.normal @ np.asarray(point, dtype=np.float64)) - self.offset


@dataclass(frozen=True, slots=True, eq=False)
class ObjectPlace:
    """Where the object is.

    Attributes
    ----------
    centre, right, up : ndarray, shape (3,)
        `right` and `up` are unit vectors in the card's plane as the eye sees it.
    width, height : float
        Size of the card in millimetres; for a ball, its diameter.
    shape : str
        "card" (flat: a picture or pattern), or "ball" (the seed point as a dot).
    inside : bool
        True for an object that stands free between the mirrors; False for a plane that closes the far end.
    """

    centre: Array
    right: Array
    up: Array
    width: float
    height: float
    shape: str = "card"
    inside: bool = False


@dataclass(frozen=True, slots=True, eq=False)
class Assembly:
    """Mirrors with dimensions. Make one with `wedge`, `corner`, `tube` or `assembly_from`.

    Attributes
    ----------
    kind : str
        "wedge", "corner" or "tube".
    panels : tuple of Panel
    dihedrals : dict
        Pair of panel indices to the angle between the two, in radians, for each pair that share an edge.
    thickness : float
        Of the glass, in millimetres.
    mirrors : tuple of MirrorSpec
        One a panel.
    opening : ndarray, shape (k, 3)
        What one looks through, counter-clockwise seen from the eye.
    mouth : ndarray, shape (k, 3)
        The largest opening that the panels leave.
    place : ObjectPlace
    eye, target, up : ndarray, shape (3,)
        Where the eye is, what it looks at, and what is up for it.
    field_of_view : float
        Full angle across the shorter side of the view, in radians.
    axes : ndarray, shape (3, 3)
        Rotation: ``axes @ x`` takes a direction from the arrangement's frame (filled with zeros) to this one.
    dimensions : mapping
        Plain JSON from which `assembly_from` makes the same assembly.
    """

    kind: str
    panels: tuple[Panel, ...]
    dihedrals: dict[tuple[int, int], float]
    thickness: float
    mirrors: tuple[MirrorSpec, ...]
    opening: Array
    mouth: Array
    place: ObjectPlace
    eye: Array
    target: Array
    up: Array
    field_of_view: float
    axes: Array
    dimensions: Mapping[str, object] = field(default_factory=dict)

    @property
    def letters(self) -> tuple[str, ...]:
        """Letters of the panels, in order."""
        return tuple(panel.letter for panel in self.panels)

    @property
    def normals(self) -> Array:
        """Unit inward normals, shape (n, 3)."""
        return np.array([panel.normal for panel in self.panels])

    @property
    def offsets(self) -> Array:
        """``normals[i] @ x`` for x on mirror i, in millimetres, shape (n,)."""
        return np.array([panel.offset for panel in self.panels])

    def heights(self, point: Array) -> Array:
        """How far a point stands before each mirror's plane, in millimetres, shape (n,)."""
        return self.normals @ np.asarray(point, dtype=np.float64) - self.offsets

    def with_view(
        self,
        eye: Array | None = None,
        target: Array | None = None,
        up: Array | None = None,
        field_of_view: float | None = None,
    ) -> Assembly:
        """The same mirrors looked at from elsewhere; `field_of_view` in radians.

        Raises
        ------
        AssemblyError
            As for `check`.
        """
        result = replace(
            self,
            eye=self.eye if eye is None else np.array(eye, dtype=np.float64),
            target=self.target if target is None else np.array(target, dtype=np.float64),
            up=self.up if up is None else np.array(up, dtype=np.float64),
            field_of_view=self.field_of_view if field_of_view is None else float(field_of_view),
        )
        check(result)
        return result

    def with_place(self, place: ObjectPlace) -> Assembly:
        """The same mirrors with the object elsewhere."""
        result = replace(self, place=place)
        check(result)
        return result

    def to_dict(self) -> dict[str, object]:
        """Plain JSON: what was asked for, and the panels that it makes."""
        return {
            "kind": self.kind,
            "dimensions": dict(self.dimensions),
            "frame": FRAME,
            "unit": "mm",
            "panels": [
                {
                    "letter": panel.letter,
                    "outline": panel.outline.tolist(),
                    "normal": panel.normal.tolist(),
                    "edges": list(panel.edges),
                }
                for panel in self.panels
            ],
            "dihedral_degrees": {
                self.panels[i].letter + self.panels[j].letter: math.degrees(angle)
                for (i, j), angle in self.dihedrals.items()
            },
            "thickness": self.thickness,
            "mirrors": [mirror.to_dict() for mirror in self.mirrors],
            "opening": self.opening.tolist(),
            "object": {
                "shape": self.place.shape,
                "centre": self.place.centre.tolist(),
                "width": self.place.width,
                "height": self.place.height,
                "inside": self.place.inside,
            },
            "eye": self.eye.tolist(),
            "target": self.target.tolist(),
            "field_of_view_degrees": math.degrees(self.field_of_view),
        }


FRAME = (
    "x right, y up for an eye looking down z; z towards the eye, 0 at the object's end or the corner's point"
)


def check(assembly: Assembly) -> None:
    """Refuse an assembly that cannot stand or be looked into.

    Raises
    ------
    AssemblyError
        With `field` set to the dimension at fault: thickness, mirrors, opening, object, eye, target or
        field_of_view.
    """
    if not (math.isfinite(assembly.thickness) and assembly.thickness >= 0):
        msg = f"thickness {assembly.thickness!r}: must be a length of zero or more"
        raise AssemblyError(msg, "thickness")
    if len(assembly.mirrors) != len(assembly.panels):
        msg = f"{len(assembly.mirrors)} mirrors given for {len(assembly.panels)} panels: give one each"
        raise AssemblyError(msg, "mirrors")
    behind = [
        panel.letter
        for panel, mirror in zip(assembly.panels, assembly.mirrors, strict=True)
        if mirror.surface == SECOND
    ]
    if behind and assembly.thickness == 0:
        msg = (
            f"thickness 0 with second-surface mirrors ({', '.join(behind)}): the metal lies behind the glass,"
            " so the glass needs a thickness; type one, or choose first-surface mirrors"
        )
        raise AssemblyError(msg, "thickness")
    _check_view(assembly)


def _check_view(assembly: Assembly) -> None:
    for name in ("eye", "target", "up"):
        value = getattr(assembly, name)
        if value.shape != (3,) or not np.isfinite(value).all():
            msg = f"{name} {value.tolist()!r}: must be three finite numbers, in mm"
            raise AssemblyError(msg, name)
    if not outside_mouth(assembly, assembly.eye):
        heights = assembly.heights(assembly.eye)
        worst = int(heights.argmin())
        if heights[worst] < TOUCH:
            msg = (
                f"eye at {_point(assembly.eye)}: {-heights[worst]:.1f} mm behind mirror"
                f" {assembly.panels[worst].letter}; put it between the mirrors, or outside before the opening"
            )
            raise AssemblyError(msg, "eye")
    way = assembly.target - assembly.eye
    if np.linalg.norm(way) < TOUCH:
        msg = f"target at {_point(assembly.target)}: the eye is there too; look at another point"
        raise AssemblyError(msg, "target")
    if np.linalg.norm(np.cross(way, assembly.up)) < 1e-9 * np.linalg.norm(way) * np.linalg.norm(assembly.up):
        msg = "up: points along the line of sight; give a direction across it"
        raise AssemblyError(msg, "up")
    if not 0 < assembly.field_of_view < math.radians(170):
        msg = f"field of view {math.degrees(assembly.field_of_view):.4g}°: must be over 0° and below 170°"
        raise AssemblyError(msg, "field_of_view")


def mouth_normal(assembly: Assembly) -> Array:
    """Unit normal of the mouth's plane, pointing out, shape (3,)."""
    corners = assembly.mouth
    normal = np.cross(corners[1] - corners[0], corners[2] - corners[0])
    result: Array = normal / np.linalg.norm(normal)
    return result


def outside_mouth(assembly: Assembly, point: Array) -> bool:
    """Whether a point stands before the mouth's plane, out of the assembly."""
    return float(mouth_normal(assembly) @ (np.asarray(point) - assembly.mouth[0])) > TOUCH


def _point(point: Array) -> str:
    return "(" + ", ".join(f"{value:.4g}" for value in point) + ")"
