"""The look of the window and its pictures: ink, silvered glass and brass on paper, or the same by lamplight.

Only plain values stand here; the window makes a stylesheet of them, the pictures take `Theme.picture`.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from mirrorlab.drawing.look import DARK_LOOK, LIGHT_LOOK, Look


@dataclass(frozen=True, slots=True)
class Spacing:
    """Distances in pixels at 96 dots an inch, in steps that go with one another."""

    hair: int = 2
    small: int = 4
    medium: int = 8
    large: int = 12
    wide: int = 20
    radius: int = 4
    field_height: int = 28
    bench_width: int = 300
    triangle_width: int = 260


@dataclass(frozen=True, slots=True)
class Fonts:
    """Font families in order of wish, and sizes in points.

    `display` is for the finding, group symbols and mirror letters; `text` for everything else;
    `figures` for columns of numbers and words such as ``abac``.
    """

    display: tuple[str, ...] = LIGHT_LOOK.label_fonts
    text: tuple[str, ...] = (
        "Inter",
        "Segoe UI Variable Text",
        "Segoe UI",
        "SF Pro Text",
        "Helvetica Neue",
        "Noto Sans",
        "DejaVu Sans",
    )
    figures: tuple[str, ...] = (
        "JetBrains Mono",
        "Cascadia Mono",
        "SF Mono",
        "Noto Sans Mono",
        "DejaVu Sans Mono",
        "monospace",
    )
    display_size: float = 19.0
    heading_size: float = 12.5
    text_size: float = 10.0
    small_size: float = 8.5


@dataclass(frozen=True, slots=True)
class Theme:
    """Window tints, picture tints, fonts and distances.

    Attributes
    ----------
    ground, panel, raised : str
        Behind everything; a bench or the mirrors' triangle; a field, button or table.
    text, muted, line : str
        Writing, lesser writing, hairlines between parts.
    accent, accent_text : str
        What is chosen or wants to be pressed, and writing upon it.
    select : str
        Ground of a selected row.
    good, warn, bad : str
        Marks of fine, of no lattice or rounded, of no closing fraction or unbuildable. Each goes with a mark
        that reads without tint (`marks`).
    picture : Look
        Tints, patterns and sizes of pictures.
    """

    name: str
    ground: str
    panel: str
    raised: str
    text: str
    muted: str
    line: str
    accent: str
    accent_text: str
    select: str
    good: str
    warn: str
    bad: str
    picture: Look
    fonts: Fonts = field(default_factory=Fonts)
    spacing: Spacing = field(default_factory=Spacing)
    marks: tuple[str, str, str] = ("●", "◐", "✕")
    """Marks that go with good, warn and bad: a full disc, a half disc, a cross."""


LIGHT = Theme(
    name="light",
    ground="#EDE8DD",
    panel="#F6F2E9",
    raised="#FFFDF8",
    text="#22262B",
    muted="#66635B",
    line="#D3CBBA",
    accent="#7A5715",
    accent_text="#FFFDF8",
    select="#EBDDBB",
    good="#1F6B57",
    warn="#8A5A00",
    bad="#9B2D20",
    picture=LIGHT_LOOK,
)

DARK = Theme(
    name="dark",
    ground="#1E2022",
    panel="#26292B",
    raised="#2F3336",
    text="#ECE7DB",
    muted="#A9A59A",
    line="#404448",
    accent="#D6AE62",
    accent_text="#1B1D1F",
    select="#4A4230",
    good="#7CC4A4",
    warn="#E3B34E",
    bad="#F08A78",
    picture=DARK_LOOK,
)

THEMES: dict[str, Theme] = {theme.name: theme for theme in (LIGHT, DARK)}
