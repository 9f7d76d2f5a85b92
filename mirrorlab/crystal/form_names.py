"""The names of the 47 crystallographic forms, and of forms without a lattice.

A form is told by its number of faces, the full symmetry of its faces (the eigensymmetry) and whether it closes; the
few that share these differ in the shape of a face. Names as in International Tables for Crystallography, volume A,
table 10.1.2.3, and for forms without a lattice the terms of tables 10.1.4.1 to 10.1.4.3 (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

from mirrorlab.crystal.symbols import GroupName


@dataclass(frozen=True, slots=True)
class FormName:
    """A form's name, other names in use, and its eigensymmetry."""

    name: str
    others: tuple[str, ...]
    eigensymmetry: str


PEDION = FormName("pedion", ("monohedron",), "∞m")
PINACOID = FormName("pinacoid", ("parallelohedron",), "∞/mm")
DOME = FormName("dome", ("dihedron",), "mm2")
SPHENOID = FormName("sphenoid", ("dihedron",), "mm2")

_PRISM, _PYRAMID, _CLOSED = "prism", "pyramid", "closed"
_SHAPED = {
    # faces, eigensymmetry, corners of a face, most faces at a corner of the solid
    (12, "-43m", 4, 4): ("tetragon-tritetrahedron", "deltohedron", "deltoid-dodecahedron"),
    (12, "-43m", 3, 6): ("trigon-tritetrahedron", "tristetrahedron"),
    (24, "m-3m", 3, 8): ("trigon-trioctahedron", "trisoctahedron"),
    (24, "m-3m", 4, 4): ("tetragon-trioctahedron", "trapezohedron", "deltoid-icositetrahedron"),
    (24, "m-3m", 3, 6): ("tetrahexahedron", "tetrakishexahedron"),
    (60, "m-3-5", 3, 10): ("trisicosahedron",),
    (60, "m-3-5", 4, 5): ("deltoid-hexecontahedron",),
    (60, "m-3-5", 3, 6): ("pentakisdodecahedron",),
}
_UNIQUE = {
    (4, "mm2", _PYRAMID): ("rhombic pyramid",),
    (4, "222", _CLOSED): ("rhombic disphenoid", "rhombic tetrahedron"),
    (4, "mmm", _PRISM): ("rhombic prism",),
    (8, "mmm", _CLOSED): ("rhombic dipyramid",),
    (4, "4mm", _PYRAMID): ("tetragonal pyramid",),
    (4, "-42m", _CLOSED): ("tetragonal disphenoid", "tetragonal tetrahedron"),
    (4, "4/mmm", _PRISM): ("tetragonal prism",),
    (8, "422", _CLOSED): ("tetragonal trapezohedron",),
    (8, "4mm", _PYRAMID): ("ditetragonal pyramid",),
    (8, "-42m", _CLOSED): ("tetragonal scalenohedron",),
    (8, "4/mmm", _CLOSED): ("tetragonal dipyramid",),
    (8, "4/mmm", _PRISM): ("ditetragonal prism",),
    (16, "4/mmm", _CLOSED): ("ditetragonal dipyramid",),
    (3, "3m", _PYRAMID): ("trigonal pyramid",),
    (3, "-6m2", _PRISM): ("trigonal prism",),
    (6, "32", _CLOSED): ("trigonal trapezohedron",),
    (6, "3m", _PYRAMID): ("ditrigonal pyramid",),
    (6, "-3m", _CLOSED): ("rhombohedron",),
    (6, "-6m2", _PRISM): ("ditrigonal prism",),
    (6, "6mm", _PYRAMID): ("hexagonal pyramid",),
    (6, "-6m2", _CLOSED): ("trigonal dipyramid",),
    (6, "6/mmm", _PRISM): ("hexagonal prism",),
    (12, "-3m", _CLOSED): ("ditrigonal scalenohedron", "hexagonal scalenohedron"),
    (12, "622", _CLOSED): ("hexagonal trapezohedron",),
    (12, "6mm", _PYRAMID): ("dihexagonal pyramid",),
    (12, "-6m2", _CLOSED): ("ditrigonal dipyramid",),
    (12, "6/mmm", _PRISM): ("dihexagonal prism",),
    (12, "6/mmm", _CLOSED): ("hexagonal dipyramid",),
    (24, "6/mmm", _CLOSED): ("dihexagonal dipyramid",),
    (4, "-43m", _CLOSED): ("tetrahedron",),
    (6, "m-3m", _CLOSED): ("cube", "hexahedron"),
    (8, "m-3m", _CLOSED): ("octahedron",),
    (12, "23", _CLOSED): ("pentagon-tritetrahedron", "tetartoid", "tetrahedral pentagon-dodecahedron"),
    (12, "m-3", _CLOSED): ("pentagon-dodecahedron", "dihexahedron", "pyritohedron"),
    (12, "m-3m", _CLOSED): ("rhomb-dodecahedron",),
    (24, "m-3", _CLOSED): ("didodecahedron", "diploid", "dyakisdodecahedron"),
    (24, "432", _CLOSED): ("pentagon-trioctahedron", "gyroid"),
    (24, "-43m", _CLOSED): ("hexatetrahedron", "hexakistetrahedron"),
    (48, "m-3m", _CLOSED): ("hexaoctahedron", "hexakisoctahedron"),
    (12, "m-3-5", _CLOSED): ("regular pentagon-dodecahedron",),
    (20, "m-3-5", _CLOSED): ("regular icosahedron",),
    (30, "m-3-5", _CLOSED): ("rhomb-triacontahedron",),
    (60, "235", _CLOSED): ("pentagon-hexecontahedron",),
    (120, "m-3-5", _CLOSED): ("hecatonicosahedron", "hexakisicosahedron"),
}
_GREEK = {
    2: "rhombic", 3: "trigonal", 4: "tetragonal", 5: "pentagonal", 6: "hexagonal", 7: "heptagonal", 8: "octagonal",
    9: "enneagonal", 10: "decagonal", 11: "hendecagonal", 12: "dodecagonal",
}  # fmt: skip


def needs_shape(faces: int, eigensymmetry: GroupName) -> bool:
    """Whether the number of faces and the eigensymmetry leave several forms."""
    return any(key[:2] == (faces, eigensymmetry.hermann_mauguin) for key in _SHAPED)


def name_form(
    faces: int, eigensymmetry: GroupName, rank: int, closed: bool, shape: tuple[int, int] | None = None
) -> FormName:
    """The name of a form with three or more faces.

    Parameters
    ----------
    faces : int
    eigensymmetry : GroupName
        Full symmetry of the set of face normals.
    rank : int
        Dimension they span: 2 for a prism.
    shape : tuple of int, optional
        Corners of a face and most faces at a corner, where `needs_shape` says so.
    """
    symbol = eigensymmetry.hermann_mauguin
    if shape is not None and needs_shape(faces, eigensymmetry):
        names = _SHAPED[(faces, symbol, *shape)]
    else:
        kind = _PRISM if rank == 2 else _CLOSED if closed else _PYRAMID
        names = _UNIQUE.get((faces, symbol, kind)) or (_without_lattice(faces, eigensymmetry, kind),)
    return FormName(names[0], tuple(names[1:]), symbol)


def _without_lattice(faces: int, symmetry: GroupName, kind: str) -> str:
    return _general_name(faces, symmetry, kind).removeprefix("-")


def _general_name(faces: int, symmetry: GroupName, kind: str) -> str:
    n = symmetry.n
    base = _GREEK.get(n, f"-{n}-gonal")
    if kind == _PYRAMID:
        return f"{base} pyramid" if faces == n else f"di{base} pyramid"
    if symmetry.family == "Dh":
        if kind == _PRISM:
            return f"{base} prism" if faces == n else f"di{base} prism"
        return f"{base} dipyramid" if faces == 2 * n else f"di{base} dipyramid"
    if symmetry.family == "D":
        return f"{base} trapezohedron"
    # A rhombohedron is the trigonal one of these, a tetragonal disphenoid the one with n = 2.
    return f"{base} streptohedron" if faces == 2 * n else f"di{base} scalenohedron"
