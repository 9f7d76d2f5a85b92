"""Compiling the tracer's kernels: kept on disk where that can be done, and never a reason not to start."""

from __future__ import annotations

import hashlib
import os
import stat
import sys
import tempfile
from collections.abc import Callable
from functools import lru_cache
from pathlib import Path
from typing import Any

import numba

# Lets the compiler join the same sum done four times in a row, for three colours or four corners, into one.
numba.config.SLP_VECTORIZE = 1

OPTIONS: dict[str, Any] = {
    "nogil": True,
    # Everything but the assumptions that nothing is infinite or undefined: time 0/0 means "never" here.
    "fastmath": {"reassoc", "nsz", "arcp", "contract", "afn"},
    "error_model": "numpy",
}

INNER: dict[str, Any] = {"no_cpython_wrapper": True, "no_cfunc_wrapper": True}
"""For functions that only compiled ones call: without a way in from outside they compile sooner."""


def compiled(function: Callable[..., Any]) -> Any:
    """Return the function compiled on first call, its machine code kept in `cache_folder` where there is one."""
    folder = cache_folder()
    if folder is not None:
        before = numba.config.CACHE_DIR
        numba.config.CACHE_DIR = str(folder)
        try:
            return numba.njit(cache=True, **OPTIONS)(function)
        except (RuntimeError, OSError):
            pass
        finally:
            numba.config.CACHE_DIR = before
    return numba.njit(**OPTIONS)(function)


def inner(function: Callable[..., Any]) -> Any:
    """Return the function compiled for other compiled ones to call; never call it from Python, there is no way in."""
    # Not kept on disk: what is kept of the function that calls it has it within.
    return numba.njit(**OPTIONS, **INNER)(function)


def inlined(function: Callable[..., Any]) -> Any:
    """Return the function compiled into each place that calls it: for what is called for each ray.

    Left to itself the compiler makes it a call, and an array is seven arguments of one.
    """
    return numba.njit(forceinline=True, **OPTIONS, **INNER)(function)


@lru_cache(maxsize=1)
def cache_folder() -> Path | None:
    """Return the folder for compiled code, or None where nothing can be kept.

    It is in NUMBA_CACHE_DIR, else in the user's cache folder, else in the system's temporary one; not beside the
    package, which may be read-only or shared. Its name has a digest of the sources: numba itself only looks at
    the file of the outermost function, and would go on with old code when another file has changed.
    """
    name = f"mirrorlab-{sources_digest()}"
    given = os.environ.get("NUMBA_CACHE_DIR")
    bases = [Path(given)] if given else [_user_cache(), Path(tempfile.gettempdir()) / f"mirrorlab-{_user()}"]
    for base in bases:
        if (
            base is not None
            and _own_folder(base, private=not given)
            and _own_folder(base / name, private=not given)
        ):
            return base / name
    return None


def sources_digest() -> str:
    """Return a digest of what is compiled, and of what compiles it."""
    digest = hashlib.sha256(f"{numba.__version__} {sys.version}".encode())
    for name in ("kernel.py", "packet.py", "shade.py", "tile.py", "compiled.py"):
        source = Path(__file__).with_name(name)
        digest.update(source.read_bytes() if source.is_file() else b"")
    return digest.hexdigest()[:16]


def _own_folder(folder: Path, private: bool) -> bool:
    # Compiled code that someone else could have put there must not be run, so owner and mode are checked.
    try:
        folder.mkdir(mode=0o700, parents=True, exist_ok=True)
        found = folder.lstat()
        if not stat.S_ISDIR(found.st_mode):
            return False
        if private and hasattr(os, "getuid") and (found.st_uid != os.getuid() or found.st_mode & 0o022):
            return False
        with tempfile.TemporaryFile(dir=folder):
            return True
    except OSError:
        return False


def _user_cache() -> Path | None:
    try:
        home = Path.home()
    except RuntimeError:
        return None
    if sys.platform == "win32":
        return Path(os.environ.get("LOCALAPPDATA", home / "AppData" / "Local")) / "mirrorlab" / "compiled"
    if sys.platform == "darwin":
        return home / "Library" / "Caches" / "mirrorlab"
    return Path(os.environ.get("XDG_CACHE_HOME") or home / ".cache") / "mirrorlab"


def _user() -> str:
    return str(os.getuid()) if hasattr(os, "getuid") else os.environ.get("USERNAME", "user")
