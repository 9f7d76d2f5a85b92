"""A job's report as plain text."""

from __future__ import annotations

import os
from collections.abc import Sequence
from pathlib import Path

from mirrorlab.files.whole import write_whole
from mirrorlab.optics.report import Report, Row


def report_text(report: Report) -> str:
    """The report in plain text, tables in aligned columns."""
    parts = [report.title, "=" * len(report.title)]
    for section in report.sections:
        parts += ["", section.heading, "-" * len(section.heading), *section.lines]
        if section.table:
            parts += ["", *_aligned(section.table)]
    parts += ["", "CAUTION", "-------", *(f"{title}: {text}" for title, text in report.cautions)]
    return "\n".join(parts) + "\n"


def _aligned(rows: Sequence[Row]) -> list[str]:
    widths = [max(len(row[k]) for row in rows) for k in range(len(rows[0]))]
    return ["  ".join(cell.ljust(w) for cell, w in zip(row, widths, strict=True)).rstrip() for row in rows]


def write_report_text(report: Report, path: str | os.PathLike[str]) -> Path:
    """Write the report as text, whole or not at all."""
    return write_whole(path, report_text(report))
