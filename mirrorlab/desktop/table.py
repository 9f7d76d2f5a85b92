"""The table along the bottom: the rows of the current bench, linked with the pictures both ways."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QItemSelectionModel, QModelIndex, Qt, Signal
from PySide6.QtGui import QColor, QFocusEvent, QGuiApplication, QKeyEvent, QKeySequence, QPaintEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QFrame,
    QHBoxLayout,
    QHeaderView,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from mirrorlab.desktop.bench import Bench
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Elided, button, label
from mirrorlab.desktop.rows import RowsModel
from mirrorlab.desktop.steady import Steady
from mirrorlab.desktop.table_heads import Heads
from mirrorlab.desktop.theming import theming
from mirrorlab.files.picture_sight import painting

ROW_HEIGHT = 22
SAMPLED_ROWS = 60
"""Rows looked at when columns are fitted; all rows of a long orbit would take seconds."""

MOST_NARROW, MOST_WIDE = 64, 320
MOST_COPIED = 200_000
"""More rows than this fit no clipboard; they are for a file."""


INSET, WIDE = 10, 12
"""Pixels left free beside a cell's text, and pixels that no character is wider than: shorter texts need not be
measured."""


class Rows(QTableView):
    """The view itself; Ctrl+C copies the chosen rows.

    It paints its cells itself: Qt's way, a delegate and a style for each cell, takes several times as long, and
    all cells in sight are painted at every keystroke in the triangle.

    Signals
    -------
    copy_wanted()
    left()
        The pointer has gone elsewhere.
    """

    copy_wanted = Signal()
    left = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setMouseTracking(True)
        self.setShowGrid(False)
        self.setWordWrap(False)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ExtendedSelection)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setTabKeyNavigation(False)
        self.setCornerButtonEnabled(False)
        self.verticalHeader().hide()
        self.verticalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        self.verticalHeader().setDefaultSectionSize(ROW_HEIGHT)
        head = Heads(self)
        self.setHorizontalHeader(head)
        head.setResizeContentsPrecision(SAMPLED_ROWS)
        head.setSortIndicatorClearable(True)
        head.setSortIndicator(-1, Qt.SortOrder.AscendingOrder)
        head.setMinimumSectionSize(40)
        self.setSortingEnabled(True)
        theming().changed.connect(self.viewport().update)

    def paintEvent(self, event: QPaintEvent) -> None:
        theme, model = theming().theme, self.model()
        area = event.rect()
        with painting(self.viewport()) as painter:
            painter.fillRect(area, QColor(theme.raised))
            if not isinstance(model, RowsModel) or not model.rowCount():
                return
            first = max(0, self.rowAt(area.top()))
            last = self.rowAt(area.bottom())
            rows = range(first, model.rowCount() if last < 0 else last + 1)
            chosen = {index.row() for index in self.selectionModel().selectedRows()}
            tops = [self.rowViewportPosition(row) for row in rows]
            for row, top in zip(rows, tops, strict=True):
                if row in chosen or row % 2:
                    tint = theme.select if row in chosen else theme.panel
                    painter.fillRect(0, top, self.viewport().width(), ROW_HEIGHT, QColor(tint))
            current = self.currentIndex().row()
            if self.hasFocus() and current in rows:
                painter.setPen(QColor(theme.accent))
                painter.drawRect(0, tops[current - first], self.viewport().width() - 1, ROW_HEIGHT - 1)
            painter.setFont(self.font())
            painter.setPen(QColor(theme.text))
            metrics = self.fontMetrics()
            for column in range(model.columnCount()):
                left, wide = self.columnViewportPosition(column), self.columnWidth(column) - 2 * INSET
                if left > area.right() or left + wide + 2 * INSET < area.left():
                    continue
                side = model.alignment_at(column)
                for row, top in zip(rows, tops, strict=True):
                    text = model.text_at(row, column)
                    if WIDE * len(text) > wide and metrics.horizontalAdvance(text) > wide:
                        text = metrics.elidedText(text, Qt.TextElideMode.ElideRight, wide)
                    painter.drawText(left + INSET, top, wide, ROW_HEIGHT, side, text)

    def currentChanged(self, current: QModelIndex, previous: QModelIndex) -> None:
        """The frame goes around whole rows, where Qt paints single cells anew."""
        super().currentChanged(current, previous)
        self.viewport().update()

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self.viewport().update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.viewport().update()

    def leaveEvent(self, event: QEvent) -> None:
        super().leaveEvent(event)
        self.left.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.matches(QKeySequence.StandardKey.Copy):
            self.copy_wanted.emit()
            return
        super().keyPressEvent(event)


class TablePanel(QFrame):
    """Head and rows; it folds down to its head.

    Signals
    -------
    folded(bool)
    save_wanted()
        The user wants the rows in a file.
    says(str)
        A sentence for the status line.
    pointed(Key or None)
        What the row under the pointer stands for.
    """

    folded = Signal(bool)
    save_wanted = Signal()
    says = Signal(str)
    pointed = Signal(object)

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("table")
        self.setProperty("kind", "panel")
        self.document = document
        self.bench: Bench | None = None
        self.title = Steady(label("", "heading"))
        self.note = Elided("", "muted")
        self.rows = Rows()
        self.empty = label("", "muted", wrap=True)
        self.empty.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.empty.hide()
        self.copy = button("Copy", "quiet", "Copy the chosen rows, or all, as text (Ctrl+C)")
        self.save = button("Save as CSV", "quiet", "Save all rows as CSV")
        self.fold = button("Fold", "quiet", "Fold the table away (Ctrl+T)")
        self._titles: tuple[str, ...] = ()
        self._widths: dict[tuple[str, ...], list[int]] = {}
        self._linking = False
        self._lay_out()
        self.copy.clicked.connect(self.copy_rows)
        self.rows.copy_wanted.connect(self.copy_rows)
        self.save.clicked.connect(self.save_wanted)
        self.fold.clicked.connect(lambda: self.set_folded(self.rows_shown))
        self.rows.entered.connect(self._point)
        self.rows.left.connect(lambda: self.pointed.emit(None))
        document.selection_changed.connect(self._show_selection)

    def _lay_out(self) -> None:
        head = QHBoxLayout()
        head.setContentsMargins(14, 3, 8, 3)
        head.setSpacing(8)
        head.addWidget(self.title)
        head.addWidget(self.note, 1)
        for part in (self.copy, self.save, self.fold):
            head.addWidget(part)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(head)
        self._body = QWidget()
        inner = QVBoxLayout(self._body)
        inner.setContentsMargins(0, 0, 0, 0)
        inner.addWidget(self.rows, 1)
        inner.addWidget(self.empty, 1)
        column.addWidget(self._body, 1)

    @property
    def rows_shown(self) -> bool:
        """Whether the table is unfolded."""
        return not self._body.isHidden()

    def set_folded(self, folded: bool) -> None:
        """Fold down to the head, or unfold."""
        if folded == self.rows_shown:
            self._body.setHidden(folded)
            self.fold.setText("Unfold" if folded else "Fold")
            self.setMaximumHeight(self.head_height if folded else 16_777_215)
            self.folded.emit(folded)

    @property
    def head_height(self) -> int:
        """Height of the folded table."""
        return self.fold.sizeHint().height() + 6

    def show_bench(self, bench: Bench) -> None:
        """Show the rows of a bench."""
        if self.bench is not None:
            self.bench.rows_changed.disconnect(self.refresh)
        self.bench = bench
        bench.rows_changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Take the bench's model and title anew."""
        if self.bench is None:
            return
        model = self.bench.table_model()
        if model is not self.rows.model():
            self._put_model(model)
        self._fit_columns()
        self._on_reset()

    def _put_model(self, model: RowsModel | None) -> None:
        old, picks = self.rows.model(), self.rows.selectionModel()
        if isinstance(old, RowsModel):
            old.modelReset.disconnect(self._on_reset)
        self.rows.setModel(model)
        if picks is not None:
            picks.deleteLater()
        if model is not None:
            model.modelReset.connect(self._on_reset)
            self.rows.selectionModel().selectionChanged.connect(self._picked)

    def _on_reset(self) -> None:
        model, bench = self.rows.model(), self.bench
        if bench is None:
            return
        self.title.setText(bench.table_title())
        count = 0 if model is None else model.rowCount()
        self.rows.setVisible(count > 0)
        self.empty.setVisible(count == 0)
        self.empty.setText(bench.table_note() or "No rows.")
        self.note.setText(bench.table_note() if count else "")
        self.copy.setEnabled(count > 0)
        self.save.setEnabled(count > 0)
        self._fit_columns()
        self._show_selection()

    def _fit_columns(self) -> None:
        model = self.rows.model()
        if not isinstance(model, RowsModel) or not model.rowCount():
            return
        titles = tuple(column.title for column in model.columns)
        if titles == self._titles:
            return
        self._titles = titles
        head = self.rows.horizontalHeader()
        head.setStretchLastSection(False)
        if (
            titles not in self._widths
        ):  # measured once: asking every cell again takes longer than all the rest
            self.rows.resizeColumnsToContents()
            sizes = [head.sectionSize(i) for i in range(len(titles))]
            self._widths[titles] = [min(MOST_WIDE, max(MOST_NARROW, size)) for size in sizes]
        for i, width in enumerate(self._widths[titles]):
            head.resizeSection(i, width)
        head.setStretchLastSection(model.columns[-1].text)  # a number far from its neighbours is hard to read

    def _picked(self) -> None:
        model = self.rows.model()
        if self._linking or not isinstance(model, RowsModel):
            return
        current = self.rows.selectionModel().currentIndex()
        key = model.key_of(current.row()) if current.isValid() else None
        if key is not None:
            self._linking = True
            self.document.select(key)
            self._linking = False

    def _point(self, index: QModelIndex) -> None:
        model = self.rows.model()
        self.pointed.emit(model.key_of(index.row()) if isinstance(model, RowsModel) else None)

    def _show_selection(self) -> None:
        model = self.rows.model()
        if self._linking or not isinstance(model, RowsModel):
            return
        row = model.row_of(self.document.selection)
        self._linking = True
        if row is None:
            self.rows.clearSelection()
        else:
            flags = QItemSelectionModel.SelectionFlag
            index = model.index(row, 0)
            self.rows.selectionModel().setCurrentIndex(index, flags.ClearAndSelect | flags.Rows)
            self.rows.scrollTo(index)
        self._linking = False

    def copy_rows(self) -> None:
        """Put the chosen rows, or all when one or none is chosen, on the clipboard as text."""
        model = self.rows.model()
        if not isinstance(model, RowsModel):
            return
        chosen = sorted(index.row() for index in self.rows.selectionModel().selectedRows())
        rows = chosen if len(chosen) > 1 else None
        count = len(chosen) if rows else model.rowCount()
        if count > MOST_COPIED:
            self.says.emit(f"{count:,} rows are too many for the clipboard; save them as CSV.")
            return
        QGuiApplication.clipboard().setText("\n".join(model.as_lines(rows)) + "\n")
        self.says.emit(f"Copied {count:,} row{'s' if count != 1 else ''}.")
