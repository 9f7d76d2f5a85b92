"""The libraries of the crystallographer's sums, loaded beside the window: the first import takes a second."""

from __future__ import annotations

import importlib
import sys
from collections.abc import Callable

from mirrorlab.desktop.document import Document
from mirrorlab.desktop.status import LIBRARIES_JOB as JOB

LOADING = "Getting ready for forms …"
NEEDED = ("scipy.spatial", "gemmi")


def loaded(document: Document) -> bool:
    """Whether all of them are in memory already."""
    return JOB not in document.work.running() and all(name in sys.modules for name in NEEDED)


def load(document: Document, failed: Callable[[Exception], object]) -> None:
    """Load them beside the window, and have everything that waits for them look again."""
    if loaded(document) or JOB in document.work.running():
        return
    document.work.start(JOB, _import_all, lambda _: document.crystal_changed.emit(), failed)


def _import_all(progress: Callable[[int, int], bool]) -> None:
    for k, name in enumerate(NEEDED):
        progress(k, len(NEEDED))
        importlib.import_module(name)
