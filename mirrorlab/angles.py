"""Reading and writing an angle: notation, uncertainty, closing fraction.

An `Angle` keeps what was typed, its value, its uncertainty and the closing fraction k/m read from it, so that
nothing later has to guess again whether 59.9 meant 60. All reading is done in exact rational numbers.

References
----------
.. [1] JCGM 100:2008 (GUM), 7.2.2: 59.9(2) means 59.9 with standard uncertainty 0.2.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from functools import lru_cache
from numbers import Real

PI = Fraction(31415926535897932384626433832795028841971693993751, 10**49)
"""π to 50 digits, for angles typed in radians."""

ACCEPTED = (
    "write degrees (60, 59.9(2), 59.9±0.2), DMS (54°44'8\"), a fraction of pi (2pi/5) or radians (1.0472rad)"
)
RANGE = "an angle between mirrors is at least 0 and less than 180 degrees"
STYLES = ("degrees", "pi", "dms")
"""Ways to write an angle; see `write_angle`."""

LONGEST = 64  # characters in a typed angle: more than any instrument gives, few enough to be read at once


class AngleError(ValueError):
    """A text that is not an angle between mirrors."""


@dataclass(frozen=True, slots=True)
class AngleSettings:
    """How far the reading of an angle goes.

    Attributes
    ----------
    max_denominator : int
        Largest m of a closing fraction k/m.
    sigmas : float
        Width of the band around an angle with a standard uncertainty, in standard uncertainties.
    """

    max_denominator: int = 360
    sigmas: float = 3.0

    def __post_init__(self) -> None:
        if not 1 <= self.max_denominator <= 100_000:
            msg = f"largest denominator {self.max_denominator}: a whole number from 1 to 100000"
            raise AngleError(msg)
        if not 0 < self.sigmas <= 100:
            msg = f"band of {self.sigmas} standard uncertainties: a number above 0, up to 100"
            raise AngleError(msg)


@dataclass(frozen=True, slots=True)
class Nearby:
    """A fraction of π near an angle, and how far it is from the value, in degrees."""

    fraction: Fraction
    deviation_degrees: float


@dataclass(frozen=True, slots=True)
class Angle:
    """One angle as it was read.

    Attributes
    ----------
    text : str
        What was typed.
    degrees : float
        Its value.
    uncertainty : float
        In degrees: 0 when exact, half the last digit when rounded, the standard uncertainty when measured.
    source : str
        "exact", "rounded", "measured" or "computed" (from normals).
    low, high : Fraction
        The band, in degrees, that was searched for a closing fraction.
    fraction : Fraction or None
        The closing fraction k/m: the angle is k/m·π. None: no closing fraction.
    """

    text: str
    degrees: float
    uncertainty: float
    source: str
    low: Fraction
    high: Fraction
    fraction: Fraction | None
    settings: AngleSettings = AngleSettings()

    @property
    def radians(self) -> float:
        """The angle in radians: of the closing fraction if there is one, else of the value."""
        return math.radians(self.degrees) if self.fraction is None else math.pi * float(self.fraction)

    def nearest(self, count: int = 3) -> tuple[Nearby, ...]:
        """At most `count` fractions of π near the value, simplest first, each the nearest among those as simple."""
        value = (
            (self.low + self.high) / 2 / 180 if self.source != "computed" else Fraction(self.degrees) / 180
        )
        most = self.settings.max_denominator
        found: dict[Fraction, None] = {}
        for limit in (6, 12, 36, 120, most):
            near = value.limit_denominator(min(limit, most))
            found[near if near < 1 else 1 - Fraction(1, min(limit, most))] = None
        return tuple(Nearby(near, float(near * 180) - self.degrees) for near in list(found)[:count])

    @classmethod
    def from_radians(cls, value: float, tolerance: float, settings: AngleSettings = AngleSettings()) -> Angle:
        """An angle that was computed, with the closing fraction of smallest m within a tolerance in radians."""
        degrees = math.degrees(value)
        reach = Fraction(math.degrees(tolerance))
        low, high = Fraction(degrees) - reach, Fraction(degrees) + reach
        fraction = closing_fraction(low, high, settings.max_denominator)
        text = write_angle(fraction if fraction is not None else degrees)
        return cls(text, degrees, math.degrees(tolerance), "computed", low, high, fraction, settings)


_NUMBER = r"(\d+(?:\.\d*)?|\.\d+)"
_PI = re.compile(rf"(?:{_NUMBER}\*?)?pi(?:/(\d+))?\Z")
_PI_AFTER = re.compile(r"(\d+)/(\d+)\*?pi\Z")
_PLAIN = re.compile(rf"{_NUMBER}(?:\((\d+)\)|(?:±|\+-|\+/-){_NUMBER})?(deg|degrees?|°|rad|radians?)?\Z")
_SUFFIXED = re.compile(rf"{_NUMBER}(deg|degrees?|°|rad)(?:±|\+-|\+/-){_NUMBER}(deg|degrees?|°|rad)?\Z")
_BRACKETED = re.compile(r"\(([^()]+(?:±|\+-|\+/-)[^()]+)\)(.*)\Z")
_DMS = re.compile(rf"(\d+)(?:°|d|deg)(?:{_NUMBER}(?:'|m|min))?(?:{_NUMBER}(?:\"|s|sec))?\Z")
_INSIDE = re.compile(
    r"\s*(±|\+-|\+/-|[/*·×]|\((?=\d+\)))\s*"
    r"|(?<=[\d.)])\s+(?=°|º|deg|rad|['′’\"″”])"
    r"|(?<=[°ºdg'′’mn])\s+(?=\d+(?:[.,]\d+)?\s*['′’m\"″”s])",
    re.IGNORECASE,
)
_TIDY: dict[int, int | str] = {**str.maketrans("−–′’″”º˚·×", "--''\"\"°°**"), ord("π"): "pi"}


def parse_angle(given: str | int | float | Fraction, settings: AngleSettings = AngleSettings()) -> Angle:
    """Read one angle.

    Parameters
    ----------
    given : str, int, float or Fraction
        Text in any of the accepted notations; an int is exact degrees, a float is read as it prints, a
        Fraction is exact, in units of π.
    settings : AngleSettings

    Raises
    ------
    AngleError
        Not an angle, or not from 0 to below 180 degrees; the message says what was typed and what is accepted.

    Examples
    --------
    >>> parse_angle("59.9(2)").fraction
    Fraction(1, 3)
    >>> parse_angle("2pi/5").degrees
    72.0
    """
    if isinstance(given, Fraction):
        return _make(f"{write_angle(given, 'pi')}", given * 180, Fraction(0), "exact", settings)
    if isinstance(given, bool) or not isinstance(given, str | Real):
        msg = f"{given!r}: not an angle; {ACCEPTED}"
        raise AngleError(msg)
    text = str(given)
    if len(text) > LONGEST:
        msg = f'"{text[:20]}…": {len(text)} characters; an angle has at most {LONGEST}'
        raise AngleError(msg)
    if not isinstance(given, str) and "e" in text:
        text = f"{Decimal(text):f}"  # small numbers print with an exponent, which is no angle's notation
    return _parse_text(text, settings)


@lru_cache(maxsize=4096)
def _parse_text(typed: str, settings: AngleSettings) -> Angle:
    value, uncertainty, source = _read(typed)
    return _make(typed.strip(), value, uncertainty, source, settings)


def _make(text: str, value: Fraction, uncertainty: Fraction, source: str, settings: AngleSettings) -> Angle:
    if not 0 <= value < 180:
        msg = f'"{text}": {float(value):g} degrees; {RANGE}'
        raise AngleError(msg)
    reach = uncertainty * Fraction(settings.sigmas) if source == "measured" else uncertainty
    low, high = value - reach, value + reach
    fraction = closing_fraction(low, high, settings.max_denominator)
    return Angle(text, float(value), float(uncertainty), source, low, high, fraction, settings)


def _read(typed: str) -> tuple[Fraction, Fraction, str]:
    """Value and uncertainty in degrees, and where the uncertainty comes from."""
    text = re.sub(r"\s+", "", typed.translate(_TIDY).lower()).replace("''", '"')
    if not text:
        msg = f'"{typed}": empty; {ACCEPTED}'
        raise AngleError(msg)
    if re.search(r"[\d.]\s+[\d.]", typed.strip()):
        msg = f'"{typed}": two numbers where one angle is due; {ACCEPTED}'
        raise AngleError(msg)
    if "," in text:
        if text.count(",") > 1 or "." in text:
            msg = f'"{typed}": one decimal sign at most, and several angles have spaces between them; {ACCEPTED}'
            raise AngleError(msg)
        text = text.replace(",", ".")
    bracketed = _BRACKETED.match(text)
    if bracketed is not None:
        text = bracketed[1] + bracketed[2]
    if re.match(r"-[\d.p]", text):
        msg = f'"{typed}": negative; {RANGE}'
        raise AngleError(msg)
    for read in (_read_pi, _read_plain, _read_dms):
        found = read(text, typed)
        if found is not None:
            return found
    msg = f'"{typed}": not an angle; {ACCEPTED}'
    raise AngleError(msg)


def _read_pi(text: str, typed: str) -> tuple[Fraction, Fraction, str] | None:
    match = _PI.match(text)
    after = _PI_AFTER.match(text)
    if match is None and after is None:
        return None
    if after is not None:
        over, under = Fraction(after[1]), int(after[2])
    else:
        assert match is not None
        over, under = Fraction(match[1] or 1), int(match[2] or 1)
    if under == 0:
        msg = f'"{typed}": a fraction with 0 below the line; {ACCEPTED}'
        raise AngleError(msg)
    return over / under * 180, Fraction(0), "exact"


def _read_plain(text: str, typed: str) -> tuple[Fraction, Fraction, str] | None:
    suffixed = _SUFFIXED.match(text)
    if suffixed is not None:
        if suffixed[4] is not None and (suffixed[4] == "rad") != (suffixed[2] == "rad"):
            msg = f'"{typed}": value and uncertainty in different units; {ACCEPTED}'
            raise AngleError(msg)
        number, bracket, plus, unit = suffixed[1], None, suffixed[3], suffixed[2]
    else:
        match = _PLAIN.match(text)
        if match is None:
            return None
        number, bracket, plus, unit = match[1], match[2], match[3], match[4] or "deg"
    last = _last_digit(number)
    scale = 180 / PI if unit.startswith("rad") else Fraction(1)
    value = Fraction(number) * scale
    if bracket is not None or plus is not None:
        sigma = Fraction(plus) if plus is not None else int(bracket or 0) * last
        if sigma == 0:
            msg = f'"{typed}": an uncertainty of 0; leave it out, or give one above 0'
            raise AngleError(msg)
        return value, sigma * scale, "measured"
    if last == 1 and "." not in number and scale == 1:
        return value, Fraction(0), "exact"
    return value, last / 2 * scale, "rounded"


def _read_dms(text: str, typed: str) -> tuple[Fraction, Fraction, str] | None:
    match = _DMS.match(text)
    if match is None:
        return None
    degrees, minutes, seconds = match[1], match[2] or "0", match[3] or "0"
    if Fraction(minutes) >= 60 or Fraction(seconds) >= 60:
        msg = f'"{typed}": minutes and seconds must be below 60'
        raise AngleError(msg)
    value = int(degrees) + Fraction(minutes) / 60 + Fraction(seconds) / 3600
    if match[3] is not None:
        last = _last_digit(seconds) / 3600
    elif match[2] is not None:
        last = _last_digit(minutes) / 60
    else:
        return value, Fraction(0), "exact"
    return value, last / 2, "rounded"


def _last_digit(number: str) -> Fraction:
    """One unit of the last digit written."""
    return Fraction(1, 10 ** len(number.partition(".")[2]))


def closing_fraction(low: Fraction, high: Fraction, max_denominator: int) -> Fraction | None:
    """The fraction k/m with the smallest m, k·180°/m within a band in degrees and in [0°, 180°), or None.

    Parameters
    ----------
    low, high : Fraction
        The band in degrees, its ends included.
    max_denominator : int
        Largest m.
    """
    if high < 0 or low >= 180 or low > high:
        return None
    under = max(low / 180, Fraction(0))
    over = high / 180
    if over >= 1:  # 180° itself is not an angle between mirrors: the simplest below it is (m − 1)/m
        m = math.ceil(1 / (1 - under))
        found = Fraction(m - 1, m)
    else:
        found = simplest_between(under, over)
    return found if found.denominator <= max_denominator else None


def simplest_between(low: Fraction, high: Fraction) -> Fraction:
    """The fraction with the smallest denominator in a closed interval of numbers ≥ 0 (by continued fractions)."""
    whole = math.ceil(low)
    if whole <= high:
        return Fraction(whole)
    floor = whole - 1
    rest = simplest_between(1 / (high - floor), 1 / (low - floor))
    return floor + 1 / rest


def write_angle(angle: Angle | Fraction | float, style: str = "degrees") -> str:
    """Write an angle.

    Parameters
    ----------
    angle : Angle, Fraction or float
        A Fraction is in units of π, a float in degrees. An Angle is written by its closing fraction, or by its
        value where it has none.
    style : str
        "degrees" (``"60°"``), "pi" (``"2pi/5"``; degrees where there is no fraction) or "dms". A fraction with m
        up to 360 reads back as the same closing fraction in each.
    """
    if isinstance(angle, Angle):
        angle = angle.fraction if angle.fraction is not None else angle.degrees
    if style == "pi" and isinstance(angle, Fraction):
        return _write_pi(angle)
    degrees = angle * 180 if isinstance(angle, Fraction) else Fraction(Decimal(repr(float(angle))))
    if style == "dms":
        return _write_dms(degrees)
    if style not in STYLES:
        msg = f'style "{style}": accepted are {", ".join(STYLES)}'
        raise AngleError(msg)
    return _write_decimal(degrees, angle if isinstance(angle, Fraction) else None)


def _write_decimal(degrees: Fraction, fraction: Fraction | None) -> str:
    """Six decimals at most. Zeros at the end stay where the shorter text would read as another fraction or as exact."""
    millionths = min(round(degrees * 10**6), 180 * 10**6 - 1)
    text = f"{millionths // 10**6}.{millionths % 10**6:06d}"
    if millionths != degrees * 10**6:
        return f"{text}°"
    whole, _, decimals = text.partition(".")
    for digits in range(len(decimals.rstrip("0")), len(decimals)):
        text = f"{whole}.{decimals[:digits]}".rstrip(".")
        half = Fraction(1, 2 * 10**digits) if digits else Fraction(0)
        if fraction is None or closing_fraction(degrees - half, degrees + half, 10**6) == fraction:
            break
    return f"{text}°"


def _write_pi(fraction: Fraction) -> str:
    if fraction == 0:
        return "0"
    head = "pi" if fraction.numerator == 1 else f"{fraction.numerator}pi"
    return head if fraction.denominator == 1 else f"{head}/{fraction.denominator}"


def _write_dms(degrees: Fraction) -> str:
    tenths = min(round(degrees * 36000), 180 * 36000 - 1)
    whole, rest = divmod(tenths, 36000)
    minutes, seconds = divmod(rest, 600)
    exact = tenths == degrees * 36000
    if not rest and exact:
        return f"{whole}°"
    if seconds % 10 == 0 and exact:
        return f"{whole}°{minutes:02d}'{seconds // 10:02d}\""
    return f"{whole}°{minutes:02d}'{seconds // 10:02d}.{seconds % 10}\""


def split_angles(text: str) -> list[str]:
    """Split a list of angles at white space, semicolons and commas that white space follows.

    White space inside an angle is understood where it cannot be a separator: beside ``±``, ``/`` and ``*``,
    before a unit, and between degrees, minutes and seconds.

    Examples
    --------
    >>> split_angles("90 59.9 ± 0.2; 54° 44' 8\"")
    ['90', '59.9±0.2', '54°44\'8"']
    """
    joined = _INSIDE.sub(r"\1", text.strip())
    return [part for part in re.split(r"(?:[\s;]|,(?=[\s;]|$))+", joined) if part]
