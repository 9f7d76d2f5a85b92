"""What all tests share: a platform that exists, settings of their own, and an honest answer about OpenGL."""

from __future__ import annotations

import os
import sys
import tempfile

import pytest


@pytest.hookimpl(trylast=True)
def pytest_configure(config: pytest.Config) -> None:
    """Choose Qt's platform after pytest-xvfb had its chance: without any display Qt would abort the run."""
    screen = os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY")
    if sys.platform.startswith("linux") and not screen:
        os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    os.environ.setdefault("LIBGL_ALWAYS_SOFTWARE", "1")
    home = tempfile.mkdtemp(prefix="mirrorlab-tests-")
    os.environ["XDG_CONFIG_HOME"] = home  # settings written by tests never reach the person's own
    os.environ["XDG_DATA_HOME"] = home


def pytest_runtest_setup(item: pytest.Item) -> None:
    """Skip OpenGL tests where there is no display; under CI that is a failure, never a silent skip."""
    if item.get_closest_marker("gl") is None or os.environ.get("QT_QPA_PLATFORM") != "offscreen":
        return
    reason = "needs an OpenGL context; the offscreen platform has none (install xvfb)"
    if os.environ.get("CI") == "true":
        pytest.fail(reason)
    pytest.skip(reason)
