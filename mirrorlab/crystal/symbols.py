"""Names of point groups: Schoenflies and Hermann–Mauguin symbols, read and written.

A type of point group is a Schoenflies family with its number n. Everything else (the Hermann–Mauguin symbol,
the crystal system) follows from that, for any n and not for the 32 alone.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from mirrorlab.crystal.operations import CrystalError

CUBIC = {"T": "23", "Th": "m-3", "Td": "-43m", "O": "432", "Oh": "m-3m", "I": "235", "Ih": "m-3-5"}
"""Hermann–Mauguin symbols of the groups with several threefold axes."""

ORDERS = {"T": 12, "Th": 24, "Td": 24, "O": 24, "Oh": 48, "I": 60, "Ih": 120}

SETTINGS = {
    "211": "2", "121": "2", "112": "2", "m11": "m", "1m1": "m", "11m": "m",
    "2/m11": "2/m", "12/m1": "2/m", "112/m": "2/m", "2mm": "mm2", "m2m": "mm2", "-4m2": "-42m",
    "321": "32", "312": "32", "3m1": "3m", "31m": "3m", "-3m1": "-3m", "-31m": "-3m", "-62m": "-6m2",
}  # fmt: skip
"""Symbols that say how a group stands in its axes, and the type they belong to."""

_OTHER_SPELLINGS = {
    "m3": "m-3", "m3m": "m-3m", "2/m-3": "m-3", "4/m-32/m": "m-3m", "2/m2/m2/m": "mmm", "2/mm": "2/m",
    "4/m2/m2/m": "4/mmm", "6/m2/m2/m": "6/mmm", "-32/m": "-3m", "-32/m1": "-3m1", "-312/m": "-31m", "532": "235",
    "2/m-3-5": "m-3-5", "-5-3m": "m-3-5", "-53m": "m-3-5", "m-5-3": "m-3-5", "m-35": "m-3-5", "-2": "m", "3/m": "-6",
    "3/mm2": "-6m2", "3/m2m": "-62m", "-22m": "mm2", "2/mmm": "mmm",
}  # fmt: skip
_OVERLINES = "̄̅"
_BARRED = re.compile(r"-(4(?=3m$)|\d+?(?=2m$|2\.|m|-|/|\.|$))")
_SCHOENFLIES = re.compile(r"^([cdsSCD])(\d+)([hvdi]?)$", re.IGNORECASE)


class SymbolError(CrystalError):
    """A text that is no symbol of a point group."""


@dataclass(frozen=True, slots=True, order=True)
class GroupName:
    """A type of point group.

    Attributes
    ----------
    family : str
        "C", "Ch", "Cv", "S", "D", "Dh", "Dd", or one of the groups with several threefold axes ("T" … "Ih").
    n : int
        The number of the symbol (S: always even); 0 for the latter.
    """

    family: str
    n: int = 0

    @property
    def schoenflies(self) -> str:
        """Such as ``D3d``; ``C3i`` for the sixfold rotoreflection, as International Tables writes it."""
        if not self.n:
            return self.family
        if self.family == "S":
            half = self.n // 2
            return "Ci" if self.n == 2 else f"C{half}i" if half % 2 else f"S{self.n}"
        if self == GroupName("Ch", 1):
            return "Cs"
        return f"{self.family[0]}{self.n}{self.family[1:]}"

    @property
    def hermann_mauguin(self) -> str:
        """The short symbol of the standard setting, such as ``-6m2``."""
        n, odd = self.n, self.n % 2 == 1
        match self.family:
            case "C":
                return f"{n}"
            case "Ch":
                return "m" if n == 1 else f"-{2 * n}" if odd else f"{n}/m"
            case "Cv":
                return "mm2" if n == 2 else f"{n}m" if odd else f"{n}mm"
            case "S":
                return f"-{n // 2}" if (n // 2) % 2 else f"-{n}"
            case "D":
                return "222" if n == 2 else f"{n}2" if odd else f"{n}22"
            case "Dh":
                return "mmm" if n == 2 else f"-{2 * n}m2" if odd else f"{n}/mmm"
            case "Dd":
                return f"-{n}m" if odd else f"-{2 * n}2m"
        return CUBIC[self.family]

    @property
    def order(self) -> int:
        """How many operations a group of this type has."""
        times = {"C": 1, "Ch": 2, "Cv": 2, "S": 1, "D": 2, "Dh": 4, "Dd": 4}
        return ORDERS[self.family] if not self.n else times[self.family] * self.n

    @property
    def system(self) -> str:
        """The crystal system; "icosahedral" or such as "pentagonal (no lattice)" where no lattice exists."""
        if not self.n:
            return "icosahedral (no lattice)" if self.family[0] == "I" else "cubic"
        if self in (GroupName("C", 1), GroupName("S", 2)):
            return "triclinic"
        if self in (GroupName("C", 2), GroupName("Ch", 1), GroupName("Ch", 2)):
            return "monoclinic"
        if self in (GroupName("D", 2), GroupName("Cv", 2), GroupName("Dh", 2)):
            return "orthorhombic"
        principal = self.principal
        if principal in (3, 4, 6):
            return {3: "trigonal", 4: "tetragonal", 6: "hexagonal"}[principal]
        return f"{principal}-gonal (no lattice)"

    @property
    def principal(self) -> int:
        """The number that opens the Hermann–Mauguin symbol of a group with one main axis (6 for -6m2)."""
        doubled = (self.family in ("Ch", "Dh") and self.n % 2) or (self.family == "Dd" and self.n % 2 == 0)
        if self.family == "S":
            return self.n // 2 if (self.n // 2) % 2 else self.n
        return 2 * self.n if doubled else self.n

    @property
    def crystallographic(self) -> bool:
        """Whether some lattice has this symmetry."""
        return "no lattice" not in self.system


def normal_name(family: str, n: int = 0) -> GroupName:
    """The one name of a type that has several: C1v and C1h are Cs, D1 is C2, S3 is C3h, and so on."""
    if family in ORDERS:
        return GroupName(family)
    if n < 1:
        msg = f"{family}{n}: the number of a point group is 1 or more"
        raise SymbolError(msg)
    if family == "Ci":
        return GroupName("S", 2 * n) if n % 2 else GroupName("Ch", n // 2) if n % 4 else GroupName("S", n)
    if family == "S" and n % 2:
        return GroupName("Ch", n)
    if n == 1:
        same = {"Cv": ("Ch", 1), "D": ("C", 2), "Dh": ("Cv", 2), "Dd": ("Ch", 2)}
        return GroupName(*same.get(family, (family, 1)))
    return GroupName(family, n)


def typographic(symbol: str) -> str:
    """The symbol with its bars over the digits: ``4̄3m`` for ``-43m``."""
    return _BARRED.sub(lambda match: "".join(digit + "\u0305" for digit in match.group(1)), symbol)


def clean_symbol(text: str) -> str:
    """Plain text of a symbol: bars as minus signs, no spaces, old and full spellings made short."""
    plain = re.sub(r"\\(?:bar|overline)\s*\{?(\d+)\}?", r"-\1", text)
    plain = re.sub(
        rf"((?:\d[{_OVERLINES}])+)", lambda m: "-" + re.sub(f"[{_OVERLINES}]", "", m.group(1)), plain
    )
    plain = re.sub(r"[\s_{}$.]", "", plain.replace("−", "-").replace("–", "-"))
    return _OTHER_SPELLINGS.get(plain, plain)


def parse_symbol(text: str) -> tuple[GroupName, str]:
    """Read a Hermann–Mauguin or Schoenflies symbol.

    Returns
    -------
    name : GroupName
    setting : str
        The symbol with its setting, such as "31m"; the standard one where none was given.

    Raises
    ------
    SymbolError

    Notes
    -----
    Plain digits are ambiguous where n has two digits: "52" is read as 5 2 (D5), and "11m", "112", "31m", "312", "432",
    "532" as the crystallographic and icosahedral groups they are. Schoenflies symbols (C52, C31v) are never ambiguous.
    Settings other than the standard one are kept for the 32 groups only.
    """
    plain = clean_symbol(text)
    if plain in SETTINGS:
        return _hermann_mauguin(SETTINGS[plain]), plain
    name = _schoenflies(plain) or _hermann_mauguin(plain)
    if name is None:
        space = (
            " (of a space group, write the point group)"
            if re.match(r"[PABCIFR][-\d]|[PABCIFR][mnabcde]", plain)
            else ""
        )
        msg = (
            f'"{text}": not a point group{space}; write a Hermann–Mauguin symbol (-43m, m-3m, 31m, -10m2, m-3-5) '
            "or a Schoenflies symbol (Td, D3d, C5v, Ih)"
        )
        raise SymbolError(msg)
    return name, name.hermann_mauguin


def _schoenflies(plain: str) -> GroupName | None:
    capital = plain[:1].upper() + plain[1:].lower()
    if capital in ORDERS:
        return GroupName(capital)
    if capital in ("Cs", "Ci"):
        return GroupName("Ch", 1) if capital == "Cs" else GroupName("S", 2)
    match = _SCHOENFLIES.match(plain)
    if match is None:
        return None
    family, n = match.group(1).upper() + match.group(3).lower(), int(match.group(2))
    known = family in ("C", "Ch", "Cv", "Ci", "D", "Dh", "Dd", "S")
    return normal_name(family, n) if known and n > 0 else None


def _hermann_mauguin(plain: str) -> GroupName | None:
    for family, symbol in CUBIC.items():
        if plain == symbol:
            return GroupName(family)
    if plain in ("222", "mm2", "mmm"):
        return GroupName({"222": "D", "mm2": "Cv", "mmm": "Dh"}[plain], 2)
    if plain == "m":
        return GroupName("Ch", 1)
    for ending in ("/mmm", "/m", "mm", "m2", "2m", "22", "m", "2", ""):
        if plain.endswith(ending):
            body = plain[: len(plain) - len(ending)]
            if re.fullmatch(r"-?[1-9]\d*", body):
                name = _with_ending(body.startswith("-"), int(body.lstrip("-")), ending)
                if name is not None:
                    return name
    return None


def _with_ending(bar: bool, n: int, ending: str) -> GroupName | None:
    even = n % 2 == 0
    if bar:
        if ending == "":
            return normal_name("Ci", n)
        if ending == "m" and not even and n >= 3:
            return GroupName("Dd", n)
        if ending in ("m2", "2m") and even and n >= 4:
            return GroupName("Dh", n // 2) if n % 4 else GroupName("Dd", n // 2)
        return None
    table = {
        "": ("C", True),
        "/m": ("Ch", even),
        "mm": ("Cv", even and n >= 4),
        "m": ("Cv", not even and n >= 3),
        "22": ("D", even and n >= 4),
        "2": ("D", not even and n >= 3),
        "/mmm": ("Dh", even and n >= 4),
    }
    family, fits = table.get(ending, ("", False))
    return GroupName(family, n) if fits else None
