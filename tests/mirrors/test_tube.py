"""Mirrors that share a direction: do the images tile?"""

from __future__ import annotations

import itertools
from fractions import Fraction as F

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement


def tube(angles):
    finding = Arrangement.from_angles(angles).finding()
    assert finding.kind == "tube"
    return finding.tube


PLANE = {
    "p3m1": (["60", "60", "60"], "once", 1, "3m"),
    "p4mm": (["90", "45", "45"], "once", 1, "4mm"),
    "p6mm": (["90", "60", "30"], "once", 1, "6mm"),
    "p6mm wide": (["120", "30", "30"], "subdivided", 2, "6mm"),
    "p2mm": (["90", "0", "90", "90", "0", "90"], "once", 1, "mm2"),
}


@pytest.mark.parametrize("name", PLANE)
def test_plane_groups(name):
    angles, tiling, chambers, moved = PLANE[name]
    found = tube(angles)
    assert (found.tiling, found.plane_group, found.fills) == (tiling, name.split()[0], "plane")
    assert found.chambers == chambers
    assert found.moved_point_group.hermann_mauguin == moved
    assert "z axis" in found.direction


def triangle(angles):
    """Corners of a plane triangle with the given angles."""
    a, b, _ = (np.pi * float(f) for f in angles)
    apex = np.array([1 / np.tan(a), 1.0]) / (1 / np.tan(a) + 1 / np.tan(b))
    return np.array([[0.0, 0.0], [1.0, 0.0], apex])


def reflect(points, p, q):
    direction = (q - p) / np.linalg.norm(q - p)
    offset = points - p
    return p + 2 * np.outer(offset @ direction, direction) - offset


def images_overlap(corners):
    """Reflect a triangle in its own sides, again and again, until two images overlap or a disc is full.

    Two images overlap when they are not the same and the interiors of both share a point.
    """
    area = 0.5 * abs(np.linalg.det(np.column_stack([corners[1] - corners[0], corners[2] - corners[0]])))
    reach = 3.0 * max(np.linalg.norm(corners[i] - corners[j]) for i, j in ((0, 1), (1, 2), (0, 2)))
    images, frontier = [corners], [corners]
    while frontier:
        fresh = []
        for image in frontier:
            for i, j in ((0, 1), (1, 2), (2, 0)):
                new = reflect(image, image[i], image[j])
                if np.linalg.norm(new.mean(axis=0) - corners.mean(axis=0)) > reach:
                    continue
                known = np.array(images)
                close = known[np.linalg.norm(known.mean(axis=1) - new.mean(axis=0), axis=1) < 2 * reach]
                if any(same(new, other) for other in close):
                    continue
                if any(cross(new, other) for other in close):
                    return True
                images.append(new)
                fresh.append(new)
                if len(images) * area > 40 * reach * reach:
                    return True
        frontier = fresh
    return False


def same(first, second):
    return all(np.linalg.norm(second - corner, axis=1).min() < 1e-6 for corner in first)


def cross(first, second):
    """Do the interiors of two triangles meet? No line along a side parts them."""
    for triangle_one in (first, second):
        for i in range(3):
            p, q = triangle_one[i], triangle_one[(i + 1) % 3]
            normal = np.array([p[1] - q[1], q[0] - p[0]])
            mine = (first - p) @ normal
            other = (second - p) @ normal
            if mine.max() <= other.min() + 1e-7 or other.max() <= mine.min() + 1e-7:
                return False
    return True


def flat_triples():
    options = sorted({F(k, m) for m in (2, 3, 4, 5, 6, 7, 8, 10, 12) for k in range(1, m)})
    return [
        (a, b, 1 - a - b)
        for a, b in itertools.combinations_with_replacement(options, 2)
        if b <= 1 - a - b and a + b < 1
    ]


@pytest.mark.parametrize("angles", flat_triples(), ids=str)
def test_triangles_against_their_images(angles):
    found = tube(angles)
    overlap = images_overlap(triangle(angles))
    assert overlap == (found.tiling == "overlap")  # 120/30/30 lies on its own images, or beside them
    if found.tiling == "once":
        assert found.plane_group
        assert found.chambers == 1
    if found.tiling == "subdivided":
        assert found.chambers > 1
        assert found.plane_group
    if found.tiling == "overlap":
        assert found.plane_group is None
        assert found.chambers is None


def test_only_four_flat_triangles_tile():
    tiling = [t for t in flat_triples() if tube(t).tiling != "overlap"]
    assert sorted(tuple(sorted(t)) for t in tiling) == sorted(
        [
            (F(1, 3), F(1, 3), F(1, 3)),
            (F(1, 4), F(1, 4), F(1, 2)),
            (F(1, 6), F(1, 3), F(1, 2)),
            (F(1, 6), F(1, 6), F(2, 3)),
        ]
    )


def test_the_finite_group_of_the_same_planes_moved():
    found = tube(["36", "72", "72"])
    assert found.tiling == "overlap"
    assert found.moved_families == ("I2(5)",)
    assert found.moved_order == 10
    assert found.moved.mirror_count == 5
    assert found.to_dict()["moved_through_one_point"]["point_group"]["hermann_mauguin"] == "5m"


def test_an_angle_without_fraction_moves_to_nothing():
    found = tube(["59.1234567", "60.8765433", "60"])
    assert found.tiling == "overlap"
    assert found.moved is None
    assert found.moved_families == ()
    assert found.moved_order is None
    assert found.to_dict()["moved_through_one_point"]["point_group"] is None


def test_parallel_mirrors():
    found = tube(["0"])
    assert (found.fills, found.tiling, found.chambers) == ("strip", "once", 1)
    assert found.plane_group is None
    assert "parallel" in found.direction
    assert found.moved_families == ("A1",)


def test_parallel_mirrors_and_one_across():
    found = tube(["0", "90", "90"])
    assert (found.fills, found.tiling, found.plane_group) == ("strip", "once", None)


def test_a_region_without_end():
    found = tube(["60", "120", "120"])
    assert found.tiling == "subdivided"
    assert found.plane_group == "p3m1"
    assert found.chambers is None


def test_four_mirrors_round_a_plane_leave_their_distances_open():
    turn = np.radians([0, 60, 120, 240])
    normals = np.stack([np.cos(turn), np.sin(turn)], axis=1)
    apart = [
        180 - np.degrees(np.arccos(np.clip(normals[i] @ normals[j], -1, 1)))
        for i, j in itertools.combinations(range(4), 2)
    ]
    found = tube([round(a) for a in apart])
    assert found.tiling == "undetermined"
    assert found.chambers is None


CELLS = {
    "cube's corner cut in 48": ([F(1, 4), F(1, 2), F(1, 2), F(1, 3), F(1, 2), F(1, 4)], ("B3",)),
    "ring": ([F(1, 3), F(1, 2), F(1, 3), F(1, 3), F(1, 2), F(1, 3)], ("A3",)),
    "box": ([F(0), *[F(1, 2)] * 8, F(0), *[F(1, 2)] * 4, F(0)], ("A1", "A1", "A1")),
    "prism": ([F(1, 3), F(1, 3), *[F(1, 2)] * 2, F(1, 3), *[F(1, 2)] * 4, F(0)], ("A2", "A1")),
}


@pytest.mark.parametrize("name", CELLS)
def test_cells_that_fill_space(name):
    angles, families = CELLS[name]
    arrangement = Arrangement.from_angles(angles)
    found = arrangement.finding().tube
    assert (found.fills, found.tiling, found.chambers) == ("space", "once", 1)
    assert sorted(found.moved_families) == sorted(families)
    assert "share no direction" in found.direction
    assert found.plane_group is None


def test_a_tube_beside_something_open_overlaps():
    finding = Arrangement.from_angles(["60", "60", "90", "60", "90", "90"]).finding()
    assert finding.tube.tiling == "once"
    open_beside = ["60", "60", "90", "90", "60", "90", "90", "90", "90", "59.1234567"]
    found = tube(open_beside)
    assert found.tiling == "overlap"
    assert found.moved is None
