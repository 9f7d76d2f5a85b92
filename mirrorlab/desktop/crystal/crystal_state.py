"""What a crystallographer has typed: one frozen value, undone as one and saved with the arrangement."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from mirrorlab.desktop.document import Document
from mirrorlab.desktop.typed_state import from_plain, to_plain

CONSTANTS = ("a", "b", "c", "α", "β", "γ")

STANDARD_TOLERANCE = 3.0
"""Degrees of obliquity within which lattice mirrors are looked for; also what `lattice_mirrors` starts from."""

NETS = ("wulff", "schmidt")
MARKS = ("images", "poles", "list")
ORIENTATIONS = ("given", "refined", "searched")


@dataclass(frozen=True, slots=True)
class CrystalState:
    """What is typed on the crystal bench.

    Attributes
    ----------
    group : str
        Symbol of the working group; "" takes the group of the mirrors.
    faces : tuple of str
        A face of each form, such as ``1,1,0:1.25``; texts that cannot be read stay as they are typed.
    net : str
        "wulff" or "schmidt".
    underlay : bool
        The net under the stereogram.
    marks : str
        What the stereogram shows: the "images" of the seed, the "poles" of the forms, or the "list" of points.
    constants : tuple of str
        a, b, c, α, β, γ as typed, with their uncertainties; all empty for no cell.
    centring : str
    cell_name : str
        Where the cell came from, such as the name of a CIF data block.
    planes : tuple of str
    tolerance : float
        Largest obliquity of a lattice mirror, in degrees.
    in_cell : bool
        Images are written as fractions of the typed cell instead of unit axes.
    list_text, list_name : str
        The list of points or poles to compare, as CSV, and the file it came from.
    list_tolerance : str
        Largest deviation of a matched point, as typed; "" takes it from the list.
    orientation : str
        How the list is turned: "given", "refined" or "searched".
    as_poles : bool
        Only the directions of its points count.
    list_in_cell : bool
        Its coordinates are fractions of the typed cell.
    fit_sigma : str
        Uncertainty in degrees of measured angles without one, as typed.
    fit_texts : tuple of str
        The measured angles, kept when a fitted arrangement took their place in the triangle.
    """

    group: str = ""
    faces: tuple[str, ...] = ()
    net: str = "wulff"
    underlay: bool = False
    marks: str = "images"
    constants: tuple[str, ...] = ("",) * 6
    centring: str = "P"
    cell_name: str = ""
    planes: tuple[str, ...] = ()
    tolerance: float = STANDARD_TOLERANCE
    in_cell: bool = False
    list_text: str = ""
    list_name: str = ""
    list_tolerance: str = ""
    orientation: str = "refined"
    as_poles: bool = False
    list_in_cell: bool = False
    fit_sigma: str = ""
    fit_texts: tuple[str, ...] = ()

    @property
    def has_cell(self) -> bool:
        """Whether any constant of a cell is typed."""
        return any(text.strip() for text in self.constants)

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON."""
        return to_plain(self)


EMPTY = CrystalState()


def crystal_state(document: Document) -> CrystalState:
    """The document's value; what was read from a file is checked entry by entry, and what does not fit is left out."""
    value = document.crystal
    if isinstance(value, CrystalState):
        return value
    return from_mapping(value) if isinstance(value, Mapping) else EMPTY


def from_mapping(plain: Mapping[str, Any]) -> CrystalState:
    """A value from plain JSON."""
    words = {"net": NETS, "marks": MARKS, "orientation": ORIENTATIONS}
    return from_plain(EMPTY, plain, words, {"constants": len(CONSTANTS)}, long={"list_text"})
