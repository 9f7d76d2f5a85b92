"""Cartan matrices, numbers of roots and automorphisms of graphs.

Source: N. Bourbaki, *Groupes et algèbres de Lie*, chapters IV–VI, plates I–IX; matrices written out from memory.
"""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement

MATRICES = {
    "A3": [[2, -1, 0], [-1, 2, -1], [0, -1, 2]],
    "B3": [[2, -1, 0], [-1, 2, -2], [0, -1, 2]],
    "B4": [[2, -1, 0, 0], [-1, 2, -1, 0], [0, -1, 2, -2], [0, 0, -1, 2]],
    "D4": [[2, -1, 0, 0], [-1, 2, -1, -1], [0, -1, 2, 0], [0, -1, 0, 2]],
    "D5": [[2, -1, 0, 0, 0], [-1, 2, -1, 0, 0], [0, -1, 2, -1, -1], [0, 0, -1, 2, 0], [0, 0, -1, 0, 2]],
    "E6": [
        [2, 0, -1, 0, 0, 0],
        [0, 2, 0, -1, 0, 0],
        [-1, 0, 2, -1, 0, 0],
        [0, -1, -1, 2, -1, 0],
        [0, 0, 0, -1, 2, -1],
        [0, 0, 0, 0, -1, 2],
    ],
    "E7": [
        [2, 0, -1, 0, 0, 0, 0],
        [0, 2, 0, -1, 0, 0, 0],
        [-1, 0, 2, -1, 0, 0, 0],
        [0, -1, -1, 2, -1, 0, 0],
        [0, 0, 0, -1, 2, -1, 0],
        [0, 0, 0, 0, -1, 2, -1],
        [0, 0, 0, 0, 0, -1, 2],
    ],
    "E8": [
        [2, 0, -1, 0, 0, 0, 0, 0],
        [0, 2, 0, -1, 0, 0, 0, 0],
        [-1, 0, 2, -1, 0, 0, 0, 0],
        [0, -1, -1, 2, -1, 0, 0, 0],
        [0, 0, 0, -1, 2, -1, 0, 0],
        [0, 0, 0, 0, -1, 2, -1, 0],
        [0, 0, 0, 0, 0, -1, 2, -1],
        [0, 0, 0, 0, 0, 0, -1, 2],
    ],
    "F4": [[2, -1, 0, 0], [-1, 2, -2, 0], [0, -1, 2, -1], [0, 0, -1, 2]],
    "G2": [[2, -1], [-3, 2]],
}

ROOTS = {
    **{f"A{n}": n * (n + 1) for n in range(1, 9)},
    **{f"B{n}": 2 * n * n for n in range(2, 9)},
    **{f"D{n}": 2 * n * (n - 1) for n in range(4, 9)},
    "E6": 72,
    "E7": 126,
    "E8": 240,
    "F4": 48,
    "G2": 12,
}

DETERMINANTS = {
    "A3": 4,
    "A7": 8,
    "B3": 2,
    "B8": 2,
    "D4": 4,
    "D7": 4,
    "E6": 3,
    "E7": 2,
    "E8": 1,
    "F4": 1,
    "G2": 1,
}
"""Index of the root lattice in the weight lattice: item VIII of each plate."""


@pytest.mark.parametrize("name", MATRICES)
def test_cartan_matrices(name):
    found = Arrangement.from_family(name).finding().group.cartan
    assert found.tolist() == MATRICES[name]


@pytest.mark.parametrize("name", ROOTS)
def test_numbers_of_roots(name):
    assert 2 * Arrangement.from_family(name).finding().mirror_count == ROOTS[name]


@pytest.mark.parametrize("name", DETERMINANTS)
def test_determinants(name):
    cartan = Arrangement.from_family(name).finding().group.cartan
    assert round(float(np.linalg.det(cartan))) == DETERMINANTS[name]


@pytest.mark.parametrize("name", ROOTS)
def test_roots_are_whole_combinations_of_simple_ones(name):
    """Chapter VI, 1.6, theorem 3: every root is a whole combination of the simple ones, all of one sign."""
    group = Arrangement.from_family(name).finding().group
    cartan = group.cartan
    lengths = np.full(group.rank, np.nan)
    lengths[0] = 1.0
    for _ in range(group.rank):  # a(i, j) / a(j, i) is the ratio of the squares of the lengths of i and j
        for i in range(group.rank):
            for j in range(group.rank):
                if cartan[i, j] and not np.isnan(lengths[i]):
                    lengths[j] = lengths[i] * np.sqrt(cartan[j, i] / cartan[i, j])
    simple = group.simple * lengths[:, None]
    sizes = np.unique(np.round(lengths, 9))
    for normal in group.mirrors:
        steps = np.array([np.linalg.solve(simple.T, normal * size) for size in sizes])
        whole = np.abs(steps - np.round(steps)).max(axis=1) < 1e-9
        assert whole.any()
        assert (np.round(steps[whole][0]) >= 0).all()
