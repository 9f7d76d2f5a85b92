"""Samples to start from, all invented: the Ostrel workshop's lanterns and the Ostrel cabinet's specimens."""

from __future__ import annotations

from dataclasses import dataclass

from mirrorlab.angles import AngleSettings
from mirrorlab.mirrors import Arrangement


@dataclass(frozen=True, slots=True)
class Sample:
    """One sample: angles pair by pair, or the name of a family."""

    name: str
    note: str
    angles: tuple[str, ...] = ()
    family: str = ""

    def arrangement(self, reading: AngleSettings) -> Arrangement:
        """The sample's mirrors."""
        if self.family:
            return Arrangement.from_family(self.family, reading)
        return Arrangement.from_angles(self.angles, reading)


SAMPLES = (
    Sample("Ostrel corner lantern", "three mirrors, 48 images", ("90", "60", "45")),
    Sample("Ostrel star lantern", "three mirrors, 120 images", ("90", "60", "36")),
    Sample("Ostrel tetra lantern", "three mirrors, 24 images", ("90", "60", "60")),
    Sample("Ostrel pentagram shade", "a star angle, closed but subdivided", ("90", "60", "2pi/5")),
    Sample("Ostrel hand scope", "two mirrors, twelve sectors", ("30",)),
    Sample("Ostrel gallery tube", "parallel edges, images tile a plane", ("60", "60", "60")),
    Sample("Room 9 as first drawn", "one angle that never closes", ("90", "60", "40")),
    Sample("Specimen K-1", "measured, cubic or not?", ("90.1(2)", "59.8(3)", "44.6(4)")),
    Sample("Specimen K-4", "measured, one angle at fault", ("90.0(2)", "90.1(2)", "50.9(3)")),
    Sample("Seven walls, E7", "seven mirrors, 2,903,040 images", family="E7"),
)
"""The first is on the stage at the start."""
