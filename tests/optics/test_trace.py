"""The compiled ray tracer against its slow twin, and against what mirrors must do."""

from __future__ import annotations

import dataclasses
import math
import subprocess
import sys

import numpy as np
import pytest

import mirrorlab as ml
from mirrorlab import optics
from mirrorlab.optics import compiled
from mirrorlab.optics.body import body_of, follow
from mirrorlab.optics.pattern import PATTERNS, PatternError, drawn
from mirrorlab.optics.scene import Lights, make_scene, with_ball, with_card
from mirrorlab.optics.texture import PictureError, Texture, to_linear
from mirrorlab.optics.tracer import TraceCancelled, camera_of, trace

from .slow_trace import slow_trace

SMOOTH = np.zeros((40, 60, 3), dtype=np.uint8)
SMOOTH[..., 0] = np.linspace(30, 250, 60)[None, :]
SMOOTH[..., 1] = np.linspace(20, 240, 40)[:, None]
SMOOTH[..., 2] = 128

PERFECT = "perfect"
ASSEMBLIES = {
    "wedge": lambda: optics.wedge("45", 150, 60),
    "wedge off angle": lambda: optics.wedge(50.5, 150, 60, mirrors="household glass"),
    "wedge looked into": lambda: optics.wedge("60", 120, 100, look="into"),
    "corner with a ball": lambda: optics.corner(["90", "60", "45"], 150),
    "corner from outside": lambda: optics.corner(["90", "90", "60"], 150).with_view(
        eye=np.array([10.0, 5, 330]), target=np.array([0.0, 0, 80])
    ),
    "cut corner": lambda: optics.corner(
        ["90", "60", "36"], 200, truncated=60, mirrors="first-surface enhanced"
    ),
    "corner off angles": lambda: optics.corner([91.0, 60.5, 44.0], 200, truncated=60),
    "tube": lambda: optics.tube(["60", "60", "60"], 150, 50),
    "tube of four": lambda: optics.tube(
        ["90", "90", "90", "90"], 150, [50, 30], mirrors=["perfect"] * 3 + ["household glass"]
    ),
    "tapered tube": lambda: optics.tube(["90", "45", "45"], 150, 60, taper=0.5),
    "widening tube": lambda: optics.tube(["60", "60", "60"], 150, 40, taper=1.8),
    "tube with a card": lambda: with_card(optics.tube(["60"] * 3, 150, 60), np.array([4.0, 2, 40]), 12),
}


@pytest.mark.parametrize("name", ASSEMBLIES)
def test_the_compiled_tracer_agrees_with_its_slow_twin(name: str) -> None:
    assembly = ASSEMBLIES[name]()
    # Off every plane of symmetry, so that no ray runs into an edge exactly.
    assembly = assembly.with_view(eye=assembly.eye + np.array([0.71, 0.43, -0.19]))
    scene = make_scene(assembly, SMOOTH, joint=0)
    # The twin knows no smaller copies for what is far away, so both use the picture as it is.
    copies, n = scene.texture, SMOOTH.shape[0] * SMOOTH.shape[1]
    plain = Texture(copies.texels[:n], copies.starts[:1], copies.widths[:1], copies.heights[:1])
    scene = dataclasses.replace(scene, texture=plain)
    fast = trace(assembly, scene, size=(64, 36)).astype(int)
    slow = slow_trace(assembly, scene, (64, 36))
    light = to_linear(fast / 255)
    off = np.abs(light - np.clip(slow, 0, 1)).max(axis=2)
    assert light.std() > 0.01, "a picture, not one shade"
    # Pixels on an edge may fall on either side of it in single precision.
    assert (off > 0.02).mean() < 0.01, f"{(off > 0.02).sum()} pixels differ"


@pytest.mark.parametrize(
    "angles",
    [["90", "90", "90"], ["36", "90", "90"], ["90", "60", "60"], ["90", "45", "60"], ["90", "60", "36"]],
)
def test_closed_corners_fold_every_direction_into_the_chamber(angles: list[str]) -> None:
    """Light that leaves a closed corner goes the way that its direction, folded by the group, goes."""
    arrangement = ml.Arrangement.from_angles(angles)
    group = arrangement.finding().group
    assert group is not None
    assembly = optics.assembly_for(arrangement, depth=1e5, mirrors=PERFECT)
    inner = assembly.place.centre / np.linalg.norm(assembly.place.centre)
    # The eye stands so near to the point that the mouth might as well be infinitely far.
    assembly = with_ball(assembly, inner * 1e3, 1e-4).with_view(eye=inner, target=-inner, field_of_view=2.2)
    size = (48, 40)
    camera = camera_of(assembly, *size)
    x, y = np.meshgrid(np.arange(48) + 0.5 - 24, 20 - np.arange(40) - 0.5)
    ways = camera.forward + camera.step * (x.reshape(-1, 1) * camera.right + y.reshape(-1, 1) * camera.up)
    ways /= np.linalg.norm(ways, axis=1)[:, None]
    folded, _ = group.fold(ways @ assembly.axes)
    expected = folded @ assembly.axes.T
    seen = np.empty_like(ways)
    for axis in range(3):
        scene = make_scene(assembly, lights=Lights(below="#000000", above="#ffffff"), joint=0)
        scene = dataclasses.replace(scene, upwards=np.eye(3)[axis])
        seen[:, axis] = 2 * to_linear(trace(assembly, scene, size)[..., 0].reshape(-1) / 255) - 1
    assert np.abs(seen - expected).max() < 0.02
    paths = follow(body_of(assembly), assembly.eye, ways)
    assert np.abs(paths.directions - expected).max() < 1e-4
    crossed = (
        np.sign(group.mirrors @ (assembly.axes.T @ inner)) != np.sign(ways @ assembly.axes @ group.mirrors.T)
    ).sum(axis=1)
    assert np.array_equal(paths.bounces, crossed), (
        "one bounce for each mirror between the eye and the direction"
    )


def test_the_right_corner_returns_every_beam() -> None:
    assembly = optics.corner(["90", "90", "90"], 100)
    body = body_of(assembly)
    rng = np.random.default_rng(5)
    mouth = assembly.mouth
    returned = 0
    for start in rng.dirichlet([1, 1, 1], 40) @ mouth:
        ways = np.array([0.0, 0, -1]) + rng.uniform(-0.3, 0.3, (50, 3))
        ways /= np.linalg.norm(ways, axis=1)[:, None]
        paths = follow(body, start - [0, 0, 1e-6], ways)
        thrice = paths.bounces == 3
        returned += int(thrice.sum())
        assert np.abs(paths.directions[thrice] + ways[thrice]).max(initial=0) < 1e-12
    assert returned > 500


def test_brightness_falls_as_a_power_of_the_reflectance() -> None:
    mirror = optics.MirrorSpec("first", 0.8, (1.0, 0.9, 0.75))
    assembly = optics.tube(["60", "60", "60"], 200, 40, mirrors=mirror)
    white = make_scene(assembly, np.full((4, 4, 3), 255, np.uint8), joint=0)
    size = (64, 36)
    light = to_linear(trace(assembly, white, size) / 255).reshape(-1, 3)
    camera = camera_of(assembly, *size)
    x, y = np.meshgrid(np.arange(64) + 0.5 - 32, 18 - np.arange(36) - 0.5)
    ways = camera.forward + camera.step * (x.reshape(-1, 1) * camera.right + y.reshape(-1, 1) * camera.up)
    bounces = follow(body_of(assembly), assembly.eye, ways / np.linalg.norm(ways, axis=1)[:, None]).bounces
    assert bounces.max() >= 5
    expected = (0.8 * np.array(mirror.tint)) ** bounces[:, None]
    assert np.abs(light - expected).max() < 0.006, "within a byte of sRGB"


def through_mirrors_and_joints(assembly: optics.Assembly, joint: float, size: tuple[int, int]) -> np.ndarray:
    """What is left of each pixel's light at its end, ray by ray and plane by plane, shape (height, width, 3)."""
    body, camera = body_of(assembly), camera_of(assembly, *size)
    x, y = np.meshgrid(np.arange(size[0]) + 0.5 - size[0] / 2, size[1] / 2 - np.arange(size[1]) - 0.5)
    ways = camera.forward + camera.step * (x.reshape(-1, 1) * camera.right + y.reshape(-1, 1) * camera.up)
    ways /= np.linalg.norm(ways, axis=1)[:, None]
    rows, points, last = np.arange(len(ways)), np.tile(assembly.eye, (len(ways), 1)), np.full(len(ways), -1)
    light, gone = np.ones((len(ways), 3)), np.zeros(len(ways))
    losses = np.array([mirror.reflectance * np.array(mirror.tint) for mirror in assembly.mirrors])
    while len(rows):
        slopes, heights = ways @ body.normals.T, body.heights(points)
        with np.errstate(divide="ignore", invalid="ignore"):
            times = np.where(slopes < 0, np.maximum(heights, 0) / -slopes, np.inf)
        times[np.flatnonzero(last >= 0), last[last >= 0]] = np.inf
        last = times.argmin(axis=1)
        time = times.min(axis=1)
        points, gone = points + time[:, None] * ways, gone + time
        bounce = last < body.mirrors
        rows, points, ways, gone, last = (each[bounce] for each in (rows, points, ways, gone, last))
        nearest = np.full(len(rows), np.inf)
        for pair, angle in assembly.dihedrals.items():
            for one, other in (pair, pair[::-1]):
                at = last == one
                nearest[at] = np.minimum(nearest[at], body.heights(points[at])[:, other] / np.sin(angle))
        # The part of the pixel's width on the mirror that the line of the nearest joint covers.
        wide = gone * camera.step
        covered = np.minimum(joint, nearest + wide / 2) - np.maximum(-joint, nearest - wide / 2)
        light[rows] *= losses[last] * (1 - np.clip(covered / wide, 0, 1))[:, None]
        ways = ways - 2 * np.sum(ways * body.normals[last], axis=1)[:, None] * body.normals[last]
        on = light[rows].max(axis=1) > 1e-5
        rows, points, ways, gone, last = (each[on] for each in (rows, points, ways, gone, last))
    return light.reshape(size[1], size[0], 3)


@pytest.mark.parametrize("name", ["wedge", "cut corner", "corner off angles", "tube of four", "tapered tube"])
def test_joints_take_what_they_cover_of_each_pixel(name: str) -> None:
    assembly = ASSEMBLIES[name]()
    assembly = assembly.with_view(eye=assembly.eye + np.array([0.71, 0.43, -0.19]))
    bright = Lights(**dict.fromkeys(("below", "above", "backlight", "dark", "floor"), "#ffffff"))
    # Wide lines, so that many pixels lie on them, and a size that whole squares of pixels do not fill.
    scene = make_scene(assembly, np.full((4, 4, 3), 255, np.uint8), lights=bright, joint=1.0)
    size = (150, 91)
    light = to_linear(trace(assembly, scene, size) / 255)
    expected = through_mirrors_and_joints(assembly, 1.0, size)
    without = through_mirrors_and_joints(assembly, 0.0, size)
    assert (expected < 0.9 * without).any(axis=2).mean() > 0.005, "the lines are to be seen"
    off = np.abs(light - expected).max(axis=2)
    assert (off > 0.006).mean() < 0.002, f"{(off > 0.006).sum()} pixels differ by more than a byte"


def test_a_joint_is_a_dark_line() -> None:
    assembly = optics.wedge("60", 100, 50, mirrors=PERFECT)
    white = np.full((4, 4, 3), 255, np.uint8)
    thin, without = (
        trace(assembly, make_scene(assembly, white, joint=joint), (200, 200)) for joint in (1.0, 0.0)
    )
    dark = (thin.astype(int) < without.astype(int) - 40).any(axis=2)
    assert 20 < dark.sum() < 2000
    assert (thin <= without).all()


def test_the_seam_shows_when_the_angle_is_off() -> None:
    """Right across the seam behind the edge a picture goes on for 60°, and jumps for 62°."""
    jumps = []
    for angle in (60.0, 62.0):
        assembly = optics.wedge(angle, 200, 60, mirrors=PERFECT).with_view(eye=np.array([0.0, 20, 200]))
        view = trace(assembly, make_scene(assembly, SMOOTH, joint=0), (400, 400)).astype(int)
        row = view[250]  # below the middle: behind the edge
        jumps.append(np.abs(np.diff(row[150:250], axis=0)).max())
    assert jumps[0] <= 12
    assert jumps[1] > 2 * jumps[0]


def test_a_smaller_opening_hides_the_rest() -> None:
    open_, closed = (
        optics.corner(["90"] * 3, 100, opening=opening).with_view(
            eye=np.array([0.0, 0, 220]), target=np.zeros(3)
        )
        for opening in (None, 100)
    )
    surround = np.array([0x12, 0x13, 0x18])
    hidden = [(trace(a, make_scene(a), (100, 100)) == surround).all(axis=2).mean() for a in (open_, closed)]
    assert 0 < hidden[0] < hidden[1] < 1


def test_an_eye_in_the_opening_may_look_out_of_it() -> None:
    # Rays that end where they set out have gone no way at all: shares of their width must stay numbers.
    within = optics.corner(["120", "36", "36"], 120)
    assert within.eye[2] == pytest.approx(within.mouth[0][2])
    turned = within.with_view(eye=within.eye, target=np.array([-30.9, 8.87, 18.0]))
    at = trace(turned, size=(232, 147), samples=1).astype(int)
    inside = turned.with_view(eye=turned.eye - np.array([0, 0, 1e-3]), target=turned.target)
    near = trace(inside, size=(232, 147), samples=1).astype(int)
    assert np.mean(np.abs(at - near).max(axis=2) > 8) < 1e-3


def test_more_samples_smooth_but_keep_the_brightness() -> None:
    assembly = optics.tube(["60"] * 3, 200, 50)
    scene = make_scene(assembly)
    once, often, best = (to_linear(trace(assembly, scene, (160, 90), samples=n) / 255) for n in (1, 3, 8))
    assert abs(once.mean() - best.mean()) < 0.01
    assert np.abs(often - best).mean() < 0.5 * np.abs(once - best).mean()


@pytest.mark.parametrize("size", [(1, 1), (3, 17), (65, 9), (130, 70)])
def test_any_size_is_whole(size: tuple[int, int]) -> None:
    assembly = optics.wedge("60", 100, 50)
    view = trace(assembly, size=size)
    assert view.shape == (size[1], size[0], 3)
    assert view.dtype == np.uint8
    assert np.array_equal(view, trace(assembly, size=size, cores=1)), "blocks and cores change nothing"


def test_progress_is_told_and_cancel_obeyed() -> None:
    assembly = optics.wedge("60", 100, 50)
    told: list[tuple[int, int]] = []
    trace(assembly, size=(1000, 400), progress=lambda done, total: told.append((done, total)))
    assert told[-1] == (400, 400)
    assert [done for done, _ in told] == sorted(done for done, _ in told)
    with pytest.raises(TraceCancelled, match="of 4000 rows"):
        trace(assembly, size=(1000, 4000), progress=lambda done, total: done < 100)


@pytest.mark.parametrize(("size", "samples"), [((0, 10), 1), ((10, 40_000), 1), ((10, 10), 0), ((10, 10), 9)])
def test_what_cannot_be_traced_is_refused(size: tuple[int, int], samples: int) -> None:
    with pytest.raises(optics.AssemblyError):
        trace(optics.wedge("60", 100, 50), size=size, samples=samples)


def test_pictures_and_patterns() -> None:
    for name in PATTERNS:
        pixels = drawn(name)
        assert pixels.dtype == np.uint8
        assert pixels.std() > 20
        for turned in (pixels[::-1], pixels[:, ::-1], pixels[::-1, ::-1]):
            assert not np.array_equal(turned, pixels), "tells which way it lies"
    with pytest.raises(PatternError, match="lantern glass"):
        drawn("plaid")
    assembly = optics.tube(["60"] * 3, 100, 40)
    for wrong in (np.zeros((3, 4, 2), np.uint8), np.zeros((3, 4)), np.zeros((0, 4, 3), np.uint8)):
        with pytest.raises(PictureError):
            make_scene(assembly, wrong)
    grey = trace(assembly, make_scene(assembly, np.full((5, 7), 90, np.uint8), joint=0), (20, 20))
    assert np.ptp(grey, axis=2).max() == 0
    with pytest.raises(optics.AssemblyError, match="behind mirror"):
        with_ball(assembly, np.array([100.0, 0, 50]))


def test_importing_optics_and_making_assemblies_loads_no_numba() -> None:
    code = (
        "import sys, mirrorlab, mirrorlab.optics as o; o.wedge('60', 100, 50); import mirrorlab.optics.tracer;"
        "print([name for name in ('numba', 'scipy', 'PySide6') if name in sys.modules])"
    )
    assert (
        subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
        == "[]\n"
    )


def test_compiled_code_is_kept_where_it_can_be(tmp_path, monkeypatch) -> None:
    monkeypatch.setenv("NUMBA_CACHE_DIR", str(tmp_path / "given"))
    compiled.cache_folder.cache_clear()
    folder = compiled.cache_folder()
    assert folder is not None
    assert folder.parent == tmp_path / "given"
    double = compiled.compiled(doubled)
    assert double(21) == 42
    assert list(folder.rglob("*.nbi"))
    monkeypatch.delenv("NUMBA_CACHE_DIR")
    monkeypatch.setattr(compiled, "_user_cache", lambda: tmp_path / "file" / "below")
    (tmp_path / "file").write_text("in the way")
    monkeypatch.setattr(compiled.tempfile, "gettempdir", lambda: str(tmp_path))
    compiled.cache_folder.cache_clear()
    fallback = compiled.cache_folder()
    assert fallback is not None
    assert fallback.parent.parent == tmp_path
    assert fallback.stat().st_mode & 0o077 == 0


def test_nowhere_to_keep_compiled_code_is_no_reason_not_to_compile(tmp_path, monkeypatch) -> None:
    monkeypatch.setenv("NUMBA_CACHE_DIR", str(tmp_path / "file" / "below"))
    (tmp_path / "file").write_text("in the way")
    compiled.cache_folder.cache_clear()
    assert compiled.cache_folder() is None
    assert compiled.compiled(doubled)(4) == 8


def test_someone_elses_folder_is_not_trusted(tmp_path) -> None:
    shared = tmp_path / "shared"
    shared.mkdir()
    shared.chmod(0o777)
    assert not compiled._own_folder(shared, private=True)
    (tmp_path / "link").symlink_to(tmp_path)
    assert not compiled._own_folder(tmp_path / "link", private=True)


@pytest.fixture(autouse=True)
def _fresh_cache_folder():
    yield
    compiled.cache_folder.cache_clear()


def doubled(x):
    return 2 * x


def test_the_view_is_as_wide_as_asked() -> None:
    """A ball that just fills the field of view touches the rims."""
    assembly = optics.tube(["90"] * 4, 200, 100)
    radius, distance = 5.0, 100.0
    field = 2 * math.asin(radius / distance)
    assembly = with_ball(assembly, np.array([0.0, 0, 100]), 2 * radius).with_view(field_of_view=field)
    black = Lights(backlight="#000000")
    white = make_scene(assembly, np.full((4, 4, 3), 255, np.uint8), lights=black)
    view = trace(assembly, white, (120, 80))
    lit = view[..., 0] > 150
    assert lit[:, 60].mean() > 0.95
    assert abs(lit[40].sum() - 80) <= 4
