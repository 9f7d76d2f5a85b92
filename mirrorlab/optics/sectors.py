"""Around an edge: which images are seen whole, which are cut by the seam behind it, and which overlap.

Angles are counted around the edge from the first mirror: the space between the mirrors reaches from 0 to θ, its
images behind the second mirror from θ to 2θ and so on, those behind the first from −θ to 0 and so on. An eye at
angle φ sees past the edge on either side as far as φ ± 180°; there the two rows of images meet in a seam.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.assembly import Assembly

Array = NDArray[np.float64]

CLOSES = 1e-6
"""Degrees of left-over turn that count as none: far below what glass can be set to, far above rounding."""

MOST_SECTORS = 4000


@dataclass(frozen=True, slots=True)
class Sector:
    """One image of the space between the two mirrors.

    Attributes
    ----------
    word : str
    start, end : float
        Degrees around the edge.
    shown : float
        Degrees of it that the eye sees.
    state : str
        "whole", or "cut" by the seam.
    overlaps : tuple of (str, float)
        Words of images that claim the same place otherwise, and how many degrees of it.
    """

    word: str
    start: float
    end: float
    shown: float
    state: str
    overlaps: tuple[tuple[str, float], ...]

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "word": self.word,
            "from_degrees": self.start,
            "to_degrees": self.end,
            "shown_degrees": self.shown,
            "state": self.state,
            "overlaps": [{"word": word, "degrees": degrees} for word, degrees in self.overlaps],
        }


@dataclass(frozen=True, slots=True)
class EdgeView:
    """What an eye sees around one edge.

    Attributes
    ----------
    pair : str
        Letters of the two mirrors.
    degrees : float
        Angle between them.
    eye_degrees, seam_degrees : float
        Where the eye is, and where the seam.
    closes : bool
        Whether the images on both sides of the seam are the same: the angle is 180°/m.
    leftover : float
        Degrees that the nearest closing number of images exceeds (or, negative, leaves open) a whole turn.
    sectors : tuple of Sector
        From the seam on the first mirror's side to the seam on the second's.
    """

    pair: str
    degrees: float
    eye_degrees: float
    seam_degrees: float
    closes: bool
    leftover: float
    sectors: tuple[Sector, ...]

    @property
    def sentence(self) -> str:
        """In words."""
        count = len(self.sectors)
        if self.closes:
            return f"{self.pair}: {round(360 / self.degrees)} sectors close without a seam"
        cut = [s.word or "the space itself" for s in self.sectors if s.state == "cut"]
        pairs = {frozenset((s.word, w)): d for s in self.sectors for w, d in s.overlaps}
        parts = [f"{self.pair}: {count} sectors"]
        if cut:
            parts.append(f"cut by the seam: {', '.join(cut)}")
        if pairs:
            both = ", ".join(f"{' and '.join(sorted(pair))} over {size:.4g}°" for pair, size in pairs.items())
            parts.append(f"overlapping: {both}")
        if not cut and not pairs:
            parts.append("all whole, but the two that meet behind the edge do not match")
        return "; ".join(parts)

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "mirrors": list(self.pair),
            "degrees": self.degrees,
            "eye_degrees": self.eye_degrees,
            "seam_degrees": self.seam_degrees,
            "closes": self.closes,
            "leftover_degrees": self.leftover,
            "sectors": [sector.to_dict() for sector in self.sectors],
            "sentence": self.sentence,
        }


def leftover_degrees(angle: float) -> float:
    """Degrees by which the nearest even number of sectors misses a whole turn; `angle` in radians."""
    degrees = math.degrees(angle)
    return 2 * max(1, round(180 / degrees)) * degrees - 360


def edge_views(assembly: Assembly, eye: Array | None = None) -> tuple[EdgeView, ...]:
    """Return what an eye (the assembly's own, when left out) sees around each edge."""
    spot = assembly.eye if eye is None else np.asarray(eye, dtype=np.float64)
    return tuple(_edge_view(assembly, pair, angle, spot) for pair, angle in assembly.dihedrals.items())


def _edge_view(assembly: Assembly, pair: tuple[int, int], angle: float, eye: Array) -> EdgeView:
    first, second = (assembly.panels[k] for k in pair)
    # Angle of the eye around the edge, from the distances to the two planes: sin φ and sin(θ − φ).
    one, two = first.height(eye), second.height(eye)
    phi = math.degrees(math.atan2(one * math.sin(angle), two + one * math.cos(angle)))
    theta = math.degrees(angle)
    phi = min(max(phi, 0.0), theta)
    left = leftover_degrees(angle)
    closes = abs(left) < CLOSES
    letters = first.letter + second.letter
    beyond = _row(theta, phi + 180, letters[1] + letters[0], 1)
    before = _row(theta, phi - 180, letters, -1)
    middle = [("", 0.0, theta, theta)]
    rows = [*reversed(before), *middle, *beyond]
    sectors = []
    for word, start, end, shown in rows:
        whole = closes or shown > theta - 1e-9
        overlaps = [] if closes else _overlaps(word, start, end, rows)
        sectors.append(Sector(word, start, end, shown, "whole" if whole else "cut", tuple(overlaps)))
    if closes:
        # The last of both rows are one image, seen half on either side of the seam.
        sectors = _joined(sectors, theta)
    return EdgeView(letters, theta, phi, phi + 180, closes, left, tuple(sectors))


def _row(theta: float, limit: float, letters: str, way: int) -> list[tuple[str, float, float, float]]:
    row = []
    for k in range(1, MOST_SECTORS):
        start, end = (k * theta, (k + 1) * theta) if way > 0 else (-k * theta, -(k - 1) * theta)
        near, far = (start, end) if way > 0 else (-end, -start)
        reach = limit if way > 0 else -limit
        if near >= reach - 1e-9:
            break
        word = (letters * (k // 2 + 1))[:k]
        row.append((word, start, end, min(far, reach) - near))
    return row


def _overlaps(
    word: str, start: float, end: float, rows: list[tuple[str, float, float, float]]
) -> list[tuple[str, float]]:
    found = []
    for other, low, high, _ in rows:
        if other == word:
            continue
        common = sum(
            max(0.0, min(end, high + turn) - max(start, low + turn)) for turn in (-360.0, 0.0, 360.0)
        )
        if common > CLOSES:
            found.append((other, common))
    return found


def _joined(sectors: list[Sector], theta: float) -> list[Sector]:
    count = round(360 / theta)
    if len(sectors) <= count:
        return sectors
    extra = sectors[:1]
    kept = sectors[1:]
    last = kept[-1]
    kept[-1] = Sector(last.word, last.start, last.end, min(theta, last.shown + extra[0].shown), "whole", ())
    return kept
