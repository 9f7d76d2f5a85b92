"""Pictures as light: sRGB to linear and back, and a picture's smaller and smaller copies for what is far away."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Bytes = NDArray[np.uint8]

SRGB_STEPS = 4096
"""Entries of the table from linear light to sRGB bytes: below 1/3 of a byte's step from about byte 20 on."""

LARGEST_SIDE = 2048
"""Pixels: a larger picture is thinned out before use; a view shows no more of it."""


class PictureError(ValueError):
    """Pixels that are no picture."""


def to_linear(srgb: Array) -> Array:
    """Return linear light, 0 to 1, of sRGB values 0 to 1 (IEC 61966-2-1; constants from memory)."""
    values = np.asarray(srgb, dtype=np.float64)
    result: Array = np.where(values <= 0.04045, values / 12.92, ((values + 0.055) / 1.055) ** 2.4)
    return result


def to_srgb(linear: Array) -> Array:
    """Return sRGB values, 0 to 1, of linear light 0 to 1: the inverse of `to_linear`."""
    values = np.asarray(linear, dtype=np.float64)
    result: Array = np.where(values <= 0.0031308, values * 12.92, 1.055 * values ** (1 / 2.4) - 0.055)
    return result


@lru_cache(maxsize=1)
def srgb_bytes() -> Bytes:
    """Table of sRGB bytes for linear light ``k / (SRGB_STEPS − 1)``."""
    table = np.round(255 * to_srgb(np.linspace(0, 1, SRGB_STEPS))).astype(np.uint8)
    table.setflags(write=False)
    return table


def tint(colour: str) -> Array:
    """Return linear light, shape (3,), of ``#rrggbb``."""
    return to_linear(np.array([int(colour[i : i + 2], 16) for i in (1, 3, 5)]) / 255.0)


@dataclass(frozen=True, slots=True, eq=False)
class Texture:
    """A picture in linear light with its smaller copies.

    Attributes
    ----------
    texels : ndarray of float32, shape (T, 4)
        Red, green, blue (already multiplied by the opacity) and opacity; all copies one after the other, rows
        from the top.
    starts, widths, heights : ndarray of int, shape (L,)
        Where each copy begins and its size; each has half the sides of the one before.
    """

    texels: NDArray[np.float32]
    starts: NDArray[np.int64]
    widths: NDArray[np.int64]
    heights: NDArray[np.int64]

    @property
    def aspect(self) -> float:
        """Width over height."""
        return float(self.widths[0] / self.heights[0])


def make_texture(pixels: Bytes) -> Texture:
    """Return the texture of an sRGB picture.

    Parameters
    ----------
    pixels : ndarray of uint8, shape (h, w), (h, w, 3) or (h, w, 4)
        Grey, red-green-blue, or with opacity; the first row is the top.

    Raises
    ------
    PictureError
        Another shape or type, or no pixels.
    """
    given = np.asarray(pixels)
    if given.dtype != np.uint8 or given.ndim not in (2, 3) or 0 in given.shape:
        msg = f"picture of shape {given.shape} and type {given.dtype}: needs bytes, (h, w), (h, w, 3) or (h, w, 4)"
        raise PictureError(msg)
    if given.ndim == 2:
        given = np.repeat(given[:, :, None], 3, axis=2)
    if given.shape[2] not in (3, 4):
        msg = f"picture with {given.shape[2]} channels: needs 1, 3 or 4"
        raise PictureError(msg)
    step = -(-max(given.shape[:2]) // LARGEST_SIDE)
    table = to_linear(np.arange(256) / 255.0).astype(np.float32)
    light = np.empty((*given.shape[:2], 4), dtype=np.float32)
    light[..., 3] = given[..., 3] / np.float32(255) if given.shape[2] == 4 else 1
    light[..., :3] = table[given[..., :3]] * light[..., 3:]
    for _ in range((step - 1).bit_length()):
        light = _halved(light)
    levels = [light]
    while max(levels[-1].shape[:2]) > 1:
        levels.append(_halved(levels[-1]))
    sizes = np.array([level.shape[:2] for level in levels], dtype=np.int64)
    counts = sizes.prod(axis=1)
    texels = np.concatenate([level.reshape(-1, 4) for level in levels])
    return Texture(texels, np.cumsum(counts) - counts, sizes[:, 1].copy(), sizes[:, 0].copy())


def _halved(light: NDArray[np.float32]) -> NDArray[np.float32]:
    # An odd last row or column is joined to its neighbour by repeating it.
    height, width = light.shape[:2]
    padded = np.pad(
        light, ((0, height % 2 if height > 1 else 0), (0, width % 2 if width > 1 else 0), (0, 0)), "edge"
    )
    if height > 1:
        padded = (padded[0::2] + padded[1::2]) / 2
    if width > 1:
        padded = (padded[:, 0::2] + padded[:, 1::2]) / 2
    return padded.astype(np.float32)
