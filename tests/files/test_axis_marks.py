"""Marks of axes in a stereogram, read from the pixels."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.drawing.look import LIGHT_LOOK
from mirrorlab.drawing.model import Drawing, Line, Points, Role
from mirrorlab.files.picture import save_picture


def mark_extent(tmp_path, place: tuple[float, float], symbol: str = "2") -> np.ndarray:
    """Where the ink of one axis' mark lies, as offsets from its middle in pixels, x right and y up."""
    from PySide6.QtGui import QImage

    rim = np.linspace(0, 2 * np.pi, 90)
    circle = np.column_stack([np.cos(rim), np.sin(rim), 0 * rim])
    mark = Points(Role.AXIS, np.array([[*place, 0.0]]), (("axis", 0),), symbol)
    seen = []
    for points in ((mark,), ()):
        drawing = Drawing("marks", lines=(Line(Role.GUIDE, circle, ("net", -1)),), points=points, flat=True)
        path = save_picture(drawing, tmp_path / f"mark{len(points)}.png", (600, 600))
        image = QImage(str(path)).convertToFormat(QImage.Format.Format_RGB32)
        data = np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), image.width(), 4)
        seen.append(data[..., :3].astype(int).sum(axis=2))
    rows, columns = np.nonzero(seen[1] - seen[0] > 150)
    return np.column_stack([columns - columns.mean(), rows.mean() - rows])


@pytest.mark.parametrize("degrees", [0, 30, 90, 135, 270])
def test_the_mark_of_a_twofold_axis_in_the_plane_lies_along_it(tmp_path, qapp, degrees: float) -> None:
    direction = np.array([np.cos(np.radians(degrees)), np.sin(np.radians(degrees))])
    ink = mark_extent(tmp_path, (0.9 * direction[0], 0.9 * direction[1]))
    along, across = ink @ direction, ink @ np.array([-direction[1], direction[0]])
    assert np.ptp(along) > 1.5 * np.ptp(across)


def test_the_mark_in_the_middle_stands_upright(tmp_path, qapp) -> None:
    ink = mark_extent(tmp_path, (0.0, 0.0))
    assert np.ptp(ink[:, 1]) > 1.5 * np.ptp(ink[:, 0])
    assert LIGHT_LOOK.mark_size < np.ptp(ink[:, 1]) < 4 * LIGHT_LOOK.mark_size
