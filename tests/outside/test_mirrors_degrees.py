"""Degrees, orders, mirrors, exponents and Coxeter numbers of every family up to rank 8.

Source: J. E. Humphreys, *Reflection Groups and Coxeter Groups* (Cambridge 1990), section 3.7, table 1 (degrees),
section 2.11, table 2 (orders), section 3.18 (Coxeter numbers); values from memory. The order is the product of the
degrees, the mirrors are the sum of the degrees less one, −1 is in the group when all degrees are even (3.7).
"""

from __future__ import annotations

from math import factorial

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement

# name: degrees, order, mirrors, Coxeter number
TABLE = {
    **{f"A{n}": (tuple(range(2, n + 2)), factorial(n + 1), n * (n + 1) // 2, n + 1) for n in range(1, 9)},
    **{f"B{n}": (tuple(range(2, 2 * n + 1, 2)), 2**n * factorial(n), n * n, 2 * n) for n in range(2, 9)},
    **{
        f"D{n}": (
            tuple(sorted([*range(2, 2 * n - 1, 2), n])),
            2 ** (n - 1) * factorial(n),
            n * (n - 1),
            2 * n - 2,
        )
        for n in range(4, 9)
    },
    "E6": ((2, 5, 6, 8, 9, 12), 2**7 * 3**4 * 5, 36, 12),
    "E7": ((2, 6, 8, 10, 12, 14, 18), 2**10 * 3**4 * 5 * 7, 63, 18),
    "E8": ((2, 8, 12, 14, 18, 20, 24, 30), 2**14 * 3**5 * 5**2 * 7, 120, 30),
    "F4": ((2, 6, 8, 12), 2**7 * 3**2, 24, 12),
    "G2": ((2, 6), 12, 6, 6),
    "H3": ((2, 6, 10), 120, 15, 10),
    "H4": ((2, 12, 20, 30), 14_400, 60, 30),
    **{f"I2({m})": ((2, m), 2 * m, m, m) for m in (5, 7, 8, 9, 10, 12, 30, 360)},
}

NO_INVERSION = {f"A{n}" for n in range(2, 9)} | {"D5", "D7", "E6"} | {f"I2({m})" for m in (5, 7, 9)}
NO_LATTICE = {"H3", "H4"} | {f"I2({m})" for m in (5, 7, 8, 9, 10, 12, 30, 360)}


@pytest.mark.parametrize("name", TABLE)
def test_the_table(name):
    degrees, order, mirrors, coxeter = TABLE[name]
    finding = Arrangement.from_family(name).finding()
    group = finding.group
    assert finding.kind == "closed"
    assert finding.families == (name,)
    assert group.degrees == degrees
    assert group.exponents == tuple(d - 1 for d in degrees)
    assert finding.order == order
    assert finding.mirror_count == len(group.mirrors) == mirrors
    assert group.coxeter_numbers == (coxeter,)
    assert group.contains_inversion == (name not in NO_INVERSION)
    assert finding.crystallographic == (name not in NO_LATTICE)
    assert group.rotation_order * 2 == order
    assert finding.chambers_between == 1


@pytest.mark.parametrize("name", [name for name in TABLE if TABLE[name][1] <= 2000])
def test_coxeter_element(name):
    """The product of all simple reflections has order h and eigenvalues exp(2πi·exponent/h) (section 3.16, 3.19)."""
    group = Arrangement.from_family(name).finding().group
    degrees, _, _, h = TABLE[name]
    product = np.eye(group.dimension)
    for normal in group.simple:
        product = product @ (np.eye(group.dimension) - 2 * np.outer(normal, normal))
    assert np.allclose(np.linalg.matrix_power(product, h), np.eye(group.dimension))
    turns = np.sort(np.angle(np.linalg.eigvals(product)) % (2 * np.pi)) * h / (2 * np.pi)
    assert np.allclose(turns, [d - 1 for d in degrees], atol=1e-6)


@pytest.mark.parametrize("name", [name for name in TABLE if 2 < TABLE[name][1] <= 14_400])
def test_elements_by_length(name):
    """How many elements have each length: the product of (1 + t + … + t^(d − 1)) over the degrees (section 3.15)."""
    degrees = TABLE[name][0]
    expected = np.array([1])
    for degree in degrees:
        expected = np.convolve(expected, np.ones(degree, dtype=int))
    orbit = Arrangement.from_family(name).orbit(place="centre")
    assert np.bincount(orbit.depth).tolist() == expected.tolist()


@pytest.mark.parametrize("rank", range(3, 9))
def test_nothing_else_is_finite(rank):
    """Section 2.7: a connected graph of a finite group is one of the table's. Here: every path with labels 3 to 5."""
    names = {name for name in TABLE if len(TABLE[name][0]) == rank}
    found = set()
    for at in range(rank - 1):
        for label in (3, 4, 5):
            angles = []
            for i in range(rank):
                for j in range(i + 1, rank):
                    angles.append(f"pi/{label if i == at else 3}" if j == i + 1 else "90")
            finding = Arrangement.from_angles(angles).finding()
            assert finding.kind in ("closed", "tube", "unbuildable")
            if finding.kind == "closed":
                found.add(finding.families[0])
    assert found == names - {f"D{rank}", f"E{rank}"}
