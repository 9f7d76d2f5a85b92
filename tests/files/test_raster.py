"""Views written as PNG, and a person's own pictures read."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from PySide6.QtGui import QImage

from mirrorlab.files import raster
from mirrorlab.files.raster import read_picture, save_view
from mirrorlab.files.whole import FileError


@pytest.mark.parametrize("shape", [(1, 1), (5, 3), (700, 9), (256, 40), (257, 2)])
def test_another_reader_reads_back_every_pixel(tmp_path: Path, shape: tuple[int, int]) -> None:
    pixels = np.random.default_rng(4).integers(0, 256, (*shape, 3), dtype=np.uint8)
    path = save_view(tmp_path / "view.png", pixels)
    image = QImage(str(path))
    assert (image.height(), image.width()) == shape
    assert np.array_equal(read_picture(path)[..., :3], pixels)
    assert (read_picture(path)[..., 3] == 255).all()


def test_a_picture_with_clear_parts_keeps_them(tmp_path: Path) -> None:
    image = QImage(3, 2, QImage.Format.Format_RGBA8888)
    image.fill(0)
    image.setPixelColor(1, 0, "#80ff2000")
    image.save(str(tmp_path / "own.png"))
    pixels = read_picture(tmp_path / "own.png")
    assert pixels.shape == (2, 3, 4)
    assert pixels[0, 1].tolist() == [0xFF, 0x20, 0x00, 0x80]
    assert pixels[1, 2, 3] == 0


def test_what_cannot_be_read_or_written_says_why(tmp_path: Path) -> None:
    (tmp_path / "noise.png").write_bytes(b"no picture at all")
    with pytest.raises(FileError, match="not a picture"):
        read_picture(tmp_path / "noise.png")
    with pytest.raises(FileError, match="no such picture"):
        read_picture(tmp_path / "gone.png")
    pixels = np.zeros((2, 2, 3), np.uint8)
    with pytest.raises(FileError, match=r"\.png"):
        save_view(tmp_path / "view.jpg", pixels)
    with pytest.raises(FileError, match="no such folder"):
        save_view(tmp_path / "none" / "view.png", pixels)


def test_a_view_is_written_whole_or_not_at_all(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = save_view(tmp_path / "view.png", np.zeros((2, 2, 3), np.uint8))
    before = path.read_bytes()

    def fail(*_: object) -> bytes:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(raster, "_chunk", fail)
    with pytest.raises(FileError, match="No space left"):
        save_view(path, np.ones((2, 2, 3), np.uint8))
    assert path.read_bytes() == before
    assert [p.name for p in tmp_path.iterdir()] == ["view.png"]
