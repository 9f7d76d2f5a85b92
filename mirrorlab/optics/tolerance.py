"""How exact the angles must be: the turn left over around each edge and the whole corner, and the seam it opens."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import product

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.intent import Intent, intent_of
from mirrorlab.optics.lengths import AssemblyError, positive_length
from mirrorlab.optics.loops import corner_loops, coxeter_loop, parted
from mirrorlab.optics.returns import ReturnError, is_reflector, return_error

Array = NDArray[np.float64]

__all__ = [
    "EdgeError",
    "Intent",
    "Tolerance",
    "WholeError",
    "chord",
    "intent_of",
    "seam_turns",
    "tolerance_of",
    "turn_for",
]

LARGEST_ERROR = math.radians(10)
"""An angle this far from what is intended is another angle."""


@dataclass(frozen=True, slots=True)
class EdgeError:
    """One edge.

    Attributes
    ----------
    pair : str
    intended, actual, error : float
        Degrees.
    sectors : int
        Images that go once around (or, for a star angle such as 72°, until they come home).
    leftover : float
        Degrees that are left over then: sectors × error. Positive: images overlap; negative: a gap.
    seam : float
        Millimetres by which images miss each other at the distance asked for.
    allowed : float or None
        Degrees by which this angle alone may be off for the seam asked for; None where none was asked for.
    always : bool
        True where images meet in a seam even at the exact angle, for it is not 180°/m.
    """

    pair: str
    intended: float
    actual: float
    error: float
    sectors: int
    leftover: float
    seam: float
    allowed: float | None
    always: bool

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "mirrors": list(self.pair),
            "intended_degrees": self.intended,
            "actual_degrees": self.actual,
            "error_degrees": self.error,
            "sectors": self.sectors,
            "leftover_degrees": self.leftover,
            "seam_mm": self.seam,
            "allowed_error_degrees": self.allowed,
            "seam_even_when_exact": self.always,
        }


@dataclass(frozen=True, slots=True)
class WholeError:
    """Around the corner as a whole.

    Attributes
    ----------
    word, rounds : str and int
        The three mirrors in turn, as often as brings every image home.
    leftover, seam : float
        Degrees left over after that, and millimetres at the distance asked for.
    worst, worst_seam : float
        Largest turn between two ways of light to one image, in degrees, and millimetres.
    worst_words : tuple of str
        The two ways.
    """

    word: str
    rounds: int
    leftover: float
    seam: float
    worst: float
    worst_seam: float
    worst_words: tuple[str, str]

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "round": self.word,
            "rounds": self.rounds,
            "leftover_degrees": self.leftover,
            "seam_mm": self.seam,
            "worst_degrees": self.worst,
            "worst_seam_mm": self.worst_seam,
            "worst_words": list(self.worst_words),
        }


@dataclass(frozen=True, slots=True)
class Tolerance:
    """How far actual mirrors are off, and how far they may be.

    Attributes
    ----------
    intent : Intent
    distance : float
        Millimetres from the edge (or point) at which seams are stated.
    edges : tuple of EdgeError
    whole : WholeError or None
        None but for corners.
    returns : ReturnError or None
        For corners of three nearly square mirrors.
    limit : float or None
        Seam asked for, in millimetres.
    allowed_together : float or None
        Degrees by which all angles may be off at once, at worst, for that seam.
    """

    intent: Intent
    distance: float
    edges: tuple[EdgeError, ...]
    whole: WholeError | None
    returns: ReturnError | None
    limit: float | None
    allowed_together: float | None
    notes: tuple[str, ...] = ()

    @property
    def seam(self) -> float:
        """The largest seam in millimetres."""
        seams = [abs(edge.seam) for edge in self.edges]
        return max([*seams, self.whole.worst_seam] if self.whole else seams)

    @property
    def sentence(self) -> str:
        """In words."""
        text = f"largest seam {self.seam:.3g} mm at {self.distance:.6g} mm"
        if self.limit is not None and self.allowed_together is not None:
            text += (
                f"; for a seam below {self.limit:.6g} mm every angle must be within"
                f" {self.allowed_together:.3g}° ({self.allowed_together * 60:.3g}′)"
            )
        return text

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "kind": self.intent.kind,
            "distance_mm": self.distance,
            "edges": [edge.to_dict() for edge in self.edges],
            "whole": None if self.whole is None else self.whole.to_dict(),
            "return_error": None if self.returns is None else self.returns.to_dict(),
            "limit_mm": self.limit,
            "allowed_together_degrees": self.allowed_together,
            "largest_seam_mm": self.seam,
            "sentence": self.sentence,
            "notes": list(self.notes),
        }


def tolerance_of(
    intent: Intent,
    actual: Sequence[float],
    distance: str | float = 1000.0,
    limit: str | float | None = None,
) -> Tolerance:
    """Return what errors of the angles do, and how large they may be.

    Parameters
    ----------
    intent : Intent
        See `intent_of`.
    actual : sequence of float
        The angles that the mirrors have, in radians, in the order of `intent.pairs`.
    distance : str or number
        From the edge, or the point of a corner, to where the seam is looked at; millimetres or with a unit.
    limit : str or number, optional
        Largest seam wanted there.

    Raises
    ------
    AssemblyError
        Another number of angles, or an angle that is no error of the intended one.
    """
    away = positive_length(distance, "distance")
    wanted = None if limit is None else positive_length(limit, "limit")
    if len(actual) != len(intent.pairs):
        msg = f"{len(actual)} actual angles for {len(intent.pairs)} edges: give {', '.join(intent.pairs)}"
        raise AssemblyError(msg, "actual")
    for pair, meant, has in zip(intent.pairs, intent.radians, actual, strict=True):
        if not abs(has - meant) <= LARGEST_ERROR:
            msg = (
                f"actual angle {pair}, {math.degrees(has):.6g}°: more than {math.degrees(LARGEST_ERROR):.0f}° from the"
                f" intended {math.degrees(meant):.6g}°"
            )
            raise AssemblyError(msg, "actual")
    edges = tuple(
        _edge(pair, fraction, meant, has, away, wanted)
        for pair, fraction, meant, has in zip(
            intent.pairs, intent.fractions, intent.radians, actual, strict=True
        )
    )
    whole = _whole(intent, actual, away) if intent.kind == "corner" else None
    returns = return_error(actual) if intent.kind == "corner" and is_reflector(intent.radians) else None
    together = None if wanted is None else _together(intent, away, wanted)
    notes = []
    if intent.kind == "tube":
        notes.append(
            "the angles of a straight tube's cross-section have a fixed sum: an error of one is shared by others"
        )
    return Tolerance(intent, away, edges, whole, returns, wanted, together, tuple(notes))


def chord(turn: float, distance: float) -> float:
    """Millimetres between what a turn (radians) takes apart at this distance from its axis."""
    return 2 * distance * math.sin(min(abs(turn), math.pi) / 2)


def turn_for(seam: float, distance: float) -> float:
    """Turn in radians that opens a seam of this many millimetres: the inverse of `chord`."""
    return 2 * math.asin(min(1.0, seam / (2 * distance)))


def _edge(
    pair: str, fraction: Fraction, meant: float, has: float, distance: float, limit: float | None
) -> EdgeError:
    sectors = 2 * fraction.denominator
    leftover = sectors * (has - meant)
    return EdgeError(
        pair,
        math.degrees(meant),
        math.degrees(has),
        math.degrees(has - meant),
        sectors,
        math.degrees(leftover),
        math.copysign(chord(leftover, distance), leftover),
        None if limit is None else math.degrees(turn_for(limit, distance) / sectors),
        fraction.numerator != 1,
    )


def _whole(intent: Intent, actual: Sequence[float], distance: float) -> WholeError:
    meant = (intent.radians[0], intent.radians[1], intent.radians[2])
    has = (actual[0], actual[1], actual[2])
    word, rounds, leftover = coxeter_loop(has, meant)
    worst, one, two = parted(has, meant)
    return WholeError(
        word,
        rounds,
        math.degrees(leftover),
        chord(leftover, distance),
        math.degrees(worst),
        chord(worst, distance),
        (one, two),
    )


def seam_turns(intent: Intent, errors: Array) -> Array:
    """Largest turn that errors of the angles open, to first order, shape (…,), in the errors' unit.

    Parameters
    ----------
    errors : ndarray, shape (…, number of edges)
    """
    around = np.abs(errors * np.array(intent.sectors, dtype=float))
    result: Array = around.max(axis=-1)
    if intent.kind == "corner":
        loops = corner_loops((intent.radians[0], intent.radians[1], intent.radians[2]))
        if len(loops.forms):
            result = np.maximum(result, loops.turns(errors).max(axis=-1))
    return result


def _together(intent: Intent, distance: float, limit: float) -> float:
    # The turn is convex in the errors, so it is largest where each error is at one of its ends.
    ends = np.array(list(product((-1.0, 1.0), repeat=len(intent.pairs))))
    return math.degrees(turn_for(limit, distance) / float(seam_turns(intent, ends).max()))
