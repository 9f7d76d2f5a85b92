"""Which point groups mirrors leave open, and what would decide between them.

Mirrors generate only part of most groups. A group fits exactly when its mirrors are these and no others; it fits
"at least" when these are among its mirrors.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from itertools import combinations
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.generators import THE_32
from mirrorlab.crystal.identify import Element, elements_of
from mirrorlab.crystal.mirror_match import RankError, in_space, lay_on
from mirrorlab.crystal.operations import ROUND_OFF
from mirrorlab.crystal.pointgroups import NamedGroup, point_group, without_lattice
from mirrorlab.crystal.symbols import GroupName, parse_symbol

if TYPE_CHECKING:
    from mirrorlab.mirrors.finding import Finding

_FOLDS = {
    2: "twofold",
    3: "threefold",
    4: "fourfold",
    5: "fivefold",
    6: "sixfold",
    8: "eightfold",
    10: "tenfold",
}
_CENTRE = "centre of symmetry"
_PARALLEL = 1 - 1e-9
"""Cosine from which a direction is parallel to a normal: one of another mirror of the group is degrees away."""


@dataclass(frozen=True, eq=False)
class Candidate:
    """A point group that the mirrors leave open.

    Attributes
    ----------
    group : NamedGroup
        In its standard setting.
    rotation : ndarray, shape (3, 3)
        Takes the frame of the mirrors to the Cartesian frame of the group.
    exact : bool
        The group has these mirrors and no others.
    """

    group: NamedGroup
    rotation: NDArray[np.float64]
    exact: bool

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "hermann_mauguin": self.group.hermann_mauguin,
            "schoenflies": self.group.schoenflies,
            "system": self.group.name.system,
            "order": self.group.order,
            "mirror_count": len(self.group.mirrors),
            "exact": self.exact,
            "centrosymmetric": self.group.centrosymmetric,
            "polar": self.group.polar,
            "chiral": self.group.chiral,
            "rotation_to_standard": self.rotation.tolist(),
        }


@dataclass(frozen=True, slots=True)
class Decision:
    """What tells two candidates apart.

    Attributes
    ----------
    first, second : str
        Hermann–Mauguin symbols.
    operation : str
        What to look for, e.g. "centre of symmetry" or "threefold axis".
    present_in : str
        The one of the two that has it.
    sentence : str
        The same in words, with the place where it lies if the mirrors settle it.
    """

    first: str
    second: str
    operation: str
    present_in: str
    sentence: str

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "first": self.first,
            "second": self.second,
            "operation": self.operation,
            "present_in": self.present_in,
            "sentence": self.sentence,
        }


@dataclass(frozen=True, eq=False)
class Candidates:
    """The answer to "which point group, if these are its mirrors?".

    Attributes
    ----------
    mirror_group : GroupName
        What the mirrors generate.
    exactly : tuple of Candidate
        Groups with these mirrors and no others.
    at_least : tuple of Candidate
        Groups with these mirrors and more.
    decisions : tuple of Decision
        One for each pair of `exactly`.
    """

    mirror_group: GroupName
    exactly: tuple[Candidate, ...]
    at_least: tuple[Candidate, ...]
    decisions: tuple[Decision, ...]

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "mirror_group": self.mirror_group.hermann_mauguin,
            "exactly": [candidate.to_dict() for candidate in self.exactly],
            "at_least": [candidate.to_dict() for candidate in self.at_least],
            "decisions": [decision.to_dict() for decision in self.decisions],
        }


def candidates_of(finding: Finding) -> Candidates:
    """Point groups that the mirrors of a finding leave open.

    Raises
    ------
    RankError
        When the finding has no finite group, or one of more than three dimensions.
    """
    if finding.group is None or finding.point_group is None:
        what = f"finding is {finding.kind}" if finding.group is None else f"mirrors of rank {finding.rank}"
        msg = f"{what}: only mirrors through one point of space, with a finite group, are those of a point group"
        raise RankError(msg)
    name, _ = parse_symbol(finding.point_group.schoenflies)
    return candidates_with_mirrors(in_space(finding.group.simple), finding.group.letters, name)


def candidates_for(symbol: str) -> Candidates:
    """Point groups with the mirrors of a group: those of "-42m" are the two of mm2; "1" asks for groups without any."""
    group = point_group(symbol)
    normals = group.mirror_normals
    simple = _independent(normals)
    return candidates_with_mirrors(simple, (), group.mirror_subgroup)


def _independent(normals: NDArray) -> NDArray[np.float64]:
    """Simple mirrors for a group with these mirrors: those that wall a chamber around a general direction."""
    if not len(normals):
        return normals
    inside = np.array([0.9133, 0.3541, 0.2011])
    heights = normals @ inside
    facing = normals * np.sign(heights)[:, None]
    order = np.argsort(np.abs(heights))
    walls: list[NDArray] = []
    for row in facing[order]:
        # A mirror is a wall unless its normal is a sum of walls with positive parts, all of them nearer.
        if not walls or not _in_cone(np.array(walls), row):
            walls.append(row)
    return np.array(walls)


def _in_cone(walls: NDArray, row: NDArray) -> bool:
    parts, *_ = np.linalg.lstsq(walls.T, row, rcond=None)
    return bool(np.allclose(parts @ walls, row, atol=ROUND_OFF) and (parts > -ROUND_OFF).all())


def candidates_with_mirrors(
    normals: ArrayLike, letters: tuple[str, ...], name: GroupName, lattice_only: bool | None = None
) -> Candidates:
    """As `candidates_of`, from simple mirrors.

    Parameters
    ----------
    normals : array_like, shape (r, 3)
        Unit normals of simple mirrors.
    letters : tuple of str
        What they are called in sentences; may be empty.
    name : GroupName
        The group they generate.
    lattice_only : bool, optional
        Look among the 32 only; by default among the 32 for mirrors that a lattice can carry, and among the groups
        without a lattice otherwise.
    """
    rows = np.asarray(normals, float).reshape(-1, 3)
    count = mirror_count(name)
    only = name.crystallographic if lattice_only is None else lattice_only
    found = []
    for other in _names_to_try(name, count, only):
        group = point_group(other)
        rotation = lay_on(rows, group)
        if rotation is not None:
            found.append(Candidate(group, rotation, len(group.mirrors) == count))
    exactly = tuple(candidate for candidate in found if candidate.exact)
    at_least = tuple(candidate for candidate in found if not candidate.exact)
    decisions = tuple(decide(a, b, rows, letters) for a, b in combinations(exactly, 2))
    return Candidates(name, exactly, at_least, decisions)


def mirror_count(name: GroupName) -> int:
    """How many mirrors a group of a type has."""
    counts = {"C": 0, "S": 0, "D": 0, "Ch": 1, "Cv": name.n, "Dd": name.n, "Dh": name.n + 1}
    several = {"T": 0, "O": 0, "I": 0, "Th": 3, "Td": 6, "Oh": 9, "Ih": 15}
    return counts[name.family] if name.n else several[name.family]


def _names_to_try(name: GroupName, count: int, lattice_only: bool) -> list[GroupName]:
    """Types whose number of mirrors and order leave room for these mirrors."""
    if lattice_only:
        pool = [parse_symbol(symbol)[0] for symbol in THE_32]
    else:
        own = (name, GroupName("Dd", name.n)) if name.n else (name,)
        pool = list(dict.fromkeys((*without_lattice(), *own)))
    return [
        other
        for other in pool
        if mirror_count(other) >= count
        and other.order % name.order == 0
        and (lattice_only or not (name.n and other.n) or other.n % name.n == 0 or name.n <= 2)
    ]


def decide(
    first: Candidate, second: Candidate, normals: ArrayLike, letters: tuple[str, ...] = ()
) -> Decision:
    """What tells two candidates apart: a centre if only one has it, else an axis that only one has.

    Parameters
    ----------
    normals : array_like, shape (r, 3)
        Unit normals of the mirrors in their own frame, so that an axis can be placed by them.
    letters : tuple of str
        Names of these mirrors.
    """
    a, b = first.group, second.group
    names = (a.hermann_mauguin, b.hermann_mauguin)
    if a.centrosymmetric != b.centrosymmetric:
        having = names[0] if a.centrosymmetric else names[1]
        sentence = f"A {_CENTRE} decides between {names[0]} and {names[1]}: only {having} has one."
        return Decision(*names, _CENTRE, having, sentence)
    kinds = _axis_kinds(a), _axis_kinds(b)
    only = [sorted(set(kinds[i]) - set(kinds[1 - i]), key=_strength) for i in (0, 1)]
    if only[0] or only[1]:
        clues = [
            (names[i], only[i][0], _words(only[i][0], kinds[i], candidate, normals, letters))
            for i, candidate in enumerate((first, second))
            if only[i]
        ]
        having, kind, words = clues[0]
        sentence = f"{words.capitalize()} decides between {names[0]} and {names[1]}: only {having} has one."
        if len(clues) == 2:
            sentence = f"{words.capitalize()} speaks for {having}, {clues[1][2]} for {clues[1][0]}."
        return Decision(*names, _axis_name(kind), having, sentence)
    kind = min((k for k in kinds[0] if len(kinds[0][k]) != len(kinds[1][k])), key=_strength)
    counts = [len(kinds[i][kind]) for i in (0, 1)]
    having = names[int(counts[1] > counts[0])]
    sentence = (
        f"The number of {_axis_name(kind)[:-4]}axes decides between {names[0]} and {names[1]}: "
        f"{names[0]} has {counts[0]}, {names[1]} has {counts[1]}."
    )
    return Decision(*names, f"{_axis_name(kind)}, number of", having, sentence)


@lru_cache(maxsize=256)
def _axis_kinds(group: NamedGroup) -> dict[str, list[Element]]:
    """The axes of a group by kind: 2, 3, 4, 6, and -4, -6 where no centre stands for the rotoinversion."""
    kinds: dict[str, list[Element]] = {}
    for element in elements_of(group.cartesian):
        inverted = not group.centrosymmetric and element.rotoinversion > element.rotation
        if inverted:
            kinds.setdefault(f"-{element.rotoinversion}", []).append(element)
        elif element.rotation > 1:
            kinds.setdefault(f"{element.rotation}", []).append(element)
    return kinds


def _strength(kind: str) -> tuple[int, bool]:
    """Sorts the kinds of axes, the highest order first, rotations before rotoinversions."""
    return -int(kind.lstrip("-")), kind.startswith("-")


def _axis_name(kind: str) -> str:
    fold = int(kind.lstrip("-"))
    return f"{_FOLDS.get(fold, f'{fold}-fold')} {'rotoinversion ' if kind.startswith('-') else ''}axis"


def _words(
    kind: str,
    kinds: dict[str, list[Element]],
    candidate: Candidate,
    normals: ArrayLike,
    letters: tuple[str, ...],
) -> str:
    name = _axis_name(kind)
    article = "an" if name.startswith(("e", "8", "11-", "18-")) else "a"
    if len(kinds[kind]) > 1:
        return f"{article} {name}"
    direction = candidate.rotation.T @ kinds[kind][0].direction
    return f"{article} {name}{_place(direction, np.asarray(normals, float).reshape(-1, 3), letters)}"


def _place(direction: NDArray, normals: NDArray, letters: tuple[str, ...]) -> str:
    """Where an axis stands, told by the mirrors; empty when they do not say."""
    cosines = np.abs(normals @ direction)
    named = list(letters) if len(letters) == len(normals) else ["" for _ in normals]
    for cosine, letter in zip(cosines, named, strict=True):
        if cosine > _PARALLEL:
            return f" perpendicular to mirror {letter}" if letter else " perpendicular to a mirror"
    through = [letter for cosine, letter in zip(cosines, named, strict=True) if cosine < ROUND_OFF]
    if len(through) > 1:
        return (
            f" along the line of mirrors {' and '.join(through)}"
            if through[0]
            else " along the line of the mirrors"
        )
    return ""
