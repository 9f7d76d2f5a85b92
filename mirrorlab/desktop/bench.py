"""The bench: one trade's place at the right of the window, and the list of those there are.

How a bench is written
----------------------
A bench is a widget about 300 px wide that only watches the document. It lives in a package of its own
(``mirrorlab/desktop/crystal/``) and its class is named in `BENCHES` below; nothing else needs to know it::

    class CrystalBench(Bench):
        title = "Crystal"

        def __init__(self, document, parent=None):
            super().__init__(document, parent)
            layout = QVBoxLayout(self.body)              # the body scrolls when it is higher than the window
            layout.addWidget(...)
            document.arrangement_changed.connect(self.refresh)

        def table_model(self):
            return self._rows                            # a RowsModel: columns, sorting and keys come with it

        def pictures(self):
            return {"Stereogram": stereogram_of}         # callable(document) -> Drawing or QWidget

- A bench is imported and built when it is shown for the first time, or when one of the pictures that its
  slot names is chosen. So its slot names its pictures, and its package imports nothing heavy at the top.
- `refresh` does nothing while the bench is hidden: override `refresh`, connect the document's signals to
  `watch`, and it is called when the bench is in sight, and again when it comes into sight after a change.
- A picture is made by a pure function of the document. It returns a `Drawing`, which the stage shows and
  keeps in step, or a `QWidget` that watches the document itself (a traced view). It raises `NoPicture`
  with one sentence where there is nothing to show; the stage shows that sentence in its place.
- Undoable state of a trade is one frozen value: ``document.set_crystal(value, "change form")`` and
  ``document.set_glass(value, "set opening", gesture="opening")``; read it back as ``document.crystal``. It
  is saved through its ``to_dict()`` (plain JSON); after a file was opened ``document.crystal`` is the plain
  mapping that was saved, so read it through one function that takes None, a mapping or your value.
- Long work goes through ``document.work``, which shows progress and a cancel button in the status line.
"""

from __future__ import annotations

import importlib
import importlib.util
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, TypeAlias

from PySide6.QtCore import QIODevice, QSaveFile, Qt, Signal
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QFrame, QScrollArea, QVBoxLayout, QWidget

if TYPE_CHECKING:
    from mirrorlab.desktop.document import Document
    from mirrorlab.desktop.rows import RowsModel
    from mirrorlab.drawing.model import Drawing

PictureMaker: TypeAlias = "Callable[[Document], Drawing | QWidget]"


class NoPicture(ValueError):
    """There is nothing to show of this arrangement; the message is one sentence for the stage."""


class Bench(QWidget):
    """Base of every bench.

    Attributes
    ----------
    title : str
        The word on its tab.
    document : Document
        What it watches.
    body : QWidget
        Where a bench lays its widgets; it scrolls when it does not fit.
    exports_rows_as : str
        Name of an export of the window that writes the rows better than `save_rows` does; "" for none.

    Signals
    -------
    rows_changed()
        `table_model()` or `table_title()` now answer something else. A model that only resets its rows
        need not emit it.
    picture_wanted(str)
        Asks the stage to show the picture of that name.
    says(str)
        A sentence for the status line.
    file_wanted()
        The user wants to open a file.
    """

    title = ""
    exports_rows_as = ""
    rows_changed = Signal()
    picture_wanted = Signal(str)
    says = Signal(str)
    file_wanted = Signal()

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self._stale = True
        self.body = QWidget()
        self.body.setObjectName("benchBody")
        area = QScrollArea()
        area.setObjectName("benchArea")
        area.setFrameShape(QFrame.Shape.NoFrame)
        area.setWidgetResizable(True)
        area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        area.setWidget(self.body)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addWidget(area)

    def table_model(self) -> RowsModel | None:
        """The rows for the table along the bottom, or None when this bench has none."""
        return None

    def table_title(self) -> str:
        """One short phrase above the table, e.g. "48 images"."""
        return ""

    def table_note(self) -> str:
        """Beside the title, e.g. which axes the coordinates are in; or why there are no rows."""
        return ""

    def save_rows(self, path: Path) -> None:
        """Write all rows as CSV. A bench overrides it where its rows need a frame or units beside them."""
        model = self.table_model()
        if model is not None:
            write_csv(path, model)

    def open_file(self, path: Path) -> str:
        """Take in a file of this trade, as one step; returns what was done, in a sentence.

        Raises
        ------
        ValueError
            What is wrong with the file; nothing has changed then.
        """
        msg = f"the {self.title} bench opens no such file"
        raise ValueError(msg)

    def pictures(self) -> dict[str, PictureMaker]:
        """The pictures this bench offers to the stage, by the name shown in the chooser."""
        return {}

    def refresh(self) -> None:
        """Bring the widgets in step with the document. Called only while the bench is in sight."""

    def watch(self) -> None:
        """Slot for the document's signals: refresh now when in sight, else when it comes into sight."""
        self._stale = True
        if self.isVisible():
            self._stale = False
            self.refresh()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._stale:
            self._stale = False
            self.refresh()


def write_csv(path: Path, model: RowsModel) -> None:
    """Write a model's rows as CSV (RFC 4180), whole or not at all."""
    import csv
    import io

    text = io.StringIO()
    rows = csv.writer(text, lineterminator="\r\n")
    for line in model.as_rows():
        rows.writerow(line)
    file = QSaveFile(str(path))
    if not file.open(QIODevice.OpenModeFlag.WriteOnly):
        msg = f"{path}: {file.errorString()}"
        raise OSError(msg)
    file.write(text.getvalue().encode())
    if not file.commit():
        msg = f"{path}: {file.errorString()}"
        raise OSError(msg)


@dataclass(frozen=True, slots=True)
class BenchSlot:
    """One entry of the list of benches.

    Attributes
    ----------
    title : str
        The word on the tab.
    place : str
        ``"module:Class"``; imported on first use.
    pictures : tuple of str
        Names of the pictures it will offer, so that they can be chosen before the bench is loaded.
    about : str
        What it is for, as the tab's hint.
    opens : tuple of str
        Suffixes of the files it takes in through `Bench.open_file`.
    """

    title: str
    place: str
    pictures: tuple[str, ...] = ()
    about: str = ""
    opens: tuple[str, ...] = ()

    def build(self, document: Document, parent: QWidget | None = None) -> Bench:
        """Import and build the bench."""
        module, name = self.place.split(":")
        made: Bench = getattr(importlib.import_module(module), name)(document, parent)
        return made


BENCHES: tuple[BenchSlot, ...] = (
    BenchSlot(
        "Points", "mirrorlab.desktop.points_bench:PointsBench", about="Seed, images, stabiliser and export"
    ),
    BenchSlot(
        "Crystal",
        "mirrorlab.desktop.crystal:CrystalBench",
        pictures=("Stereogram", "Form"),
        about="Point groups, positions, forms, planes and comparison",
        opens=(".cif", ".csv"),
    ),
    BenchSlot(
        "Glass",
        "mirrorlab.desktop.glass:GlassBench",
        pictures=("Eye's view", "Assembly", "Panels"),
        about="Assembly, images, tolerance and panels",
    ),
)


def there(slots: tuple[BenchSlot, ...] = BENCHES) -> tuple[BenchSlot, ...]:
    """The benches whose package is installed; a build for one trade may leave the other's out."""
    return tuple(slot for slot in slots if importlib.util.find_spec(slot.place.split(":")[0]) is not None)
