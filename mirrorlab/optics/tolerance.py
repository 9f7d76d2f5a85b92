"""How exact the angles must be: the turn left over around each edge and the whole corner, and the seam it opens."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import permutations, product
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.lengths import AssemblyError, positive_length
from mirrorlab.optics.loops import corner_loops, coxeter_loop, parted
from mirrorlab.optics.returns import ReturnError, is_reflector, return_error
from mirrorlab.optics.stand import standing_angle

if TYPE_CHECKING:
    from mirrorlab.mirrors import Arrangement

Array = NDArray[np.float64]

NEAR = 2.0
"""Degrees: typed angles this near to ones that close without a seam are meant to be these, and are off."""

TILING_TRIANGLES = ((3, 3, 3), (2, 4, 4), (2, 3, 6))
"""Triangles of angles 180°/m that tile the plane without a seam; there are no others, for 1/p + 1/q + 1/r = 1."""

LARGEST_ERROR = math.radians(10)
"""An angle this far from what is intended is another angle."""


@dataclass(frozen=True, slots=True)
class Intent:
    """What the mirrors are meant to be.

    Attributes
    ----------
    kind : str
        "wedge", "corner" or "tube".
    pairs : tuple of str
        Pairs of letters whose mirrors share an edge.
    fractions : tuple of Fraction
        Intended angles over π.
    """

    kind: str
    pairs: tuple[str, ...]
    fractions: tuple[Fraction, ...]

    @property
    def radians(self) -> tuple[float, ...]:
        """Intended angles."""
        return tuple(math.pi * float(fraction) for fraction in self.fractions)

    @property
    def sectors(self) -> tuple[int, ...]:
        """Sectors of light that bring an image home around each edge: twice the closing denominator."""
        return tuple(2 * fraction.denominator for fraction in self.fractions)


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


def intent_of(arrangement: Arrangement) -> tuple[Intent, tuple[float, ...]]:
    """Return what an arrangement's mirrors are meant to be, and the angles that they have, in radians.

    Angles within `NEAR` of ones that close without a seam are taken as meant to be these; other angles that close
    are taken as they are; for the rest the nearest angles that close are taken as meant.

    Raises
    ------
    AssemblyError
        Mirrors that make no assembly, or have no closing angles near.
    """
    rank = 0 if arrangement.normals is None else arrangement.normals.shape[1]
    kind = _kind(arrangement.size, rank, arrangement.given_normals)
    pairs = _joined_pairs(kind, arrangement.size)
    places = [arrangement.pairs.index(pair) for pair in pairs]
    typed = [arrangement.angles[place] for place in places]
    names = tuple(arrangement.letters[i] + arrangement.letters[j] for i, j in pairs)
    degrees = [math.degrees(standing_angle(angle)) for angle in typed]
    meant = tuple(angle.fraction for angle in typed if angle.fraction is not None)
    seamless = _seamless(kind, degrees)
    closes = len(meant) == len(typed) and (kind != "corner" or arrangement.finding().group is not None)
    if seamless is not None:
        meant = seamless
    elif not closes:
        wanted = None
        if kind == "corner":
            suggestions = arrangement.finding().suggestions
            wanted = next((s for s in suggestions if s.kind.startswith("closed")), None)
        if wanted is None:
            msg = "angles: none near these close; type those that are meant, and the actual ones beside them"
            raise AssemblyError(msg, "angles")
        meant = tuple(wanted.angles[place] for place in places)
    actual = (
        math.pi * float(fraction) if angle.fraction == fraction else standing_angle(angle)
        for angle, fraction in zip(typed, meant, strict=True)
    )
    return Intent(kind, names, meant), tuple(actual)


def _seamless(kind: str, degrees: list[float]) -> tuple[Fraction, ...] | None:
    # Corners are decided by the finding: single angles that divide 180° need not close together.
    if kind == "corner":
        return None
    if kind == "wedge":
        tried: list[tuple[int, ...]] = [(max(2, round(180 / degrees[0])),)]
    elif len(degrees) == 4:
        tried = [(2, 2, 2, 2)]
    else:
        tried = sorted({order for names in TILING_TRIANGLES for order in permutations(names)})
    wanted = min(
        (tuple(Fraction(1, m) for m in orders) for orders in tried), key=lambda f: _furthest(degrees, f)
    )
    return wanted if _furthest(degrees, wanted) <= NEAR else None


def _furthest(degrees: list[float], fractions: tuple[Fraction, ...]) -> float:
    return max(abs(d - 180 * float(f)) for d, f in zip(degrees, fractions, strict=True))


def _kind(size: int, rank: int, given_normals: bool) -> str:
    if size == 2:
        return "wedge"
    if size == 3 and rank == 3:
        return "corner"
    if size in (3, 4) and rank == 2 and not given_normals:
        return "tube"
    msg = (
        f"{size} mirrors of rank {rank}: an assembly has two mirrors, three that meet in a point, or three or"
        " four around one direction"
    )
    raise AssemblyError(msg, "angles")


def _joined_pairs(kind: str, size: int) -> list[tuple[int, int]]:
    if size == 4:
        return [(0, 1), (1, 2), (2, 3), (0, 3)]
    return [(i, j) for i in range(size) for j in range(i + 1, size)]


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
