"""Naming walls that were not typed: by the typed mirror that reflections carry onto them."""

from __future__ import annotations

import numpy as np

from mirrorlab.mirrors.chamber import same_mirrors
from mirrorlab.mirrors.group import ReflectionGroup
from mirrorlab.mirrors.walk import Array

LONGEST_WORD = 200
"""Letters of a word that a person may still follow. Only two mirrors at an angle such as 199pi/400 need more."""


def spell_walls(group: ReflectionGroup, normals: Array, letters: tuple[str, ...]) -> tuple[str, ...]:
    """For each wall of the true chamber a typed letter, or a word such as ``"ab(c)"``; "" beyond `LONGEST_WORD`.

    ``"ab(c)"`` is mirror c seen in mirror b, and that in mirror a; the shortest such word is given.

    Parameters
    ----------
    group : ReflectionGroup
    normals : ndarray, shape (n, d)
        The typed mirrors.
    letters : tuple of str
    """
    names: list[str | None] = [None] * group.rank
    seen = np.zeros(group.mirror_count, dtype=bool)
    frontier = [(normal, "", letter) for normal, letter in zip(normals, letters, strict=True)]
    for _ in range(LONGEST_WORD):
        if not frontier or all(names):
            break
        fresh = []
        for normal, word, letter in frontier:
            which = int(np.abs(group.mirrors @ normal).argmax())
            if seen[which]:
                continue
            seen[which] = True
            for wall in np.flatnonzero(same_mirrors(group.simple, normal[None])):
                names[int(wall)] = names[int(wall)] or (f"{word}({letter})" if word else letter)
            fresh += [
                (normal - 2 * (normal @ mirror) * mirror, other + word, letter)
                for mirror, other in zip(normals, letters, strict=True)
            ]
        frontier = fresh
    return tuple(name or "" for name in names)
