"""Can a window open here? Found out before Qt is asked, because Qt ends the process when it cannot."""

from __future__ import annotations

import ctypes
import os
import sys
from pathlib import Path

LIBRARIES = {
    "libEGL.so.1": "libegl1",
    "libGL.so.1": "libgl1",
    "libxkbcommon-x11.so.0": "libxkbcommon-x11-0",
    "libxcb-cursor.so.0": "libxcb-cursor0",
    "libxcb-icccm.so.4": "libxcb-icccm4",
    "libxcb-keysyms.so.1": "libxcb-keysyms1",
    "libxcb-image.so.0": "libxcb-image0",
    "libxcb-render-util.so.0": "libxcb-render-util0",
    "libxcb-shape.so.0": "libxcb-shape0",
    "libdbus-1.so.3": "libdbus-1-3",
    "libfontconfig.so.1": "fontconfig",
}
"""Libraries that Qt's window plugin for X11 loads, and the Debian packages that bring them."""

PAGELESS = ("offscreen", "minimal", "vnc", "eglfs", "linuxfb")
"""Platforms that need no display server."""


def why_no_window() -> str | None:
    """Why no window can open, in words, or None when one can."""
    if not sys.platform.startswith("linux"):
        return None
    platform = os.environ.get("QT_QPA_PLATFORM", "").partition(":")[0]
    if platform in PAGELESS:
        return None
    missing = sorted({package for name, package in LIBRARIES.items() if not _loads(name)})
    if missing:
        return "the platform's window libraries are missing; on Debian and its kin install " + " ".join(
            missing
        )
    wayland = os.environ.get("WAYLAND_DISPLAY")
    if wayland and (Path(os.environ.get("XDG_RUNTIME_DIR", "/")) / wayland).exists():
        return None
    display = os.environ.get("DISPLAY")
    if not display:
        return (
            "there is no screen (neither DISPLAY nor WAYLAND_DISPLAY is set); start it on a desktop, or on a "
            "virtual one: on Debian and its kin install xvfb, then xvfb-run mirrorlab"
        )
    if not _answers(display):
        return f"the screen {display} does not answer or does not let this user in"
    return None


def _loads(name: str) -> bool:
    try:
        ctypes.CDLL(name)
    except OSError:
        return False
    return True


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
    fine = xcb.xcb_connection_has_error(connection) == 0
    xcb.xcb_disconnect(connection)
    return fine
