"""What follows from the document and the typed values: assembly, intent, joints, cut job.

Everything here is a pure function of texts and arrangements and is remembered, so that bench, table and pictures
may each ask for it. What is wrong with a dimension is an `AssemblyError` whose `field` is the entry it belongs to.
"""

from __future__ import annotations

import math
from dataclasses import replace
from functools import lru_cache
from typing import Any

import numpy as np
from numpy.typing import NDArray

from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.glass_state import GlassState, glass_state
from mirrorlab.mirrors import Arrangement
from mirrorlab.optics import kinds
from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.build import assembly_for
from mirrorlab.optics.cautions import Hazards, hazards_of
from mirrorlab.optics.cutjob import CutJob, make_cut_job
from mirrorlab.optics.glass import JointSettings
from mirrorlab.optics.joints import JointError
from mirrorlab.optics.lengths import AssemblyError, parse_length
from mirrorlab.optics.mirror import PRESETS, MirrorSpec
from mirrorlab.optics.nesting import Cutting, NestingError, Stock
from mirrorlab.optics.panels import PanelError
from mirrorlab.optics.scene import with_ball, with_card
from mirrorlab.optics.stand import DEFAULT_MIRROR
from mirrorlab.optics.tolerance import Intent, intent_of

Array = NDArray[np.float64]

TAKES: dict[str, tuple[str, ...]] = {
    "wedge": ("opening", "length", "depth"),
    "corner": ("opening", "depth", "truncated"),
    "tube": ("opening", "length", "sides", "taper"),
}
"""Lengths that each kind of assembly has."""

SEED_PART = 0.45
"""How far from the point to the mouth of a corner the seed's ball stands; only its direction is the seed's."""

STEEPEST = math.radians(85)
"""The eye turns up or down no further than this from straight ahead: beyond, up and ahead would be one."""


def kind_of(arrangement: Arrangement) -> str:
    """ "wedge", "corner", "tube", or "" for mirrors that make none of them."""
    try:
        kind = kinds.kind_of(arrangement)
    except AssemblyError:
        return ""
    through_one_line = kind == "corner" and arrangement.finding().rank < arrangement.size
    return "" if through_one_line else kind


def number(text: str, field: str, what: str) -> float:
    """A typed number, with a decimal comma or a true minus sign; raises `AssemblyError` for anything else."""
    try:
        value = float(text.strip().rstrip("°").replace(",", ".").replace("−", "-"))
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        msg = f'{what} "{text}": not a number; write it as 12 or 0.5'
        raise AssemblyError(msg, field)
    return value


def whole_number(text: str, field: str, what: str, least: int, most: int) -> int:
    """A typed whole number; raises `AssemblyError` outside its range."""
    value = text.strip().replace(" ", "").replace(",", "")
    if not value.isdecimal() or not least <= int(value) <= most:
        msg = f'{what} "{text}": write a whole number from {least:,} to {most:,}'
        raise AssemblyError(msg, field)
    return int(value)


def assembly_of(document: Document) -> Assembly:
    """The assembly with object and eye. Raises `AssemblyError`."""
    state = glass_state(document)
    bare = bare_assembly(document.arrangement, state)
    spot = tuple(seed_spot(bare, document)) if state.thing == "seed" else None
    return _seen(bare, state.thing, state.pattern, spot, state.eye, state.turn, state.field)


def bare_assembly(arrangement: Arrangement, state: GlassState) -> Assembly:
    """The panels alone, with the object and eye that suit them. Raises `AssemblyError`."""
    kind = kind_of(arrangement)
    asked: list[tuple[str, Any]] = []
    for name in TAKES.get(kind, ()):
        text = getattr(state, name).strip()
        if text:
            asked.append((name, text))
    if kind == "wedge":
        asked.append(("look", state.look))
    if kind == "corner":
        asked.append(("cut", state.cut))
    asked.append(("thickness", state.thickness.strip() or "0"))
    specs = tuple(mirror_spec(state, k, letter) for k, letter in enumerate(arrangement.letters))
    return _bare(arrangement, tuple(asked), specs if kind else ())


def mirror_spec(state: GlassState, index: int, letter: str) -> MirrorSpec:
    """What a mirror is made of. Raises `AssemblyError` with the field "mirrors"."""
    name = state.nth("presets", index) or DEFAULT_MIRROR
    made = PRESETS.get(name, PRESETS[DEFAULT_MIRROR])
    surface = state.nth("surfaces", index) or made.surface
    text = state.nth("reflectances", index).strip()
    reflectance = number(text, "mirrors", f"reflectance of {letter}") if text else made.reflectance
    if (surface, reflectance) == (made.surface, made.reflectance):
        return made
    try:
        return replace(made, surface=surface, reflectance=reflectance, name="")
    except AssemblyError as error:
        msg = f"mirror {letter}: {error}"
        raise AssemblyError(msg, "mirrors") from None


@lru_cache(maxsize=16)
def _bare(
    arrangement: Arrangement, asked: tuple[tuple[str, Any], ...], specs: tuple[MirrorSpec, ...]
) -> Assembly:
    dimensions = dict(asked)
    if "taper" in dimensions:
        dimensions["taper"] = number(dimensions["taper"], "taper", "taper")
    if "sides" in dimensions:
        dimensions["sides"] = [side.strip() for side in dimensions["sides"].replace(";", ",").split(",")]
    kind = kind_of(arrangement)
    if kind in ("wedge", "tube") and "length" not in dimensions:
        msg = f"length: give how long the {kind} is, such as 200 mm"
        raise AssemblyError(msg, "length")
    return assembly_for(arrangement, mirrors=specs, **dimensions)


@lru_cache(maxsize=16)
def _seen(
    bare: Assembly,
    thing: str,
    pattern: str,
    spot: tuple[float, ...] | None,
    eye: tuple[str, ...],
    turn: tuple[str, ...],
    field: str,
) -> Assembly:
    made = bare
    if spot is not None:
        made = with_ball(bare, np.array(spot))
    elif thing == "picture" or pattern not in ("", "lantern globe"):
        made = with_card(bare)
    place = made.eye.copy()
    for k, text in enumerate(eye):
        if text.strip():
            place[k] = signed_length(text, "eye")
    way = made.target - made.eye
    if not np.allclose(place, made.eye) and np.linalg.norm(made.target - place) > 0:
        way = made.target - place
    right, up = (number(text, "turn", "turn") if text.strip() else 0.0 for text in turn)
    target = place + turned(way, made.up, right, up)
    wide = math.radians(number(field, "field_of_view", "field of view")) if field.strip() else None
    return made.with_view(eye=place, target=target, field_of_view=wide)


def signed_length(text: str, field: str) -> float:
    """A length that may be negative, in millimetres."""
    plain = text.strip().replace("−", "-")
    return -parse_length(plain[1:], field) if plain.startswith("-") else parse_length(plain, field)


def turned(way: Array, up: Array, right_degrees: float, up_degrees: float) -> Array:
    """A line of sight turned to the right and up, its length kept."""
    length = float(np.linalg.norm(way))
    ahead = way / length
    side = np.cross(ahead, up)
    side = side / np.linalg.norm(side)
    above = np.cross(side, ahead)
    right = math.radians(right_degrees)
    lift = max(-STEEPEST, min(STEEPEST, math.radians(up_degrees)))
    level = math.cos(right) * ahead + math.sin(right) * side
    result: Array = length * (math.cos(lift) * level + math.sin(lift) * above)
    return result


def seed_spot(assembly: Assembly, document: Document) -> Array:
    """Where the seed's ball stands between the mirrors, in millimetres: its direction in a corner or wedge, its
    heights in a tube."""
    low = min(float(panel.outline[:, 2].min()) for panel in assembly.panels)
    high = max(float(panel.outline[:, 2].max()) for panel in assembly.panels)
    if assembly.kind == "tube":
        return _in_tube(assembly, document, low + 0.25 * (high - low))
    heights = document.seed.heights or (1.0,) * len(assembly.panels)
    normals = document.arrangement.normals
    seed = document.orbit.seed if document.orbit is not None else np.linalg.solve(normals, np.array(heights))
    way = assembly.axes @ np.concatenate([seed, np.zeros(3 - len(seed))])
    if assembly.kind == "corner":
        if way[2] <= 0:
            msg = "the seed lies behind the mirrors; move it between them on the Points bench"
            raise AssemblyError(msg, "object")
        result: Array = way / way[2] * (low + SEED_PART * (high - low))
        return result
    size = float(np.linalg.norm(way))
    if size == 0:
        msg = "the seed stands on the edge; move it between the mirrors on the Points bench"
        raise AssemblyError(msg, "object")
    reach = float(np.linalg.norm(assembly.panels[0].outline[1] - assembly.panels[0].outline[0]))
    spot: Array = way / size * 0.5 * reach + np.array([0, 0, low + 0.25 * (high - low)])
    return spot


def _in_tube(assembly: Assembly, document: Document, level: float) -> Array:
    normals, offsets = assembly.normals, assembly.offsets
    heights = document.seed.heights if len(assembly.panels) == 3 else None
    if len(assembly.panels) > 3:
        middle = assembly.mouth.mean(axis=0)
        return np.array([middle[0], middle[1], level])
    shares = np.array(heights or (1.0, 1.0, 1.0))
    table = np.column_stack([normals[:, :2], -shares])
    x, y, _ = np.linalg.solve(table, offsets - normals[:, 2] * level)
    return np.array([x, y, level])


@lru_cache(maxsize=16)
def _intent(arrangement: Arrangement) -> tuple[Intent, tuple[float, ...]]:
    return intent_of(arrangement)


def intent_and_actual(arrangement: Arrangement, state: GlassState) -> tuple[Intent, tuple[float, ...]]:
    """What the angles are meant to be, and what they are: as typed in the triangle, or with the errors typed here."""
    intent, actual = _intent(arrangement)
    found = list(actual)
    for k, meant in enumerate(intent.radians):
        text = state.nth("errors", k).strip()
        if text:
            found[k] = meant + math.radians(number(text, "errors", f"error of {intent.pairs[k]}"))
    return intent, tuple(found)


def joints_of(state: GlassState) -> JointSettings:
    """The joints that are asked for."""
    gap = parse_length(state.gap, "gap") if state.gap.strip() else 0.0
    return JointSettings.named(state.joint, state.order, gap)


def stock_of(state: GlassState) -> Stock | None:
    """The stock sheet that is asked for, if any. Raises `AssemblyError` with the field "stock", "margin" or "kerf"."""
    if not state.stock.strip():
        return None
    sizes = state.stock.lower().replace("×", "x").split("x")
    if len(sizes) != 2:
        msg = f'stock sheet "{state.stock}": write width x height, such as 1200 x 800 or 48in x 32in'
        raise AssemblyError(msg, "stock")
    width, height = (parse_length(size, "stock") for size in sizes)
    margin = parse_length(state.margin, "margin") if state.margin.strip() else 0.0
    kerf = parse_length(state.kerf, "kerf") if state.kerf.strip() else 0.0
    try:
        return Stock(width, height, margin, kerf, Cutting(state.cutting))
    except NestingError as error:
        raise AssemblyError(str(error), "stock") from None


def copies_of(state: GlassState) -> int:
    """How many assemblies are to be cut."""
    return whole_number(state.copies, "copies", "copies", 1, 1000)


@lru_cache(maxsize=8)
def cut_job(
    assembly: Assembly, joints: JointSettings, stock: Stock | None, copies: int, title: str
) -> CutJob:
    """The cut job; a joint that cannot be made is an `AssemblyError` with the field "joint", stock "stock"."""
    try:
        return make_cut_job(assembly, joints, stock, copies, title)
    except NestingError as error:
        raise AssemblyError(str(error), "stock") from None
    except (JointError, PanelError) as error:
        raise AssemblyError(str(error), "joint") from None


def panels_job(document: Document) -> CutJob:
    """The panes of the document's assembly without a layout. Raises `AssemblyError`."""
    state = glass_state(document)
    bare = bare_assembly(document.arrangement, state)
    return cut_job(bare, joints_of(state), None, copies_of(state), "")


@lru_cache(maxsize=16)
def hazards(bare: Assembly) -> Hazards:
    """What an assembly brings with it."""
    return hazards_of(bare)
