"""Point-group symbols of reflection groups in three dimensions.

References
----------
.. [1] *International Tables for Crystallography*, volume A: Hermann–Mauguin and Schoenflies symbols; the
   non-crystallographic ones follow the same rules (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

from mirrorlab.mirrors.families import Family


@dataclass(frozen=True, slots=True)
class PointGroup:
    """A point group by its two symbols, in plain characters: a leading or inner "-" is an overbar."""

    hermann_mauguin: str
    schoenflies: str

    def to_dict(self) -> dict[str, str]:
        """Plain JSON."""
        return {"hermann_mauguin": self.hermann_mauguin, "schoenflies": self.schoenflies}


_FULL = {
    (): ("1", "C1"),
    ("A1",): ("m", "Cs"),
    ("A1", "A1"): ("mm2", "C2v"),
    ("A1", "A1", "A1"): ("mmm", "D2h"),
    ("A3",): ("-43m", "Td"),
    ("B3",): ("m-3m", "Oh"),
    ("H3",): ("m-3-5", "Ih"),
}
_ROTATIONS = {
    (): ("1", "C1"),
    ("A1",): ("1", "C1"),
    ("A1", "A1"): ("2", "C2"),
    ("A1", "A1", "A1"): ("222", "D2"),
    ("A3",): ("23", "T"),
    ("B3",): ("432", "O"),
    ("H3",): ("235", "I"),
}


def point_group(families: tuple[Family, ...]) -> PointGroup | None:
    """Symbols of a finite reflection group of rank up to 3, seen in three dimensions; None for higher rank."""
    m, rank = _axis(families)
    if m == 0 or rank > 3:
        return _named(families, _FULL)
    if rank == 2:
        return PointGroup(f"{m}m" if m % 2 else f"{m}mm", f"C{m}v")
    return PointGroup(f"-{2 * m}m2" if m % 2 else f"{m}/mmm", f"D{m}h")


def rotation_group(families: tuple[Family, ...]) -> PointGroup | None:
    """Symbols of the rotation subgroup, under the same conditions as `point_group`."""
    m, rank = _axis(families)
    if m == 0 or rank > 3:
        return _named(families, _ROTATIONS)
    if rank == 2:
        return PointGroup(str(m), f"C{m}")
    return PointGroup(f"{m}2" if m % 2 else f"{m}22", f"D{m}")


def _axis(families: tuple[Family, ...]) -> tuple[int, int]:
    """The order m of the group's I2(m), 0 where it has none, and the rank."""
    return next((f.m for f in families if f.rank == 2), 0), sum(f.rank for f in families)


def _named(families: tuple[Family, ...], table: dict[tuple[str, ...], tuple[str, str]]) -> PointGroup | None:
    """The symbols in a table of groups without an axis of order 3 or more of their own."""
    symbols = table.get(tuple(sorted(family.name for family in families)))
    return None if symbols is None else PointGroup(*symbols)
