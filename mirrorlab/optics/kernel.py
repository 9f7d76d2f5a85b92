"""The ray tracer's rows: squares of pixels are followed while they hold together, then their rays one by one.

Import this only to trace: numba takes a moment to load.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from mirrorlab.optics.compiled import compiled, inlined, inner
from mirrorlab.optics.packet import (
    COLOURS,
    DOWN,
    FACES,
    FAR_END,
    GONE,
    HALF,
    HEIGHT,
    KEPT,
    LENGTH,
    ONE,
    OVER,
    PLACES,
    RATE,
    RATES,
    RAYS,
    RIGHT,
    ROW,
    ROWS,
    SIDE,
    TOTAL,
    WEIGHT,
    ZERO,
    dim,
    load,
    meet,
    meet_object,
    turn,
)
from mirrorlab.optics.shade import end_rays, land, show_object
from mirrorlab.optics.tile import (
    ACROSS,
    CORNER,
    DOWNWARDS,
    ENDS,
    EYE,
    LAST,
    LEAST,
    LIGHT,
    MISSES,
    NOTHING,
    PLACE,
    SIZE,
    SLOTS,
    SQUARE_ROWS,
    WIDEST,
    X,
    Y,
    begin,
    enter,
    enter_square,
    follow,
    quarter,
)


@inner
def whole_eights(count: Any) -> Any:
    """Round up to a multiple of eight: what is left over would be done one by one, five times as slowly."""
    return (count + np.uintp(7)) // np.uintp(8) * np.uintp(8)


@inner
def hold(work: Any, k: Any) -> None:
    """Make ray k stand still in no light."""
    for i in range(RATES):
        work[RATE[0] + ROW * i + k] = 0
    for c in range(COLOURS):
        work[WEIGHT[0] + ROW * c + k] = 0


@inlined
def pick(work: Any, alive: Any, over: Any) -> Any:
    """List the rays that have ended, and return how many they are."""
    count = np.uintp(0)
    for k in range(alive):
        # No branch, which would often be guessed wrongly.
        over[count] = k
        count += np.uintp(work[OVER + k] > ZERO)
    return count


@inlined
def pack(work: Any, alive: Any, over: Any, count: Any, home: Any) -> Any:
    """Fill the places of rays that have ended from the back; return how many go on."""
    while count > np.uintp(0):
        count -= np.uintp(1)
        k = over[count]
        # From the back, so that the last one is known to go on.
        alive -= np.uintp(1)
        if k < alive:
            for i in range(KEPT):
                work[ROW * i + k] = work[ROW * i + alive]
            for c in range(COLOURS):
                work[TOTAL[0] + ROW * c + k] = work[TOTAL[0] + ROW * c + alive]
            home[k] = home[alive]
    return alive


@inner
def enter_rays(
    work: Any, first: Any, count: Any, place: Any, view: Any, kinds: Any, mouth: int, surround: Any
) -> None:
    """Bring rays from outside to where they enter the body; those that never do end in the surround."""
    left, top, fine = place
    for k in range(first, first + count):
        x, y = left + work[RIGHT + k] * fine, top - work[DOWN + k] * fine
        face, steps = enter(view, kinds, mouth, x, y)
        if face < 0:
            work[GONE + k] = ONE  # so that it ends at once, and properly: it has no light of its own
            for c in range(COLOURS):
                work[WEIGHT[0] + ROW * c + k], work[TOTAL[0] + ROW * c + k] = ZERO, surround[c]
            continue
        near = steps * work[LENGTH + k]
        for i in range(PLACES):
            work[HEIGHT[0] + ROW * i + k] = view[i, 0] + near * work[RATE[0] + ROW * i + k]
        for i in range(np.uintp(FACES)):
            work[HEIGHT[0] + ROW * i + k] = max(work[HEIGHT[0] + ROW * i + k], ZERO)
        work[GONE + k] = near


@inlined
def step(
    work: Any,
    alive: Any,
    over: Any,
    home: Any,
    sums: Any,
    body: Any,
    bounce: Any,
    card: Any,
    texture: Any,
    lights: Any,
    limits: Any,
) -> Any:
    """Follow all rays to the next face; return how many go on."""
    shape, half_width, half_height, _, _ = card
    products, slants, losses, joint = bounce
    spread, faintest = limits
    eights = whole_eights(alive)
    # Those that fill up the eights stand still in no light.
    for k in range(alive, eights):
        hold(work, k)
    meet(work, eights)
    if shape != FAR_END:
        meet_object(work, eights, shape, half_width, half_height)
        show_object(work, alive, card, spread, texture)
    ended = dim(work, eights, slants, losses, joint, spread, np.float32(body[1]), faintest)
    if ended > np.float32(eights - alive):
        count = pick(work, alive, over)
        end_rays(work, over, count, home, sums, body, card, spread, texture, lights)
        alive = pack(work, alive, over, count, home)
    turn(work, whole_eights(alive), products)
    return alive


@inlined
def column(squares: Any, s: int, which: Any, factor: float) -> tuple[Any, ...]:
    """A column of a square's table, times a factor, as float32."""
    return (
        np.float32(squares[s, 0, which] * factor),
        np.float32(squares[s, 1, which] * factor),
        np.float32(squares[s, 2, which] * factor),
        np.float32(squares[s, 3, which] * factor),
        np.float32(squares[s, 4, which] * factor),
        np.float32(squares[s, 5, which] * factor),
        np.float32(squares[s, 6, which] * factor),
        np.float32(squares[s, 7, which] * factor),
        np.float32(squares[s, 8, which] * factor),
        np.float32(squares[s, 9, which] * factor),
    )


@inner
def load_square(work: Any, first: Any, count: Any, squares: Any, s: int, most: int) -> None:
    """Put the rays of a square into a packet, each at the mirror that the square has come through."""
    part = 1.0 / (squares[s, PLACE, SIZE] - 1)
    start = column(squares, s, EYE, 1.0)
    looks = (
        column(squares, s, CORNER, 1.0),
        column(squares, s, ACROSS, part),
        column(squares, s, DOWNWARDS, part),
    )
    through = (ZERO, ONE, ZERO, ZERO)
    face = int(squares[s, PLACE, LAST])
    if face >= 0:
        through = (
            np.float32(squares[s, face, EYE]),
            np.float32(squares[s, face, CORNER]),
            np.float32(squares[s, face, ACROSS] * part),
            np.float32(squares[s, face, DOWNWARDS] * part),
        )
    light = (
        np.float32(squares[s, LIGHT, 0]),
        np.float32(squares[s, LIGHT, 1]),
        np.float32(squares[s, LIGHT, 2]),
    )
    load(work, first, count, start, looks, through, light, np.float32(most - squares[s, LIGHT, 3]))


@inner
def order() -> Any:
    """Rays of a square of 8 by 8 pixels, see `tile.SHARE`, in such an order that each quarter's come together.

    So the first sixteen are those of a square of 4.
    """
    rays = np.ones((4, SIDE * SIDE))
    for k in range(SIDE * SIDE):
        rays[0, k] = (k & 1) | (k >> 1 & 2) | (k >> 2 & 4)
        rays[1, k] = (k >> 1 & 1) | (k >> 2 & 2) | (k >> 3 & 4)
    return rays


@inner
def measure(rays: Any, count: Any, left: float, top: float, fine: float) -> None:
    """Work out how long a step of each ray of a square is; no joint has taken of it yet."""
    for k in range(count):
        x, y = left + rays[0, k] * fine, top - rays[1, k] * fine
        rays[2, k] = math.sqrt(1.0 + x * x + y * y)
        rays[3, k] = 1


@inner
def surround_square(sums: Any, of_row: Any, y: int, of_column: Any, x: int, size: int, surround: Any) -> None:
    """Add the light around the opening to the pixels of a square; the sums have room for what sticks out."""
    for j in range(y, y + size):
        for i in range(x, x + size):
            for c in range(COLOURS):
                sums[of_row[j] + of_column[i] + c] += surround[c]


@inner
def write(out: Any, band: int, last: int, sums: Any, across: int, share: Any, table: Any) -> None:
    """Write a band of rows out as bytes."""
    top = np.float32(len(table) - 1)
    pixels, width = out.reshape(-1), np.uintp(out.shape[1])
    for row in range(min(WIDEST, last - band)):
        here, there = np.uintp(4 * across * row), np.uintp(COLOURS) * width * np.uintp(band + row)
        for k in range(width):
            for c in range(COLOURS):
                light = sums[here + np.uintp(4) * k + c] * share
                light = (
                    min(light, ONE) if light > ZERO else ZERO
                )  # what is no number must not lead out of the table
                pixels[there + COLOURS * k + c] = table[np.uint32(light * top + HALF)]


@compiled
def trace_rows(
    out: Any,
    first: int,
    last: int,
    samples: int,
    pixel: float,
    eye: Any,
    body: Any,
    glass: Any,
    bounds: Any,
    bounce: Any,
    card: Any,
    texture: Any,
    lights: Any,
    table: Any,
) -> None:
    """Trace rows `first` to `last` into `out`.

    Parameters
    ----------
    out : ndarray of uint8, shape (rows, columns, 3)
    samples : int
        Rays a pixel along each side.
    pixel : float
        Slope between neighbouring pixels.
    eye : tuple
        The eye's table, see `tile`, with a row more for each side of the opening; whether the eye is outside; light
        around the opening.
    body : tuple
        Kinds of the faces; how many are mirrors.
    glass : ndarray, shape (4, 17)
        For each mirror: products of its normal with the faces' normals, the object's axes, and upwards; one over
        the sine of its angle with each mirror that it shares an edge with, else 0; what a bounce takes of red,
        green and blue, negative.
    bounds : tuple
        Half the width of a joint's line; a radius around the object where it stands free, else −1; the faintest
        light that is followed; most bounces.
    bounce : tuple
        Products, slants, losses and half the width of a joint's line as tuples of float32, for `packet.turn` and
        `packet.dim`.
    card : tuple
        Shape of the object, half its width and height, and the picture's widths and heights a millimetre.
    texture : tuple
        Texels, and the starts, widths and heights of the copies: see `texture.Texture`.
    lights : ndarray of float32, shape (5, 3)
        Linear light of: room below, room above, backlight, dark, floor.
    table : ndarray of uint8
        sRGB bytes of linear light.
    """
    view, outside, surround = eye
    kinds, mirrors = body
    joint, radius, faintest, most = bounds
    rows, columns = out.shape[0] * samples, out.shape[1] * samples
    fine = pixel / samples
    limits = (joint, fine, radius, faintest, most)
    ray_limits = (np.float32(fine), np.float32(faintest))
    # Whole squares stick out of the view; the sums have room for that.
    across = (out.shape[1] + WIDEST - 1) // WIDEST * WIDEST
    sums = np.empty(4 * WIDEST * across, np.float32)
    of_column, of_row = np.empty(across * samples, np.uintp), np.empty(WIDEST * samples, np.uintp)
    for k in range(across * samples):
        of_column[k] = k // samples * 4
    for k in range(WIDEST * samples):
        of_row[k] = k // samples * 4 * across
    work, home, rays = np.zeros(ROWS * RAYS, np.float32), np.empty(RAYS, np.uintp), order()
    right, down = rays[0].astype(np.uintp), rays[1].astype(np.uintp)
    each, over = np.arange(RAYS).astype(np.uintp), np.empty(RAYS, np.uintp)
    ended, ends_at = np.zeros(ROWS * RAYS, np.float32), np.empty(RAYS, np.uintp)
    squares = np.empty((SLOTS, SQUARE_ROWS, 4))
    beside = across * samples // WIDEST
    alive = np.uintp(0)
    for band in range(first, last, WIDEST):
        for k in range(sums.size):
            sums[k] = ZERO
        band_y = band * samples
        number, count = 0, beside * ((min(WIDEST, last - band) * samples + WIDEST - 1) // WIDEST)
        s = -1
        while True:
            room = np.uintp(RAYS)  # once all squares are followed, go on until no ray is left
            if s >= 0 or number < count:
                x, y, size = number % beside * WIDEST, band_y + number // beside * WIDEST, WIDEST
                if s >= 0:
                    x, y = int(squares[s, PLACE, X]), int(squares[s, PLACE, Y])
                    size = int(squares[s, PLACE, SIZE])
                left, top = (x + 0.5 - 0.5 * columns) * fine, (0.5 * rows - y - 0.5) * fine
                reach = (size - 1) * fine
                corners = (left, left + reach, top, top - reach)
                if s < 0:
                    s = 0
                    number += 1
                    begin(squares, view, corners, x, y)
                if size == LEAST:
                    measure(rays, LEAST * LEAST, left, top, fine)
                why, face = ENDS, -1
                if outside and squares[s, PLACE, LAST] < 0:
                    why = enter_square(squares, s, view, kinds, mirrors, corners)
                if why == ENDS:
                    why, face = follow(squares, s, rays, corners, mirrors, glass, limits)
                if why == MISSES:
                    surround_square(sums, of_row, y - band_y, of_column, x, size, surround)
                if why in (MISSES, NOTHING):
                    s -= 1
                    continue
                if size > (SIDE if why == ENDS else LEAST):
                    s = quarter(squares, s, columns, rows)
                    continue
                if size > LEAST:
                    measure(rays, size * size, left, top, fine)
                room = np.uintp(size * size)
                to_row, to_column = np.uintp(y - band_y), np.uintp(x)
                if why == ENDS:
                    land(ended, room, squares, s, face, rays)
                    for k in range(room):
                        ends_at[k] = of_row[to_row + down[k]] + of_column[to_column + right[k]]
                    end_rays(ended, each, room, ends_at, sums, body, card, ray_limits[0], texture, lights)
                    s -= 1
                    continue
            while alive + room > np.uintp(RAYS):
                alive = step(work, alive, over, home, sums, body, bounce, card, texture, lights, ray_limits)
            if s < 0:
                break
            for k in range(room):
                work[RIGHT + alive + k], work[DOWN + alive + k] = rays[0, k], rays[1, k]
                work[LENGTH + alive + k], work[WEIGHT[0] + alive + k] = rays[2, k], rays[3, k]
                home[alive + k] = of_row[to_row + down[k]] + of_column[to_column + right[k]]
            load_square(work, alive, room, squares, s, most)
            if outside and squares[s, PLACE, LAST] < 0:
                enter_rays(work, alive, room, (left, top, fine), view, kinds, mirrors, surround)
            alive += room
            s -= 1
        write(out, band, last, sums, across, np.float32(1.0 / (samples * samples)), table)
