"""What an undo brings back: the mirrors, the seed, the settings and the benches' values, as frozen values."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import Any

from mirrorlab.angles import AngleSettings
from mirrorlab.mirrors import Arrangement, OrbitError


@dataclass(frozen=True, slots=True)
class Seed:
    """Where the seed stands: one of heights, point or place is given.

    Attributes
    ----------
    heights : tuple of float or None
        Distances from the typed mirrors a, b, c, …
    point : tuple of float or None
        Coordinates in the arrangement's frame.
    place : str or None
        A named place of the chamber.
    rotations : bool
        True takes the images under the rotations only.
    """

    heights: tuple[float, ...] | None = None
    point: tuple[float, ...] | None = None
    place: str | None = "centre"
    rotations: bool = False


MOST_IMAGES_RANGE = (1000, 50_000_000)
"""What the limit of images may be set to."""


@dataclass(frozen=True, slots=True)
class Settings:
    """How angles are read and written, and how long an orbit may be.

    Attributes
    ----------
    reading : AngleSettings
        Largest denominator searched for a closing fraction, and how many standard uncertainties wide.
    notation : str
        "degrees", "pi" or "dms".
    most_images : int
        A longer orbit is refused, with its size and memory.
    """

    reading: AngleSettings = field(default_factory=AngleSettings)
    notation: str = "degrees"
    most_images: int = 2_000_000


@dataclass(frozen=True, slots=True, eq=False)
class State:
    """All that undo brings back.

    `sheet` numbers the arrangement files and samples opened in this window; each has a path of its own, so
    that undoing an opening cannot save one arrangement over another's file.
    """

    arrangement: Arrangement
    seed: Seed
    settings: Settings
    crystal: Any = None
    glass: Any = None
    name: str = ""
    sheet: int = 0


def fitted(seed: Seed, arrangement: Arrangement) -> Seed:
    """The seed as it is where the arrangement can take it, else the nearest that it can take."""
    if seed.heights is not None and len(seed.heights) != arrangement.size:
        more = (1.0,) * arrangement.size
        seed = replace(seed, heights=(*seed.heights, *more)[: arrangement.size])
    if arrangement.finding().group is None:
        return seed
    try:
        arrangement.seed(seed.heights, seed.point, seed.place)
    except OrbitError:
        return Seed(rotations=seed.rotations)
    return seed


def read_again(arrangement: Arrangement, reading: AngleSettings) -> Arrangement:
    """The same mirrors, their angles read under other settings."""
    if arrangement.given_normals and arrangement.normals is not None:
        return Arrangement.from_normals(arrangement.normals, reading)
    return Arrangement.from_angles([angle.text for angle in arrangement.angles], reading)
