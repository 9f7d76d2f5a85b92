"""Two generated mirrors that stand too close for a finite group: evidence that a person can check.

A generated mirror is written like "ab(c)": mirror c seen in b, and that seen in a.
"""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.families import LARGEST_PAIR_ORDER
from mirrorlab.mirrors.generation import LETTERS

Array = NDArray[np.float64]
Witness = tuple[str, str, float]

CLEAR = 1e-6
"""Cosines must be apart by this to call mirrors distinct, or closer than the bound."""

MOST_TRIED = 500
"""Mirrors written out in search of a pair. Where reflections never close, mirrors lie dense, and a pair closer
than 36 degrees shows among the first dozens."""


def close_pair(fraction: Fraction, a: str, b: str) -> Witness:
    """Two mirrors made by a and b alone that stand 180°/m apart."""
    k, m = fraction.numerator, fraction.denominator
    inverse = pow(k, -1, m)
    step = min(inverse, m - inverse)
    word = ((b + a) * step)[:step]  # lines at 0 (a), θ (b), 2θ (b(a)), 3θ (ba(b)) …; the step-th is π/m off a
    return a, f"{word[:-1]}({word[-1]})" if step > 1 else word, 180 / m


def closest(roots: Array, words: tuple[str, ...], names: list[str]) -> Witness:
    """The two distinct mirrors that stand closest; `roots` holds one sign of each first, then the other."""
    count = len(roots) // 2
    unit = roots[:count] / np.linalg.norm(roots[:count], axis=1, keepdims=True)
    cosine = np.abs(unit @ unit.T)
    np.fill_diagonal(cosine, -1)
    i, j = np.unravel_index(int(cosine.argmax()), cosine.shape)
    near = unit[j] * np.sign(unit[i] @ unit[j])
    apart = 2 * math.atan2(float(np.linalg.norm(unit[i] - near)), float(np.linalg.norm(unit[i] + near)))
    return _spell(words[i], names), _spell(words[j], names), math.degrees(apart)


def _spell(word: str, names: list[str]) -> str:
    """A root's word in the letters of the typed mirrors: "ab:c" among c, d and e becomes "cd(e)"."""
    before, _, last = ("".join(c if c == ":" else names[LETTERS.index(c)] for c in word)).partition(":")
    return f"{before}({last})" if before else last


def too_close(normals: Array, names: list[str]) -> Witness | None:
    """Two generated mirrors closer than any of a finite group that does not split, and not one and the same.

    Parameters
    ----------
    normals : ndarray, shape (n, d)
        Mirrors that do not split, of rank 3 or more.
    names : list of str
        Their letters.
    """
    limit = math.cos(math.pi / LARGEST_PAIR_ORDER) + CLEAR
    found: list[Array] = []
    words: list[str] = []
    queue = [(normal, "", name) for normal, name in zip(normals, names, strict=True)]
    while queue and len(found) < MOST_TRIED:
        normal, before, last = queue.pop(0)
        cosines = np.abs(np.array(found) @ normal) if found else np.zeros(0)
        if (cosines > 1 - CLEAR**2).any():
            continue
        word = f"{before}({last})" if before else last
        close = np.flatnonzero((cosines > limit) & (cosines < 1 - CLEAR))
        if len(close):
            k = int(close[0])
            return words[k], word, math.degrees(math.acos(cosines[k]))
        found.append(normal)
        words.append(word)
        for mirror, name in zip(normals, names, strict=True):
            queue.append((normal - 2 * (normal @ mirror) * mirror, name + before, last))
    return None
