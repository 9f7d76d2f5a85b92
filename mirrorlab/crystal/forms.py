"""Face forms: all faces that a point group makes of one, with the form's name.

The name depends on the group and the indices only, not on the lengths of the axes: it is found with axes of
general lengths (those the group leaves free are set to values that no two faces can share by chance).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from itertools import product
from math import gcd

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.closure import matrix_keys
from mirrorlab.crystal.form_names import DOME, PEDION, PINACOID, SPHENOID, FormName, name_form, needs_shape
from mirrorlab.crystal.identify import classify
from mirrorlab.crystal.indices import Indices, check_indices, parse_indices, write_face
from mirrorlab.crystal.pointgroups import NamedGroup
from mirrorlab.crystal.site_symmetry import oriented_symbol
from mirrorlab.crystal.solid import bounds, cut_solid
from mirrorlab.crystal.symbols import GroupName

_GENERAL_METRIC = np.array([[1.0, 0.1592, 0.0933], [0.1592, 1.7725, -0.2207], [0.0933, -0.2207, 2.4048]])
SAME_COSINE = 1e-9
"""Cosines, and parts of unit normals, that differ by less are equal: rounding is about 1e-15, and those of a form on
cubic axes differ by more than 1e-7 up to the largest index (a whole number over the square of a length)."""

SMALL_INDEX = 3
"""Faces up to this index, none negative, show every kind of form that a group has: in every group one of the faces
with the same angles to its axes and mirrors has such indices."""


@dataclass(frozen=True, eq=False)
class Form:
    """A face form.

    Attributes
    ----------
    group : str
        Symbol of the group with its setting.
    indices : tuple
        The face asked for, without a common divisor.
    symbol : str
        ``{110}``, on hexagonal axes with four indices.
    name : str
        As in International Tables, e.g. "rhomb-dodecahedron".
    other_names : tuple of str
    faces : ndarray, shape (N, 3)
        Indices of all faces, the one asked for first.
    face_symmetry : str
        Oriented symbol of what leaves the face in place.
    eigensymmetry : str
        Full symmetry of the faces as a set.
    kind : str
        "general"; "special" when an operation leaves the face in place; "limiting" when the faces have more
        symmetry than those of a freely tilted face with the same face symmetry.
    closed : bool
        Whether the faces alone bound a solid.
    """

    group: str
    indices: Indices
    symbol: str
    name: str
    other_names: tuple[str, ...]
    faces: NDArray
    face_symmetry: str
    eigensymmetry: str
    kind: str
    closed: bool
    hexagonal: bool

    @property
    def face_count(self) -> int:
        """Number of faces."""
        return len(self.faces)

    @property
    def face_labels(self) -> tuple[str, ...]:
        """``(110)`` for each face."""
        return tuple(write_face(tuple(face.tolist()), self.hexagonal) for face in self.faces)

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "group": self.group,
            "symbol": self.symbol,
            "indices": list(self.indices),
            "name": self.name,
            "other_names": list(self.other_names),
            "kind": self.kind,
            "face_count": self.face_count,
            "closed": self.closed,
            "face_symmetry": self.face_symmetry,
            "eigensymmetry": self.eigensymmetry,
            "faces": self.faces.tolist(),
            "face_labels": list(self.face_labels),
        }


def form(group: NamedGroup, indices: str | ArrayLike) -> Form:
    """The form that a group makes of a face.

    Parameters
    ----------
    group : NamedGroup
    indices : str or array_like
        Miller indices (three, or four on hexagonal axes); for a group without a lattice the direction of the
        face normal in the Cartesian axes of the group.

    Raises
    ------
    IndicesError

    Examples
    --------
    >>> from mirrorlab.crystal import point_group
    >>> form(point_group("m-3m"), "1,1,0").name
    'rhomb-dodecahedron'
    """
    whole = group.name.crystallographic
    if isinstance(indices, str):
        face = parse_indices(indices, group.hexagonal, whole)
    else:
        face = check_indices(np.asarray(indices, float).tolist(), group.hexagonal, whole)
    return _form(group, face)


@lru_cache(maxsize=4096)
def _form(group: NamedGroup, face: Indices) -> Form:
    faces, stabiliser = _faces_of(group, face)
    name, eigensymmetry = _named(group, faces)
    normals = face_normals(group, faces)
    return Form(
        group=group.setting,
        indices=face,
        symbol=write_face(face, group.hexagonal, "{}"),
        name=name.name,
        other_names=name.others,
        faces=faces,
        face_symmetry=oriented_symbol(group, stabiliser),
        eigensymmetry=name.eigensymmetry,
        kind=_kind(group, stabiliser, eigensymmetry, len(faces)),
        closed=bounds(normals),
        hexagonal=group.hexagonal,
    )


def _faces_of(group: NamedGroup, face: Indices) -> tuple[NDArray, tuple[int, ...]]:
    """All faces, the given one first, and the operations that leave it in place."""
    inverse = np.linalg.inv(group.matrices.astype(float))
    images = np.asarray(face, float) @ inverse  # indices are a row: they change with the inverse
    keys = matrix_keys(images)
    first = dict(zip(reversed(keys), reversed(range(len(keys))), strict=True))
    faces = images[sorted(first.values())]
    stabiliser = tuple(index for index, key in enumerate(keys) if key == keys[0])
    if group.name.crystallographic:
        return np.rint(faces).astype(np.int64), stabiliser
    return faces + 0.0, stabiliser


@lru_cache(maxsize=256)
def general_basis(group: NamedGroup) -> NDArray[np.float64]:
    """Axes (columns) with the symmetry of the group and otherwise of general lengths and angles."""
    matrices = group.matrices.astype(float)
    metric = (np.swapaxes(matrices, 1, 2) @ _GENERAL_METRIC @ matrices).mean(axis=0)
    return np.linalg.cholesky(metric).T


def face_normals(group: NamedGroup, faces: ArrayLike, basis: ArrayLike | None = None) -> NDArray[np.float64]:
    """Unit normals of faces, shape (N, 3), in Cartesian coordinates of the axes `basis` (general ones if None)."""
    frame = general_basis(group) if basis is None else np.asarray(basis, float)
    normals = np.asarray(faces, float) @ np.linalg.inv(frame)
    return normals / np.linalg.norm(normals, axis=1)[:, None]


def _named(group: NamedGroup, faces: NDArray) -> tuple[FormName, GroupName | None]:
    normals = face_normals(group, faces)
    if len(faces) == 1:
        return PEDION, None
    if len(faces) == 2:
        if np.allclose(normals[0], -normals[1]):
            return PINACOID, None
        by_mirror = any(
            np.allclose(np.cross(mirror, normals[1] - normals[0]), 0, atol=SAME_COSINE)
            for mirror in _mirror_normals(group)
        )
        return (DOME if by_mirror else SPHENOID), GroupName("Cv", 2)
    symmetry = eigensymmetry(normals)
    shape = None
    if needs_shape(len(faces), symmetry):
        body = cut_solid(normals, 1.0)
        shape = (len(body.faces[0]), body.faces_at_corner)
    rank = int(np.linalg.matrix_rank(normals, tol=SAME_COSINE))
    return name_form(len(faces), symmetry, rank, bounds(normals), shape), symmetry


def _mirror_normals(group: NamedGroup) -> NDArray[np.float64]:
    if not group.mirrors:
        return np.zeros((0, 3))
    return face_normals(group, [mirror.plane for mirror in group.mirrors])


def eigensymmetry(normals: ArrayLike) -> GroupName:
    """Type of the group of all operations that map a set of unit vectors (two or more, not all parallel) to itself.

    Notes
    -----
    An operation is fixed, up to the reflection in their plane, by where it takes two of the vectors; so all images
    of one pair of neighbours are tried.
    """
    rows = np.asarray(normals, float)
    cosines = rows @ rows.T
    second = int(np.argmax(np.where(np.abs(cosines[0]) < 1 - SAME_COSINE, cosines[0], -2)))
    frame = _frames(rows[:1], rows[second : second + 1])[0]
    starts, ends = np.nonzero(np.abs(cosines - cosines[0, second]) < SAME_COSINE)
    targets = np.swapaxes(_frames(rows[starts], rows[ends]), 1, 2)
    sides = [np.diag([1.0, 1.0, side]) @ frame for side in (1.0, -1.0)]
    turns = np.concatenate([targets @ side for side in sides])
    wanted = set(matrix_keys(rows))
    images = rows @ np.swapaxes(turns, 1, 2)
    keys = matrix_keys(images.reshape(-1, 3))
    count = len(rows)
    kept = [k for k in range(len(turns)) if wanted.issuperset(keys[k * count : (k + 1) * count])]
    distinct = dict(zip(matrix_keys(turns[kept]), kept, strict=True))
    return classify(turns[list(distinct.values())])


def _frames(first: NDArray, second: NDArray) -> NDArray[np.float64]:
    across = np.cross(first, second)
    across = across / np.linalg.norm(across, axis=1)[:, None]
    return np.stack([first, np.cross(across, first), across], axis=1)


def _kind(group: NamedGroup, stabiliser: tuple[int, ...], symmetry: GroupName | None, count: int) -> str:
    plain = "special" if len(stabiliser) > 1 else "general"
    if symmetry is None and plain == "special":
        return plain
    same = _of_free_face(group, stabiliser) == (symmetry, count)
    return plain if same else "limiting"


@lru_cache(maxsize=4096)
def _of_free_face(group: NamedGroup, stabiliser: tuple[int, ...]) -> tuple[GroupName | None, int]:
    """Eigensymmetry and number of faces for a face tilted freely, as far as what leaves it in place allows."""
    average = np.linalg.inv(group.matrices[list(stabiliser)].astype(float)).sum(axis=0)
    free = np.array([97.0, 61.0, 37.0]) @ average
    if group.name.crystallographic:
        free = np.rint(free)
    faces, _ = _faces_of(group, tuple(free.tolist()))
    return _named(group, faces)[1], len(faces)


@lru_cache(maxsize=64)
def forms_of(group: NamedGroup) -> tuple[Form, ...]:
    """One form of each kind the group has: each name with each face symmetry, special ones first.

    Raises
    ------
    IndicesError
        For a group without a lattice, whose faces have no indices to run through.
    """
    if not group.name.crystallographic:
        from mirrorlab.crystal.indices import IndicesError

        msg = f"{group.setting} has no lattice, so its faces have no whole-number indices; ask for a face by its normal"
        raise IndicesError(msg)
    found: dict[tuple[str, str, str], Form] = {}
    seen: set[tuple[int, ...]] = set()
    for face in sorted(product(range(SMALL_INDEX + 1), repeat=3), key=_plainness):
        if face in seen or gcd(*face) != 1:
            continue
        made = _form(group, face)
        seen |= {tuple(row) for row in made.faces.tolist()}
        found.setdefault((made.name, made.face_symmetry, made.kind), made)
    rank = {"special": 0, "limiting": 1, "general": 2}
    return tuple(
        sorted(found.values(), key=lambda made: (rank[made.kind], made.face_count, _plainness(made.indices)))
    )


def _plainness(face: Indices) -> tuple:
    negative = sum(value < 0 for value in face)
    return sum(value * value for value in face), negative, tuple(-value for value in face)
