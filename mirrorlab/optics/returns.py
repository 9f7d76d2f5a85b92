"""The corner reflector: how far from straight back a corner of three nearly square mirrors sends a beam.

References
----------
.. [1] P. R. Yoder, J. Opt. Soc. Am. 48 (1958) 496: return errors of a corner reflector (from memory).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import permutations

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.shapes import corner_edges, corner_normals

Array = NDArray[np.float64]

NEARLY_SQUARE = math.radians(5)
"""A corner whose angles are this near to 90° is read as a corner reflector."""


@dataclass(frozen=True, slots=True)
class ReturnError:
    """What a corner reflector does to a beam along its centre line, and at worst.

    Attributes
    ----------
    beams : tuple of (str, float)
        For each order in which the beam meets the mirrors, degrees between the beam that returns and straight
        back.
    centre_line : float
        The largest of these.
    worst : float
        The largest over all directions of the beam.
    """

    beams: tuple[tuple[str, float], ...]
    centre_line: float
    worst: float

    def to_dict(self) -> dict[str, object]:
        """Plain JSON."""
        return {
            "beams": [{"word": word, "degrees": degrees} for word, degrees in self.beams],
            "centre_line_degrees": self.centre_line,
            "worst_degrees": self.worst,
        }


def is_reflector(angles: Sequence[float]) -> bool:
    """Whether three angles in radians are nearly square."""
    return len(angles) == 3 and all(abs(angle - math.pi / 2) < NEARLY_SQUARE for angle in angles)


def return_error(angles: Sequence[float]) -> ReturnError:
    """Return the return error of a corner with dihedral angles ab, ac, bc in radians."""
    normals = corner_normals(angles)
    mirrors = np.eye(3) - 2 * np.einsum("ni,nj->nij", normals, normals)
    centre = np.linalg.solve(corner_edges(normals), np.ones(3))
    centre = -centre / np.linalg.norm(centre)
    beams, worst = [], 0.0
    for order in permutations(range(3)):
        product = mirrors[order[2]] @ mirrors[order[1]] @ mirrors[order[0]]
        back = product @ centre
        off = 2 * math.asin(min(1.0, float(np.linalg.norm(back + centre)) / 2))
        beams.append(("".join("abc"[k] for k in order), math.degrees(off)))
        # −product is a turn; a beam across its axis is off by the whole of it.
        chord = float(np.linalg.norm(product + np.eye(3))) / (2 * math.sqrt(2))
        worst = max(worst, 2 * math.asin(min(1.0, chord)))
    return ReturnError(tuple(beams), max(degrees for _, degrees in beams), math.degrees(worst))
