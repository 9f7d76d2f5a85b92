"""Higher ranks on paper: mirrors and images projected to the plane that a Coxeter element turns.

References
----------
.. [1] J. E. Humphreys, *Reflection Groups and Coxeter Groups* (1990), section 3.17: the Coxeter plane.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Key, Label, Line, Points, Role
from mirrorlab.mirrors import Arrangement, Finding, Orbit, ReflectionGroup

Array = NDArray[np.float64]

MOST_IMAGES = 6000
"""Most images drawn: E8's 240 and B6's 46,080 alike become a disc beyond it."""

MOST_EDGES = 2500
"""Most edges drawn between an image and its neighbours across the chamber's walls; more make a grey disc."""

SAME_LENGTH = 1e-7
"""Part of the images' distance from the middle by which lengths or places differ and are one; rounding is 1e-13."""

NO_LENGTH = 1e-9
"""A unit normal that is seen shorter than this stands square to the plane and points nowhere in it."""

REAL = 1e-6
"""An eigenvalue with a smaller imaginary part turns no plane; the least true one is sin(2π/h) with h ≤ 720."""


def coxeter_axes(group: ReflectionGroup) -> Array:
    """Two orthonormal vectors that span the plane, shape (2, d).

    The product of all simple reflections turns this plane by 2π/h, h being the largest Coxeter number of its parts.
    Where every part is a single mirror there is no such plane, and the plane of two mirrors' normals serves.
    """
    product = np.eye(group.dimension)
    for normal in group.simple:
        product = product @ (np.eye(group.dimension) - 2 * np.outer(normal, normal))
    values, vectors = np.linalg.eig(product)
    angles = np.angle(values)
    turning = np.flatnonzero(np.abs(values.imag) > REAL)
    turning = turning[angles[turning] > 0]
    if not len(turning):
        rows = np.linalg.qr(np.vstack([group.simple, np.eye(group.dimension)]).T)[0].T
        return np.asarray(rows[:2])
    chosen = vectors[:, turning[int(angles[turning].argmin())]]
    rows = np.stack([chosen.real, chosen.imag])
    rows /= np.linalg.norm(rows, axis=1, keepdims=True)
    rows[1] -= (rows[0] @ rows[1]) * rows[0]
    rows[1] /= np.linalg.norm(rows[1])
    return np.asarray(rows)


def coxeter_drawing(arrangement: Arrangement, finding: Finding, orbit: Orbit | None = None) -> Drawing:
    """Images of the seed, and the mirrors' normals as ticks about them, projected to the Coxeter plane.

    Keys as in `space_drawing`.
    """
    group = finding.group
    if group is None or group.rank < 2:
        reason = finding.sentence if group is None else "One mirror has no Coxeter plane"
        return Drawing(title="Coxeter plane", notes=(reason,), flat=True)
    axes = coxeter_axes(group)
    notes: list[str] = []
    lines: tuple[Line, ...] = ()
    points: tuple[Points, ...] = ()
    reach = 1.0
    if orbit is not None and len(orbit.points):
        shown = min(len(orbit.points), MOST_IMAGES)
        if shown < len(orbit.points):
            notes.append(f"the first {shown:,} of {len(orbit.points):,} images are drawn")
        places = orbit.points[:shown] @ axes.T
        reach = max(float(np.linalg.norm(places, axis=1).max()), 1e-9)
        places = places / reach
        lines = _edges(group, orbit, places, notes)
        points = _images(orbit, places)
    ring, labels = _mirrors(arrangement, group, axes)
    h = max(group.coxeter_numbers)
    return Drawing(
        title="Coxeter plane",
        faces=(),
        lines=(*ring, *lines),
        points=points,
        labels=labels,
        flat=True,
        frame=f"orthogonal projection to the plane that a Coxeter element turns by 1/{h} of a turn",
        notes=tuple(notes),
    )


def _flat(places: Array) -> Array:
    return np.column_stack([places, np.zeros(len(places))])


def _edges(group: ReflectionGroup, orbit: Orbit, places: Array, notes: list[str]) -> tuple[Line, ...]:
    """Edges between images that one reflection in a wall of their chambers exchanges."""
    shown = len(places)
    count = shown * group.rank // 2
    if shown < len(orbit.points) or count > MOST_EDGES:
        notes.append("edges are left out: there are too many")
        return ()
    i, j = _neighbours(group, orbit.points)
    if len(i) > MOST_EDGES:
        notes.append("edges are left out: there are too many")
    if not 0 < len(i) <= MOST_EDGES:
        return ()
    ends = np.stack([places[i], places[j]], axis=1).reshape(-1, 2)
    return (Line(Role.GENERATED_MIRROR, _flat(ends), ("edge", 0), apart=True, weight=0.55),)


def _neighbours(group: ReflectionGroup, points: Array) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Pairs of images g·s and g·(s reflected in a wall of the chamber).

    They are as far apart as s is from its reflection, but so may others be. The foot of s on the wall lies in the
    chamber, and of all images only those two are so near to it: so the middle of a pair must fold onto that foot.
    """
    seed = group.fold(points[:1])[0][0]
    square = np.einsum("ij,ij->i", points, points)
    apart = np.sqrt(np.maximum(square[:, None] + square[None] - 2 * points @ points.T, 0))
    same = SAME_LENGTH * float(np.sqrt(square.max()))
    found = np.zeros(apart.shape, dtype=bool)
    for normal, height in zip(group.simple, group.simple @ seed, strict=True):
        if height <= same:
            continue
        i, j = np.nonzero(np.triu(np.abs(apart - 2 * height) < same, 1))
        middles, _ = group.fold(0.5 * (points[i] + points[j]))
        fits = np.abs(middles - (seed - height * normal)).max(axis=1, initial=0.0) < same
        found[i[fits], j[fits]] = True
    i, j = np.nonzero(found)
    return i, j


def _images(orbit: Orbit, places: Array) -> tuple[Points, ...]:
    blocks = [Points(Role.SEED, _flat(places[:1]), (("image", 0),))]
    for role, parity in ((Role.IMAGE_EVEN, 0), (Role.IMAGE_ODD, 1)):
        which = np.flatnonzero(orbit.parity[: len(places)] == parity)
        which = which[which > 0]
        if len(which):
            keys: tuple[Key, ...] = tuple(("image", k) for k in which.tolist())
            blocks.append(Points(role, _flat(places[which]), keys))
    return tuple(blocks)


INNER, OUTER, TAG = 1.1, 1.22, 1.34
"""Mirrors' ticks stand in a ring about the images; the letters outside it."""


def _mirrors(
    arrangement: Arrangement, group: ReflectionGroup, axes: Array
) -> tuple[tuple[Line, ...], tuple[Label, ...]]:
    """A tick for each mirror in the direction of its normal; longer where the normal lies nearer to the plane."""
    flat = group.mirrors @ axes.T
    lengths = np.linalg.norm(flat, axis=1)
    flat, lengths = flat[lengths > NO_LENGTH], lengths[lengths > NO_LENGTH]
    unit = flat / np.maximum(lengths[:, None], 1e-12)
    longest = max(float(lengths.max()), 1e-12)
    outer = INNER + (OUTER - INNER) * lengths / longest
    ends = np.stack([INNER * unit, outer[:, None] * unit], axis=1)
    ends = np.concatenate([ends, -ends]).reshape(-1, 2)
    t = np.linspace(0, 2 * np.pi, 181)[:-1]
    rim = INNER * np.stack([np.cos(t), np.sin(t)], axis=1)
    lines = [
        Line(Role.GUIDE, _flat(rim), ("rim", 0), closed=True),
        Line(Role.GENERATED_MIRROR, _flat(ends), ("generated", 0), apart=True),
    ]
    labels = []
    normals = arrangement.normals if arrangement.normals is not None else np.zeros((0, group.dimension))
    taken: list[Array] = []
    for i, (letter, normal) in enumerate(zip(arrangement.letters, normals @ axes.T, strict=True)):
        size = float(np.linalg.norm(normal))
        if size < NO_LENGTH:
            continue
        ray = normal / size
        tick = np.stack([INNER * ray, (INNER + (OUTER - INNER) * size / longest) * ray])
        lines.append(Line(Role.TYPED_MIRROR, _flat(tick), ("mirror", i), i, weight=1.3))
        radius = TAG
        while any(np.linalg.norm(radius * ray - place) < 0.12 for place in taken):
            radius += 0.12
        taken.append(radius * ray)
        labels.append(Label(letter, _flat((radius * ray)[None])[0], Role.TYPED_MIRROR, ("mirror", i), i))
    return tuple(lines), tuple(labels)
