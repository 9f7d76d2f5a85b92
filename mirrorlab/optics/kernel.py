"""The ray tracer's rows: packets of rays are loaded, followed until they end, and written out as pixels.

Import this only to trace: numba takes a moment to load.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from mirrorlab.optics.compiled import compiled
from mirrorlab.optics.packet import (
    BALL,
    COLOURS,
    DOWN,
    DRIFT,
    FACES,
    FAR_END,
    GONE,
    HALF,
    HEIGHT,
    HIT,
    MET,
    ONE,
    OVER,
    PLACE,
    PLACES,
    RATE,
    RATES,
    RAYS,
    RIGHT,
    RISE,
    ROW,
    ROWS,
    SIDE,
    TIME,
    TOTAL,
    WEIGHT,
    ZERO,
    dim,
    load,
    meet,
    meet_object,
    turn,
)

# Values of `body.Face`; a compiled function takes plain numbers.
ROOM, OBJECT, DARK = 1, 2, 3

AROUND = np.float32(2 * math.pi)
LIMB = np.float32(0.45)
"""Brightness of a ball's limb, its middle being 1: as a paper lantern looks (our choice)."""

FLAT = np.float32(0.05)
"""Slope below which a picture is blurred no more, however flatly it is looked at."""


@compiled
def sample(texture: Any, u: float, v: float, blur: float, texel: Any) -> None:
    """Read a texture at u, v (0 to 1, v from the top), smoothed over `blur` texels of the first copy."""
    texels, starts, widths, heights = texture
    level = np.uintp(0)
    while blur > 1.5 and level + np.uintp(1) < starts.size:
        blur *= HALF
        level += np.uintp(1)
    width, height, start = widths[level], heights[level], starts[level]
    x = min(max(u * np.float32(width) - HALF, ZERO), np.float32(width) - ONE)
    y = min(max(v * np.float32(height) - HALF, ZERO), np.float32(height) - ONE)
    column, row = int(x), int(y)
    fx, fy = x - np.float32(column), y - np.float32(row)
    upper = np.uintp(start + row * width + column)
    right = np.uintp(1 if column + 1 < width else 0)
    lower = upper + np.uintp(width if row + 1 < height else 0)
    for c in range(np.uintp(4)):
        top = texels[upper, c] * (ONE - fx) + texels[upper + right, c] * fx
        low = texels[lower, c] * (ONE - fx) + texels[lower + right, c] * fx
        texel[c] = top * (ONE - fy) + low * fy


@compiled
def enter(work: Any, k: Any, kinds: Any, window: Any, mouth: int, eye: Any, way: Any) -> float:
    """How far ray k from outside goes before it is in the body; −1 where it never is."""
    near, far, face = 0.0, 1e30, -1
    for i in range(len(kinds)):
        row = ROW * np.uintp(i) + k
        height, rate = float(work[HEIGHT[0] + row]), float(work[RATE[0] + row])
        if height < 0:
            if rate <= 0:
                return -1.0
            if -height / rate > near:
                near, face = -height / rate, i
        elif rate < 0:
            far = min(far, height / -rate)
    if near >= far or (face >= 0 and kinds[face] != ROOM):
        return -1.0
    if face == mouth:
        for w in range(len(window)):
            inside = -window[w, 3]
            for c in range(3):
                inside += window[w, c] * (eye[c] + near * way[c])
            if inside < 0:
                return -1.0
    return near


@compiled
def enter_all(work: Any, left: float, top: float, view: Any, body: Any) -> None:
    """Bring the rays of an eye outside to where they enter the body; those that never do end in the surround."""
    camera, _, _, _, surround = view
    kinds, mirrors, window = body
    way = np.empty(3)
    for k in range(ROW):
        sx, sy = left + work[RIGHT + k], top + work[DOWN + k]
        scale = 1.0 / math.sqrt(1.0 + sx * sx + sy * sy)
        for c in range(3):
            way[c] = (camera[1, c] + sx * camera[2, c] + sy * camera[3, c]) * scale
        near = enter(work, k, kinds, window, mirrors, camera[0], way)
        if near < 0:
            work[OVER + k] = 1
            for c in range(COLOURS):
                work[TOTAL[0] + ROW * c + k] = surround[c]
            continue
        work[OVER + k] = 0
        for i in range(PLACES):
            work[HEIGHT[0] + ROW * i + k] += near * work[RATE[0] + ROW * i + k]
        for i in range(np.uintp(FACES)):
            work[HEIGHT[0] + ROW * i + k] = max(work[HEIGHT[0] + ROW * i + k], ZERO)
        work[GONE + k] = near


@compiled
def add(work: Any, k: Any, red: Any, green: Any, blue: Any) -> None:
    """Add light, as dim as the ray has become, to what ray k gathers."""
    work[TOTAL[0] + k] += work[WEIGHT[0] + k] * red
    work[TOTAL[1] + k] += work[WEIGHT[1] + k] * green
    work[TOTAL[2] + k] += work[WEIGHT[2] + k] * blue


@compiled
def show_object(work: Any, alive: Any, card: Any, spread: float, texture: Any, texel: Any) -> None:
    """Add the object's light to the rays that meet it, and let through what its picture lets through."""
    shape, half_width, _, scale_u, scale_v = card
    texels_across = np.float32(texture[2][0])
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
        sample(texture, u, v, (work[GONE + k] + met) * spread * fineness, texel)
        add(work, k, texel[0] * shade, texel[1] * shade, texel[2] * shade)
        clear = ONE - texel[3]
        for c in range(COLOURS):
            work[WEIGHT[0] + ROW * c + k] *= clear


@compiled
def end_rays(
    work: Any, alive: Any, body: Any, card: Any, spread: float, texture: Any, texel: Any, lights: Any
) -> None:
    """Add the light of what the rays that end here have met."""
    kinds, mirrors, _ = body
    shape, _, _, scale_u, scale_v = card
    for k in range(alive):
        face = int(work[HIT + k])
        if work[OVER + k] == ZERO or face < mirrors:
            continue
        kind = kinds[face]
        if kind == OBJECT and shape == FAR_END:
            u, v = HALF + work[PLACE[0] + k] * scale_u, HALF - work[PLACE[1] + k] * scale_v
            slope = max(-work[RATE[0] + ROW * np.uintp(face) + k], FLAT)
            fineness = scale_u * np.float32(texture[2][0]) / math.sqrt(slope)
            sample(texture, u, v, work[GONE + k] * spread * fineness, texel)
            clear = ONE - texel[3]
            add(
                work,
                k,
                texel[0] + clear * lights[2, 0],
                texel[1] + clear * lights[2, 1],
                texel[2] + clear * lights[2, 2],
            )
        elif kind == ROOM:
            rise = HALF + HALF * work[RISE + k]
            fall = ONE - rise
            add(
                work,
                k,
                fall * lights[0, 0] + rise * lights[1, 0],
                fall * lights[0, 1] + rise * lights[1, 1],
                fall * lights[0, 2] + rise * lights[1, 2],
            )
        else:
            plain = 2 if kind == OBJECT else (3 if kind == DARK else 4)
            add(work, k, lights[plain, 0], lights[plain, 1], lights[plain, 2])


@compiled
def pack(work: Any, alive: Any, home: Any, sums: Any) -> Any:
    """Write out the rays that have ended and move the others to the front; return how many go on."""
    kept = np.uintp(0)
    for k in range(alive):
        if work[OVER + k] > ZERO:
            for c in range(COLOURS):
                sums[home[k], c] += work[TOTAL[0] + ROW * c + k]
            continue
        if kept != k:
            for i in range(np.uintp(23)):
                work[ROW * i + kept] = work[ROW * i + k]
            for c in range(COLOURS):
                work[TOTAL[0] + ROW * c + kept] = work[TOTAL[0] + ROW * c + k]
            home[kept] = home[k]
        kept += np.uintp(1)
    return kept


@compiled
def still(work: Any, alive: Any) -> None:
    """Make the rays that have ended stand still in no light until their packet is packed again."""
    for k in range(alive):
        if work[OVER + k] > ZERO:
            for i in range(RATES):
                work[RATE[0] + ROW * i + k] = 0
            for c in range(COLOURS):
                work[WEIGHT[0] + ROW * c + k] = 0


@compiled
def trace_rows(
    out: Any,
    first: int,
    last: int,
    samples: int,
    pixel: float,
    view: Any,
    body: Any,
    glass: Any,
    card: Any,
    texture: Any,
    lights: Any,
    table: Any,
    faintest: Any,
    most: int,
) -> int:
    """Trace rows `first` to `last` into `out`; return how many bounces were followed.

    Parameters
    ----------
    out : ndarray of uint8, shape (rows, columns, 3)
    samples : int
        Rays a pixel along each side.
    pixel : float
        Slope between neighbouring pixels.
    view : tuple
        Camera, shape (4, 3), with rows eye, forward, right, up; the eye's heights above the faces and its place
        along the object's axes, float32 of shape (9,); how forward, right and up change these, and how far each
        points upwards, float32 of shape (3, 10); whether the eye is outside; light around the opening.
    body : tuple
        Kinds of the faces; how many are mirrors; half-spaces of the opening, shape (w, 4).
    glass : tuple
        What `packet.turn` and `packet.dim` need: products, slants, losses, half the width of a joint's line.
    card : tuple
        Shape of the object, half its width and height, and the picture's widths and heights a millimetre.
    texture : tuple
        Texels, and the starts, widths and heights of the copies: see `texture.Texture`.
    lights : ndarray of float32, shape (5, 3)
        Linear light of: room below, room above, backlight, dark, floor.
    table : ndarray of uint8
        sRGB bytes of linear light.
    """
    rows, columns = out.shape[0], out.shape[1]
    products, slants, losses, joint = glass
    shape, half_width, half_height, _, _ = card
    _, start, looks, outside, _ = view
    _, mirrors, _ = body
    work, home = np.zeros(ROWS * RAYS, np.float32), np.empty(RAYS, np.int64)
    for k in range(RAYS):
        work[RIGHT + np.uintp(k)] = (k % SIDE) * pixel
        work[DOWN + np.uintp(k)] = -(k // SIDE) * pixel
    across = (columns + SIDE - 1) // SIDE * SIDE
    sums, texel = np.empty((SIDE * across, 3), np.float32), np.empty(4, np.float32)
    side = 1.0 / samples
    spread = np.float32(pixel * side)
    count, top = 0.0, np.float32(len(table) - 1)
    for band in range(first, last, SIDE):
        sums[:] = 0
        for part in range(samples * samples):
            sy = (rows * 0.5 - band - (part // samples + 0.5) * side) * pixel
            for begin in range(0, columns, SIDE):
                sx = (begin + (part % samples + 0.5) * side - columns * 0.5) * pixel
                alive = ROW
                load(work, np.float32(sx), np.float32(sy), start, looks)
                for k in range(RAYS):
                    home[k] = k // SIDE * across + begin + k % SIDE
                if outside:
                    enter_all(work, sx, sy, view, body)
                    alive = pack(work, alive, home, sums)
                for _ in range(most):
                    if alive == 0:
                        break
                    meet(work, alive)
                    if shape != FAR_END:
                        meet_object(work, alive, shape, half_width, half_height)
                        show_object(work, alive, card, spread, texture, texel)
                    ended = dim(work, alive, slants, losses, joint, spread, np.float32(mirrors), faintest)
                    count += alive - ended
                    if ended > ZERO:
                        end_rays(work, alive, body, card, spread, texture, texel, lights)
                    turn(work, alive, products)
                    if 3 * ended >= alive:
                        alive = pack(work, alive, home, sums)
                    elif ended > ZERO:
                        still(work, alive)
                for k in range(alive):
                    for c in range(COLOURS):
                        sums[home[k], c] += work[TOTAL[0] + ROW * c + k]
        for row in range(band, min(band + SIDE, last)):
            for column in range(columns):
                for c in range(3):
                    light = sums[(row - band) * across + column, c] * np.float32(side * side)
                    out[row, column, c] = table[int(min(max(light, ZERO), ONE) * top + HALF)]
    return int(count)
