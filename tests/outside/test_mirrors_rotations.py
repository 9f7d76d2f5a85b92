"""Rotation subgroups against SciPy's `Rotation.create_group` (reference library)."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from scipy.spatial.transform import Rotation

from mirrorlab.mirrors import Arrangement

GROUPS = {
    "A1xA1": "C2",
    "A2": "C3",
    "B2": "C4",
    "I2(5)": "C5",
    "G2": "C6",
    "I2(12)": "C12",
    "A1xA1xA1": "D2",
    "A2xA1": "D3",
    "B2xA1": "D4",
    "I2(5)xA1": "D5",
    "A1xG2": "D6",
    "A3": "T",
    "B3": "O",
    "H3": "I",
}


def rotations_of(name):
    """The rotations as matrices in space; those of mirrors in a plane keep the third axis."""
    group = Arrangement.from_family(name).finding().group
    matrices, parity = group.elements()
    turns = np.broadcast_to(np.eye(3), ((parity == 0).sum(), 3, 3)).copy()
    d = group.dimension
    turns[:, :d, :d] = matrices[parity == 0]
    return turns


def axes_of(matrices):
    """Axis (two directions each) and angle of every rotation but the identity."""
    vectors = Rotation.from_matrix(matrices).as_rotvec()
    angles = np.linalg.norm(vectors, axis=1)
    turning = angles > 1e-9
    return vectors[turning] / angles[turning, None], angles[turning]


def same_set(first, second):
    apart = np.abs(first[:, None] - second[None]).max(axis=(2, 3))
    return (
        len(first) == len(second)
        and apart.min(axis=1).max() < 1e-9
        and len(set(apart.argmin(axis=1))) == len(first)
    )


def turned_onto(ours, theirs):
    """Whether some rotation of space carries one set of matrices onto the other."""
    axes, angles = axes_of(ours)
    goals, goal_angles = axes_of(theirs)
    first = int(angles.argmin())  # the smallest turn: an axis of the highest order
    across = [k for k in range(len(axes)) if abs(axes[k] @ axes[first]) < 1 - 1e-9]
    second = across[0] if across else None
    for u in range(len(goals)):
        if abs(goal_angles[u] - angles[first]) > 1e-9:
            continue
        candidates = range(len(goals)) if second is not None else [u]
        for v in candidates:
            pair = (goals[u], goals[v]) if second is not None else (goals[u], np.roll(goals[u], 1))
            mine = (
                (axes[first], axes[second]) if second is not None else (axes[first], np.roll(axes[first], 1))
            )
            if second is not None and (
                abs(goal_angles[v] - angles[second]) > 1e-9
                or abs(pair[0] @ pair[1] - mine[0] @ mine[1]) > 1e-9
            ):
                continue
            turn = Rotation.align_vectors(pair, mine)[0].as_matrix()
            if same_set(turn @ ours @ turn.T, theirs):
                return True
    return False


@pytest.mark.parametrize("name", GROUPS)
def test_rotation_subgroup(name):
    theirs = Rotation.create_group(GROUPS[name]).as_matrix()
    ours = rotations_of(name)
    finding = Arrangement.from_family(name).finding()
    assert finding.group.rotation_order == len(ours) == len(theirs)
    assert finding.rotation_group.schoenflies == GROUPS[name]
    assert turned_onto(ours, theirs)


@pytest.mark.parametrize(("name", "wrong"), [("A3", "D6"), ("A2xA1", "C6"), ("B3", "D12")])
def test_another_group_of_the_same_order_does_not_fit(name, wrong):
    theirs = Rotation.create_group(wrong).as_matrix()
    ours = rotations_of(name)
    assert len(ours) == len(theirs)
    assert not turned_onto(ours, theirs)


@pytest.mark.parametrize("name", GROUPS)
def test_orbits_of_the_rotation_subgroup(name):
    arrangement = Arrangement.from_family(name)
    orbit = arrangement.orbit(place="centre", rotations=True)
    images = rotations_of(name)[:, : orbit.points.shape[1], : orbit.points.shape[1]] @ orbit.seed
    apart = np.abs(images[:, None] - orbit.points[None]).max(axis=2)
    assert len(images) == len(orbit)
    assert apart.min(axis=1).max() < 1e-9


def test_products_of_two_mirrors_turn_by_twice_the_angle():
    """Geometry: the product of reflections in two mirrors turns about their edge by twice the angle between them."""
    arrangement = Arrangement.from_angles(["36", "60", "90"])
    steps = [np.eye(3) - 2 * np.outer(n, n) for n in arrangement.normals]
    for (i, j), angle in zip(itertools.combinations(range(3), 2), (36, 60, 90), strict=True):
        turn = Rotation.from_matrix(steps[i] @ steps[j]).magnitude()
        assert np.degrees(turn) == pytest.approx(2 * angle)
