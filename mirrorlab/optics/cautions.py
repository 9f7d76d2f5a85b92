"""The cautions, in one place: what can hurt, and where each must be said.

Cut sheets, reports and the window all take their wording from here.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from mirrorlab.optics.assembly import Assembly
    from mirrorlab.optics.glass import GlassPanel

ROOM_SIZE = 600.0
"""mm; an assembly with a side this long takes in a person's head and shoulders, so what is true of mirror
rooms is said beside it. Our own choice, on the careful side."""

ONE_PERSON_LIFT = 15.0
"""kg of one pane above which two people or suction lifters carry it: common practice, no source."""


class Place(StrEnum):
    """Where cautions are shown."""

    CUT_SHEET = "cut sheet"
    REPORT = "report"
    ASSEMBLY = "assembly view"
    EYE = "eye's view"


@dataclass(frozen=True, slots=True)
class Hazards:
    """What an assembly brings with it.

    Attributes
    ----------
    longest : float
        mm, longest side of any panel.
    heaviest : float
        kg, of one pane.
    feather : bool
        Whether a bevel leaves a feather edge.
    """

    longest: float = 0.0
    heaviest: float = 0.0
    feather: bool = False

    @property
    def room(self) -> bool:
        """Whether it is large enough to put one's head into, or to walk in."""
        return self.longest >= ROOM_SIZE


@dataclass(frozen=True, slots=True)
class Caution:
    """One caution.

    Attributes
    ----------
    key : str
    title, text : str
        A few words, and one or two sentences.
    matters : str
        "always", "room", "feather" or "heavy": when it applies beside a view.
    places : tuple of Place
    """

    key: str
    title: str
    text: str
    matters: str
    places: tuple[Place, ...]

    def applies(self, hazards: Hazards) -> bool:
        """Whether it matters for this assembly."""
        return {
            "always": True,
            "room": hazards.room,
            "feather": hazards.feather,
            "heavy": hazards.heaviest > ONE_PERSON_LIFT,
        }[self.matters]

    def to_dict(self) -> dict[str, str]:
        """Plain JSON."""
        return {"key": self.key, "title": self.title, "text": self.text}


_PAPER = (Place.CUT_SHEET, Place.REPORT)
_ALL = (*_PAPER, Place.ASSEMBLY, Place.EYE)

CAUTIONS: tuple[Caution, ...] = (
    Caution(
        "cut-glass",
        "Cut glass",
        "Wear cut-resistant gloves and eye protection. Seam every edge before you handle or join the panes.",
        "always",
        (*_PAPER, Place.ASSEMBLY),
    ),
    Caution(
        "feather-edge",
        "Feather edges",
        "Bevels marked as feather edges chip and cut: grind them last, keep them off the bench, blunt the arris.",
        "feather",
        _PAPER,
    ),
    Caution(
        "heavy-pane",
        "Heavy panes",
        f"A pane here weighs more than {ONE_PERSON_LIFT:.0f} kg: lift with two people or suction lifters.",
        "heavy",
        _PAPER,
    ),
    Caution(
        "safety-mirror",
        "Within reach of people",
        "Use safety-backed or laminated mirror wherever someone can touch it, lean on it or fall against it.",
        "always",
        (*_PAPER, Place.ASSEMBLY),
    ),
    Caution(
        "sunlight",
        "Sunlight",
        "Keep direct sun off: mirrors that face each other concentrate it, which can blind and start a fire.",
        "always",
        _ALL,
    ),
    Caution(
        "mirror-room",
        "Mirror rooms",
        "Fixing, loads and exits follow the local building codes and are checked by a licensed glazier or engineer.",
        "room",
        (*_PAPER, Place.ASSEMBLY),
    ),
    Caution(
        "disorientation",
        "Disorientation",
        "Endless images hide walls, steps and doors: mark the floor and the way out, and keep them lit.",
        "room",
        _ALL,
    ),
    Caution(
        "photosensitivity",
        "Flashing light",
        "Mirrors multiply flashes and moving light, which can bring on seizures: stay below three flashes a second.",
        "always",
        (*_PAPER, Place.EYE),
    ),
)

_ON_EVERY_SHEET = ("always", "room")
"""On paper the cautions on mirror rooms stand even for a small assembly: sheets get scaled and passed on."""


def cautions_for(place: Place, hazards: Hazards) -> tuple[Caution, ...]:
    """The cautions to show at a place, in the order in which the work meets them."""
    paper = place in _PAPER
    return tuple(
        caution
        for caution in CAUTIONS
        if place in caution.places
        and (caution.applies(hazards) or (paper and caution.matters in _ON_EVERY_SHEET))
    )


def hazards_of(assembly: Assembly, panes: Iterable[GlassPanel] = ()) -> Hazards:
    """What an assembly, and its panes when they are made, bring with them."""
    sides = [
        np.linalg.norm(np.roll(p.outline, -1, axis=0) - p.outline, axis=1).max() for p in assembly.panels
    ]
    panes = tuple(panes)
    return Hazards(
        longest=float(max(sides)),
        heaviest=max((pane.weight for pane in panes), default=0.0),
        feather=any(side.is_feather for pane in panes for side in pane.sides),
    )
