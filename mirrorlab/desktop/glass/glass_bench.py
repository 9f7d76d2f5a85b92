"""The glass bench: sections by chips, one table for the section in sight, three pictures for the stage."""

from __future__ import annotations

from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.bench import PictureMaker
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass import glass_pictures
from mirrorlab.desktop.glass.assembly_section import AssemblySection
from mirrorlab.desktop.glass.choose_section import ChooseSection
from mirrorlab.desktop.glass.eye_view import EyeView
from mirrorlab.desktop.glass.images_section import ImagesSection
from mirrorlab.desktop.glass.panels_section import PanelsSection
from mirrorlab.desktop.glass.tolerance_section import ToleranceSection
from mirrorlab.desktop.glass.view_section import ViewSection
from mirrorlab.desktop.section_bench import SectionBench


class GlassBench(SectionBench):
    """Where a maker works."""

    title = "Glass"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        sections = (
            ChooseSection(document),
            AssemblySection(document),
            ViewSection(document),
            ImagesSection(document),
            ToleranceSection(document),
            PanelsSection(document),
        )
        super().__init__(document, sections, "Assembly", parent)
        self.column.addStretch(1)
        document.glass_changed.connect(self.watch)

    def pictures(self) -> dict[str, PictureMaker]:
        return {
            "Eye's view": EyeView,
            "Assembly": glass_pictures.assembly,
            "Panels": glass_pictures.panels,
        }
