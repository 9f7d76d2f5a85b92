"""Everything a workshop needs to make an assembly: panes, joints, layout, proof by folding, cautions."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from mirrorlab.optics import polygon
from mirrorlab.optics.cautions import Caution, Hazards, Place, cautions_for, hazards_of
from mirrorlab.optics.cutlist import CutRow, cut_list
from mirrorlab.optics.folding import Fold, fold_by_bevels, fold_by_shapes
from mirrorlab.optics.glass import GlassPanel, JointSettings, make_panes
from mirrorlab.optics.joints import JointError, JointKind, Surface
from mirrorlab.optics.nesting import Layout, Piece, Stock, nest
from mirrorlab.optics.panels import flatten_panels

if TYPE_CHECKING:
    from mirrorlab.optics.assembly import Assembly

MOST_COPIES = 1000
"""Assemblies cut at one time; a larger number is a slip of the keyboard, and would take minutes to lay out."""

FOLD_WORTH_SAYING = 1e-4
"""Degrees; a smaller folding error is not worth its digits to a person with a grinder."""


@dataclass(frozen=True, slots=True, eq=False)
class CutJob:
    """A job for the workshop.

    Attributes
    ----------
    title : str
    kind : str
        "wedge", "corner" or "tube".
    panes : tuple of GlassPanel
    joints : JointSettings
    copies : int
        How many assemblies to make.
    layout : Layout or None
        On stock sheets, when stock was given.
    folded : Fold
        What came of folding the panes together by their bevels.
    hazards : Hazards
    """

    title: str
    kind: str
    panes: tuple[GlassPanel, ...]
    joints: JointSettings
    copies: int
    layout: Layout | None
    folded: Fold
    hazards: Hazards

    @property
    def dihedrals(self) -> dict[str, float]:
        """Pair of letters ("ab") → angle between the mirrors in radians, each joint once."""
        found: dict[str, float] = {}
        for pane in self.panes:
            for side in pane.sides:
                if side.dihedral is not None:
                    found.setdefault("".join(sorted(pane.letter + side.neighbour)), side.dihedral)
        return dict(sorted(found.items()))

    @property
    def kerf(self) -> float:
        """mm that a cut takes away, as stated for the stock; 0 without stock."""
        return self.layout.stock.kerf if self.layout else 0.0

    @property
    def rows(self) -> tuple[CutRow, ...]:
        """The cut list."""
        return cut_list(self.panes, self.copies)

    @property
    def folded_by_shape(self) -> Fold:
        """What comes of folding the flat shapes alone; worked out when asked for, it takes a while."""
        return fold_by_shapes([pane.flat for pane in self.panes])

    @property
    def glass_area(self) -> float:
        """m² of all blanks of all copies."""
        return self.copies * sum(polygon.area(pane.blank) for pane in self.panes) / 1e6

    @property
    def notes(self) -> tuple[str, ...]:
        """What a maker should know of these joints, one sentence each."""
        return _notes(self.panes, self.joints, self.folded)

    def cautions(self, place: Place) -> tuple[Caution, ...]:
        """The cautions to show at a place."""
        return cautions_for(place, self.hazards)

    def to_dict(self) -> dict[str, object]:
        """Plain JSON; angles in degrees."""
        return {
            "title": self.title,
            "kind": self.kind,
            "copies": self.copies,
            "dihedrals_degrees": {pair: float(np.degrees(x)) for pair, x in self.dihedrals.items()},
            "joint": {
                "kind": str(self.joints.kind),
                "order": str(self.joints.order),
                "gap_mm": self.joints.gap,
            },
            "panes": [pane.to_dict() for pane in self.panes],
            "cut_list": [row.to_dict() for row in self.rows],
            "glass_area_m2": self.glass_area,
            "layout": None if self.layout is None else self.layout.to_dict(),
            "folded_by_bevels": self.folded.to_dict(),
            "folded_by_shapes": self.folded_by_shape.to_dict(),
            "notes": list(self.notes),
            "cautions": [caution.to_dict() for caution in self.cautions(Place.CUT_SHEET)],
        }


def make_cut_job(
    assembly: Assembly,
    joints: JointSettings | None = None,
    stock: Stock | None = None,
    copies: int = 1,
    title: str = "",
) -> CutJob:
    """Panes, layout and proof for an assembly.

    Parameters
    ----------
    assembly : Assembly
    joints : JointSettings, optional
        Mitred without a gap when left out.
    stock : Stock, optional
        Lay the panes of all copies out on sheets of this size.
    copies : int
    title : str
        Made from kind and angles when empty.

    Raises
    ------
    PanelError, JointError, NestingError
        When the panels are not one assembly, the glass doesn't fit the joints, or a pane doesn't fit the stock.
    """
    joints = joints or JointSettings()
    if not 1 <= copies <= MOST_COPIES:
        msg = f"{copies} copies: give a whole number from 1 to {MOST_COPIES}"
        raise JointError(msg)
    flat = flatten_panels(assembly)
    surfaces = [Surface(mirror.surface) for mirror in assembly.mirrors]
    panes = make_panes(flat, assembly.thickness, surfaces, joints)
    layout = nest([Piece(pane.letter, pane.blank, copies) for pane in panes], stock) if stock else None
    job = CutJob(
        title=title,
        kind=assembly.kind,
        panes=panes,
        joints=joints,
        copies=copies,
        layout=layout,
        folded=fold_by_bevels(panes),
        hazards=hazards_of(assembly, panes),
    )
    return job if title else _titled(job)


def _titled(job: CutJob) -> CutJob:
    from dataclasses import replace

    angles = " / ".join(f"{np.degrees(x):.6g}°" for x in job.dihedrals.values())
    return replace(job, title=f"{job.kind.capitalize()} of {len(job.panes)} mirrors, {angles}")


def _notes(panes: Sequence[GlassPanel], joints: JointSettings, folded: Fold) -> tuple[str, ...]:
    notes = []
    feather = [f"{p.letter}{i + 1}" for p in panes for i, s in enumerate(p.sides) if s.is_feather]
    if feather:
        sharpest = min(np.degrees(s.glass_angle) for p in panes for s in p.sides)
        notes.append(
            f"Feather edges at {', '.join(feather)} (sharpest {sharpest:.1f}°): "
            "butted or square joints need less grinding."
        )
    blind = max(side.blind for pane in panes for side in pane.sides)
    if blind > 0.05:
        notes.append(f"Up to {blind:.1f} mm beside a joint don't reflect (blind strip).")
    surfaces = {pane.surface for pane in panes}
    if len(surfaces) > 1:
        notes.append(
            "First- and second-surface mirrors meet: the second-surface pane stands on the other's coating."
        )
    if joints.kind is JointKind.SQUARE:
        notes.append(
            "Square edges touch along a line and don't hold the angle: set the panes in a jig or a former."
        )
    elif folded.dihedrals:
        notes.append(
            "Folded back together from the cut sizes, the angles between the mirrors return to within "
            f"{max(np.degrees(folded.angle_error), FOLD_WORTH_SAYING):.4f}°."
        )
    return tuple(notes)
