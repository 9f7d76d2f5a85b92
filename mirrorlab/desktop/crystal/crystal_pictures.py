"""The crystallographer's pictures: the stereogram and the solid of the forms, keyed as the picture in space is."""

from __future__ import annotations

from dataclasses import replace
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.operations import CrystalError
from mirrorlab.desktop.bench import NoPicture
from mirrorlab.desktop.crystal.crystal_state import CrystalState, crystal_state
from mirrorlab.desktop.crystal.libraries import LOADING, loaded
from mirrorlab.desktop.crystal.workings import SAME_PLACE, Working, alignment, solid_of, working_of
from mirrorlab.desktop.document import Document
from mirrorlab.drawing.model import Drawing, Key, Label, Line, Points, Role

if TYPE_CHECKING:
    from mirrorlab.crystal.comparison import Comparison
    from mirrorlab.drawing.stereogram import StereogramOptions

Array = NDArray[np.float64]

SETTING_AXIS = "setting axis"
"""Kind of the keys of the axes x, y, z in the solid's picture, apart from those of symmetry axes."""


LETTER_PART = 0.6
"""How far along the rim the letter of a mirror stands that lies in the plane of the picture."""


SEED: Key = ("image", 0)


def stereogram(document: Document, comparison: Comparison | None = None) -> Drawing:
    """Mirrors and axes of the working group with images, poles or a list of points.

    Parameters
    ----------
    comparison : Comparison, optional
        The list held against a group, when it has been.

    Raises
    ------
    NoPicture
        There is none, or not yet.
    """
    try:
        work = working_of(document)
    except CrystalError as error:
        raise NoPicture(str(error)) from None
    state = crystal_state(document)
    if state.marks == "list":
        return _listed(document, work, state, comparison)
    if state.marks == "poles":
        if not loaded(document):
            raise NoPicture(LOADING)
        return _poles(document, work, state)
    if work.own and document.finding.rank <= 3:
        return _of_the_mirrors(document, state)
    return _of_the_group(document, work, state)


def solid(document: Document) -> Drawing:
    """The solid of the forms. Raises `NoPicture` where there is none."""
    if not loaded(document):
        raise NoPicture(LOADING)
    try:
        made = solid_of(document)
    except CrystalError as error:
        raise NoPicture(str(error)) from None
    if made is None:
        msg = "No form yet. Type a face on the crystal bench under Forms, such as 1,1,0."
        raise NoPicture(msg)
    from mirrorlab.drawing.form import form_drawing

    drawing = form_drawing(made)
    lines = tuple(replace(line, key=_setting_key(line.key)) for line in drawing.lines)
    labels = tuple(replace(one, key=_setting_key(one.key)) for one in drawing.labels)
    return replace(drawing, lines=lines, labels=labels)


def _setting_key(key: Key | None) -> Key | None:
    return (SETTING_AXIS, key[1]) if key is not None and key[0] == "axis" else key


def _options(state: CrystalState) -> StereogramOptions:
    from mirrorlab.drawing.projection import Projection
    from mirrorlab.drawing.stereogram import StereogramOptions

    return StereogramOptions(Projection(state.net), underlay=state.underlay)


def _of_the_mirrors(document: Document, state: CrystalState) -> Drawing:
    from mirrorlab.drawing.stereogram import arrangement_stereogram

    aligned = alignment(document.finding)
    return arrangement_stereogram(
        document.arrangement, document.finding, document.orbit, aligned, _options(state)
    )


def _poles(document: Document, work: Working, state: CrystalState) -> Drawing:
    from mirrorlab.drawing.stereogram import group_stereogram

    try:
        made = solid_of(document)
    except CrystalError as error:
        raise NoPicture(str(error)) from None
    if made is None:
        msg = "No poles yet. Type a face on the crystal bench under Forms, such as 1,1,0."
        raise NoPicture(msg)
    return _linked(document, work, group_stereogram(work.group, made, None, _options(state)))


def _listed(document: Document, work: Working, state: CrystalState, comparison: Comparison | None) -> Drawing:
    from mirrorlab.drawing.stereogram import list_stereogram

    if not state.list_text:
        msg = "No list yet. Open a list of points or poles under Compare, or drop it on the window."
        raise NoPicture(msg)
    if comparison is None or comparison.group is not work.group:
        msg = "No comparison of the list with the working group yet; see Compare."
        raise NoPicture(msg)
    return _linked(document, work, list_stereogram(comparison, _options(state)))


def _of_the_group(document: Document, work: Working, state: CrystalState) -> Drawing:
    from mirrorlab.drawing.stereogram import group_stereogram

    point = seed_in_setting(document, work)
    if point is not None and not np.linalg.norm(point) > 0:
        point = None
    drawing = group_stereogram(work.group, None, point, _options(state))
    return _linked(document, work, drawing)


def seed_in_setting(document: Document, work: Working) -> Array | None:
    """The seed in the Cartesian frame of the working group; None where the mirrors do not lie in it."""
    from mirrorlab.crystal.mirror_match import in_space

    if document.orbit is None or work.rotation is None:
        return None
    return np.asarray(work.rotation @ in_space(document.orbit.seed)[0])


def _linked(document: Document, work: Working, drawing: Drawing) -> Drawing:
    """The same picture with the keys of the picture in space, so that both share what is chosen."""
    from mirrorlab.drawing.stereogram import LETTER_AT

    mirrors, images = mirror_keys(document, work), image_keys(document, work)

    def key_of(key: Key) -> Key:
        if key[0] == "generated":
            return mirrors[key[1]]
        return images.get(key[1], ("equivalent", key[1])) if key[0] == "image" else key

    lines: list[Line] = []
    labels = list(drawing.labels)
    for line in drawing.lines:
        key = key_of(line.key)
        if key[0] != "mirror":
            lines.append(replace(line, key=key))
            continue
        role = line.role if line.role is Role.FLAGGED else Role.TYPED_MIRROR
        lines.append(replace(line, key=key, role=role, index=key[1], weight=1.0))
        spot = line.points[int(LETTER_PART * len(line.points)) if line.closed else 0]
        letter = document.arrangement.letters[key[1]]
        labels.append(Label(letter, LETTER_AT * spot, Role.TYPED_MIRROR, key, key[1]))
    points: list[Points] = []
    for one in drawing.points:
        keys = tuple(key_of(k) for k in one.keys)
        points.append(replace(one, keys=keys))
        if SEED in keys and not any(other.role is Role.SEED for other in points):
            place = one.positions[keys.index(SEED)][None]
            points.append(Points(Role.SEED, place, (SEED,), one.symbol))
    return replace(drawing, lines=tuple(lines), points=tuple(points), labels=tuple(labels))


def mirror_keys(document: Document, work: Working) -> tuple[Key, ...]:
    """For each mirror of the working group its key in the picture in space, or one of its own."""
    from mirrorlab.crystal.mirror_match import in_space

    found: list[Key] = []
    group, normals = document.finding.group, document.arrangement.normals
    for k, normal in enumerate(work.group.mirror_normals):
        key: Key = ("group mirror", k)
        if work.rotation is not None and group is not None and normals is not None:
            here = work.rotation.T @ normal
            for kind, rows in (("generated", group.mirrors), ("mirror", normals)):
                near = np.abs(in_space(rows) @ here) > 1 - SAME_PLACE
                key = (kind, int(np.argmax(near))) if near.any() else key
        found.append(key)
    return tuple(found)


@lru_cache(maxsize=4)
def _image_keys(points: bytes, count: int, images: bytes) -> dict[int, Key]:
    rows = np.frombuffer(points).reshape(count, 3)
    moved = np.frombuffer(images).reshape(-1, 3)
    size = max(1e-300, float(np.abs(rows).max()))
    found: dict[int, Key] = {}
    for k, place in enumerate(moved):
        apart = np.abs(rows - place).max(axis=1)
        nearest = int(np.argmin(apart))
        if apart[nearest] < SAME_PLACE * size:
            found[k] = ("image", nearest)
    return found


def image_keys(document: Document, work: Working) -> dict[int, Key]:
    """For each operation of the working group the image of the seed that it leads to, where the mirrors lead there."""
    from mirrorlab.crystal.mirror_match import in_space

    seed = seed_in_setting(document, work)
    if seed is None or document.orbit is None or work.rotation is None:
        return {}
    rows = np.ascontiguousarray(in_space(document.orbit.points))
    moved = np.ascontiguousarray((work.group.cartesian @ seed) @ work.rotation)
    return _image_keys(rows.tobytes(), len(rows), moved.tobytes())


def axis_directions(document: Document, work: Working) -> Array:
    """Directions of the axes in the stereogram, in the order of their keys, in the frame of the working group."""
    from mirrorlab.crystal.identify import elements_of
    from mirrorlab.crystal.mirror_match import in_space

    matrices = work.group.cartesian
    group = document.finding.group
    if (
        work.own
        and group is not None
        and work.rotation is not None
        and crystal_state(document).marks == "images"
    ):
        small, _ = group.elements()
        flat = np.broadcast_to(np.eye(3), (len(small), 3, 3)).copy()
        flat[:, : small.shape[1], : small.shape[1]] = small
        matrices = work.rotation @ flat @ work.rotation.T
    rows = [element.direction for element in elements_of(matrices) if element.rotation > 1]
    return in_space(rows) if rows else np.zeros((0, 3))
