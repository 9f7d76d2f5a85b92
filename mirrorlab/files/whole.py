"""Files written whole or not at all."""

from __future__ import annotations

import contextlib
import os
import tempfile
from collections.abc import Callable
from pathlib import Path


class FileError(ValueError):
    """A file that cannot be read or written, with the reason for a person."""


def write_whole(path: str | os.PathLike[str], content: bytes | str) -> Path:
    """Write a file in one step: beside it first, then moved over it.

    Parameters
    ----------
    path : path-like
    content : bytes or str
        Text is written as UTF-8 with its line ends as they are.

    Raises
    ------
    FileError
        The folder does not exist or the file cannot be written; what stood there before is untouched.
    """
    data = content.encode() if isinstance(content, str) else content
    return make_whole(path, lambda beside: beside.write_bytes(data))


def make_whole(path: str | os.PathLike[str], make: Callable[[Path], object]) -> Path:
    """Let `make` write a file beside the target, then move it over; nothing half-written is left.

    The file beside has the same suffix, so that writers which choose a format by suffix do the same.
    """
    target = Path(path)
    try:
        handle, name = tempfile.mkstemp(dir=target.parent, prefix=f".{target.stem}-", suffix=target.suffix)
    except OSError as error:
        msg = f"{target}: cannot be written ({error.strerror})"
        raise FileError(msg) from error
    os.close(handle)
    beside = Path(name)
    try:
        make(beside)
        mode = target.stat().st_mode if target.exists() else 0o666 & ~_umask()
        beside.chmod(mode & 0o777)
        beside.replace(target)
    except OSError as error:
        msg = f"{target}: cannot be written ({error.strerror})"
        raise FileError(msg) from error
    finally:
        with contextlib.suppress(OSError):
            beside.unlink()
    return target


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask
