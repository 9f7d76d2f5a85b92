"""The workshop's files, each written whole or not at all."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import Any

from mirrorlab.optics.cutjob import CutJob


def write_files(kind: str, path: Path, job: CutJob, page: str, unit: str) -> None:
    """Write one of the workshop's files. Raises `ValueError` or `OSError` with the reason."""
    from mirrorlab.drawing.cutsheet import cut_pages, cut_sheet
    from mirrorlab.drawing.stock_sheet import stock_sheet
    from mirrorlab.files.cutsheet_pdf import printable, write_pdf

    layout = None if job.layout is None else partial(stock_sheet, job.layout, f"{job.title}: stock sheets")
    if kind == "csv":
        from mirrorlab.files.cutlist_csv import write_cut_list

        write_cut_list(path, job)
    elif kind == "pdf":
        write_pdf([cut_pages(job, printable(page), unit)], path, page)
    elif kind == "svg":
        from mirrorlab.files.cutsheet_svg import write_svg

        write_svg(cut_sheet(job, unit), path)
    elif kind == "dxf":
        from mirrorlab.files.cutsheet_dxf import write_dxf

        write_dxf([cut_sheet(job, unit), *([] if layout is None else [layout()])], path, unit)
    elif layout is not None:
        _write_layout(path, layout, page)


def _write_layout(path: Path, layout: Any, page: str) -> None:
    suffix = path.suffix.lower()
    if suffix == ".pdf":
        from mirrorlab.files.cutsheet_pdf import printable, write_pdf

        write_pdf([layout(printable(page))], path, page)
    elif suffix == ".svg":
        from mirrorlab.files.cutsheet_svg import write_svg

        write_svg(layout(), path)
    elif suffix == ".dxf":
        from mirrorlab.files.cutsheet_dxf import write_dxf

        write_dxf([layout()], path)
    else:
        msg = f"{path.name}: a layout ends in .pdf, .svg or .dxf"
        raise ValueError(msg)


def write_report(path: Path, report: Any, page: str) -> None:
    """Write a report as PDF or text."""
    suffix = path.suffix.lower()
    if suffix == ".pdf":
        from mirrorlab.drawing.report_sheet import report_sheet
        from mirrorlab.files.cutsheet_pdf import printable, write_pdf

        write_pdf([report_sheet(report, printable(page))], path, page)
    elif suffix == ".txt":
        from mirrorlab.files.workshop_report import write_report_text

        write_report_text(report, path)
    else:
        msg = f"{path.name}: a report ends in .pdf or .txt"
        raise ValueError(msg)
