"""OpenGL tried once, and what is asked of it."""

from __future__ import annotations

import os
from dataclasses import dataclass
from functools import lru_cache

from PySide6.QtGui import QGuiApplication, QOffscreenSurface, QOpenGLContext, QSurfaceFormat

PAINTER_SWITCH = "MIRRORLAB_PAINTER"
"""Set to 1 in the environment, pictures are painted without OpenGL."""

SAMPLES = 4
"""Samples a pixel on a graphics card. In software each frame would take five times as long (20 against 100 ms of
processor time at 800 × 700), and lines, which cover nearly all edges, are smooth by themselves."""

SOFTWARE = ("llvmpipe", "softpipe", "swrast", "swiftshader", "software", "gdi generic", "basic render")
"""What renderers that run on the processor call themselves."""


def surface_format() -> QSurfaceFormat:
    """What a picture's context must be able to do."""
    wanted = QSurfaceFormat()
    wanted.setVersion(2, 1)
    wanted.setDepthBufferSize(24)
    return wanted


@dataclass(frozen=True, slots=True)
class Card:
    """What draws: `missing` says why nothing can; `renderer` is its own name."""

    missing: str = ""
    renderer: str = ""

    @property
    def samples(self) -> int:
        """How many samples a pixel to ask for."""
        name = self.renderer.lower()
        return 0 if any(word in name for word in SOFTWARE) else SAMPLES


THREADS_SWITCH = "LP_NUM_THREADS"
"""In how many threads Mesa's renderer on the processor draws, if the user has not said so."""


@lru_cache(maxsize=1)
def card() -> Card:
    """What draws with OpenGL here, tried once."""
    return try_opengl()


def why_no_opengl() -> str:
    """Why OpenGL cannot be had, or "" when it can."""
    return card().missing


def try_opengl() -> Card:
    """Make a context and ask it who it is."""
    if os.environ.get(PAINTER_SWITCH) == "1":
        return Card(f"{PAINTER_SWITCH}=1 asks for pictures without OpenGL")
    if QGuiApplication.instance() is None:
        return Card("there is no application yet")
    # Drawing goes on while the window answers a key; on all cores it would take the window's own.
    os.environ.setdefault(THREADS_SWITCH, str(max(1, (os.cpu_count() or 1) - 1)))
    context = QOpenGLContext()
    context.setFormat(surface_format())
    if not context.create():
        return Card(f'the platform "{QGuiApplication.platformName()}" gives no OpenGL context')
    surface = QOffscreenSurface()
    surface.setFormat(context.format())
    surface.create()
    if not surface.isValid() or not context.makeCurrent(surface):
        return Card("an OpenGL context was made but cannot be used")
    version = context.format().version()
    renderer = _renderer()
    context.doneCurrent()
    if not context.isOpenGLES() and version < (2, 1):
        return Card(f"OpenGL {version[0]}.{version[1]} is older than 2.1", renderer)
    return Card("", renderer)


def _renderer() -> str:
    from OpenGL import GL

    name = GL.glGetString(GL.GL_RENDERER)
    return name.decode(errors="replace") if isinstance(name, bytes) else str(name or "")
