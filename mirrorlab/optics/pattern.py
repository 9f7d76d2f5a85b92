"""Drawn objects of our own: leaded lantern glass, a lantern globe, a pennant that shows handedness, a ruled card."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Bytes = NDArray[np.uint8]

SEED = 11
"""Of the chance that sets and tints the shards: chosen by eye."""

SIDE = 768
"""Pixels along a drawn card."""

GLASS = (
    "#F6B23C",
    "#FFE0A0",
    "#D9432F",
    "#F07F8C",
    "#12797F",
    "#7AD0C4",
    "#27489E",
    "#86B5E8",
    "#6D3A8C",
    "#77A846",
    "#FFF4DC",
)
"""Tints of the shards, warm to cool and back."""

LEAD = "#1B1714"


class PatternError(ValueError):
    """A pattern was asked for that is not there."""


def drawn(name: str) -> Bytes:
    """Return the pixels of a pattern, shape (h, w, 3 or 4).

    Raises
    ------
    PatternError
        No pattern of that name.
    """
    if name not in PATTERNS:
        msg = f"pattern {name!r}: accepted are {', '.join(repr(known) for known in PATTERNS)}"
        raise PatternError(msg)
    return _drawn(name)


@lru_cache(maxsize=8)
def _drawn(name: str) -> Bytes:
    pixels = np.round(255 * np.clip(PATTERNS[name](), 0, 1)).astype(np.uint8)
    pixels.setflags(write=False)
    return pixels


def _rgb(colour: str) -> Array:
    return np.array([int(colour[i : i + 2], 16) for i in (1, 3, 5)]) / 255.0


def _grid(width: int, height: int) -> tuple[Array, Array]:
    # x to the right and y up, both −1 … 1 across the shorter side.
    scale = min(width, height) / 2
    x = (np.arange(width) + 0.5 - width / 2) / scale
    y = (height / 2 - np.arange(height) - 0.5) / scale
    return np.meshgrid(x, y)


def _cover(picture: Array, colour: Array | str, part: Array) -> Array:
    shade = _rgb(colour) if isinstance(colour, str) else colour
    return picture + (shade - picture) * np.clip(part, 0, 1)[..., None]


def _lead_and_cells(x: Array, y: Array, seeds: Array, step: float) -> tuple[NDArray[np.int32], Array]:
    """Nearest seed of each pixel, and how far the pixel is from the border to the next one's cell.

    `seeds` has shape (n, n, 2): seed (i, j) is near ``step`` times (j − n//2, i − n//2).
    """
    n = len(seeds)
    spots = seeds.reshape(-1, 2).astype(np.float32)
    row = np.clip(np.round(y / step).astype(np.int32) + n // 2, 2, n - 3)
    column = np.clip(np.round(x / step).astype(np.int32) + n // 2, 2, n - 3)
    middle, across, along = row * n + column, x.astype(np.float32), y.astype(np.float32)
    best = np.full(x.shape, np.inf, dtype=np.float32)
    second, cell, other = best.copy(), middle.copy(), middle.copy()
    for i in range(-2, 3):
        for j in range(-2, 3):
            number = middle + (i * n + j)
            square = (across - spots[number, 0]) ** 2 + (along - spots[number, 1]) ** 2
            closer = square < best
            between = (square < second) & ~closer
            np.copyto(other, cell, where=closer)
            np.copyto(second, best, where=closer)
            np.copyto(cell, number, where=closer)
            np.copyto(best, square, where=closer)
            np.copyto(other, number, where=between)
            np.copyto(second, square, where=between)
    apart = np.linalg.norm(spots[cell] - spots[other], axis=-1)
    return cell, ((second - best) / (2 * apart)).astype(np.float64)


def shards() -> Array:
    """Leaded lantern glass: shards that go from warm to cool across the card, a flame and a row of beads.

    No turn and no reflection takes it to itself, so every image tells which way it lies.
    """
    rng = np.random.default_rng(SEED)
    x, y = _grid(SIDE, SIDE)
    step, places = 0.27, np.arange(-7, 8)
    lattice = np.stack(np.meshgrid(places, places), axis=-1) * step
    lattice[1::2, :, 0] += step / 2
    lattice += rng.uniform(-0.12, 0.12, lattice.shape)
    # A few rows at a time: what is worked on then stays in the processor's cache.
    parts = [_lead_and_cells(x[k : k + 32], y[k : k + 32], lattice, step) for k in range(0, SIDE, 32)]
    cell, border = (np.concatenate(part) for part in zip(*parts, strict=True))
    seeds = lattice.reshape(-1, 2)
    drift = (seeds @ np.array([0.8, -0.45]) + 1.3) / 2.6 * (len(GLASS) - 1) + rng.normal(0, 1.7, len(seeds))
    tints = np.array([_rgb(GLASS[round(k) % len(GLASS)]) for k in drift])
    glow = rng.uniform(0.78, 1.08, len(seeds))
    streak = rng.uniform(0, np.pi, len(seeds))
    along = np.cos(streak[cell]) * x + np.sin(streak[cell]) * y
    ripple = 1 + 0.07 * np.sin(55 * along + 6 * streak[cell]) + 0.05 * np.sin(23 * along)
    edge_glow = 0.82 + 0.25 * np.clip(border / 0.09, 0, 1)
    picture = tints[cell] * (glow[cell] * ripple * edge_glow)[..., None]
    soft = 2.0 / SIDE
    picture = _cover(picture, LEAD, (0.008 - border) / soft + 0.5)
    picture = _flame(picture, x, y, soft)
    for k in range(6):
        way = 0.5 + 0.36 * k
        centre = np.array([0.02 + 0.62 * np.cos(way), -0.08 + 0.62 * np.sin(way)])
        size = 0.022 + 0.011 * k
        away = np.hypot(x - centre[0], y - centre[1])
        picture = _cover(picture, LEAD, (size + 0.012 - away) / soft + 0.5)
        picture = _cover(picture, "#FFF8EA", (size - away) / soft + 0.5)
    return picture


def _flame(picture: Array, x: Array, y: Array, soft: float) -> Array:
    # A drop that leans over: its tip bends to the right, so it has a hand.
    for colour, size in ((LEAD, 0.345), ("#F2932B", 0.315), ("#FFD261", 0.2), ("#FFF6D8", 0.1)):
        v = (y + 0.16 + 0.06 * (0.345 - size) / 0.345) / size
        bend = 0.55 * np.clip(v + 0.4, 0, None) ** 2 * size * 0.35
        u = (x + 0.1 - bend) / size
        width = 0.62 * np.sqrt(np.clip(1 - (np.clip(v, -1, 1.6) - 0.0) ** 2, 0, None))
        taper = np.where(v > 0, np.clip(1 - v / 1.55, 0, None) ** 0.9 * 0.62, width)
        inside = (taper - np.abs(u)) * size
        inside = np.where((v < -1) | (v > 1.55), -1.0, inside)
        picture = _cover(picture, colour, inside / soft + 0.5)
    return picture


def globe() -> Array:
    """A paper lantern, unrolled: gores in amber and cream, one of them red, a blue band above the middle."""
    width, height = 1024, 512
    turn = (np.arange(width) + 0.5) / width
    rise = 1 - 2 * (np.arange(height) + 0.5) / height
    u, v = np.meshgrid(turn, rise)
    gore = np.floor(u * 12).astype(int)
    tints = np.array([_rgb("#F3AE45") if k % 2 else _rgb("#FFF0CF") for k in range(12)])
    tints[3], tints[4] = _rgb("#CF3E2C"), _rgb("#E9705A")
    within = np.abs(u * 12 - gore - 0.5) * 2
    picture = tints[gore] * (1.02 - 0.25 * within**3)[..., None]
    picture = _cover(picture, "#2B62A8", (0.07 - np.abs(v - 0.3)) * 60 + 0.5)
    picture = _cover(picture, LEAD, (within - 0.955) * 40 + 0.5)
    return _cover(picture, LEAD, (np.abs(v) - 0.93) * 60 + 0.5)


def pennant() -> Array:
    """A pennant on a pole with one dot, on clear ground: shows turn and handedness, and what stands behind."""
    x, y = _grid(SIDE, SIDE)
    soft = 2.0 / SIDE
    picture = np.zeros((SIDE, SIDE, 3)) + _rgb("#FFF6E4")
    pole = np.minimum(0.05 - np.abs(x + 0.5), 0.86 - np.abs(y))
    cloth = np.minimum(np.minimum(x + 0.5, 0.62 - (x + 0.5) * 0.56 - np.abs(y - 0.22)), 1.02 - x)
    dot = 0.12 - np.hypot(x + 0.22, y - 0.28)
    foot = np.minimum(0.26 - np.abs(x + 0.4), 0.05 - np.abs(y + 0.84))
    opacity = np.zeros_like(x)
    for part, colour in ((cloth, "#12797F"), (dot, "#FFE0A0"), (pole, "#7A3B1E"), (foot, "#7A3B1E")):
        cover = np.clip(part / soft + 0.5, 0, 1)
        picture = _cover(picture, colour, cover)
        opacity = np.maximum(opacity, cover)
    return np.dstack([picture, opacity])


def ruled() -> Array:
    """A card ruled ten by ten, its quarters tinted: to see how a picture is cut and turned."""
    x, y = _grid(SIDE, SIDE)
    picture = np.zeros((SIDE, SIDE, 3)) + _rgb("#FFF8EA")
    for colour, part in (
        ("#FFD9A0", (x < 0) & (y > 0)),
        ("#BFE3DA", (x > 0) & (y > 0)),
        ("#F6C0B4", (x < 0) & (y < 0)),
    ):
        picture = _cover(picture, colour, part.astype(float))
    for axis in (x, y):
        off = np.abs(axis * 5 - np.round(axis * 5)) / 5
        heavy = np.round(axis * 5) == 0
        picture = _cover(picture, "#4A4640", (np.where(heavy, 0.012, 0.0045) - off) * SIDE / 2 + 0.5)
    return picture


PATTERNS: dict[str, Callable[[], Array]] = {
    "lantern glass": shards,
    "lantern globe": globe,
    "pennant": pennant,
    "ruled card": ruled,
}
"""Name to the function that draws it: sRGB values 0 to 1, the first row at the top."""
