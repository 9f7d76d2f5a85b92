"""Long work beside the window: one thread a job, with progress, cancel, and nothing left running."""

from __future__ import annotations

import time
from collections.abc import Callable
from typing import Any, TypeAlias

from PySide6.QtCore import QObject, QThread, Signal

Job: TypeAlias = Callable[[Callable[[int, int], bool]], Any]
"""Called in a thread of its own with ``progress(done, total)``, which answers False when it should stop."""


TELL_EVERY = 0.05
"""Seconds between two reports of progress: the eye sees no more, and the window has better things to do."""


class _Thread(QThread):
    """One run of a job. The result stays in the thread object until the window collects it."""

    progressed = Signal(object, int, int)
    over = Signal(object)

    def __init__(
        self,
        name: str,
        job: Job,
        done: Callable[[Any], object],
        failed: Callable[[Exception], object] | None,
        parent: QObject,
    ) -> None:
        super().__init__(parent)
        self.name = name
        self.job = job
        self.done = done
        self.failed = failed
        self.cancelled = False
        self._told = 0.0
        self.result: Any = None
        self.error: Exception | None = None

    def report(self, done: int, total: int) -> bool:
        """Tell the window how far the job is; False when it should stop."""
        now = time.monotonic()
        if not self.cancelled and (done >= total or now - self._told >= TELL_EVERY):
            self._told = now
            self.progressed.emit(self, done, total)
        return not self.cancelled

    def run(self) -> None:
        try:
            if not self.cancelled:
                self.result = self.job(self.report)
        except Exception as error:  # a job's failure belongs to whoever asked for it, not to the thread
            self.error = error
        self.over.emit(self)


class Work(QObject):
    """Jobs that run beside the window. A job started under a name replaces the one of that name.

    Signals
    -------
    started(str), ended(str)
        With the job's name; `ended` comes after a cancel too.
    progressed(str, int, int)
        Name, done, total.
    """

    started = Signal(str)
    progressed = Signal(str, int, int)
    ended = Signal(str)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._running: dict[str, _Thread] = {}
        self._leaving: list[_Thread] = []
        self._closed = False

    def start(
        self,
        name: str,
        job: Job,
        done: Callable[[Any], object],
        failed: Callable[[Exception], object] | None = None,
    ) -> None:
        """Run `job` in a thread; call `done(result)` or `failed(error)` in the window's thread.

        Neither is called for a job that was cancelled or replaced. After `close` nothing is started any more: a
        timer that still fires while the window goes would leave a thread running without it, and Qt aborts then.
        """
        if self._closed:
            return
        self.cancel(name)
        thread = _Thread(name, job, done, failed, self)
        self._running[name] = thread
        thread.progressed.connect(self._on_progress)
        thread.over.connect(self._on_over)
        self.started.emit(name)
        thread.start()

    def running(self) -> tuple[str, ...]:
        """Names of the jobs under way."""
        return tuple(self._running)

    def cancel(self, name: str | None = None) -> None:
        """Ask a job, or all of them, to stop. Its result is dropped even if it comes."""
        for key in list(self._running) if name is None else [name]:
            thread = self._running.pop(key, None)
            if thread is not None:
                thread.cancelled = True
                self._leaving.append(thread)
                self.ended.emit(key)

    def close(self) -> None:
        """Cancel everything, wait for the threads to end, and start nothing more."""
        self._closed = True
        self.cancel()
        for thread in list(self._leaving):
            thread.wait()

    def _on_progress(self, thread: _Thread, done: int, total: int) -> None:
        if self._running.get(thread.name) is thread:
            self.progressed.emit(thread.name, done, total)

    def _on_over(self, thread: _Thread) -> None:
        thread.wait()
        if thread in self._leaving:
            self._leaving.remove(thread)
        wanted = self._running.get(thread.name) is thread
        thread.deleteLater()
        if not wanted:
            return
        del self._running[thread.name]
        self.ended.emit(thread.name)
        if thread.error is None:
            thread.done(thread.result)
        elif thread.failed is not None:
            thread.failed(thread.error)
        else:
            raise thread.error
