"""Assemblies stand at the angles that were asked for, and say which dimension is wrong."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

import mirrorlab as ml
from mirrorlab import optics

ANGLES = st.floats(20.0, 160.0)


def assert_sound(assembly: optics.Assembly) -> None:
    for panel in assembly.panels:
        assert np.linalg.norm(panel.normal) == pytest.approx(1.0)
        assert np.allclose((panel.outline - panel.outline[0]) @ panel.normal, 0, atol=1e-9 * 200)
        turned = np.cross(panel.outline[1] - panel.outline[0], panel.outline[2] - panel.outline[1])
        assert turned @ panel.normal > 0, "counter-clockwise seen from the mirror side"
        for i, letter in enumerate(panel.edges):
            if letter:
                other = assembly.panels[assembly.letters.index(letter)]
                ends = panel.outline[[i, (i + 1) % len(panel.outline)]]
                distances = np.linalg.norm(ends[:, None] - other.outline[None], axis=2).min(axis=1)
                assert distances.max() < 1e-9, "neighbours share both ends of their edge"
    middle = np.vstack([panel.outline for panel in assembly.panels]).mean(axis=0)
    assert assembly.heights(middle).min() > 0
    assert np.linalg.det(assembly.axes) == pytest.approx(1.0)
    assert np.allclose(assembly.axes @ assembly.axes.T, np.eye(3))


@given(st.floats(5.0, 175.0), st.floats(10.0, 300.0), st.floats(10.0, 300.0))
def test_wedge_has_its_angle(angle: float, length: float, depth: float) -> None:
    for look in ("along", "into"):
        assembly = optics.wedge(angle, length, depth, look=look)
        assert_sound(assembly)
        assert math.degrees(assembly.dihedrals[0, 1]) == pytest.approx(angle)


@settings(max_examples=60)
@given(ANGLES, ANGLES, ANGLES, st.sampled_from(["equal edges", "centre line"]), st.sampled_from([0.0, 30.0]))
def test_corner_has_its_angles(ab: float, ac: float, bc: float, cut: str, tip: float) -> None:
    cosines = -np.cos(np.radians([[180, ab, ac], [ab, 180, bc], [ac, bc, 180]]))
    least = np.linalg.eigvalsh(cosines)[0]
    assume(abs(least) > 1e-3)  # on the border either answer is right
    if least < 0:
        with pytest.raises(optics.AssemblyError) as caught:
            optics.corner([ab, ac, bc], 120)
        assert caught.value.field == "angles"
        return
    try:
        assembly = optics.corner([ab, ac, bc], 120, truncated=tip, cut=cut)
    except optics.AssemblyError as error:
        if error.field != "cut":
            raise
        assume(False)
    assert_sound(assembly)
    found = [math.degrees(assembly.dihedrals[pair]) for pair in ((0, 1), (0, 2), (1, 2))]
    assert found == pytest.approx([ab, ac, bc], abs=1e-6)
    if cut == "equal edges":
        legs = np.linalg.norm(assembly.mouth, axis=1)
        assert np.ptp(legs) < 1e-9 * legs.max()


@given(st.floats(20.0, 100.0), st.floats(20.0, 75.0), st.sampled_from([1.0, 0.5, 2.0]))
def test_tube_of_three_closes(ab: float, ac: float, taper: float) -> None:
    assembly = optics.tube([ab, ac, 180.0 - ab - ac], 200, 50, taper=taper)
    assert_sound(assembly)
    sides = np.linalg.norm(np.roll(assembly.mouth, -1, axis=0) - assembly.mouth, axis=1)
    assert sides.max() == pytest.approx(50)
    if taper == 1.0:
        found = [math.degrees(assembly.dihedrals[pair]) for pair in ((0, 1), (0, 2), (1, 2))]
        assert found == pytest.approx([ab, ac, 180.0 - ab - ac], abs=1e-6)


def test_tube_of_four_takes_corners_or_pairs() -> None:
    by_corners = optics.tube([80, 100, 80, 100], 200, [60, 40])
    by_pairs = optics.tube(["80", "20", "100", "100", "0", "80"], 200, [60, 40])
    assert_sound(by_corners)
    assert np.allclose(by_corners.mouth, by_pairs.mouth)
    found = [math.degrees(by_corners.dihedrals[pair]) for pair in ((0, 1), (1, 2), (2, 3), (0, 3))]
    assert found == pytest.approx([80, 100, 80, 100])


@pytest.mark.parametrize(
    ("angles", "dimensions"),
    [
        (["36"], {"length": 100, "depth": 30}),
        (["90", "45", "60"], {"depth": 100}),
        (["90", "60", "36"], {"opening": 100}),
        (["60", "45", "75"], {"length": 100, "sides": 30}),
        (["90", "0", "90", "90", "0", "90"], {"length": 100, "sides": 30}),
    ],
)
def test_arrangement_and_assembly_share_a_frame(angles: list[str], dimensions: dict[str, object]) -> None:
    arrangement = ml.Arrangement.from_angles(angles)
    assembly = optics.assembly_for(arrangement, **dimensions)
    assert_sound(assembly)
    assert arrangement.normals is not None
    filled = np.zeros((arrangement.size, 3))
    filled[:, : arrangement.normals.shape[1]] = arrangement.normals
    assert np.allclose(filled @ assembly.axes.T, assembly.normals, atol=1e-7)


def test_decimals_stand_as_typed_unless_they_mean_a_simple_fraction() -> None:
    degrees = [
        math.degrees(optics.wedge(text, 100, 50).dihedrals[0, 1]) for text in ("59.5", "51.43", "36.0")
    ]
    assert degrees == pytest.approx([59.5, 360 / 7, 36], abs=1e-9)


def test_dimensions_make_the_assembly_again() -> None:
    spec = optics.MirrorSpec("second", 0.8, (0.9, 1.0, 0.9))
    for assembly in (
        optics.wedge("2pi/5", "4in", "30 mm", look="into"),
        optics.corner(
            ["90", "60", "45"], "12 cm", truncated=20, opening=40, mirrors=["perfect", spec, "perfect"]
        ),
        optics.tube(["90", "45", "45"], 200, 60, taper=0.5, thickness="2 mm"),
    ):
        again = optics.assembly_from(assembly.dimensions)
        assert again.mirrors == assembly.mirrors
        assert np.array_equal(again.mouth, assembly.mouth)
        assert np.array_equal(again.opening, assembly.opening)


@pytest.mark.parametrize(
    ("text", "millimetres"),
    [("12 mm", 12), ("4.5in", 114.3), ("4 1/2 in", 114.3), ('2"', 50.8), ("1,5 m", 1500), ("30", 30), (7, 7)],
)
def test_lengths(text: str | float, millimetres: float) -> None:
    assert optics.parse_length(text) == pytest.approx(millimetres)


@pytest.mark.parametrize(
    "text", ["", "mm", "12 furlongs", "-3", "1/0 in", "4 5", "nan", float("nan"), -1, 1e9]
)
def test_what_is_no_length_says_what_is(text: str | float) -> None:
    with pytest.raises(optics.AssemblyError, match="write millimetres") as caught:
        optics.parse_length(text, "depth")
    assert caught.value.field == "depth"


@pytest.mark.parametrize(
    ("field", "make"),
    [
        ("opening", lambda: optics.wedge("60", 200, 50, opening=51)),
        ("opening", lambda: optics.corner(["90"] * 3, 50, opening=400)),
        ("opening", lambda: optics.tube(["60"] * 3, 200, 50, opening="10 in")),
        ("angles", lambda: optics.tube(["60", "60", "61"], 200, 50)),
        ("angles", lambda: optics.tube(["90"] * 5, 200, 50)),
        ("angles", lambda: optics.corner(["60"] * 3, 50)),
        ("angles", lambda: optics.corner(["20", "150", "150"], 50)),
        ("angle", lambda: optics.wedge("0", 200, 50)),
        ("angle", lambda: optics.wedge("6o", 200, 50)),
        ("thickness", lambda: optics.wedge("60", 200, 50, thickness=0, mirrors="household glass")),
        ("mirror", lambda: optics.wedge("60", 200, 50, mirrors="tin foil")),
        ("reflectance", lambda: optics.MirrorSpec("first", 1.2)),
        ("surface", lambda: optics.MirrorSpec("third", 0.9)),
        ("truncated", lambda: optics.corner(["90"] * 3, 50, truncated=50)),
        ("sides", lambda: optics.tube(["60"] * 3, 200, [50, 50, 40])),
        ("sides", lambda: optics.tube(["90"] * 4, 200, [50, 40, 50, 41])),
        ("taper", lambda: optics.tube(["60"] * 3, 200, 50, taper=0)),
        ("length", lambda: optics.wedge("60", 0, 50)),
        ("depth", lambda: optics.corner(["90"] * 3)),
        ("eye", lambda: optics.wedge("60", 200, 50).with_view(eye=np.array([100.0, 0, 100]))),
        ("eye", lambda: optics.corner(["90"] * 3, 100).with_view(eye=np.array([0.0, 0, -1]))),
        ("target", lambda: optics.tube(["60"] * 3, 200, 50).with_view(target=np.array([0.0, 0, 200]))),
        ("field_of_view", lambda: optics.tube(["60"] * 3, 200, 50).with_view(field_of_view=math.pi)),
        ("lenth", lambda: optics.assembly_from({"kind": "wedge", "angle": 60, "lenth": 3})),
        ("kind", lambda: optics.assembly_from({"kind": "box"})),
    ],
)
def test_the_error_names_the_dimension(field: str, make) -> None:
    with pytest.raises(optics.AssemblyError) as caught:
        make()
    assert caught.value.field == field


def test_other_angles_keep_the_dimensions() -> None:
    corner = optics.with_angles(optics.corner(["90", "60", "45"], 120, truncated=20), [90, 60.5, 45])
    assert math.degrees(corner.dihedrals[0, 2]) == pytest.approx(60.5)
    assert corner.mouth[0, 2] == pytest.approx(120)
    wedge = optics.with_angles(optics.wedge("60", 200, 50, look="into"), [61])
    assert math.degrees(wedge.dihedrals[0, 1]) == pytest.approx(61)
    with pytest.raises(optics.AssemblyError) as caught:
        optics.with_angles(wedge, [60, 61])
    assert caught.value.field == "actual"


@pytest.mark.parametrize("depth", [137.3, 150.0, 211.7, 83.1])
def test_the_largest_opening_that_is_told_can_be_typed(depth: float) -> None:
    with pytest.raises(ValueError, match="larger than the") as refused:
        optics.corner(["90", "60", "36"], depth, opening=1e5)
    told = str(refused.value).split("larger than the ")[1].split(" mm")[0]
    assert optics.corner(["90", "60", "36"], depth, opening=told).kind == "corner"
