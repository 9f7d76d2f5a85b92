"""Mirrors whose reflections never close: the typed ones, and the first of endlessly many images."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Faces, Key, Label, Line, Points, Role
from mirrorlab.drawing.placing import common_axes, placed
from mirrorlab.drawing.space import (
    LINE_LIFT,
    SpaceOptions,
    best_side,
    mirror_tags,
    region_outline,
    typed_discs,
    typed_lines,
)
from mirrorlab.drawing.sphere import circles, cone_corners, spherical_triangles
from mirrorlab.mirrors import Arrangement, Finding

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

SAME = 1e-6
"""Two images nearer than this are drawn as one; an open arrangement has images as near as one likes."""

MOST_CIRCLES = 24
"""Most generated mirrors drawn: those met first. Endlessly many would blacken the ball."""


def first_images(normals: Array, seed: Array, count: int) -> tuple[Array, Ints, Ints]:
    """The images of a seed that the fewest reflections lead to.

    Parameters
    ----------
    normals : ndarray, shape (n, d)
        Unit normals of mirrors through the origin.
    seed : ndarray, shape (d,)
    count : int
        How many, the seed included.

    Returns
    -------
    points : ndarray, shape (N, d)
    depth : ndarray of int, shape (N,)
    parent : ndarray of int, shape (N,)
    """
    points, depth, parent = [seed[None]], [np.zeros(1, dtype=np.int64)], [np.zeros(1, dtype=np.int64)]
    seen = {_mark(seed)}
    total, first = 1, 0
    while total < count and len(points[-1]):
        # All images of one depth at once, each in every mirror, in the order in which a person would write them.
        heights = points[-1] @ normals.T
        images = (points[-1][:, None] - 2 * heights[..., None] * normals).reshape(-1, len(seed))
        kept = []
        for k, mark in enumerate(_marks(images)):
            if mark not in seen and total + len(kept) < count:
                seen.add(mark)
                kept.append(k)
        which = np.array(kept, dtype=np.int64)
        parent.append(first + which // len(normals))
        depth.append(np.full(len(kept), len(points)))
        first, total = total, total + len(kept)
        points.append(images[which])
    return np.concatenate(points), np.concatenate(depth), np.concatenate(parent)


def _mark(point: Array) -> tuple[int, ...]:
    return _marks(point[None])[0]


def _marks(points: Array) -> list[tuple[int, ...]]:
    """Numbers by which two images are known to be one."""
    return [tuple(row) for row in np.round(points / SAME).astype(np.int64).tolist()]


def open_drawing(arrangement: Arrangement, finding: Finding, options: SpaceOptions) -> Drawing:
    """Typed mirrors of rank 2 or 3 that never close, with the first images of a point between them."""
    arrangement, _, _ = placed(arrangement, None, None, finding.rank)
    assert arrangement.normals is not None
    if finding.rank < 3:
        return _open_flat(arrangement, options)
    normals = arrangement.normals
    corners = cone_corners(normals)
    middle = corners.sum(axis=0) if len(corners) else normals.sum(axis=0)
    seed = middle / max(float(np.linalg.norm(middle)), 1e-12)
    points, depth, _ = first_images(normals, seed, options.first)
    mirrors = _first_mirrors(normals, MOST_CIRCLES)
    toward = best_side(seed)
    faces: tuple[Faces, ...] = (_ball(),) if options.chambers else ()
    lines: tuple[Line, ...] = ()
    if options.mirrors:
        lines = tuple(
            Line(Role.GENERATED_MIRROR, ring, ("generated", k), closed=True, weight=0.7)
            for k, ring in enumerate(circles(mirrors, LINE_LIFT))
        )
    lines = (*lines, *typed_lines(arrangement, options.discs))
    if options.discs:
        faces = (*faces, *typed_discs(arrangement, 1.0 if options.chambers else 0.0))
    if options.region and len(corners):
        lines = (*lines, region_outline(corners))
    return Drawing(
        title="Mirrors in space",
        faces=faces,
        lines=lines,
        points=_points(points, depth) if options.images else (),
        labels=mirror_tags(arrangement, toward),
        frame=arrangement.frame,
        notes=(_note(len(points), int(depth.max())),),
        toward=toward,
    )


def _note(count: int, reflections: int) -> str:
    return f"The first {count} of endlessly many images, up to {reflections} reflections away"


def _points(points: Array, depth: Ints) -> tuple[Points, ...]:
    blocks = [Points(Role.SEED, points[:1], (("image", 0),))]
    for role, parity in ((Role.IMAGE_EVEN, 0), (Role.IMAGE_ODD, 1)):
        which = np.flatnonzero((depth % 2 == parity) & (np.arange(len(points)) > 0))
        if len(which):
            keys: tuple[Key, ...] = tuple(("image", k) for k in which.tolist())
            blocks.append(Points(role, points[which], keys))
    return tuple(blocks)


def _first_mirrors(normals: Array, count: int) -> Array:
    """Mirrors that the fewest reflections make of the typed ones, without the typed ones themselves."""
    found = list(normals)
    at = 0
    while at < len(found) and len(found) < count + len(normals):
        for normal in normals:
            image = found[at] - 2 * (found[at] @ normal) * normal
            if np.abs(np.array(found) @ image).max() < 1 - SAME:
                found.append(image)
        at += 1
    return np.array(found[len(normals) : len(normals) + count]).reshape(-1, normals.shape[1])


def _ball() -> Faces:
    """The whole sphere as one face: no chambers cut it."""
    x, y, z = np.eye(3)
    corners = np.array([[sx * x, sy * y, sz * z] for sx in (1, -1) for sy in (1, -1) for sz in (1, -1)])
    vertices, triangles = spherical_triangles(corners, 16)
    _, first, same = np.unique(np.round(vertices, 9), axis=0, return_index=True, return_inverse=True)
    return Faces(Role.NET, vertices[first], same.ravel()[triangles].astype(np.int64), (("ball", 0),))


def _open_flat(arrangement: Arrangement, options: SpaceOptions) -> Drawing:
    assert arrangement.normals is not None
    axes = common_axes(arrangement.normals)
    normals = (arrangement.normals @ axes.T)[:, :2]
    rays = np.stack([normals[:, 1], -normals[:, 0]], axis=1)
    walls = [ray for pair in np.stack([rays, -rays], axis=1) for ray in pair if (normals @ ray > -1e-9).all()]
    middle = np.sum(walls, axis=0) if walls else normals.sum(axis=0)
    seed = 0.68 * middle / max(float(np.linalg.norm(middle)), 1e-12)
    points, depth, _ = first_images(normals, seed, min(options.first, 60))
    rim = np.linspace(0, 2 * np.pi, 121)[:-1]
    disc = _flat(np.stack([np.cos(rim), np.sin(rim)], axis=1))
    i = np.arange(120)
    table = Faces(
        Role.NET,
        np.concatenate([np.zeros((1, 3)), disc]),
        np.stack([np.zeros_like(i), i + 1, (i + 1) % 120 + 1], axis=1),
        (("disc", 0),),
    )
    lines = [Line(Role.GUIDE, disc, ("rim", 0), closed=True)]
    if options.mirrors:
        for k, normal in enumerate(_first_mirrors(normals, MOST_CIRCLES)):
            ray = np.array([[normal[1], -normal[0]], [-normal[1], normal[0]]])
            lines.append(Line(Role.GENERATED_MIRROR, _flat(ray), ("generated", k), weight=0.7))
    labels = []
    for k, ray in enumerate(rays):
        lines.append(Line(Role.TYPED_MIRROR, _flat(np.stack([-1.12 * ray, 1.12 * ray])), ("mirror", k), k))
        end = ray if not walls or (normals @ ray > -1e-9).all() else -ray
        place = _flat(1.235 * end[None])[0]
        labels.append(Label(arrangement.letters[k], place, Role.TYPED_MIRROR, ("mirror", k), k))
    return Drawing(
        title="Mirrors along their common edge",
        faces=(table,),
        lines=tuple(lines),
        points=_points(_flat(points), depth) if options.images else (),
        labels=tuple(labels),
        flat=True,
        frame=f"{arrangement.frame}; seen along the common edge",
        notes=(_note(len(points), int(depth.max())),),
    )


def _flat(places: Array) -> Array:
    return np.column_stack([places, np.zeros(len(places))])
