"""The window: finding, mirrors, stage, bench and table, on one sheet."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QCoreApplication, QEvent, QMimeData, QSettings, QSize, Qt
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QMainWindow, QSplitter, QVBoxLayout, QWidget

from mirrorlab.desktop.actions import Actions
from mirrorlab.desktop.bench import Bench
from mirrorlab.desktop.bench_column import BenchColumn
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.filing import Filing
from mirrorlab.desktop.finding_band import FindingBand
from mirrorlab.desktop.mirrors_panel import MirrorsPanel
from mirrorlab.desktop.notice import Notice
from mirrorlab.desktop.own_settings import keep_settings
from mirrorlab.desktop.pictures import Shelf
from mirrorlab.desktop.points_bench import PointsBench
from mirrorlab.desktop.stage_frame import StageFrame
from mirrorlab.desktop.status import StatusLine
from mirrorlab.desktop.table import TablePanel

FIRST_SIZE = QSize(1280, 800)
LAYOUT_ROUNDS = 3
"""A label's new size reaches its parts of the window one level a round."""

TABLE_PART = 0.27
"""Part of the height that the table takes at first."""


class Window(QMainWindow):
    """The one window.

    Attributes
    ----------
    document : Document
    band, mirrors, stage, benches, table : QWidget
        The five parts of the sheet.
    notice : Notice
        A strip below the band for what went wrong or can be brought back; never in the way.
    """

    def __init__(self, document: Document, settings: QSettings, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document, self.settings = document, settings
        document.setParent(self)
        self.benches = BenchColumn(document)
        # The stage is told first of every change: OpenGL then draws while the others answer.
        self.stage = StageFrame(document, Shelf(document, self.benches.slots, self.benches.bench))
        self.band = FindingBand(document)
        self.notice = Notice()
        self.mirrors = MirrorsPanel(document)
        self.table = TablePanel(document)
        self.status = StatusLine(document.work)
        self.setStatusBar(self.status)
        self.filing = Filing(self)
        self.actions_ = Actions(self)
        self._lay_out()
        self._connect()
        self.benches.show_index(0)
        self._show_title()
        self.resize(FIRST_SIZE)
        self.mirrors.triangle.cells[0].edit.setFocus()
        self.setAcceptDrops(True)

    def _lay_out(self) -> None:
        upper = QWidget()
        row = QHBoxLayout(upper)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(1)
        row.addWidget(self.mirrors)
        row.addWidget(self.stage, 1)
        self.split = QSplitter(Qt.Orientation.Vertical)
        self.split.setHandleWidth(1)
        self.split.setChildrenCollapsible(False)
        self.split.addWidget(upper)
        self.split.addWidget(self.table)
        self.split.setStretchFactor(0, 3)
        self.split.setStretchFactor(1, 1)
        sheet = QHBoxLayout()
        sheet.setSpacing(1)
        sheet.addWidget(self.split, 1)
        sheet.addWidget(self.benches)
        ground = QWidget()
        ground.setObjectName("ground")
        column = QVBoxLayout(ground)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.band)
        column.addWidget(self.notice)
        column.addLayout(sheet, 1)
        self.setCentralWidget(ground)
        height = FIRST_SIZE.height() - 140
        self.split.setSizes([round(height * (1 - TABLE_PART)), round(height * TABLE_PART)])

    def _connect(self) -> None:
        self.benches.loaded.connect(self._welcome)
        self.benches.shown.connect(self.table.show_bench)
        self.stage.says.connect(self.status.hover)
        self.table.says.connect(self.status.say)
        self.table.pointed.connect(self.stage.point_at)
        self.table.save_wanted.connect(self.filing.save_rows)
        self.table.folded.connect(self._fold)
        self.mirrors.ways.file_wanted.connect(self.filing.open)
        self.filing.says.connect(self.status.say)
        self.filing.failed.connect(self.notice.warn)
        self.document.name_changed.connect(self._show_title)
        self.document.settled.connect(self._settle)
        self.document.settled.connect(self._show_title)
        self.document.settings_changed.connect(lambda: keep_settings(self.settings, self.document.settings))

    def _welcome(self, bench: Bench) -> None:
        bench.says.connect(self.status.say)
        bench.picture_wanted.connect(self.stage.show_picture)
        bench.file_wanted.connect(self.filing.open)
        if isinstance(bench, PointsBench):
            bench.export_wanted.connect(self.filing.export)

    def _settle(self) -> None:
        """Lay out what changed before it is painted: else most of the window is painted twice at a keystroke."""
        for _ in range(LAYOUT_ROUNDS):
            QCoreApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest.value)

    def _fold(self, folded: bool) -> None:
        if folded:
            self._table_sizes = self.split.sizes()
        else:
            self.split.setSizes(self._table_sizes)

    def _show_title(self) -> None:
        name = self.document.path.name if self.document.path else self.document.name
        title = f"{name or 'New arrangement'}[*] – Mirrorlab"
        if title != self.windowTitle():  # telling the window system takes milliseconds
            self.setWindowTitle(title)
        if self.document.altered != self.isWindowModified():
            self.setWindowModified(self.document.altered)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self.benches.fit(self.width())
        self.mirrors.fit()

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        """Take a file that is dragged from outside."""
        if _file_of(event.mimeData()) is not None:
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        """Open it."""
        path = _file_of(event.mimeData())
        if path is not None:
            event.acceptProposedAction()
            self.filing.open_path(path)

    def closeEvent(self, event: QCloseEvent) -> None:
        """Keep unsaved changes for the next start, and end all work."""
        self.filing.keep_unsaved()
        self.document.work.close()
        self.settings.setValue("geometry", self.saveGeometry())
        self.actions_.help.close()
        super().closeEvent(event)


def _file_of(data: QMimeData) -> Path | None:
    """The one file that is dragged, None where it is none or several."""
    files = [url.toLocalFile() for url in data.urls() if url.isLocalFile()]
    return Path(files[0]) if len(files) == 1 else None
