"""Reading a length: millimetres unless a unit is typed."""

from __future__ import annotations

import math
import re
from fractions import Fraction

UNITS_IN_MM: dict[str, float] = {
    "mm": 1.0,
    "cm": 10.0,
    "m": 1000.0,
    "in": 25.4,
    "inch": 25.4,
    "inches": 25.4,
    '"': 25.4,
    "″": 25.4,
    "ft": 304.8,
}
"""Millimetres in each unit that is read. The inch is 25.4 mm (international yard, 1959; from memory)."""

LONGEST = 1e6
"""Millimetres: a mirror room of a kilometre is a slip of the keyboard."""

_SHAPE = re.compile(
    r"""\s*(?:(?P<whole>\d+)[\s+-]+)?      # the 4 of 4 1/2
        (?:(?P<top>\d+)\s*/\s*(?P<below>\d+)|(?P<number>\d+(?:[.,]\d+)?|[.,]\d+))
        \s*(?P<unit>[a-zA-Z"″]*)\s*""",
    re.VERBOSE,
)


class AssemblyError(ValueError):
    """A dimension that no assembly can have.

    Attributes
    ----------
    field : str
        Which dimension is at fault: the name of the parameter, so that a form can say it where it was typed.
    """

    def __init__(self, message: str, field: str) -> None:
        self.field = field
        super().__init__(message)


def parse_length(given: str | float, field: str = "length") -> float:
    """Return a length in millimetres.

    Parameters
    ----------
    given : str or number
        ``"12 mm"``, ``"4.5in"``, ``"4 1/2 in"``, ``"30cm"``, ``"1,5 m"``; a bare number is millimetres.
    field : str
        Name of the dimension, for the error.

    Raises
    ------
    AssemblyError
        Not a length, negative, not finite, or beyond `LONGEST`.
    """
    accepted = "write millimetres (120), or a unit: 12 mm, 3.5 cm, 0.4 m, 4.5 in, 4 1/2 in"
    if isinstance(given, str):
        found = _SHAPE.fullmatch(given)
        if not found:
            given = given.strip()
            what = "below zero" if re.match(r"[-−]\s*[\d.,]", given) else "not a length"
            msg = f"{field}, {given!r}: {what}; {accepted}"
            raise AssemblyError(msg, field)
        unit = found["unit"].lower() or "mm"
        if unit not in UNITS_IN_MM:
            msg = f"{field}, {given!r}: no unit {found['unit']!r}; {accepted}"
            raise AssemblyError(msg, field)
        if found["top"]:
            below = int(found["below"])
            if below == 0:
                msg = f"{field}, {given!r}: a fraction over zero; {accepted}"
                raise AssemblyError(msg, field)
            number = float(Fraction(int(found["top"]), below))
        else:
            if found["whole"]:
                msg = f"{field}, {given!r}: two numbers; {accepted}"
                raise AssemblyError(msg, field)
            number = float(found["number"].replace(",", "."))
        value = (number + float(found["whole"] or 0)) * UNITS_IN_MM[unit]
    else:
        value = float(given)
    if not math.isfinite(value) or value < 0 or value > LONGEST:
        msg = f"{field}, {given!r}: must be from 0 to {LONGEST:,.0f} mm; {accepted}"
        raise AssemblyError(msg, field)
    return value


def positive_length(given: str | float, field: str) -> float:
    """`parse_length`, and zero is refused too."""
    value = parse_length(given, field)
    if value == 0:
        msg = f"{field}, {given!r}: must be more than zero"
        raise AssemblyError(msg, field)
    return value
