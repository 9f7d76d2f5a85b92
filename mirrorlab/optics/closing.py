"""All assemblies whose images close up: wedges, corners and tubes.

Wedges and the corners with two right angles come in endless series, listed up to a largest denominator. The
other corners are the ways in which three mirrors of a finite group of rank 3 bound a region: the Schwarz
triangles [1]_. Of tubes there are four with three sides, since the angles of a closing triangle are multiples
of 30° or of 45°, and the rectangle; other four-sided tubes are cut by images of their own mirrors.

References
----------
.. [1] H. S. M. Coxeter, *Regular Polytopes* (3rd ed. 1973), sections 5.4 and 6.7.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from itertools import combinations, product
from math import gcd

import numpy as np

from mirrorlab.angles import write_angle
from mirrorlab.mirrors import Arrangement
from mirrorlab.mirrors.families import parse_family
from mirrorlab.mirrors.symbols import point_group
from mirrorlab.mirrors.tiling_tubes import ROOM, TRIANGLES

RIGHT = Fraction(1, 2)

LARGEST_FRACTION = 60
"""Largest denominator that is listed: a 3° wedge shows 119 images, far more than mirrors keep bright."""


class ClosingError(ValueError):
    """A listing that can't be made."""


@dataclass(frozen=True, slots=True)
class Closing:
    """One way to set mirrors so that their images close up.

    Attributes
    ----------
    kind : str
        "wedge", "corner" or "tube".
    fractions : tuple of Fraction
        Angles over 180°, pair by pair: ab, ac, bc; six for a rectangular tube, 0 where mirrors are parallel.
    families : tuple of str
        The group, by families; empty for a tube.
    symbol : str
        Point group (Hermann–Mauguin), or the plane group of a tube.
    order : int or None
        Number of chambers all mirrors cut space into; None for a tube, whose images go on without end.
    chambers : int
        Chambers between the mirrors: 1 when the images fit together whatever the eye does.
    """

    kind: str
    fractions: tuple[Fraction, ...]
    families: tuple[str, ...]
    symbol: str
    order: int | None
    chambers: int

    @property
    def images(self) -> int | None:
        """Images seen at one time beside the object: copies of the region that fit around, less the object's own.

        None for a tube. With more than one chamber between the mirrors the last of them is cut short, and an
        eye or object off the middle shows one more or less.
        """
        if self.order is None:
            return None
        return -(-self.order // self.chambers) - 1

    @property
    def angles(self) -> tuple[str, ...]:
        """The angles as they are typed."""
        return tuple(spelled(fraction) for fraction in self.fractions)

    @property
    def name(self) -> str:
        """For a person: "corner 90° 60° 36°"."""
        return self.name_in("degrees")

    def name_in(self, style: str) -> str:
        """The name with its angles in a style of `mirrorlab.angles.write_angle`; parallel mirrors are left out."""
        shown = [write_angle(f, style) for f in self.fractions if f]
        if style == "degrees":  # a name is read, not typed back: four decimals are enough
            shown = [f"{float(f) * 180:.6g}°" for f in self.fractions if f]
        return f"{self.kind} {' '.join(shown)}"

    def arrangement(self) -> Arrangement:
        """The mirrors."""
        return Arrangement.from_angles(list(self.angles))


def spelled(fraction: Fraction) -> str:
    """An angle as it is typed: whole degrees, or a fraction of pi."""
    degrees = fraction * 180
    if degrees.denominator == 1:
        return str(degrees.numerator)
    return f"{'' if fraction.numerator == 1 else fraction.numerator}pi/{fraction.denominator}"


def closing_assemblies(largest: int = 12) -> tuple[Closing, ...]:
    """Every closing wedge, corner and tube, with denominators up to `largest` in the endless series.

    Raises
    ------
    ClosingError
        When `largest` is below 2 or above `LARGEST_FRACTION`.
    """
    if not 2 <= largest <= LARGEST_FRACTION:
        msg = f"largest denominator {largest}: give a whole number from 2 to {LARGEST_FRACTION}"
        raise ClosingError(msg)
    return (*_wedges(largest), *_prisms(largest), *_corners(), *_tubes())


def _wedges(largest: int) -> Iterator[Closing]:
    for m in range(2, largest + 1):
        for k in range(1, m):
            if gcd(k, m) == 1:
                family = f"I2({m})" if m > 2 else "A1xA1"
                families = parse_family(family)
                symbol = point_group(families)
                names = tuple(part.name for part in families)
                yield Closing(
                    "wedge", (Fraction(k, m),), names, symbol.hermann_mauguin if symbol else "", 2 * m, k
                )


def _prisms(largest: int) -> Iterator[Closing]:
    """A wedge with a third mirror square to both."""
    for wedge in _wedges(largest):
        families = parse_family("x".join(("A1", *wedge.families)))
        symbol = point_group(families)
        yield Closing(
            "corner",
            (RIGHT, RIGHT, *wedge.fractions),
            tuple(part.name for part in families),
            symbol.hermann_mauguin if symbol else "",
            2 * (wedge.order or 0),
            wedge.chambers,
        )


@cache
def _corners() -> tuple[Closing, ...]:
    """Regions between three mirrors of the groups A3, B3 and H3, those with two right angles left out."""
    found = {}
    for family in ("A3", "B3", "H3"):
        group = Arrangement.from_family(family).finding().group
        assert group is not None  # these families are finite
        for triple in combinations(group.mirrors, 3):
            if abs(np.linalg.det(np.array(triple))) < 1e-9:
                continue
            # Three planes make eight regions; opposite ones are alike, so one sign stays.
            for signs in product((1.0,), (1.0, -1.0), (1.0, -1.0)):
                normals = np.array(triple) * np.array(signs)[:, None]
                angles = sorted(
                    (_fraction(normals[i] @ normals[j]) for i, j in combinations(range(3), 2)), reverse=True
                )
                if angles.count(RIGHT) < 2:
                    found.setdefault(tuple(angles), None)
    return tuple(_corner(angles) for angles in sorted(found, reverse=True))


def _fraction(cosine: float) -> Fraction:
    """The angle between two mirrors of a group of rank 3: its denominator is 2, 3, 4 or 5."""
    angle = float(np.arccos(np.clip(-cosine, -1, 1))) / np.pi
    fraction = Fraction(angle).limit_denominator(5)
    assert abs(float(fraction) - angle) < 1e-9
    return fraction


def _corner(fractions: tuple[Fraction, ...]) -> Closing:
    finding = Arrangement.from_angles([spelled(f) for f in fractions]).finding()
    symbol = finding.point_group.hermann_mauguin if finding.point_group else ""
    return Closing(
        "corner", fractions, tuple(finding.families), symbol, finding.order, finding.chambers_between or 1
    )


@cache
def _tubes() -> tuple[Closing, ...]:
    found = []
    for fractions in (*TRIANGLES, ROOM):
        tube = Arrangement.from_angles([spelled(f) for f in fractions]).finding().tube
        assert tube is not None  # their angles add up to a flat sum
        found.append(Closing("tube", fractions, (), tube.plane_group or "", None, tube.chambers or 1))
    return tuple(found)
