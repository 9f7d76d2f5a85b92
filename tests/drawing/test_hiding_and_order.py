"""Hiding, painting order and picking, against slow answers by definition."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from mirrorlab.drawing.camera import home_camera
from mirrorlab.drawing.hiding import behind_ball, dimmed_alpha, hidden, ray_lengths
from mirrorlab.drawing.look import LIGHT_LOOK
from mirrorlab.drawing.model import Drawing, Faces, Points, Role
from mirrorlab.drawing.ordering import Piece, bridged, cut_loop, grow
from mirrorlab.drawing.picking import near_seed, pick, seed_at
from mirrorlab.drawing.prepared import Prepared, boundary_loops

SIZE = (640.0, 480.0)


def meet(start: np.ndarray, direction: np.ndarray, corners: np.ndarray) -> float:
    """Where a ray meets a triangle, by solving for the place as a mean of the corners."""
    a, b, c = corners
    system = np.column_stack([b - a, c - a, -direction])
    if abs(np.linalg.det(system)) < 1e-12:
        return np.inf
    u, v, t = np.linalg.solve(system, start - a)
    return float(t) if u >= 0 and v >= 0 and u + v <= 1 and t > 0 else np.inf


@given(st.integers(0, 10_000))
def test_rays_meet_triangles_where_the_equations_say(seed: int):
    rng = np.random.default_rng(seed)
    start, corners = rng.normal(size=(3, 3)), rng.normal(size=(5, 3, 3))
    direction = rng.normal(size=(3, 3))
    direction /= np.linalg.norm(direction, axis=1, keepdims=True)
    expected = [[meet(s, d, t) for t in corners] for s, d in zip(start, direction, strict=True)]
    np.testing.assert_allclose(ray_lengths(start, direction, corners), expected, rtol=1e-7)


@given(st.integers(0, 10_000))
def test_the_ball_hides_what_its_equation_says(seed: int):
    rng = np.random.default_rng(seed)
    start = rng.normal(size=(15, 3)) * 1.5
    direction = rng.normal(size=(15, 3))
    direction /= np.linalg.norm(direction, axis=1, keepdims=True)
    t = np.linspace(0, 12, 2401)
    along = start[:, None] + t[None, :, None] * direction[:, None]
    closest = np.linalg.norm(along, axis=2).min(axis=1)
    clear = np.abs(closest - 1) > 1e-3
    np.testing.assert_array_equal(behind_ball(start, direction)[clear], (closest < 1)[clear])


def test_half_of_the_images_are_hidden(hand: Drawing):
    prepared, camera = Prepared(hand), home_camera(hand)
    assert prepared.has_ball
    images = prepared.point_positions
    back = hidden(prepared, camera, images)
    facing = images @ camera.axes[2]
    assert back[facing < -0.05].all()
    assert not back[facing > 0.25].any()
    assert dimmed_alpha(prepared, LIGHT_LOOK) == 0


def test_flat_drawings_hide_nothing():
    square = np.array([[0.0, 0, 0], [1, 0, 0], [1, 1, 0], [0, 1, 0]])
    faces = Faces(Role.NET, square, np.array([[0, 1, 2], [0, 2, 3]]), (("disc", 0),))
    drawing = Drawing("flat", (faces,), flat=True)
    assert not hidden(Prepared(drawing), home_camera(drawing), square - [0, 0, 1.0]).any()


def test_solid_triangles_hide_and_sheer_ones_do_not():
    square = np.array([[-1.0, -1, 0], [1, -1, 0], [1, 1, 0], [-1, 1, 0]])
    triangles = np.array([[0, 1, 2], [0, 2, 3]])
    for role, expected in ((Role.FACE, True), (Role.TYPED_MIRROR, False)):
        drawing = Drawing(
            "plate",
            (Faces(role, square, triangles, (("x", 0),)),),
            toward=np.array([0.1, 0.1, 1.0]),
            unit="mm",
        )
        back = hidden(Prepared(drawing), home_camera(drawing), np.array([[0.1, 0.2, -0.5], [0.1, 0.2, 0.5]]))
        assert back.tolist() == [expected, False]


@settings(max_examples=25, deadline=None)
@given(st.integers(0, 10_000))
def test_pieces_are_painted_from_back_to_front(seed: int):
    """For any line of sight, of all pieces it meets the nearest is painted last."""
    rng = np.random.default_rng(seed)
    pieces = []
    for k in range(6):
        u, v = np.linalg.qr(rng.normal(size=(3, 2)))[0].T
        middle = 0.4 * rng.normal(size=3)
        loop = middle + np.array([u + v, v - u, -u - v, u - v])
        pieces.append(Piece(loop, np.cross(u, v), k))
    tree = grow(pieces)
    eye = rng.normal(size=3)
    eye *= 6 / np.linalg.norm(eye)
    order = list(tree.back_to_front(eye))
    for target in rng.uniform(-1, 1, size=(8, 3)):
        direction = (target - eye) / np.linalg.norm(target - eye)
        met = []
        for place, piece in enumerate(order):
            t = min(
                (meet(eye, direction, piece.points[[0, j, j + 1]]) for j in range(1, len(piece.points) - 1)),
                default=np.inf,
            )
            if np.isfinite(t):
                met.append((place, t))
        depths = [t for _, t in met]
        assert all(a >= b - 1e-6 for a, b in itertools.pairwise(depths)), met


def test_cutting_keeps_the_area():
    square = np.array([[0.0, 0, 0], [2, 0, 0], [2, 1, 0], [0, 1, 0]])
    height = square[:, 0] - 0.5
    right, left = cut_loop(square, height), cut_loop(square, -height)
    assert right[:, 0].min() == pytest.approx(0.5)
    assert left[:, 0].max() == pytest.approx(0.5)
    assert len(cut_loop(square, np.full(4, -1.0))) == 0
    assert cut_loop(square, np.full(4, 1.0)) is square


def test_a_ring_is_one_outline_with_a_bridge():
    t = np.linspace(0, 2 * np.pi, 25)[:-1]
    circle = np.stack([np.cos(t), np.sin(t), 0 * t], axis=1)
    (loop,) = bridged([2 * circle, circle[::-1]], np.array([0.0, 0, 1]))
    x, y = loop[:, 0], loop[:, 1]
    area = 0.5 * np.sum(x * np.roll(y, -1) - y * np.roll(x, -1))
    inner = 0.5 * 24 * np.sin(2 * np.pi / 24)
    assert area == pytest.approx(3 * inner)
    apart = bridged([circle, circle + np.array([5.0, 0, 0])], np.array([0.0, 0, 1]))
    assert len(apart) == 2, "two islands stay two"


def test_loops_are_the_edges_that_one_triangle_has_alone(hand: Drawing):
    from mirrorlab.drawing.sphere import spherical_triangles

    vertices, triangles = spherical_triangles(np.array([np.eye(3), -np.eye(3)]), 5)
    ids = np.repeat([0, 1], 25)
    loops = boundary_loops(triangles, ids, len(vertices))
    for group in (0, 1):
        (loop,) = loops[group]
        edges = {}
        for a, b, c in triangles[ids == group].tolist():
            for pair in ((a, b), (b, c), (c, a)):
                edges[frozenset(pair)] = edges.get(frozenset(pair), 0) + 1
        expected = {pair for pair, times in edges.items() if times == 1}
        got = {frozenset(p) for p in zip(loop.tolist(), np.roll(loop, -1).tolist(), strict=True)}
        assert got == expected


def test_patches_off_the_ball_are_plane():
    vertices = np.array([[0.0, 0, 0], [1, 0, 0], [0, 1, 0], [0, 0, 1]])
    faces = Faces(Role.FACE, vertices, np.array([[0, 2, 1], [0, 1, 3], [0, 3, 2], [1, 2, 3]]), (("body", 0),))
    prepared = Prepared(Drawing("tetrahedron", (faces,), unit="mm"))
    assert len(prepared.patches) == 4
    assert {patch.key for patch in prepared.patches} == {("body", 0)}


def test_picking_finds_what_stands_there(hand: Drawing):
    prepared, camera = Prepared(hand), home_camera(hand)
    seen = camera.project(prepared.point_positions, *SIZE)
    facing = prepared.point_positions @ camera.axes[2]
    for k in np.flatnonzero(facing > 0.3):
        hit = pick(prepared, camera, seen[k, 0], seen[k, 1], *SIZE)
        assert hit is not None
        assert hit.key == prepared.point_keys[k]
    for patch in prepared.patches:
        if patch.normal @ camera.axes[2] > 0.4:
            x, y, _ = camera.project(patch.middle, *SIZE)
            hit = pick(prepared, camera, x, y, *SIZE)
            assert hit is not None
            if hit.key[0] == "chamber":
                assert hit.key == patch.key
    assert pick(prepared, camera, 3, 3, *SIZE) is None


def test_picking_a_line(hand: Drawing):
    prepared, camera = Prepared(hand), home_camera(hand)
    place = np.array([np.cos(0.2), np.sin(0.2), 0.0])
    x, y, _ = camera.project(place, *SIZE)
    hit = pick(prepared, camera, x, y + 1.5, *SIZE)
    assert hit is not None
    assert hit.key == ("mirror", 1)
    np.testing.assert_allclose(hit.position, place, atol=0.05)


def test_the_seed_is_taken_hold_of_and_follows_the_pointer(hand: Drawing):
    prepared, camera = Prepared(hand), home_camera(hand)
    seed = hand.points[0].positions[0]
    x, y, _ = camera.project(seed, *SIZE)
    assert near_seed(prepared, camera, x + 3, y - 3, *SIZE)
    assert not near_seed(prepared, camera, x + 60, y, *SIZE)
    for dx, dy in ((0, 0), (40, -30), (-70, 55)):
        place = seed_at(prepared, camera, x + dx, y + dy, *SIZE)
        assert np.linalg.norm(place) == pytest.approx(1)
        assert place @ camera.axes[2] > 0
        np.testing.assert_allclose(camera.project(place, *SIZE)[:2], [x + dx, y + dy], atol=1e-6)
    beside = seed_at(prepared, camera, 2, 2, *SIZE)
    assert np.linalg.norm(beside) == pytest.approx(1), "beside the ball it stays on the outline"


def test_a_seed_on_a_plane_or_nowhere():
    seed = Points(Role.SEED, np.array([[0.2, 0.1, 0.0]]), (("image", 0),))
    on_plane = Drawing("map", points=(seed,), flat=True, seed_on="plane")
    camera = home_camera(on_plane)
    place = seed_at(Prepared(on_plane), camera, 320, 240, *SIZE)
    np.testing.assert_allclose(place, [0.2, 0.1, 0], atol=1e-9)
    fixed = Drawing("map", points=(seed,), flat=True)
    assert seed_at(Prepared(fixed), camera, 320, 240, *SIZE) is None
    assert not near_seed(Prepared(fixed), camera, 320, 240, *SIZE)
