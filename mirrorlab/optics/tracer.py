"""What the eye sees: a view traced ray by ray through the mirrors, on all cores, without a graphics card."""

from __future__ import annotations

import math
import os
from collections.abc import Callable
from dataclasses import dataclass
from threading import Lock, Thread
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.body import Body, body_of
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.scene import Scene, make_scene
from mirrorlab.optics.texture import srgb_bytes

Array = NDArray[np.float64]
Bytes = NDArray[np.uint8]
Progress: TypeAlias = Callable[[int, int], object]

FAINTEST = 1 / 1024
"""A ray that brings less of the object's light than this is let go: a third of the darkest step of a byte."""

MOST_BOUNCES = 400
"""Bounces after which even a perfect mirror's ray is let go; light that skims along a wedge needs no more."""

BLOCK_PIXELS = 20_000
"""Pixels in one block of rows: a few milliseconds, so that a cancel is quick and the cores end together."""

LARGEST_SIDE = 32_768
"""Pixels along a side of a view: what picture files and their readers commonly take."""


class TraceCancelled(Exception):
    """The progress callback asked to stop."""


@dataclass(frozen=True, slots=True, eq=False)
class Camera:
    """Where rays start and which way they go: ``forward + x·right + y·up`` for a pixel x, y steps from the middle.

    Attributes
    ----------
    step : float
        Slope between neighbouring pixels.
    """

    eye: Array
    forward: Array
    right: Array
    up: Array
    step: float


def camera_of(assembly: Assembly, width: int, height: int) -> Camera:
    """Return the camera of an assembly's eye for a view of this size in pixels."""
    forward = assembly.target - assembly.eye
    forward = forward / np.linalg.norm(forward)
    right = np.cross(forward, assembly.up)
    right = right / np.linalg.norm(right)
    step = 2 * math.tan(assembly.field_of_view / 2) / min(height, width)
    return Camera(assembly.eye, forward, right, np.cross(right, forward), step)


def trace(
    assembly: Assembly,
    scene: Scene | None = None,
    size: tuple[int, int] = (1280, 720),
    samples: int = 1,
    progress: Progress | None = None,
    cores: int | None = None,
) -> Bytes:
    """Return the view from the assembly's eye.

    Parameters
    ----------
    scene : Scene, optional
        See `make_scene`; the assembly's own object with a pattern that suits it when left out.
    size : (int, int)
        Width and height in pixels.
    samples : int
        Rays a pixel along each side: 1 is quick, 3 is smooth (nine rays).
    progress : callable, optional
        Called with (rows done, rows) by the calling thread after each of its blocks, and at the end; a return of
        False cancels.
    cores : int, optional
        Threads; as many as there are cores for this process when left out.

    Returns
    -------
    ndarray of uint8, shape (height, width, 3)
        sRGB, the first row at the top.

    Raises
    ------
    AssemblyError
        A size or number of samples that cannot be traced.
    TraceCancelled
        `progress` returned False.
    """
    width, height = _checked_size(size)
    if not 1 <= samples <= 8:
        msg = f"samples {samples!r}: from 1 to 8 along each side of a pixel"
        raise AssemblyError(msg, "samples")
    from mirrorlab.optics.kernel import trace_rows
    from mirrorlab.optics.tile import WIDEST

    arguments = kernel_arguments(assembly, scene or make_scene(assembly), camera_of(assembly, width, height))
    out = np.empty((height, width, 3), dtype=np.uint8)
    rows = WIDEST * max(1, BLOCK_PIXELS // (WIDEST * width * samples * samples))
    blocks = iter([(row, min(row + rows, height)) for row in range(0, height, rows)])
    done, failed, lock = 0, [], Lock()

    def next_block() -> tuple[int, int] | None:
        with lock:
            return None if failed else next(blocks, None)

    def work(report: Progress | None = None) -> None:
        nonlocal done
        try:
            while (block := next_block()) is not None:
                trace_rows(out, *block, samples, *arguments)
                with lock:
                    done += block[1] - block[0]
                _report(report, done, height)
        except BaseException as error:
            failed.append(error)  # and so nobody begins another block

    # The caller's own thread works, too: waiting for a pool of others takes a tenth of the time.
    others = [Thread(target=work) for _ in range((cores or available_cores()) - 1)]
    for other in others:
        other.start()
    work(progress)
    for other in others:
        other.join()
    if failed:
        raise failed[0]
    _report(progress, done, height)
    return out


def _report(progress: Progress | None, done: int, height: int) -> None:
    if progress is not None and progress(done, height) is False:
        msg = f"stopped after {done} of {height} rows"
        raise TraceCancelled(msg)


def preview_size(size: tuple[int, int], coarseness: int) -> tuple[int, int]:
    """Return the size of a coarse view to be shown enlarged while something is dragged."""
    return max(1, size[0] // coarseness), max(1, size[1] // coarseness)


def warm_up() -> None:
    """Load numba and compile, or load from its cache, what a view needs. Takes seconds the first time."""
    from mirrorlab.optics.build_wedge import wedge

    trace(wedge(60, 10, 10), size=(2, 2), cores=1)


def available_cores() -> int:
    """Return how many cores this process may use."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


def _checked_size(size: tuple[int, int]) -> tuple[int, int]:
    width, height = (int(side) for side in size)
    if not (1 <= width <= LARGEST_SIDE and 1 <= height <= LARGEST_SIDE):
        msg = f"size {width}x{height}: each side from 1 to {LARGEST_SIDE} pixels"
        raise AssemblyError(msg, "size")
    return width, height


def kernel_arguments(assembly: Assembly, scene: Scene, camera: Camera) -> tuple[Any, ...]:
    """What `kernel.trace_rows` takes after the number of samples."""
    from mirrorlab.optics.packet import FACES, MIRRORS

    body, place, texture = body_of(assembly), assembly.place, scene.texture
    shape = 0 if not place.inside else (2 if place.shape == "ball" else 1)
    own = np.array([place.right, place.up, np.cross(place.right, place.up)])
    looks = np.array([camera.forward, camera.right, camera.up])
    mirrors, faces = body.mirrors, len(body.kinds)
    heights = body.heights(camera.eye)
    axes = np.zeros((FACES + 4, 3))
    axes[:faces], axes[FACES:-1], axes[-1] = body.normals, own, scene.upwards
    # Faces that are not there have height and rate zero, so they are never met.
    eye = np.column_stack([np.zeros(FACES + 4), axes @ looks.T])
    eye[:faces, 0], eye[FACES:-1, 0] = heights, own @ (camera.eye - place.centre)
    products, slants = np.zeros((MIRRORS, FACES + 4)), np.zeros((MIRRORS, MIRRORS))
    losses = np.zeros((3, MIRRORS))
    products[:mirrors] = body.normals[:mirrors] @ axes.T
    losses[:, :mirrors] = np.transpose([np.array(m.tint) * m.reflectance - 1 for m in assembly.mirrors])
    for (i, j), angle in assembly.dihedrals.items():
        slants[i, j] = slants[j, i] = 1 / math.sin(angle)
    lights = scene.lights.rows().astype(np.float32)
    sides = window_planes(assembly, body)
    window = np.column_stack([sides[:, :3] @ camera.eye - sides[:, 3], sides[:, :3] @ looks.T])
    half_width, half_height = place.width / 2, place.height / 2
    radius = (-1.0, math.hypot(half_width, half_height), half_width)[shape]
    size = (np.float32(half_width), np.float32(half_height))
    return (
        camera.step,
        (np.vstack([eye, window]), bool((heights < 0).any()), lights[5]),
        (body.kinds, mirrors),
        np.hstack([products, slants, losses.T]),
        (scene.joint, radius, FAINTEST, MOST_BOUNCES),
        (_tuples(products), _tuples(slants), _tuples(losses), np.float32(scene.joint)),
        (shape, *size, *_floats(np.array(_fit(place.width, place.height, texture.aspect)))),
        (texture.texels.reshape(-1), texture.starts, texture.widths, texture.heights),
        lights[:5],
        srgb_bytes(),
    )


def _tuples(table: Array) -> tuple[tuple[np.float32, ...], ...]:
    # A compiled loop keeps the values of a tuple in registers; those of an array it must read again and again.
    return tuple(_floats(row) for row in table)


def _floats(row: Array) -> tuple[np.float32, ...]:
    return tuple(np.float32(value) for value in row)


def _fit(width: float, height: float, aspect: float) -> tuple[float, float]:
    # The picture covers the card and keeps its proportions; what sticks out is cut off.
    if width / height > aspect:
        return 1 / width, aspect / width
    return 1 / (height * aspect), 1 / height


def window_planes(assembly: Assembly, body: Body) -> Array:
    """Half-spaces (normal, offset) through the opening's sides, square to its plane, shape (k, 4)."""
    corners = assembly.opening
    inward = body.normals[body.mouth]
    sides = np.roll(corners, -1, axis=0) - corners
    normals = np.cross(sides, inward)
    normals = normals / np.linalg.norm(normals, axis=1)[:, None]
    offsets = np.sum(normals * corners, axis=1)
    middle = corners.mean(axis=0)
    turn = np.sign(normals @ middle - offsets)[:, None]
    return np.hstack([normals * turn, offsets[:, None] * turn])
