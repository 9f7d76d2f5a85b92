"""Sections across the joints: how the two panes meet, larger than life, with what to grind."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.cutsheet_panel import degrees
from mirrorlab.drawing.lettering import text_lines, wrapped
from mirrorlab.drawing.sheet import Layer, Sheet, Stroke, Text
from mirrorlab.optics import polygon
from mirrorlab.optics.cutjob import CutJob
from mirrorlab.optics.cutlist import side_name
from mirrorlab.optics.glass import GlassPanel
from mirrorlab.optics.joints import Surface

Array = NDArray[np.float64]

CELL = 29.0
"""Width of one section with its words, in text heights."""

PICTURE = 19.0
"""Height of the picture in it, in text heights."""

ARM = 5.0
"""Length of the panes drawn, in thicknesses from the ideal edge; more where the joint reaches further."""


def joint_sections(job: CutJob, height: float) -> tuple[Sheet, ...]:
    """One section a joint, each `Sheet.width` by `Sheet.height` with its lower left corner at (0, 0).

    Glass without thickness has none.
    """
    by_letter = {pane.letter: pane for pane in job.panes}
    found = []
    for one, other in job.dihedrals:
        pane, neighbour = by_letter[one], by_letter[other]
        if pane.thickness > 0:
            sides = pane.flat.neighbours.index(other), neighbour.flat.neighbours.index(one)
            found.append(_section(pane, sides[0], neighbour, sides[1], height))
    return tuple(found)


def _section(pane: GlassPanel, side: int, other: GlassPanel, back: int, height: float) -> Sheet:
    angle = float(pane.sides[side].dihedral or 0.0)
    reach = max(max(s.mirror_offset, s.other_offset) for s in (pane.sides[side], other.sides[back]))
    arm = ARM * pane.thickness + reach
    ways = (
        np.pi / 2 - angle / 2,
        np.pi / 2 + angle / 2,
    )  # the bisector upright, so that all sections read alike
    slabs = [_slab(pane, side, arm, ways[0], 1.0), _slab(other, back, arm, ways[1], -1.0)]
    left, bottom, right, top = polygon.bounds(np.vstack([np.zeros(2), *(outline for outline, _ in slabs)]))
    room = height * np.array([CELL - 8, PICTURE - 5.5])
    scale = _round_scale(float(min(room / np.array([right - left, top - bottom]))))
    said = joint_words(pane, side, other, back)
    words = [line for text in said for line in wrapped(text, height, (CELL - 2) * height)]
    tall = height * (PICTURE + 1.7 * len(words))
    edge = np.array([CELL * height / 2 - scale * (left + right) / 2, tall - 3.2 * height - scale * top])
    strokes, texts = [], []
    for (outline, coating), letter, way in zip(slabs, (pane.letter, other.letter), ways, strict=True):
        strokes.append(Stroke(Layer.SECTION, scale * outline + edge, closed=True))
        strokes.append(Stroke(Layer.COATING, scale * coating + edge))
        end = outline[[1, 2]].mean(axis=0) * scale + edge
        texts.append(
            Text(
                Layer.LETTERING,
                letter,
                end + 1.3 * height * np.array([np.cos(way), np.sin(way)]),
                height,
                bold=True,
            )
        )
    turns = np.linspace(*ways, 24)
    arc = scale * (reach + 2.5 * pane.thickness)
    strokes.append(Stroke(Layer.DIMENSION, edge + arc * np.column_stack([np.cos(turns), np.sin(turns)])))
    texts += text_lines(
        Layer.LETTERING, words, np.array([height, tall - PICTURE * height]), height, bold_first=True
    )
    texts.append(
        Text(
            Layer.LETTERING,
            f"section, {scale:g}:1",
            np.array([height, tall - height]),
            0.8 * height,
            anchor="start",
        )
    )
    return Sheet(pane.letter + other.letter, CELL * height, tall, tuple(strokes), tuple(texts), scale=scale)


def _round_scale(scale: float) -> float:
    """The largest round enlargement not above `scale`; a room's thick glass may have to be reduced."""
    choices = (0.1, 0.2, 0.25, 0.5, 0.75, 1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 8.0, 10.0)
    return max((choice for choice in choices if choice <= scale), default=scale)


def _slab(pane: GlassPanel, side: int, arm: float, way: float, hand: float) -> tuple[Array, Array]:
    """Outline of the glass in section and the line of its coating; `hand` is the side the light is on."""
    cut = pane.sides[side]
    along = np.array([np.cos(way), np.sin(way)])
    light = hand * np.array([-along[1], along[0]])
    depth = pane.thickness if pane.surface is Surface.SECOND else -pane.thickness
    coated, clear = cut.mirror_offset, cut.other_offset
    outline = np.array(
        [coated * along, arm * along, arm * along + depth * light, clear * along + depth * light]
    )
    return outline, np.array([coated * along, arm * along])


def joint_words(pane: GlassPanel, side: int, other: GlassPanel, back: int) -> tuple[str, ...]:
    """The joint in words: angle and kind, then what is done to each pane."""
    cut, opposite = pane.sides[side], other.sides[back]
    kinds = {"mitred": "mitred", "square": "square edges", "over": "butted", "under": "butted"}
    head = f"{pane.letter}{other.letter} {degrees(float(cut.dihedral or 0.0))}, {kinds[cut.role]}"
    return head, _one_side(pane, side), _one_side(other, back), *_blind(cut.blind, opposite.blind)


def _one_side(pane: GlassPanel, side: int) -> str:
    cut, name = pane.sides[side], side_name(pane, side)
    if not cut.longer_face:
        done = {
            "over": f"square, runs past {cut.neighbour}",
            "under": f"square, stands on {cut.neighbour}",
        }.get(cut.role, "square")
        return f"{name}: {done}"
    upper = "upper" if pane.upper_is_longer(side) else "lower"
    feather = ", feather edge" if cut.is_feather else ""
    return f"{name}: bevel {degrees(abs(cut.bevel))} off square, {upper} face longer{feather}"


def _blind(one: float, other: float) -> tuple[str, ...]:
    widest = max(one, other)
    return (f"blind strip {widest:.1f} mm",) if widest > 0.05 else ()
