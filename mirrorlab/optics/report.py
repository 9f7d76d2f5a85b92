"""What a maker files with the job: the assembly, its figures, the panes, and the cautions."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from mirrorlab.optics import polygon
from mirrorlab.optics.cautions import Place
from mirrorlab.optics.cutjob import CutJob
from mirrorlab.optics.joints import JOINT_WORDS

if TYPE_CHECKING:
    from mirrorlab.mirrors import Finding
    from mirrorlab.optics.assembly import Assembly
    from mirrorlab.optics.images import ImageCount

Row = tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Section:
    """One part of a report: a heading, sentences, and a table whose first row is its head."""

    heading: str
    lines: tuple[str, ...] = ()
    table: tuple[Row, ...] = ()

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "heading": self.heading,
            "lines": list(self.lines),
            "table": [list(row) for row in self.table],
        }


@dataclass(frozen=True, slots=True)
class Report:
    """A report: its title, its sections, and the cautions that close it."""

    title: str
    sections: tuple[Section, ...]
    cautions: tuple[tuple[str, str], ...]

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "title": self.title,
            "sections": [section.to_dict() for section in self.sections],
            "cautions": [{"title": title, "text": text} for title, text in self.cautions],
        }


def job_report(
    job: CutJob, assembly: Assembly, finding: Finding | None = None, figures: Sequence[Section] = ()
) -> Report:
    """The report of a job.

    Parameters
    ----------
    job : CutJob
    assembly : Assembly
        What the job was made from.
    finding : Finding, optional
        Of the arrangement behind it.
    figures : sequence of Section
        Further figures to file with it: images, tolerance.
    """
    sections = [_assembly(assembly, finding), *figures, _panes(job), _sides(job), _joints(job)]
    if job.layout is not None:
        from mirrorlab.optics.nesting import layout_words

        sections.append(Section("Stock", layout_words(job.layout)))
    cautions = tuple((caution.title, caution.text) for caution in job.cautions(Place.REPORT))
    return Report(job.title, tuple(sections), cautions)


def images_section(count: ImageCount) -> Section:
    """The images, for the figures of a report."""
    head = ("bounces", "images", "light left of the brightest")
    rows = [
        (str(bounces), str(images), f"{100 * left:.1f} %") for bounces, images, left in count.by_bounces()
    ]
    return Section("Images", (f"{count.sentence}.", *count.notes), (head, *rows))


def _assembly(assembly: Assembly, finding: Finding | None) -> Section:
    angles = ", ".join(
        f"{assembly.letters[i]}{assembly.letters[j]} {np.degrees(angle):.6g}°"
        for (i, j), angle in sorted(assembly.dihedrals.items())
    )
    longest = max(np.linalg.norm(np.roll(assembly.mouth, -1, axis=0) - assembly.mouth, axis=1))
    across = f"{longest:.1f} mm"
    lines = [
        *([finding.sentence] if finding is not None else []),
        f"{assembly.kind.capitalize()} of {len(assembly.panels)} mirrors. Angles between them: {angles}.",
        f"Mouth: longest side {across}. Glass {assembly.thickness:g} mm.",
    ]
    for letter, mirror in zip(assembly.letters, assembly.mirrors, strict=True):
        name = f"{mirror.name}, " if mirror.name else ""
        lines.append(f"Mirror {letter}: {name}{mirror.surface} surface, reflectance {mirror.reflectance:g}.")
    return Section("Assembly", tuple(lines))


def panes_table(job: CutJob) -> tuple[Row, ...]:
    """Head and one row a pane."""
    head = ("pane", "cut", "blank width mm", "blank height mm", "area m²", "weight kg")
    rows = []
    for pane in job.panes:
        left, bottom, right, top = polygon.bounds(pane.blank)
        area = polygon.area(pane.blank) / 1e6
        size = (f"{right - left:.1f}", f"{top - bottom:.1f}")
        rows.append((pane.letter, str(job.copies), *size, f"{area:.4f}", f"{pane.weight:.3f}"))
    return (head, *rows)


def sides_table(job: CutJob) -> tuple[Row, ...]:
    """Head and one row a side."""
    head = ("side", "length mm", "corner", "meets", "between", "joint", "bevel", "longer face", "blind mm")
    rows = []
    for row in job.rows:
        between = "" if row.between_degrees is None else f"{row.between_degrees:.4g}°"
        bevel = f"{row.bevel_degrees:.2f}°" if row.longer_face else "square"
        blind = f"{row.blind_strip_mm:.1f}" if row.meets else ""
        shape = (row.side, f"{row.length_mm:.1f}", f"{row.corner_degrees:.2f}°")
        rows.append((*shape, row.meets, between, row.joint, bevel, row.longer_face, blind))
    return (head, *rows)


def _panes(job: CutJob) -> Section:
    many = f"{job.copies} assembl{'y' if job.copies == 1 else 'ies'}"
    return Section("Panes", (f"Glass in all: {job.glass_area:.4f} m² for {many}.",), panes_table(job))


def _sides(job: CutJob) -> Section:
    words = "Sides of the blanks, counter-clockwise, mirror side up; the corner is where the side starts."
    return Section("Sides", (words,), sides_table(job))


def _joints(job: CutJob) -> Section:
    gap = f" Gap {job.joints.gap:g} mm." if job.joints.gap else ""
    lines = [f"{str(job.joints.kind).capitalize()}: {JOINT_WORDS[job.joints.kind]}.{gap}", *job.notes]
    shapes = job.folded_by_shape
    if shapes.dihedrals:
        error = np.degrees(shapes.angle_error)
        lines.append(
            f"Folded from the flat shapes alone, the angles return to within {max(error, 1e-4):.4f}°."
        )
    return Section("Joints", tuple(lines))
