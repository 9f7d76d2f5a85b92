"""Mirrors through one common edge: the view straight on, and standing upright on a table of sectors."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Faces, Label, Line, Points, Role
from mirrorlab.drawing.placing import common_axes, placed
from mirrorlab.drawing.space import SpaceOptions, image_points
from mirrorlab.mirrors import Arrangement, Finding, Orbit, ReflectionGroup

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

SEED_RADIUS = 0.68
"""Where the images stand between the edge and the rim: only their direction matters."""

RIM = 1.12
TAG = 1.235
HEIGHT = 0.92
"""How high the mirrors stand on the table, in its radii."""

STEP = 0.07
"""Radians between points of an arc."""

MOST_LEAVES = 24
"""Most generated mirrors whose upright outlines are drawn; more would hide the table."""


def flat_drawing(
    arrangement: Arrangement, finding: Finding, orbit: Orbit | None, options: SpaceOptions
) -> Drawing:
    """The sectors, mirror lines, seed and images, looked at along the common edge. Keys as in `space_drawing`."""
    wheel = _Wheel(arrangement, finding, orbit)
    flat = np.eye(3)
    title = "Mirrors along their common edge" if finding.rank > 1 else "One mirror"
    lines = (wheel.rim(flat), *wheel.generated(flat, options), *wheel.typed(flat), *wheel.outline(flat))
    points, note = wheel.images(flat) if options.images else ((), "")
    return Drawing(
        title=title,
        faces=wheel.sectors(flat) if options.chambers else (),
        lines=lines,
        points=points,
        labels=wheel.tags(flat, TAG, 0.0),
        flat=True,
        frame=f"{arrangement.frame}; seen along the common edge",
        notes=(note,) if note else (),
        seed_on="plane",
    )


def wedge_drawing(
    arrangement: Arrangement, finding: Finding, orbit: Orbit | None, options: SpaceOptions
) -> Drawing:
    """Typed mirrors standing upright on the table of sectors. Keys as in `space_drawing`."""
    wheel = _Wheel(arrangement, finding, orbit)
    axes = wheel.axes
    faces = wheel.sectors(axes) if options.chambers else ()
    if options.discs:
        faces = (*faces, *wheel.leaves(axes))
    edge = Line(Role.AXIS, np.outer([-0.12, HEIGHT + 0.14], axes[2]), ("edge", 0))
    lines = (wheel.rim(axes), *wheel.generated(axes, options), *wheel.typed(axes), *wheel.outline(axes), edge)
    lines = (*lines, *wheel.leaf_edges(axes, options))
    points, note = wheel.images(axes) if options.images else ((), "")
    # Into the wedge, but not straight: both mirrors are seen from their silvered side, neither edge on.
    aside = wheel.middle - 0.4 * wheel.half
    middle = np.array([np.cos(aside), np.sin(aside), 0.66]) @ axes
    upright = abs(axes[2, 2]) > 1 - 1e-9
    return Drawing(
        title="Mirrors through their common edge" if finding.rank > 1 else "One mirror",
        faces=faces,
        lines=lines,
        points=points,
        labels=wheel.tags(axes, 0.72, HEIGHT + 0.15),
        frame=arrangement.frame,
        notes=(note,) if note else (),
        toward=middle / np.linalg.norm(middle),
        seed_on="plane" if upright else "",
    )


class _Wheel:
    """The parts of a picture of rank 1 or 2, in polar angles across the common edge."""

    def __init__(self, arrangement: Arrangement, finding: Finding, orbit: Orbit | None) -> None:
        assert finding.group is not None
        arrangement, group, self.orbit = placed(arrangement, finding.group, orbit, finding.rank)
        assert group is not None
        assert arrangement.normals is not None
        self.group: ReflectionGroup = group
        self.letters = arrangement.letters
        self.axes = common_axes(arrangement.normals)
        self.normals = (arrangement.normals @ self.axes.T)[:, :2]
        self.rays = np.array([_rays(normal) for normal in self.normals])
        corners = group.corners @ self.axes.T
        matrices, self.parity = group.elements()
        self.matrices = np.einsum("ai,kij,bj->kab", self.axes, matrices, self.axes)
        ends = np.einsum("kij,rj->kri", self.matrices, corners)[:, :, :2]
        self.spans = np.array([_span(end) for end in ends])
        centre = 0.5 * self.spans.sum(axis=1)
        towards = np.stack([np.cos(centre), np.sin(centre)], axis=1)
        self.within = (towards @ self.normals.T > 1e-9).all(axis=1)
        inside = towards[self.within].sum(axis=0) if self.within.any() else towards[0]
        self.middle = float(np.arctan2(inside[1], inside[0]))
        wide = np.diff(self.spans, axis=1).ravel()
        self.half = min(0.5 * float(wide[self.within].sum() if self.within.any() else wide[0]), 0.8)

    def sectors(self, axes: Array) -> tuple[Faces, ...]:
        """Chambers as sectors of a disc."""
        blocks = []
        for role, index, chosen in (
            (Role.CHAMBER_EVEN, -1, ~self.within & (self.parity == 0)),
            (Role.CHAMBER_ODD, -1, ~self.within & (self.parity == 1)),
            (Role.REGION, 0, self.within & (self.parity == 0)),
            (Role.REGION, 1, self.within & (self.parity == 1)),
        ):
            vertices, triangles, keys, first = [], [], [], 0
            for k in np.flatnonzero(chosen).tolist():
                rim = _arc(*self.spans[k])
                n = len(rim)
                i = np.arange(1, n)
                vertices.append(np.concatenate([np.zeros((1, 2)), rim]))
                triangles.append(first + np.stack([np.zeros_like(i), i, i + 1], axis=1))
                keys += [("chamber", k)] * (n - 1)
                first += n + 1
            if vertices:
                places = _lift(np.concatenate(vertices), axes)
                blocks.append(Faces(role, places, np.concatenate(triangles), tuple(keys), index))
        return tuple(blocks)

    def rim(self, axes: Array) -> Line:
        """The table's edge."""
        return Line(Role.GUIDE, _lift(_arc(0, 2 * np.pi)[:-1], axes), ("rim", 0), closed=True)

    def generated(self, axes: Array, options: SpaceOptions) -> tuple[Line, ...]:
        """Lines of the mirrors that were not typed."""
        if not options.mirrors:
            return ()
        return tuple(
            Line(Role.GENERATED_MIRROR, _lift(np.stack([-ray, ray]), axes), ("generated", k))
            for k, ray in self._fresh()
        )

    def _fresh(self) -> list[tuple[int, Array]]:
        found = []
        for k, normal in enumerate((self.group.mirrors @ self.axes.T)[:, :2]):
            if np.abs(self.normals @ normal).max(initial=0.0) < 1 - 1e-9:
                found.append((k, _rays(normal)[0]))
        return found

    def typed(self, axes: Array) -> tuple[Line, ...]:
        """Lines of the typed mirrors, through and a little beyond the rim."""
        return tuple(
            Line(Role.TYPED_MIRROR, _lift(np.stack([RIM * b, RIM * a]), axes), ("mirror", i), i)
            for i, (a, b) in enumerate(self.rays)
        )

    def outline(self, axes: Array) -> tuple[Line, ...]:
        """Outline of the typed region, where there is one."""
        if not self.within.any() or self.within.all():
            return ()
        spans = self.spans[self.within]
        around = np.angle(np.exp(1j * (0.5 * spans.sum(axis=1) - self.middle))) + self.middle
        half = 0.5 * np.diff(spans, axis=1).ravel()
        low, high = float((around - half).min()), float((around + half).max())
        points = np.concatenate([np.zeros((1, 2)), _arc(low, high)])
        return (Line(Role.REGION, _lift(points, axes), ("region", 0), closed=True),)

    def _walls(self, i: int) -> list[Array]:
        """The halves of a typed mirror that bound the region; both where neither does."""
        chosen = [ray for ray in self.rays[i] if (self.normals @ ray > -1e-9).all()]
        return chosen or list(self.rays[i])

    def leaves(self, axes: Array) -> tuple[Faces, ...]:
        """Typed mirrors as upright leaves from the common edge."""
        blocks = []
        for i in range(len(self.normals)):
            for ray in self._walls(i):
                loop = _leaf(ray, axes)
                fan = np.arange(1, len(loop) - 1)
                triangles = np.stack([np.zeros_like(fan), fan, fan + 1], axis=1)
                blocks.append(Faces(Role.TYPED_MIRROR, loop, triangles, (("mirror", i),), i))
        return tuple(blocks)

    def leaf_edges(self, axes: Array, options: SpaceOptions) -> tuple[Line, ...]:
        """Outlines of the leaves, and light ones of the generated mirrors'."""
        if not options.discs:
            return ()
        lines = [
            Line(Role.TYPED_MIRROR, _leaf(ray, axes)[1:], ("mirror", i), i, weight=0.7)
            for i in range(len(self.normals))
            for ray in self._walls(i)
        ]
        fresh = self._fresh()
        if options.mirrors and len(fresh) <= MOST_LEAVES:
            lines += [
                Line(Role.GUIDE, _leaf(side, axes)[1:], ("generated", k), weight=0.8)
                for k, ray in fresh
                for side in (ray, -ray)
            ]
        return tuple(lines)

    def images(self, axes: Array) -> tuple[tuple[Points, ...], str]:
        """The seed and its images, in their directions across the edge."""
        if self.orbit is None:
            return (), ""
        across = (self.orbit.points @ self.axes.T)[:, :2]
        lengths = np.linalg.norm(across, axis=1, keepdims=True)
        across = SEED_RADIUS * across / np.maximum(lengths, 1e-300)
        return image_points(replace(self.orbit, points=_lift(across, axes)), scale=1.0)

    def tags(self, axes: Array, out: float, height: float) -> tuple[Label, ...]:
        """Letters of the typed mirrors, on the halves that bound the region."""
        return tuple(
            Label(letter, out * ray @ axes[:2] + height * axes[2], Role.TYPED_MIRROR, ("mirror", i), i)
            for i, letter in enumerate(self.letters)
            for ray in self._walls(i)[:1]
        )


def _rays(normal: Array) -> tuple[Array, Array]:
    """The two unit directions along a line with this normal."""
    unit = normal / np.linalg.norm(normal)
    ray = np.array([unit[1], -unit[0]])
    return ray, -ray


def _span(ends: Array) -> Array:
    """Polar angles, low and high, of a sector between two directions, or of the half-plane about one."""
    if len(ends) == 1:
        centre = np.arctan2(ends[0, 1], ends[0, 0])
        return np.array([centre - 0.5 * np.pi, centre + 0.5 * np.pi])
    low = np.arctan2(ends[0, 1], ends[0, 0])
    wide = np.angle(np.exp(1j * (np.arctan2(ends[1, 1], ends[1, 0]) - low)))
    return np.array([low, low + wide]) if wide > 0 else np.array([low + wide, low])


def _arc(low: float, high: float) -> Array:
    t = np.linspace(low, high, max(2, int(np.ceil((high - low) / STEP)) + 1))
    return np.stack([np.cos(t), np.sin(t)], axis=1)


def _lift(places: Array, axes: Array) -> Array:
    return np.asarray(places @ axes[:2])


def _leaf(ray: Array, axes: Array) -> Array:
    """Outline of an upright mirror: up the common edge, over, and down a rounded outer side."""
    t = np.linspace(0.5 * np.pi, 0, 14)
    corner = 0.22
    out = RIM - corner + corner * np.cos(t)
    up = HEIGHT - corner + corner * np.sin(t)
    across = np.concatenate([[0.0, 0.0], out, [RIM]])
    along = np.concatenate([[0.0, HEIGHT], up, [0.0]])
    return np.outer(across, ray @ axes[:2]) + np.outer(along, axes[2])
