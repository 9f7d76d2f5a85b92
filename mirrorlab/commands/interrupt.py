"""Ctrl-C while the window is open: the window closes as by its own button, and the status says so."""

from __future__ import annotations

import contextlib
import signal
import socket
import threading
from collections.abc import Callable, Iterator

AGAIN = 0.1
"""Seconds until `stop` is tried again."""


@contextlib.contextmanager
def interrupts(stop: Callable[[], bool]) -> Iterator[None]:
    """Call `stop` from a thread when an interrupt comes, and raise KeyboardInterrupt at the end if one came.

    `stop` is called again until it returns True: before the window is there, there is nothing to close.

    Python's own handler has to wait until the window's loop returns to Python, which it may never do; a byte that
    the interpreter writes to a socket at once reaches a waiting thread.
    """
    came, over = threading.Event(), threading.Event()
    reader, writer = socket.socketpair()
    writer.setblocking(False)

    def wait() -> None:
        with contextlib.suppress(OSError):
            while data := reader.recv(1):
                if data[0] == signal.SIGINT:
                    came.set()
                    while not stop() and not over.wait(AGAIN):
                        pass

    handler = signal.signal(signal.SIGINT, lambda *_: None)
    before = signal.set_wakeup_fd(writer.fileno(), warn_on_full_buffer=False)
    thread = threading.Thread(target=wait, name="interrupts", daemon=True)
    thread.start()
    try:
        yield
    finally:
        over.set()
        signal.set_wakeup_fd(before)
        signal.signal(signal.SIGINT, handler)
        writer.close()  # ends the thread's wait
        thread.join()
        reader.close()
    if came.is_set():
        raise KeyboardInterrupt


def quit_window() -> bool:
    """Ask the application to close its windows and end; safe from any thread. False when there is none yet."""
    from PySide6.QtCore import QCoreApplication, QMetaObject, Qt

    application = QCoreApplication.instance()
    if application is None:
        return False
    return bool(QMetaObject.invokeMethod(application, "quit", Qt.ConnectionType.QueuedConnection))
