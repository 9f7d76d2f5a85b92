"""What follows from the document and the typed values: working group, solid, cell, planes.

Everything here is a pure function of texts and findings and is remembered, so that bench, table and pictures may
each ask for it. Errors are the crystal room's own and say what was typed.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mirrorlab.crystal.operations import CrystalError
from mirrorlab.desktop.crystal.crystal_state import CrystalState, crystal_state
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.printed import as_sentence

if TYPE_CHECKING:
    from mirrorlab.crystal.candidates import Candidates
    from mirrorlab.crystal.cell import Cell
    from mirrorlab.crystal.combinations import Combination
    from mirrorlab.crystal.indices import Indices
    from mirrorlab.crystal.lattices import Alignment
    from mirrorlab.crystal.point_lists import PointList
    from mirrorlab.crystal.pointgroups import NamedGroup
    from mirrorlab.mirrors import Finding

Array = NDArray[np.float64]

SAME_PLACE = 1e-6
"""Two directions closer than this are one: they are computed from the same numbers."""


class NoGroup(CrystalError):
    """There is no working group: none is typed, and the mirrors have none in space."""


@dataclass(frozen=True, eq=False)
class Working:
    """The group that is worked with.

    Attributes
    ----------
    group : NamedGroup
    rotation : ndarray, shape (3, 3), or None
        From the frame of the arrangement to the Cartesian frame of the group; None when the mirrors on the sheet
        are not mirrors of this group.
    own : bool
        It is the group of the mirrors itself.
    """

    group: NamedGroup
    rotation: Array | None
    own: bool


@lru_cache(maxsize=8)
def candidates(finding: Finding) -> Candidates | None:
    """The groups that the mirrors leave open, None where they have none in space."""
    from mirrorlab.crystal.candidates import candidates_of
    from mirrorlab.crystal.mirror_match import RankError

    try:
        return candidates_of(finding)
    except RankError:
        return None


@lru_cache(maxsize=8)
def alignment(finding: Finding) -> Alignment | None:
    """The mirrors brought to the standard setting of their group."""
    from mirrorlab.crystal.lattices import align
    from mirrorlab.crystal.mirror_match import RankError

    try:
        return align(finding)
    except RankError:
        return None


@lru_cache(maxsize=32)
def working(finding: Finding, symbol: str) -> Working:
    """The working group of a symbol; the group of the mirrors for "".

    Raises
    ------
    NoGroup
    SymbolError
        A CrystalError, for a symbol that cannot be read.
    """
    from mirrorlab.crystal.mirror_match import in_space, lay_on
    from mirrorlab.crystal.pointgroups import point_group

    aligned = alignment(finding)
    if not symbol:
        if aligned is None:
            msg = "These mirrors have no point group in space. Type the symbol of a group to work with."
            raise NoGroup(msg)
        return Working(aligned.group, aligned.rotation, True)
    group = point_group(symbol)
    if aligned is not None and group is aligned.group:
        return Working(group, aligned.rotation, True)
    if aligned is None or finding.group is None:
        return Working(group, None, False)
    return Working(group, lay_on(in_space(finding.group.simple), group), False)


def working_of(document: Document) -> Working:
    """The working group of the document. Raises as `working`."""
    return working(document.finding, crystal_state(document).group)


@lru_cache(maxsize=32)
def typed_cell(constants: tuple[str, ...], centring: str) -> Cell | None:
    """The typed cell, None where nothing is typed. Raises `CrystalError` naming the constant."""
    from mirrorlab.crystal.cell import cell_from_texts
    from mirrorlab.desktop.crystal.crystal_state import CONSTANTS

    if not any(text.strip() for text in constants):
        return None
    return cell_from_texts([text.replace(",", ".") for text in constants], CONSTANTS, centring)


def cell_of(state: CrystalState) -> Cell | None:
    """The cell of the state; None when there is none or it cannot be read."""
    try:
        return typed_cell(state.constants, state.centring)
    except CrystalError:
        return None


def cell_basis(group: NamedGroup, state: CrystalState) -> Array | None:
    """Axes of the typed cell where they have the symmetry of the group, else None."""
    from mirrorlab.crystal.lattices import check_cell

    cell = cell_of(state)
    if cell is None or not group.name.crystallographic:
        return None
    try:
        return check_cell(group, cell.basis)
    except CrystalError:
        return None


def readable_faces(group: NamedGroup, faces: tuple[str, ...]) -> list[tuple[int, Indices, float]]:
    """Number in the list, indices and distance of each face that can be read and repeats no form before it."""
    from mirrorlab.crystal.forms import form
    from mirrorlab.crystal.indices import parse_form

    found: list[tuple[int, Indices, float]] = []
    seen: set[tuple[float, ...]] = set()
    for place, text in enumerate(faces):
        try:
            indices, distance = parse_form(text, group.hexagonal, group.name.crystallographic)
            made = form(group, indices)
        except CrystalError:
            continue
        if tuple(made.faces[0].tolist()) in seen:
            continue
        seen |= {tuple(row) for row in made.faces.tolist()}
        found.append((place, indices, distance))
    return found


def solid_of(document: Document) -> Combination | None:
    """The forms put together, None while no face can be read."""
    state = crystal_state(document)
    group = working_of(document).group
    return _solid(group, state.faces, state if state.has_cell else None)


@lru_cache(maxsize=16)
def _solid(group: NamedGroup, faces: tuple[str, ...], state: CrystalState | None) -> Combination | None:
    from mirrorlab.crystal.combinations import combination

    rows = readable_faces(group, faces)
    if not rows:
        return None
    basis = None if state is None else cell_basis(group, state)
    return combination(group, [indices for _, indices, _ in rows], [far for _, _, far in rows], basis)


@lru_cache(maxsize=4)
def read_list(text: str, source: str) -> PointList | str:
    """The list, or why it cannot be read."""
    from mirrorlab.crystal.point_lists import parse_points

    try:
        return parse_points(text, source)
    except CrystalError as error:
        return as_sentence(str(error))


def simple_mirrors(group: NamedGroup) -> Array:
    """Normals of mirrors that wall one chamber of a group's mirror subgroup, in its Cartesian frame."""
    from mirrorlab.mirrors import Arrangement

    if not len(group.mirror_normals):
        return group.mirror_normals
    found = Arrangement.from_normals(group.mirror_normals).finding().group
    return group.mirror_normals if found is None else found.simple
