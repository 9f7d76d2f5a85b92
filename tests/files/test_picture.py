"""Pictures on disk: the right format, vector where it can be, whole or not at all, with and without a screen."""

from __future__ import annotations

import os
import re
import subprocess
import sys
import zlib
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from PySide6.QtGui import QImage, QImageReader, QPainter
from PySide6.QtSvg import QSvgRenderer

import mirrorlab as ml
from mirrorlab.desktop.theme import DARK
from mirrorlab.drawing.camera import home_camera
from mirrorlab.drawing.look import DARK_LOOK, LIGHT_LOOK, LookError, rgb
from mirrorlab.drawing.model import Drawing, Role
from mirrorlab.drawing.space import space_drawing
from mirrorlab.files.picture import (
    SMALLEST_SCALE,
    PictureError,
    save_picture,
)
from mirrorlab.files.whole import FileError

pytestmark = pytest.mark.usefixtures("qapp")
"""The application of all tests: a second one cannot be made later in the same process."""


@pytest.fixture(scope="module")
def drawing() -> Drawing:
    arrangement = ml.Arrangement.from_angles(["90", "60", "45"])
    return space_drawing(arrangement, arrangement.finding(), arrangement.orbit(heights=[1, 0.6, 0.4]))


def pixels(image: QImage) -> np.ndarray:
    image = image.convertToFormat(QImage.Format.Format_RGBA8888)
    data = np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), image.bytesPerLine() // 4, 4)
    return data[:, : image.width()].copy()


def near(got: np.ndarray, tint: str, tolerance: float = 0.12) -> bool:
    return bool(np.abs(got[..., :3] / 255 - rgb(tint)).max() < tolerance)


@pytest.mark.parametrize("look", [LIGHT_LOOK, DARK_LOOK], ids=lambda look: look.name)
def test_what_is_where_in_a_png(drawing: Drawing, tmp_path: Path, look):
    size = (500, 420)
    path = save_picture(drawing, tmp_path / "p.png", size, look)
    image = QImage(str(path))
    assert (image.width(), image.height()) == size
    data = pixels(image)
    assert near(data[2, 2], look.ground, 0.01)
    camera = home_camera(drawing)
    camera = replace(camera, room=camera.room * SMALLEST_SCALE)
    seed = next(p for p in drawing.points if p.role is Role.SEED).positions[0]
    x, y, _ = camera.project(seed, *size).round().astype(int)
    assert near(data[y, x], look.seed, 0.02)
    for faces in drawing.faces:
        tint = {
            Role.CHAMBER_EVEN: look.silver_light,
            Role.CHAMBER_ODD: look.silver_dark,
            Role.REGION: look.region,
        }.get(faces.role)
        if tint is None:
            continue
        middles = faces.vertices[faces.triangles].mean(axis=1)
        middles = middles[middles @ camera.axes[2] > 0.8]
        seen = camera.project(middles, *size).round().astype(int)
        got = data[seen[:, 1], seen[:, 0]]
        share = np.mean([near(g, tint, 0.2) for g in got])
        assert share > 0.6, f"{faces.role}: marks, lines, discs and sheen cover the rest"
    assert image.text("Title") == drawing.title
    assert "Cartesian" in image.text("Frame")


def test_svg_is_a_vector(drawing: Drawing, tmp_path: Path):
    path = save_picture(drawing, tmp_path / "p.svg", (400, 400))
    text = path.read_text()
    assert text.startswith("<?xml")
    assert "<image" not in text
    assert text.count("<path") > 50
    assert "<title>Mirrors in space</title>" in text
    assert "<text" not in text, "letters are outlines: no font is needed"
    renderer = QSvgRenderer(str(path))
    assert renderer.isValid()
    assert renderer.viewBox().size().width() == 400
    width = re.search(r'width="([\d.]+)mm"', text)
    assert float(width[1]) == pytest.approx(400 / 96 * 25.4, abs=0.01)
    image = QImage(400, 400, QImage.Format.Format_ARGB32)
    image.fill(0xFFFFFFFF)
    painter = QPainter(image)
    renderer.render(painter)
    painter.end()
    direct = pixels(QImage(str(save_picture(drawing, tmp_path / "p.png", (400, 400)))))
    off = np.abs(pixels(image).astype(float) - direct)[..., :3].max(axis=2)
    assert np.mean(off > 40) < 0.02, "the same picture as the PNG but for edges"


def test_pdf_is_a_vector_of_the_right_size(drawing: Drawing, tmp_path: Path):
    path = save_picture(drawing, tmp_path / "p.pdf", (400, 300))
    data = path.read_bytes()
    assert data.startswith(b"%PDF-")
    box = re.search(rb"/MediaBox\s*\[([^\]]*)\]", data)
    assert [float(v) for v in box[1].split()] == pytest.approx([0, 0, 300, 225], abs=0.5), "3/4 point a pixel"
    assert b"/Subtype /Image" not in data
    assert b"/SMask" not in data.replace(b"/SMask /None", b""), (
        "no gradient between opacities: see the painter"
    )
    streams = re.findall(rb"stream\r?\n(.*?)\r?\nendstream", data, re.S)
    content = max((zlib.decompress(s) for s in streams if s[:1] == b"x"), key=len)
    assert content.count(b"\nf") + content.count(b" f") + content.count(b"f*") > 50


def test_a_theme_or_a_name_is_a_look(drawing: Drawing, tmp_path: Path):
    by_theme = save_picture(drawing, tmp_path / "a.png", (120, 120), DARK).read_bytes()
    by_name = save_picture(drawing, tmp_path / "b.png", (120, 120), "dark").read_bytes()
    assert by_theme == by_name
    assert by_name != save_picture(drawing, tmp_path / "c.png", (120, 120)).read_bytes()
    with pytest.raises(LookError, match="'sepia'"):
        save_picture(drawing, tmp_path / "d.png", (120, 120), "sepia")


def test_without_ground_it_is_transparent(drawing: Drawing, tmp_path: Path):
    data = pixels(QImage(str(save_picture(drawing, tmp_path / "p.png", (200, 200), ground=False))))
    assert data[1, 1, 3] == 0
    assert data[100, 100, 3] == 255


@pytest.mark.parametrize(
    ("name", "size", "words"),
    [
        ("p.gif", (100, 100), r'"p.gif": a picture ends in .png, .svg, .pdf'),
        ("p", (100, 100), "a picture ends in"),
        ("p.png", (0, 100), "0 × 100 pixels"),
        ("p.png", (100, 30_000), "from 16 to 20000"),
    ],
)
def test_what_cannot_be_is_refused(drawing: Drawing, tmp_path: Path, name: str, size, words: str):
    with pytest.raises(PictureError, match=words):
        save_picture(drawing, tmp_path / name, size)
    assert not list(tmp_path.iterdir())


def test_a_folder_that_is_not_there(drawing: Drawing, tmp_path: Path):
    with pytest.raises(FileError, match="cannot be written"):
        save_picture(drawing, tmp_path / "none" / "p.png", (100, 100))


def test_an_old_file_is_replaced_whole(drawing: Drawing, tmp_path: Path):
    path = tmp_path / "p.png"
    path.write_bytes(b"old")
    save_picture(drawing, path, (64, 64))
    assert QImageReader(str(path)).size().width() == 64
    assert [p.name for p in tmp_path.iterdir()] == ["p.png"]


@pytest.mark.parametrize("ending", [".png", ".svg", ".pdf"])
def test_an_error_while_painting_is_only_an_error(
    drawing: Drawing, tmp_path: Path, ending: str, monkeypatch: pytest.MonkeyPatch
):
    """A painter left open on a device that goes would take the process along."""

    def fail(*_: object) -> None:
        msg = "on purpose"
        raise ArithmeticError(msg)

    monkeypatch.setattr("mirrorlab.files.picture_paint.paint_over", fail)
    with pytest.raises(ArithmeticError, match="on purpose"):
        save_picture(drawing, tmp_path / f"p{ending}", (100, 100))
    assert not list(tmp_path.iterdir())


def test_every_kind_of_drawing_is_painted(tmp_path: Path):
    """No kind of part raises, and each leaves ink."""
    for what in (["60"], ["60", "60", "60"], ["90", "60", "50"], ["90", "60", "72"]):
        arrangement = ml.Arrangement.from_angles(what)
        finding = arrangement.finding()
        orbit = arrangement.orbit(place="centre") if finding.group else None
        file = save_picture(space_drawing(arrangement, finding, orbit), tmp_path / "p.png", (200, 200))
        assert len(np.unique(pixels(QImage(str(file))).reshape(-1, 4), axis=0)) > 20
    empty = pixels(QImage(str(save_picture(Drawing("nothing"), tmp_path / "n.png", (50, 50)))))
    assert len(np.unique(empty.reshape(-1, 4), axis=0)) == 1


def test_without_a_screen(tmp_path: Path):
    """A fresh process with no display and no platform named."""
    code = (
        "import mirrorlab as ml; from mirrorlab.drawing.space import space_drawing;"
        "from mirrorlab.files.picture import save_picture;"
        "a = ml.Arrangement.from_angles(['90', '60', '45']);"
        "d = space_drawing(a, a.finding(), a.orbit(place='centre'));"
        f"[save_picture(d, {str(tmp_path)!r} + '/p' + e, (100, 100)) for e in ('.png', '.svg', '.pdf')]"
    )
    gone = ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM")
    clean = {k: v for k, v in os.environ.items() if k not in gone}
    done = subprocess.run(
        [sys.executable, "-c", code], env=clean, capture_output=True, text=True, check=False
    )
    assert done.returncode == 0, done.stderr
    assert sorted(p.name for p in tmp_path.iterdir()) == ["p.pdf", "p.png", "p.svg"]
