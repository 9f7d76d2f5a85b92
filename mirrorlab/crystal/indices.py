"""Miller indices of faces, read and written: three of them, or four on hexagonal axes."""

from __future__ import annotations

import re
from collections.abc import Sequence
from math import gcd

from mirrorlab.crystal.operations import CrystalError, write_indices

SUM_OF_THREE = 1e-9
"""The first three of four indices add up to 0 within this: more than the rounding of decimals, less than one typed."""

LARGEST_INDEX = 999
"""Faces with larger indices are slips of the keyboard: no face of a crystal was ever measured with such."""

Indices = tuple[float, float, float]


class IndicesError(CrystalError):
    """Indices of a face that can not be read."""


def parse_indices(text: str, hexagonal: bool = False, whole: bool = True) -> Indices:
    """Read ``1,1,0``, ``1 -1 0``, ``(1-10)``, ``{111}``, and on hexagonal axes ``1,0,-1,0`` or ``10-10``.

    Parameters
    ----------
    hexagonal : bool
        Accept four indices h, k, i, l with h + k + i = 0.
    whole : bool
        Indices are whole numbers and come back without a common divisor; False accepts any numbers.

    Raises
    ------
    IndicesError
        Says what was typed, what is wrong and what is accepted.
    """
    accepted = "write three whole numbers such as 1,1,0" if whole else "write three numbers such as 0,1,1.618"
    if hexagonal:
        accepted += ", or four such as 1,0,-1,0"
    bare = text.strip().strip("(){}[]").replace("−", "-").strip()
    parts = [part for part in re.split(r"[,;\s]+", bare) if part]
    if len(parts) == 1:
        parts = re.findall(r"-?\d", bare) if re.fullmatch(r"(-?\d){3,4}", bare) else parts
    try:
        values = [float(part) for part in parts]
    except ValueError:
        msg = f'indices "{text}": not numbers; {accepted}'
        raise IndicesError(msg) from None
    return check_indices(values, hexagonal, whole, text, accepted)


def check_indices(
    values: Sequence[float], hexagonal: bool = False, whole: bool = True, text: str = "", accepted: str = ""
) -> Indices:
    """Three indices from three or four numbers; whole ones without a common divisor. Errors as `parse_indices`."""
    name = f'indices "{text or ",".join(f"{value:g}" for value in values)}"'
    accepted = accepted or "three numbers are needed" + (", or four on hexagonal axes" if hexagonal else "")
    if len(values) == 4 and hexagonal:
        if abs(values[0] + values[1] + values[2]) > SUM_OF_THREE:
            msg = f"{name}: the first three of four indices add up to 0, these to {sum(values[:3]):g}"
            raise IndicesError(msg)
        values = [values[0], values[1], values[3]]
    if len(values) != 3:
        four = " (four indices are for hexagonal axes)" if len(values) == 4 else ""
        msg = f"{name}: {len(values)} numbers{four}; {accepted}"
        raise IndicesError(msg)
    if not all(abs(value) <= LARGEST_INDEX for value in values):
        msg = f"{name}: indices lie between -{LARGEST_INDEX} and {LARGEST_INDEX}"
        raise IndicesError(msg)
    if not any(values):
        msg = f"{name}: no face has all indices 0; {accepted}"
        raise IndicesError(msg)
    if not whole:
        return float(values[0]), float(values[1]), float(values[2])
    if any(value != round(value) for value in values):
        msg = f"{name}: indices of a crystal face are whole numbers; {accepted}"
        raise IndicesError(msg)
    h, k, l = (int(value) for value in values)  # noqa: E741 — the trade's own letters
    divisor = gcd(h, k, l)
    return h // divisor, k // divisor, l // divisor


def parse_form(text: str, hexagonal: bool = False, whole: bool = True) -> tuple[Indices, float]:
    """Read ``1,1,0`` or ``1,1,0:1.25``: indices and the distance of the face from the centre (1 when not given).

    Raises
    ------
    IndicesError
        For indices as `parse_indices`; for a distance that is no positive number.
    """
    head, colon, tail = text.partition(":")
    indices = parse_indices(head, hexagonal, whole)
    if not colon:
        return indices, 1.0
    try:
        distance = float(tail)
    except ValueError:
        distance = float("nan")
    if not 0 < distance < 1e6:
        msg = f'distance "{tail}" of {head}: not a positive number; write a form as 1,1,0:1.25'
        raise IndicesError(msg)
    return indices, distance


def write_face(indices: Sequence[float], hexagonal: bool = False, brackets: str = "()") -> str:
    """``(1-10)``, on hexagonal axes ``(10-10)``; ``{…}`` for a form when `brackets` says so."""
    values = tuple(indices)
    if hexagonal:
        values = (values[0], values[1], -values[0] - values[1], values[2])
    return brackets[0] + write_indices(values) + brackets[1]


def printed(label: str) -> str:
    """Indices as they are printed, with bars over the digits: ``(1̅10)`` for ``(-110)``."""
    if "," in label:
        return re.sub(r"-(\d+)", lambda match: "".join(digit + "\u0305" for digit in match.group(1)), label)
    return re.sub(r"-(\d)", "\\1\u0305", label)
