"""What is under the pointer, in words for the status line."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from mirrorlab.desktop.document import Document
from mirrorlab.drawing.model import Key
from mirrorlab.mirrors import ReflectionGroup, make_orbit

MOST_NAMED_CHAMBERS = 20_000
"""Chambers of larger groups are not drawn one by one, so nobody points at one."""

PARITIES = ("even", "odd")


def describe(document: Document, key: Key | None) -> str:
    """A part of a picture in words, "" where there is nothing to say."""
    if key is None:
        return ""
    kind, index = key
    teller = _TELLERS.get(kind)
    try:
        return "" if teller is None else teller(document, index)
    except IndexError:  # a picture may be one step behind the document
        return ""


def _image(document: Document, index: int) -> str:
    orbit = document.orbit
    if orbit is None:
        return ""
    word = orbit.words()[index]
    name = "Seed" if not index else f"Image {index + 1}, word {word}, {PARITIES[int(orbit.parity[index])]}"
    return f"{name}, depth {int(orbit.depth[index])}: {coordinates(orbit.points[index])}"


def _chamber(document: Document, index: int) -> str:
    group = document.finding.group
    if group is None or group.order > MOST_NAMED_CHAMBERS:
        return ""
    word = chamber_words(group)[index]
    if not word:
        return "The chamber of the seed"
    return (
        f"Chamber {word}, {PARITIES[len(word) % 2]}, behind {len(word)} mirror{'s' if len(word) > 1 else ''}"
    )


def _mirror(document: Document, index: int) -> str:
    arrangement = document.arrangement
    angles = [
        f"{angle.text} with {arrangement.letters[j if i == index else i]}"
        for (i, j), angle in zip(arrangement.pairs, arrangement.angles, strict=True)
        if index in (i, j)
    ]
    return f"Mirror {arrangement.letters[index]}: {', '.join(angles)}"


def _generated(document: Document, index: int) -> str:
    group = document.finding.group
    if group is None:
        return ""
    return f"Generated mirror {index + 1} of {len(group.mirrors)}, normal {coordinates(group.mirrors[index])}"


def _crystal(kind: str) -> Callable[[Document, int], str]:
    """Parts of the crystallographer's pictures, told by their own package, which is loaded with the first of them."""

    def tell(document: Document, index: int) -> str:
        from mirrorlab.desktop.crystal.crystal_words import TELLERS

        return TELLERS[kind](document, index)

    return tell


_TELLERS = {
    "image": _image,
    "seed": lambda document, _: _image(document, 0),
    "chamber": _chamber,
    "mirror": _mirror,
    "generated": _generated,
    "face": _crystal("face"),
    "axis": _crystal("axis"),
    "equivalent": _crystal("equivalent"),
    "group mirror": _crystal("group mirror"),
    "listed": _crystal("listed"),
}


@lru_cache(maxsize=4)
def chamber_words(group: ReflectionGroup) -> tuple[str, ...]:
    """The word of each chamber, in the order of the group's elements."""
    return tuple(make_orbit(group, group.corners.sum(axis=0), "").words())


def coordinates(point: NDArray[np.float64]) -> str:
    """A point as (x, y, z) with four decimals."""
    tidy = np.round(point, 4) + 0.0
    return "(" + ", ".join(f"{value:.4g}".replace("-", "−") for value in tidy) + ")"
