"""Opening, saving and exporting; and keeping unsaved changes when the window closes or something goes wrong."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QStandardPaths, Signal
from PySide6.QtWidgets import QFileDialog

from mirrorlab.desktop.theming import theming

if TYPE_CHECKING:
    from mirrorlab.desktop.window import Window

MOST_RECENT = 8
KEPT_NAME = "unsaved.mirrorlab.json"
SHEETS = "Arrangements (*.json)"
OPENABLE = (
    "Arrangements, crystal files and lists (*.json *.cif *.csv);;Arrangements (*.json);;"
    "Crystal files (*.cif);;Lists of points (*.csv);;All files (*)"
)
EXPORTS = {
    "csv": ("images.csv", "Images as CSV (*.csv)"),
    "npy": ("images.npy", "Coordinates as NumPy array (*.npy)"),
    "picture": ("picture.png", "PNG picture (*.png);;SVG drawing (*.svg);;PDF (*.pdf)"),
    "mesh": ("mesh.glb", "GLB mesh (*.glb);;STL mesh (*.stl);;OBJ mesh (*.obj)"),
    "rows": ("rows.csv", "Rows as CSV (*.csv)"),
}


class Filing(QObject):
    """Files of the window.

    Signals
    -------
    says(str)
        What was done.
    failed(str)
        What could not be done, and why; nothing has changed then.
    """

    says = Signal(str)
    failed = Signal(str)

    def __init__(self, window: Window) -> None:
        super().__init__(window)
        self._window = window
        self._document = window.document

    # -- the arrangement file ------------------------------------------------------------------------

    def open(self) -> None:
        """Ask for a file and open it."""
        name, _ = QFileDialog.getOpenFileName(self._window, "Open", self._folder(), OPENABLE)
        if name:
            self.open_path(Path(name))

    def open_path(self, path: Path) -> bool:
        """Open a file as a step that can be undone. A wrong file changes nothing and says why."""
        from mirrorlab.desktop.sheets import read_sheet

        for slot in self._window.benches.slots:
            if path.suffix.lower() in slot.opens:
                return self._open_on_bench(path, slot.title)
        try:
            read_sheet(path, self._document)
        except (ValueError, OSError) as error:
            self.failed.emit(f"{path.name} was not opened: {_reason(error, path)}")
            return False
        self._remember(path)
        self.says.emit(f"Opened {path}.")
        return True

    def _open_on_bench(self, path: Path, title: str) -> bool:
        benches = self._window.benches
        try:
            said = benches.bench(title).open_file(path)
        except (ValueError, OSError) as error:
            self.failed.emit(f"{path.name} was not opened: {_reason(error, path)}")
            return False
        benches.show_index([slot.title for slot in benches.slots].index(title))
        self._remember(path)
        self.says.emit(said)
        return True

    def save(self) -> bool:
        """Write the sheet's file; ask for a name when it has none."""
        path = self._document.path
        return self.save_as() if path is None else self.save_path(path)

    def save_as(self) -> bool:
        """Ask for a name and write the sheet there."""
        start = self._document.path or Path(self._folder()) / f"{_file_name(self._document.name)}.json"
        name, _ = QFileDialog.getSaveFileName(self._window, "Save arrangement", str(start), SHEETS)
        if not name:
            return False
        path = Path(name)
        return self.save_path(path if path.suffix else path.with_suffix(".json"))

    def save_path(self, path: Path) -> bool:
        """Write the sheet to a file, whole or not at all."""
        from mirrorlab.desktop.sheets import write_sheet

        try:
            write_sheet(path, self._document)
        except (ValueError, OSError) as error:
            self.failed.emit(f"{path.name} was not saved: {_reason(error, path)}")
            return False
        self._document.saved_as(path)
        self._remember(path)
        self.says.emit(f"Saved {path}.")
        return True

    # -- exports -------------------------------------------------------------------------------------

    def save_rows(self) -> None:
        """Ask for a name and write the table's rows."""
        bench = self._window.benches.current
        if bench.exports_rows_as:
            self.export(bench.exports_rows_as)
            return
        path = self._ask("rows")
        if path is not None:
            self._attempt(path, lambda: bench.save_rows(path))

    def export(self, kind: str) -> None:
        """Ask for a name and write "csv", "npy", "picture" or "mesh"."""
        path = self._ask(kind)
        if path is not None:
            self.export_path(kind, path)

    def export_path(self, kind: str, path: Path) -> bool:
        """Write "csv", "npy", "picture" or "mesh" to a file."""
        from mirrorlab.desktop import exporting

        pane = self._window.stage.panes[0]
        work = {
            "csv": lambda: exporting.write_csv(self._document, path),
            "npy": lambda: exporting.write_npy(self._document, path),
            "picture": lambda: exporting.write_picture(pane, path, theming().theme),
            "mesh": lambda: exporting.write_mesh(pane, path),
        }[kind]
        return self._attempt(path, work)

    def _attempt(self, path: Path, work: object) -> bool:
        try:
            work()  # type: ignore[operator]
        except (ValueError, OSError) as error:
            self.failed.emit(f"{path.name} was not written: {_reason(error, path)}")
            return False
        self.says.emit(f"Wrote {path}.")
        return True

    def _ask(self, kind: str) -> Path | None:
        name, kinds = EXPORTS[kind]
        stem = _file_name(self._document.name)
        start = Path(self._folder()) / f"{stem} {name}"
        chosen, which = QFileDialog.getSaveFileName(self._window, "Export", str(start), kinds)
        if not chosen:
            return None
        path = Path(chosen)
        if not path.suffix:
            suffix = which.partition("*")[2].rstrip(")") or Path(name).suffix
            path = path.with_suffix(suffix)
        return path

    # -- recent files --------------------------------------------------------------------------------

    def recent(self) -> list[Path]:
        """Files opened or saved lately, the last one first."""
        kept = self._window.settings.value("recent", [])
        names = [kept] if isinstance(kept, str) else list(kept or [])
        return [Path(name) for name in names if Path(name).is_file()]

    def _remember(self, path: Path) -> None:
        whole = str(path.resolve())
        names = [whole, *(str(p) for p in self.recent() if str(p) != whole)]
        self._window.settings.setValue("recent", names[:MOST_RECENT])

    def _folder(self) -> str:
        recent = self.recent()
        if recent:
            return str(recent[0].parent)
        return QStandardPaths.writableLocation(QStandardPaths.StandardLocation.DocumentsLocation)

    # -- unsaved changes -----------------------------------------------------------------------------

    @property
    def kept_path(self) -> Path:
        """Where unsaved changes are kept between two starts."""
        folder = self._window.settings.value("kept folder") or QStandardPaths.writableLocation(
            QStandardPaths.StandardLocation.AppDataLocation
        )
        return Path(str(folder)) / KEPT_NAME

    def keep_unsaved(self) -> None:
        """Write unsaved changes aside, so that the next start can offer them."""
        if not self._document.altered:
            return
        from mirrorlab.desktop.sheets import write_sheet

        try:
            self.kept_path.parent.mkdir(parents=True, exist_ok=True)
            write_sheet(self.kept_path, self._document)
        except (ValueError, OSError) as error:
            self.failed.emit(f"Unsaved changes could not be kept: {error}")

    def offer_kept(self) -> None:
        """Offer what was kept from the last time, if there is anything."""
        if self.kept_path.is_file():
            text = "The last session ended with unsaved changes."
            self._window.notice.offer(text, "Bring them back", self.bring_back)

    def bring_back(self) -> None:
        """Open what was kept, as a sheet without a file, and forget the kept copy."""
        from mirrorlab.desktop.sheets import read_sheet

        try:
            read_sheet(self.kept_path, self._document, keep_path=False)
        except (ValueError, OSError) as error:
            self.failed.emit(f"The unsaved changes could not be read: {error}")
            return
        self.kept_path.unlink(missing_ok=True)
        self.says.emit("Brought back the unsaved changes of the last session.")


def _reason(error: Exception, path: Path) -> str:
    """The error's message without the path that the sentence has named already."""
    told = str(error)
    for name in (str(path), path.name):
        for beside in (": ", ", "):
            told = told.removeprefix(name + beside)
    return told


def _file_name(name: str) -> str:
    kept = "".join(c if c.isalnum() or c in " -_." else " " for c in name).strip()
    return kept or "arrangement"
