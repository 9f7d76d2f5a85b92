"""Edge angles, Schwarz triangles and folding against published tables and a reference library."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from scipy.spatial.transform import Rotation

from mirrorlab.optics import corner
from mirrorlab.optics.closing import closing_assemblies
from mirrorlab.optics.cutjob import make_cut_job
from mirrorlab.optics.glass import JointSettings
from mirrorlab.optics.panels import edge_angles, flatten_panels, tip_angle


def _dms(degrees, minutes, seconds):
    return degrees + minutes / 60 + seconds / 3600


# H. S. M. Coxeter, Regular Polytopes (3rd ed. 1973): edges of the characteristic triangles (values from memory,
# confirmed by cos φ = cos(π/p)/sin(π/q) for right triangles, in the test below).
CHARACTERISTIC = {
    (90, 60, 36): (_dms(20, 54, 19), _dms(31, 43, 3), _dms(37, 22, 39)),
    (90, 60, 45): (_dms(35, 15, 52), 45.0, _dms(54, 44, 8)),
    (90, 60, 60): (_dms(54, 44, 8), _dms(54, 44, 8), _dms(70, 31, 44)),
}
HALF_SECOND = 0.51 / 3600
"""Degrees; the printed values are rounded to a second."""


@pytest.mark.parametrize("angles", CHARACTERISTIC)
def test_edge_angles_of_the_characteristic_triangles(angles):
    found = sorted(np.degrees(edge_angles(*np.radians(angles))))
    assert found == pytest.approx(CHARACTERISTIC[angles], abs=HALF_SECOND)


@pytest.mark.parametrize("angles", CHARACTERISTIC)
def test_panels_are_cut_to_the_characteristic_triangles(angles):
    """The same from the flat panels of a corner as made, whole and with its point cut off."""
    for truncated in (0.0, 30.0):
        panels = flatten_panels(corner([str(a) for a in angles], 100, truncated=truncated))
        found = sorted(np.degrees([tip_angle(panel) for panel in panels]))
        assert found == pytest.approx(CHARACTERISTIC[angles], abs=HALF_SECOND)


@pytest.mark.parametrize("p", range(3, 12))
def test_right_spherical_triangles(p):
    """Napier's rule for right triangles, cos φ = cos(π/p)/sin(π/q): Coxeter, Regular Polytopes, section 2.4."""
    for q in (3, 4, 5):
        if 1 / p + 1 / q <= 1 / 2:
            continue
        first, _, third = edge_angles(np.pi / 2, np.pi / p, np.pi / q)
        # Mirror a carries the angles ab = 90° and ac = π/p; the side on it faces bc = π/q.
        assert np.cos(first) == pytest.approx(np.cos(np.pi / q) / np.sin(np.pi / p))
        # Mirror c carries π/p and π/q; the side on it faces the right angle.
        assert np.cos(third) == pytest.approx(1 / (np.tan(np.pi / p) * np.tan(np.pi / q)))


# The Schwarz triangles that are not prisms, by density (number of characteristic triangles): H. A. Schwarz,
# J. reine angew. Math. 75 (1873); Coxeter, Longuet-Higgins, Miller, Phil. Trans. R. Soc. A 246 (1954), table of
# Schwarz triangles. Values from memory; each density is confirmed from the area below.
SCHWARZ = {
    24: {1: ["2 3 3"], 2: ["3/2 3 3"], 3: ["2 3/2 3"], 5: ["2 3/2 3/2"], 6: ["3/2 3/2 3/2"]},
    48: {
        1: ["2 3 4"],
        2: ["3/2 4 4"],
        4: ["3 4/3 4"],
        5: ["2 3/2 4"],
        7: ["2 3 4/3"],
        11: ["2 3/2 4/3"],
        14: ["3/2 4/3 4/3"],
    },
    120: {
        1: ["2 3 5"],
        2: ["3/2 5 5", "5/2 3 3"],
        3: ["2 5/2 5"],
        4: ["3 5/3 5"],
        6: ["5/2 5/2 5/2", "3/2 3 5", "5/4 5 5"],
        7: ["2 3 5/2"],
        8: ["3/2 5/2 5"],
        9: ["2 5/3 5"],
        10: ["3 5/3 5/2", "3 5/4 5"],
        11: ["2 3/2 5"],
        13: ["2 3 5/3"],
        14: ["3/2 5/2 5/2", "3 3 5/4"],
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
    },
}


def _triangle(text):
    return tuple(sorted((1 / Fraction(part) for part in text.split()), reverse=True))


def test_the_listed_corners_are_the_schwarz_triangles():
    listed = {
        tuple(sorted(c.fractions, reverse=True)): (c.order, c.chambers)
        for c in closing_assemblies()
        if c.kind == "corner" and c.families in (("A3",), ("B3",), ("H3",))
    }
    printed = {
        _triangle(text): (order, density)
        for order, by_density in SCHWARZ.items()
        for density, texts in by_density.items()
        for text in texts
    }
    assert listed == printed


def test_densities_follow_from_the_areas():
    """Girard: area = sum of angles − π; the whole sphere, 4π, holds `order` characteristic triangles."""
    for order, by_density in SCHWARZ.items():
        for density, texts in by_density.items():
            for text in texts:
                assert (sum(_triangle(text)) - 1) * order / 4 == density


def test_corners_with_two_right_angles_are_all_there():
    """Coxeter: (2 2 n/d) closes for every rational; the group has order 4n and the region d chambers."""
    prisms = [
        c for c in closing_assemblies(9) if c.kind == "corner" and c.fractions[:2] == (Fraction(1, 2),) * 2
    ]
    found = {c.fractions[2]: (c.order, c.chambers) for c in prisms}
    expected = {Fraction(d, n): (4 * n, d) for n in range(2, 10) for d in range(1, n) if np.gcd(n, d) == 1}
    assert found == expected


@pytest.mark.parametrize("kind", ["mitred", "butted"])
@pytest.mark.parametrize("mirror", ["first-surface aluminium", "household glass"])
def test_folded_panes_turn_as_the_group_says(kind, mirror):
    """SciPy's rotations: the product of two mirrors at θ turns by 2θ; taken from panes folded by their bevels."""
    job = make_cut_job(corner(["90", "60", "36"], 120, mirrors=mirror), JointSettings.named(kind))
    for (one, other), angle in job.folded.dihedrals.items():
        normals = np.array([[1.0, 0, 0], [-np.cos(angle), np.sin(angle), 0]])
        mirrors = [np.eye(3) - 2 * np.outer(n, n) for n in normals]
        turn = Rotation.from_matrix(mirrors[0] @ mirrors[1]).magnitude()
        wanted = {"ab": np.pi, "ac": 2 * np.pi / 3, "bc": 2 * np.pi / 5}["".join(sorted(one + other))]
        assert turn == pytest.approx(wanted, abs=1e-9)


def test_tubes_are_the_tilings_by_reflected_triangles():
    """Common practice, no source: 60/60/60, 90/45/45 and 90/60/30 tile the plane by reflection, and the rectangle."""
    whole = [c for c in closing_assemblies() if c.kind == "tube" and c.chambers == 1]
    names = {c.name: c.symbol for c in whole}
    assert names == {
        "tube 60° 60° 60°": "p3m1",
        "tube 90° 60° 30°": "p6mm",
        "tube 90° 45° 45°": "p4mm",
        "tube 90° 90° 90° 90°": "p2mm",
    }


@pytest.mark.parametrize("images", [3, 4, 5, 7, 11])
def test_wedges_follow_the_rule_for_two_mirrors(images):
    """Common practice, no source: 360/θ − 1 images with the object on the bisector when 360/θ is whole."""
    wanted = Fraction(2, images + 1)
    wedge = next(c for c in closing_assemblies() if c.kind == "wedge" and c.fractions == (wanted,))
    assert wedge.images == images
