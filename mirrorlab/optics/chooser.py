"""Choosing an assembly: every one that closes, with what it shows and how large its panels get."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.build import assembly_from
from mirrorlab.optics.closing import Closing, ClosingError, closing_assemblies
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.panels import FlatPanel, flatten_panels, tip_angle
from mirrorlab.optics.polygon import bounds

Array = NDArray[np.float64]

FAINTEST = 0.1
"""Part of the light below which an image is not counted as bright: a tenth is still plainly seen beside the
object itself. Our own choice."""

DEEPEST = 200
"""Bounces followed at most; at a reflectance of 0.99 an image has kept 13 % of its light after them."""


@dataclass(frozen=True, slots=True)
class Choice:
    """A closing assembly made for an opening.

    Attributes
    ----------
    closing : Closing
    opening : float
        mm; longest side of the opening.
    length : float
        mm; of a wedge's edge or a tube. 0 for a corner.
    depth : float
        mm; how far a corner's point lies behind its mouth, how wide a wedge's mirrors are. 0 for a tube.
    edge_angles : tuple of float
        Radians; angle at the tip of each panel of a corner, none for wedges and tubes.
    panels : tuple of (str, float, float)
        Letter, width and height in mm of the box around each reflecting face.
    area : float
        m² of reflecting faces.
    bright : int
        Images that keep at least `FAINTEST` of their light; with more than one chamber between the mirrors, at most
        so many of those seen at one time.
    problem : str
        Why it can't be made for this opening; "" when it can.
    """

    closing: Closing
    opening: float
    length: float
    depth: float
    edge_angles: tuple[float, ...]
    panels: tuple[tuple[str, float, float], ...]
    area: float
    bright: int
    problem: str

    @property
    def dimensions(self) -> dict[str, object]:
        """What `assembly_from` makes this assembly of."""
        return asked_for(self.closing, self.opening, self.length)

    @property
    def images(self) -> int:
        """What is asked for as "about N images": those seen, or for a tube those that are bright."""
        return self.bright if self.closing.images is None else self.closing.images

    def to_dict(self) -> dict[str, object]:
        """Plain JSON; angles in degrees."""
        closing = self.closing
        return {
            "kind": closing.kind,
            "name": closing.name,
            "angles": list(closing.angles),
            "angles_degrees": [float(f) * 180 for f in closing.fractions],
            "families": list(closing.families),
            "symbol": closing.symbol,
            "images": closing.images,
            "bright_images": self.bright,
            "order": closing.order,
            "chambers_between": closing.chambers,
            "opening_mm": self.opening,
            "length_mm": self.length or None,
            "depth_mm": self.depth or None,
            "edge_angles_degrees": [math.degrees(angle) for angle in self.edge_angles],
            "panels_mm": [{"letter": a, "width": w, "height": h} for a, w, h in self.panels],
            "glass_area_m2": self.area,
            "problem": self.problem,
        }


SORTS: dict[str, Callable[[Choice], float]] = {
    "images": lambda choice: choice.images,
    "bright": lambda choice: choice.bright,
    "chambers": lambda choice: choice.closing.chambers,
    "angle": lambda choice: min(float(f) for f in choice.closing.fractions if f),
    "depth": lambda choice: choice.depth,
    "area": lambda choice: choice.area,
}
"""What a listing can be sorted by."""


def choices(
    opening: float,
    length: float | None = None,
    reflectance: float = 0.9,
    largest: int = 12,
    kinds: Sequence[str] = ("wedge", "corner", "tube"),
    whole: bool = False,
    progress: Callable[[int, int], object] | None = None,
) -> tuple[Choice, ...]:
    """Every closing assembly for one opening.

    Parameters
    ----------
    opening : float
        mm; longest side of the opening that one looks through.
    length : float, optional
        mm; of wedges and tubes. Twice the opening when left out.
    reflectance : float
        Part of the light that one bounce keeps.
    largest : int
        Largest denominator m of kπ/m in the endless series.
    kinds : sequence of str
    whole : bool
        Only those with one chamber between the mirrors, whose images fit together for every eye.
    progress : callable, optional
        Called with (done, total); a return of False ends the listing there.

    Raises
    ------
    ClosingError
        A value out of range; the message says what is accepted.
    """
    if not (math.isfinite(opening) and opening > 0):
        msg = f"opening {opening:g} mm: must be greater than 0"
        raise ClosingError(msg)
    if not 0 < reflectance < 1:
        msg = f"reflectance {reflectance:g}: must be over 0 and below 1"
        raise ClosingError(msg)
    strange = [kind for kind in kinds if kind not in ("wedge", "corner", "tube")]
    if strange:
        msg = f"kind {strange[0]!r}: choose from wedge, corner, tube"
        raise ClosingError(msg)
    found = closing_assemblies(largest)
    bounces = min(DEEPEST, int(math.log(FAINTEST) / math.log(reflectance) + 1e-9))
    wanted = [c for c in found if c.kind in kinds and (c.chambers == 1 or not whole)]
    made = []
    for done, closing in enumerate(wanted):
        if progress is not None and progress(done, len(wanted)) is False:
            break
        made.append(sized(closing, opening, length or 2 * opening, bounces))
    return tuple(made)


def nearest(found: Sequence[Choice], images: int, count: int = 6) -> tuple[Choice, ...]:
    """The choices that come nearest to a number of images; of equals, those whose images fit together first."""
    makeable = [choice for choice in found if not choice.problem]
    return tuple(
        sorted(
            makeable,
            key=lambda c: (abs(c.images - images), c.closing.chambers, len(c.closing.fractions), c.area),
        )[:count]
    )


def asked_for(closing: Closing, opening: float, length: float) -> dict[str, object]:
    """The dimensions of a closing assembly, as `assembly_from` reads them."""
    asked: dict[str, object] = {"kind": closing.kind, "opening": opening}
    if closing.kind == "wedge":
        return asked | {"angle": closing.angles[0], "length": length}
    asked["angles"] = list(closing.angles)
    return asked | {"length": length} if closing.kind == "tube" else asked


def sized(closing: Closing, opening: float, length: float, bounces: int) -> Choice:
    """One closing assembly made for an opening."""
    bright = bright_images(closing, bounces)
    if closing.images is not None:  # places that overlap are never seen at one time
        bright = min(bright, closing.images)
    try:
        assembly = assembly_from(asked_for(closing, opening, length))
    except AssemblyError as error:
        return Choice(closing, opening, length, 0.0, (), (), 0.0, bright, str(error))
    flat = flatten_panels(assembly)
    corner = closing.kind == "corner"
    depth = float(assembly.mouth[0, 2]) if corner else 0.0
    if closing.kind == "wedge":
        outline = assembly.panels[0].outline
        depth = float(np.linalg.norm(outline[1] - outline[0]))
    return Choice(
        closing=closing,
        opening=opening,
        length=0.0 if corner else length,
        depth=depth,
        edge_angles=tuple(tip_angle(panel) for panel in flat) if corner else (),
        panels=tuple((panel.letter, *_box(panel)) for panel in flat),
        area=sum(panel.area for panel in flat) / 1e6,
        bright=bright,
        problem="",
    )


def _box(panel: FlatPanel) -> tuple[float, float]:
    left, bottom, right, top = bounds(panel.outline)
    return right - left, top - bottom


def bright_images(closing: Closing, bounces: int) -> int:
    """Images reached by at most `bounces` reflections, the object not counted.

    Each layer of images is the reflection of the one before; a reflection changes the number of bounces by
    exactly one, so only the last two layers can repeat.
    """
    layers, total = [np.eye(4)[None]], 0
    mirrors = _reflections(closing)
    known = {_key(layers[0][0])}
    for _ in range(bounces):
        reached = (mirrors[:, None] @ layers[-1][None]).reshape(-1, 4, 4)
        fresh = {}
        for place in reached:
            key = _key(place)
            if key not in known:
                fresh.setdefault(key, place)
        if not fresh:
            break
        last = {_key(place) for place in layers[-1]}
        known = last | set(fresh)
        layers.append(np.array(list(fresh.values())))
        total += len(fresh)
    return total


def _key(place: Array) -> bytes:
    """Equal places have equal keys: coordinates to six digits, without negative zeros."""
    return (np.round(place, 6) + 0.0).tobytes()


def _reflections(closing: Closing) -> Array:
    """Reflections in the mirrors of an assembly of size 1, as 4 × 4 matrices."""
    if closing.kind == "corner":
        normals = closing.arrangement().normals
        assert normals is not None  # closing corners can be built
        offsets = np.zeros(len(normals))
    else:
        assembly = assembly_from(asked_for(closing, 1.0, 1.0))
        normals, offsets = assembly.normals, assembly.offsets
    made = np.tile(np.eye(4), (len(normals), 1, 1))
    made[:, :3, :3] -= 2 * normals[:, :, None] * normals[:, None, :]
    made[:, :3, 3] = 2 * offsets[:, None] * normals
    return made
