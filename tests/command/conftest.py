"""What the tests of the command line share."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable

import pytest

from mirrorlab.command import main

Answer = tuple[int, str, str]


@pytest.fixture(autouse=True)
def application(qapp: object) -> None:
    """Have the window's kind of application first: a verb that paints would make a lesser one, and only one may be."""


@pytest.fixture
def answer(capsys: pytest.CaptureFixture[str]) -> Callable[..., Answer]:
    """Run the command line in this process: status, what it printed, what it complained of."""

    def run(*words: str) -> Answer:
        try:
            status = main(words)
        except SystemExit as leave:
            status = int(leave.code or 0)
        captured = capsys.readouterr()
        return status, captured.out, captured.err

    return run


@pytest.fixture
def child() -> Callable[..., subprocess.CompletedProcess[str]]:
    """Run Python code in a process of its own, by default without any screen."""

    def run(code: str, **extra: str) -> subprocess.CompletedProcess[str]:
        screens = ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM")
        environment = {key: value for key, value in os.environ.items() if key not in screens}
        return subprocess.run(
            [sys.executable, "-c", code],
            env={**environment, **extra},
            capture_output=True,
            encoding="utf-8",
            check=False,
            timeout=120,
        )

    return run
