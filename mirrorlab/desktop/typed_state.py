"""What is typed on a bench as plain JSON and back: a frozen value of texts, tuples of texts, and switches."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import asdict, fields
from typing import Any, TypeVar

LONGEST_TEXT = 4096
"""Characters of one typed text that are read back from a file; a path is the longest of them."""

MOST_TEXTS = 256
"""Texts of one field that are read back from a file: far more than a bench has rows."""

LARGEST = 1e6
"""Numbers from 0 up to this are read back: degrees and the like."""

Value = TypeVar("Value")


def to_plain(value: Any) -> dict[str, Any]:
    """Plain JSON of a frozen value."""
    return {key: list(one) if isinstance(one, tuple) else one for key, one in asdict(value).items()}


def from_plain(
    empty: Value,
    plain: Mapping[str, Any],
    words: Mapping[str, Collection[str]],
    lengths: Mapping[str, int],
    long: Collection[str] = (),
) -> Value:
    """A value from plain JSON, checked entry by entry: what does not fit is left as in `empty`.

    Parameters
    ----------
    words : mapping
        Fields that are one of a few words, and these.
    lengths : mapping
        Fields of a fixed number of texts.
    long : collection of str
        Fields whose text may be of any length.
    """
    kept: dict[str, Any] = {}
    for one in fields(empty):  # type: ignore[arg-type]
        before = getattr(empty, one.name)
        found = plain.get(one.name, before)
        if isinstance(before, tuple):
            usable = (
                isinstance(found, list | tuple) and len(found) <= MOST_TEXTS and all(map(_is_text, found))
            )
            usable = usable and len(found) == lengths.get(one.name, len(found))
            found = tuple(found) if usable else before
        elif isinstance(before, bool):
            found = found if isinstance(found, bool) else before
        elif isinstance(before, float):
            usable = isinstance(found, int | float) and not isinstance(found, bool) and 0 <= found < LARGEST
            found = float(found) if usable else before
        else:
            usable = isinstance(found, str) if one.name in long else _is_text(found)
            found = found if usable and found in words.get(one.name, (found,)) else before
        kept[one.name] = found
    return type(empty)(**kept)


def _is_text(found: object) -> bool:
    return isinstance(found, str) and len(found) <= LONGEST_TEXT
