"""The orientation in which a list of points obeys a group best.

The points are averaged over the operations: each with all points that are moved to it. The average obeys the group as
it stands, so the rotation that lays the points on their averages [1]_ turns them towards the orientation that is looked
for; repeated until nothing moves. The reach of the pairing starts wide and narrows.

References
----------
.. [1] W. Kabsch, Acta Cryst. A32 (1976) 922–923.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.matching import REACH, match_points, nearest_both_ways

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

WIDEST = 0.3
"""Share of the list's size within which partners are looked for at first: about 15° of misorientation."""

NARROWING = 0.7
"""Each round's reach over that of the round before."""

FEW = 12
"""Operations that are used while the reach is wide; all of them at the end."""

MOST_ROUNDS = 60
SETTLED = 1e-12
"""Radians below which a round's turn ends the refinement."""

STARTS = 6000
"""Orientations tried in a search: they lie about 12° apart, and symmetry makes them denser."""

SEED = 7
"""Of the random orientations, so that a search gives the same answer every time."""

REFINED = 30
"""The best of them, which are refined and compared."""

SAMPLE = 60
"""Points used for trying starts; the refinement uses all."""

TESTS = 4
"""Operations used for trying starts."""


@dataclass(frozen=True, eq=False)
class Orientation:
    """How a list was turned.

    Attributes
    ----------
    how : str
        "given", "refined" or "searched".
    rotation : ndarray, shape (3, 3)
        From the frame of the list to that of the group's standard setting.
    angle : float
        Degrees of that rotation.
    axis : ndarray, shape (3,)
        Its axis, a unit vector.
    rounds : int
    """

    how: str
    rotation: Array
    angle: float
    axis: Array
    rounds: int

    @classmethod
    def as_given(cls) -> Orientation:
        """Not turned."""
        return cls("given", np.eye(3), 0.0, np.array([0.0, 0.0, 1.0]), 0)

    @classmethod
    def of(cls, how: str, rotation: Array, rounds: int) -> Orientation:
        """Turned by a rotation."""
        from scipy.spatial.transform import Rotation

        vector = Rotation.from_matrix(rotation).as_rotvec()
        size = float(np.linalg.norm(vector))
        axis = vector / size if size > SETTLED else np.array([0.0, 0.0, 1.0])
        return cls(how, rotation, float(np.degrees(size)), axis, rounds)

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "how": self.how,
            "rotation": self.rotation.tolist(),
            "angle_degrees": self.angle,
            "axis": self.axis.tolist(),
            "rounds": self.rounds,
        }


def kabsch(start: ArrayLike, end: ArrayLike) -> Array:
    """The rotation that lays points on others with the least sum of squares, shape (3, 3).

    Parameters
    ----------
    start, end : array_like, shape (n, 3)
        ``rotation @ start[i]`` is near ``end[i]``.
    """
    left, _, right = np.linalg.svd(np.asarray(end, float).T @ np.asarray(start, float))
    sign = np.sign(np.linalg.det(left @ right))
    return np.asarray(left @ np.diag([1.0, 1.0, sign]) @ right)


def refine_orientation(
    points: Array, matrices: Array, allowed: Array, kinds: Whole, start: Orientation | None = None
) -> Orientation:
    """Turn points so that they obey the operations best, from where they stand.

    Parameters
    ----------
    points : ndarray, shape (n, 3)
    matrices : ndarray, shape (order, 3, 3)
        Orthogonal, in the standard setting.
    allowed : ndarray, shape (n,)
        As `match_points` takes it.
    kinds : ndarray of int, shape (n,)
    start : Orientation, optional
    """
    begin = Orientation.as_given() if start is None else start
    rotation, rounds = begin.rotation, 0
    if start is None:
        rotation, rounds = _narrowed(points, matrices, allowed, kinds, rotation, WIDEST)
    before: list[Whole] = []
    while rounds < MOST_ROUNDS:
        here = points @ rotation.T
        partners = [match_points(here @ matrix.T, here, allowed, REACH, kinds)[0] for matrix in matrices]
        if before and all((a == b).all() for a, b in zip(partners, before, strict=True)):
            break
        before = partners
        rotation = _settled(points, matrices, partners, rotation)
        rounds += 1
    how = "refined" if begin.how == "given" else begin.how
    return Orientation.of(how, rotation, begin.rounds + rounds)


def _narrowed(
    points: Array, matrices: Array, allowed: Array, kinds: Whole, rotation: Array, widest: float
) -> tuple[Array, int]:
    """A first approach with quick pairings, the reach shrinking from a share of the list's size to the final one."""
    few = matrices[:: max(1, len(matrices) // FEW)]
    last = float(np.median(allowed)) * REACH * np.sqrt(2)
    reach, rounds = widest * _size(points), 0
    while reach > last:
        here = points @ rotation.T
        partners = [nearest_both_ways(here @ matrix.T, here, reach, kinds) for matrix in few]
        rotation = kabsch(here, averaged(here, few, partners)) @ rotation
        reach *= NARROWING
        rounds += 1
    return rotation, rounds


def _settled(points: Array, matrices: Array, partners: Sequence[Whole], rotation: Array) -> Array:
    """Turned until nothing moves, with the pairings as they are."""
    for _ in range(MOST_ROUNDS):
        here = points @ rotation.T
        turn = kabsch(here, averaged(here, matrices, partners))
        rotation = turn @ rotation
        if np.linalg.norm(turn - np.eye(3)) < SETTLED:
            break
    return rotation


def _size(points: Array) -> float:
    return float(np.sqrt(np.mean(np.sum(points**2, axis=1)))) or 1.0


def averaged(points: Array, matrices: Array, partners: Sequence[Whole]) -> Array:
    """Each point averaged with those that operations move it to, moved back; shape (n, 3)."""
    total, count = np.zeros_like(points), np.zeros(len(points))
    for matrix, partner in zip(matrices, partners, strict=True):
        there = partner >= 0
        total[there] += (
            points[partner[there]] @ matrix
        )  # the inverse of an orthogonal matrix is its transpose
        count += there
    return np.asarray(np.where(count[:, None] > 0, total / np.maximum(count, 1.0)[:, None], points))


def search_orientation(points: Array, matrices: Array, allowed: Array, kinds: Whole) -> Orientation:
    """The best orientation from any start; the parameters are those of `refine_orientation`."""
    from scipy.spatial import cKDTree
    from scipy.spatial.transform import Rotation

    rng = np.random.default_rng(SEED)
    turns = np.concatenate([np.eye(3)[None], Rotation.from_quat(rng.normal(size=(STARTS, 4))).as_matrix()])
    few = points if len(points) <= SAMPLE else points[rng.permutation(len(points))[:SAMPLE]]
    reach = WIDEST * _size(points)
    tree = cKDTree(points)
    tests = _telling(matrices)
    scores = np.zeros(len(turns))
    for matrix in tests:
        moved = np.einsum("kji,jl,klm,nm->kni", turns, matrix, turns, few)  # back-turn · operation · turn
        near, _ = tree.query(moved.reshape(-1, 3), distance_upper_bound=reach)
        scores += (np.minimum(near, reach) ** 2).reshape(len(turns), -1).sum(axis=1)
    best, lowest, rounds = turns[0], np.inf, 0
    for k in np.argsort(scores, kind="stable")[:REFINED]:
        rotation, rounds = _narrowed(points, matrices, allowed, kinds, turns[int(k)], WIDEST)
        cost = _misfit(points @ rotation.T, matrices, allowed)
        if cost < lowest * (1 - 1e-9):
            best, lowest = rotation, cost
    start = Orientation.of("searched", best, rounds)
    return refine_orientation(points, matrices, allowed, kinds, start)


def _telling(matrices: Array) -> list[Array]:
    """A few operations that decide an orientation: those of highest order first, and mirrors; never 1 or -1."""
    chosen = [m for m in matrices if abs(abs(np.trace(m)) - 3) > 1e-6]
    chosen.sort(key=lambda m: -abs(float(np.trace(m)) * np.linalg.det(m) - 0.4))
    return chosen[:: max(1, len(chosen) // TESTS)][:TESTS]


def _misfit(points: Array, matrices: Array, allowed: Array) -> float:
    """Sum over a few operations of squared distances to the nearest point, cut off at the final reach."""
    from scipy.spatial import cKDTree

    last = float(np.median(allowed)) * REACH * np.sqrt(2)
    tree = cKDTree(points)
    few = matrices[:: max(1, len(matrices) // FEW)]
    near, _ = tree.query(np.concatenate([points @ matrix.T for matrix in few]), distance_upper_bound=last)
    return float((np.minimum(near, last) ** 2).sum())
