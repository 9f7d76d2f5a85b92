"""Mirrors that share a direction: the cross-section of the tube, with the images of what is between them."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Drawing, Faces, Key, Label, Line, Points, Role
from mirrorlab.drawing.ordering import cut_loop
from mirrorlab.drawing.space import SpaceOptions
from mirrorlab.mirrors import Arrangement, Finding

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

WINDOW = 7.4
"""Radius of what is shown; the mirrors stand at distance 1 from the middle of the region."""

FAR = 60.0
"""A region within this half side is bounded; none of three mirrors with angles of a degree or more is larger."""

SIDES = 96
"""Straight pieces of the rim of the round window through which images that tile are seen."""

STRIP = 2.0
"""Half length of a region that has no end of its own, e.g. between two parallel mirrors."""

MOST_CELLS = 260
"""Most images of the region: about what fills the window for the smallest."""

MOST_LINES = 90
"""Most generated mirrors drawn where the images overlap."""

SEED = np.array([0.34, 0.13])
"""Where the seed stands, off the middle so that its images show how they are turned."""

SAME = 1e-6
"""Transformations that agree to this are one; rounding over a few hundred reflections stays below 1e-12."""


@dataclass(frozen=True, slots=True, eq=False)
class Moves:
    """Turns (N, d, d), shifts (N, d) and number of reflections (N,) of the images met."""

    turn: Array
    shift: Array
    depth: Ints


def tube_drawing(arrangement: Arrangement, finding: Finding, options: SpaceOptions) -> Drawing:
    """The mirrors at equal distances from a middle, and their images as far as the window reaches.

    Angles alone do not say how far apart the mirrors stand; three that close a triangle are settled up to scale,
    others are drawn at equal distances.
    """
    normals = arrangement.normals
    assert normals is not None
    if normals.shape[1] > 3:
        msg = f"mirrors that fill {normals.shape[1]} dimensions have no picture in space"
        return Drawing(title="Mirrors that never meet in a point", notes=(msg,))
    if normals.shape[1] == 3:
        from mirrorlab.drawing.cell import cell_drawing

        return cell_drawing(arrangement)
    normals = np.column_stack([normals, np.zeros((len(normals), 2 - normals.shape[1]))])
    return _section(arrangement, finding, normals, options)


def region_outline(normals: Array, half: float) -> Array:
    """Corners of the region at distance 1 from all mirrors, cut off at a square of this half side, shape (k, 2)."""
    square = half * np.array([[-1.0, -1, 0], [1, -1, 0], [1, 1, 0], [-1, 1, 0]])
    for normal in normals:
        square = cut_loop(square, square[:, :2] @ normal + 1.0)
    keep = np.linalg.norm(square - np.roll(square, 1, axis=0), axis=1) > 1e-9
    return np.asarray(square[keep][:, :2])


def images_of(normals: Array, reach: float, count: int, reflections: int = 10_000) -> Moves:
    """The moves that reflections in mirrors at distance 1 from the origin generate, nearest in reflections first.

    Parameters
    ----------
    normals : ndarray, shape (n, d)
        Mirror i is where ``normals[i] @ x == -1``.
    reach : float
        Only moves that keep the origin's image within this distance are followed.
    count, reflections : int
        Most moves, and most reflections.
    """
    d = normals.shape[1]
    turns, shifts, depth = [np.eye(d)], [np.zeros(d)], [0]
    seen = {_mark(turns[0], shifts[0])}
    at = 0
    while at < len(turns) and len(turns) < count and depth[at] < reflections:
        for normal in normals:
            reflection = np.eye(d) - 2 * np.outer(normal, normal)
            turn = turns[at] @ reflection
            shift = shifts[at] - 2 * turns[at] @ normal
            mark = _mark(turn, shift)
            if np.linalg.norm(shift) <= reach and mark not in seen and len(turns) < count:
                seen.add(mark)
                turns.append(turn)
                shifts.append(shift)
                depth.append(depth[at] + 1)
        at += 1
    return Moves(np.array(turns), np.array(shifts), np.array(depth))


def _mark(turn: Array, shift: Array) -> tuple[int, ...]:
    values = np.concatenate([turn.ravel(), shift])
    return tuple(np.round(values / SAME).astype(np.int64).tolist())


def _section(arrangement: Arrangement, finding: Finding, normals: Array, options: SpaceOptions) -> Drawing:
    assert finding.tube is not None
    outline = region_outline(normals, FAR)
    bounded = bool(np.abs(outline).max() < FAR - 1e-9)
    outline = region_outline(normals, WINDOW if bounded else STRIP)
    fits = bool(np.abs(outline).max() < WINDOW - 1e-9)
    tiles = finding.tube.tiling == "once"
    reflections = 10_000 if tiles else 4
    moves = images_of(
        normals,
        WINDOW + (float(np.linalg.norm(outline, axis=1).max()) if bounded else -1.0),
        MOST_CELLS,
        reflections,
    )
    faces, lines = _cells(outline, moves, bounded) if tiles else _overlap(outline, normals, moves, options)
    for i, normal in enumerate(normals):
        lines = (*lines, *_typed(outline, normal, i))
    notes = [_note(finding, moves, tiles)]
    if not fits:
        notes.append("the region between the mirrors reaches beyond the picture")
    if not bounded or len(normals) != 3:
        notes.append("angles do not say how far apart these mirrors stand; they are drawn at equal distances")
    return Drawing(
        title="Cross-section of the tube",
        faces=faces if options.chambers else (),
        lines=lines,
        points=_seeds(moves) if options.images else (),
        labels=_tags(arrangement, outline, normals),
        flat=True,
        frame="x and y across the tube; the mirrors stand at distance 1 from the origin",
        notes=tuple(notes),
    )


def _note(finding: Finding, moves: Moves, tiles: bool) -> str:
    if tiles:
        return f"{len(moves.depth)} of endlessly many images: those near the middle"
    how = "subdivided" if finding.tube is not None and finding.tube.tiling == "subdivided" else "overlapping"
    return f"{len(moves.depth)} {how} images, up to {int(moves.depth.max())} reflections away"


def _flat(places: Array) -> Array:
    return np.column_stack([places, np.zeros(len(places))])


def _cells(outline: Array, moves: Moves, bounded: bool) -> tuple[tuple[Faces, ...], tuple[Line, ...]]:
    """Images of the region by parity, and their outlines."""
    corners = np.einsum("kij,vj->kvi", moves.turn, outline) + moves.shift[:, None]
    loops = [_within_window(loop) if bounded else loop for loop in corners]
    shown = np.array([len(loop) >= 3 for loop in loops])
    faces = []
    for role, chosen in (
        (Role.CHAMBER_EVEN, (moves.depth % 2 == 0) & (moves.depth > 0)),
        (Role.CHAMBER_ODD, moves.depth % 2 == 1),
        (Role.REGION, moves.depth == 0),
    ):
        vertices, triangles, keys, first = [], [], [], 0
        for k in np.flatnonzero(chosen & shown).tolist():
            n = len(loops[k])
            fan = np.arange(1, n - 1)
            pattern = first + np.stack([np.zeros_like(fan), fan, fan + 1], axis=1)
            triangles.append(pattern if np.linalg.det(moves.turn[k]) > 0 else pattern[:, ::-1])
            vertices.append(loops[k])
            keys += [("chamber", k)] * (n - 2)
            first += n
        if vertices:
            places = _flat(np.concatenate(vertices))
            faces.append(Faces(role, places, np.concatenate(triangles), tuple(keys)))
    sides = [np.stack([loop, np.roll(loop, -1, axis=0)], axis=1) for loop in loops if len(loop) >= 3]
    ends = np.concatenate(sides).reshape(-1, 2)
    return tuple(faces), (Line(Role.GENERATED_MIRROR, _flat(ends), ("generated", 0), apart=True, weight=0.8),)


def _within_window(loop: Array) -> Array:
    """The part of a convex loop that is seen through the round window."""
    if (np.einsum("ij,ij->i", loop, loop) <= WINDOW**2).all():
        return loop
    corners = loop.tolist()
    area = sum(p[0] * q[1] - p[1] * q[0] for p, q in zip(corners, corners[1:] + corners[:1], strict=True))
    points: list[tuple[float, float]] = []
    leaves: list[bool] = []
    for (px, py), (qx, qy) in zip(corners, corners[1:] + corners[:1], strict=True):
        dx, dy = qx - px, qy - py
        a, b, c = dx * dx + dy * dy, px * dx + py * dy, px * px + py * py - WINDOW**2
        root = b * b - a * c
        if root <= 0:
            continue
        t0, t1 = max(0.0, (-b - math.sqrt(root)) / a), min(1.0, (-b + math.sqrt(root)) / a)
        if t0 >= t1:
            continue
        points += [(px + t0 * dx, py + t0 * dy), (px + t1 * dx, py + t1 * dy)]
        leaves += [False, t1 < 1.0]
    if not points:
        return loop[:0]
    seen: list[tuple[float, float]] = []
    for k, point in enumerate(points):
        seen.append(point)
        if leaves[k]:
            seen += _along_rim(point, points[(k + 1) % len(points)], area > 0)
    result = np.array(seen)
    return result[np.linalg.norm(result - np.roll(result, 1, axis=0), axis=1) > 1e-9]


def _along_rim(start: tuple[float, float], end: tuple[float, float], left: bool) -> list[tuple[float, float]]:
    """Points between two of the window's rim, to the left or to the right about its middle."""
    low = math.atan2(start[1], start[0])
    turn = (math.atan2(end[1], end[0]) - low) % (2 * math.pi)
    turn = turn if left else turn - 2 * math.pi
    count = int(abs(turn) * SIDES / (2 * math.pi))
    angles = [low + turn * (k + 1) / (count + 1) for k in range(count)]
    return [(WINDOW * math.cos(t), WINDOW * math.sin(t)) for t in angles]


def _overlap(
    outline: Array, normals: Array, moves: Moves, options: SpaceOptions
) -> tuple[tuple[Faces, ...], tuple[Line, ...]]:
    """The region alone, with the generated mirrors that cross the window and the outlines of its first images."""
    n = len(outline)
    fan = np.arange(1, n - 1)
    triangles = np.stack([np.zeros_like(fan), fan, fan + 1], axis=1)
    faces = (Faces(Role.REGION, _flat(outline), triangles, (("chamber", 0),)),)
    found: dict[tuple[int, ...], Array] = {}
    for turn, shift in zip(moves.turn, moves.shift, strict=True):
        for normal in normals:
            direction = turn @ normal
            offset = float(direction @ shift) - 1.0
            if abs(offset) >= WINDOW or len(found) >= MOST_LINES:
                continue
            sign = 1 if direction[int(np.abs(direction).argmax())] > 0 else -1
            mark = tuple(np.round(np.array([*direction, offset]) * sign / SAME).astype(np.int64).tolist())
            half = np.sqrt(WINDOW**2 - offset**2)
            along = np.array([-direction[1], direction[0]])
            found.setdefault(
                mark, np.array([offset * direction - half * along, offset * direction + half * along])
            )
    if not options.mirrors or not found:
        return faces, ()
    ends = _flat(np.concatenate(list(found.values())))
    return faces, (Line(Role.GENERATED_MIRROR, ends, ("generated", 0), apart=True, weight=0.7),)


def _typed(outline: Array, normal: Array, index: int) -> tuple[Line, ...]:
    """The side of the region that lies in a typed mirror."""
    on = np.abs(outline @ normal + 1.0) < 1e-9
    for k in range(len(outline)):
        following = (k + 1) % len(outline)
        if on[k] and on[following]:
            side = np.array([outline[k], outline[following]])
            return (Line(Role.TYPED_MIRROR, _flat(side), ("mirror", index), index, weight=1.4),)
    return ()


def _tags(arrangement: Arrangement, outline: Array, normals: Array) -> tuple[Label, ...]:
    labels = []
    for i, normal in enumerate(normals):
        on = np.flatnonzero(np.abs(outline @ normal + 1.0) < 1e-9)
        middle = outline[on].mean(axis=0) if len(on) else -normal
        place = _flat((middle - 0.5 * normal)[None])[0]
        labels.append(Label(arrangement.letters[i], place, Role.TYPED_MIRROR, ("mirror", i), i))
    return tuple(labels)


def _seeds(moves: Moves) -> tuple[Points, ...]:
    places = _flat(np.einsum("kij,j->ki", moves.turn, SEED) + moves.shift)
    seen = np.linalg.norm(places, axis=1) < WINDOW
    blocks = [Points(Role.SEED, places[:1], (("image", 0),))]
    for role, parity in ((Role.IMAGE_EVEN, 0), (Role.IMAGE_ODD, 1)):
        which = np.flatnonzero((moves.depth % 2 == parity) & (moves.depth > 0) & seen)
        if len(which):
            keys: tuple[Key, ...] = tuple(("image", k) for k in which.tolist())
            blocks.append(Points(role, places[which], keys))
    return tuple(blocks)
