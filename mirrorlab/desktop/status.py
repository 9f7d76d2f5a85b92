"""The status line: what is under the pointer, what was done, and long work with its cancel button."""

from __future__ import annotations

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QHBoxLayout, QProgressBar, QStatusBar, QWidget

from mirrorlab.desktop.evidence import SUGGESTIONS_JOB
from mirrorlab.desktop.parts import Elided, button, label
from mirrorlab.desktop.work import Work

LIBRARIES_JOB = "libraries"
"""Name of the job that loads a bench's libraries."""

EYE_JOB = "eye's view"
"""Name of the job that traces the view on the stage, many times a second while it is turned."""

QUIET_JOBS = frozenset({SUGGESTIONS_JOB, LIBRARIES_JOB, EYE_JOB})
"""Jobs that take a second at most and say so where their result will stand."""

REST = "Type an angle; drag the seed; point at an image or a chamber to read its word."


SOON = 200
"""Milliseconds after which work is shown: what takes less would only flash by."""


class StatusLine(QStatusBar):
    """One line along the bottom of the window."""

    def __init__(self, work: Work, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setSizeGripEnabled(False)
        self.setContentsMargins(12, 0, 8, 0)
        self._work = work
        self._said = ""
        self.words = Elided(REST)
        self.job = label("")
        self.bar = QProgressBar()
        self.bar.setTextVisible(False)
        self.bar.setFixedWidth(140)
        self.cancel = button("Cancel", "tight", "Stop this work")
        self.cancel.clicked.connect(lambda: work.cancel())
        self.working = QWidget()
        row = QHBoxLayout(self.working)
        row.setContentsMargins(0, 0, 6, 0)
        for part in (self.job, self.bar, self.cancel):
            row.addWidget(part)
        self.working.hide()
        self._soon = QTimer(self)
        self._soon.setSingleShot(True)
        self._soon.setInterval(SOON)
        self._soon.timeout.connect(self.working.show)
        self.addWidget(self.words, 1)
        self.addPermanentWidget(self.working)
        work.started.connect(self._started)
        work.progressed.connect(self._progressed)
        work.ended.connect(self._ended)

    def say(self, text: str) -> None:
        """Say what was done; it stays until something else is said."""
        self._said = text
        self.words.setText(text or REST)

    def hover(self, text: str) -> None:
        """Say what is under the pointer; with nothing there, what was said last comes back."""
        self.words.setText(text or self._said or REST)

    def _started(self, name: str) -> None:
        if name in QUIET_JOBS:
            return
        self.job.setText(f"Making {name}")
        self.bar.setRange(0, 0)
        if self.working.isHidden() and not self._soon.isActive():
            self._soon.start()

    def _progressed(self, name: str, done: int, total: int) -> None:
        if name in QUIET_JOBS:
            return
        self.bar.setRange(0, max(1, total))
        self.bar.setValue(done)

    def _ended(self, name: str) -> None:
        if not [job for job in self._work.running() if job not in QUIET_JOBS]:
            self._soon.stop()
            self.working.hide()
