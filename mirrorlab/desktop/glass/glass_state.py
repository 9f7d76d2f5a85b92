"""What a maker has typed: one frozen value, undone as one and saved with the arrangement."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from mirrorlab.desktop.document import Document
from mirrorlab.desktop.typed_state import from_plain, to_plain


@dataclass(frozen=True, slots=True)
class GlassState:
    """What is typed on the glass bench; texts stay as they are typed, readable or not.

    Attributes
    ----------
    images : str
        About how many images are asked for.
    kinds : str
        "all", "wedge", "corner" or "tube": which closing assemblies are listed.
    whole : bool
        Only those with one chamber between the mirrors.
    opening, length, depth, truncated, taper, sides, thickness : str
        Dimensions; "" leaves one out.
    look : str
        "along" or "into" a wedge.
    cut : str
        How a corner's mouth is cut: "equal edges" or "centre line".
    presets, surfaces, reflectances : tuple of str
        One a mirror; "" (or none) is the common preset, or what the preset says.
    thing : str
        What is looked at: "pattern", "picture" or "seed".
    pattern, picture : str
        Name of a drawn pattern ("" takes the one that suits), and path of one's own picture file.
    eye : tuple of str
        x, y and z; "" leaves that coordinate where the assembly puts it.
    turn : tuple of str
        Degrees by which the eye looks to the right and up.
    field : str
        Degrees across the shorter side of the view; "" takes what suits.
    errors : tuple of str
        Degrees by which each angle is off; "" takes what the triangle says.
    distance, limit, spread, size, draws, draw_seed : str
        Of seams, and of chance.
    joint, order, gap, stock, margin, kerf, cutting, copies, page, unit : str
        Of the panels.
    """

    images: str = "24"
    kinds: str = "all"
    whole: bool = False
    opening: str = "120 mm"
    length: str = "200 mm"
    depth: str = ""
    truncated: str = ""
    taper: str = ""
    sides: str = ""
    thickness: str = "3 mm"
    look: str = "along"
    cut: str = "equal edges"
    presets: tuple[str, ...] = ()
    surfaces: tuple[str, ...] = ()
    reflectances: tuple[str, ...] = ()
    thing: str = "pattern"
    pattern: str = ""
    picture: str = ""
    eye: tuple[str, ...] = ("", "", "")
    turn: tuple[str, ...] = ("", "")
    field: str = ""
    errors: tuple[str, ...] = ()
    distance: str = "200 mm"
    limit: str = "1 mm"
    spread: str = "normal"
    size: str = "0.02"
    draws: str = "10000"
    draw_seed: str = "1"
    joint: str = "mitred"
    order: str = "round"
    gap: str = ""
    stock: str = ""
    margin: str = "10 mm"
    kerf: str = ""
    cutting: str = "straight"
    copies: str = "1"
    page: str = "A4"
    unit: str = "mm"

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON."""
        return to_plain(self)

    def nth(self, name: str, index: int) -> str:
        """One of the texts of a tuple, "" beyond its end."""
        texts: tuple[str, ...] = getattr(self, name)
        return texts[index] if index < len(texts) else ""

    def with_nth(self, name: str, index: int, text: str) -> dict[str, Any]:
        """The field with one of its texts changed, as `replace` takes it."""
        texts: list[str] = list(getattr(self, name))
        texts += [""] * (index + 1 - len(texts))
        texts[index] = text
        return {name: tuple(texts)}


EMPTY = GlassState()

WORDS: dict[str, tuple[str, ...]] = {
    "kinds": ("all", "wedge", "corner", "tube"),
    "look": ("along", "into"),
    "cut": ("equal edges", "centre line"),
    "thing": ("pattern", "picture", "seed"),
    "spread": ("normal", "uniform"),
    "joint": ("mitred", "butted", "square"),
    "order": ("round", "first"),
    "cutting": ("straight", "free"),
    "page": ("A4", "A3", "Letter"),
    "unit": ("mm", "in"),
}
"""Fields that are one of a few words."""

LENGTHS = {"eye": 3, "turn": 2}
"""Fields of a fixed number of texts."""


def glass_state(document: Document) -> GlassState:
    """The document's value; what was read from a file is checked entry by entry, and what does not fit is left out."""
    value = document.glass
    if isinstance(value, GlassState):
        return value
    return from_mapping(value) if isinstance(value, Mapping) else EMPTY


def from_mapping(plain: Mapping[str, Any]) -> GlassState:
    """A value from plain JSON."""
    return from_plain(EMPTY, plain, WORDS, LENGTHS)
