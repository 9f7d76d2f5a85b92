"""Starting the window."""

from __future__ import annotations

import sys
import traceback
from pathlib import Path
from types import TracebackType
from typing import TYPE_CHECKING

from PySide6.QtCore import QCoreApplication, QSettings
from PySide6.QtGui import QIcon
from PySide6.QtWidgets import QApplication

from mirrorlab.desktop.document import Document, Settings, State
from mirrorlab.desktop.own_settings import kept_settings
from mirrorlab.desktop.sheets import state_of
from mirrorlab.desktop.theme import THEMES
from mirrorlab.desktop.theming import system_theme, theming
from mirrorlab.files.samples import assets, samples

if TYPE_CHECKING:
    from mirrorlab.desktop.window import Window

ORGANISATION = "Mirrorlab"
DEFAULT_SETTINGS = Settings()


def make_application(arguments: list[str]) -> QApplication:
    """The application object, dressed."""
    QCoreApplication.setOrganizationName(ORGANISATION)
    QCoreApplication.setApplicationName("Mirrorlab")
    app = QApplication(arguments)
    app.setStyle("Fusion")
    app.setApplicationDisplayName("Mirrorlab")
    app.setWindowIcon(icon())
    chosen = str(QSettings().value("theme", ""))
    theming().wear(chosen if chosen in THEMES else system_theme())
    return app


def icon() -> QIcon:
    """The window's icon."""
    return QIcon(str(assets() / "icon.svg"))


def first_state(settings: Settings = DEFAULT_SETTINGS) -> State:
    """What stands on the stage at the start: the first sample."""
    return state_of(samples()[0], settings)


def make_window(settings: QSettings | None = None) -> Window:
    """A window with the first sample."""
    from mirrorlab.desktop.window import Window

    kept = QSettings() if settings is None else settings
    return Window(Document(first_state(kept_settings(kept))), kept)


def guard(window: Window) -> None:
    """Show what went wrong instead of dying: the document is kept, and written aside at once."""

    def report(kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        traceback.print_exception(kind, error, trace)
        if issubclass(kind, KeyboardInterrupt):
            QCoreApplication.quit()
            return
        window.filing.keep_unsaved()
        window.notice.warn(
            f"Something went wrong inside Mirrorlab ({kind.__name__}: {error}). "
            "Your arrangement is unharmed and was also kept for the next start; undo still works."
        )

    sys.excepthook = report


def run(path: str | Path | None = None) -> int:
    """Open the window, with a file when one is given; returns the exit status."""
    app = make_application(sys.argv[:1])
    window = make_window()
    guard(window)
    geometry = window.settings.value("geometry")
    if geometry is not None:
        window.restoreGeometry(geometry)
    window.show()
    if path is not None:
        window.filing.open_path(Path(path))
    else:
        window.filing.offer_kept()
    return app.exec()
