"""The orbit of a seed point: its images with parity, depth and word, and what leaves it in place."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from mirrorlab.mirrors.group import MOST_ELEMENTS, ReflectionGroup, TooLarge, components_of
from mirrorlab.mirrors.symbols import PointGroup, point_group, rotation_group
from mirrorlab.mirrors.walk import Array, Ints, Progress, Walk, walk

if TYPE_CHECKING:
    from mirrorlab.mirrors.families import Family

ON_WALL = 1e-6
"""A seed nearer to a wall than this part of its distance from the origin is taken to lie on it: six digits
are what a person types, and images on two sides of a wall would otherwise differ by less than that."""

MOVED = 1e-12
"""Part of a seed's size by which it must move to count as snapped: less is the rounding of one that lay on the wall."""

MOST_IMAGES = 2_000_000
"""Largest orbit made unless the caller asks for more; three coordinates take about 100 MB then."""

MOST_EXPONENT = 1000
"""Seeds reach from 2 to minus this power up to 2 to this power: images then stay finite and keep their digits."""

MOST_LETTERS = 200_000_000
"""Most letters that all words of an orbit may have; two million images have about 60 each at most."""


class OrbitError(ValueError):
    """A seed that cannot be used, or an arrangement that has no finite orbit."""


@dataclass(frozen=True, eq=False)
class Orbit:
    """The images of a seed.

    Attributes
    ----------
    points : ndarray, shape (N, d)
        Coordinates; the first is the seed, folded into the true chamber.
    parity : ndarray of int, shape (N,)
        Depth modulo 2. An image on a mirror could be reached with either; see `stabiliser`.
    depth : ndarray of int, shape (N,)
        Fewest reflections in the chamber's walls that lead from the seed to the image.
    stabiliser_order, stabiliser
        The elements that leave the seed in place: how many, and their families: "1" for none, "A1xA2" for
        reflections, "A1xA2+" for the rotations among those. `stabiliser_symbol` has the site's symbol.
    seed : ndarray, shape (d,)
        The seed as used; `heights` are its distances from the chamber's walls.
    snapped : str or None
        Which walls the seed was moved onto, in words.
    folded : int
        How many reflections brought the given seed into the chamber.
    frame : str
        Which axes the coordinates are in.
    rotations : bool
        True when only the rotation subgroup was used.
    """

    points: Array
    parity: Ints
    depth: Ints
    stabiliser_order: int
    stabiliser: str
    seed: Array
    heights: Array
    snapped: str | None
    folded: int
    frame: str
    rotations: bool
    letters: tuple[str, ...]
    walls: tuple[int, ...] = ()
    group_order: int = 1
    site: tuple[Family, ...] = ()
    _walk: Walk | None = field(default=None, repr=False)
    _kept: Ints | None = field(default=None, repr=False)

    def __len__(self) -> int:
        return len(self.points)

    @property
    def multiplicity(self) -> int:
        """Number of images: order of the group divided by that of the stabiliser."""
        return self.group_order // self.stabiliser_order

    @property
    def stabiliser_symbol(self) -> PointGroup | None:
        """Symbols of the stabiliser in three dimensions; None where more than three independent mirrors make it."""
        return rotation_group(self.site) if self.rotations else point_group(self.site)

    @cached_property
    def _words(self) -> list[str]:
        if self._walk is None:
            return [""] * len(self.points)
        letters = int(self._walk.depth.sum())
        if letters > MOST_LETTERS:
            what = "letters of the words"
            raise TooLarge(what, letters, letters, MOST_LETTERS, "")
        words = [""]
        for k in range(1, len(self._walk.points)):
            words.append(self.letters[self._walk.mirror[k]] + words[self._walk.parent[k]])
        if not self.rotations:
            return words
        spare = self.letters[self.walls[0]] if self.walls else ""
        chosen = range(len(words)) if self._kept is None else self._kept.tolist()
        return [words[k] if len(words[k]) % 2 == 0 else words[k] + spare for k in chosen]

    def words(self) -> list[str]:
        """For each image the word of mirrors that leads there, "" for the seed.

        A word is a product of reflections: in ``abc`` the seed is reflected in c first. Read forwards it names
        the walls crossed on the way from the seed's chamber to the image's.

        Raises
        ------
        TooLarge
            Words of more than `MOST_LETTERS` letters in all; only thousands of images round one edge, in words of
            as many letters, come to that.
        """
        return self._words


def site_families(site: tuple[Family, ...], rotations: bool = False) -> str:
    """Families of a stabiliser as one string, "1" when it is trivial: one mirror holds no rotation."""
    if rotations and math.prod(family.order for family in site) <= 2:
        return "1"
    return "x".join(family.name for family in site) + ("+" if rotations else "") if site else "1"


def make_orbit(
    group: ReflectionGroup,
    seed: Array,
    frame: str,
    rotations: bool = False,
    limit: int = MOST_IMAGES,
    progress: Progress | None = None,
) -> Orbit:
    """The orbit of a point under a group or its rotation subgroup.

    Parameters
    ----------
    seed : ndarray, shape (d,)
        Any point; it is folded into the true chamber, and moved onto walls nearer than `ON_WALL`.

    Raises
    ------
    OrbitError
        A seed of another dimension, one that is not finite, or one out of the reach of
        `MOST_EXPONENT`.
    TooLarge
        More than `limit` images; the message says how many and the memory.
    OrbitCancelled
        `progress` returned False.
    """
    seed = np.asarray(seed, dtype=np.float64)
    if seed.shape != (group.dimension,) or not np.isfinite(seed).all():
        msg = f"seed {seed.tolist()}: give {group.dimension} finite coordinates"
        raise OrbitError(msg)
    # Work near 1: squares of very large or small coordinates would overflow or vanish. A power of 2 loses no digit.
    exponent = int(np.frexp(np.abs(seed).max(initial=0.0))[1])
    if abs(exponent) > MOST_EXPONENT:
        reach = f"{2.0**-MOST_EXPONENT:.0e} and {2.0**MOST_EXPONENT:.0e}"
        msg = f"seed {seed.tolist()}: the largest coordinate must be 0 or between {reach}, so that images can be told"
        raise OrbitError(msg)
    folded, count = group.fold(np.ldexp(seed, -exponent)[None, :])
    place, walls, moved = snap(group, folded[0])
    site = tuple(c.family for c in components_of(group.simple[list(walls)])) if walls else ()
    mirror_order = math.prod(family.order for family in site)
    size = group.order // mirror_order
    on_mirror = bool(walls) or not group.rank
    wanted = size if on_mirror or not rotations else size // 2
    if size > limit:
        what = "images"
        raise TooLarge(what, size, size * (group.dimension * 8 + 32), limit)
    if walls or progress is not None or size > MOST_ELEMENTS:
        steps = walk(group.simple, place, size, progress)
    else:  # the elements take the same walk, so whoever draws the chambers as well has it already
        steps = group.whole_walk.led_from(group.simple, place)
    kept = None
    if rotations and not on_mirror:
        kept = np.flatnonzero(steps.depth % 2 == 0)
    chosen = slice(None) if kept is None else kept
    depth = steps.depth[chosen]
    parity = depth % 2
    if rotations:
        depth = (
            depth + parity
        )  # on a wall the word ends in one more reflection, which leaves the seed in place
        parity = np.zeros_like(depth)
    points = np.ldexp(steps.points[chosen], exponent)
    if len(points) != wanted:
        msg = f"orbit of {len(points)} images where {wanted} were due"
        raise AssertionError(msg)
    names = [group.letters[i] for i in walls]
    text = None
    if moved:
        onto = f"wall{'' if len(names) == 1 else 's'} {', '.join(names)}"
        text = f"moved onto {onto} (nearer than {ON_WALL:g} of its distance)"
    return Orbit(
        points=points,
        parity=parity,
        depth=depth,
        stabiliser_order=mirror_order // 2 if rotations and walls else mirror_order,
        stabiliser=site_families(site, rotations),
        seed=np.ldexp(place, exponent),
        heights=np.ldexp(group.simple @ place, exponent),
        snapped=text,
        folded=int(count[0]),
        frame=frame,
        rotations=rotations,
        letters=group.letters,
        walls=walls,
        group_order=group.rotation_order if rotations else group.order,
        site=site,
        _walk=steps,
        _kept=kept,
    )


def snap(
    group: ReflectionGroup, point: Array, tolerance: float = ON_WALL
) -> tuple[Array, tuple[int, ...], bool]:
    """Move a point of the chamber onto the walls it nearly lies on.

    Returns the point, the walls (indices of simple mirrors) it lies on, and whether it was moved.
    """
    size = float(np.linalg.norm(point))
    heights = group.simple @ point
    walls = tuple(int(i) for i in np.flatnonzero(np.abs(heights) <= tolerance * max(size, 1e-300)))
    if not walls:
        return point, (), False
    normals = group.simple[list(walls)]
    moved = point - np.linalg.pinv(normals) @ (normals @ point)
    shift = float(np.linalg.norm(moved - point))
    return moved, walls, shift > MOVED * max(size, 1e-300)
