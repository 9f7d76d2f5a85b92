"""Positions by definition: sizes of orbits times sizes of stabilisers."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from mirrorlab.crystal.generators import IN_CRYSTAL_AXES
from mirrorlab.crystal.pointgroups import point_group
from mirrorlab.crystal.positions import PointError, orbit_under, positions_of

NAMES = [*IN_CRYSTAL_AXES, "5m", "-5m", "-10m2", "-82m", "8/mmm", "235", "m-3-5"]


@pytest.mark.parametrize("symbol", NAMES)
def test_multiplicity_times_site_order_is_the_order(symbol):
    group = point_group(symbol)
    for row in positions_of(group):
        assert row.multiplicity * row.site_order == group.order
        assert len(row.triplets) == len(set(row.triplets)) == row.multiplicity
        general = row.images[0] @ np.array([0.123, 0.317, 0.731])
        kept = [k for k, matrix in enumerate(group.matrices) if np.allclose(matrix @ general, general)]
        assert tuple(kept) == row.stabiliser


@settings(deadline=None, max_examples=60)
@given(st.sampled_from(NAMES), st.lists(st.integers(-3, 3), min_size=3, max_size=3))
def test_orbit_by_definition(symbol, point):
    group = point_group(symbol)
    orbit = orbit_under(group, point)
    images = group.matrices @ np.array(point, float)
    assert len(orbit.points) == len(np.unique(np.round(images, 6) + 0.0, axis=0))
    assert np.allclose(orbit.points[0], point)
    for place, index in zip(orbit.points, orbit.operations, strict=True):
        assert np.allclose(group.matrices[index] @ point, place)
    assert orbit.position.multiplicity == len(orbit.points)


@pytest.mark.parametrize("wrong", [[1, 2], [1, 2, float("nan")], [[1, 2, 3]], [np.inf, 0, 0]])
def test_refused_points(wrong):
    with pytest.raises(PointError, match="three finite coordinates"):
        orbit_under(point_group("m"), wrong)


def test_polar_groups_have_no_origin_row():
    for symbol in IN_CRYSTAL_AXES:
        group = point_group(symbol)
        assert (positions_of(group)[-1].freedom == 0) == (not group.polar)
