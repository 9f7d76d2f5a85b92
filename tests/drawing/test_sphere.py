"""Pieces of the sphere against their definitions."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from mirrorlab.drawing.sphere import (
    arc,
    circles,
    cone_corners,
    cross,
    disc_quarters,
    plane_axes,
    spherical_triangles,
)


def areas(vertices: np.ndarray, triangles: np.ndarray) -> np.ndarray:
    p = vertices[triangles]
    return 0.5 * np.linalg.norm(np.cross(p[:, 1] - p[:, 0], p[:, 2] - p[:, 0]), axis=1)


@pytest.mark.parametrize("steps", [1, 4, 9])
def test_a_triangle_is_cut_without_gaps(steps: int):
    corners = np.array([np.eye(3), np.eye(3)[[1, 0, 2]]])
    vertices, triangles = spherical_triangles(corners, steps)
    assert len(triangles) == 2 * steps**2
    np.testing.assert_allclose(np.linalg.norm(vertices, axis=1), 1, atol=1e-12)
    p = vertices[triangles]
    outward = np.einsum("tj,tj->t", np.cross(p[:, 1] - p[:, 0], p[:, 2] - p[:, 0]), p.mean(axis=1))
    assert (outward > 0).all(), "counter-clockwise from outside, whichever way the corners run"
    exact = np.pi / 2  # an octant
    for k in range(2):
        got = areas(vertices, triangles[k * steps**2 : (k + 1) * steps**2]).sum()
        assert got < exact
        assert got == pytest.approx(exact, rel=1.2 / steps**2)


@given(st.integers(0, 10_000))
def test_cross_is_numpy_s(seed: int):
    a, b = np.random.default_rng(seed).normal(size=(2, 5, 3))
    np.testing.assert_allclose(cross(a, b), np.cross(a, b), atol=1e-12)


@given(st.integers(0, 10_000))
def test_circles_lie_in_their_planes(seed: int):
    normals = np.random.default_rng(seed).normal(size=(4, 3))
    normals /= np.linalg.norm(normals, axis=1, keepdims=True)
    rings = circles(normals, 1.5, 24)
    np.testing.assert_allclose(np.einsum("nkj,nj->nk", rings, normals), 0, atol=1e-12)
    np.testing.assert_allclose(np.linalg.norm(rings, axis=2), 1.5, atol=1e-12)
    u, v = plane_axes(normals)
    np.testing.assert_allclose(np.cross(u, v), normals, atol=1e-12)


def test_an_arc_is_short_and_even():
    start, end = np.array([1.0, 0, 0]), np.array([0, 0.6, 0.8])
    points = arc(start, end, 2.0)
    np.testing.assert_allclose(points[[0, -1]], [2 * start, 2 * end], atol=1e-12)
    np.testing.assert_allclose(np.linalg.norm(points, axis=1), 2, atol=1e-12)
    gaps = np.linalg.norm(np.diff(points, axis=0), axis=1)
    assert np.ptp(gaps) < 1e-12
    assert gaps.sum() == pytest.approx(2 * np.pi / 2, rel=1e-3)


@pytest.mark.parametrize(("inner", "outer"), [(0.0, 1.2), (1.0, 1.2)])
def test_disc_quarters_make_the_whole_disc(inner: float, outer: float):
    normal = np.array([[0.0, 0.6, 0.8]])
    vertices, triangles = disc_quarters(normal, inner, outer)
    assert vertices.shape[:2] == (1, 4)
    np.testing.assert_allclose(vertices @ normal[0], 0, atol=1e-12)
    total = sum(areas(quarter, triangles).sum() for quarter in vertices[0])
    assert total == pytest.approx(np.pi * (outer**2 - inner**2), rel=2e-3)


def test_corners_of_a_region():
    np.testing.assert_allclose(
        np.sort(cone_corners(np.eye(3)), axis=0), np.sort(np.eye(3), axis=0), atol=1e-12
    )
    square = np.array([[1.0, 0, 1], [-1, 0, 1], [0, 1, 1], [0, -1, 1]]) / np.sqrt(2)
    corners = cone_corners(square)
    assert len(corners) == 4
    assert (corners @ square.T >= -1e-9).all()
    sides = np.roll(corners, -1, axis=0)
    assert all(np.abs(square @ np.cross(a, b)).max() > 0 for a, b in zip(corners, sides, strict=True))


def test_no_corners_where_there_is_no_region():
    opposed = np.array([[1.0, 0, 0], [-1, 0, 0], [0, 1, 0]])
    assert len(cone_corners(opposed)) == 0
    assert len(cone_corners(np.eye(3)[:2])) == 0, "a wedge has no three corners"
