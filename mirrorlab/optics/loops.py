"""Loops of light around a corner: words that lead to one image when the angles are right, and part when they are off.

To first order the image that a word leads to turns by an amount linear in the errors of the angles. Two words of
one image then part by ``K @ errors``, a small turn; only its size matters, so each pair is kept as ``K.T @ K``.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.beams import Beams, beams_from
from mirrorlab.optics.build_corner import corner
from mirrorlab.optics.images import same_places
from mirrorlab.optics.shapes import corner_normals

Array = NDArray[np.float64]

LETTERS = ("a", "b", "c")

STEP = 1e-5
"""Radians by which an angle is changed to see how fast images turn: the rest is of its square, 1e-10."""

MOST_WORDS = 100
"""Words of one image that are compared with each other. The icosahedral corner has 62 for its longest; only prisms
with more than 50 sectors have more, and there evenly spread ones are taken."""

ROUNDING = 1e-12
"""Radians: a smaller turn is rounding."""


@dataclass(frozen=True, slots=True, eq=False)
class Loops:
    """Pairs of words that lead to one image.

    Attributes
    ----------
    words : tuple of (str, str)
        One pair for each form.
    forms : ndarray, shape (P, 3, 3)
        ``errors @ forms[p] @ errors`` is the square of the turn, in the errors' unit squared; the errors are
        those of the angles ab, ac, bc.
    """

    words: tuple[tuple[str, str], ...]
    forms: Array

    def turns(self, errors: Array) -> Array:
        """Size of each loop's turn for one or many sets of errors, shape (…, P), in the errors' unit."""
        squares = np.einsum("...i,pij,...j->...p", errors, self.forms, errors)
        result: Array = np.sqrt(np.maximum(squares, 0.0))
        return result


@lru_cache(maxsize=32)
def corner_loops(angles: tuple[float, float, float]) -> Loops:
    """Return the loops of a corner that closes; `angles` ab, ac, bc in radians."""
    beams, groups = _corner_words(angles)
    rates = np.stack(
        [
            (word_turns(_moved(angles, pair, STEP), beams) - word_turns(_moved(angles, pair, -STEP), beams))
            / (2 * STEP)
            for pair in range(3)
        ],
        axis=1,
    )  # (B, 3 angles, 3, 3)
    exact = word_turns(angles, beams)
    spins = rates @ np.swapaxes(exact, 1, 2)[:, None]
    vectors = np.stack([spins[..., 2, 1], spins[..., 0, 2], spins[..., 1, 0]], axis=-2)  # (B, xyz, angle)
    forms, pairs = [], []
    for group in groups:
        one, two = np.triu_indices(len(group), 1)
        members = np.array(group)
        difference = vectors[members[one]] - vectors[members[two]]
        forms.append(np.einsum("pki,pkj->pij", difference, difference))
        pairs.append(np.column_stack([members[one], members[two]]))
    if not forms:
        return Loops((), np.zeros((0, 3, 3)))
    every, chosen = np.concatenate(forms), np.concatenate(pairs)
    _, first = np.unique(np.round(every.reshape(-1, 9), 4), axis=0, return_index=True)
    first = np.array([k for k in first if np.abs(every[k]).max() > 1e-6], dtype=np.int64)
    words = tuple((beams.word(int(i), LETTERS), beams.word(int(j), LETTERS)) for i, j in chosen[first])
    return Loops(words, every[first])


@lru_cache(maxsize=32)
def _corner_words(angles: tuple[float, float, float]) -> tuple[Beams, list[list[int]]]:
    """Words of light in a corner, and groups of those that lead to one image."""
    assembly = corner([float(np.degrees(angle)) for angle in angles], 100.0, mirrors="perfect")
    inner = assembly.place.centre
    point = inner + np.array([0.031, 0.017, -0.023]) * np.linalg.norm(inner) * 0.2
    if assembly.heights(point).min() <= 0:
        point = inner
    beams = beams_from(assembly, point, 1e-9)
    groups = same_places(beams.turns @ point, 1e-6 * 100)
    return beams, [_spread(group) for group in groups if len(group) > 1]


def _spread(group: list[int]) -> list[int]:
    if len(group) <= MOST_WORDS:
        return group
    return [group[k] for k in np.linspace(0, len(group) - 1, MOST_WORDS).round().astype(int)]


def _moved(angles: tuple[float, float, float], pair: int, step: float) -> tuple[float, float, float]:
    result = list(angles)
    result[pair] += step
    return result[0], result[1], result[2]


def word_turns(angles: tuple[float, float, float], beams: Beams) -> Array:
    """Products of the reflections of each beam's word, for mirrors at other angles, shape (B, 3, 3)."""
    normals = corner_normals(angles)
    mirrors = np.eye(3) - 2 * np.einsum("ni,nj->nij", normals, normals)
    result = np.empty((len(beams.parent), 3, 3))
    result[0] = np.eye(3)
    for depth in range(1, int(beams.bounces.max()) + 1):
        level = np.flatnonzero(beams.bounces == depth)
        # The word's first letter is the last mirror met.
        result[level] = mirrors[beams.mirror[level]] @ result[beams.parent[level]]
    return result


def parted(
    angles: tuple[float, float, float], intended: tuple[float, float, float]
) -> tuple[float, str, str]:
    """Return the largest turn in radians between two words of one image, exactly, and the words."""
    beams, groups = _corner_words(intended)
    turns = word_turns(angles, beams)
    best = (0.0, "", "")
    for group in groups:
        those = turns[group]
        chords = np.linalg.norm(those[:, None] - those[None], axis=(2, 3)) / (2 * math.sqrt(2.0))
        i, j = np.unravel_index(int(chords.argmax()), chords.shape)
        if chords[i, j] > best[0]:
            best = (float(chords[i, j]), beams.word(group[i], LETTERS), beams.word(group[j], LETTERS))
    return _size(best[0]), best[1], best[2]


def coxeter_loop(
    angles: tuple[float, float, float], intended: tuple[float, float, float]
) -> tuple[str, int, float]:
    """Go around the whole corner: the three mirrors in turn, as often as brings every image home.

    Returns
    -------
    word : str
        Of one round.
    rounds : int
        Rounds after which the intended mirrors have made no turn; 0 when they never do.
    leftover : float
        Turn in radians that is left over with the actual angles.
    """
    exact, actual = (_round(corner_normals(a)) for a in (intended, angles))
    product = np.eye(3)
    for rounds in range(1, 4 * 360 + 1):
        product = product @ exact
        if np.abs(product - np.eye(3)).max() < 1e-7:
            home = np.linalg.matrix_power(actual, rounds)
            return "abc", rounds, _size(float(np.linalg.norm(home - np.eye(3))) / (2 * math.sqrt(2.0)))
    return "abc", 0, 0.0


def _size(half_chord: float) -> float:
    # Steady for small turns, where an inverse cosine would lose half the digits.
    turn = 2 * math.asin(min(half_chord, 1.0))
    return 0.0 if turn < ROUNDING else turn


def _round(normals: Array) -> Array:
    product = np.eye(3)
    for normal in normals:
        product = product @ (np.eye(3) - 2 * np.outer(normal, normal))
    return product
