"""The cut list: one row for each side of each pane, as a glazier reads it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import asdict, dataclass

import numpy as np

from mirrorlab.optics import polygon
from mirrorlab.optics.glass import GlassPanel


@dataclass(frozen=True, slots=True)
class CutRow:
    """One side of one pane; lengths in mm, angles in degrees, mirror side up, counter-clockwise.

    Attributes
    ----------
    part, quantity, thickness_mm, surface
        The mirror's letter, how many to cut, the glass and which of its faces is coated.
    blank_width_mm, blank_height_mm, blank_area_m2, weight_kg
        Of the pane as cut from the sheet, before bevelling.
    side
        Letter and number, as on the drawing: a1, a2 …
    length_mm, corner_degrees
        Of the blank: this side, and the inside angle at the corner where it starts.
    coated_length_mm, clear_length_mm
        The same side on the coated and on the uncoated face after bevelling.
    meets, between_degrees, joint
        The pane it meets, the angle between the two mirrors, and what is done here: mitred, over, under,
        square or free.
    bevel_degrees, longer_face, glass_degrees
        How far off square the edge is ground, which face stays longer, and the sharper angle of the glass.
    coated_cut_back_mm, clear_cut_back_mm, blind_strip_mm
        From the ideal edge to the coated and clear faces, and to where the mirror starts to show.
    """

    part: str
    quantity: int
    thickness_mm: float
    surface: str
    blank_width_mm: float
    blank_height_mm: float
    blank_area_m2: float
    weight_kg: float
    side: str
    length_mm: float
    corner_degrees: float
    coated_length_mm: float
    clear_length_mm: float
    meets: str
    between_degrees: float | None
    joint: str
    bevel_degrees: float
    longer_face: str
    glass_degrees: float
    coated_cut_back_mm: float
    clear_cut_back_mm: float
    blind_strip_mm: float

    def to_dict(self) -> dict[str, object]:
        """Plain JSON, and the columns of the CSV file."""
        return asdict(self)


COLUMNS: tuple[str, ...] = tuple(CutRow.__dataclass_fields__)


def cut_list(panes: Sequence[GlassPanel], copies: int = 1) -> tuple[CutRow, ...]:
    """Rows for all panes; `copies` assemblies are to be made."""
    return tuple(row for pane in panes for row in _rows(pane, copies))


def side_name(pane: GlassPanel, side: int) -> str:
    """How a side is called on drawings and in lists: a1, a2 …"""
    return f"{pane.letter}{side + 1}"


def _rows(pane: GlassPanel, copies: int) -> list[CutRow]:
    left, bottom, right, top = polygon.bounds(pane.blank)
    lengths = [polygon.side_lengths(outline) for outline in (pane.blank, pane.coated, pane.clear)]
    corners = np.degrees(polygon.corner_angles(pane.blank))
    return [
        CutRow(
            part=pane.letter,
            quantity=copies,
            thickness_mm=pane.thickness,
            surface=str(pane.surface),
            blank_width_mm=right - left,
            blank_height_mm=top - bottom,
            blank_area_m2=polygon.area(pane.blank) / 1e6,
            weight_kg=pane.weight,
            side=side_name(pane, i),
            length_mm=float(lengths[0][i]),
            corner_degrees=float(corners[i]),
            coated_length_mm=float(lengths[1][i]),
            clear_length_mm=float(lengths[2][i]),
            meets=cut.neighbour,
            between_degrees=None if cut.dihedral is None else float(np.degrees(cut.dihedral)),
            joint=cut.role,
            bevel_degrees=float(np.degrees(abs(cut.bevel))) if cut.longer_face else 0.0,
            longer_face=cut.longer_face,
            glass_degrees=float(np.degrees(cut.glass_angle)),
            coated_cut_back_mm=cut.mirror_offset,
            clear_cut_back_mm=cut.other_offset,
            blind_strip_mm=cut.blind,
        )
        for i, cut in enumerate(pane.sides)
    ]
