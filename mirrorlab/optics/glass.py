"""Panes of glass ready to cut: the flat panels with thickness, joints and bevels.

The blank is what is cut out of the sheet, square through the glass: at every side the longer of the two
faces. Bevels are ground off it afterwards.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics import polygon
from mirrorlab.optics.joints import JointError, JointKind, SideCut, Surface, free_side, joint_sides
from mirrorlab.optics.panels import FlatPanel

Array = NDArray[np.float64]

GLASS_DENSITY = 2500.0
"""kg/m³ of soda-lime glass: EN 572-1, from memory; 2.5 kg for each m² and mm."""


class Order(StrEnum):
    """Which pane runs past which in butted joints.

    ``ROUND``: each runs past the next and stands on the one before, so that equal panels stay equal. ``FIRST``: an
    earlier letter runs past every later one.
    """

    ROUND = "round"
    FIRST = "first"


@dataclass(frozen=True, slots=True)
class JointSettings:
    """What a maker chooses about joints.

    Attributes
    ----------
    kind : JointKind
    order : Order
        See `Order`; only butted joints ask for it.
    gap : float
        mm of clearance at every joint for tape or sealant.
    """

    kind: JointKind = JointKind.MITRED
    order: Order = Order.ROUND
    gap: float = 0.0

    @classmethod
    def named(cls, kind: str = "mitred", order: str = "round", gap: float = 0.0) -> JointSettings:
        """Settings from words, as typed.

        Raises
        ------
        JointError
            When a word is none of ours.
        """
        for given, choices, what in ((kind, JointKind, "joint"), (order, Order, "order of butted joints")):
            if given not in tuple(choices):
                msg = f"{what} {given!r}: not known; choose {', '.join(choices)}"
                raise JointError(msg)
        return cls(JointKind(kind), Order(order), float(gap))


@dataclass(frozen=True, slots=True, eq=False)
class GlassPanel:
    """One pane.

    Attributes
    ----------
    flat : FlatPanel
        The ideal reflecting face.
    surface : Surface
    thickness : float
        mm
    sides : tuple of SideCut
        In the order of the flat panel's sides.
    coated, clear, blank : ndarray, shape (k, 2)
        Outline of the coated face, of the other face and of the blank, in the flat panel's frame, mm.
    """

    flat: FlatPanel
    surface: Surface
    thickness: float
    sides: tuple[SideCut, ...]
    coated: Array
    clear: Array
    blank: Array

    @property
    def letter(self) -> str:
        """The mirror's letter."""
        return self.flat.letter

    @property
    def clear_height(self) -> float:
        """Height of the clear face above the coated one, along the mirror side's normal, mm."""
        return self.thickness if self.surface is Surface.SECOND else -self.thickness

    @property
    def weight(self) -> float:
        """kg of the blank."""
        return polygon.area(self.blank) * self.thickness * GLASS_DENSITY / 1e9

    def upper_is_longer(self, side: int) -> bool:
        """Whether, as drawn with the mirror side up, the upper face is the longer one at this side."""
        longer = self.sides[side].longer_face
        return longer == ("clear" if self.surface is Surface.SECOND else "coated")

    def to_dict(self) -> dict[str, object]:
        """Plain JSON; angles in degrees."""
        left, bottom, right, top = polygon.bounds(self.blank)
        return {
            "letter": self.letter,
            "surface": str(self.surface),
            "thickness_mm": self.thickness,
            "reflecting_face": self.flat.to_dict(),
            "blank": _shape(self.blank) | {"width_mm": right - left, "height_mm": top - bottom},
            "coated_face": _shape(self.coated),
            "clear_face": _shape(self.clear),
            "sides": [side.to_dict() for side in self.sides],
        }


def _shape(outline: Array) -> dict[str, object]:
    return {
        "outline_mm": outline.tolist(),
        "side_lengths_mm": polygon.side_lengths(outline).tolist(),
        "corner_angles_degrees": np.degrees(polygon.corner_angles(outline)).tolist(),
        "area_mm2": polygon.area(outline),
    }


def make_panes(
    panels: Sequence[FlatPanel],
    thickness: float,
    surfaces: Sequence[Surface],
    settings: JointSettings | None = None,
) -> tuple[GlassPanel, ...]:
    """Panes with joints.

    Parameters
    ----------
    panels : sequence of FlatPanel
    thickness : float
        mm
    surfaces : sequence of Surface
        One a panel.
    settings : JointSettings, optional

    Raises
    ------
    JointError
        When a pane has no glass left between its joints; the message says what to change.
    """
    settings = settings or JointSettings()
    index = {panel.letter: i for i, panel in enumerate(panels)}
    cuts: dict[tuple[str, str], SideCut] = {}
    for panel in panels:
        for other, dihedral in zip(panel.neighbours, panel.dihedrals, strict=True):
            if other and dihedral is not None and (panel.letter, other) not in cuts:
                pair = _over_first(panel.letter, other, index, settings.order)
                chosen = (Surface(surfaces[index[pair[0]]]), Surface(surfaces[index[pair[1]]]))
                sides = joint_sides(settings.kind, dihedral, thickness, chosen, pair, settings.gap)
                cuts[pair], cuts[pair[::-1]] = sides
    return tuple(_pane(panel, thickness, Surface(surfaces[i]), cuts) for i, panel in enumerate(panels))


def _over_first(one: str, other: str, index: dict[str, int], order: Order) -> tuple[str, str]:
    """The two letters, the pane that runs past first."""
    low, high = sorted((one, other), key=index.__getitem__)
    wraps = order is Order.ROUND and len(index) > 2 and index[low] == 0 and index[high] == len(index) - 1
    return (high, low) if wraps else (low, high)


def _pane(
    panel: FlatPanel, thickness: float, surface: Surface, cuts: dict[tuple[str, str], SideCut]
) -> GlassPanel:
    sides = tuple(cuts[panel.letter, other] if other else free_side() for other in panel.neighbours)
    coated = np.array([side.mirror_offset for side in sides])
    clear = np.array([side.other_offset for side in sides])
    try:
        outlines = [
            polygon.move_sides(panel.outline, moved) for moved in (coated, clear, np.minimum(coated, clear))
        ]
    except polygon.PolygonError as error:
        msg = (
            f"panel {panel.letter}: {thickness:g} mm glass leaves nothing of it ({error}); "
            "take thinner glass, another joint or a larger panel"
        )
        raise JointError(msg) from error
    return GlassPanel(panel, surface, float(thickness), sides, *outlines)
