"""What Mirrorlab says of an arrangement: its kind, its group, and the evidence for it."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.flags import Flag, four_cos_squared
from mirrorlab.mirrors.group import ReflectionGroup
from mirrorlab.mirrors.symbols import PointGroup, point_group, rotation_group
from mirrorlab.mirrors.tube import Tube

if TYPE_CHECKING:
    from mirrorlab.mirrors.arrangement import Arrangement
    from mirrorlab.mirrors.closure import Part
    from mirrorlab.mirrors.suggestions import Suggestion

CLOSED = "closed"
SUBDIVIDED = "closed-subdivided"
OPEN = "open"
TUBE = "tube"
UNBUILDABLE = "unbuildable"


@dataclass(frozen=True, slots=True, eq=False)
class Evidence:
    """Numbers that a person can check by hand.

    Attributes
    ----------
    gram : ndarray, shape (n, n)
        −cos of the angles, 1 on the diagonal; with `determinant` and `eigenvalues`.
    four_cos : tuple
        (pair, 4cos², product order or None) for each pair.
    bounds : tuple of str
        The bound used for each part that does not split.
    broken : tuple of str
        What breaks a bound, for `open`.
    witness : tuple or None
        Two generated mirrors that stand too close: (word, word, degrees).
    """

    gram: NDArray[np.float64]
    determinant: float
    eigenvalues: NDArray[np.float64]
    four_cos: tuple[tuple[str, float | int, int | None], ...]
    bounds: tuple[str, ...]
    broken: tuple[str, ...]
    witness: tuple[str, str, float] | None

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "gram": self.gram.tolist(),
            "determinant": self.determinant,
            "eigenvalues": self.eigenvalues.tolist(),
            "pairs": [
                {"mirrors": pair, "four_cos_squared": value, "product_order": order}
                for pair, value, order in self.four_cos
            ],
            "bounds": list(self.bounds),
            "broken": list(self.broken),
            "witness": None
            if self.witness is None
            else {"mirrors": list(self.witness[:2]), "degrees_apart": self.witness[2]},
        }


@dataclass(frozen=True, eq=False)
class Finding:
    """What Mirrorlab says of an arrangement.

    Attributes
    ----------
    kind : str
        "closed", "closed-subdivided", "open", "tube" or "unbuildable".
    rank : int
        Dimension that the mirrors' normals span (of the Gram matrix, for angles).
    group : ReflectionGroup or None
        The finite group; None unless the kind begins with "closed".
    chambers_between : int or None
        Chambers of the group in the region between the typed mirrors; None where dependent normals, or angles
        that do not close, leave no such number.
    crystallographic : bool or None
        Whether a lattice can carry the group; None for "unbuildable".
    flags : tuple of Flag
    tube : Tube or None
    evidence : Evidence
    """

    kind: str
    rank: int
    group: ReflectionGroup | None
    chambers_between: int | None
    crystallographic: bool | None
    flags: tuple[Flag, ...]
    tube: Tube | None
    evidence: Evidence
    parts: tuple[Part, ...] = field(repr=False)
    _spell: Callable[[], tuple[str, ...]] = field(repr=False)
    _suggest: Callable[[], tuple[Suggestion, ...]] = field(repr=False)
    _supplements: Callable[[], tuple[Suggestion, ...]] = field(repr=False)

    @property
    def finite(self) -> bool:
        """Whether the reflections close up."""
        return self.group is not None

    @property
    def families(self) -> tuple[str, ...]:
        """Families of the group's irreducible parts, empty when it is not finite."""
        return () if self.group is None else self.group.families

    @property
    def order(self) -> int | None:
        """Number of elements, None when infinite."""
        return None if self.group is None else self.group.order

    @property
    def mirror_count(self) -> int | None:
        """Number of mirrors, None when infinite."""
        return None if self.group is None else self.group.mirror_count

    @property
    def point_group(self) -> PointGroup | None:
        """Symbols of the group in three dimensions, for rank up to 3."""
        if self.group is None:
            return None
        return point_group(tuple(component.family for component in self.group.components))

    @property
    def rotation_group(self) -> PointGroup | None:
        """Symbols of the rotation subgroup, for rank up to 3."""
        if self.group is None:
            return None
        return rotation_group(tuple(component.family for component in self.group.components))

    @cached_property
    def suggestions(self) -> tuple[Suggestion, ...]:
        """The nearest sets of angles that close, or make a tube that tiles, by largest change.

        Angles are changed only to what is of use; see `mirrorlab.mirrors.usable`. Empty when the kind is "closed". For
        rooms (four mirrors or more of a tube or cell, or with a parallel pair) the nearest one with right angles, at
        the most: as many mirrors that close need more than three dimensions.
        """
        return self._suggest()

    @cached_property
    def wall_words(self) -> tuple[str, ...]:
        """For each wall of the true chamber its typed letter, or a word such as "ab(c)": c seen in b, that in a."""
        return self._spell()

    @cached_property
    def supplements(self) -> tuple[Suggestion, ...]:
        """Sets with one angle θ read as 180° − θ that close, when these do not."""
        return self._supplements()

    @cached_property
    def sentence(self) -> str:
        """The finding as one sentence."""
        from mirrorlab.mirrors.sentence import sentence

        return sentence(self)

    def to_dict(self) -> dict[str, object]:
        """Plain JSON, with the evidence and, for a finite group, its numbers."""
        symbols = self.point_group
        rotations = self.rotation_group
        group = self.group
        return {
            "kind": self.kind,
            "rank": self.rank,
            "families": list(self.families),
            "order": self.order,
            "mirror_count": self.mirror_count,
            "chambers_between": self.chambers_between,
            "crystallographic": self.crystallographic,
            "flags": [flag.to_dict() for flag in self.flags],
            "point_group": None if symbols is None else symbols.to_dict(),
            "tube": None if self.tube is None else self.tube.to_dict(),
            "suggestions": [suggestion.to_dict() for suggestion in (*self.supplements, *self.suggestions)],
            "evidence": self.evidence.to_dict(),
            "sentence": self.sentence,
            "group": None
            if group is None
            else {
                "degrees": list(group.degrees),
                "exponents": list(group.exponents),
                "coxeter_numbers": list(group.coxeter_numbers),
                "contains_inversion": group.contains_inversion,
                "rotation_order": group.rotation_order,
                "rotation_point_group": None if rotations is None else rotations.to_dict(),
                "letters": list(group.letters),
                "walls": dict(zip(group.letters, self.wall_words, strict=True)),
                "simple_mirrors": group.simple.tolist(),
                "cartan_matrix": group.cartan.tolist(),
                "coxeter_matrix": group.coxeter_matrix.tolist(),
                "graph": [
                    {
                        "mirrors": [group.letters[i], group.letters[j]],
                        "order": int(group.coxeter_matrix[i, j]),
                    }
                    for i in range(group.rank)
                    for j in range(i + 1, group.rank)
                    if group.coxeter_matrix[i, j] > 2
                ],
            },
        }


def gather_evidence(arrangement: Arrangement, parts: tuple[Part, ...]) -> Evidence:
    """The numbers behind a finding."""
    gram = arrangement.gram
    rows = []
    for angle, (i, j) in zip(arrangement.angles, arrangement.pairs, strict=True):
        name = arrangement.letters[i] + arrangement.letters[j]
        f = angle.fraction
        value = 4 * math.cos(angle.radians) ** 2 if f is None else four_cos_squared(f)
        rows.append((name, value, None if f is None or f == 0 else f.denominator))
    broken = tuple(part.broken for part in parts if part.broken)
    witness = next((part.witness for part in parts if part.witness), None)
    return Evidence(
        gram,
        float(np.linalg.det(gram)),
        np.asarray(np.linalg.eigvalsh(gram), dtype=np.float64),
        tuple(rows),
        tuple(part.bound for part in parts if part.bound),
        broken,
        witness,
    )
