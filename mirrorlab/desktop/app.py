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

from mirrorlab.desktop.document import Document, Seed, Settings, State
from mirrorlab.desktop.samples import SAMPLES
from mirrorlab.desktop.stage import prepare_opengl
from mirrorlab.desktop.theme import THEMES
from mirrorlab.desktop.theming import system_theme, theming

if TYPE_CHECKING:
    from mirrorlab.desktop.window import Window

ORGANISATION = "Mirrorlab"
FIRST_SEED = Seed(heights=(1.0, 1.0, 1.0), place=None)


def prepare() -> None:
    """What must be said before the application object is there."""
    prepare_opengl()
    QCoreApplication.setOrganizationName(ORGANISATION)
    QCoreApplication.setApplicationName("Mirrorlab")


def make_application(arguments: list[str]) -> QApplication:
    """The application object, dressed."""
    prepare()
    app = QApplication(arguments)
    app.setStyle("Fusion")
    app.setApplicationDisplayName("Mirrorlab")
    app.setWindowIcon(icon())
    chosen = str(QSettings().value("theme", ""))
    theming().wear(chosen if chosen in THEMES else system_theme())
    return app


def icon() -> QIcon:
    """The icon, from the wheel's assets or the source tree's."""
    package = Path(__file__).parents[1]
    for folder in (package / "assets", package.parent / "assets"):
        if (folder / "icon.svg").is_file():
            return QIcon(str(folder / "icon.svg"))
    return QIcon()


def first_state() -> State:
    """What stands on the stage at the start: the first sample."""
    settings = Settings()
    sample = SAMPLES[0]
    return State(sample.arrangement(settings.reading), FIRST_SEED, settings, name=sample.name)


def make_window(settings: QSettings | None = None) -> Window:
    """A window with the first sample."""
    from mirrorlab.desktop.window import Window

    return Window(Document(first_state()), QSettings() if settings is None else settings)


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
