"""How many images a point of the object has in real, finite mirrors, and where: counted by following light."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.assembly import Assembly, outside_mouth
from mirrorlab.optics.beams import MOST_BEAMS, Progress, beams_from
from mirrorlab.optics.body import body_of, follow
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.overlap import Overlap, overlaps_of
from mirrorlab.optics.sectors import EdgeView, edge_views
from mirrorlab.optics.tracer import window_planes

Array = NDArray[np.float64]

SAME_PLACE = 1e-6
"""Of the assembly's size: images nearer than this are one. Mirrors that are off by a second of arc part them by
five times as much."""

ON_BISECTOR = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class Image:
    """One image of the point.

    Attributes
    ----------
    word : str
        Mirrors as a product of reflections: the eye's ray meets the first letter first. The brightest where
        several lead to the place.
    words : int
        How many words lead to the same place.
    position : ndarray, shape (3,)
        Millimetres, in the assembly's frame.
    parity : int
        1 when the image is reversed.
    bounces : int
    brightness : float
        What is left of the light.
    seen : bool
        Whether the assembly's eye sees it, past all the panels' rims.
    """

    word: str
    words: int
    position: Array
    parity: int
    bounces: int
    brightness: float
    seen: bool

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "word": self.word,
            "words": self.words,
            "position_mm": self.position.tolist(),
            "parity": self.parity,
            "bounces": self.bounces,
            "brightness": self.brightness,
            "seen": self.seen,
        }


@dataclass(frozen=True, slots=True, eq=False)
class ImageCount:
    """The images of a point.

    Attributes
    ----------
    point : ndarray, shape (3,)
    images : tuple of Image
        Without the point itself; by bounces, then brightness.
    complete : bool
        True when light can meet no other row of mirrors; else `stopped_by` says where counting was stopped.
    edges : tuple of EdgeView
        For each edge, which sectors are whole, cut or overlapping for the assembly's eye.
    overlaps : tuple of Overlap
        Pairs of whole images that claim the same space.
    rule : int or None
        What the two-mirror rule says (common practice, no source); None for other assemblies.
    """

    point: Array
    images: tuple[Image, ...]
    complete: bool
    stopped_by: str
    edges: tuple[EdgeView, ...]
    overlaps: tuple[Overlap, ...]
    rule: int | None
    notes: tuple[str, ...]

    @property
    def count(self) -> int:
        """Number of images, without the point itself."""
        return len(self.images)

    @property
    def seen(self) -> int:
        """How many the assembly's eye sees."""
        return sum(image.seen for image in self.images)

    @property
    def sentence(self) -> str:
        """In words."""
        more = "" if self.complete else f" (counting stopped at {self.stopped_by}; there are more)"
        return f"{self.count} images{more}, {self.seen} of them seen from the eye"

    def by_bounces(self) -> tuple[tuple[int, int, float], ...]:
        """Rows of (bounces, images, brightness of the brightest)."""
        rows = []
        for bounces in sorted({image.bounces for image in self.images}):
            those = [image for image in self.images if image.bounces == bounces]
            rows.append((bounces, len(those), max(image.brightness for image in those)))
        return tuple(rows)

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "point_mm": self.point.tolist(),
            "count": self.count,
            "seen_from_the_eye": self.seen,
            "complete": self.complete,
            "stopped_by": self.stopped_by,
            "rule_of_two_mirrors": self.rule,
            "sentence": self.sentence,
            "notes": list(self.notes),
            "by_bounces": [
                {"bounces": bounces, "images": images, "brightest": brightest}
                for bounces, images, brightest in self.by_bounces()
            ],
            "images": [image.to_dict() for image in self.images],
            "edges": [edge.to_dict() for edge in self.edges],
            "overlaps": [overlap.to_dict() for overlap in self.overlaps],
        }


def count_images(
    assembly: Assembly,
    point: Array | None = None,
    faintest: float = 0.02,
    most: int = MOST_BEAMS,
    progress: Progress | None = None,
) -> ImageCount:
    """Count the images of a point of the object, wherever the eye may be, and find those that the eye sees.

    Parameters
    ----------
    point : array_like, shape (3,), optional
        Millimetres, between the mirrors. Left out: on the object, a little off its middle, so that it stands
        on no plane of symmetry.
    faintest : float
        Images with less of their light left are not counted.
    most : int
        Beams after which counting stops.

    Raises
    ------
    AssemblyError
        A point that is not between the mirrors, or a brightness that is no share.
    """
    if not (math.isfinite(faintest) and 0 < faintest < 1):
        msg = f"faintest brightness {faintest!r}: must be over 0 and below 1, e.g. 0.02"
        raise AssemblyError(msg, "faintest")
    spot = generic_point(assembly) if point is None else np.array(point, dtype=np.float64)
    _check_point(assembly, spot)
    beams = beams_from(assembly, spot, faintest, most=most, progress=progress)
    positions = beams.turns @ spot + beams.shifts
    size = float(np.ptp(np.vstack([panel.outline for panel in assembly.panels]), axis=0).max())
    groups = same_places(positions, SAME_PLACE * size)
    chosen = [group for group in groups if 0 not in group]
    best = [group[int(np.argmax(beams.brightness[group]))] for group in chosen]
    seen = seen_from_eye(assembly, spot, positions[best], SAME_PLACE * size * 10)
    letters = assembly.letters
    images = [
        Image(
            beams.word(k, letters),
            len(group),
            positions[k],
            int(beams.bounces[k] % 2),
            int(beams.bounces[k]),
            float(beams.brightness[k]),
            bool(visible),
        )
        for k, group, visible in zip(best, chosen, seen, strict=True)
    ]
    images.sort(key=lambda image: (image.bounces, -image.brightness, image.word))
    edges = edge_views(assembly)
    overlaps = overlaps_of(assembly, beams) if not all(edge.closes for edge in edges) else ()
    rule, notes = _rule(assembly, spot, len(images))
    return ImageCount(
        spot,
        tuple(images),
        beams.complete,
        beams.stopped_by,
        edges,
        overlaps,
        rule,
        (*notes, *_place_note(point)),
    )


def generic_point(assembly: Assembly) -> Array:
    """Return a point of the object that no symmetry of the assembly leaves in place."""
    place = assembly.place
    corners = np.vstack([panel.outline for panel in assembly.panels])
    if place.inside:
        step = 0.11 * place.width * place.right + 0.07 * place.height * place.up
        result: Array = place.centre + step
        return result
    low = float(corners[:, 2].min())
    floor = np.array([corner for corner in corners if corner[2] < low + 1e-9 * (1 + abs(low))])
    weights = np.linspace(1.0, 1.61, len(floor))
    spot = weights @ floor / weights.sum()
    # A hair above the plane, so that it is inside the body.
    return spot + np.array([0, 0, 1e-6 * float(np.ptp(corners[:, 2]))])


def _check_point(assembly: Assembly, spot: Array) -> None:
    if spot.shape != (3,) or not np.isfinite(spot).all():
        msg = f"point {spot.tolist()!r}: give three finite numbers, in mm"
        raise AssemblyError(msg, "point")
    body = body_of(assembly)
    heights = body.heights(spot)
    worst = int(heights.argmin())
    if heights[worst] < -1e-9:
        behind = (
            f"behind mirror {assembly.letters[worst]}" if worst < body.mirrors else "outside the assembly"
        )
        msg = f"point at {np.round(spot, 3).tolist()} mm: {behind}; put it between the mirrors"
        raise AssemblyError(msg, "point")


def same_places(positions: Array, near: float) -> list[list[int]]:
    """Return indices of positions, those that are nearer than `near` together, in the order of their first.

    Along a skew direction positions that are together stand together, so only runs without a gap are compared.
    """
    along = positions @ np.array([0.6321, 0.5477, 0.5487])
    order = np.argsort(along, kind="stable")
    runs = np.split(order, np.flatnonzero(np.diff(along[order]) > near) + 1)
    found = []
    for run in runs:
        rest = np.sort(run)
        while len(rest):
            together = np.linalg.norm(positions[rest] - positions[rest[0]], axis=1) < near
            found.append(rest[together].tolist())
            rest = rest[~together]
    return sorted(found, key=lambda group: group[0])


def seen_from_eye(assembly: Assembly, point: Array, positions: Array, near: float) -> NDArray[np.bool_]:
    """Whether a straight look at each image ends on the point after its bounces, shape (N,)."""
    if not len(positions):
        return np.zeros(0, dtype=bool)
    body = body_of(assembly)
    eye = assembly.eye
    lengths = np.linalg.norm(positions - eye, axis=1)
    ways = (positions - eye) / lengths[:, None]
    starts, lengths = np.tile(eye, (len(ways), 1)), lengths.copy()
    able = np.ones(len(ways), dtype=bool)
    heights = body.heights(eye)
    if (heights < 0).any():
        rates = ways @ body.normals.T
        with np.errstate(divide="ignore", invalid="ignore"):
            times = np.where(heights < 0, -heights / rates, 0.0)
        face = times.argmax(axis=1)
        enter = times[np.arange(len(ways)), face]
        starts = eye + enter[:, None] * ways
        able = (times >= 0).all(axis=1) & np.isfinite(enter) & (face >= body.mirrors)
        able &= (body.heights(starts) >= -1e-7).all(axis=1) & (enter < lengths)
        window = window_planes(assembly, body)
        through = (starts @ window[:, :3].T >= window[:, 3]).all(axis=1)
        able &= np.where(face == body.mouth, through, not outside_mouth(assembly, eye))
        starts, lengths = np.where(able[:, None], starts, point), np.where(able, lengths - enter, 0.0)
    paths = follow(body, starts, ways, lengths=lengths)
    arrived = np.linalg.norm(paths.ends - point, axis=1) < near
    return able & arrived & (paths.faces < 0)


def two_mirror_rule(degrees: float, on_bisector: bool) -> int:
    """Images that the rule gives for two mirrors (common practice, no source).

    360/θ − 1 where 360/θ is even; where it is odd, 360/θ − 1 with the object on the bisector and 360/θ off it;
    where it is no whole number, its integer part.
    """
    parts = 360 / degrees
    whole = round(parts)
    if abs(parts - whole) > 1e-9 * whole:
        return math.floor(parts)
    if whole % 2 == 0 or on_bisector:
        return whole - 1
    return whole


def _rule(assembly: Assembly, spot: Array, count: int) -> tuple[int | None, list[str]]:
    if assembly.kind != "wedge":
        return None, []
    heights = assembly.heights(spot)
    on_bisector = bool(abs(heights[0] - heights[1]) < ON_BISECTOR * max(1.0, abs(heights).max()))
    rule = two_mirror_rule(math.degrees(assembly.dihedrals[0, 1]), on_bisector)
    notes = []
    if count != rule:
        notes.append(
            f"the rule of two mirrors gives {rule}; from this place light finds {count}, for 360° is no whole"
            " number of sectors and the object's place decides"
        )
    return rule, notes


def _place_note(point: Any) -> list[str]:
    return [] if point is not None else ["counted for a place on the object that is on no plane of symmetry"]
