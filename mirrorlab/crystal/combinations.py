"""Several forms on one crystal, each at its distance from the centre."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.crystal.forms import Form, face_normals, form
from mirrorlab.crystal.indices import Indices
from mirrorlab.crystal.operations import CrystalError
from mirrorlab.crystal.pointgroups import NamedGroup
from mirrorlab.crystal.solid import Solid, cut_solid

MOST_FORMS = 24
"""More forms than any described crystal shows on one solid; above it the picture can not be read."""

_SAME_ANGLE = 1e-3


class CombinationError(CrystalError):
    """Forms that can not be put together."""


@dataclass(frozen=True, slots=True)
class EdgeAngle:
    """The angle between the normals of two neighbouring faces, and how many edges have it."""

    first: str
    second: str
    degrees: float
    edges: int

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {"first": self.first, "second": self.second, "degrees": self.degrees, "edges": self.edges}


@dataclass(frozen=True, eq=False)
class Combination:
    """Forms of one group on one solid.

    Attributes
    ----------
    group : NamedGroup
    forms : tuple of Form
    distances : tuple of float
        Of each form's faces from the centre; only their ratios matter.
    basis : ndarray, shape (3, 3)
        Columns: the axes a, b, c in Cartesian coordinates.
    solid : Solid
        Its faces stand in the order of the forms, and within a form in the order of ``Form.faces``.
    """

    group: NamedGroup
    forms: tuple[Form, ...]
    distances: tuple[float, ...]
    basis: NDArray[np.float64]
    solid: Solid

    @cached_property
    def owners(self) -> NDArray[np.int64]:
        """For each face of the solid the number of its form."""
        return np.repeat(np.arange(len(self.forms)), [made.face_count for made in self.forms])

    @cached_property
    def labels(self) -> tuple[str, ...]:
        """Indices of each face of the solid."""
        return tuple(label for made in self.forms for label in made.face_labels)

    @property
    def closed(self) -> bool:
        """Whether the forms together bound a solid."""
        return self.solid.closed

    @cached_property
    def area_shares(self) -> tuple[float, ...]:
        """Each form's part of the surface; 0 for a form that the others cut away."""
        total = float(self.solid.areas.sum())
        sums = np.bincount(self.owners, self.solid.areas, minlength=len(self.forms))
        return tuple(float(value) / total for value in sums)

    @property
    def hidden(self) -> tuple[str, ...]:
        """Symbols of forms that do not show, because the others lie nearer to the centre."""
        shown = np.array([bool(corners) for corners in self.solid.faces])
        return tuple(made.symbol for i, made in enumerate(self.forms) if not shown[self.owners == i].any())

    @cached_property
    def edge_angles(self) -> tuple[EdgeAngle, ...]:
        """The different angles between neighbouring faces, as a goniometer shows them."""
        found: dict[tuple[str, str, int], list[float]] = {}
        for _, _, first, second in self.solid.edges:
            cosine = self.solid.normals[first] @ self.solid.normals[second]
            degrees = float(np.degrees(np.arccos(np.clip(cosine, -1, 1))))
            pair = sorted((int(self.owners[first]), int(self.owners[second])))
            key = (self.forms[pair[0]].symbol, self.forms[pair[1]].symbol, round(degrees / _SAME_ANGLE))
            found.setdefault(key, []).append(degrees)
        rows = [EdgeAngle(a, b, float(np.mean(angles)), len(angles)) for (a, b, _), angles in found.items()]
        return tuple(sorted(rows, key=lambda row: (row.first, row.second, row.degrees)))

    def to_dict(self) -> dict:
        """Plain JSON."""
        return {
            "group": self.group.setting,
            "axes": self.group.axes,
            "basis": self.basis.tolist(),
            "closed": self.closed,
            "volume": self.solid.volume,
            "forms": [
                made.to_dict() | {"distance": distance, "area_share": share}
                for made, distance, share in zip(self.forms, self.distances, self.area_shares, strict=True)
            ],
            "hidden": list(self.hidden),
            "edge_angles": [row.to_dict() for row in self.edge_angles],
            "vertices": self.solid.vertices.tolist(),
            "polygons": [list(corners) for corners in self.solid.faces],
        }


def combination(
    group: NamedGroup,
    faces: Sequence[str | ArrayLike],
    distances: Sequence[float] | None = None,
    basis: ArrayLike | None = None,
) -> Combination:
    """Put forms together.

    Parameters
    ----------
    faces : sequence
        One face of each form, as for `forms.form`.
    distances : sequence of float, optional
        From the centre; all 1 when not given.
    basis : array_like, shape (3, 3), optional
        Columns are the axes a, b, c; unit axes of the crystal system when not given.

    Raises
    ------
    CombinationError
        For no forms, more than 24, two that are the same, or distances that are not positive.
    MetricError
        When the axes do not have the symmetry of the group.
    IndicesError
    """
    frame = group.basis if basis is None else np.asarray(basis, float)
    group.cartesian_in(frame)
    offsets = [1.0] * len(faces) if distances is None else [float(value) for value in distances]
    if not 0 < len(faces) <= MOST_FORMS or len(offsets) != len(faces):
        msg = f"{len(faces)} forms with {len(offsets)} distances: give 1 to {MOST_FORMS} forms and a distance for each"
        raise CombinationError(msg)
    forms = tuple(form(group, face) for face in faces)
    _check_different(forms)
    for made, distance in zip(forms, offsets, strict=True):
        if not (np.isfinite(distance) and distance > 0):
            msg = f"distance {distance:g} of {made.symbol}: not a positive number"
            raise CombinationError(msg)
    normals = np.concatenate([face_normals(group, made.faces, frame) for made in forms])
    counts = [made.face_count for made in forms]
    return Combination(group, forms, tuple(offsets), frame, cut_solid(normals, np.repeat(offsets, counts)))


def _check_different(forms: tuple[Form, ...]) -> None:
    seen: dict[Indices, Form] = {}
    for made in forms:
        for face in made.faces.tolist():
            if tuple(face) in seen and seen[tuple(face)] is not made:
                msg = f"{made.symbol} and {seen[tuple(face)].symbol} are the same form of {made.group}"
                raise CombinationError(msg)
            seen[tuple(face)] = made
