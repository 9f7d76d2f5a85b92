"""Rows for the table along the bottom: columns of values, sorted, each row tied to a part of the picture."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt

from mirrorlab.drawing.model import Key

Index = QModelIndex | QPersistentModelIndex
KEY_ROLE = Qt.ItemDataRole.UserRole + 1
"""Item data under this role is the row's `Key`, or None."""

SORT_ROLE = Qt.ItemDataRole.UserRole + 2
"""Item data under this role is the unformatted value."""


@dataclass(frozen=True, slots=True, eq=False)
class Column:
    """One column of a table.

    Attributes
    ----------
    title : str
        Head of the column, with its unit where it has one.
    values : sequence, ndarray, or callable returning one
        One value a row. A callable is asked only when the column is first shown or sorted.
    show : callable or None
        Value to text; None writes floats with six significant digits and all else with `str`.
    hint : str
        What the column means, shown over its head.
    text : bool
        True puts it at the left and sorts by the text's length first (words), False is a number.
    """

    title: str
    values: Any
    show: Callable[[Any], str] | None = None
    hint: str = ""
    text: bool = False


def plain(value: Any) -> str:
    """A value as text, floats with six significant digits and a true minus sign."""
    if value is None:
        return ""
    if isinstance(value, float | np.floating):
        number = float(value)
        text = f"{0.0 if abs(number) < 5e-13 else number:.6g}"
        return text.replace("-", "−")
    return str(value)


def fixed(digits: int) -> Callable[[float], str]:
    """Writes numbers with so many decimals, a true minus sign, and none before a zero."""

    def show(value: float) -> str:
        text = f"{value:.{digits}f}"
        return (text if text.strip("-0.") else text.removeprefix("-")).replace("-", "−")

    return show


class RowsModel(QAbstractTableModel):
    """A sortable table of columns.

    Parameters
    ----------
    columns : sequence of Column
        All of one length.
    keys : str, sequence of Key or None
        What each row stands for in the pictures. A word such as ``"image"`` stands for
        ``("image", 0)``, ``("image", 1)``, … in the order given.
    """

    def __init__(
        self,
        columns: Sequence[Column] = (),
        keys: str | Sequence[Key] | None = None,
        parent: QObject | None = None,
    ) -> None:
        super().__init__(parent)
        self._columns: tuple[Column, ...] = tuple(columns)
        self._keys = keys
        self._values: dict[int, Any] = {}
        self._order: NDArray[np.intp] | None = None
        self._sorted_by: tuple[int, Qt.SortOrder] | None = None
        self._count = self._length()

    def set_columns(self, columns: Sequence[Column], keys: str | Sequence[Key] | None = None) -> None:
        """Replace all rows at once; the sorting stays when the columns have the same titles."""
        self.beginResetModel()
        same = [c.title for c in columns] == [c.title for c in self._columns]
        self._columns, self._keys = tuple(columns), keys
        self._values.clear()
        self._order = None
        self._count = self._length()
        if self._sorted_by is not None:
            if same:
                self._order = self._sorted(*self._sorted_by)
            else:
                self._sorted_by = None
        self.endResetModel()

    def _length(self) -> int:
        for i, column in enumerate(self._columns):
            if not callable(column.values):
                return len(self.values(i))
        return len(self.values(0)) if self._columns else 0

    @property
    def columns(self) -> tuple[Column, ...]:
        """The columns, in order."""
        return self._columns

    def values(self, column: int) -> Any:
        """All values of a column, unsorted."""
        if column not in self._values:
            source = self._columns[column].values
            self._values[column] = source() if callable(source) else source
        return self._values[column]

    def source_row(self, row: int) -> int:
        """Which of the rows as given stands at this place of the table."""
        return row if self._order is None else int(self._order[row])

    def text_at(self, row: int, column: int) -> str:
        """What stands in a cell."""
        value = self.values(column)[self.source_row(row)]
        show = self._columns[column].show
        return show(value) if show else plain(value)

    def alignment_at(self, column: int) -> int:
        """Texts stand at the left, numbers at the right."""
        side = Qt.AlignmentFlag.AlignLeft if self._columns[column].text else Qt.AlignmentFlag.AlignRight
        return int(side | Qt.AlignmentFlag.AlignVCenter)

    def key_of(self, row: int) -> Key | None:
        """What the row at this place stands for."""
        if self._keys is None or not 0 <= row < self._count:
            return None
        source = self.source_row(row)
        return (self._keys, source) if isinstance(self._keys, str) else self._keys[source]

    def row_of(self, key: Key | None) -> int | None:
        """The place of the first row that stands for `key`, or None."""
        if key is None or self._keys is None:
            return None
        if isinstance(self._keys, str):
            source = key[1] if key[0] == self._keys and 0 <= key[1] < self._count else None
        else:
            source = next((i for i, k in enumerate(self._keys) if k == key), None)
        if source is None or self._order is None:
            return source
        return int(np.flatnonzero(self._order == source)[0])

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else self._count

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else len(self._columns)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        if not index.isValid():
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return self.text_at(index.row(), index.column())
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return self.alignment_at(index.column())
        if role == KEY_ROLE:
            return self.key_of(index.row())
        if role == SORT_ROLE:
            return self.values(index.column())[self.source_row(index.row())]
        return None

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:
        if orientation == Qt.Orientation.Vertical or not 0 <= section < len(self._columns):
            return None
        column = self._columns[section]
        if role == Qt.ItemDataRole.DisplayRole:
            return column.title
        if role == Qt.ItemDataRole.ToolTipRole:
            return column.hint or None
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return self.alignment_at(section)
        return None

    def sort(self, column: int, order: Qt.SortOrder = Qt.SortOrder.AscendingOrder) -> None:
        """Sort by a column; a column of −1 brings back the order as given."""
        self.layoutAboutToBeChanged.emit()
        before = self.persistentIndexList()
        sources = [self.source_row(i.row()) for i in before]
        if 0 <= column < len(self._columns):
            self._sorted_by = (column, order)
            self._order = self._sorted(column, order)
        else:
            self._sorted_by = self._order = None
        if before:
            place = np.arange(self._count) if self._order is None else np.argsort(self._order)
            after = [self.index(int(place[s]), i.column()) for s, i in zip(sources, before, strict=True)]
            self.changePersistentIndexList(before, after)
        self.layoutChanged.emit()

    def _sorted(self, column: int, order: Qt.SortOrder) -> NDArray[np.intp]:
        values = self.values(column)
        if isinstance(values, np.ndarray) and values.dtype.kind in "biuf":
            ranks = np.round(values, 12) if values.dtype.kind == "f" else values
            place = np.argsort(ranks, kind="stable")
        elif self._columns[column].text:
            place = np.array(
                sorted(range(self._count), key=lambda i: (len(str(values[i])), str(values[i]))), dtype=np.intp
            )
        else:
            place = np.array(sorted(range(self._count), key=lambda i: _rank(values[i])), dtype=np.intp)
        return place if order == Qt.SortOrder.AscendingOrder else place[::-1]

    def as_rows(self) -> Iterator[list[str]]:
        """Head and all rows as texts, in the order shown; floats read back to the same double."""
        yield [c.title for c in self._columns]
        for row in range(self._count):
            yield [self._as_text(row, c, exact=True) for c in range(len(self._columns))]

    def as_lines(self, rows: Sequence[int] | None = None) -> Iterator[str]:
        """The table as tab-separated lines with its head; `rows` are places, None is all.

        Floats carry ten significant digits and a plain minus sign, so that a spreadsheet reads them.
        """
        yield "\t".join(c.title for c in self._columns)
        for row in range(self._count) if rows is None else rows:
            yield "\t".join(self._as_text(row, c) for c in range(len(self._columns)))

    def _as_text(self, row: int, column: int, exact: bool = False) -> str:
        value = self.values(column)[self.source_row(row)]
        if isinstance(value, float | np.floating):
            return repr(float(value)) if exact else f"{float(value):.10g}"
        show = self._columns[column].show
        return (show(value) if show else plain(value)).replace("−", "-")


def _rank(value: Any) -> tuple[int, Any]:
    """Numbers before texts before nothing, so that mixed columns sort without an error."""
    if value is None:
        return (2, "")
    return (0, float(value)) if isinstance(value, int | float | np.number) else (1, str(value))
