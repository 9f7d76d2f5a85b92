"""What one mirror is made of: which surface reflects, how much, and in which tint."""

from __future__ import annotations

import math
from dataclasses import dataclass

from mirrorlab.optics.lengths import AssemblyError

FIRST = "first"
SECOND = "second"


@dataclass(frozen=True, slots=True)
class MirrorSpec:
    """A mirror's reflecting surface.

    Attributes
    ----------
    surface : str
        "first": the metal lies on top. "second": the metal lies behind the glass.
    reflectance : float
        Part of the light that one bounce keeps, over 0 and up to 1.
    tint : tuple of float
        What one bounce leaves of red, green and blue besides, each over 0 and up to 1.
    name : str
        The preset it came from, "" for one's own values.
    """

    surface: str = FIRST
    reflectance: float = 0.90
    tint: tuple[float, float, float] = (1.0, 1.0, 1.0)
    name: str = ""

    def __post_init__(self) -> None:
        """Refuse what no mirror can be."""
        if self.surface not in (FIRST, SECOND):
            msg = f"surface {self.surface!r}: must be 'first' or 'second'"
            raise AssemblyError(msg, "surface")
        if not (math.isfinite(self.reflectance) and 0 < self.reflectance <= 1):
            msg = f"reflectance {self.reflectance!r}: must be over 0 and up to 1, e.g. 0.9"
            raise AssemblyError(msg, "reflectance")
        if len(self.tint) != 3 or not all(0 < value <= 1 for value in self.tint):
            msg = f"tint {self.tint!r}: must be three values over 0 and up to 1"
            raise AssemblyError(msg, "tint")

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "surface": self.surface,
            "reflectance": self.reflectance,
            "tint": list(self.tint),
            "name": self.name,
        }


PRESETS: dict[str, MirrorSpec] = {
    "first-surface aluminium": MirrorSpec(FIRST, 0.90, (1.0, 1.0, 1.0), "first-surface aluminium"),
    "first-surface enhanced": MirrorSpec(FIRST, 0.95, (1.0, 1.0, 1.0), "first-surface enhanced"),
    "household glass": MirrorSpec(SECOND, 0.85, (0.985, 1.0, 0.99), "household glass"),
    "perfect": MirrorSpec(FIRST, 1.0, (1.0, 1.0, 1.0), "perfect"),
}
"""Mirrors by name. The reflectances are common practice, no source: first-surface aluminium 0.88 to 0.92,
enhanced about 0.95, second-surface household glass 0.80 to 0.90. The tint of household glass is our estimate."""


def preset(name: str) -> MirrorSpec:
    """Return the mirror with this name.

    Raises
    ------
    AssemblyError
        No such preset.
    """
    if name not in PRESETS:
        msg = f"mirror {name!r}: not a preset; accepted are {', '.join(repr(n) for n in PRESETS)}"
        raise AssemblyError(msg, "mirror")
    return PRESETS[name]
