"""The one description of a picture: faces, lines, points and labels, each with a role.

A `Drawing` knows no screen. The window's OpenGL view, the painter, and the picture, mesh and vector
files are translators of it: what a thing *is* stands here, how it looks is theirs to say.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import StrEnum
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Key: TypeAlias = tuple[str, int]
"""What a part stands for, e.g. ``("mirror", 0)``, ``("chamber", 17)``, ``("image", 3)``, ``("face", 5)``."""


class Role(StrEnum):
    """What a part of a drawing is, so that a translator can choose tint, pattern and mark."""

    TYPED_MIRROR = "typed mirror"
    GENERATED_MIRROR = "generated mirror"
    CHAMBER_EVEN = "chamber of even parity"
    CHAMBER_ODD = "chamber of odd parity"
    REGION = "region between the typed mirrors"
    SEED = "seed"
    IMAGE_EVEN = "image of even parity"
    IMAGE_ODD = "image of odd parity"
    FLAGGED = "flagged"
    AXIS = "axis"
    FACE = "face of a form"
    PANEL = "mirror panel"
    GUIDE = "guide line"
    NET = "net underlay"


@dataclass(frozen=True, slots=True)
class Faces:
    """Triangles of one role.

    Attributes
    ----------
    vertices : ndarray, shape (V, 3)
    triangles : ndarray of int, shape (T, 3)
        Counter-clockwise seen from outside.
    keys : tuple of Key
        One a triangle (length T), or one for all (length 1).
    index : int
        Which mirror (0 is a) or which form, where a translator tells several apart; −1 where none.
    """

    role: Role
    vertices: NDArray[np.float64]
    triangles: NDArray[np.int64]
    keys: tuple[Key, ...]
    index: int = -1


@dataclass(frozen=True, slots=True)
class Line:
    """A polyline.

    Attributes
    ----------
    points : ndarray, shape (n, 3)
    index : int
        Picks the line pattern and tint of a typed mirror.
    weight : float
        Multiplies its width.
    apart : bool
        True when the points are the ends of separate pieces, two by two.
    plain : bool
        True for a typed mirror's line that is drawn without its pattern.
    """

    role: Role
    points: NDArray[np.float64]
    key: Key
    index: int = -1
    closed: bool = False
    weight: float = 1.0
    apart: bool = False
    plain: bool = False


@dataclass(frozen=True, slots=True)
class Points:
    """Points of one role; `keys` has one entry a point. `symbol` is a trade mark: "2", "3", "-4", "m" …"""

    role: Role
    positions: NDArray[np.float64]
    keys: tuple[Key, ...]
    symbol: str = ""
    index: int = -1


@dataclass(frozen=True, slots=True)
class Label:
    """A short text at a point."""

    text: str
    position: NDArray[np.float64]
    role: Role
    key: Key | None = None
    index: int = -1


@dataclass(frozen=True, slots=True)
class Drawing:
    """A picture without a screen.

    Attributes
    ----------
    flat : bool
        True when all lies in the plane z = 0, to be looked at straight on.
    frame : str
        Which axes the coordinates are in, for a person to read.
    unit : str
        "" for directions on the unit sphere, else "mm" or "cell".
    toward : ndarray, shape (3,), or None
        From which direction it is best looked at first; None leaves that to the view. Not for flat drawings.
    seed_on : str
        Where the seed can be dragged: "sphere" (about the origin, through the seed), "plane" (of constant z,
        through the seed) or "" where it cannot.
    """

    title: str
    faces: tuple[Faces, ...] = ()
    lines: tuple[Line, ...] = ()
    points: tuple[Points, ...] = ()
    labels: tuple[Label, ...] = ()
    flat: bool = False
    frame: str = ""
    unit: str = ""
    notes: tuple[str, ...] = field(default=())
    toward: NDArray[np.float64] | None = None
    seed_on: str = ""
