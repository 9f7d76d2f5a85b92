"""Starting and leaving, as a process of its own."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

START = """
from PySide6.QtCore import QTimer
from mirrorlab.desktop import app
make = app.make_window
def made():
    window = make()
    QTimer.singleShot(100, lambda: {act})
    QTimer.singleShot(300, window.close)
    return window
app.make_window = made
raise SystemExit(app.run({path}))
"""


def start(tmp_path: Path, act: str, path: str = "None") -> subprocess.CompletedProcess[str]:
    home = {"XDG_CONFIG_HOME": str(tmp_path), "XDG_DATA_HOME": str(tmp_path), "QT_QPA_PLATFORM": "offscreen"}
    return subprocess.run(
        [sys.executable, "-W", "error", "-c", START.format(act=act, path=path)],
        env={k: v for k, v in os.environ.items() if k not in ("DISPLAY", "WAYLAND_DISPLAY")} | home,
        cwd=Path(__file__).parents[2],
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
    )


def complaints(done: subprocess.CompletedProcess[str]) -> list[str]:
    """Lines on standard error that are not the platform's own."""
    return [line for line in done.stderr.splitlines() if "This plugin does not support" not in line]


def test_opens_and_closes_without_a_word(tmp_path: Path) -> None:
    done = start(tmp_path, "None")
    assert done.returncode == 0
    assert complaints(done) == []
    assert not list(tmp_path.rglob("unsaved*"))


def test_unsaved_changes_are_kept_and_offered(tmp_path: Path) -> None:
    assert start(tmp_path, 'window.document.set_angle(2, "36")').returncode == 0
    assert list(tmp_path.rglob("unsaved*"))
    done = start(tmp_path, "print(window.notice.words.text()) or window.notice.act.click()")
    assert "unsaved changes" in done.stdout
    assert complaints(done) == []


@pytest.mark.parametrize("content", ["{}", None])
def test_a_wrong_file_on_the_way_in_shows_the_sample_and_a_reason(
    tmp_path: Path, content: str | None
) -> None:
    path = tmp_path / "x.json"
    if content is not None:
        path.write_text(content)
    done = start(tmp_path, "print(window.notice.words.text(), window.document.finding.kind)", repr(str(path)))
    assert done.returncode == 0
    assert "x.json was not opened" in done.stdout
    assert "closed" in done.stdout
