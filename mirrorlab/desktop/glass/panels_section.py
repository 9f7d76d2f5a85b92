"""The panels: joints, stock, the cut list, and the files a workshop takes."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import Any

import numpy as np
from PySide6.QtWidgets import QComboBox, QFileDialog, QGridLayout, QHBoxLayout, QWidget

from mirrorlab.desktop.bench_parts import FactRows
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.answers import Answer
from mirrorlab.desktop.glass.glass_parts import Cautions, Entries, Entry
from mirrorlab.desktop.glass.glass_section import GlassSection, told
from mirrorlab.desktop.glass.glass_state import WORDS
from mirrorlab.desktop.glass.workings import copies_of, cut_job, joints_of, stock_of
from mirrorlab.desktop.glass.workshop_files import write_files, write_report
from mirrorlab.desktop.parts import Segments, button, label
from mirrorlab.desktop.rows import Column
from mirrorlab.drawing.model import Key
from mirrorlab.optics.cautions import Place
from mirrorlab.optics.cutjob import CutJob
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.nesting import layout_words

FILES = {
    "dxf": ("DXF", "Drawing at 1:1 in millimetres, layers named", "panels.dxf", "DXF drawing (*.dxf)"),
    "svg": ("SVG", "Drawing at 1:1", "panels.svg", "SVG drawing (*.svg)"),
    "pdf": ("PDF", "Drawing at 1:1 on printer pages, with a ruler", "panels.pdf", "PDF (*.pdf)"),
    "csv": (
        "CSV",
        "Cut list, one row a side, with a file that describes it",
        "cut list.csv",
        "Cut list (*.csv)",
    ),
    "report": ("Report", "Assembly, images, panes and cautions", "report.pdf", "PDF (*.pdf);;Text (*.txt)"),
    "layout": (
        "Layout",
        "Stock sheets with their pieces",
        "layout.pdf",
        "PDF (*.pdf);;DXF drawing (*.dxf);;SVG drawing (*.svg)",
    ),
}
IN_A_ROW = 3
MOST_SAID = 2
"""Sentences on the layout beside the entries: sheets and waste. All of them stand in the report."""

PAGES = WORDS["page"]


class PanelsSection(GlassSection):
    """What is cut."""

    name = "Panels"
    about = "Joints, stock sheets, cut list, and the files for the workshop"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.error = label("", "wrong", wrap=True)
        self.joint = Segments(
            ("Mitred", "Butted", "Square"),
            hints=(
                "Both edges bevelled, meeting half way",
                "One pane runs past, the other stands on it",
                "Square edges that touch along a line",
            ),
        )
        self.order = Segments(
            ("Each past the next", "First past all"),
            hints=("Equal panels stay equal", "An earlier letter runs past every later one"),
        )
        self.rows = (
            Entries(
                (
                    ("gap", Entry("Gap at joints", "Room for tape or sealant", "none")),
                    ("copies", Entry("Copies", "Assemblies to make")),
                )
            ),
            Entries(
                (("stock", Entry("Stock sheet", "Width x height; empty lays nothing out", "1200 x 800")),)
            ),
            Entries(
                (
                    ("margin", Entry("Margin", "Kept free along the sheet's edges", "none")),
                    ("kerf", Entry("Kerf", "What a cut takes away", "none")),
                )
            ),
        )
        self.cutting = Segments(
            ("Straight cuts", "Free cuts"), hints=("Scored and snapped from edge to edge", "Saw or water jet")
        )
        self.facts = FactRows()
        self.notes = label("", "small", wrap=True)
        self.show_picture = button("Show panels", "", "The panes on the stage, mirror side up")
        self.page = QComboBox()
        self.page.addItems(list(PAGES))
        self.page.setAccessibleName("paper of PDF files")
        self.unit = Segments(
            ("mm", "in"),
            hints=("Lengths written in millimetres", "Lengths written in inches; the drawing stays true"),
        )
        self.exports = {kind: button(name, "tight", hint) for kind, (name, hint, _, _) in FILES.items()}
        self.wrote = label("", "wrong", wrap=True)
        self.cautions = Cautions()
        self.layout_answer = Answer(document.work, "layout on stock sheets", self)
        self.job: CutJob | None = None
        self._lay_out()
        self._connect()

    def _lay_out(self) -> None:
        column = self.column
        for part in (label("Joints", "heading"), self.error, self.joint, self.order, self.rows[0]):
            column.addWidget(part)
        column.addWidget(label("Stock", "heading"))
        for part in (self.rows[1], self.rows[2], self.cutting, self.facts, self.notes, self.show_picture):
            column.addWidget(part)
        column.addSpacing(2)
        column.addWidget(label("Files for the workshop", "heading"))
        row = QHBoxLayout()
        row.setSpacing(8)
        row.addWidget(label("Paper", "muted"))
        row.addWidget(self.page)
        row.addWidget(label("Written in", "muted"))
        row.addWidget(self.unit, 1)
        column.addLayout(row)
        grid = QGridLayout()
        grid.setSpacing(4)
        for k, part in enumerate(self.exports.values()):
            grid.addWidget(part, k // IN_A_ROW, k % IN_A_ROW)
            grid.setColumnStretch(k % IN_A_ROW, 1)
        column.addLayout(grid)
        column.addWidget(self.wrote)
        column.addWidget(self.cautions)
        self.wrote.hide()

    def _connect(self) -> None:
        for row in self.rows:
            self.follow(row)
        self.joint.chosen.connect(lambda k: self.change("joints", joint=WORDS["joint"][k]))
        self.order.chosen.connect(lambda k: self.change("order of joints", order=WORDS["order"][k]))
        self.cutting.chosen.connect(lambda k: self.change("way of cutting", cutting=WORDS["cutting"][k]))
        self.page.activated.connect(lambda k: self.change("paper", page=PAGES[k]))
        self.unit.chosen.connect(lambda k: self.change("unit", unit=WORDS["unit"][k]))
        self.show_picture.clicked.connect(lambda: self.picture_wanted.emit("Panels"))
        for kind, part in self.exports.items():
            part.clicked.connect(partial(self._ask_where, kind))
        self.layout_answer.changed.connect(self._came)

    def refresh(self) -> None:
        state = self.state
        self.show_state(*self.rows)
        self.joint.choose(WORDS["joint"].index(state.joint))
        self.order.choose(WORDS["order"].index(state.order))
        self.order.setVisible(state.joint == "butted")
        self.cutting.choose(WORDS["cutting"].index(state.cutting))
        self.cutting.setVisible(bool(state.stock.strip()))
        self.rows[2].setVisible(bool(state.stock.strip()))
        self.page.setCurrentIndex(PAGES.index(state.page))
        self.unit.choose(WORDS["unit"].index(state.unit))
        self.job = None
        bare, error = self.bare()
        if bare is not None:
            try:
                copies, joints = copies_of(state), joints_of(state)
                self.job = cut_job(bare, joints, None, copies, "")
                stock = stock_of(state)
                if stock is None:
                    self.layout_answer.forget()
                else:
                    key = (bare, joints, stock, copies)
                    self.layout_answer.ask(key, partial(_laid_out, *key))
            except AssemblyError as wrong:
                error = wrong
        if error is not None:
            self.layout_answer.forget()
        self._show_error(error)
        self._show()

    def _show_error(self, error: AssemblyError | None) -> None:
        field, message = ("", "") if error is None else (error.field, told(error))
        found = [row.show_error(field, message) for row in self.rows]
        self.error.setText("" if any(found) else message)
        self.error.setVisible(bool(self.error.text()))

    def _came(self) -> None:
        if self.isVisible():
            wrong = self.layout_answer.error
            if isinstance(wrong, AssemblyError):
                self._show_error(wrong)
            self._show()

    def whole_job(self) -> CutJob | None:
        """The job with its layout when there is one and it is the newest, else without."""
        laid: CutJob | None = self.layout_answer.value
        return laid if laid is not None and not self.layout_answer.busy else self.job

    def _show(self) -> None:
        job = self.whole_job()
        self.show_picture.setEnabled(job is not None)
        for kind, part in self.exports.items():
            part.setEnabled(job is not None and (kind != "layout" or job.layout is not None))
        self.facts.show_facts({} if job is None else self._facts(job))
        self.notes.setText("" if job is None else " ".join(job.notes))
        self.notes.setVisible(bool(self.notes.text()))
        self.cautions.show_cautions(() if job is None else job.cautions(Place.CUT_SHEET))
        if job is None:
            self.model.set_columns(())
            self.title, self.note = (
                "No panels",
                self.error.text() or next((row.error.text() for row in self.rows if row.error.text()), ""),
            )
        else:
            keys: list[Key] = [("mirror", pane.flat.index) for pane in job.panes for _ in pane.sides]
            self.model.set_columns(cut_columns(job), keys)
            self.title = f"Cut list, {len(job.panes)} panes"
            self.note = "one row a side, counter-clockwise with the mirror side up; lengths in mm"
        self.rows_changed.emit()

    def _facts(self, job: CutJob) -> dict[str, str]:
        weight = job.copies * sum(pane.weight for pane in job.panes)
        facts = {"Glass": f"{job.glass_area:.4f} m², {weight:.2f} kg"}
        if job.layout is not None:
            facts["Sheets"] = "<br>".join(layout_words(job.layout)[:MOST_SAID])
        elif self.layout_answer.busy:
            facts["Sheets"] = "laying out …"
        elif self.layout_answer.stopped:
            facts["Sheets"] = "laying out was stopped"
        return facts

    # -- files ---------------------------------------------------------------------------------------

    def save_rows(self, path: Path) -> None:
        if self.job is not None:
            write_files("csv", path, self.job, self.state.page, self.state.unit)

    def _ask_where(self, kind: str, _checked: bool = False) -> None:
        _, _, name, kinds = FILES[kind]
        chosen, which = QFileDialog.getSaveFileName(self, "Export", name, kinds)
        if chosen:
            path = Path(chosen)
            suffix = which.partition("*")[2].partition(")")[0] or Path(name).suffix
            self.export(kind, path if path.suffix else path.with_suffix(suffix))

    def export(self, kind: str, path: Path) -> None:
        """Write one of `FILES`; the images of a report are counted beside the window."""
        job = self.whole_job()
        if job is None:
            return
        if kind == "report":
            made, _ = self.assembly()
            bare, _ = self.bare()
            write = partial(self._write_report, path, job, made or bare)
            self.document.work.start("report", partial(_counted, made or bare), write, self._failed)
            return
        self._write(path, lambda: write_files(kind, path, job, self.state.page, self.state.unit))

    def _write_report(self, path: Path, job: CutJob, made: Any, section: Any) -> None:
        from mirrorlab.optics.report import job_report

        report = job_report(job, made, self.document.finding, [section])
        self._write(path, lambda: write_report(path, report, self.state.page))

    def _write(self, path: Path, doing: Any) -> None:
        try:
            doing()
        except (ValueError, OSError) as error:
            self._failed(error)
            return
        self.wrote.hide()
        self.says.emit(f"Wrote {path}. Its cautions are for whoever cuts the glass.")

    def _failed(self, error: Exception) -> None:
        if not isinstance(error, ValueError | OSError):
            raise error
        self.wrote.setText(f"Not written: {error}")
        self.wrote.show()


def _laid_out(bare: Any, joints: Any, stock: Any, copies: int, progress: Any) -> CutJob:
    progress(0, 1)
    return cut_job(bare, joints, stock, copies, "")


def _counted(made: Any, progress: Any) -> Any:
    from mirrorlab.optics.images import count_images
    from mirrorlab.optics.report import images_section

    return images_section(count_images(made, progress=progress))


def cut_columns(job: CutJob) -> list[Column]:
    """The cut list as columns."""
    rows = job.rows

    def two(value: float) -> str:
        return f"{value + 0.0:.2f}".replace("-", "−")

    def numbers(name: str) -> Any:
        return np.array([getattr(row, name) for row in rows], dtype=float)

    return [
        Column("pane", [row.part for row in rows], text=True),
        Column("cut", np.array([row.quantity for row in rows]), hint="how many"),
        Column("side", [row.side for row in rows], text=True),
        Column("length", numbers("length_mm"), two, "of the blank's side"),
        Column("corner °", numbers("corner_degrees"), two, "inside angle where the side starts"),
        Column("meets", [row.meets or "–" for row in rows], text=True),
        Column(
            "between °", [row.between_degrees for row in rows], lambda v: "–" if v is None else f"{v:.4g}"
        ),
        Column("joint", [row.joint for row in rows], text=True),
        Column("bevel °", numbers("bevel_degrees"), two, "off square"),
        Column("longer face", [row.longer_face or "square" for row in rows], text=True),
        Column("blank", [f"{row.blank_width_mm:.1f} × {row.blank_height_mm:.1f}" for row in rows], text=True),
        Column("weight kg", numbers("weight_kg"), lambda v: f"{v:.3f}"),
        Column("blind", numbers("blind_strip_mm"), two, "strip beside the joint that does not reflect"),
    ]
