"""A finite reflection group: its numbers, elements and folding."""

from __future__ import annotations

import math

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement, TooLarge

SMALL = ["A1", "A2", "I2(5)", "I2(12)", "A3", "B3", "H3", "A1xA2", "A1xA1xA1", "D4", "A4", "B2xI2(5)", "F4"]


def group_of(name):
    return Arrangement.from_family(name).finding().group


@pytest.mark.parametrize("name", SMALL)
def test_elements_are_the_group(name, slow):
    group = group_of(name)
    matrices, parity = group.elements()
    keys = {slow.key(m) for m in matrices}
    assert len(matrices) == len(keys) == group.order
    assert keys == {slow.key(m) for m in slow.elements(group.simple, 2000)}
    assert np.array_equal(matrices[0], np.eye(group.dimension))
    assert np.allclose(matrices @ matrices.transpose(0, 2, 1), np.eye(group.dimension), atol=1e-12)
    assert np.allclose(np.linalg.det(matrices), 1 - 2 * parity)
    assert (parity == 0).sum() == group.rotation_order
    reflections = [
        m for m in matrices if np.isclose(np.trace(m), group.dimension - 2) and np.allclose(m, m.T)
    ]
    assert len([m for m in reflections if np.isclose(np.linalg.det(m), -1)]) == group.mirror_count
    has_inversion = slow.key(-np.eye(group.dimension)) in keys
    assert group.contains_inversion == has_inversion


@pytest.mark.parametrize("name", [*SMALL, "E6", "E7", "E8", "H4", "B8"])
def test_numbers_agree_with_one_another(name):
    group = group_of(name)
    assert group.order == math.prod(group.degrees)
    assert group.mirror_count == sum(group.exponents) == len(group.mirrors)
    assert group.exponents == tuple(d - 1 for d in group.degrees)
    assert len(group.degrees) == group.rank
    assert sum(c.family.rank * c.family.coxeter_number for c in group.components) == 2 * group.mirror_count


@pytest.mark.parametrize("name", [*SMALL, "E7", "B6", "D7"])
def test_matrices_of_the_chamber(name):
    group = group_of(name)
    m = group.coxeter_matrix
    assert np.allclose(group.simple @ group.simple.T, -np.cos(np.pi / m))
    steps = np.eye(group.dimension) - 2 * np.einsum("ri,rj->rij", group.simple, group.simple)
    for i in range(group.rank):
        for j in range(group.rank):
            product = steps[i] @ steps[j]
            powers = [np.linalg.matrix_power(product, k) for k in range(1, m[i, j] + 1)]
            close = [np.allclose(p, np.eye(group.dimension)) for p in powers]
            assert close.index(True) == m[i, j] - 1
    cartan = group.cartan
    assert np.allclose(np.diag(cartan), 2)
    assert np.allclose(cartan * cartan.T, 4 * np.cos(np.pi / m) ** 2)
    if group.crystallographic:
        assert np.array_equal(cartan, np.round(cartan))
        values = np.linalg.eigvals(cartan).real
        assert values.min() > 0


@pytest.mark.parametrize("name", SMALL)
def test_corners_lie_on_all_walls_but_one(name):
    group = group_of(name)
    heights = group.simple @ group.corners.T
    assert np.abs(heights - np.diag(np.diag(heights))).max() < 1e-12
    assert (np.diag(heights) > 0).all()
    assert np.allclose(np.linalg.norm(group.corners, axis=1), 1)


@pytest.mark.parametrize("name", [*SMALL, "E6", "E8", "H4"])
def test_folding(name):
    group = group_of(name)
    rng = np.random.default_rng(1)
    points = rng.normal(size=(60, group.dimension)) * np.logspace(-3, 3, 60)[:, None]
    folded, count = group.fold(points)
    scale = np.linalg.norm(points, axis=1)
    assert ((folded @ group.simple.T).min(axis=1) >= -1e-11 * scale).all()
    assert np.allclose(np.linalg.norm(folded, axis=1), scale)
    again, none = group.fold(folded)
    assert np.array_equal(again, folded)
    assert not none.any()
    behind = (points @ group.mirrors.T < 0).sum(axis=1)
    assert np.array_equal(count % 2, behind % 2)
    assert (count <= group.mirror_count).all()


def test_folding_finds_the_image_in_the_chamber(slow):
    group = group_of("H3")
    matrices, parity = group.elements()
    point = np.array([0.31, -0.42, 1.7])
    images = matrices @ point
    inside = (images @ group.simple.T > 0).all(axis=1)
    assert inside.sum() == 1
    folded, count = group.fold(point[None])
    assert np.allclose(folded[0], images[inside][0])
    assert count[0] % 2 == parity[inside][0]


def test_too_many_elements_are_refused_with_their_size():
    with pytest.raises(TooLarge, match="696,729,600 of them would take") as error:
        group_of("E8").elements()
    assert error.value.size == 696_729_600
    assert error.value.memory == 696_729_600 * 64 * 8
    with pytest.raises(TooLarge, match="limit is 47"):
        group_of("B3").elements(limit=47)
    assert len(group_of("B3").elements(limit=48)[0]) == 48


def test_order_and_letters_of_simple_mirrors():
    group = Arrangement.from_angles(["90", "60", "45"]).finding().group
    assert group.letters == ("a", "b", "c")
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    assert np.allclose(group.simple, arrangement.normals)
    star = Arrangement.from_angles(["144"]).finding().group
    assert star.letters[0] == "a"
    assert star.letters[1] not in "ab"
    product = group_of("A1xI2(5)")
    assert product.families == ("A1", "I2(5)")
    assert product.coxeter_numbers == (2, 5)


def test_rank_and_dimension_may_differ():
    group = Arrangement.from_normals([[1, 0, 0], [1, 1, 0]]).finding().group
    assert (group.rank, group.dimension, group.families) == (2, 3, ("B2",))
    assert not group.contains_inversion
    matrices, _ = group.elements()
    assert np.allclose(matrices[:, 2], [0, 0, 1])
