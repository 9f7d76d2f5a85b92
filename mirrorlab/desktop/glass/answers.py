"""An answer that takes a while: asked for by what it depends on, made beside the window, kept until that changes."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QObject, QTimer, Signal

from mirrorlab.desktop.work import Job, Work

PAUSE = 120
"""Milliseconds without a keystroke before work begins: shorter than the pause between two words."""


class Answer(QObject):
    """One question's answer.

    Attributes
    ----------
    key : object
        What the answer asked for last depends on; asking again with an equal key does nothing.
    value : object or None
        The newest answer there is, which may belong to an earlier key while `busy`.
    error : Exception or None
    busy : bool
    stopped : bool
        The user stopped it.

    Signals
    -------
    changed()
    """

    changed = Signal()

    def __init__(self, work: Work, name: str, parent: QObject | None = None, pause: int = PAUSE) -> None:
        super().__init__(parent)
        self._work, self.name = work, name
        self.key: object = None
        self.value: Any = None
        self.error: Exception | None = None
        self.busy = self.stopped = False
        self._asking = False
        self._job: Job | None = None
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(pause)
        self._timer.timeout.connect(self._start)
        work.ended.connect(self._ended)

    def ask(self, key: object, job: Job) -> None:
        """Have the answer made when it is not the one there is."""
        if key == self.key and not self.stopped:
            return
        first = self.key is None
        self.key, self._job = key, job
        self.busy, self.stopped, self.error = True, False, None
        if first:
            self._start()
        else:
            self._timer.start()

    def forget(self) -> None:
        """There is nothing to ask now."""
        self._timer.stop()
        self.key, self.value, self.error, self.busy, self.stopped = None, None, None, False, False
        self._asking = True
        self._work.cancel(self.name)
        self._asking = False

    def again(self) -> None:
        """Make it after it was stopped."""
        if self._job is not None:
            self.busy, self.stopped = True, False
            self._start()

    def _start(self) -> None:
        assert self._job is not None
        self._asking = True
        self._work.start(self.name, self._job, self._came, self._failed)
        self._asking = False

    def _came(self, value: object) -> None:
        self.value, self.error = value, None
        self._over()

    def _failed(self, error: Exception) -> None:
        self.value, self.error = None, error
        self._over()

    def _over(self) -> None:
        self.busy = self._timer.isActive()
        self.stopped = False
        self.changed.emit()

    def _ended(self, name: str) -> None:
        # An end without a result is a cancel; with one, `_came` or `_failed` follows at once and takes this back.
        if name == self.name and not self._asking and self.busy and not self._timer.isActive():
            self.busy, self.stopped = False, True
            self.changed.emit()
