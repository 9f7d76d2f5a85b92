"""Folding the cut panes back together: the dihedral angles must return from what was cut.

Two ways that know nothing of the angles the panes were made for. By bevels: each pane is turned until its
ground edge lies flat on its neighbour, all the way round, and the last joint must close. By shapes: three
flat faces are swung about their shared edges until the open edge closes.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.glass import GlassPanel
from mirrorlab.optics.joints import Surface
from mirrorlab.optics.panels import FlatPanel

Array = NDArray[np.float64]
Pair = tuple[str, str]

NUDGE = 1e-6
"""Radians by which a hinge is moved to see how the gap changes."""

SMALLEST_STEP = 1e-12
"""Radians; a smaller turn moves nothing."""

SHUT = 1e-10
"""mm; a smaller gap is rounding."""

MOST_STEPS = 60
"""Gauss–Newton steps; it takes five to ten."""

MIRROR_SIDE = np.array([0.0, 0.0, 1.0])
"""Outward normal of the face that a neighbour stands on: always the one on the mirror side."""


@dataclass(frozen=True, slots=True, eq=False)
class Fold:
    """What came of folding.

    Attributes
    ----------
    dihedrals : dict
        (letter, letter) → angle between the reflecting faces in radians as folded; only joints that the cut
        edges or shapes determine.
    angle_error : float
        Largest difference from the intended angles, or by which a ground edge doesn't lie flat, radians;
        0 when nothing is determined.
    opening : float
        mm; the largest distance between the two ideal edges of a joint after folding.
    """

    dihedrals: dict[Pair, float]
    angle_error: float
    opening: float

    def to_dict(self) -> dict[str, object]:
        """Plain JSON; angles in degrees."""
        return {
            "dihedrals_degrees": {f"{a}{b}": float(np.degrees(x)) for (a, b), x in self.dihedrals.items()},
            "largest_angle_error_degrees": float(np.degrees(self.angle_error)),
            "largest_opening_mm": self.opening,
        }


def fold_by_bevels(panes: Sequence[GlassPanel]) -> Fold:
    """Fold panes with mitred or butted joints by laying each edge on its neighbour.

    Square joints touch along a line only and leave the angle open, so a pane that is reached through square
    joints alone stays out.
    """
    by_letter = {pane.letter: pane for pane in panes}
    turns: dict[str, Array] = {panes[0].letter: np.eye(3)}
    places: dict[str, Array] = {panes[0].letter: np.zeros(3)}
    queue = [panes[0].letter]
    while queue:
        here = queue.pop(0)
        pane = by_letter[here]
        for side, other in enumerate(pane.flat.neighbours):
            if other and other not in turns and pane.sides[side].role != "square":
                neighbour = by_letter[other]
                back = neighbour.flat.neighbours.index(here)
                turns[other] = turns[here] @ _laid_on(pane, side, neighbour, back)
                start = _corner(pane, side + 1) @ turns[here].T + places[here]
                places[other] = start - _corner(neighbour, back) @ turns[other].T
                queue.append(other)
    fold = _measure([by_letter[letter].flat for letter in turns], turns, places)
    return Fold(fold.dihedrals, max(fold.angle_error, _worst_seat(by_letter, turns)), fold.opening)


def _worst_seat(by_letter: dict[str, GlassPanel], turns: dict[str, Array]) -> float:
    """Largest turn in radians that a neighbour, as folded, lacks to lie flat on its joint."""
    worst = 0.0
    for here, turn in turns.items():
        pane = by_letter[here]
        for side, other in enumerate(pane.flat.neighbours):
            if other in turns and pane.sides[side].role != "square":
                neighbour = by_letter[other]
                seated = turn @ _laid_on(pane, side, neighbour, neighbour.flat.neighbours.index(here))
                twist = turns[other].T @ seated
                sine = np.linalg.norm(
                    [twist[2, 1] - twist[1, 2], twist[0, 2] - twist[2, 0], twist[1, 0] - twist[0, 1]]
                )
                worst = max(worst, float(np.arctan2(sine, np.trace(twist) - 1)))
    return worst


def _laid_on(pane: GlassPanel, side: int, neighbour: GlassPanel, back: int) -> Array:
    """Rotation of the neighbour's frame into the pane's that lays their joint faces together."""
    role = pane.sides[side].role
    mine = MIRROR_SIDE if role == "over" else _edge_face(pane, side)
    theirs = MIRROR_SIDE if neighbour.sides[back].role == "over" else _edge_face(neighbour, back)
    return _frame(_along(pane, side), mine).T @ _frame(-_along(neighbour, back), -theirs)


def _frame(along: Array, outward: Array) -> Array:
    return np.stack([along, outward, np.cross(along, outward)])


def _corner(pane: GlassPanel, corner: int) -> Array:
    return np.append(pane.flat.outline[corner % len(pane.flat.outline)], 0.0)


def _along(pane: GlassPanel, side: int) -> Array:
    vector = np.append(np.roll(pane.coated, -1, axis=0)[side] - pane.coated[side], 0.0)
    return vector / np.linalg.norm(vector)


def _edge_face(pane: GlassPanel, side: int) -> Array:
    """Outward normal of the ground edge, from the glass as cut."""
    along = _along(pane, side)
    up = np.append(pane.clear[side], pane.clear_height) - np.append(pane.coated[side], 0.0)
    normal = np.cross(along, up if pane.surface is Surface.SECOND else -up)
    return normal / np.linalg.norm(normal)


def fold_by_shapes(panels: Sequence[FlatPanel]) -> Fold:
    """Fold three flat faces by their shapes alone; wedges and four-sided tubes stay loose hinges."""
    if len(panels) != 3:
        return Fold({}, 0.0, 0.0)
    first, second, third = panels
    joint = second.neighbours.index(third.letter), third.neighbours.index(second.letter)

    def swung(angles: Array) -> tuple[dict[str, Array], dict[str, Array]]:
        turns, places = {first.letter: np.eye(3)}, {first.letter: np.zeros(3)}
        for panel, angle in zip((second, third), angles, strict=True):
            turns[panel.letter], places[panel.letter] = _hinged(first, panel, float(angle))
        return turns, places

    def open_edge(angles: Array) -> Array:
        turns, places = swung(angles)
        ends = [
            _ends(p, s) @ turns[p.letter].T + places[p.letter]
            for p, s in zip((second, third), joint, strict=True)
        ]
        return (ends[0] - ends[1][::-1]).ravel()

    starts = [np.full(2, angle) for angle in np.radians([45.0, 90.0, 135.0])]
    found = [_closed(open_edge, start) for start in starts]
    best = min(found, key=lambda angles: float(np.linalg.norm(open_edge(angles))))
    return _measure(panels, *swung(best))


def _closed(gap: Callable[[Array], Array], angles: Array) -> Array:
    """Gauss–Newton steps, each shortened until the gap shrinks."""
    size = float(np.linalg.norm(gap(angles)))
    for _ in range(MOST_STEPS):
        if size < SHUT:
            break
        here = gap(angles)
        nudges = np.eye(2) * NUDGE
        slope = np.column_stack([(gap(angles + n) - gap(angles - n)) / (2 * NUDGE) for n in nudges])
        step = -np.linalg.lstsq(slope, here, rcond=None)[0]
        while np.linalg.norm(step) > SMALLEST_STEP and np.linalg.norm(gap(angles + step)) >= size:
            step = step / 2
        if np.linalg.norm(step) <= SMALLEST_STEP:
            break
        angles = angles + step
        size = float(np.linalg.norm(gap(angles)))
    return angles


def _hinged(fixed: FlatPanel, moving: FlatPanel, angle: float) -> tuple[Array, Array]:
    """Turn and place of `moving`, swung about its shared edge to stand at `angle` over `fixed`."""
    side, back = fixed.neighbours.index(moving.letter), moving.neighbours.index(fixed.letter)
    start, stop = _ends(fixed, side)
    along = (stop - start) / np.linalg.norm(stop - start)
    inner = np.cross([0.0, 0.0, 1.0], along)
    across = np.cos(angle) * inner + np.array([0.0, 0.0, np.sin(angle)])
    theirs = _ends(moving, back)
    there = (theirs[0] - theirs[1]) / np.linalg.norm(theirs[0] - theirs[1])
    inner_there = np.cross([0.0, 0.0, 1.0], -there)
    turn = np.stack([along, across, np.cross(along, across)]).T @ np.stack(
        [there, inner_there, np.cross(there, inner_there)]
    )
    return turn, start - turn @ theirs[1]


def _ends(panel: FlatPanel, side: int) -> Array:
    corners = panel.outline[[side, (side + 1) % len(panel.outline)]]
    return np.column_stack([corners, np.zeros(2)])


def _measure(panels: Sequence[FlatPanel], turns: dict[str, Array], places: dict[str, Array]) -> Fold:
    dihedrals: dict[Pair, float] = {}
    error = opening = 0.0
    by_letter = {panel.letter: panel for panel in panels}
    for panel in panels:
        for side, other in enumerate(panel.neighbours):
            if other not in by_letter or (other, panel.letter) in dihedrals:
                continue
            neighbour = by_letter[other]
            normals = turns[panel.letter][:, 2], turns[other][:, 2]
            found = np.pi - np.arctan2(np.linalg.norm(np.cross(*normals)), normals[0] @ normals[1])
            dihedrals[panel.letter, other] = float(found)
            error = max(error, abs(float(found) - float(panel.dihedrals[side] or 0.0)))
            back = neighbour.neighbours.index(panel.letter)
            mine = _ends(panel, side) @ turns[panel.letter].T + places[panel.letter]
            theirs = _ends(neighbour, back) @ turns[other].T + places[other]
            opening = max(opening, float(np.linalg.norm(mine - theirs[::-1], axis=1).max()))
    return Fold(dihedrals, error, opening)
