"""What the rays of a packet see: the object's picture, the room, and what else they end on.

Import this only to trace: numba takes a moment to load.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from mirrorlab.optics.compiled import inlined, inner
from mirrorlab.optics.packet import (
    BALL,
    COLOURS,
    DRIFT,
    FACES,
    FAR_END,
    GONE,
    HALF,
    HIT,
    MET,
    ONE,
    PLACE,
    RATE,
    RISE,
    ROW,
    TIME,
    TOTAL,
    WEIGHT,
    ZERO,
)
from mirrorlab.optics.tile import AXES, LENGTH, LIGHT, SHARE, SIZE, line
from mirrorlab.optics.tile import DOWN as BELOW
from mirrorlab.optics.tile import PLACE as AT
from mirrorlab.optics.tile import RIGHT as BESIDE

ONE_ON, TWO_ON, THREE_ON = (np.uintp(k) for k in (1, 2, 3))

# Values of `body.Face`; a compiled function takes plain numbers.
ROOM, OBJECT, DARK = 1, 2, 3

AROUND = np.float32(2 * math.pi)
LIMB = np.float32(0.45)
"""Brightness of a ball's limb, its middle being 1: as a paper lantern looks (our choice)."""

FLAT = np.float32(0.05)
"""Slope below which a picture is blurred no more, however flatly it is looked at."""


@inlined
def sample(
    texels: Any, starts: Any, widths: Any, heights: Any, u: float, v: float, blur: float
) -> tuple[float, float, float, float]:
    """Read a texture at u, v (0 to 1, v from the top), smoothed over `blur` texels of the first copy."""
    level = np.uintp(0)
    while blur > 1.5 and level + np.uintp(1) < starts.size:
        blur *= HALF
        level += np.uintp(1)
    width, height = widths[level], heights[level]
    # Written so that what is no number reads the first texel, not one that is not there.
    x, y = u * np.float32(width) - HALF, v * np.float32(height) - HALF
    x = min(x, np.float32(width - 1)) if x > ZERO else ZERO
    y = min(y, np.float32(height - 1)) if y > ZERO else ZERO
    column, row = np.int32(x), np.int32(y)
    fx, fy = x - np.float32(column), y - np.float32(row)
    a = np.uintp((starts[level] + row * width + column) * 4)
    b = a + np.uintp(4 if column + 1 < width else 0)
    step = np.uintp(width * 4 if row + 1 < height else 0)
    c, d = a + step, b + step
    # No store between the reads, so that all stays in registers.
    p, q, r, s = (ONE - fx) * (ONE - fy), fx * (ONE - fy), (ONE - fx) * fy, fx * fy
    i, j, k = ONE_ON, TWO_ON, THREE_ON
    return (
        p * texels[a] + q * texels[b] + r * texels[c] + s * texels[d],
        p * texels[a + i] + q * texels[b + i] + r * texels[c + i] + s * texels[d + i],
        p * texels[a + j] + q * texels[b + j] + r * texels[c + j] + s * texels[d + j],
        p * texels[a + k] + q * texels[b + k] + r * texels[c + k] + s * texels[d + k],
    )


@inlined
def add(work: Any, k: Any, red: Any, green: Any, blue: Any) -> None:
    """Add light, as dim as the ray has become, to what ray k gathers."""
    work[TOTAL[0] + k] += work[WEIGHT[0] + k] * red
    work[TOTAL[1] + k] += work[WEIGHT[1] + k] * green
    work[TOTAL[2] + k] += work[WEIGHT[2] + k] * blue


@inner
def show_object(work: Any, alive: Any, card: Any, spread: float, texture: Any) -> None:
    """Add the object's light to the rays that meet it, and let through what its picture lets through."""
    shape, half_width, _, scale_u, scale_v = card
    texels, starts, widths, heights = texture
    texels_across = np.float32(widths[0])
    for k in range(alive):
        met = work[MET + k]
        if met >= work[TIME + k]:
            continue
        dx, dy, dz = work[DRIFT[0] + k], work[DRIFT[1] + k], work[DRIFT[2] + k]
        x, y = work[PLACE[0] + k] + met * dx, work[PLACE[1] + k] + met * dy
        shade = ONE
        if shape == BALL:
            z = work[PLACE[2] + k] + met * dz
            facing = -(x * dx + y * dy + z * dz) / half_width
            u = np.float32(math.atan2(x, z) / (2 * math.pi)) + HALF
            v = HALF - HALF * y / half_width
            shade = LIMB + (ONE - LIMB) * facing
            fineness = texels_across / (AROUND * half_width * max(facing, FLAT))
        else:
            u, v = HALF + x * scale_u, HALF - y * scale_v
            fineness = scale_u * texels_across / math.sqrt(max(abs(dz), FLAT))
        red, green, blue, opacity = sample(
            texels, starts, widths, heights, u, v, (work[GONE + k] + met) * spread * fineness
        )
        add(work, k, red * shade, green * shade, blue * shade)
        clear = ONE - opacity
        for c in range(COLOURS):
            work[WEIGHT[0] + ROW * c + k] *= clear


@inlined
def put(sums: Any, pixel: Any, work: Any, k: Any, red: Any, green: Any, blue: Any, rest: Any) -> None:
    """Add to a pixel what its ray k has gathered, and this light, as dim as the ray has become."""
    # A fourth colour that means nothing: so the compiler does four at once.
    one, two, three, four = sums[pixel], sums[pixel + ONE_ON], sums[pixel + TWO_ON], sums[pixel + THREE_ON]
    one += work[TOTAL[0] + k] + work[WEIGHT[0] + k] * red
    two += work[TOTAL[1] + k] + work[WEIGHT[1] + k] * green
    three += work[TOTAL[2] + k] + work[WEIGHT[2] + k] * blue
    four += rest
    sums[pixel], sums[pixel + ONE_ON], sums[pixel + TWO_ON], sums[pixel + THREE_ON] = one, two, three, four


@inner
def end_rays(
    work: Any,
    over: Any,
    count: Any,
    home: Any,
    sums: Any,
    body: Any,
    card: Any,
    spread: float,
    texture: Any,
    lights: Any,
) -> None:
    """Write out the rays listed in `over`, which end here, with the light of what they have met."""
    kinds, mirrors = body
    shape, _, _, scale_u, scale_v = card
    texels, starts, widths, heights = texture
    texels_across = np.float32(widths[0])
    behind = (lights[2, 0], lights[2, 1], lights[2, 2])
    for j in range(count):
        k = over[j]
        face, pixel = int(work[HIT + k]), home[k]
        if face < mirrors:
            put(sums, pixel, work, k, ZERO, ZERO, ZERO, ZERO)
            continue
        kind = kinds[face]
        if kind == OBJECT and shape == FAR_END:
            u, v = HALF + work[PLACE[0] + k] * scale_u, HALF - work[PLACE[1] + k] * scale_v
            slope = max(-work[RATE[0] + ROW * np.uintp(face) + k], FLAT)
            fineness = scale_u * texels_across / math.sqrt(slope)
            blur = work[GONE + k] * spread * fineness
            red, green, blue, opacity = sample(texels, starts, widths, heights, u, v, blur)
            clear = ONE - opacity
            red, green, blue = red + clear * behind[0], green + clear * behind[1], blue + clear * behind[2]
            put(sums, pixel, work, k, red, green, blue, opacity)
        elif kind == ROOM:
            rise = HALF + HALF * work[RISE + k]
            fall = ONE - rise
            red = fall * lights[0, 0] + rise * lights[1, 0]
            green = fall * lights[0, 1] + rise * lights[1, 1]
            blue = fall * lights[0, 2] + rise * lights[1, 2]
            put(sums, pixel, work, k, red, green, blue, ZERO)
        else:
            plain = 2 if kind == OBJECT else (3 if kind == DARK else 4)
            put(sums, pixel, work, k, lights[plain, 0], lights[plain, 1], lights[plain, 2], ZERO)


@inlined
def plain(squares: Any, s: int, row: int) -> tuple[Any, Any, Any, Any]:
    """A row of a square's table as float32, its changes for one pixel."""
    part = 1.0 / (squares[s, AT, SIZE] - 1)
    eye, corner, across, downwards = line(squares, s, row)
    return np.float32(eye), np.float32(corner), np.float32(across * part), np.float32(downwards * part)


@inner
def land(work: Any, count: Any, squares: Any, s: int, face: int, rays: Any) -> None:
    """Put the rays of a square where they end on a face that all of them meet: what `end_rays` needs of them."""
    here, rise = plain(squares, s, face), plain(squares, s, AXES - 1)
    across, up = plain(squares, s, FACES), plain(squares, s, FACES + 1)
    red, green, blue = (
        np.float32(squares[s, LIGHT, 0]),
        np.float32(squares[s, LIGHT, 1]),
        np.float32(squares[s, LIGHT, 2]),
    )
    hit = np.float32(face)
    for k in range(count):
        x, y = np.float32(rays[BESIDE, k]), np.float32(rays[BELOW, k])
        length, share = np.float32(rays[LENGTH, k]), np.float32(rays[SHARE, k])
        change = here[1] + x * here[2] + y * here[3]
        steps = -here[0] / change
        slope = change / length
        # Whichever face it is: a row that is not known would keep the loop from being widened.
        work[RATE[0] + k], work[RATE[1] + k], work[RATE[2] + k] = slope, slope, slope
        work[RATE[3] + k], work[RATE[4] + k], work[RATE[5] + k] = slope, slope, slope
        work[RISE + k] = (rise[1] + x * rise[2] + y * rise[3]) / length
        work[PLACE[0] + k] = across[0] + steps * (across[1] + x * across[2] + y * across[3])
        work[PLACE[1] + k] = up[0] + steps * (up[1] + x * up[2] + y * up[3])
        work[GONE + k] = steps * length
        work[WEIGHT[0] + k], work[WEIGHT[1] + k], work[WEIGHT[2] + k] = (
            share * red,
            share * green,
            share * blue,
        )
        work[TOTAL[0] + k], work[TOTAL[1] + k], work[TOTAL[2] + k] = ZERO, ZERO, ZERO
        work[HIT + k] = hit
