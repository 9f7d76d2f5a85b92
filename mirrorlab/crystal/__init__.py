"""Crystals: point groups, positions, forms, cells, lattice planes, fits and comparisons.

Names load their module when they are first used, so that importing the package stays light.
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

_WHERE = {
    # groups
    "NamedGroup": "pointgroups",
    "point_group": "pointgroups",
    "the_32": "pointgroups",
    "without_lattice": "pointgroups",
    "GroupName": "symbols",
    "parse_symbol": "symbols",
    "typographic": "symbols",
    "Operation": "operations",
    "CrystalError": "operations",
    "operation": "operations",
    "parse_triplet": "operations",
    "identify_group": "identify",
    "classify": "identify",
    "subgroups": "relations",
    "subgroups_among_the_32": "relations",
    "supergroups_among_the_32": "relations",
    "candidates_of": "candidates",
    "candidates_for": "candidates",
    "positions_of": "positions",
    "orbit_under": "positions",
    "parse_indices": "indices",
    "form": "forms",
    "forms_of": "forms",
    "combination": "combinations",
    "cut_solid": "solid",
    "lattices_of": "lattices",
    "align": "lattices",
    "axes_from_constants": "lattices",
    # cells and measurements
    "Cell": "cell",
    "parse_cell": "cell",
    "planes_of": "planes",
    "parse_planes": "planes",
    "lattice_symmetry": "lattice_mirrors",
    "read_cif": "cif",
    "parse_cif": "cif",
    "CrystalFile": "cif",
    "fit_angles": "fit",
    "compare_points": "compare",
    "read_points": "point_lists",
    "parse_points": "point_lists",
}
"""Public name → module of this package."""

__all__ = sorted(_WHERE)


def __getattr__(name: str) -> Any:
    if name not in _WHERE:
        msg = f"module {__name__!r} has no attribute {name!r}"
        raise AttributeError(msg)
    return getattr(import_module(f"{__name__}.{_WHERE[name]}"), name)


def __dir__() -> list[str]:
    return sorted({*globals(), *_WHERE})
