"""Images counted by following light: against the group's chambers, the eye's own look, and brightness."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

import mirrorlab as ml
from mirrorlab import optics
from mirrorlab.optics.beams import beams_from, clip, solid_angles
from mirrorlab.optics.overlap import overlaps_of

CLOSED = [
    ["90", "90", "90"],
    ["90", "90", "60"],
    ["36", "90", "90"],
    ["90", "60", "60"],
    ["90", "60", "45"],
    ["45", "60", "90"],
    ["90", "60", "36"],
]


@pytest.mark.parametrize("angles", CLOSED)
def test_closed_corners_show_every_chamber_once(angles: list[str]) -> None:
    """One image a chamber, each where the group puts it, after as many bounces as it is reflections deep."""
    arrangement = ml.Arrangement.from_angles(angles)
    assembly = optics.assembly_for(arrangement, depth=100, mirrors="first-surface aluminium")
    found = optics.count_images(assembly, faintest=1e-3)
    assert found.complete
    assert found.count == arrangement.finding().order - 1
    orbit = arrangement.orbit(point=assembly.axes.T @ found.point)
    expected = {
        tuple(np.round(assembly.axes @ p, 6) + 0.0): int(d)
        for p, d in zip(orbit.points, orbit.depth, strict=True)
    }
    places = {tuple(np.round(image.position, 6) + 0.0): image.bounces for image in found.images}
    places[tuple(np.round(found.point, 6) + 0.0)] = 0
    assert places == expected
    for image in found.images:
        assert image.brightness == pytest.approx(0.9**image.bounces)
        assert image.parity == image.bounces % 2 == len(image.word) % 2
        moved = found.point
        for letter in reversed(image.word):
            normal = assembly.panels["abc".index(letter)].normal
            moved = moved - 2 * (moved @ normal) * normal
        assert np.allclose(moved, image.position, atol=1e-9), "the word leads there"
    assert all(image.seen for image in found.images), "from an eye at the mouth"
    assert all(edge.closes for edge in found.edges)
    assert not found.overlaps
    assert overlaps_of(assembly, beams_from(assembly, found.point, 1e-3)) == ()


def test_a_tapered_corner_keeps_what_its_rims_leave() -> None:
    whole, cut = (
        optics.count_images(optics.corner(["90", "60", "45"], 100, truncated=tip, mirrors="perfect"))
        for tip in (0, 30)
    )
    assert 0 < cut.count < whole.count


@given(st.integers(4, 170), st.floats(0.05, 0.95), st.floats(0.05, 0.95))
@settings(max_examples=60, deadline=None)
def test_the_eye_at_a_wedge_sees_half_a_turn_either_way(degrees: int, at: float, eye_at: float) -> None:
    """Seen are the images less than 180° around the edge from the eye: plane geometry, for a long edge."""
    theta = math.radians(degrees)
    assembly = optics.wedge(float(degrees), 1000, 400, mirrors="perfect")

    def spot(share: float, radius: float, z: float) -> np.ndarray:
        turn = math.pi / 2 + theta / 2 - share * theta  # from mirror a, on the left, to b
        return np.array([radius * math.cos(turn), radius * math.sin(turn), z])

    assembly = assembly.with_view(eye=spot(eye_at, 100 * math.cos(theta / 2), 900), target=np.zeros(3))
    found = optics.count_images(assembly, spot(at, 90 * math.cos(theta / 2), 300), faintest=1e-9)
    phi, alpha = eye_at * theta, at * theta
    steps = np.concatenate([np.arange(-400, 0), np.arange(1, 401)])
    turns = steps * theta + np.where(steps % 2 == 0, alpha, theta - alpha)
    assume(np.abs(np.abs(turns - phi) - math.pi).min() > 1e-4)  # an image right behind the edge is half seen
    turns = turns[np.abs(turns - phi) < math.pi]
    distinct = {(round(math.cos(a), 6) + 0.0, round(math.sin(a), 6) + 0.0) for a in turns}
    assert found.seen == len(distinct)


def test_brightness_is_the_product_of_the_mirrors() -> None:
    bright, dull = optics.MirrorSpec("first", 0.95), optics.MirrorSpec("first", 0.6)
    assembly = optics.wedge("45", 200, 60, mirrors=[bright, dull])
    for image in optics.count_images(assembly, faintest=1e-4).images:
        assert image.brightness == pytest.approx(0.95 ** image.word.count("a") * 0.6 ** image.word.count("b"))


def test_a_tube_is_counted_down_to_the_asked_brightness() -> None:
    assembly = optics.tube(["60", "60", "60"], 300, 40, mirrors="household glass")
    few, many = (optics.count_images(assembly, faintest=faint) for faint in (0.3, 0.1))
    for found, faint in ((few, 0.3), (many, 0.1)):
        assert not found.complete
        assert "brightness" in found.stopped_by
        assert min(image.brightness for image in found.images) >= faint
    assert few.count < many.count
    # Each image of the triangle's point is one of a triangle of the plane's tiling: 3 next to it, 6 after two.
    assert [row[:2] for row in many.by_bounces()[:2]] == [(1, 3), (2, 6)]


@given(st.floats(3.0, 175.0), st.floats(0.02, 0.98))
def test_sectors_fill_one_turn(degrees: float, share: float) -> None:
    assembly = optics.wedge(degrees, 100, 50)
    turn = math.pi / 2 + math.radians(degrees) * (0.5 - share)
    edge = optics.edge_views(assembly, np.array([20 * math.cos(turn), 20 * math.sin(turn), 90]))[0]
    assert edge.eye_degrees == pytest.approx(share * degrees, abs=1e-6)
    assert sum(sector.shown for sector in edge.sectors) == pytest.approx(360)
    cut = [sector for sector in edge.sectors if sector.state == "cut"]
    if edge.closes:
        assert not cut
        assert len(edge.sectors) == round(360 / degrees)
    else:
        assert len(cut) <= 2
        covered = sum(s.end - s.start for s in edge.sectors)
        common = sum(size for s in edge.sectors for _, size in s.overlaps) / 2
        if degrees < 170:
            assert common == pytest.approx(covered - 360, abs=1e-5)


@pytest.mark.parametrize("m", [2, 3, 4, 5, 6, 8, 12, 45])
def test_a_closing_wedge_has_no_cut_sector_and_one_word_a_sector(m: int) -> None:
    edge = optics.edge_views(optics.wedge(180 / m, 100, 50))[0]
    assert edge.closes
    assert len(edge.sectors) == 2 * m
    assert len({sector.word for sector in edge.sectors}) == 2 * m
    assert "close without a seam" in edge.sentence


def test_angles_that_do_not_close_say_which_images_are_cut_and_overlap() -> None:
    found = optics.count_images(optics.wedge("50", 100, 50))
    edge = found.edges[0]
    assert not edge.closes
    assert {s.word for s in edge.sectors if s.state == "cut"} == {"abab", "baba"}
    assert edge.leftover == pytest.approx(40), "8 sectors of 50° are 40° more than a turn"
    assert "overlapping" in edge.sentence
    corner = optics.count_images(optics.corner(["90", "60", "50"], 100))
    assert [edge.closes for edge in corner.edges] == [True, True, False]
    assert corner.overlaps
    assert all(0 < overlap.share <= 1 for overlap in corner.overlaps)
    tube = optics.count_images(optics.tube(["70", "60", "50"], 200, 50), faintest=0.4)
    assert tube.overlaps
    tiling = optics.count_images(optics.tube(["90", "45", "45"], 200, 50), faintest=0.4)
    assert (
        overlaps_of(
            optics.tube(["90", "45", "45"], 200, 50),
            beams_from(optics.tube(["90", "45", "45"], 200, 50), tiling.point, 0.4),
        )
        == ()
    )


def test_a_star_corner_overlaps_itself() -> None:
    """72° at an edge: five sectors of 72° are whole, but reversed ones meet in the seam."""
    edge = optics.edge_views(optics.wedge("2pi/5", 100, 50))[0]
    assert not edge.closes
    assert all(sector.state == "whole" for sector in edge.sectors)
    assert "do not match" in edge.sentence


@pytest.mark.parametrize(
    ("field", "ask"),
    [
        ("point", {"point": [100.0, 0, 50]}),
        ("point", {"point": [1.0, 2]}),
        ("point", {"point": [0.0, 20, 500]}),
        ("faintest", {"faintest": 0}),
        ("faintest", {"faintest": math.nan}),
    ],
)
def test_what_cannot_be_counted_is_refused(field: str, ask: dict[str, object]) -> None:
    with pytest.raises(optics.AssemblyError) as caught:
        optics.count_images(optics.wedge("60", 100, 50), **ask)
    assert caught.value.field == field


def test_counting_stops_at_its_limit_and_when_cancelled() -> None:
    assembly = optics.tube(["60"] * 3, 200, 50, mirrors="perfect")
    limited = optics.count_images(assembly, most=500)
    assert not limited.complete
    assert limited.stopped_by == "500 beams"
    cancelled = optics.count_images(assembly, progress=lambda done, total: done < 4)
    assert cancelled.stopped_by == "a cancel"
    assert max(image.bounces for image in cancelled.images) == 4


def test_to_dict_is_plain_json() -> None:
    import json

    found = optics.count_images(optics.corner(["90", "60", "50"], 100))
    text = json.dumps(found.to_dict())
    assert json.loads(text)["count"] == found.count


def test_solid_angles_and_clipping() -> None:
    octant = np.eye(3)[None]
    assert solid_angles(octant, np.array([3]))[0] == pytest.approx(math.pi / 2)
    half, count = clip(octant, np.array([3]), np.array([[1.0, -1, 0]]))
    assert solid_angles(half, count)[0] == pytest.approx(math.pi / 4)
    none, count = clip(octant, np.array([3]), np.array([[-1.0, -1, -1]]))
    assert count[0] == 0
    assert none.shape[0] == 1
