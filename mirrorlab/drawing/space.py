"""The arrangement in space: the sphere cut into chambers, its mirrors, the seed and its images."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Faces, Key, Label, Line, Points, Role
from mirrorlab.drawing.placing import placed
from mirrorlab.drawing.sphere import (
    arc,
    circles,
    cone_corners,
    cross,
    disc_quarters,
    plane_axes,
    spherical_triangles,
)
from mirrorlab.mirrors import Arrangement, Finding, Orbit, ReflectionGroup

Array = NDArray[np.float64]

RIM = 1.13
"""Radius of a typed mirror's disc, in radii of the sphere."""

RIM_WEIGHT = 0.5
"""The rim is drawn lighter than the mirror's circle on the sphere, and without a pattern: gaps would fray it."""

TAG = 1.215
"""Where a mirror's letter stands."""

LINE_LIFT = 1.0006
"""Lines on the sphere stand out by this, so that the surface does not swallow them."""

_TURNS = np.radians([0, 12, -12, 24, -24, 36, -36])
TAG_TURNS = (
    np.concatenate([np.cos(_TURNS), -np.cos(_TURNS)])[:, None],
    np.concatenate([np.sin(_TURNS), -np.sin(_TURNS)])[:, None],
)
"""Where along its rim a letter may stand, from the outline as first looked at: cosines and sines."""

TAG_ROOM = 0.45
"""Letters so far apart are far enough, in radii of the sphere."""

WANTED_TRIANGLES = 5000
"""About so many small triangles make up the sphere: smooth to the eye, and sent to the screen in a few ms."""

MOST_DRAWN = 20_000
"""Most images drawn as points; beyond it they only make the sphere grey."""

MOST_CHAMBERS = 3000
"""Most chambers drawn; a picture 1000 pixels wide has no room to tell more apart."""

INSIDE = 1e-9
"""A chamber's middle this far on the right side of a mirror counts as inside; rounding is about 1e-15."""


@dataclass(frozen=True, slots=True)
class SpaceOptions:
    """What is drawn.

    Attributes
    ----------
    chambers : bool
        The sphere with its chambers; without it one looks through to the discs.
    mirrors : bool
        Great circles of the generated mirrors. Typed ones are always drawn.
    discs, images, region : bool
        The typed mirrors' discs, the images of the seed, the outline of the typed region.
    first : int
        How many images of endlessly many are drawn.
    flat : bool
        For arrangements of rank 2: the view straight on.
    """

    chambers: bool = True
    mirrors: bool = True
    discs: bool = True
    images: bool = True
    region: bool = True
    first: int = 200
    flat: bool = False


DEFAULT = SpaceOptions()


def space_drawing(
    arrangement: Arrangement, finding: Finding, orbit: Orbit | None = None, options: SpaceOptions = DEFAULT
) -> Drawing:
    """The arrangement in space.

    Rank 3 shows the sphere, rank 1 and 2 mirrors through their common edge, a tube its cross-section. Higher
    ranks have no picture in space: see `mirrorlab.drawing.coxeterplane`.

    Parameters
    ----------
    arrangement, finding
    orbit : Orbit, optional
        Its images are drawn in their directions.

    Returns
    -------
    Drawing
        Keys: ("mirror", i) typed, ("generated", k) by row of ``finding.group.mirrors``, ("chamber", k) by element
        (the k-th image of a seed off all mirrors lies in chamber k), ("image", k) by row of the orbit.
    """
    if arrangement.normals is None or finding.kind == "unbuildable":
        return Drawing(title="No planes in space have these angles", notes=(finding.sentence,))
    if finding.kind == "tube":
        from mirrorlab.drawing.prism import tube_drawing

        return tube_drawing(arrangement, finding, options)
    if finding.rank > 3:
        msg = f"rank {finding.rank} has no picture in space; look at the Coxeter plane"
        return Drawing(title=f"Rank {finding.rank}", notes=(msg,))
    if finding.group is None:
        from mirrorlab.drawing.openspace import open_drawing

        return open_drawing(arrangement, finding, options)
    if finding.rank < 3:
        from mirrorlab.drawing.flat import flat_drawing, wedge_drawing

        make = flat_drawing if options.flat else wedge_drawing
        return make(arrangement, finding, orbit, options)
    arrangement, group, orbit = placed(arrangement, finding.group, orbit, finding.rank)
    assert group is not None
    return _sphere_drawing(arrangement, group, orbit, options)


def _sphere_drawing(
    arrangement: Arrangement, group: ReflectionGroup, orbit: Orbit | None, options: SpaceOptions
) -> Drawing:
    notes: list[str] = []
    solid = options.chambers and group.order <= MOST_CHAMBERS
    if options.chambers and not solid:
        notes.append(f"{group.order:,} chambers are too many to draw; the mirrors alone are shown")
    normals = arrangement.normals
    assert normals is not None
    corners = cone_corners(normals)
    faces = chamber_faces(group, arrangement) if solid else ()
    lines = mirror_lines(group, arrangement) if options.mirrors else ()
    lines = (*lines, *typed_lines(arrangement, options.discs))
    if options.discs:
        faces = (*faces, *typed_discs(arrangement, 1.0 if solid else 0.0))
    if options.region and len(corners):
        lines = (*lines, region_outline(corners))
    points, note = image_points(orbit) if options.images and orbit is not None else ((), "")
    if note:
        notes.append(note)
    toward = best_side(corners.sum(axis=0) if len(corners) else group.corners.sum(axis=0))
    return Drawing(
        title="Mirrors in space",
        faces=faces,
        lines=lines,
        points=points,
        labels=mirror_tags(arrangement, toward),
        frame=arrangement.frame,
        notes=tuple(notes),
        toward=toward,
        seed_on="sphere",
    )


@lru_cache(maxsize=4)
def chamber_faces(group: ReflectionGroup, arrangement: Arrangement) -> tuple[Faces, ...]:
    """The sphere's chambers by parity, those of the typed region apart (role REGION, index 0 even, 1 odd).

    Kept for the last few groups: while a seed is dragged the same faces come back, and views send them once.
    """
    matrices, parity = group.elements()
    corners = np.einsum("kij,rj->kri", matrices, group.corners)
    steps = int(np.clip(math.isqrt(WANTED_TRIANGLES // len(matrices)), 4, 16))
    within = np.zeros(len(matrices), dtype=bool)
    if arrangement.normals is not None:
        within = (corners.sum(axis=1) @ arrangement.normals.T > INSIDE).all(axis=1)
    blocks = []
    for role, index, chosen in (
        (Role.CHAMBER_EVEN, -1, ~within & (parity == 0)),
        (Role.CHAMBER_ODD, -1, ~within & (parity == 1)),
        (Role.REGION, 0, within & (parity == 0)),
        (Role.REGION, 1, within & (parity == 1)),
    ):
        which = np.flatnonzero(chosen)
        if not len(which):
            continue
        vertices, triangles = spherical_triangles(corners[which], steps)
        keys: list[Key] = []
        for k in which.tolist():
            keys += [("chamber", k)] * steps**2
        blocks.append(Faces(role, vertices, triangles, tuple(keys), index))
    return tuple(blocks)


@lru_cache(maxsize=4)
def mirror_lines(group: ReflectionGroup, arrangement: Arrangement) -> tuple[Line, ...]:
    """Great circles of the mirrors that were not typed."""
    typed = arrangement.normals if arrangement.normals is not None else np.zeros((0, 3))
    fresh = np.ones(len(group.mirrors), dtype=bool)
    if len(typed):
        fresh = np.abs(group.mirrors @ typed.T).max(axis=1) < 1 - 1e-9
    which = np.flatnonzero(fresh)
    return tuple(
        Line(Role.GENERATED_MIRROR, points, ("generated", k), closed=True)
        for k, points in zip(which.tolist(), circles(group.mirrors[which], LINE_LIFT), strict=True)
    )


def typed_lines(arrangement: Arrangement, rims: bool) -> tuple[Line, ...]:
    """Great circles of the typed mirrors, and the rims of their discs."""
    assert arrangement.normals is not None
    normals = arrangement.normals
    lines = [
        Line(Role.TYPED_MIRROR, points, ("mirror", i), i, closed=True)
        for i, points in enumerate(circles(normals, LINE_LIFT, 180))
    ]
    for i, points in enumerate(circles(normals, RIM) if rims else ()):
        lines.append(
            Line(Role.TYPED_MIRROR, points, ("mirror", i), i, closed=True, weight=RIM_WEIGHT, plain=True)
        )
    return tuple(lines)


def typed_discs(arrangement: Arrangement, inner: float) -> tuple[Faces, ...]:
    """Discs of the typed mirrors, or rings when the ball fills their middle."""
    normals = arrangement.normals
    assert normals is not None
    vertices, triangles = disc_quarters(normals, inner, RIM)
    return tuple(
        Faces(Role.TYPED_MIRROR, quarter, triangles, (("mirror", i),), i)
        for i, disc in enumerate(vertices)
        for quarter in disc
    )


def region_outline(corners: Array) -> Line:
    """Outline of the typed region on the sphere."""
    sides = [
        arc(corners[k], corners[(k + 1) % len(corners)], LINE_LIFT + 0.0004)[:-1] for k in range(len(corners))
    ]
    return Line(Role.REGION, np.concatenate(sides), ("region", 0), closed=True)


def image_points(orbit: Orbit, scale: float | None = None) -> tuple[tuple[Points, ...], str]:
    """The seed and its images, in their directions on the unit sphere unless a scale is given, with a note."""
    positions = np.zeros((len(orbit.points), 3))
    positions[:, : orbit.points.shape[1]] = orbit.points
    size = float(np.linalg.norm(positions[0])) if scale is None else 1.0 / scale
    if size > 0:
        positions /= size
    shown = min(len(positions), MOST_DRAWN)
    note = "" if shown == len(positions) else f"the first {shown:,} of {len(positions):,} images are drawn"
    blocks = [Points(Role.SEED, positions[:1], (("image", 0),))]
    for role, parity in ((Role.IMAGE_EVEN, 0), (Role.IMAGE_ODD, 1)):
        which = np.flatnonzero(orbit.parity[:shown] == parity)
        which = which[which > 0]
        if len(which):
            keys = tuple(("image", k) for k in which.tolist())
            blocks.append(Points(role, positions[which], keys))
    return tuple(blocks), note


def best_side(middle: Array) -> Array:
    """Look from beside the region, a little lower than straight on, so that it sits above the middle."""
    azimuth = math.atan2(middle[1], middle[0]) - math.radians(14)
    elevation = math.atan2(middle[2], math.hypot(middle[0], middle[1]))
    elevation = min(math.radians(34), elevation - math.radians(14))
    elevation = max(math.radians(-34), elevation)
    return np.array(
        [
            math.cos(elevation) * math.cos(azimuth),
            math.cos(elevation) * math.sin(azimuth),
            math.sin(elevation),
        ]
    )


def mirror_tags(arrangement: Arrangement, toward: Array) -> tuple[Label, ...]:
    """A letter on each typed mirror's rim, where it stands at the outline as first looked at, well apart."""
    normals = arrangement.normals
    assert normals is not None
    side = cross(normals, np.broadcast_to(toward, normals.shape))
    flat = np.linalg.norm(side, axis=1) < 1e-6  # seen straight on: any place of the rim is at the outline
    side[flat] = plane_axes(normals[flat])[0]
    side /= np.linalg.norm(side, axis=1, keepdims=True)
    up = cross(side, normals)
    options = TAG_TURNS[0] * side[:, None] + TAG_TURNS[1] * up[:, None]
    liking = 0.2 * options @ toward + 0.1 * options[..., 2]
    placed = np.full((1, 3), 9.0)
    labels = []
    both = len(normals) <= 4
    for i, letter in enumerate(arrangement.letters):
        room = np.linalg.norm(options[i][:, None] - placed, axis=2).min(axis=1)
        best = options[i, int((np.minimum(room, TAG_ROOM) + liking[i]).argmax())]
        places = np.stack([best, -best])[: 2 if both else 1]
        placed = np.concatenate([placed, places])
        labels += [Label(letter, TAG * p, Role.TYPED_MIRROR, ("mirror", i), i) for p in places]
    return tuple(labels)
