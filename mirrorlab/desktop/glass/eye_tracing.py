"""What the eye's view needs beside the window: the tracer warmed up, the picture read, the pixels traced."""

from __future__ import annotations

import threading
from collections.abc import Callable
from functools import lru_cache
from pathlib import Path
from typing import TYPE_CHECKING, TypeAlias

import numpy as np
from numpy.typing import NDArray

from mirrorlab.desktop.glass.glass_state import GlassState
from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.lengths import AssemblyError

if TYPE_CHECKING:
    from mirrorlab.optics.texture import Texture

Bytes = NDArray[np.uint8]
Progress: TypeAlias = Callable[[int, int], bool]

WARM_JOB = "eye's view ready"
SAVE_JOB = "picture of the eye's view"

_warm = threading.Event()
"""Set once the compiled tracer is in memory: that is a fact about the process, and never taken back."""


def warm() -> bool:
    """Whether the tracer is ready."""
    return _warm.is_set()


def warming(progress: Progress) -> None:
    """Load and compile the tracer; for a thread beside the window."""
    from mirrorlab.optics.tracer import warm_up

    progress(0, 1)
    warm_up()
    _warm.set()


def picture_of(state: GlassState) -> tuple[str, str, int]:
    """What is painted on the object: ("pattern", name, 0) or ("file", path, time of its last change).

    Raises
    ------
    AssemblyError
        With the field "picture": no path, or no such file.
    """
    if state.thing == "seed":
        return "pattern", "lantern globe", 0
    if state.thing == "pattern":
        return "pattern", state.pattern, 0
    if not state.picture.strip():
        msg = "no picture yet: type the path of a picture file, or choose one"
        raise AssemblyError(msg, "picture")
    path = Path(state.picture.strip()).expanduser()
    if not path.is_file():
        msg = f'"{path}": no such picture file'
        raise AssemblyError(msg, "picture")
    return "file", str(path), path.stat().st_mtime_ns


@lru_cache(maxsize=4)
def _texture(kind: str, name: str, stamp: int) -> Texture:
    from mirrorlab.files.raster import read_picture
    from mirrorlab.optics.pattern import drawn
    from mirrorlab.optics.texture import make_texture

    return make_texture(read_picture(name) if kind == "file" else drawn(name))


def traced(
    assembly: Assembly,
    picture: tuple[str, str, int],
    size: tuple[int, int],
    samples: int,
    progress: Progress | None = None,
) -> Bytes:
    """The view, shape (height, width, 3). Raises `FileError` for a picture that cannot be read."""
    from mirrorlab.optics.scene import DEFAULT_PATTERNS, Scene
    from mirrorlab.optics.tracer import trace

    kind, name, stamp = picture
    name = name or DEFAULT_PATTERNS[assembly.place.shape]
    scene = Scene(_texture(kind, name, stamp), name if kind == "pattern" else "", upwards=assembly.up)
    return trace(assembly, scene, size, samples, progress)
