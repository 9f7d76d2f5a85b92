"""Naming a set of matrices, in any orientation, and refusing what is no group."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation

from mirrorlab.crystal.closure import NotAGroupError, generate, matrix_keys, product_table
from mirrorlab.crystal.generators import IN_CRYSTAL_AXES
from mirrorlab.crystal.identify import IdentifyError, classify, identify_group
from mirrorlab.crystal.operations import OperationError, operation, parse_triplet, write_triplet
from mirrorlab.crystal.pointgroups import point_group

NAMES = [*IN_CRYSTAL_AXES, "5m", "-5m", "-10m2", "-82m", "-8", "10/mmm", "12", "235", "m-3-5"]


@settings(deadline=None, max_examples=60)
@given(st.sampled_from(NAMES), st.integers(0, 10_000))
def test_found_again_in_any_orientation(symbol, seed):
    group = point_group(symbol)
    turn = Rotation.random(rng=np.random.default_rng(seed)).as_matrix()
    found = identify_group(turn @ group.cartesian @ turn.T)
    assert found.name == group.name
    back = found.rotation @ turn @ group.cartesian @ turn.T @ found.rotation.T
    assert set(matrix_keys(back)) == set(matrix_keys(point_group(group.name).cartesian))
    assert np.linalg.det(found.rotation) == pytest.approx(1)


def test_missing_operation_is_noticed():
    matrices = point_group("m-3m").cartesian
    with pytest.raises(IdentifyError):
        identify_group(matrices[:-1])


def test_right_counts_in_a_wrong_arrangement_are_noticed():
    # Four operations, as many axes as 222, but not perpendicular.
    turn = Rotation.from_euler("z", 0.3).as_matrix()
    matrices = [
        np.eye(3),
        np.diag([1.0, -1, -1]),
        turn @ np.diag([-1.0, 1, -1]) @ turn.T,
        np.diag([-1.0, -1, 1]),
    ]
    with pytest.raises(IdentifyError):
        identify_group(matrices)


@pytest.mark.parametrize(
    "wrong", [np.zeros((0, 3, 3)), np.eye(3), np.ones((2, 3, 3)), np.full((1, 3, 3), np.nan)]
)
def test_no_matrices_of_operations(wrong):
    with pytest.raises(IdentifyError):
        classify(wrong)


def test_generating_without_end_stops():
    with pytest.raises(NotAGroupError, match="1440"):
        generate([Rotation.from_euler("z", 1.0).as_matrix()])


def test_product_table_names_the_missing_product():
    with pytest.raises(NotAGroupError, match="operation 2 times operation 2"):
        product_table(np.array([np.eye(3), Rotation.from_euler("z", 2 * np.pi / 3).as_matrix()]))


@pytest.mark.parametrize("text", ["", "x,y", "x,y,z,x", "x,y,w", "x,x,z", "2x,y,z", "x+,y,z", "x,,z"])
def test_refused_triplets(text):
    with pytest.raises(OperationError, match="operation"):
        parse_triplet(text)


@pytest.mark.parametrize("symbol", NAMES)
def test_axis_and_sense_by_definition(symbol):
    """The axis is what the rotation leaves in place; the sense is that of a right-handed turn about it."""
    group = point_group(symbol)
    for element in group.operations:
        if element.axis is None:
            continue
        axis = group.basis @ np.asarray(element.axis, float)
        axis /= np.linalg.norm(axis)
        cartesian = group.basis @ element.matrix @ np.linalg.inv(group.basis)
        rotation = cartesian if element.proper else -cartesian
        turns = {"": 1, "+": 1, "-": element.fold - 1}.get(element.sense)
        turns = int(element.sense[1:]) if turns is None else turns
        wanted = Rotation.from_rotvec(2 * np.pi * turns / element.fold * axis).as_matrix()
        assert np.allclose(rotation, wanted, atol=1e-9), element.text


def test_triplets_round_trip():
    for element in point_group("6/mmm").operations:
        assert (parse_triplet(write_triplet(element.matrix)) == element.matrix).all()


def test_a_matrix_of_no_finite_order_is_refused():
    with pytest.raises(OperationError):
        operation(Rotation.from_euler("z", 1.0).as_matrix())
    with pytest.raises(OperationError, match="determinant"):
        operation(2 * np.eye(3))
