"""A square of pixels followed as one: its rays stay together as long as its four corners meet the same faces.

Instead of turning the rays at a mirror, the body and everything in it is mirrored: the rays then go straight on
from the eye, and past each mirror stands a mirrored body. The directions in which a face of it is seen through
the faces before it make a convex cone, so where all four corners of a square see a face, every ray between them
does. Only squares that an edge runs through are quartered, and the smallest of them followed ray by ray: see
`packet`.

A table has a row for each face, for the object's three axes, and for upwards. It says how high the eye is above the
face (or where it is along the axis), and how much going one step forward, right and up adds to that. A square's own
table says, instead of the last three, how much one step towards its first corner adds, and how much more it is
towards the next corner across and down. What is linear stays so when all is mirrored.

Squares wait in one array, and are named by their place in it: numba counts the references to every array or part
of one that is passed on, which alone took a tenth of the time.

Import this only to trace: numba takes a moment to load.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from mirrorlab.optics.compiled import inlined, inner
from mirrorlab.optics.packet import FACES, MIRRORS

WIDEST = 16
"""Pixels along a side of a square that is first tried as one."""

LEAST = 4
"""Pixels along a side of a square that is not quartered further: of a smaller one the corners are all there is."""

SLOTS = 12
"""Squares that can wait at once: three for each time that one is quartered, and the one in hand."""

AXES = FACES + 4
"""Rows of a square's table. Below it are its light (what is left of red, green, blue, and bounces) and its place."""

LIGHT, PLACE, SQUARE_ROWS = AXES, AXES + 1, AXES + 2
X, Y, SIZE, LAST = range(4)
"""Its place: the first pixel, pixels along a side, the face that it comes through (−1: the eye is inside)."""

EYE, CORNER, ACROSS, DOWNWARDS = (np.intp(k) for k in range(4))
"""Columns of a square's table; of numpy's type, or a function that takes one would be compiled for each."""

RIGHT, DOWN, LENGTH, SHARE = range(4)
"""Rows of a square's rays: pixels right and down, length of a step, what the lines of joints leave of its light."""

OFF, LOSS = FACES + 4, FACES + 8
"""Where slants and losses begin in a mirror's row: see `kernel.trace_rows`."""

SPLIT, ENDS, NOTHING, MISSES = range(4)
"""Its corners differ; it meets what is no mirror; it brings no more light; it passes the opening by."""

FARTHEST = 1e30

ROOM = 1  # value of `body.Face`; a compiled function takes plain numbers


@inner
def enter(view: Any, kinds: Any, mouth: int, x: float, y: float) -> tuple[int, float]:
    """Say through which face a ray from outside comes into the body, and after how many steps.

    A number below zero says why it does not. Rays with the same number make a convex cone, as do those that come
    in through the same face.

    Parameters
    ----------
    view : ndarray, shape (10 + w, 4)
        The eye's table, with a row more for each side of the opening in the mouth.
    """
    near, far, front, back = 0.0, FARTHEST, -1, -1
    for i in range(len(kinds)):
        height, change = view[i, 0], view[i, 1] + x * view[i, 2] + y * view[i, 3]
        if height < 0:
            if change <= 0:
                return -1 - i, 0.0
            if -height / change > near:
                near, front = -height / change, i
        elif change < 0 and height / -change < far:
            far, back = height / -change, i
    if near >= far:
        return -1 - FACES * (1 + front) - back, 0.0
    if kinds[front] != ROOM:
        return -1 - FACES * (1 + FACES) - front, 0.0
    if front == mouth:
        for i in range(AXES, len(view)):
            if view[i, 0] + near * (view[i, 1] + x * view[i, 2] + y * view[i, 3]) < 0:
                return -1 - FACES * (2 + FACES) - i, 0.0
    return front, near


@inner
def enter_square(squares: Any, s: int, view: Any, kinds: Any, mouth: int, corners: Any) -> int:
    """Bring a square from outside into the body; `ENDS` where it comes in."""
    left, right, top, bottom = corners
    face = enter(view, kinds, mouth, left, top)[0]
    for k in range(1, 4):
        x, y = right if k & 1 else left, bottom if k & 2 else top
        if enter(view, kinds, mouth, x, y)[0] != face:
            return SPLIT
    squares[s, PLACE, LAST] = face
    return MISSES if face < 0 else ENDS


@inlined
def agree(squares: Any, s: int, glass: Any, lengths: Any) -> tuple[int, float, float]:
    """Return the face that all four corners meet first, −1 if they differ.

    Returns also how near the square comes to a joint there, and how far its farthest corner has gone. Both are
    extreme at a corner: the one is linear on the face, the other convex.
    """
    # No branches where they would often be guessed wrongly. Faces that are not there are never met nor crossed.
    best, which = FARTHEST, -1
    for i in range(FACES):
        change = squares[s, i, CORNER]
        steps = squares[s, i, EYE] / -change
        steps = steps if change < 0 else FARTHEST
        which = i if steps < best else which
        best = min(steps, best)
    if which < 0:
        return -1, 0.0, 0.0
    first = squares[s, which, CORNER]
    second, third = first + squares[s, which, ACROSS], first + squares[s, which, DOWNWARDS]
    fourth = second + squares[s, which, DOWNWARDS]
    if (second >= 0) | (third >= 0) | (fourth >= 0):
        return -1, 0.0, 0.0
    height, least, nearest, row = squares[s, which, EYE], FARTHEST, FARTHEST, min(which, MIRRORS - 1)
    a, b, c, d = best, height / -second, height / -third, height / -fourth
    for i in range(FACES):
        # Where a corner meets the face, no other face has been crossed: all heights are over zero.
        height, first, down = squares[s, i, EYE], squares[s, i, CORNER], squares[s, i, DOWNWARDS]
        second = first + squares[s, i, ACROSS]
        lowest = min(
            min(height + a * first, height + b * second),
            min(height + c * (first + down), height + d * (second + down)),
        )
        lowest = lowest if i != which else FARTHEST
        least = min(least, lowest)
        if i < MIRRORS:
            slant = glass[row, OFF + i]
            away = lowest * slant if slant > 0 else FARTHEST
            nearest = min(nearest, away)
    if least < 0:
        return -1, 0.0, 0.0
    farthest = max(max(a * lengths[0], b * lengths[1]), max(c * lengths[2], d * lengths[3]))
    return which, nearest, farthest


@inlined
def may_see_object(squares: Any, s: int, reach: float, radius: float) -> bool:
    """Whether a ray within `reach` (a difference of slopes) of the middle may meet a ball around the object's."""
    distance = along = length = 0.0
    for i in range(FACES, FACES + 3):
        place = squares[s, i, EYE]
        change = squares[s, i, CORNER] + 0.5 * (squares[s, i, ACROSS] + squares[s, i, DOWNWARDS])
        distance += place * place
        along += place * change
        length += change * change
    across = max(distance - along * along / length, 0.0)
    widened = radius + reach * math.sqrt(distance)
    return widened * widened >= distance or (along < 0 and across <= widened * widened)


@inlined
def line(squares: Any, s: int, row: int) -> tuple[float, float, float, float]:
    """A row of a square's table."""
    return squares[s, row, EYE], squares[s, row, CORNER], squares[s, row, ACROSS], squares[s, row, DOWNWARDS]


@inlined
def off(mirror: Any, slant: float, x: float, y: float, steps: float) -> float:
    """How far from the joint with a mirror a ray arrives; a slant of 0 is no joint."""
    away = slant * (mirror[0] + steps * (mirror[1] + x * mirror[2] + y * mirror[3]))
    return away if slant > 0 else FARTHEST


@inner
def take_joints(squares: Any, s: int, face: int, glass: Any, limits: Any, rays: Any, count: int) -> None:
    """Take the light that falls on the lines of joints from each ray of one of the smallest squares."""
    joint, fine = limits[0], limits[1]
    part = 1.0 / (LEAST - 1)
    here, a, b = line(squares, s, face), line(squares, s, 0), line(squares, s, 1)
    c, d = line(squares, s, 2), line(squares, s, 3)
    slants = (glass[face, OFF], glass[face, OFF + 1], glass[face, OFF + 2], glass[face, OFF + 3])
    # No branches, and a count that only the caller knows: so the compiler can do four at once.
    for k in range(count):
        x, y = part * rays[RIGHT, k], part * rays[DOWN, k]
        steps = -here[0] / (here[1] + x * here[2] + y * here[3])
        nearest = min(
            min(off(a, slants[0], x, y, steps), off(b, slants[1], x, y, steps)),
            min(off(c, slants[2], x, y, steps), off(d, slants[3], x, y, steps)),
        )
        wide = steps * fine * rays[LENGTH, k]
        share = min(joint, nearest + 0.5 * wide) - max(-joint, nearest - 0.5 * wide)
        rays[SHARE, k] *= max(1 - max(share, 0.0) / wide, 0.0)


@inlined
def reflect(squares: Any, s: int, face: int, glass: Any) -> None:
    """Mirror the body in one of its faces."""
    a, b, c, d = squares[s, face, 0], squares[s, face, 1], squares[s, face, 2], squares[s, face, 3]
    for i in range(AXES):
        twice = 2 * glass[face, i]
        squares[s, i, 0] -= twice * a
        squares[s, i, 1] -= twice * b
        squares[s, i, 2] -= twice * c
        squares[s, i, 3] -= twice * d


@inlined
def follow(
    squares: Any, s: int, rays: Any, corners: Any, mirrors: int, glass: Any, limits: Any
) -> tuple[int, int]:
    """Follow a square as far as its corners go together; return why no further, and the face met if it ends.

    Parameters
    ----------
    squares : ndarray, shape (slots, 12, 4)
    s : int
        Slot of the square.
    rays : ndarray, shape (4, 64)
        Of its rays, where it is one of the smallest.
    corners : tuple of 4 floats
        Slopes: left, right, top, bottom.
    glass : ndarray, shape (4, 17)
        Products, slants and losses of the mirrors: see `kernel.trace_rows`.
    limits : tuple
        Half the width of a joint's line, slope between neighbouring rays, a radius around the object where it
        stands free (else −1), the faintest light, most bounces.
    """
    joint, fine, radius, faintest, most = limits
    left, right, top, bottom = corners
    reach = 0.5 * math.sqrt((right - left) ** 2 + (top - bottom) ** 2)
    lengths = (
        math.sqrt(1 + left * left + top * top),
        math.sqrt(1 + right * right + top * top),
        math.sqrt(1 + left * left + bottom * bottom),
        math.sqrt(1 + right * right + bottom * bottom),
    )
    while True:
        if radius >= 0 and may_see_object(squares, s, reach, radius):
            return SPLIT, -1
        face, nearest, farthest = agree(squares, s, glass, lengths)
        if face < 0:
            return SPLIT, -1
        if face >= mirrors:
            return ENDS, face
        # What a joint takes begins half a pixel beside its line.
        if nearest < joint + 0.5 * farthest * fine:
            if squares[s, PLACE, SIZE] > LEAST:
                return SPLIT, -1
            take_joints(squares, s, face, glass, limits, rays, int(squares[s, PLACE, SIZE]) ** 2)
        brightest = 0.0
        for c in range(3):
            squares[s, LIGHT, c] *= 1 + glass[face, LOSS + c]
            brightest = max(brightest, squares[s, LIGHT, c])
        squares[s, LIGHT, 3] += 1
        if brightest < faintest or squares[s, LIGHT, 3] >= most:
            return NOTHING, -1
        squares[s, PLACE, LAST] = face
        reflect(squares, s, face, glass)


@inner
def begin(squares: Any, view: Any, corners: Any, x: int, y: int) -> None:
    """Put one of the widest squares, as the eye sees it, into the first slot."""
    left, right, top, bottom = corners
    for i in range(AXES):
        squares[0, i, EYE] = view[i, 0]
        squares[0, i, CORNER] = view[i, 1] + left * view[i, 2] + top * view[i, 3]
        squares[0, i, ACROSS] = (right - left) * view[i, 2]
        squares[0, i, DOWNWARDS] = (bottom - top) * view[i, 3]
    for c in range(3):
        squares[0, LIGHT, c] = 1
    squares[0, LIGHT, 3] = 0
    squares[0, PLACE, X], squares[0, PLACE, Y] = x, y
    squares[0, PLACE, SIZE], squares[0, PLACE, LAST] = WIDEST, -1


@inner
def quarter(squares: Any, s: int, columns: int, rows: int) -> int:
    """Put the quarters of a square that lie in the view in its place; return the last one's slot."""
    size, last = squares[s, PLACE, SIZE], s
    half, part = size // 2, (size // 2 - 1) / (size - 1)
    for k in range(3, -1, -1):
        right, down = half if k & 1 else 0.0, half if k & 2 else 0.0
        if k and (squares[s, PLACE, X] + right >= columns or squares[s, PLACE, Y] + down >= rows):
            continue
        # The first quarter is the last to be made, for it takes the square's own place.
        to = s
        if k:
            last += 1
            to = last
        across, below = right / (size - 1), down / (size - 1)
        for i in range(AXES):
            more = across * squares[s, i, ACROSS] + below * squares[s, i, DOWNWARDS]
            squares[to, i, EYE] = squares[s, i, EYE]
            squares[to, i, CORNER] = squares[s, i, CORNER] + more
            squares[to, i, ACROSS] = part * squares[s, i, ACROSS]
            squares[to, i, DOWNWARDS] = part * squares[s, i, DOWNWARDS]
        for c in range(4):
            squares[to, LIGHT, c] = squares[s, LIGHT, c]
        squares[to, PLACE, X], squares[to, PLACE, Y] = (
            squares[s, PLACE, X] + right,
            squares[s, PLACE, Y] + down,
        )
        squares[to, PLACE, SIZE], squares[to, PLACE, LAST] = half, squares[s, PLACE, LAST]
    return last
