"""What all makers of assemblies share: reading what was asked for, the opening, the object's card."""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from mirrorlab.angles import Angle, parse_angle
from mirrorlab.optics.assembly import Assembly, ObjectPlace, Panel, check
from mirrorlab.optics.lengths import AssemblyError, parse_length, positive_length
from mirrorlab.optics.mirror import PRESETS, MirrorSpec, preset
from mirrorlab.optics.shapes import angle_between

Array = NDArray[np.float64]
Length: TypeAlias = str | float
AngleLike: TypeAlias = str | float | Fraction | Angle
Mirrors: TypeAlias = str | MirrorSpec | Sequence[str | MirrorSpec]

DEFAULT_MIRROR = "first-surface aluminium"
WIDE_FIELD = math.radians(55)
"""Radians across the shorter side of a view: about what one takes in through an eyepiece."""

SIMPLE = 60
"""Largest denominator of a closing fraction that typed decimals are taken to mean. 51.43° means 2π/7; that 59.5°
is near 37π/112 is chance, and mirrors at 59.5° shall stand at 59.5°."""

WIDEST_FIELD = math.radians(100)
"""A wider flat picture pulls its rims apart beyond what one takes for a view."""

ROUNDING = 1e-5
"""Part of an opening by which it may be larger than the panels leave: six digits that were shown can be typed back."""

MARGIN = 1.2
"""How much wider a view is than what it is about."""


def to_radians(angle: AngleLike, field: str) -> float:
    """Return an angle in radians; a bare number is degrees exactly as given, text is read as typed."""
    if isinstance(angle, bool) or not isinstance(angle, str | int | float | Fraction | Angle):
        msg = f"{field} {angle!r}: give an angle"
        raise AssemblyError(msg, field)
    if isinstance(angle, int | float):
        if not math.isfinite(angle):
            msg = f"{field} {angle!r}: must be a finite number of degrees"
            raise AssemblyError(msg, field)
        return math.radians(angle)
    if isinstance(angle, Fraction):
        return float(angle) * math.pi
    if isinstance(angle, Angle):
        return standing_angle(angle)
    try:
        return standing_angle(parse_angle(angle))
    except ValueError as error:
        raise AssemblyError(str(error), field) from error


def standing_angle(angle: Angle) -> float:
    """Return the angle in radians that mirrors stand at: a simple closing fraction, else the typed value."""
    if angle.fraction is not None and angle.fraction.denominator <= SIMPLE:
        return float(angle.fraction) * math.pi
    return math.radians(angle.degrees)


def as_given(kind: str, **values: Any) -> dict[str, object]:
    """Return what was asked for as plain JSON."""

    def plain(value: Any) -> Any:
        if isinstance(value, Angle):
            return value.text if value.fraction is None else plain(value.fraction)
        if isinstance(value, Fraction):
            return f"{value.numerator}pi/{value.denominator}"
        if isinstance(value, list | tuple):
            return [plain(item) for item in value]
        return value if isinstance(value, str) or value is None else float(value)

    return {"kind": kind} | {key: plain(value) for key, value in values.items() if value is not None}


def floor_card(polygon: Array) -> ObjectPlace:
    """Return a card that is the box around the far end, so that a picture fills the cross-section."""
    right, up = np.array([1.0, 0, 0]), np.array([0, 1.0, 0])
    across, along = polygon @ right, polygon @ up
    level = float(polygon[0, 2])
    centre = right * (across.max() + across.min()) / 2 + up * (along.max() + along.min()) / 2 + [0, 0, level]
    return ObjectPlace(centre, right, up, float(np.ptp(across)), float(np.ptp(along)))


def field_for(radius: float, distance: float) -> float:
    """Return the field of view that takes in a ball of images around a point at this distance, in radians."""
    return min(2 * MARGIN * math.asin(min(radius / distance, 1.0)), WIDEST_FIELD)


def longest_side(polygon: Array) -> float:
    """Return the length of a polygon's longest side."""
    return float(np.linalg.norm(np.roll(polygon, -1, axis=0) - polygon, axis=1).max())


def finish(
    kind: str,
    panels: tuple[Panel, ...],
    mouth: Array,
    measure: float,
    opening: Length | None,
    thickness: Length,
    mirrors: Mirrors,
    place: ObjectPlace,
    eye: Array,
    target: Array,
    up: Array,
    field: float,
    axes: Array,
    given: dict[str, object],
) -> Assembly:
    """Return the assembly of these panels, its opening cut down to what was asked for, and checked."""
    window = mouth
    if opening is not None:
        wanted = positive_length(opening, "opening")
        if wanted > measure * (1 + ROUNDING):
            msg = (
                f"opening {wanted:.6g} mm: larger than the {measure:.6g} mm that the panels leave; make the"
                " mirrors larger or the opening smaller"
            )
            raise AssemblyError(msg, "opening")
        middle = mouth.mean(axis=0)
        window = middle + (mouth - middle) * min(1.0, wanted / measure)
    listed = [mirrors] * len(panels) if isinstance(mirrors, str | MirrorSpec) else list(mirrors)
    specs = tuple(preset(item) if isinstance(item, str) else item for item in listed)
    named = [spec.name if spec == PRESETS.get(spec.name) else spec.to_dict() for spec in specs]
    n = len(panels)
    letters = [panel.letter for panel in panels]
    dihedrals = {
        (i, j): angle_between(panels[i], panels[j])
        for i in range(n)
        for j in range(i + 1, n)
        if letters[j] in panels[i].edges
    }
    glass = parse_length(thickness, "thickness")
    dimensions = given | {"thickness": glass, "mirrors": named}
    result = Assembly(
        kind,
        panels,
        dihedrals,
        glass,
        specs,
        window,
        mouth,
        place,
        eye,
        target,
        up,
        min(field, WIDEST_FIELD),
        axes,
        dimensions,
    )
    check(result)
    return result
