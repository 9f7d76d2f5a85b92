"""A packet of rays: where they meet a face, what that takes of their light, and how they turn.

Rays that can no longer be followed as one square (see `tile`) are followed in packets. A ray keeps, for every face,
its height above it and how fast that changes, and the same for its place along the object's three axes. A bounce
updates the rates by a table of products, so no vector is reflected and no plane is intersected anew. All that a
packet keeps stands in one array, row by row, and the loops over its rays have no branches: so the compiler can do
eight at once.

Import this only to trace: numba takes a moment to load.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from mirrorlab.optics.compiled import inner

FAR_END, CARD, BALL = 0, 1, 2
"""Shapes of the object: closing the far end, or standing free."""

FACES, MIRRORS = 6, 4
"""A body has at most so many faces (a tube of four mirrors with two ends), and so many mirrors."""

SIDE, RAYS = 8, 192
"""Rays of 8 by 8 pixels come into a packet at once; its rows stay in the first-level cache."""


def _rows(first: int, count: int) -> tuple[np.uintp, ...]:
    # Unsigned, so that numba adds no step for negative indices, which would keep the loops from being widened.
    return tuple(np.uintp(RAYS * row) for row in range(first, first + count))


# Where the rows of a packet begin: heights above the faces, place along the object's axes, the rates of both, the
# rate upwards, what is left of red, green and blue, the way gone, how many bounces are left, the face met next, the
# time to it, time to the object, whether the ray ends there, the light gathered; pixels right and down in the square
# that the ray comes from, length of a step there.
HEIGHT, PLACE = _rows(0, 6), _rows(6, 3)
RATE, DRIFT, (RISE,) = _rows(9, 6), _rows(15, 3), _rows(18, 1)
WEIGHT, (GONE, LEFT, HIT, TIME, MET, OVER), TOTAL = _rows(19, 3), _rows(22, 6), _rows(28, 3)
(RIGHT, DOWN, LENGTH), ROWS = _rows(31, 3), 34
ROW, PLACES, RATES, COLOURS, KEPT = (np.uintp(k) for k in (RAYS, 9, 10, 3, 25))

NEVER, ZERO, ONE, TWO, HALF = np.float32(1e30), np.float32(0), np.float32(1), np.float32(2), np.float32(0.5)
THINNEST = np.float32(1e-30)
"""Width of a ray that ends where it sets out, at an eye in the opening: shares of nothing would be no numbers."""

FIRST, SECOND, THIRD, FOURTH, FIFTH, SIXTH = (np.float32(k) for k in range(6))


@inner
def load(
    work: Any, begin: Any, count: Any, start: Any, looks: Any, through: Any, weight: Any, left: Any
) -> None:
    """Put `count` rays into a packet from place `begin` on; rows RIGHT and DOWN hold their slopes.

    Parameters
    ----------
    start : tuple of 9 float32
        Heights of the eye above the faces, and its place along the object's axes.
    looks : tuple of 3 tuples of 10 float32
        How forward, right and up change these, and how far each points upwards.
    through : tuple of 4 float32
        Where the rays set out, once they have gone straight on from the eye: the eye's height above that face, and
        how forward, right and up change it.
    weight : tuple of 3 float32
        What is left of red, green and blue.
    left : float32
        Bounces that they may still make.
    """
    f, r, u = looks
    for k in range(begin, begin + count):
        sx, sy = work[RIGHT + k], work[DOWN + k]
        scale = ONE / work[LENGTH + k]
        gone = -through[0] / ((through[1] + sx * through[2] + sy * through[3]) * scale)
        r0 = (f[0] + sx * r[0] + sy * u[0]) * scale
        r1 = (f[1] + sx * r[1] + sy * u[1]) * scale
        r2 = (f[2] + sx * r[2] + sy * u[2]) * scale
        r3 = (f[3] + sx * r[3] + sy * u[3]) * scale
        r4 = (f[4] + sx * r[4] + sy * u[4]) * scale
        r5 = (f[5] + sx * r[5] + sy * u[5]) * scale
        x = (f[6] + sx * r[6] + sy * u[6]) * scale
        y = (f[7] + sx * r[7] + sy * u[7]) * scale
        z = (f[8] + sx * r[8] + sy * u[8]) * scale
        work[RATE[0] + k], work[RATE[1] + k], work[RATE[2] + k] = r0, r1, r2
        work[RATE[3] + k], work[RATE[4] + k], work[RATE[5] + k] = r3, r4, r5
        work[DRIFT[0] + k], work[DRIFT[1] + k], work[DRIFT[2] + k] = x, y, z
        work[RISE + k] = (f[9] + sx * r[9] + sy * u[9]) * scale
        work[HEIGHT[0] + k] = max(start[0] + gone * r0, ZERO)
        work[HEIGHT[1] + k] = max(start[1] + gone * r1, ZERO)
        work[HEIGHT[2] + k] = max(start[2] + gone * r2, ZERO)
        work[HEIGHT[3] + k] = max(start[3] + gone * r3, ZERO)
        work[HEIGHT[4] + k] = max(start[4] + gone * r4, ZERO)
        work[HEIGHT[5] + k] = max(start[5] + gone * r5, ZERO)
        work[PLACE[0] + k] = start[6] + gone * x
        work[PLACE[1] + k] = start[7] + gone * y
        work[PLACE[2] + k] = start[8] + gone * z
        work[GONE + k] = gone
    for k in range(begin, begin + count):
        share = work[WEIGHT[0] + k]
        work[WEIGHT[0] + k], work[WEIGHT[1] + k] = share * weight[0], share * weight[1]
        work[WEIGHT[2] + k] = share * weight[2]
        work[TOTAL[0] + k], work[TOTAL[1] + k], work[TOTAL[2] + k] = ZERO, ZERO, ZERO
        work[LEFT + k] = left


@inner
def sooner(height: Any, rate: Any, face: Any, best: Any, which: Any) -> tuple[Any, Any]:
    """Return the time to this face and its number if it is met sooner than the best so far."""
    reach = height / -rate
    reach = reach if rate < ZERO else NEVER
    which = face if reach < best else which
    return min(reach, best), which


@inner
def meet(work: Any, alive: Any) -> None:
    """Find the face that each ray meets first."""
    for k in range(alive):
        best, which = sooner(work[HEIGHT[0] + k], work[RATE[0] + k], FIRST, NEVER, -ONE)
        best, which = sooner(work[HEIGHT[1] + k], work[RATE[1] + k], SECOND, best, which)
        best, which = sooner(work[HEIGHT[2] + k], work[RATE[2] + k], THIRD, best, which)
        best, which = sooner(work[HEIGHT[3] + k], work[RATE[3] + k], FOURTH, best, which)
        best, which = sooner(work[HEIGHT[4] + k], work[RATE[4] + k], FIFTH, best, which)
        best, which = sooner(work[HEIGHT[5] + k], work[RATE[5] + k], SIXTH, best, which)
        work[TIME + k] = best
        work[HIT + k] = which


@inner
def along_edge(height: Any, slant: Any, nearest: Any) -> Any:
    """Return how far a point on a mirror is from the nearest joint; a slant of 0 is no joint."""
    away = height * slant
    away = away if slant > ZERO else NEVER
    return min(away, nearest)


@inner
def dim(
    work: Any, alive: Any, slants: Any, losses: Any, joint: Any, spread: Any, mirrors: Any, faintest: Any
) -> Any:
    """Go to the faces met; take the light that a mirror takes, and that falls on the line of a joint.

    Parameters
    ----------
    slants : tuple of 4 tuples of 4 float32
        One over the sine of the angle between mirrors that share an edge, else 0.
    losses : tuple of 4 tuples of 3 float32
        What a bounce takes of red, green and blue, negative.
    mirrors : float32
        Faces from this number on are no mirrors: rays end there, as do those that have become too faint
        or have made all their bounces.

    Returns
    -------
    float32
        How many rays end.
    """
    a, b, c, d = slants
    red, green, blue = losses
    ended = ZERO
    for k in range(alive):
        time, hit = work[TIME + k], work[HIT + k]
        first = ONE if hit == FIRST else ZERO
        second = ONE if hit == SECOND else ZERO
        third = ONE if hit == THIRD else ZERO
        fourth = ONE if hit == FOURTH else ZERO
        h0 = max(work[HEIGHT[0] + k] + time * work[RATE[0] + k], ZERO)
        h1 = max(work[HEIGHT[1] + k] + time * work[RATE[1] + k], ZERO)
        h2 = max(work[HEIGHT[2] + k] + time * work[RATE[2] + k], ZERO)
        h3 = max(work[HEIGHT[3] + k] + time * work[RATE[3] + k], ZERO)
        nearest = along_edge(h0, first * a[0] + second * a[1] + third * a[2] + fourth * a[3], NEVER)
        nearest = along_edge(h1, first * b[0] + second * b[1] + third * b[2] + fourth * b[3], nearest)
        nearest = along_edge(h2, first * c[0] + second * c[1] + third * c[2] + fourth * c[3], nearest)
        nearest = along_edge(h3, first * d[0] + second * d[1] + third * d[2] + fourth * d[3], nearest)
        work[HEIGHT[0] + k], work[HEIGHT[1] + k] = h0, h1
        work[HEIGHT[2] + k], work[HEIGHT[3] + k] = h2, h3
        work[HEIGHT[4] + k] = max(work[HEIGHT[4] + k] + time * work[RATE[4] + k], ZERO)
        work[HEIGHT[5] + k] = max(work[HEIGHT[5] + k] + time * work[RATE[5] + k], ZERO)
        work[PLACE[0] + k] += time * work[DRIFT[0] + k]
        work[PLACE[1] + k] += time * work[DRIFT[1] + k]
        work[PLACE[2] + k] += time * work[DRIFT[2] + k]
        gone = work[GONE + k] + time
        work[GONE + k] = gone
        wide = max(gone * spread, THINNEST)
        share = min(joint, nearest + HALF * wide) - max(-joint, nearest - HALF * wide)
        keep = max(ONE - max(share, ZERO) / wide, ZERO)
        one = first * red[0] + second * red[1] + third * red[2] + fourth * red[3]
        two = first * green[0] + second * green[1] + third * green[2] + fourth * green[3]
        three = first * blue[0] + second * blue[1] + third * blue[2] + fourth * blue[3]
        one = work[WEIGHT[0] + k] * (keep * (ONE + one))
        two = work[WEIGHT[1] + k] * (keep * (ONE + two))
        three = work[WEIGHT[2] + k] * (keep * (ONE + three))
        work[WEIGHT[0] + k], work[WEIGHT[1] + k], work[WEIGHT[2] + k] = one, two, three
        left = work[LEFT + k] - ONE
        work[LEFT + k] = left
        over = (hit >= mirrors) | (hit < ZERO) | (left <= ZERO) | (max(one, max(two, three)) < faintest)
        over = ONE if over else ZERO
        work[OVER + k] = over
        ended += over
    return ended


@inner
def turn(work: Any, alive: Any, products: Any) -> None:
    """Reflect the rays that met a mirror.

    Parameters
    ----------
    products : tuple of 4 tuples of 10 float32
        For each mirror: products of its normal with the faces' normals, the object's axes, and upwards.
    """
    a, b, c, d = products
    for k in range(alive):
        hit = work[HIT + k]
        p = TWO * work[RATE[0] + k] if hit == FIRST else ZERO
        q = TWO * work[RATE[1] + k] if hit == SECOND else ZERO
        r = TWO * work[RATE[2] + k] if hit == THIRD else ZERO
        s = TWO * work[RATE[3] + k] if hit == FOURTH else ZERO
        work[RATE[0] + k] -= p * a[0] + q * b[0] + r * c[0] + s * d[0]
        work[RATE[1] + k] -= p * a[1] + q * b[1] + r * c[1] + s * d[1]
        work[RATE[2] + k] -= p * a[2] + q * b[2] + r * c[2] + s * d[2]
        work[RATE[3] + k] -= p * a[3] + q * b[3] + r * c[3] + s * d[3]
        work[RATE[4] + k] -= p * a[4] + q * b[4] + r * c[4] + s * d[4]
        work[RATE[5] + k] -= p * a[5] + q * b[5] + r * c[5] + s * d[5]
        work[DRIFT[0] + k] -= p * a[6] + q * b[6] + r * c[6] + s * d[6]
        work[DRIFT[1] + k] -= p * a[7] + q * b[7] + r * c[7] + s * d[7]
        work[DRIFT[2] + k] -= p * a[8] + q * b[8] + r * c[8] + s * d[8]
        work[RISE + k] -= p * a[9] + q * b[9] + r * c[9] + s * d[9]


@inner
def meet_object(work: Any, alive: Any, shape: int, half_width: Any, half_height: Any) -> None:
    """Find where the rays meet the object that stands free, a ball or a card; `NEVER` where they miss it."""
    for k in range(alive):
        x, y, z = work[PLACE[0] + k], work[PLACE[1] + k], work[PLACE[2] + k]
        dx, dy, dz = work[DRIFT[0] + k], work[DRIFT[1] + k], work[DRIFT[2] + k]
        b = x * dx + y * dy + z * dz
        q = x * x + y * y + z * z - half_width * half_width
        root = b * b - q
        ball = -b - math.sqrt(max(root, ZERO))
        ball = ball if (root > ZERO) & (b < ZERO) & (q > ZERO) else NEVER
        card = -z / dz
        inside = (abs(x + card * dx) <= half_width) & (abs(y + card * dy) <= half_height)
        card = card if (card > ZERO) & inside else NEVER
        work[MET + k] = ball if shape == BALL else card
