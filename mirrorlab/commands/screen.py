"""Can a window open here? Found out before Qt is asked, because Qt ends the process when it cannot."""

from __future__ import annotations

import ctypes
import importlib.util
import os
import subprocess
import sys
from pathlib import Path

BASE = {
    "libEGL.so.1": "libegl1",
    "libGL.so.1": "libgl1",
    "libxkbcommon.so.0": "libxkbcommon0",
    "libdbus-1.so.3": "libdbus-1-3",
    "libfontconfig.so.1": "libfontconfig1",
    "libfreetype.so.6": "libfreetype6",
    "libglib-2.0.so.0": "libglib2.0-0",
}
"""Libraries that Qt loads whatever the screen, and the Debian packages that bring them."""

X11 = {
    "libX11-xcb.so.1": "libx11-xcb1",
    "libxkbcommon-x11.so.0": "libxkbcommon-x11-0",
    "libxcb-cursor.so.0": "libxcb-cursor0",
    "libxcb-icccm.so.4": "libxcb-icccm4",
    "libxcb-keysyms.so.1": "libxcb-keysyms1",
    "libxcb-image.so.0": "libxcb-image0",
    "libxcb-randr.so.0": "libxcb-randr0",
    "libxcb-render-util.so.0": "libxcb-render-util0",
    "libxcb-shape.so.0": "libxcb-shape0",
    "libxcb-sync.so.1": "libxcb-sync1",
    "libxcb-xfixes.so.0": "libxcb-xfixes0",
    "libxcb-xkb.so.1": "libxcb-xkb1",
}
"""What Qt's plugin for X11 loads besides."""

WAYLAND = {
    "libwayland-client.so.0": "libwayland-client0",
    "libwayland-cursor.so.0": "libwayland-cursor0",
    "libwayland-egl.so.1": "libwayland-egl1",
}
"""What Qt's plugin for Wayland loads besides."""

X11_NAME, WAYLAND_NAME = "xcb", "wayland"

SURE = ("offscreen", "minimal")
"""Platforms that need nothing but their libraries."""

PATIENCE = 20
"""Seconds that a platform of another kind may take to start."""


def why_no_window() -> str | None:
    """Why no window can open, in words, or None when one can.

    It stands for Linux only; elsewhere the screen's libraries are part of the system.
    """
    if not sys.platform.startswith("linux"):
        return None
    plugins = _plugins()
    if plugins is None:
        return "PySide6 is not installed; pip install PySide6-Essentials"
    wanted = [name.partition(":")[0] for name in os.environ.get("QT_QPA_PLATFORM", "").split(";") if name]
    unknown = [name for name in wanted if name not in plugins and not name.startswith(WAYLAND_NAME)]
    if wanted and plugins and len(unknown) == len(wanted):
        return f'QT_QPA_PLATFORM asks for "{";".join(unknown)}"; there are {", ".join(sorted(plugins))}'
    names = [name for name in wanted if name not in unknown] or _by_environment()
    reasons = []
    for name in names:
        reason = _why_not(name, plugins)
        if reason is None:
            return None
        reasons.append(reason)
    return "; ".join(reasons)


def _by_environment() -> list[str]:
    """Platforms worth trying."""
    return [WAYLAND_NAME, X11_NAME] if _has_wayland() else [X11_NAME]


def _has_wayland() -> bool:
    """Whether a Wayland screen is there."""
    display = os.environ.get("WAYLAND_DISPLAY")
    return bool(display) and (Path(os.environ.get("XDG_RUNTIME_DIR", "/")) / str(display)).exists()


def _plugins() -> dict[str, Path] | None:
    """Qt's platform plugins by name, found without loading Qt: none where PySide6 uses the system's Qt; None
    without PySide6."""
    spec = importlib.util.find_spec("PySide6")
    if spec is None or not spec.submodule_search_locations:
        return None
    folder = Path(spec.submodule_search_locations[0]) / "Qt" / "plugins" / "platforms"
    return {path.stem.removeprefix("libq"): path for path in folder.glob("libq*.so")}


def _why_not(name: str, plugins: dict[str, Path]) -> str | None:
    """Why a platform cannot be used, or None."""
    kind = WAYLAND_NAME if name.startswith(WAYLAND_NAME) else name
    libraries = {**BASE, **{X11_NAME: X11, WAYLAND_NAME: WAYLAND}.get(kind, {})}
    missing = sorted({package for library, package in libraries.items() if _cannot_load(library)})
    no_screen = _why_no_screen(kind)
    if missing:
        also = " xvfb" if no_screen and kind == X11_NAME else ""
        reason = (
            f"the platform's window libraries are missing; on Debian: apt install {' '.join(missing)}{also}"
        )
        return f"{reason}; and {no_screen}" if no_screen else reason
    if no_screen:
        return no_screen
    path = plugins.get(name)
    broken = _cannot_load(str(path)) if path is not None else None
    if broken:
        return f'Qt\'s platform plugin "{name}" cannot be loaded ({broken})'
    if kind not in (X11_NAME, WAYLAND_NAME, *SURE) and not _starts():
        return f'Qt\'s platform "{name}" does not start here'
    return None


def _starts() -> bool:
    """Whether an application starts, seen from another process: only that can end unharmed."""
    code = "from PySide6.QtGui import QGuiApplication; QGuiApplication([])"
    try:
        done = subprocess.run(
            [sys.executable, "-c", code], capture_output=True, timeout=PATIENCE, check=False
        )
    except subprocess.TimeoutExpired:
        return False
    return done.returncode == 0


def _cannot_load(library: str) -> str | None:
    """Why a shared library cannot be loaded, or None."""
    try:
        ctypes.CDLL(library)
    except OSError as error:
        return str(error)
    return None


def _why_no_screen(kind: str) -> str | None:
    """Why there is no screen of that kind, or None."""
    if kind == WAYLAND_NAME:
        return (
            None
            if _has_wayland()
            else "there is no Wayland screen (WAYLAND_DISPLAY names none that is there)"
        )
    if kind != X11_NAME:
        return None
    display = os.environ.get("DISPLAY")
    if not display:
        return (
            "there is no screen (neither DISPLAY nor WAYLAND_DISPLAY is set); start it on a desktop, or on a "
            "virtual screen: on Debian apt install xvfb, then xvfb-run -a mirrorlab"
        )
    return None if _answers(display) else f"the screen {display} does not answer or does not let this user in"


def _answers(display: str) -> bool:
    """Whether the X server lets us in."""
    try:
        xcb = ctypes.CDLL("libxcb.so.1")
    except OSError:
        return False
    xcb.xcb_connect.restype = ctypes.c_void_p
    xcb.xcb_connect.argtypes = [ctypes.c_char_p, ctypes.c_void_p]
    xcb.xcb_connection_has_error.argtypes = [ctypes.c_void_p]
    xcb.xcb_disconnect.argtypes = [ctypes.c_void_p]
    connection = xcb.xcb_connect(display.encode(), None)
    fine: bool = xcb.xcb_connection_has_error(connection) == 0
    xcb.xcb_disconnect(connection)
    return fine
