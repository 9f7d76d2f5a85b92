"""Numbers with a standard uncertainty: ``5.431(2)`` read and written.

References
----------
.. [1] JCGM 100:2008 (GUM), 7.2.2: 5.431(2) means 5.431 with standard uncertainty 0.002.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from decimal import Decimal

from mirrorlab.crystal.operations import CrystalError

ACCEPTED = "write a number, with its standard uncertainty if there is one: 5.431, 5.431(2) or 5.431±0.002"

TWO_DIGITS_BELOW = 20
"""An uncertainty is written with two digits below this and with one above, so that 0.0016 does not become 0.002;
common practice in crystallography, no source."""

_NUMBER = r"[+-]?(?:\d+(?:\.\d*)?|\.\d+)"
_BRACKET = re.compile(rf"({_NUMBER})(?:[eE]([+-]?\d+))?(?:\((\d+)\))?\Z")
_PLUS = re.compile(rf"({_NUMBER})(?:±|\+-|\+/-)(\d+(?:\.\d*)?|\.\d+)\Z")


class NumberError(CrystalError):
    """A text that is no number."""


@dataclass(frozen=True, slots=True)
class Measured:
    """A number and its standard uncertainty, 0 where none was given."""

    value: float
    uncertainty: float = 0.0

    @property
    def text(self) -> str:
        """As it is written: ``5.431(2)``."""
        return write_measured(self.value, self.uncertainty)

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {"value": self.value, "uncertainty": self.uncertainty, "text": self.text}


def parse_measured(text: str) -> Measured:
    """Read a number with or without its standard uncertainty.

    Raises
    ------
    NumberError
        Says what was typed and what is accepted.

    Examples
    --------
    >>> parse_measured("5.431(2)")
    Measured(value=5.431, uncertainty=0.002)
    """
    bare = re.sub(r"\s+", "", text).replace("−", "-")
    bracket, plus = _BRACKET.match(bare), _PLUS.match(bare)
    if plus is not None:
        value, uncertainty = Decimal(plus[1]), Decimal(plus[2])
        bracketed = True
    elif bracket is not None:
        power = int(bracket[2] or 0)
        if abs(power) > 300:
            msg = f'"{text}": out of range; {ACCEPTED}'
            raise NumberError(msg)
        value = Decimal(bracket[1]).scaleb(power)
        last = -len(bracket[1].partition(".")[2]) + power
        uncertainty = Decimal(bracket[3] or 0).scaleb(last)
        bracketed = bracket[3] is not None
    else:
        msg = f'"{text}": not a number; {ACCEPTED}'
        raise NumberError(msg)
    if bracketed and not uncertainty:
        msg = f'"{text}": an uncertainty of 0; leave it out, or give one above 0'
        raise NumberError(msg)
    found = Measured(float(value), float(uncertainty))
    if not math.isfinite(found.value) or not math.isfinite(found.uncertainty):
        msg = f'"{text}": out of range; {ACCEPTED}'
        raise NumberError(msg)
    return found


def write_measured(value: float, uncertainty: float, digits: int = 6) -> str:
    """Write ``5.431(2)``; without an uncertainty the number with at most `digits` decimals."""
    if not (uncertainty > 0 and math.isfinite(uncertainty)):
        return f"{value:.{digits}f}".rstrip("0").rstrip(".") if abs(value) < 1e12 else f"{value:g}"
    decimals = -math.floor(math.log10(uncertainty))
    if math.floor(uncertainty * 10.0 ** (decimals + 1) + 0.5) < TWO_DIGITS_BELOW:
        decimals += 1
    if decimals > 12:  # finer than a double of everyday size holds
        return write_measured(value, 0.0, 12)
    shown = math.floor(uncertainty * 10.0**decimals + 0.5)
    if decimals <= 0:
        return f"{round(value, decimals):.0f}({shown * 10**-decimals})"
    return f"{value:.{decimals}f}({shown})"
