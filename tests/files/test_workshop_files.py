"""Cut list and report on disk."""

from __future__ import annotations

import csv
import json
import re

import numpy as np
import pytest

from mirrorlab.drawing.dimension_lines import all_texts
from mirrorlab.drawing.lettering import overlap, text_box
from mirrorlab.drawing.report_sheet import report_sheet
from mirrorlab.files.cutlist_csv import cut_list_columns, write_cut_list
from mirrorlab.files.cutsheet_pdf import printable, write_pdf
from mirrorlab.files.workshop_report import report_text, write_report_text
from mirrorlab.optics import Stock, corner, job_report, make_cut_job
from mirrorlab.optics.cutlist import COLUMNS
from mirrorlab.optics.report import Report, Section


@pytest.fixture(scope="module")
def job():
    return make_cut_job(corner(["90", "60", "36"], opening=120), stock=Stock(600, 400, 10, 1), copies=2)


@pytest.fixture(scope="module")
def report(job):
    return job_report(job, corner(["90", "60", "36"], opening=120))


def test_cut_list_reads_back(job, tmp_path):
    table, about = write_cut_list(tmp_path / "list.csv", job)
    with table.open(newline="") as lines:
        rows = list(csv.DictReader(lines))
    assert tuple(rows[0]) == COLUMNS
    assert len(rows) == 9
    for read, row in zip(rows, job.rows, strict=True):
        assert float(read["length_mm"]) == pytest.approx(row.length_mm, abs=6e-4)
        assert float(read["bevel_degrees"]) == pytest.approx(row.bevel_degrees, abs=6e-5)
        assert read["meets"] == row.meets
        assert read["quantity"] == "2"
    described = json.loads(about.read_text())
    assert [c["titles"] for c in described["tableSchema"]["columns"]] == list(COLUMNS)
    assert all(column.description for column in cut_list_columns())
    for column in cut_list_columns():
        assert (column.unit == "mm") == column.name.endswith("_mm")
        assert (column.unit == "degree") == column.name.endswith("_degrees")


def test_report_as_text(report, tmp_path):
    text = report_text(report)
    write_report_text(report, tmp_path / "job.txt")
    assert (tmp_path / "job.txt").read_text() == text
    lines = text.splitlines()
    assert lines[0] == report.title
    for section in report.sections:
        assert section.heading in lines
    assert any(
        re.match(r"a1\s+210\.2\s+20\.91°\s+c\s+60°\s+mitred\s+60\.00°\s+clear", line) for line in lines
    )
    assert lines.index("CAUTION") < len(lines) - len(report.cautions)


def test_report_pages_overlap_nothing_and_keep_to_the_page(report, tmp_path, qapp):
    long = Section("Figures", tuple(f"Figure {k} of many, to fill more than one page." for k in range(80)))
    for sections in (report.sections, (*report.sections, long)):
        sheet = report_sheet(Report(report.title, sections, report.cautions), printable("A4"))
        boxes = [text_box(text) for text in all_texts(sheet)]
        for k, box in enumerate(boxes):
            assert box.min() >= -1e-9
            assert box[:, 0].max() <= sheet.width + 1e-9
            top, bottom = (sheet.height - box[:, 1].max()) / 277, (sheet.height - box[:, 1].min()) / 277
            assert int(top + 1e-9) == int(bottom - 1e-9)
            assert not any(overlap(box, other) for other in boxes[:k])
        pages = write_pdf([sheet], tmp_path / "report.pdf")
        assert pages == round(sheet.height / 277)
    assert pages > 1
    assert np.isfinite(sheet.height)
