"""Reading a file that a person names, with a limit to its size."""

from __future__ import annotations

import os
from pathlib import Path

from mirrorlab.crystal.operations import CrystalError


def file_bytes(path: str | os.PathLike[str], largest: int, advice: str, error: type[CrystalError]) -> bytes:
    """The bytes of a file.

    Parameters
    ----------
    path : path-like
    largest : int
        Bytes; a larger file is refused before it is read.
    advice : str
        What to give instead of a file that is too large.
    error : type of CrystalError
        What is raised.
    """
    target = Path(path)
    try:
        if target.stat().st_size > largest:
            msg = f"{target.name}: larger than {largest // 1_000_000} MB; {advice}"
            raise error(msg)
        return target.read_bytes()
    except OSError as cause:
        msg = f"{target}: cannot be read ({cause.strerror})"
        raise error(msg) from cause
