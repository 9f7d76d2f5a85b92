"""The walk over an orbit meets each image once."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.walk import OrbitCancelled, walk

NAMES = ["A1", "I2(7)", "B3", "H3", "D4", "A1xB3", "F4"]


def simple_of(name):
    group = Arrangement.from_family(name).finding().group
    return group, group.simple


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("scale", [1e-150, 1e-12, 1.0, 1e9])
def test_general_points(name, scale):
    group, simple = simple_of(name)
    heights = np.linspace(1, 2, group.rank)
    start = np.linalg.solve(simple, heights) * scale
    steps = walk(simple, start, group.order)
    assert len(np.unique(np.round(steps.points / scale, 6), axis=0)) == group.order
    assert steps.parent[0] == 0
    assert steps.mirror[0] == -1
    for k in range(1, group.order):
        normal = simple[steps.mirror[k]]
        parent = steps.points[steps.parent[k]]
        assert steps.depth[k] == steps.depth[steps.parent[k]] + 1
        assert np.allclose(parent - 2 * (parent @ normal) * normal, steps.points[k], atol=1e-12 * scale)
    assert steps.levels[0] == (0, 1)
    assert steps.levels[-1][1] == group.order
    for depth, (start_at, stop) in enumerate(steps.levels):
        assert (steps.depth[start_at:stop] == depth).all()
    assert len(steps.levels) == group.mirror_count + 1


def breadth_first(simple, start):
    """Points with the fewest reflections in the walls that lead there."""
    seen = {tuple(np.round(start, 6) + 0.0): 0}
    frontier, depth = [start], 0
    while frontier:
        depth += 1
        fresh = []
        for point in frontier:
            for normal in simple:
                image = point - 2 * (point @ normal) * normal
                key = tuple(np.round(image, 6) + 0.0)
                if key not in seen:
                    seen[key] = depth
                    fresh.append(image)
        frontier = fresh
    return seen


@pytest.mark.parametrize("name", NAMES)
def test_depth_is_the_fewest_reflections_at_every_kind_of_place(name):
    group, simple = simple_of(name)
    for on in range(2**group.rank - 1):
        heights = np.array([0.0 if on >> i & 1 else 1.0 + 0.3 * i for i in range(group.rank)])
        start = np.linalg.solve(simple, heights)
        expected = breadth_first(simple, start)
        steps = walk(simple, start, len(expected))
        found = {tuple(np.round(p, 6) + 0.0): int(d) for p, d in zip(steps.points, steps.depth, strict=True)}
        assert found == expected


def test_wrong_size_is_noticed():
    _, simple = simple_of("B3")
    start = np.linalg.solve(simple, [1.0, 2.0, 3.0])
    for wrong in (47, 49):
        with pytest.raises(AssertionError, match="walk met"):
            walk(simple, start, wrong)


def test_progress_is_told_and_can_cancel():
    group, simple = simple_of("H3")
    start = np.linalg.solve(simple, [1.0, 2.0, 3.0])
    told = []
    walk(simple, start, group.order, lambda done, size: told.append((done, size)))
    assert [size for _, size in told] == [120] * 15
    assert told[-1][0] == 120
    assert told == sorted(told)
    calls = []

    def stop(done, size):
        calls.append(done)
        return len(calls) < 3

    with pytest.raises(OrbitCancelled):
        walk(simple, start, group.order, stop)
    assert len(calls) == 3
