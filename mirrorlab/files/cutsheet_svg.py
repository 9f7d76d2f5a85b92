"""A drawing sheet as SVG at 1:1: one user unit is one millimetre, one group a layer."""

from __future__ import annotations

import os
from xml.sax.saxutils import escape, quoteattr

import numpy as np

from mirrorlab.drawing.dimension_lines import all_strokes, all_texts
from mirrorlab.drawing.lettering import CAP_HEIGHT
from mirrorlab.drawing.sheet import LOOKS, Sheet, Stroke, Text
from mirrorlab.files.whole import write_whole

FONTS = "DejaVu Sans, Verdana, Arial, sans-serif"


def sheet_svg(sheet: Sheet) -> str:
    """The sheet as an SVG 1.1 document."""
    strokes, texts = all_strokes(sheet), all_texts(sheet)
    size = f'width="{sheet.width:.3f}mm" height="{sheet.height:.3f}mm"'
    lines = [
        '<?xml version="1.0" encoding="UTF-8"?>',
        f'<svg xmlns="http://www.w3.org/2000/svg" {size} viewBox="0 0 {sheet.width:.3f} {sheet.height:.3f}">',
        f"<title>{escape(sheet.title)}</title>",
        '<rect width="100%" height="100%" fill="#ffffff"/>',
    ]
    for layer in sheet.layers:
        look = LOOKS[layer]
        tint = "#{:02x}{:02x}{:02x}".format(*look.tint)
        dash = f' stroke-dasharray="{" ".join(f"{d:g}" for d in look.dash)}"' if look.dash else ""
        lines.append(
            f'<g id={quoteattr(layer.value)} fill="none" stroke="{tint}" stroke-width="{look.width:g}"'
            f' stroke-linecap="round" stroke-linejoin="miter">'
        )
        lines.append(f"<desc>{escape(look.holds)}</desc>")
        lines += [_stroke(stroke, sheet.height, dash) for stroke in strokes if stroke.layer is layer]
        lines += [_text(text, sheet.height, tint) for text in texts if text.layer is layer]
        lines.append("</g>")
    lines.append("</svg>\n")
    return "\n".join(lines)


def _stroke(stroke: Stroke, height: float, dash: str) -> str:
    points = " ".join(f"{x:.4f},{height - y:.4f}" for x, y in stroke.points)
    return f'<{"polygon" if stroke.closed else "polyline"} points="{points}"{dash}/>'


def _text(text: Text, height: float, tint: str) -> str:
    x, y = text.at
    turn = f" rotate({-np.degrees(text.angle):.4f})" if text.angle else ""
    weight = ' font-weight="bold"' if text.bold else ""
    return (
        f'<text transform="translate({x:.4f} {height - y:.4f}){turn}" y="{text.height / 2:.4f}"'
        f' font-family="{FONTS}" font-size="{text.height / CAP_HEIGHT:.4f}"{weight} text-anchor="{text.anchor}"'
        f' fill="{tint}" stroke="none">{escape(text.text)}</text>'
    )


def write_svg(sheet: Sheet, path: str | os.PathLike[str]) -> None:
    """Write the sheet, whole or not at all."""
    write_whole(path, sheet_svg(sheet))
