"""The images of a seed as a table."""

from __future__ import annotations

import os
from collections.abc import Iterator, Sequence
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from mirrorlab.files.table import Column, write_table
from mirrorlab.files.whole import make_whole
from mirrorlab.mirrors import Finding, Orbit

STRETCH = 8192


def coordinate_names(dimension: int) -> tuple[str, ...]:
    """x, y, z up to three dimensions; x1, x2, … above."""
    if dimension <= 3:
        return ("x", "y", "z")[:dimension]
    return tuple(f"x{k}" for k in range(1, dimension + 1))


def orbit_columns(orbit: Orbit) -> tuple[Column, ...]:
    """The columns of images in the frame of the arrangement."""
    names = coordinate_names(orbit.points.shape[1])
    return image_columns([Column(name, "double", "coordinate of the image") for name in names])


def image_columns(coordinates: Sequence[Column]) -> tuple[Column, ...]:
    """The columns of images whose coordinates have these columns: image, coordinates, parity, depth, word."""
    return (
        Column("image", "integer", "number of the image; 1 is the seed"),
        *coordinates,
        Column("parity", "integer", "0 for an even number of reflections, 1 for an odd one"),
        Column("depth", "integer", "fewest reflections that lead from the seed to the image"),
        Column("word", "string", "product of reflections, the last letter first; empty for the seed"),
    )


def orbit_rows(orbit: Orbit, points: NDArray[np.float64] | None = None) -> Iterator[list[object]]:
    """The rows, one an image; a stretch of them at a time, so that a long orbit is not held twice.

    Parameters
    ----------
    points : ndarray, shape (N, d), optional
        Coordinates in another frame than the arrangement's.
    """
    words = orbit.words()
    points = orbit.points if points is None else points
    for start in range(0, len(orbit), STRETCH):
        part = slice(start, start + STRETCH)
        columns = (
            points[part].tolist(),
            orbit.parity[part].tolist(),
            orbit.depth[part].tolist(),
            words[part],
        )
        for k, (point, parity, depth, word) in enumerate(zip(*columns, strict=True), start + 1):
            yield [k, *point, parity, depth, word]


def orbit_about(orbit: Orbit, finding: Finding) -> dict[str, object]:
    """What the table is of: frame, seed, group and units."""
    symbols = finding.point_group
    group = " x ".join(finding.families)
    of = "the rotations of " if orbit.rotations else ""
    return {
        "title": f"Images of a seed under {of}{group}",
        "frame": orbit.frame,
        "units": "the unit of the seed's coordinates",
        "seed": [float(value) for value in orbit.seed],
        "seed heights above the walls": dict(zip(orbit.letters, map(float, orbit.heights), strict=True)),
        "group": group,
        "point group": None if symbols is None else symbols.to_dict(),
        "rotations only": orbit.rotations,
        "order": orbit.group_order,
        "images": len(orbit),
        "stabiliser": orbit.stabiliser,
        "stabiliser order": orbit.stabiliser_order,
        "walls": dict(zip(orbit.letters, finding.wall_words, strict=True)),
        "words": "letters are reflections in the walls; in abc the seed is reflected in c first",
    }


def write_orbit(path: str | os.PathLike[str], orbit: Orbit, finding: Finding) -> tuple[Path, Path]:
    """Write the images as CSV with its metadata file; returns both paths."""
    return write_table(path, orbit_columns(orbit), orbit_rows(orbit), orbit_about(orbit, finding))


def write_points(path: str | os.PathLike[str], orbit: Orbit) -> Path:
    """Write the coordinates as a NumPy file, shape (N, d), float64."""

    def save(beside: Path) -> None:
        with beside.open("wb") as handle:
            np.save(handle, orbit.points, allow_pickle=False)

    return make_whole(path, save)
