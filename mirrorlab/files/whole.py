"""Files written whole or not at all."""

from __future__ import annotations

import contextlib
import os
import tempfile
from collections.abc import Callable, Sequence
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
    return make_together([(path, make)])[0]


def make_together(
    files: Sequence[tuple[str | os.PathLike[str], Callable[[Path], object]]],
) -> tuple[Path, ...]:
    """Make several files that belong together: all are written beside their targets before the first is moved over.

    Raises
    ------
    FileError
        One of them cannot be written; none of the targets was touched.
    """
    drafts: list[tuple[Path, Path]] = []
    target = Path()
    try:
        for path, make in files:
            target = Path(path)
            if target.is_dir():
                msg = f"{target}: cannot be written (it is a folder)"
                raise FileError(msg)
            draft = _draft(target)
            drafts.append((draft, target))
            make(draft)
            mode = target.stat().st_mode if target.exists() else 0o666 & ~_umask()
            draft.chmod(mode & 0o777)
        for draft, target in drafts:
            draft.replace(target)
    except OSError as error:
        msg = f"{target}: cannot be written ({error.strerror or error})"
        raise FileError(msg) from error
    finally:
        for draft, _ in drafts:
            with contextlib.suppress(OSError):
                draft.unlink()
    return tuple(target for _, target in drafts)


def _draft(target: Path) -> Path:
    """An empty file beside the target, with its suffix."""
    handle, name = tempfile.mkstemp(dir=target.parent, prefix=f".{target.stem[:80]}-", suffix=target.suffix)
    os.close(handle)
    return Path(name)


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask
