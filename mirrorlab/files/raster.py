"""Pixels as files: a traced view written as PNG, a person's own picture read.

Writing needs no window library. Reading takes whatever Qt reads: PNG, JPEG, BMP, GIF, WebP and others.

References
----------
.. [1] W3C Recommendation / ISO/IEC 15948, Portable Network Graphics: chunks, filters, CRC (from memory).
"""

from __future__ import annotations

import os
import struct
import zlib
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from mirrorlab.files.whole import FileError, make_whole

Bytes = NDArray[np.uint8]

ROWS_AT_ONCE = 256
"""Rows compressed in one go, so that a large view is not held twice."""

LARGEST_READ_MIB = 512
"""Memory a person's picture may take once unpacked."""


def save_view(path: str | os.PathLike[str], pixels: Bytes) -> Path:
    """Write pixels as a PNG file in sRGB, whole or not at all.

    Parameters
    ----------
    pixels : ndarray of uint8, shape (height, width, 3)
        The first row is the top.

    Raises
    ------
    FileError
        A name that does not end in .png, or a file that cannot be written.
    """
    target = Path(path)
    check_view_name(target)
    return make_whole(target, lambda draft: _write_png(draft, np.ascontiguousarray(pixels)))


def check_view_name(path: str | os.PathLike[str]) -> None:
    """Refuse a name that a view cannot be written to, before it is traced.

    Raises
    ------
    FileError
    """
    target = Path(path)
    if target.suffix.lower() != ".png":
        msg = f'"{target.name}": a view is written as PNG; the name must end in .png'
        raise FileError(msg)
    if not target.parent.is_dir():
        msg = f"{target}: cannot be written (no such folder)"
        raise FileError(msg)


def _write_png(path: Path, pixels: Bytes) -> None:
    height, width, _ = pixels.shape
    packer = zlib.compressobj(6)
    above = np.zeros((1, width * 3), dtype=np.uint8)
    with path.open("wb") as stream:
        stream.write(b"\x89PNG\r\n\x1a\n")
        stream.write(_chunk(b"IHDR", struct.pack(">IIBBBBB", width, height, 8, 2, 0, 0, 0)))
        stream.write(_chunk(b"sRGB", b"\x00"))
        for start in range(0, height, ROWS_AT_ONCE):
            rows = pixels[start : start + ROWS_AT_ONCE].reshape(-1, width * 3)
            # Filter 2: the difference to the row above, modulo 256, which zlib packs better.
            before = np.concatenate([above, rows[:-1]])
            above = rows[-1:]
            lines = np.empty((len(rows), width * 3 + 1), dtype=np.uint8)
            lines[:, 0] = 2
            np.subtract(rows, before, out=lines[:, 1:])
            if packed := packer.compress(lines.tobytes()):
                stream.write(_chunk(b"IDAT", packed))
        stream.write(_chunk(b"IDAT", packer.flush()))
        stream.write(_chunk(b"IEND", b""))


def _chunk(kind: bytes, data: bytes) -> bytes:
    return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))


def read_picture(path: str | os.PathLike[str]) -> Bytes:
    """Read a person's picture, turned as its camera notes say.

    Returns
    -------
    ndarray of uint8, shape (height, width, 4)
        sRGB with opacity.

    Raises
    ------
    FileError
        No such file, or no picture that can be read.
    """
    from PySide6.QtGui import QImage, QImageReader

    source = Path(path)
    if not source.is_file():
        msg = f"{source}: no such picture file"
        raise FileError(msg)
    reader = QImageReader(str(source))
    reader.setAutoTransform(True)
    reader.setDecideFormatFromContent(True)
    before = QImageReader.allocationLimit()
    QImageReader.setAllocationLimit(LARGEST_READ_MIB)
    try:
        image = reader.read()
    finally:
        QImageReader.setAllocationLimit(before)
    if image.isNull():
        known = ", ".join(
            sorted(bytes(name.data()).decode() for name in QImageReader.supportedImageFormats())
        )
        msg = f"{source}: not a picture that can be read ({reader.errorString()}); formats are {known}"
        raise FileError(msg)
    image = image.convertToFormat(QImage.Format.Format_RGBA8888)
    wide = image.bytesPerLine()
    rows = np.frombuffer(image.constBits(), dtype=np.uint8).reshape(image.height(), wide)
    return rows[:, : image.width() * 4].reshape(image.height(), image.width(), 4).copy()
