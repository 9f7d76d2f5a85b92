"""Slow twins: the same questions answered from the definitions, sharing no code with the package."""

from __future__ import annotations

import itertools
import math
from fractions import Fraction
from types import SimpleNamespace

import numpy as np
import pytest


def table(fractions, size):
    """Angles row by row as an n by n list of fractions, 1 on the diagonal."""
    filled = [[Fraction(1)] * size for _ in range(size)]
    for f, (i, j) in zip(fractions, itertools.combinations(range(size), 2), strict=True):
        filled[i][j] = filled[j][i] = Fraction(f)
    return filled


def gram(fractions, size):
    """Gram matrix of inward normals from the angles between mirrors."""
    return -np.cos(np.pi * np.array(table(fractions, size), dtype=float))


def normals(fractions, size):
    """Unit normals with the given angles, by eigenvectors; as many columns as there are positive eigenvalues."""
    values, vectors = np.linalg.eigh(gram(fractions, size))
    assert values[0] > -1e-9
    keep = values > 1e-9
    return vectors[:, keep] * np.sqrt(values[keep])


def reflection(normal):
    return np.eye(len(normal)) - 2 * np.outer(normal, normal) / (normal @ normal)


def mirrors(given, most):
    """All mirrors that reflections make of the given ones, one normal each; None beyond `most` of them."""
    found = np.empty((0, given.shape[1]))
    fresh = given
    while len(fresh):
        for row in fresh:
            same = np.minimum(np.abs(found - row).max(axis=1), np.abs(found + row).max(axis=1)) < 1e-7
            if not same.any():
                found = np.vstack([found, row])
        if len(found) > most:
            return None
        images = np.concatenate([found - 2 * np.outer(found @ m, m) for m in given])
        apart = np.abs(images[:, None, :] - found[None]).max(axis=2)
        turned = np.abs(images[:, None, :] + found[None]).max(axis=2)
        fresh = images[(np.minimum(apart, turned) > 1e-7).all(axis=1)]
    return found


def elements(generators, most):
    """All products of the given reflections, as matrices, by breadth-first search; None beyond `most`."""
    steps = [reflection(row) for row in generators]
    identity = np.eye(generators.shape[1])
    seen = {key(identity)}
    result, frontier = [identity], [identity]
    while frontier:
        new = []
        for g in frontier:
            for s in steps:
                image = s @ g
                if key(image) not in seen:
                    seen.add(key(image))
                    new.append(image)
        result += new
        if len(result) > most:
            return None
        frontier = new
    return np.array(result)


def key(matrix):
    return tuple(np.round(matrix, 5).ravel() + 0.0)


def chambers_between(typed, group, inside):
    """How many images of a point off every mirror lie between the typed mirrors: one in each chamber there."""
    return int(((group @ inside) @ typed.T > 0).all(axis=1).sum())


def count_tuples(typed, roots, symmetries):
    """Tuples of positive roots with the typed products, over the symmetries of the graph: chambers between.

    A chamber w(C) lies between the typed mirrors exactly when w carries their normals to positive roots.
    """
    weights = np.sqrt([2.0, 3.0, 5.0, 7.0, 11.0, 13.0, 17.0, 19.0])[: roots.shape[1]]
    positive = roots[roots @ weights > 0]
    products = positive @ positive.T
    wanted = typed @ typed.T

    def extend(chosen):
        k = len(chosen)
        if k == len(typed):
            return 1
        fits = np.ones(len(positive), dtype=bool)
        for i, root in enumerate(chosen):
            fits &= np.abs(products[root] - wanted[i, k]) < 1e-6
        return sum(extend([*chosen, int(root)]) for root in np.flatnonzero(fits))

    total = extend([])
    assert total % symmetries == 0
    return total // symmetries


def apply_word(word, letters, walls, point):
    """The image of a point under a product of reflections; the last letter acts first."""
    for letter in reversed(word):
        normal = walls[letters.index(letter)]
        point = point - 2 * (point @ normal) * normal
    return point


@pytest.fixture(scope="session")
def slow():
    """The slow twins, by name."""
    return SimpleNamespace(
        table=table,
        gram=gram,
        normals=normals,
        reflection=reflection,
        mirrors=mirrors,
        elements=elements,
        key=key,
        chambers_between=chambers_between,
        count_tuples=count_tuples,
        apply_word=apply_word,
        fractions=lambda most: sorted({Fraction(k, m) for m in range(2, most + 1) for k in range(1, m)}),
        degrees=lambda u, v: math.degrees(math.acos(max(-1.0, min(1.0, float(u @ v))))),
    )
