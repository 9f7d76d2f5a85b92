"""Edges of the characteristic triangles, and the triangles that close on a sphere.

Sources: H. S. M. Coxeter, *Regular Polytopes* (3rd edition, Dover 1973), sections 2.4, 2.5 and 5.4 and tables I and
III; H. A. Schwarz, J. reine angew. Math. 75 (1873) 292–335; H. S. M. Coxeter, M. S. Longuet-Higgins and
J. C. P. Miller, Phil. Trans. R. Soc. A 246 (1954) 401–450, table 3 with the densities. Values from memory; each edge
is confirmed by cos φ = cos(π/p)/sin(π/q), each density by the area of its triangle.
"""

from __future__ import annotations

import itertools
import math
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement


def dms(degrees, minutes=0, seconds=0):
    return degrees + minutes / 60 + seconds / 3600


# angles: the three edges, ascending, to a second of arc
EDGES = {
    ("90", "60", "60"): (dms(54, 44, 8), dms(54, 44, 8), dms(70, 31, 44)),
    ("90", "60", "45"): (dms(35, 15, 52), dms(45), dms(54, 44, 8)),
    ("90", "60", "36"): (dms(20, 54, 19), dms(31, 43, 3), dms(37, 22, 39)),
}


@pytest.mark.parametrize("angles", EDGES)
def test_edges(angles):
    corners = Arrangement.from_angles(angles).finding().group.corners
    apart = [math.degrees(math.acos(u @ v)) for u, v in itertools.combinations(corners, 2)]
    assert np.abs(np.sort(apart) - EDGES[angles]).max() < 0.51 / 3600


@pytest.mark.parametrize(("p", "q"), [(3, 3), (3, 4), (4, 3), (3, 5), (5, 3)])
def test_edges_by_formula(p, q):
    """In a right triangle with angles π/p and π/q: the side that faces π/p has cos φ = cos(π/p)/sin(π/q)."""
    group = Arrangement.from_angles(["90", F(1, p), F(1, q)]).finding().group  # ab 90, ac π/p, bc π/q
    corners = group.corners  # corner i faces wall i
    # Corner of walls a and c holds π/p and is corner b; it faces wall b, between corners a and c.
    facing_p = math.acos(corners[0] @ corners[2])
    assert math.cos(facing_p) == pytest.approx(math.cos(math.pi / p) / math.sin(math.pi / q), abs=1e-12)


# The triangles (p q r), angles π/p, π/q, π/r, by density: how often they cover the sphere, seen per chamber.
SCHWARZ = {
    1: ["2 3 3", "2 3 4", "2 3 5"],
    2: ["3/2 3 3", "3/2 4 4", "3/2 5 5", "5/2 3 3"],
    3: ["2 3/2 3", "2 5/2 5"],
    4: ["3 4/3 4", "3 5/3 5"],
    5: ["2 3/2 3/2", "2 3/2 4"],
    6: ["3/2 3/2 3/2", "5/2 5/2 5/2", "3/2 3 5", "5/4 5 5"],
    7: ["2 3 4/3", "2 3 5/2"],
    8: ["3/2 5/2 5"],
    9: ["2 5/3 5"],
    10: ["3 5/3 5/2", "3 5/4 5"],
    11: ["2 3/2 4/3", "2 3/2 5"],
    13: ["2 3 5/3"],
    14: ["3/2 4/3 4/3", "3/2 5/2 5/2", "3 3 5/4"],
    16: ["3 5/4 5/2"],
    17: ["2 3/2 5/2"],
    18: ["3/2 3 5/3", "5/3 5/3 5/2"],
    19: ["2 3 5/4"],
    21: ["2 5/4 5/2"],
    22: ["3/2 3/2 5/2"],
    23: ["2 3/2 5/3"],
    26: ["3/2 5/3 5/3"],
    27: ["2 5/4 5/3"],
    29: ["2 3/2 5/4"],
    32: ["3/2 5/4 5/3"],
    34: ["3/2 3/2 5/4"],
    38: ["3/2 5/4 5/4"],
    42: ["5/4 5/4 5/4"],
}
TRIANGLES = {
    tuple(sorted(1 / F(v) for v in text.split())): density
    for density, texts in SCHWARZ.items()
    for text in texts
}


def test_the_list_is_whole():
    assert len(TRIANGLES) == 44


@pytest.mark.parametrize("angles", TRIANGLES, ids=lambda angles: " ".join(str(1 / f) for f in angles))
def test_each_closes_with_its_density(angles):
    for order in set(itertools.permutations(angles)):
        finding = Arrangement.from_angles(order).finding()
        assert finding.kind == ("closed" if TRIANGLES[angles] == 1 else "closed-subdivided")
        assert finding.chambers_between == TRIANGLES[angles]
    fives = any(f.denominator == 5 for f in angles)
    fours = any(f.denominator == 4 for f in angles)
    assert finding.families == ("H3" if fives else "B3" if fours else "A3",)
    assert (sum(angles) - 1) * finding.order / 4 == TRIANGLES[angles]


def test_no_other_triangle_closes():
    """Of all kπ/m with m up to 7, only these and the triangles with two right angles close."""
    options = sorted({F(k, m) for m in range(2, 8) for k in range(1, m)})
    closing = set()
    for triple in itertools.combinations_with_replacement(options, 3):
        if sum(triple) > 1 and triple.count(F(1, 2)) < 2:
            finding = Arrangement.from_angles(triple).finding()
            if finding.kind.startswith("closed"):
                closing.add(triple)
    assert closing == set(TRIANGLES)


@pytest.mark.parametrize("m", range(2, 13))
def test_two_right_angles_close_with_any_third(m):
    """The triangles (2 2 n/d) have density d."""
    for k in range(1, m):
        f = F(k, m)
        finding = Arrangement.from_angles(["90", "90", f]).finding()
        assert finding.chambers_between == f.numerator
        assert finding.order == 4 * f.denominator
