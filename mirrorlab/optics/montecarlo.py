"""Chance: the seams of many assemblies whose angles are off at random, from one seed and so repeatable."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.intent import Intent
from mirrorlab.optics.lengths import AssemblyError, positive_length
from mirrorlab.optics.tolerance import seam_turns

Array = NDArray[np.float64]

SPREADS = ("normal", "uniform")
MOST_DRAWS = 1_000_000
BATCH = 20_000


class SeamsStopped(Exception):
    """The progress callback asked to stop."""


@dataclass(frozen=True, slots=True, eq=False)
class SeamChances:
    """Seams of many assemblies.

    Attributes
    ----------
    spread : str
        "normal" or "uniform".
    size : float
        Degrees: the standard deviation, or the largest error.
    draws, seed : int
    distance : float
        Millimetres at which seams are stated.
    seams : ndarray, shape (draws,)
        Millimetres, ascending: the largest seam of each assembly.
    edges, counts : ndarray, shape (bins + 1,) and (bins,)
        Histogram of `seams`.
    """

    spread: str
    size: float
    draws: int
    seed: int
    distance: float
    seams: Array
    edges: Array
    counts: NDArray[np.int64]

    def share_below(self, seam: float) -> float:
        """Part of the assemblies whose largest seam is at most this many millimetres."""
        return float(np.searchsorted(self.seams, seam, side="right") / len(self.seams))

    def percentile(self, percent: float) -> float:
        """Seam in millimetres that this percentage of the assemblies stays below."""
        return float(np.percentile(self.seams, percent))

    @property
    def sentence(self) -> str:
        """In words."""
        what = "standard deviation" if self.spread == "normal" else "at most"
        return (
            f"angles off by {what} {self.size:.4g}°: half of {self.draws:,} assemblies show a seam below"
            f" {self.percentile(50):.3g} mm, 95 of 100 below {self.percentile(95):.3g} mm, at {self.distance:.6g} mm"
        )

    def to_dict(self) -> dict[str, object]:
        """Plain JSON, without the single seams."""
        return {
            "spread": self.spread,
            "size_degrees": self.size,
            "draws": self.draws,
            "seed": self.seed,
            "distance_mm": self.distance,
            "percentiles_mm": {str(p): self.percentile(p) for p in (5, 25, 50, 75, 90, 95, 99)},
            "largest_mm": float(self.seams[-1]),
            "histogram": {"edges_mm": self.edges.tolist(), "counts": self.counts.tolist()},
            "sentence": self.sentence,
        }


def seam_chances(
    intent: Intent,
    size: float,
    spread: str = "normal",
    draws: int = 10_000,
    seed: int = 1,
    distance: str | float = 1000.0,
    bins: int = 24,
    progress: Callable[[int, int], object] | None = None,
) -> SeamChances:
    """Draw errors of all angles at random and return the seams.

    Parameters
    ----------
    intent : Intent
    size : float
        Degrees: standard deviation of "normal" errors, largest "uniform" error.
    draws : int
        Assemblies, up to `MOST_DRAWS`.
    seed : int
        The same seed gives the same assemblies.
    progress : callable, optional
        Called with (drawn, draws); a return of False stops.

    Notes
    -----
    Seams are taken to first order in the errors. The angles of a straight tube have a fixed sum, so what its
    random errors add up to is taken from all alike.

    Raises
    ------
    AssemblyError
        A size, spread or number that cannot be drawn.
    SeamsStopped
        `progress` returned False.
    """
    if spread not in SPREADS:
        msg = f"spread {spread!r}: must be 'normal' or 'uniform'"
        raise AssemblyError(msg, "spread")
    if not (math.isfinite(size) and 0 < size <= 10):
        msg = f"size {size!r}°: must be over 0° and up to 10°"
        raise AssemblyError(msg, "size")
    if not 1 <= draws <= MOST_DRAWS:
        msg = f"draws {draws!r}: from 1 to {MOST_DRAWS:,}"
        raise AssemblyError(msg, "draws")
    away = positive_length(distance, "distance")
    rng = np.random.default_rng(seed)
    n = len(intent.pairs)
    parts = []
    for start in range(0, draws, BATCH):
        if progress is not None and progress(start, draws) is False:
            msg = f"stopped after {start:,} of {draws:,} assemblies"
            raise SeamsStopped(msg)
        many = min(BATCH, draws - start)
        if spread == "normal":
            errors = rng.normal(0.0, math.radians(size), (many, n))
        else:
            errors = rng.uniform(-math.radians(size), math.radians(size), (many, n))
        if intent.kind == "tube":
            errors = errors - errors.mean(axis=1, keepdims=True)
        parts.append(2 * away * np.sin(np.minimum(seam_turns(intent, errors), math.pi) / 2))
    seams = np.sort(np.concatenate(parts))
    counts, edges = np.histogram(seams, bins=bins, range=(0.0, float(seams[-1]) or 1.0))
    return SeamChances(spread, float(size), draws, seed, away, seams, edges, counts.astype(np.int64))
