"""From an arrangement to its finding."""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np

from mirrorlab.mirrors.chamber import corner_points, generic_point, region_frame, typed_walls
from mirrorlab.mirrors.closure import MOST_THROUGH_A_LINE, Array, Fractions, Part, decide_part, split
from mirrorlab.mirrors.counting import chambers_in_region
from mirrorlab.mirrors.exact import definiteness
from mirrorlab.mirrors.finding import CLOSED, OPEN, SUBDIVIDED, TUBE, UNBUILDABLE, Finding, gather_evidence
from mirrorlab.mirrors.flags import cycle_flags, pair_flags
from mirrorlab.mirrors.group import ReflectionGroup, TooLarge, build_group
from mirrorlab.mirrors.spelling import spell_walls
from mirrorlab.mirrors.suggestions import Suggestion, Verdict, nearest_closing, nearest_room, supplements
from mirrorlab.mirrors.tube import Tube, describe_tube

if TYPE_CHECKING:
    from mirrorlab.mirrors.arrangement import Arrangement


SPACE = 3
"""Dimensions of ordinary space."""


def buildable(gram: Array, fractions: Fractions) -> int | None:
    """Rank of the Gram matrix, part by part, or None when no planes have these angles.

    Parameters
    ----------
    gram : ndarray, shape (n, n)
    fractions : n by n list of Fraction or None
    """
    rank = 0
    for members in split(fractions):
        inner = [[fractions[i][j] for j in members] for i in members]
        own, semidefinite = definiteness(gram[np.ix_(members, members)], inner)
        if not semidefinite:
            return None
        rank += own
    return rank


def decide(arrangement: Arrangement) -> Finding:
    """What an arrangement does, with evidence.

    Raises
    ------
    TooLarge
        Normals that make more than `MOST_THROUGH_A_LINE` mirrors through one line.
    """
    fractions, gram, normals = arrangement.fractions, arrangement.gram, arrangement.normals
    letters = "".join(arrangement.letters)
    parts = tuple(decide_part(members, gram, fractions, normals, letters) for members in split(fractions))
    rank = sum(part.rank for part in parts)
    cycles = cycle_flags(fractions, letters)
    flags = (*pair_flags(arrangement.angles, arrangement.pairs, letters), *cycles)
    evidence = gather_evidence(arrangement, parts)

    def finish(
        kind: str,
        group: ReflectionGroup | None = None,
        between: int | None = None,
        crystallographic: bool | None = False,
        tube: Tube | None = None,
    ) -> Finding:
        def suggest() -> tuple[Suggestion, ...]:
            if kind == CLOSED or arrangement.given_normals or arrangement.size < 2:
                return ()
            known = (arrangement.angles, arrangement.size, arrangement.pair_names, verdict)
            if arrangement.size > SPACE and _stands_in_a_room(kind, rank, arrangement):
                return () if tube is not None and tube.plane_group else nearest_room(*known)
            return nearest_closing(*known)

        def flip() -> tuple[Suggestion, ...]:
            if kind in (CLOSED, SUBDIVIDED) or arrangement.given_normals:
                return ()
            return supplements(arrangement.angles, arrangement.pair_names, verdict)

        def spell() -> tuple[str, ...]:
            if group is None or normals is None:
                return ()
            return spell_walls(group, normals, arrangement.letters)

        return Finding(
            kind, rank, group, between, crystallographic, flags, tube, evidence, parts, spell, suggest, flip
        )

    if normals is None or not all(part.semidefinite for part in parts):
        return finish(UNBUILDABLE, crystallographic=None)
    dependent = any(part.singular for part in parts)
    tube_like = dependent and not arrangement.given_normals
    fan = max(part.fan for part in parts)
    if tube_like and (fan or not all(part.finite for part in parts)):
        return finish(TUBE, tube=describe_tube(list(parts), fractions, normals, cycles, None))
    if not all(part.finite for part in parts):
        return finish(OPEN)
    if fan:
        where = f"mirrors through one line, at multiples of 180°/{fan:,}"
        raise TooLarge(where, fan, 2 * fan * 8 * normals.shape[1], MOST_THROUGH_A_LINE, "")
    pieces = [part.roots for part in parts if part.roots is not None]
    frame = region_frame(normals, dependent)
    group = build_group(pieces, generic_point(np.concatenate(pieces), frame), normals, arrangement.letters)
    if tube_like:
        tube = describe_tube(list(parts), fractions, normals, cycles, group)
        return finish(TUBE, crystallographic=tube.tiling in ("once", "subdivided"), tube=tube)
    between = None if dependent else _between(parts, fractions, normals)
    if between is None or between == 1:
        return finish(CLOSED, group, between, group.crystallographic)
    roots = np.concatenate(pieces)

    def familiar(point: Array) -> tuple[int, list[bool]]:
        walls = typed_walls(roots, point, normals)
        return int(walls.sum()), walls.tolist()  # most typed walls, the earliest letters where as many

    point = max(corner_points(roots, frame), key=familiar)
    group = build_group(pieces, point, normals, arrangement.letters)
    return finish(SUBDIVIDED, group, between, group.crystallographic)


def _stands_in_a_room(kind: str, rank: int, arrangement: Arrangement) -> bool:
    """Whether mirrors are those of a tube or cell in ordinary space, or were meant so, with a parallel pair.

    As many mirrors that close, four or more, need as many dimensions: nobody can set a room's so.
    """
    return (kind == TUBE and rank <= SPACE) or any(angle.fraction == 0 for angle in arrangement.angles)


def _between(parts: tuple[Part, ...], fractions: Fractions, normals: Array) -> int:
    counts = []
    for part in parts:
        mine = list(part.members)
        known = [[fractions[i][j] or Fraction(0) for j in mine] for i in mine]
        roots = part.roots
        if roots is None:
            msg = "chambers are counted for finite groups"
            raise ValueError(msg)
        counts.append(chambers_in_region(known, normals[mine], roots))
    return math.prod(counts)


@lru_cache(maxsize=2048)
def verdict(fractions: Sequence[Fraction]) -> Verdict:
    """Kind, families, order, chambers between and symbol of a set of exact angles; of a tube the plane group's."""
    from mirrorlab.angles import AngleSettings
    from mirrorlab.mirrors.arrangement import Arrangement

    wide = AngleSettings(max_denominator=max(360, *(f.denominator for f in fractions)))
    finding = Arrangement.from_angles(fractions, wide).finding()
    if finding.tube is not None:
        return finding.kind, (), None, finding.tube.chambers, f"{finding.tube.plane_group} (tube)"
    symbols = finding.point_group
    name = " × ".join(finding.families)
    if symbols is not None:
        name = f"{symbols.hermann_mauguin} ({name})"
    return finding.kind, finding.families, finding.order, finding.chambers_between, name
