"""The flat true shape of every mirror of an assembly, and proof that it agrees with the assembly in space.

A panel is drawn with its mirror side up: counter-clockwise as the light sees it. The shape is that of the
reflecting plane, without glass; `mirrorlab.optics.joints` adds thickness, bevels and joints.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics import polygon

if TYPE_CHECKING:
    from mirrorlab.optics.assembly import Assembly, Panel

Array = NDArray[np.float64]

PLACE_TOLERANCE = 1e-6
"""mm per mm of panel: how far a corner may lie from where the geometry says; double precision leaves
about 1e-12, a wrong outline is off by far more."""

ANGLE_TOLERANCE = 1e-8
"""Radians, for angles computed in two ways; an inverse cosine near 0 or 180 degrees loses half the digits."""


class PanelError(ValueError):
    """Panels that don't describe one assembly of flat mirrors."""


@dataclass(frozen=True, slots=True, eq=False)
class FlatPanel:
    """The reflecting face of one mirror, laid flat with the mirror side up.

    Attributes
    ----------
    letter : str
        The mirror's letter: a, b, c …
    index : int
        Its place in the assembly.
    outline : ndarray, shape (k, 2)
        Corners in mm, counter-clockwise, the longest side along the bottom, starting at (0, 0).
    neighbours : tuple of str
        For side i (corner i to corner i + 1) the letter of the mirror that meets it, "" at a free side.
    dihedrals : tuple of (float or None)
        For side i the angle between the two reflecting faces in radians, None at a free side.
    origin, axes : ndarray, shapes (3,) and (3, 3)
        Where the flat frame lies in space: rows of `axes` are the directions of x, y and the mirror side.
    """

    letter: str
    index: int
    outline: Array
    neighbours: tuple[str, ...]
    dihedrals: tuple[float | None, ...]
    origin: Array
    axes: Array

    @property
    def side_lengths(self) -> Array:
        """mm, shape (k,)."""
        return polygon.side_lengths(self.outline)

    @property
    def corner_angles(self) -> Array:
        """Radians, shape (k,)."""
        return polygon.corner_angles(self.outline)

    @property
    def area(self) -> float:
        """mm²."""
        return polygon.area(self.outline)

    def in_space(self, points: Array) -> Array:
        """Flat points of shape (N, 2) as points of the assembly, shape (N, 3)."""
        return self.origin + points @ self.axes[:2]

    def to_dict(self) -> dict[str, object]:
        """Plain JSON; angles in degrees."""
        return {
            "letter": self.letter,
            "outline_mm": self.outline.tolist(),
            "side_lengths_mm": self.side_lengths.tolist(),
            "corner_angles_degrees": np.degrees(self.corner_angles).tolist(),
            "neighbours": list(self.neighbours),
            "dihedrals_degrees": [None if d is None else float(np.degrees(d)) for d in self.dihedrals],
            "area_mm2": self.area,
        }


def edge_angles(first_second: float, first_third: float, second_third: float) -> tuple[float, float, float]:
    """Angles at the tip of the three panels of a corner, from the angles between them.

    Parameters
    ----------
    first_second, first_third, second_third : float
        Dihedral angles in radians (the order of an arrangement: 12, 13, 23).

    Returns
    -------
    tuple of float
        Radians; entry i is the angle at the tip of panel i, between its edges with the other two.

    Raises
    ------
    PanelError
        When no three planes through one point have these angles.

    Notes
    -----
    The mirrors cut the unit sphere in a triangle with these angles A, B, C; its sides are the angles asked
    for: cos a = (cos A + cos B cos C) / (sin B sin C) [1]_.

    References
    ----------
    .. [1] I. Todhunter, *Spherical Trigonometry* (1886), article 47.
    """
    a12, a13, a23 = float(first_second), float(first_third), float(second_third)
    triples = ((a23, a12, a13), (a13, a12, a23), (a12, a13, a23))
    cosines = [(np.cos(far) + np.cos(p) * np.cos(q)) / (np.sin(p) * np.sin(q)) for far, p, q in triples]
    if not all(np.isfinite(c) and -1 < c < 1 for c in cosines):
        given = ", ".join(f"{np.degrees(x):.4g}°" for x in (a12, a13, a23))
        msg = f"angles {given}: three mirrors with these angles don't meet in a point"
        raise PanelError(msg)
    return tuple(float(np.arccos(c)) for c in cosines)  # type: ignore[return-value]


def flatten_panels(assembly: Assembly) -> tuple[FlatPanel, ...]:
    """The flat true shape of every panel, checked against the assembly in space.

    Raises
    ------
    PanelError
        When an outline is not flat, not convex, or turns the wrong way; when two panels don't share the edge
        they should; when the angle between two panels, or at the tip of a corner, is not what it should be.
    """
    panels = tuple(assembly.panels)
    flat = tuple(_flatten(panel, i, panels) for i, panel in enumerate(panels))
    _check_shared_edges(flat)
    _check_dihedrals(flat, assembly.dihedrals)
    if assembly.kind == "corner":
        _check_tip(flat, assembly.dihedrals)
    return flat


def _flatten(panel: Panel, index: int, panels: Sequence[Panel]) -> FlatPanel:
    outline = np.asarray(panel.outline, dtype=float)
    normal = np.asarray(panel.normal, dtype=float)
    if len(outline) < 3 or len(panel.edges) != len(outline):
        msg = f"panel {panel.letter}: {len(outline)} corners but {len(panel.edges)} sides named"
        raise PanelError(msg)
    size = float(np.ptp(outline, axis=0).max())
    heights = (outline - outline[0]) @ normal
    if np.abs(heights).max() > PLACE_TOLERANCE * size:
        msg = f"panel {panel.letter}: corners lie up to {np.abs(heights).max():.3g} mm off its plane"
        raise PanelError(msg)
    sides = np.roll(outline, -1, axis=0) - outline
    longest = int(np.argmax(np.round(np.linalg.norm(sides, axis=1), 9)))
    across = sides[longest] / np.linalg.norm(sides[longest])
    axes = np.stack([across, np.cross(normal, across), normal])
    order = np.roll(np.arange(len(outline)), -longest)
    origin = outline[longest]
    shape = (outline[order] - origin) @ axes[:2].T
    if not polygon.is_convex(shape):
        msg = f"panel {panel.letter}: not convex, or not counter-clockwise seen from the mirror side"
        raise PanelError(msg)
    neighbours = tuple(panel.edges[i] for i in order)
    normals = {p.letter: np.asarray(p.normal, dtype=float) for p in panels}
    return FlatPanel(
        letter=panel.letter,
        index=index,
        outline=shape,
        neighbours=neighbours,
        dihedrals=tuple(_between(normal, normals[n]) if n else None for n in neighbours),
        origin=origin,
        axes=axes,
    )


def _between(first: Array, second: Array) -> float:
    """Angle between two mirrors, inside, from their inward normals; exact near 0 and 180 degrees too."""
    return float(np.pi - np.arctan2(np.linalg.norm(np.cross(first, second)), first @ second))


def _check_shared_edges(flat: Sequence[FlatPanel]) -> None:
    ends = {}
    for panel in flat:
        corners = panel.in_space(panel.outline)
        for i, other in enumerate(panel.neighbours):
            if other:
                ends[panel.letter, other] = corners[i], corners[(i + 1) % len(corners)]
    for (one, other), (start, stop) in ends.items():
        back = ends.get((other, one))
        if back is None:
            msg = f"panel {one} names {other} as its neighbour, but {other} doesn't name {one}"
            raise PanelError(msg)
        reach = PLACE_TOLERANCE * max(1.0, float(np.linalg.norm(stop - start)))
        if max(np.linalg.norm(start - back[1]), np.linalg.norm(stop - back[0])) > reach:
            msg = f"panels {one} and {other} don't share one edge: their corners differ in space"
            raise PanelError(msg)


def _check_dihedrals(flat: Sequence[FlatPanel], stated: dict[tuple[int, int], float]) -> None:
    index = {panel.letter: panel.index for panel in flat}
    for panel in flat:
        for other, found in zip(panel.neighbours, panel.dihedrals, strict=True):
            if found is None:
                continue
            pair = min(panel.index, index[other]), max(panel.index, index[other])
            if pair in stated and abs(found - stated[pair]) > ANGLE_TOLERANCE:
                msg = (
                    f"mirrors {panel.letter} and {other}: panels stand at {np.degrees(found):.6f}°, "
                    f"the assembly says {np.degrees(stated[pair]):.6f}°"
                )
                raise PanelError(msg)


def _check_tip(flat: Sequence[FlatPanel], stated: dict[tuple[int, int], float]) -> None:
    expected = edge_angles(stated[0, 1], stated[0, 2], stated[1, 2])
    for panel, angle in zip(flat, expected, strict=True):
        found = tip_angle(panel)
        if abs(found - angle) > ANGLE_TOLERANCE:
            msg = (
                f"panel {panel.letter}: {np.degrees(found):.6f}° at its tip, "
                f"spherical trigonometry gives {np.degrees(angle):.6f}°"
            )
            raise PanelError(msg)


def tip_angle(panel: FlatPanel) -> float:
    """Angle in radians between the joined sides of a corner's panel, whether its tip is there or cut off."""
    joined = [i for i, other in enumerate(panel.neighbours) if other]
    vectors = polygon.side_vectors(panel.outline)[joined]
    turn = np.arctan2(vectors[0, 0] * vectors[1, 1] - vectors[0, 1] * vectors[1, 0], vectors[0] @ vectors[1])
    return float(np.pi - abs(turn))
