"""Laying given mirrors on the mirrors of a point group."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.identify import shortest_turn
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.pointgroups import NamedGroup

SAME_COSINE = 1e-7
"""Cosines of two angles between mirrors closer than this are equal; those of a group of order 1440 differ by 4e-5."""


class RankError(CrystalError):
    """Mirrors of more than three dimensions, or none where a finite group is needed."""


def in_space(vectors: ArrayLike) -> NDArray[np.float64]:
    """Vectors of one, two or three dimensions as rows of three numbers, zeros added behind.

    Raises
    ------
    RankError
        When they have more than three.
    """
    rows = np.atleast_2d(np.asarray(vectors, float))
    if rows.shape[1] > 3:
        msg = f"crystals have three dimensions, these mirrors stand in {rows.shape[1]}"
        raise RankError(msg)
    return np.pad(rows, ((0, 0), (0, 3 - rows.shape[1])))


def lay_on(normals: ArrayLike, group: NamedGroup) -> NDArray[np.float64] | None:
    """A proper rotation that lays mirrors on mirrors of a group, or None when there is none.

    Parameters
    ----------
    normals : array_like, shape (r, 3)
        Linearly independent unit normals, r = 0 to 3.

    Returns
    -------
    ndarray, shape (3, 3)
        Takes the given frame to the Cartesian frame of the group; of all that do, the one nearest the identity.
    """
    rows = np.asarray(normals, float).reshape(-1, 3)
    gram = rows @ rows.T
    found = [_turn(rows, images, group) for images in _images(gram, group.mirror_normals)]
    return max(found, key=np.trace) if found else None


def _images(gram: NDArray, mirrors: NDArray) -> Iterator[NDArray[np.float64]]:
    """All choices of signed mirror normals with the Gram matrix `gram`."""
    signed = np.concatenate([mirrors, -mirrors]) if len(mirrors) else np.zeros((0, 3))
    cosines = signed @ signed.T

    def extend(chosen: tuple[int, ...]) -> Iterator[NDArray[np.float64]]:
        size = len(chosen)
        if size == len(gram):
            yield signed[list(chosen)].reshape(-1, 3)
            return
        wanted = gram[size, :size]
        fits = np.ones(len(signed), bool)
        for place, cosine in zip(chosen, wanted, strict=True):
            fits &= np.abs(cosines[place] - cosine) < SAME_COSINE
        for place in np.flatnonzero(fits):
            yield from extend((*chosen, int(place)))

    yield from extend(())


def _turn(rows: NDArray, images: NDArray, group: NamedGroup) -> NDArray[np.float64]:
    if not len(rows):
        return np.eye(3)
    if len(rows) == 1:
        return shortest_turn(rows[0], images[0])
    start, end = _with_third(rows), _with_third(images)
    turn = end.T @ np.linalg.inv(start.T)
    if np.linalg.det(turn) < 0:  # the mirrored chamber: one of the group's own mirrors makes it a rotation
        normal = group.mirror_normals[0]
        turn = turn - 2 * np.outer(normal, normal @ turn)
    # Inverses of far from orthogonal triples lose some digits; the nearest rotation has them again.
    left, _, right = np.linalg.svd(turn)
    return left @ right


def _with_third(rows: NDArray) -> NDArray[np.float64]:
    return rows if len(rows) == 3 else np.vstack([rows, np.cross(rows[0], rows[1])])
