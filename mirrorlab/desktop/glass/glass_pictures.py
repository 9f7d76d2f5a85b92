"""The maker's drawings: the assembly in space and its panels laid flat."""

from __future__ import annotations

from mirrorlab.desktop.bench import NoPicture
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.glass_section import told, why_no_kind
from mirrorlab.desktop.glass.workings import assembly_of, kind_of, panels_job
from mirrorlab.drawing.model import Drawing
from mirrorlab.optics.lengths import AssemblyError


def assembly(document: Document) -> Drawing:
    """The panels standing at their angles, with object and eye. Raises `NoPicture` where there is none."""
    from mirrorlab.drawing.assembly import assembly_drawing

    _need_kind(document)
    try:
        return assembly_drawing(assembly_of(document))
    except AssemblyError as error:
        raise NoPicture(told(error)) from None


def panels(document: Document) -> Drawing:
    """The panes to cut, mirror side up. Raises `NoPicture` where there is none."""
    from mirrorlab.drawing.panels import panels_drawing

    _need_kind(document)
    try:
        return panels_drawing(panels_job(document))
    except ValueError as error:
        raise NoPicture(str(error)) from None


def _need_kind(document: Document) -> None:
    if not kind_of(document.arrangement):
        raise NoPicture(why_no_kind(document.arrangement))
