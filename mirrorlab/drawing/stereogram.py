"""The stereogram of a point group or an arrangement: mirrors, axes, a general position, poles of faces.

Mirrors are bold great circles, axes carry their trade symbols, upper points are "+" marks and lower ones "o" marks
(International Tables for Crystallography, volume A, chapter 10.1).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.combinations import Combination
from mirrorlab.crystal.comparison import Comparison
from mirrorlab.crystal.identify import Element, elements_of
from mirrorlab.crystal.indices import printed
from mirrorlab.crystal.lattices import Alignment
from mirrorlab.crystal.mirror_match import in_space
from mirrorlab.crystal.pointgroups import NamedGroup
from mirrorlab.drawing.model import Drawing, Key, Label, Line, Points, Role
from mirrorlab.drawing.projection import Projection
from mirrorlab.mirrors import Arrangement, Finding, Orbit

Array = NDArray[np.float64]

BOLD = 2.0
"""Weight of a mirror's line against the rim of the disc."""

LETTER_AT = 1.085
"""Where letters stand, in radii of the disc."""

MOST_MARKS = 2000
"""More images than this fill the disc: only so many are drawn."""

MOST_LABELS = 30
"""With more poles than this in sight only one of each form is labelled."""

LONGEST_LABEL = 12
"""Characters; longer indices, those with decimals, would lie over one another, so one of each form is labelled too."""

_SAME = 1e-6
_EFFORT = 1_500_000


@dataclass(frozen=True)
class StereogramOptions:
    """What is drawn.

    Attributes
    ----------
    projection : Projection
    underlay : bool
        The net under the picture, every ten degrees.
    axes, points, labels : bool
    """

    projection: Projection = field(default_factory=Projection)
    underlay: bool = False
    axes: bool = True
    points: bool = True
    labels: bool = True


DEFAULT = StereogramOptions()


def group_stereogram(
    group: NamedGroup,
    combination: Combination | None = None,
    point: ArrayLike | None = None,
    options: StereogramOptions = DEFAULT,
) -> Drawing:
    """A point group in its setting.

    Parameters
    ----------
    combination : Combination, optional
        Poles of its faces are drawn in place of a general position.
    point : array_like, shape (3,), optional
        A direction in the Cartesian frame of the setting whose equivalents are drawn; a clear one if not given.

    Returns
    -------
    Drawing
        Keys: ("generated", k) by row of ``group.mirror_normals``, ("axis", k), ("image", k) by operation,
        ("face", k) by face of the combination's solid.
    """
    basis = group.basis if combination is None else combination.basis
    matrices = group.cartesian_in(basis)
    parts = _Parts(options)
    parts.underlay()
    for k, normal in enumerate(_mirror_normals(group, basis)):
        parts.mirror(normal, Role.GENERATED_MIRROR, ("generated", k))
    if options.axes:
        parts.axes(elements_of(matrices), group.centrosymmetric)
    if combination is not None:
        parts.poles(combination)
    elif options.points:
        seed = _clear_for(group, parts.projection) if point is None else np.asarray(point, float)
        parity = (np.linalg.det(matrices) < 0).astype(int)
        parts.images(matrices @ seed, parity, seed_first=False)
    if options.labels:
        parts.setting(basis)
    return parts.drawing(f"Stereogram of {group.setting}", group.axes)


def arrangement_stereogram(
    arrangement: Arrangement,
    finding: Finding,
    orbit: Orbit | None = None,
    alignment: Alignment | None = None,
    options: StereogramOptions = DEFAULT,
) -> Drawing:
    """Mirrors that close, with the images of the seed.

    Parameters
    ----------
    alignment : Alignment, optional
        Turns everything to the standard setting of the group; without it the frame of the arrangement is kept.

    Returns
    -------
    Drawing
        Keys as in the picture in space: ("mirror", i), ("generated", k), ("image", k); and ("axis", k).
    """
    if finding.group is None or finding.rank > 3 or arrangement.normals is None:
        msg = "A stereogram shows mirrors that pass through one point of space and close."
        return Drawing(title="No stereogram", flat=True, notes=(msg, finding.sentence))
    turn = np.eye(3) if alignment is None else alignment.rotation
    typed = in_space(arrangement.normals) @ turn.T
    parts = _Parts(options)
    parts.underlay()
    for k, normal in enumerate(in_space(finding.group.mirrors) @ turn.T):
        if np.abs(typed @ normal).max() < 1 - _SAME**2:
            parts.mirror(normal, Role.GENERATED_MIRROR, ("generated", k))
    for i, (normal, letter) in enumerate(zip(typed, arrangement.letters, strict=True)):
        parts.mirror(normal, Role.TYPED_MIRROR, ("mirror", i), i, letter)
    if options.axes:
        small, _ = finding.group.elements()
        matrices = np.broadcast_to(np.eye(3), (len(small), 3, 3)).copy()
        size = small.shape[1]
        matrices[:, :size, :size] = small
        matrices = turn @ matrices @ turn.T
        parts.axes(elements_of(matrices), finding.group.contains_inversion and finding.rank == 3)
    if orbit is not None and options.points and np.linalg.norm(orbit.points[0]) > 0:
        parts.images(in_space(orbit.points) @ turn.T, orbit.parity, seed_first=True)
    frame = arrangement.frame if alignment is None else f"standard setting of {alignment.group.setting}"
    return parts.drawing("Stereogram", frame)


def list_stereogram(comparison: Comparison, options: StereogramOptions = DEFAULT) -> Drawing:
    """A list of points or poles and what it obeys of a group, in the group's setting.

    Mirrors that the list does not obey are flagged, and so are points that more operations of the group leave
    without a partner than they leave most of the points. Axes are those of the largest group that survives. Points
    at the centre have no direction and are left out.

    Returns
    -------
    Drawing
        Keys: ("generated", k) by row of ``group.mirror_normals``, ("axis", k), ("listed", k) by point of the list.
    """
    group = comparison.group
    survives = [one.survives for one in comparison.operations]
    parts = _Parts(options)
    parts.underlay()
    for k, (normal, mirror) in enumerate(zip(group.mirror_normals, group.mirrors, strict=True)):
        holds = survives[group.operations.index(mirror)]
        parts.mirror(normal, Role.GENERATED_MIRROR if holds else Role.FLAGGED, ("generated", k))
    kept = group.cartesian[list(comparison.subgroup)]
    if options.axes:
        parts.axes(elements_of(kept), bool((np.abs(kept + np.eye(3)).max(axis=(1, 2)) < _SAME).any()))
    if options.points:
        parts.listed(comparison)
    if options.labels:
        parts.setting(group.basis)
    drawing = parts.drawing(f"{comparison.points.source} and {group.setting}", group.axes)
    flagged = any(part.role is Role.FLAGGED for part in (*drawing.lines, *drawing.points))
    said = "flagged: mirrors that the list does not obey, points that stand apart"
    return replace(drawing, notes=(said,) if flagged else ())


@lru_cache(maxsize=64)
def _clear_for(group: NamedGroup, projection: Projection) -> Array:
    return clear_direction(group.cartesian, projection)


def clear_direction(matrices: Array, projection: Projection | None = None) -> Array:
    """A general direction whose equivalents stand well apart in the picture, and clear of the rim.

    Of directions spread evenly over the upper half, the one with the largest smallest distance between marks. Marks
    that lie on one another (an upper and a lower one, by a mirror in the plane of the picture) do not count.
    """
    projection = projection or Projection()
    count = max(24, int(_EFFORT / len(matrices) ** 2))
    steps = np.arange(min(count, 600)) + 0.5
    height = 0.08 + 0.88 * steps / len(steps)
    turns = np.pi * (1 + 5**0.5) * steps
    flat = np.sqrt(1 - height**2)
    directions = np.column_stack([flat * np.cos(turns), flat * np.sin(turns), height]) @ projection.frame
    best, widest = directions[0], -1.0
    for direction in directions:
        places, _ = projection.project(matrices @ direction)
        apart = np.linalg.norm(places[:, None] - places[None], axis=2)
        nearest = min(float(apart[apart > _SAME].min(initial=2.0)), 2 * (1 - np.linalg.norm(places[0])))
        if nearest > widest + _SAME:
            best, widest = direction, nearest
    return best


def _mirror_normals(group: NamedGroup, basis: Array) -> Array:
    rows = np.array([mirror.axis for mirror in group.mirrors], float).reshape(-1, 3) @ np.asarray(basis).T
    return rows / np.linalg.norm(rows, axis=1)[:, None]


class _Parts:
    """Gathers lines, points and labels of one stereogram, bottom to top."""

    def __init__(self, options: StereogramOptions) -> None:
        self.options = options
        self.projection = options.projection
        self.lines: list[Line] = []
        self.points: list[Points] = []
        self.labels: list[Label] = []
        self.rim_is_mirror = False

    def underlay(self) -> None:
        if not self.options.underlay:
            return
        lines = [*self.projection.meridians(), *self.projection.parallels()]
        for k, (places, main) in enumerate(lines):
            self.lines.append(Line(Role.NET, places, ("net", k), weight=1.8 if main else 1.0))

    def mirror(self, normal: Array, role: Role, key: Key, index: int = -1, letter: str = "") -> None:
        places, rim = self.projection.trace(normal)
        self.rim_is_mirror |= rim
        weight = BOLD if role is Role.GENERATED_MIRROR else 1.0
        self.lines.append(Line(role, places, key, index, closed=rim, weight=weight))
        if letter and self.options.labels:
            spot = places[int(0.6 * len(places))] if rim else places[0]
            self.labels.append(Label(letter, LETTER_AT * spot, role, key, index))

    def axes(self, elements: Sequence[Element], centre: bool) -> None:
        marks: dict[str, list[tuple[Array, Key]]] = {}
        middle = ""
        for k, element in enumerate(element for element in elements if element.rotation > 1):
            symbol = _axis_symbol(element, centre)
            places, upper = self.projection.project([element.direction, -element.direction])
            both = upper.all()
            for place in places if both else places[upper]:
                marks.setdefault(symbol, []).append((place, ("axis", k)))
                middle = symbol if np.abs(place).max() < _SAME else middle
        if centre and middle not in ("-3", "-5"):
            marks["-1"] = [(np.zeros(3), ("axis", -1))]
        for symbol, found in marks.items():
            positions = np.array([place for place, _ in found])
            self.points.append(Points(Role.AXIS, positions, tuple(key for _, key in found), symbol))

    def images(self, directions: Array, parity: Array, seed_first: bool) -> None:
        shown = directions[:MOST_MARKS]
        places, upper = self.projection.project(shown)
        start = int(seed_first)
        # Lower marks first: where an upper point stands over a lower one its dot lies in the ring.
        for symbol, side in (("o", ~upper), ("+", upper)):
            for role, value in ((Role.IMAGE_EVEN, 0), (Role.IMAGE_ODD, 1)):
                rows = np.flatnonzero((np.asarray(parity)[: len(shown)] == value) & side)
                rows = rows[rows >= start]
                if len(rows):
                    keys = tuple(("image", k) for k in rows.tolist())
                    self.points.append(Points(role, places[rows], keys, symbol))
        if seed_first:
            self.points.append(Points(Role.SEED, places[:1], (("image", 0),), "+" if upper[0] else "o"))

    def poles(self, combination: Combination) -> None:
        places, upper = self.projection.project(combination.solid.normals)
        for form in range(len(combination.forms)):
            for symbol, side in (("o", ~upper), ("+", upper)):
                rows = np.flatnonzero((combination.owners == form) & side)
                if len(rows):
                    keys = tuple(("face", k) for k in rows.tolist())
                    self.points.append(Points(Role.FACE, places[rows], keys, symbol, form))
        if self.options.labels:
            self._label_poles(combination, places, upper)

    def listed(self, comparison: Comparison) -> None:
        directed = np.flatnonzero(np.linalg.norm(comparison.coordinates, axis=1) > _SAME)
        if not len(directed):
            return
        places, upper = self.projection.project(comparison.coordinates[directed])
        names = comparison.points.labels
        lonely = np.sum([one.partner < 0 for one in comparison.operations], axis=0)
        alone = (lonely > np.median(lonely))[directed]
        for symbol, side in (("o", ~upper), ("+", upper)):
            for role, those in ((Role.FACE, ~alone), (Role.FLAGGED, alone)):
                rows = np.flatnonzero(side & those)
                if len(rows):
                    keys = tuple(("listed", int(directed[k])) for k in rows)
                    self.points.append(Points(role, places[rows], keys, symbol))
        if not self.options.labels or len(directed) > MOST_LABELS:
            return
        for k, place in zip(directed.tolist(), places, strict=True):
            self.labels.append(Label(names[k], place + np.array([0.0, 0.06, 0.0]), Role.FACE, ("listed", k)))

    def _label_poles(self, combination: Combination, places: Array, upper: NDArray[np.bool_]) -> None:
        short = max(map(len, combination.labels)) <= LONGEST_LABEL
        few = short and int(upper.sum()) <= MOST_LABELS
        labelled: list[Array] = []
        done: set[int] = set()
        for k in np.argsort(~upper, kind="stable").tolist():
            form = int(combination.owners[k])
            taken = any(np.abs(places[k] - other).max() < _SAME for other in labelled)
            if taken or (not few and form in done):
                continue
            done.add(form)
            labelled.append(places[k])
            spot = places[k] + np.array([0.0, 0.06, 0.0])
            self.labels.append(Label(printed(combination.labels[k]), spot, Role.FACE, ("face", k), form))

    def setting(self, basis: Array) -> None:
        """Letters where the axes x and y of the setting leave the disc, if they lie in it."""
        for letter, axis in zip("xy", np.asarray(basis).T[:2], strict=True):
            if abs(self.projection.frame[2] @ axis) < _SAME * np.linalg.norm(axis):
                places, _ = self.projection.project(axis)
                self.labels.append(Label(letter, LETTER_AT * places[0], Role.GUIDE))

    def drawing(self, title: str, frame: str) -> Drawing:
        lines = self.lines
        if not self.rim_is_mirror:
            lines = [*lines, Line(Role.GUIDE, self.projection.rim(), ("net", -1), closed=True)]
        kind = "equal-angle (Wulff)" if self.projection.net == "wulff" else "equal-area (Schmidt)"
        return Drawing(
            title=title,
            lines=tuple(lines),
            points=tuple(self.points),
            labels=tuple(self.labels),
            flat=True,
            frame=f"{frame}; {kind} projection",
        )


def _axis_symbol(element: Element, centre: bool) -> str:
    """The mark of an axis: with a centre only odd ones are drawn as rotoinversions, even ones get the centre's mark."""
    if centre:
        return f"-{element.rotation}" if element.rotation % 2 else f"{element.rotation}"
    bar = element.rotoinversion
    return f"-{bar}" if bar > element.rotation else f"{element.rotation}"
