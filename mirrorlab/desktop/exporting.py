"""Exports of the window: images, coordinates, pictures and meshes, each written whole or not at all."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from mirrorlab.desktop.document import Document
from mirrorlab.desktop.theme import Theme

if TYPE_CHECKING:
    from mirrorlab.desktop.stage_frame import Pane
    from mirrorlab.mirrors import Orbit

PICTURE_SCALE = 2
"""A picture file has so many times the pixels of the picture on the stage."""


class NothingToExport(ValueError):
    """There is nothing of that kind to write now."""


def _orbit(document: Document) -> Orbit:
    if document.orbit is None:
        msg = document.orbit_note or "there are no images"
        raise NothingToExport(msg)
    return document.orbit


def write_csv(document: Document, path: Path) -> None:
    """Write the images as CSV with its metadata file."""
    from mirrorlab.files.orbit_table import write_orbit

    write_orbit(path, _orbit(document), document.finding)


def write_npy(document: Document, path: Path) -> None:
    """Write the coordinates as a NumPy file."""
    from mirrorlab.files.orbit_table import write_points

    write_points(path, _orbit(document))


def write_picture(pane: Pane, path: Path, theme: Theme) -> None:
    """Write the picture of a pane, seen as it is seen there."""
    from mirrorlab.files.picture import save_picture

    if pane.drawing is None or pane.view is None:
        msg = "the stage shows no drawing now; choose another picture there"
        raise NothingToExport(msg)
    size = (pane.view.width() * PICTURE_SCALE, pane.view.height() * PICTURE_SCALE)
    save_picture(pane.drawing, path, size, theme, camera=pane.view.camera)


def write_mesh(pane: Pane, path: Path) -> None:
    """Write the faces of a pane's picture as a mesh."""
    from mirrorlab.files.mesh import save_mesh

    if pane.drawing is None or not pane.drawing.faces:
        msg = "the picture on the stage has no faces; choose one in space"
        raise NothingToExport(msg)
    save_mesh(pane.drawing, path)
