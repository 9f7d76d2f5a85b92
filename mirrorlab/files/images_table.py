"""The images that an assembly shows as a table."""

from __future__ import annotations

import os
from pathlib import Path

from mirrorlab.files.table import Column, write_table
from mirrorlab.optics.assembly import FRAME, Assembly
from mirrorlab.optics.images import ImageCount


def write_images(path: str | os.PathLike[str], assembly: Assembly, count: ImageCount) -> tuple[Path, Path]:
    """Write the images, one a row, with the metadata file; returns both paths."""
    columns = (
        Column("image", "integer", "number of the image"),
        Column("word", "string", "product of reflections; the eye's ray meets the first letter first"),
        *(Column(name, "double", "coordinate of the image", "mm") for name in "xyz"),
        Column("parity", "integer", "1 when the image is reversed"),
        Column("bounces", "integer", "mirrors that the light meets"),
        Column("brightness", "double", "part of the light that is left"),
        Column("seen", "integer", "1 when the eye sees it"),
    )
    rows = (
        [k, i.word, *i.position.tolist(), i.parity, i.bounces, i.brightness, int(i.seen)]
        for k, i in enumerate(count.images, 1)
    )
    about = {
        "title": f"Images in a {assembly.kind}: {count.sentence}",
        "frame": FRAME,
        "unit": "mm",
        "point": count.point.tolist(),
        "dimensions": dict(assembly.dimensions),
    }
    return write_table(path, columns, rows, about)
