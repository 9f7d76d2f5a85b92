"""The chambers of finite groups whose angles are nearest to typed ones, for four mirrors or more.

Coxeter–Dynkin graphs are grown mirror by mirror: a graph is that of a finite group only if every part of it is,
so branches are cut early, and so are branches whose change is already larger than that of the best ones kept.
Where typed angles are obtuse, the search is made once more with the sides of some mirrors turned over, so that
120° can stay 120° and need not become 90°.
"""

from __future__ import annotations

import math
from fractions import Fraction
from itertools import combinations, product

import numpy as np
from numpy.typing import NDArray

from mirrorlab.mirrors.usable import usable_near

MOST_GRAPHS = 6
MOST_NODES = 3_000
"""Graphs looked at in one search before the best so far are taken (a quarter of a second for eight mirrors)."""

MOST_SLANTED = 3
"""A mirror of a finite group's chamber is never at a slant to more than three others."""

POSITIVE = 1e-9
"""What is left of a chamber's normal outside the span of the others is far above this (0.00008 at 0.5 degrees), and
rounding where nothing is left."""

HALF = Fraction(1, 2)
CONNECTED = (HALF, Fraction(1, 3), Fraction(1, 4), Fraction(1, 5))
"""Angles of the chambers of finite groups of rank 3 and more that do not split."""

UNCHANGED = 1e-9
"""Degrees; a smaller change of an angle is rounding of its fraction."""

Array = NDArray[np.float64]
Key = tuple[float, float]
Row = tuple[Key, tuple[Fraction, ...]]


def nearest_graphs(typed: Array, size: int) -> list[tuple[Fraction, ...]]:
    """Sets of angles of finite groups, nearest first for each choice of sides.

    Parameters
    ----------
    typed : ndarray, shape (n(n−1)/2,)
        Degrees, pair by pair.
    size : int
        Number n of mirrors.
    """
    found: list[tuple[Fraction, ...]] = []
    for turned in _choices_of_sides(typed, size):
        values = np.where(turned, 180 - typed, typed)
        found += [
            tuple(1 - f if over else f for f, over in zip(angles, turned, strict=True))
            for angles in _search(values, size)
        ]
    return found


def _choices_of_sides(typed: Array, size: int) -> list[NDArray[np.bool_]]:
    """Which pairs see one side turned over: none, and the choice that leaves least above 90°, if that is less."""
    pairs = np.array(list(combinations(range(size), 2)))
    choices: list[tuple[float, int, NDArray[np.bool_]]] = []
    for sides in product([False, True], repeat=size - 1):
        over = np.array([False, *sides])
        turned = over[pairs[:, 0]] != over[pairs[:, 1]]
        obtuse = float(np.maximum(np.where(turned, 180 - typed, typed) - 90, 0).sum())
        choices.append((obtuse, len(choices), turned))
    best = min(choices, key=lambda choice: choice[:2])
    return [choices[0][2]] if best[0] >= choices[0][0] else [choices[0][2], best[2]]


def _search(typed: Array, size: int) -> list[tuple[Fraction, ...]]:
    place = {pair: k for k, pair in enumerate(combinations(range(size), 2))}
    rows = [_rows([float(typed[place[i, new]]) for i in range(new)]) for new in range(size)]
    products = [np.array([[-math.cos(math.pi * f) for f in row] for _, row in some]) for some in rows]
    sizes = [np.array([key for key, _ in some]) for some in rows]
    # What the mirrors still to come must change at the least, so that hopeless starts are left early.
    rest = [(0.0, 0.0)] * (size + 1)
    for new in range(size - 1, 0, -1):
        least = sizes[new].min(axis=0)
        rest[new] = (max(rest[new + 1][0], float(least[0])), rest[new + 1][1] + float(least[1]))
    best: list[tuple[Key, tuple[Fraction, ...]]] = []
    nodes = 0

    def grow(chosen: tuple[tuple[Fraction, ...], ...], gram: Array, so_far: Key) -> None:
        nonlocal nodes
        new = len(chosen)
        if new == size:
            best.append((so_far, tuple(chosen[j][i] for i, j in place)))
            best.sort(key=lambda item: item[0])
            del best[MOST_GRAPHS:]
            return
        # A new mirror fits in front of the old ones when its normal has something left outside their span.
        left = 1 - ((products[new] @ np.linalg.inv(gram)) * products[new]).sum(axis=1)
        largest = np.maximum(sizes[new][:, 0], max(so_far[0], rest[new + 1][0]))
        total = sizes[new][:, 1] + so_far[1] + rest[new + 1][1]
        fits = left > POSITIVE
        if len(best) == MOST_GRAPHS:
            worst, most = best[-1][0]
            fits &= (largest < worst) | ((largest == worst) & (total < most))
        for k in np.flatnonzero(fits):
            if len(best) == MOST_GRAPHS and (largest[k], total[k]) >= best[-1][0]:
                continue
            nodes += 1
            if nodes > MOST_NODES:
                return
            key = (max(so_far[0], float(sizes[new][k, 0])), so_far[1] + float(sizes[new][k, 1]))
            grown = np.eye(new + 1)
            grown[:new, :new] = gram
            grown[:new, new] = grown[new, :new] = products[new][k]
            grow((*chosen, rows[new][k][1]), grown, key)

    grow(((),), np.eye(1), (0.0, 0.0))
    return [angles for _, angles in best]


def _kept(value: float) -> tuple[Fraction, ...]:
    """The angle itself, where it is 180°/m: one that stays as typed may be narrower than a changed one."""
    m = round(180 / value) if value else 0
    return (Fraction(1, m),) if m > 1 and abs(180 / m - value) <= UNCHANGED else ()


def _rows(typed: list[float]) -> list[Row]:
    """Angles of a new mirror with each earlier one, with their largest and total change, smallest first."""
    rows: list[tuple[Key, tuple[Fraction, ...], int]] = [((0.0, 0.0), (), 0)]
    for value in typed:
        near = {*CONNECTED, *(f for f in usable_near(value) if f.numerator == 1), *_kept(value)}
        changes = [(abs(float(180 * f) - value), f) for f in near]
        rows = [
            ((max(largest, change), total + change), (*row, f), slanted + (f != HALF))
            for (largest, total), row, slanted in rows
            for change, f in changes
            if slanted + (f != HALF) <= MOST_SLANTED
        ]
    return sorted((key, row) for key, row, _ in rows)
