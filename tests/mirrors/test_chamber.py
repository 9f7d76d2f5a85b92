"""The walls of the chamber around a point."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.chamber import (
    SAME_MIRROR,
    corner_points,
    generic_point,
    region_frame,
    same_mirrors,
    simple_of,
    typed_walls,
)


def both(normals):
    return np.concatenate([normals, -normals])


def walls_by_definition(positive, inside):
    """A mirror is a wall when no others stand between the point and a spot on it."""
    rng = np.random.default_rng(5)
    walls = []
    for k, normal in enumerate(positive):
        others = np.delete(positive, k, axis=0)
        foot = inside - (inside @ normal) * normal
        spots = foot + 0.4 * np.linalg.norm(inside) * rng.normal(size=(20_000, len(inside)))
        spots -= np.outer(spots @ normal, normal)
        if (spots @ others.T > 0).all(axis=1).any():
            walls.append(k)
    return walls


@pytest.mark.parametrize("name", ["A2", "B3", "H3", "A1xA2", "D4"])
def test_simple_mirrors_are_the_walls(name, slow):
    group = Arrangement.from_family(name).finding().group
    rng = np.random.default_rng(1)
    inside = rng.normal(size=group.dimension)
    positive = group.mirrors * np.sign(group.mirrors @ inside)[:, None]
    assert sorted(simple_of(positive, inside)) == walls_by_definition(positive, inside)


@pytest.mark.parametrize("count", [121, 500, 4001])
def test_simple_mirrors_of_a_large_fan(count):
    turn = np.arange(count) * np.pi / count
    normals = np.stack([np.cos(turn), np.sin(turn)], axis=1)
    inside = np.array([0.3, 1.0])
    positive = normals * np.sign(normals @ inside)[:, None]
    walls = positive[simple_of(positive, inside)]
    assert len(walls) == 2
    assert -(walls[0] @ walls[1]) == pytest.approx(np.cos(np.pi / count), abs=1e-12)
    assert (walls @ inside > 0).all()


def test_generic_point_keeps_off_every_mirror():
    for name in ("H4", "E6", "I2(360)", "A1xB3"):
        group = Arrangement.from_family(name).finding().group
        point = generic_point(both(group.mirrors), np.eye(group.dimension))
        assert np.abs(group.mirrors @ point).min() > 1e-4 / len(group.mirrors)
        assert np.linalg.norm(point) == pytest.approx(1)


def test_same_mirrors_up_to_sign_and_no_farther():
    tiny = 1e-5
    normals = np.array([[1.0, 0], [0, 1.0], [np.cos(tiny), np.sin(tiny)]])
    assert same_mirrors(normals, -normals).tolist() == np.eye(3, dtype=bool).tolist()
    assert tiny > SAME_MIRROR


@pytest.mark.parametrize(
    "angles", [["90", "60", "72"], ["144", "144", "144"], ["60", "90", "60", "120", "90", "60"]]
)
def test_corner_points_stand_in_the_region_off_every_mirror(angles):
    arrangement = Arrangement.from_angles(angles)
    group = arrangement.finding().group
    roots = both(group.mirrors)
    frame = region_frame(arrangement.normals, dependent=False)
    points = corner_points(roots, frame)
    for point in points:
        assert (arrangement.normals @ point > 0).all()
        assert np.abs(roots @ point).min() > 1e-9
        positive = group.mirrors * np.sign(group.mirrors @ point)[:, None]
        walls = positive[simple_of(positive, point)]
        expected = same_mirrors(walls, arrangement.normals).any(axis=0)
        assert np.array_equal(typed_walls(roots, point, arrangement.normals), expected)
    best = max(typed_walls(roots, point, arrangement.normals).sum() for point in points)
    assert len(set(group.letters) & set(arrangement.letters)) == best
