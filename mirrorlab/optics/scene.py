"""What is to be seen in an assembly: the object and its picture, the lights around, the lines of the joints."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.assembly import Assembly, ObjectPlace
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.pattern import drawn
from mirrorlab.optics.texture import Texture, make_texture, tint

Array = NDArray[np.float64]

JOINT_LINE = 0.3
"""Millimetres on each panel along a joint that reflect nothing: a cleanly cut edge (our estimate)."""

DEFAULT_PATTERNS = {"card": "lantern glass", "ball": "lantern globe"}


@dataclass(frozen=True, slots=True)
class Lights:
    """Tints of what is no object, as sRGB ``#rrggbb``.

    Attributes
    ----------
    below, above : str
        The room seen through an open side, looking down and up.
    backlight : str
        The plate behind a picture with clear parts.
    dark : str
        A blackened cover.
    floor : str
        What a wedge stands on.
    surround : str
        Around the opening, for an eye outside.
    """

    below: str = "#6B5340"
    above: str = "#26355A"
    backlight: str = "#FFF3DC"
    dark: str = "#0D0D10"
    floor: str = "#B79B74"
    surround: str = "#121318"

    def rows(self) -> Array:
        """Linear light, shape (6, 3), in the order of the kernel."""
        names = (self.below, self.above, self.backlight, self.dark, self.floor, self.surround)
        return np.array([tint(name) for name in names])


@dataclass(frozen=True, slots=True, eq=False)
class Scene:
    """An object's picture and what is around it.

    Attributes
    ----------
    texture : Texture
        Flat on a card, wrapped around a ball.
    picture : str
        Name of the pattern, or "" for the user's own.
    lights : Lights
    joint : float
        Millimetres beside a joint that reflect nothing.
    upwards : ndarray, shape (3,)
        Where the room is `Lights.above`.
    """

    texture: Texture
    picture: str = ""
    lights: Lights = field(default_factory=Lights)
    joint: float = JOINT_LINE
    upwards: Array = field(default_factory=lambda: np.array([0.0, 1.0, 0.0]))


def make_scene(
    assembly: Assembly,
    picture: str | NDArray[np.uint8] | None = None,
    lights: Lights | None = None,
    joint: float = JOINT_LINE,
) -> Scene:
    """Return the scene of an assembly.

    Parameters
    ----------
    picture : str or ndarray of uint8, optional
        Name of a drawn pattern (see `pattern.PATTERNS`), or pixels of shape (h, w), (h, w, 3) or (h, w, 4); a
        pattern that suits the object when left out.
    joint : float
        See `Scene.joint`.

    Raises
    ------
    PatternError, PictureError
        No such pattern, or pixels that are no picture.
    """
    if joint < 0 or not np.isfinite(joint):
        msg = f"joint line {joint!r} mm: must be zero or more"
        raise AssemblyError(msg, "joint")
    if picture is None:
        picture = DEFAULT_PATTERNS[assembly.place.shape]
    texture = make_texture(drawn(picture) if isinstance(picture, str) else picture)
    name = picture if isinstance(picture, str) else ""
    return Scene(texture, name, lights or Lights(), float(joint), np.array(assembly.up, dtype=np.float64))


def with_ball(assembly: Assembly, point: Array, diameter: float | None = None) -> Assembly:
    """The assembly with a ball at a point between the mirrors: the seed as a dot.

    Parameters
    ----------
    point : array_like, shape (3,)
        Millimetres, in the assembly's frame.
    diameter : float, optional
        Millimetres; as large as the nearest mirror lets it, within reason, when left out.

    Raises
    ------
    AssemblyError
        A point that is not between the mirrors.
    """
    spot = _between(assembly, point)
    room = float(assembly.heights(spot).min())
    size = min(1.2 * room, 0.25 * _breadth(assembly)) if diameter is None else float(diameter)
    place = assembly.place
    return assembly.with_place(
        ObjectPlace(spot, place.right, place.up, size, size, shape="ball", inside=True)
    )


def with_card(assembly: Assembly, point: Array | None = None, size: float | None = None) -> Assembly:
    """The assembly with a square card: free at a point between the mirrors, or closing the far end.

    Parameters
    ----------
    point : array_like, shape (3,), optional
        Middle of the card; left out, the far end is closed by it where the assembly has one.
    size : float, optional
        Side in millimetres.
    """
    if point is None:
        if assembly.place.shape == "card":
            return assembly
        point = assembly.place.centre
    spot = _between(assembly, point)
    back = assembly.eye - assembly.target
    right = np.cross(assembly.up, back)
    right = right / np.linalg.norm(right)
    up = np.cross(back, right)
    room = float(assembly.heights(spot).min())
    side = min(1.6 * room, 0.4 * _breadth(assembly)) if size is None else float(size)
    place = replace(
        assembly.place,
        centre=spot,
        right=right,
        up=up / np.linalg.norm(up),
        width=side,
        height=side,
        shape="card",
        inside=True,
    )
    return assembly.with_place(place)


def spot_at_heights(assembly: Assembly, heights: Sequence[float]) -> Array:
    """Return the point with these distances from the mirrors, in millimetres, shape (3,).

    In a wedge or tube the first two heights say where it is in the cross-section, and it is put on the object's
    level, or a third of the way up.

    Raises
    ------
    AssemblyError
        Another number of heights than mirrors, or one that is not over zero.
    """
    values = np.array(heights, dtype=np.float64)
    if values.shape != (len(assembly.panels),) or not np.isfinite(values).all() or values.min() <= 0:
        msg = f"heights {list(heights)}: give {len(assembly.panels)}, each over zero, in mm"
        raise AssemblyError(msg, "heights")
    if np.linalg.matrix_rank(assembly.normals, tol=1e-9) == 3:
        return np.asarray(np.linalg.solve(assembly.normals[:3], values[:3] + assembly.offsets[:3]))
    low = min(float(panel.outline[:, 2].min()) for panel in assembly.panels)
    high = max(float(panel.outline[:, 2].max()) for panel in assembly.panels)
    flat = np.linalg.solve(assembly.normals[:2, :2], values[:2] + assembly.offsets[:2])
    level = assembly.place.centre[2] if assembly.place.inside else low + (high - low) / 3
    return np.array([flat[0], flat[1], level])


def _between(assembly: Assembly, point: Array) -> Array:
    spot = np.array(point, dtype=np.float64)
    if spot.shape != (3,) or not np.isfinite(spot).all():
        msg = f"object at {np.asarray(point).tolist()!r}: give three finite numbers, in mm"
        raise AssemblyError(msg, "object")
    heights = assembly.heights(spot)
    if heights.min() <= 0:
        letter = assembly.panels[int(heights.argmin())].letter
        msg = f"object at {np.round(spot, 3).tolist()}: behind mirror {letter}; put it between the mirrors"
        raise AssemblyError(msg, "object")
    return spot


def _breadth(assembly: Assembly) -> float:
    return float(np.ptp(assembly.mouth, axis=0).max())
