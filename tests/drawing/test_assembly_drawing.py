"""The drawing of an assembly says what the assembly is."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab import optics
from mirrorlab.drawing.assembly import assembly_drawing, far_end
from mirrorlab.drawing.model import Role

MAKERS = {
    "wedge": lambda: optics.wedge("60", 200, 60),
    "wedge looked into": lambda: optics.wedge("60", 120, 100, look="into"),
    "corner": lambda: optics.corner(["90", "60", "45"], 150),
    "cut corner": lambda: optics.corner(["90", "60", "36"], 200, truncated=60, opening=60),
    "tube": lambda: optics.tube(["60"] * 3, 200, 50),
    "tapered tube of four": lambda: optics.tube(["90"] * 4, 200, [50, 40], taper=0.5),
    "with a card": lambda: optics.with_card(optics.tube(["60"] * 3, 200, 50), np.array([1.0, 2, 60])),
}


@pytest.mark.parametrize("name", MAKERS)
def test_panels_letters_object_and_eye_are_there(name: str) -> None:
    assembly = MAKERS[name]()
    drawing = assembly_drawing(assembly)
    assert drawing.unit == "mm"
    panels = [faces for faces in drawing.faces if faces.role is Role.PANEL]
    assert [faces.index for faces in panels] == list(range(len(assembly.panels)))
    for faces, panel in zip(panels, assembly.panels, strict=True):
        assert np.array_equal(faces.vertices, panel.outline)
        for a, b, c in faces.triangles:
            turned = np.cross(panel.outline[b] - panel.outline[a], panel.outline[c] - panel.outline[a])
            assert turned @ panel.normal > 0
    letters = [label for label in drawing.labels if label.role is Role.TYPED_MIRROR]
    assert [label.text for label in letters] == list(assembly.letters)
    for label, panel in zip(letters, assembly.panels, strict=True):
        assert abs(panel.height(label.position)) < 1e-9, "a letter stands on its panel"
    assert any(label.text == "eye" for label in drawing.labels)
    assert any(np.array_equal(points.positions[0], assembly.eye) for points in drawing.points)
    thing = next(faces for faces in drawing.faces if faces.keys == (("object", 0),))
    inside = assembly.heights(thing.vertices.mean(axis=0))
    assert inside.min() > 0
    for part in (*drawing.faces, *drawing.points):
        assert np.isfinite(getattr(part, "vertices", getattr(part, "positions", 0))).all()


def test_the_back_of_the_glass_is_as_thick_as_it_is() -> None:
    assembly = optics.tube(["60"] * 3, 200, 50, thickness=4)
    plain, thick = assembly_drawing(assembly, glass=False), assembly_drawing(assembly)
    assert len(thick.lines) > len(plain.lines)
    backs = [
        line for line in thick.lines if line.role is Role.GUIDE and line.key == ("mirror", 0) and line.closed
    ]
    assert assembly.panels[0].height(backs[0].points[0]) == pytest.approx(-4)


def test_the_far_end_is_what_closes_it() -> None:
    assembly = optics.tube(["90", "45", "45"], 200, 60, taper=0.5)
    outline = far_end(assembly)
    assert len(outline) == 3
    assert np.ptp(outline[:, 2]) == 0
    sides = np.linalg.norm(np.roll(outline, -1, axis=0) - outline, axis=1)
    assert sides.max() == pytest.approx(30)
    assert np.cross(outline[1] - outline[0], outline[2] - outline[0])[2] > 0
