"""Where no window can open: the reason is found beforehand, and the sample is printed instead."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

from mirrorlab import Arrangement
from mirrorlab.commands import screen
from mirrorlab.commands.fallback import print_instead
from mirrorlab.files.samples import assets
from mirrorlab.files.sheet_file import Sheet, load_sheet, save_sheet

Answer = Callable[..., tuple[int, str, str]]
Child = Callable[..., subprocess.CompletedProcess[str]]

START = "import sys; from mirrorlab.command import main; sys.exit(main({}))"
linux = pytest.mark.skipif(not sys.platform.startswith("linux"), reason="Qt's platforms on Linux")
pytestmark = linux


@pytest.fixture
def no_screen(monkeypatch: pytest.MonkeyPatch) -> pytest.MonkeyPatch:
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    return monkeypatch


def test_without_a_screen_the_sample_is_printed(child: Child) -> None:
    done = child(START.format([]))
    assert done.returncode == 0, done.stderr
    assert done.stdout.splitlines()[0] == "Ostrel corner lantern"
    assert "48 images" in done.stdout
    assert "… 24 more" in done.stdout
    assert "no window opened" in done.stderr
    assert "apt install" in done.stderr


@pytest.mark.parametrize(
    ("extra", "said"),
    [
        ({"DISPLAY": ":987"}, "the screen :987 does not answer"),
        ({"QT_QPA_PLATFORM": "xcb"}, "there is no screen"),
        ({"QT_QPA_PLATFORM": "nonsense"}, 'asks for "nonsense"'),
        ({"QT_QPA_PLATFORM": "wayland"}, "no Wayland screen"),
    ],
)
def test_a_platform_that_would_end_the_process(child: Child, extra: dict[str, str], said: str) -> None:
    done = child(START.format([]), **extra)
    assert done.returncode == 0, done.stderr
    assert said in done.stderr
    assert "Traceback" not in done.stderr


def test_missing_libraries_are_named_by_their_packages(no_screen: pytest.MonkeyPatch) -> None:
    no_screen.setattr(screen, "_cannot_load", lambda name: "gone" if "xcb-cursor" in name else None)
    reason = screen.why_no_window() or ""
    assert "apt install libxcb-cursor0 xvfb" in reason
    assert "there is no screen" in reason
    no_screen.setenv("QT_QPA_PLATFORM", "offscreen")
    assert screen.why_no_window() is None


def test_a_plugin_that_cannot_be_loaded_for_another_reason(no_screen: pytest.MonkeyPatch) -> None:
    no_screen.setenv("QT_QPA_PLATFORM", "offscreen")
    no_screen.setattr(screen, "_cannot_load", lambda name: "too old" if "plugins" in name else None)
    assert "cannot be loaded (too old)" in (screen.why_no_window() or "")


def test_every_library_that_is_looked_for_is_one_that_qt_wants() -> None:
    """ldd (GNU C library) lists what the plugin for X11 loads; each library of ours must be among it."""
    plugins = screen._plugins()
    assert plugins is not None
    listed = subprocess.run(["ldd", plugins["xcb"]], capture_output=True, text=True, check=True).stdout
    assert [name for name in (*screen.BASE, *screen.X11) if name not in listed] == []


def test_a_file_is_printed_but_the_status_says_that_no_window_came(child: Child) -> None:
    name = str(assets() / "samples" / "03-ostrel-tetra-lantern.json")
    done = child(START.format([name]))
    assert done.returncode == 2
    assert done.stdout.splitlines()[0] == "Ostrel tetra lantern"
    assert "24 images" in done.stdout
    assert "no window opened" in done.stderr


@pytest.mark.parametrize("path", sorted((assets() / "samples").glob("*.json")), ids=lambda path: path.stem)
def test_every_sample_is_printed_where_no_window_opens(
    capsys: pytest.CaptureFixture[str], path: Path
) -> None:
    sheet = load_sheet(path)
    assert print_instead(str(path), "a reason") == 2
    captured = capsys.readouterr()
    assert captured.out.startswith(f"{sheet.name}\n\n{sheet.arrangement.finding().sentence}\n")
    assert ("images; stabiliser" in captured.out) == (sheet.arrangement.finding().group is not None)
    assert captured.err.startswith("\nmirrorlab: no window opened: a reason\n")


def test_a_file_whose_images_are_too_many_still_has_its_finding(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    sheet = Sheet(Arrangement.from_family("E8"), "Eight walls", seed={"place": "centre"})
    assert print_instead(str(save_sheet(tmp_path / "e8.json", sheet)), "a reason") == 2
    assert "no images: " in capsys.readouterr().out


def test_a_crystal_file_is_sent_to_the_verb_that_reads_it() -> None:
    with pytest.raises(OSError, match="mirrorlab cell"):
        print_instead("quartz-like.cif", "a reason")


def test_a_file_that_is_wrong_is_one_line(child: Child, tmp_path: Path) -> None:
    (tmp_path / "a.json").write_text("{}")
    done = child(START.format([str(tmp_path / "a.json")]))
    assert (done.returncode, done.stdout) == (2, "")
    assert "not an arrangement file" in done.stderr.splitlines()[0]


def test_an_interrupt_closes_the_window() -> None:
    environment = {**os.environ, "QT_QPA_PLATFORM": "offscreen"}
    running = subprocess.Popen(
        [sys.executable, "-m", "mirrorlab"], env=environment, stderr=subprocess.PIPE, text=True
    )
    shown = running.stderr.readline() if running.stderr else ""  # the platform says that a window came up
    assert "propagateSizeHints" in shown
    running.send_signal(signal.SIGINT)
    _, err = running.communicate(timeout=60)
    assert running.returncode == 130
    assert "mirrorlab: stopped" in err
    assert "Traceback" not in err
