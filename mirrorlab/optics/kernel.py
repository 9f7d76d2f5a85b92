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
def sample(texture: Any, u: float, v: float, blur: float) -> tuple[float, float, float, float]:
    """Read a texture at u, v (0 to 1, v from the top), smoothed over `blur` texels of the first copy."""
    texels, starts, widths, heights = texture
    level = np.uintp(0)
    while blur > 1.5 and level + np.uintp(1) < starts.size:
        blur *= HALF
        level += np.uintp(1)
    width, height = widths[level], heights[level]
    x = min(max(u * np.float32(width) - HALF, ZERO), np.float32(width - 1))
    y = min(max(v * np.float32(height) - HALF, ZERO), np.float32(height - 1))
    column, row = np.int32(x), np.int32(y)
    fx, fy = x - np.float32(column), y - np.float32(row)
    a = np.uintp((starts[level] + row * width + column) * 4)
    b = a + np.uintp(4 if column + 1 < width else 0)
    step = np.uintp(width * 4 if row + 1 < height else 0)
    c, d = a + step, b + step
    # No store between the reads, so that all stays in registers.
    p, q, r, s = (ONE - fx) * (ONE - fy), fx * (ONE - fy), (ONE - fx) * fy, fx * fy
    i, j, k = np.uintp(1), np.uintp(2), np.uintp(3)
    return (
        p * texels[a] + q * texels[b] + r * texels[c] + s * texels[d],
        p * texels[a + i] + q * texels[b + i] + r * texels[c + i] + s * texels[d + i],
        p * texels[a + j] + q * texels[b + j] + r * texels[c + j] + s * texels[d + j],
        p * texels[a + k] + q * texels[b + k] + r * texels[c + k] + s * texels[d + k],
    )


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
def show_object(work: Any, alive: Any, card: Any, spread: float, texture: Any) -> None:
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
        red, green, blue, opacity = sample(texture, u, v, (work[GONE + k] + met) * spread * fineness)
        add(work, k, red * shade, green * shade, blue * shade)
        clear = ONE - opacity
        for c in range(COLOURS):
            work[WEIGHT[0] + ROW * c + k] *= clear


@compiled
def end_rays(work: Any, alive: Any, body: Any, card: Any, spread: float, texture: Any, lights: Any) -> None:
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
            red, green, blue, opacity = sample(texture, u, v, work[GONE + k] * spread * fineness)
            clear = ONE - opacity
            add(
                work, k, red + clear * lights[2, 0], green + clear * lights[2, 1], blue + clear * lights[2, 2]
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
def whole_eights(count: Any) -> Any:
    """Round up to a multiple of eight: what is left over would be done one by one, five times as slowly."""
    return (count + np.uintp(7)) // np.uintp(8) * np.uintp(8)


@compiled
def hold(work: Any, k: Any) -> None:
    """Make ray k stand still in no light."""
    for i in range(RATES):
        work[RATE[0] + ROW * i + k] = 0
    for c in range(COLOURS):
        work[WEIGHT[0] + ROW * c + k] = 0


@compiled
def gather(work: Any, k: Any, home: Any, sums: Any) -> None:
    """Add the light of ray k to its pixel."""
    for c in range(COLOURS):
        sums[home[k], c] += work[TOTAL[0] + ROW * c + k]


@compiled
def pack(work: Any, alive: Any, home: Any, sums: Any) -> Any:
    """Write out the rays that have ended, fill their places from the back, and return how many go on."""
    k = np.uintp(0)
    while k < alive:
        if work[OVER + k] > ZERO:
            gather(work, k, home, sums)
            alive -= np.uintp(1)
            while alive > k and work[OVER + alive] > ZERO:
                gather(work, alive, home, sums)
                alive -= np.uintp(1)
            if alive > k:
                for i in range(np.uintp(25)):
                    work[ROW * i + k] = work[ROW * i + alive]
                for c in range(COLOURS):
                    work[TOTAL[0] + ROW * c + k] = work[TOTAL[0] + ROW * c + alive]
                home[k] = home[alive]
        k += np.uintp(1)
    # The loops run over whole eights of rays; those that fill them up stand still in no light.
    for k in range(alive, whole_eights(alive)):
        hold(work, k)
    return alive


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
    sums = np.empty((SIDE * across, 3), np.float32)
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
                    eights = whole_eights(alive)
                    meet(work, eights)
                    if shape != FAR_END:
                        meet_object(work, eights, shape, half_width, half_height)
                        show_object(work, alive, card, spread, texture)
                    ended = dim(work, eights, slants, losses, joint, spread, np.float32(mirrors), faintest)
                    ended -= np.float32(eights - alive)
                    count += alive - ended
                    if ended > ZERO:
                        end_rays(work, alive, body, card, spread, texture, lights)
                        alive = pack(work, alive, home, sums)
                    turn(work, whole_eights(alive), products)
                for k in range(alive):
                    gather(work, k, home, sums)
        for row in range(band, min(band + SIDE, last)):
            for column in range(columns):
                for c in range(3):
                    light = sums[(row - band) * across + column, c] * np.float32(side * side)
                    out[row, column, c] = table[int(min(max(light, ZERO), ONE) * top + HALF)]
    return int(count)
