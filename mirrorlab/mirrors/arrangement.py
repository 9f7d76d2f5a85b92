"""The typed mirrors: their angles, their normals in a frame, and the way on to the finding and the orbit."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mirrorlab.angles import Angle, AngleError, AngleSettings, parse_angle
from mirrorlab.mirrors.closure import HALF, Fractions
from mirrorlab.mirrors.families import TOP_RANK, family_angles, parse_family
from mirrorlab.mirrors.finding import Finding
from mirrorlab.mirrors.normals import LETTERS, ArrangementError, normals_from_gram, settle, unit_rows
from mirrorlab.mirrors.orbit import MOST_IMAGES, Orbit, OrbitError, make_orbit
from mirrorlab.mirrors.walk import Progress

Array = NDArray[np.float64]

NORMAL_TOLERANCE = 1e-9
"""Radians within which the angle between two given normals is taken to be a closing fraction. Double
precision gives about 1e-15 from clean coordinates; ten typed decimals stay within it. It is so narrow because
fractions up to m = 360 lie close: at 1e-6 one pair of planes in forty would find one by chance."""

MOST_TOLERANCE = 1e-4
"""Widest tolerance for given normals, in radians: beyond it the planes are measured, not given."""

SPACE = 3
"""Coordinates are called x, y, z in up to so many dimensions, else x1, x2, …"""

DEFAULT_SETTINGS = AngleSettings()


@dataclass(frozen=True, eq=False)
class Arrangement:
    """The typed mirrors.

    Make one with `from_angles`, `from_family` or `from_normals`.

    Attributes
    ----------
    angles : tuple of Angle
        Pair by pair, row by row: 12, 13, …, 23, …
    normals : ndarray, shape (n, d), or None
        Unit inward normals: ``normals[i] @ normals[j] == -cos(angle ij)``, and the region between the mirrors is
        where every ``normals @ x`` is positive. For angles, a's normal is the x axis and b's lies in the xy
        plane, so the edge of a and b is the z axis; d is the rank of the Gram matrix. None when unbuildable.
    given_normals : bool
        True when the mirrors came as normals: they pass through one point, and the frame is the caller's.
    """

    angles: tuple[Angle, ...]
    size: int
    normals: Array | None
    given_normals: bool = False
    settings: AngleSettings = field(default=DEFAULT_SETTINGS)

    @classmethod
    def from_angles(
        cls,
        angles: Iterable[str | int | float | Fraction | Angle],
        settings: AngleSettings = DEFAULT_SETTINGS,
    ) -> Arrangement:
        """Mirrors from the angles between them.

        Parameters
        ----------
        angles : iterable
            One for each pair, row by row; none at all for one mirror. See `mirrorlab.angles.parse_angle`.

        Raises
        ------
        AngleError
            An angle that cannot be read.
        ArrangementError
            A number of angles that fits no number of mirrors up to 8.
        """
        if isinstance(angles, str):
            msg = f'"{angles}": one text; give a list of angles, such as ["90", "60", "45"]'
            raise ArrangementError(msg)
        given = list(angles)
        size = (1 + math.isqrt(1 + 8 * len(given))) // 2
        if size * (size - 1) // 2 != len(given) or size > TOP_RANK:
            fits = ", ".join(f"{n * (n - 1) // 2} for {n}" for n in range(2, TOP_RANK + 1))
            msg = f"{len(given)} angles fit no number of mirrors; n mirrors have n(n−1)/2 angles: {fits}"
            raise ArrangementError(msg)
        read = tuple(_read(angle, k, len(given), settings) for k, angle in enumerate(given, 1))
        return cls._from_read(read, size, settings)

    @classmethod
    def _from_read(cls, read: tuple[Angle, ...], size: int, settings: AngleSettings) -> Arrangement:
        from mirrorlab.mirrors.decide import buildable

        bare = cls(read, size, None, settings=settings)
        rank = buildable(bare.gram, bare.fractions)
        normals = None if rank is None else normals_from_gram(bare.gram, rank)
        return cls(read, size, normals, settings=settings)

    @classmethod
    def from_family(cls, name: str, settings: AngleSettings = DEFAULT_SETTINGS) -> Arrangement:
        """Mirrors that are the walls of a chamber of a named group, e.g. ``"E7"`` or ``"A1xI2(5)"``.

        Raises
        ------
        FamilyError
            Not the name of a finite reflection group of rank up to 8.
        """
        fractions = family_angles(parse_family(name))
        wide = max((f.denominator for f in fractions), default=1)
        if wide > settings.max_denominator:
            settings = AngleSettings(max_denominator=wide, sigmas=settings.sigmas)
        return cls.from_angles(fractions, settings)

    @classmethod
    def from_normals(
        cls,
        normals: ArrayLike,
        settings: AngleSettings = DEFAULT_SETTINGS,
        tolerance: float = NORMAL_TOLERANCE,
    ) -> Arrangement:
        """Mirrors through one point, from their normals.

        Parameters
        ----------
        normals : array_like, shape (n, d)
            One row a mirror, of any length but zero; 1 ≤ d ≤ 8, 1 ≤ n ≤ 41. They may be dependent.
        settings : AngleSettings
        tolerance : float
            Radians within which an angle is taken to be a closing fraction; 1e-6 suits six typed decimals. The
            normals are turned, by about as much, to have the angles that were read.

        Raises
        ------
        ArrangementError
            A wrong shape, a normal that is zero or not finite, the same mirror twice, angles that were read but do
            not belong together, or a tolerance that is not above 0 and at most `MOST_TOLERANCE`.
        """
        if not 0 < tolerance <= MOST_TOLERANCE:
            msg = f"tolerance {tolerance}: radians above 0, up to {MOST_TOLERANCE}"
            raise ArrangementError(msg)
        unit = unit_rows(normals)
        read = []
        for i in range(len(unit)):
            for j in range(i + 1, len(unit)):
                apart = 2 * math.atan2(np.linalg.norm(unit[i] - unit[j]), np.linalg.norm(unit[i] + unit[j]))
                if min(apart, math.pi - apart) < tolerance:
                    pair = f"{unit[i].tolist()} and {unit[j].tolist()}"
                    msg = f"normals {i + 1} and {j + 1} of {len(unit)}, along {pair}: the same mirror twice"
                    raise ArrangementError(msg)
                read.append(Angle.from_radians(math.pi - apart, tolerance, settings))
        given = cls(tuple(read), len(unit), unit, given_normals=True, settings=settings)
        settled = settle(unit, given.gram, given.fractions)
        return cls(tuple(read), len(unit), settled, given_normals=True, settings=settings)

    @property
    def letters(self) -> tuple[str, ...]:
        """Names of the mirrors: a, b, c …"""
        return tuple(LETTERS[: self.size])

    @property
    def pairs(self) -> tuple[tuple[int, int], ...]:
        """Index pairs in the order of the angles."""
        return tuple((i, j) for i in range(self.size) for j in range(i + 1, self.size))

    @property
    def pair_names(self) -> tuple[str, ...]:
        """The pairs by letters: ab, ac, …"""
        return tuple(LETTERS[i] + LETTERS[j] for i, j in self.pairs)

    @cached_property
    def gram(self) -> Array:
        """Gram matrix of the unit inward normals, shape (n, n): −cos of the angles."""
        result = np.eye(self.size)
        for angle, (i, j) in zip(self.angles, self.pairs, strict=True):
            result[i, j] = result[j, i] = 0.0 if angle.fraction == HALF else -math.cos(angle.radians)
        return result

    @cached_property
    def fractions(self) -> Fractions:
        """Closing fractions as an n by n list; 1 on the diagonal, None where there is none."""
        table: Fractions = [[Fraction(1)] * self.size for _ in range(self.size)]
        for angle, (i, j) in zip(self.angles, self.pairs, strict=True):
            table[i][j] = table[j][i] = angle.fraction
        return table

    @property
    def frame(self) -> str:
        """Which axes coordinates are in."""
        if self.given_normals:
            return "the axes of the given normals; origin where the mirrors meet"
        dimension = 0 if self.normals is None else self.normals.shape[1]
        first, plane = ("x1", "x1 x2") if dimension > SPACE else ("x", "xy")
        return (
            f"Cartesian, right-handed; {first} along the inward normal of a, the normal of b in the {plane} plane"
            + (", z along the edge of a and b" if dimension == SPACE else "")
            + "; origin where the mirrors meet"
        )

    def with_angle(self, pair: int, text: str | Fraction) -> Arrangement:
        """The same mirrors with one angle typed anew; `pair` counts the pairs from 0.

        Raises
        ------
        AngleError
            An angle that cannot be read.
        ArrangementError
            Mirrors given by normals, or a pair that is not there.
        """
        if not 0 <= pair < len(self.angles):
            msg = f"pair {pair}: {self.size} mirrors have pairs 0 to {len(self.angles) - 1}"
            raise ArrangementError(msg)
        if self.given_normals:
            msg = "these mirrors were given by normals; type angles for a new arrangement"
            raise ArrangementError(msg)
        angles = list(self.angles)
        angles[pair] = parse_angle(text, self.settings)
        return self._from_read(tuple(angles), self.size, self.settings)

    def finding(self) -> Finding:
        """What these mirrors do; made once and kept.

        Raises
        ------
        TooLarge
            Normals that make more than 100,000 mirrors through one line.
        """
        return self._finding

    @cached_property
    def _finding(self) -> Finding:
        from mirrorlab.mirrors.decide import decide

        return decide(self)

    def seed(
        self,
        heights: Sequence[float] | None = None,
        point: Sequence[float] | None = None,
        place: str | None = None,
    ) -> Array:
        """A seed point from exactly one of its heights above the typed mirrors, its coordinates, or a named place.

        Raises
        ------
        OrbitError
            More or fewer than one given, a wrong number of values, or mirrors whose reflections never close.
        """
        from mirrorlab.mirrors.place import seed_point

        return seed_point(self, heights, point, place)

    def orbit(
        self,
        heights: Sequence[float] | None = None,
        point: Sequence[float] | None = None,
        place: str | None = None,
        rotations: bool = False,
        limit: int = MOST_IMAGES,
        progress: Progress | None = None,
    ) -> Orbit:
        """The images of a seed (see `seed`), each once.

        Raises
        ------
        OrbitError
            The reflections make no finite group, or as for `seed`.
        TooLarge
            More than `limit` images.
        """
        group = self.finding().group
        if group is None:
            msg = f"no finite orbit: {self.finding().sentence}"
            raise OrbitError(msg)
        start = self.seed(heights, point, place)
        return make_orbit(group, start, self.frame, rotations, limit, progress)


def _read(given: str | int | float | Fraction | Angle, k: int, count: int, settings: AngleSettings) -> Angle:
    """Read the k-th of the angles; an error says which one it was."""
    if isinstance(given, Angle):
        return given
    try:
        return parse_angle(given, settings)
    except AngleError as error:
        if count == 1:
            raise
        msg = f"angle {k} of {count}, {error}"
        raise AngleError(msg) from None
