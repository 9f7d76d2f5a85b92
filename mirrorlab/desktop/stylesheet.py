"""One stylesheet for the whole window, made of a theme's tokens.

Widgets say what they are through the property ``kind``: labels are "title", "heading", "muted", "small" or
"figures"; buttons are "quiet" (text only), "chief" (the one to press), "segment" (one of a row) or "tab";
frames are "card". A field that holds what cannot be read has the property ``wrong`` set to true, with
`set_kind` and `set_wrong` doing the repolishing.
"""

from __future__ import annotations

from pathlib import Path
from string import Template

from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.theme import Theme

ICONS = Path(__file__).parent / "icons"
SHEET = Path(__file__).parent / "sheet.qss"
TINTS = (
    "ground",
    "panel",
    "raised",
    "text",
    "muted",
    "line",
    "accent",
    "accent_text",
    "select",
    "good",
    "warn",
    "bad",
)


def set_kind(widget: QWidget, kind: str) -> None:
    """Say what a widget is to the stylesheet."""
    _set(widget, "kind", kind)


def set_wrong(widget: QWidget, wrong: bool) -> None:
    """Mark a field whose text cannot be read."""
    _set(widget, "wrong", wrong)


def set_live(widget: QWidget, live: bool) -> None:
    """Mark a frame whose field has the keyboard."""
    _set(widget, "live", live)


def _set(widget: QWidget, name: str, value: object) -> None:
    if widget.property(name) != value:
        widget.setProperty(name, value)
        widget.style().unpolish(widget)
        widget.style().polish(widget)


def stylesheet(theme: Theme) -> str:
    """The stylesheet of a theme."""
    fonts, space = theme.fonts, theme.spacing
    values = {name: getattr(theme, name) for name in TINTS}
    values |= {
        "display": ", ".join(f'"{name}"' for name in fonts.display),
        "figures": ", ".join(f'"{name}"' for name in fonts.figures),
        "display_size": f"{fonts.display_size:g}pt",
        "heading_size": f"{fonts.heading_size:g}pt",
        "text_size": f"{fonts.text_size:g}pt",
        "small_size": f"{fonts.small_size:g}pt",
        "hair": f"{space.hair}px",
        "small": f"{space.small}px",
        "medium": f"{space.medium}px",
        "large": f"{space.large}px",
        "radius": f"{space.radius}px",
        "field": f"{space.field_height - 2}px",
    }
    for icon in ("down", "up", "right", "tick"):
        values[f"icon_{icon}"] = (ICONS / f"{icon}-{theme.name}.svg").as_posix()
    return Template(SHEET.read_text(encoding="utf-8")).substitute(values)
