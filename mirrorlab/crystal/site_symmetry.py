"""The oriented symbol of a subgroup: ``m.m2``, ``.3m``, ``4m.m``.

One place for each set of equivalent symmetry directions of the parent group, in the order of its
Hermann–Mauguin symbol, a dot where the subgroup has no symmetry. The rules are those of International Tables
for Crystallography, volume A (from memory): directions of one set that the subgroup keeps apart are written
one after the other.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from math import atan2, pi

import numpy as np

from mirrorlab.crystal.identify import Element, classify
from mirrorlab.crystal.operations import ROUND_OFF, Operation
from mirrorlab.crystal.pointgroups import NamedGroup

_SECONDARY_HEXAGONAL = {(1, 0, 0), (0, 1, 0), (1, 1, 0)}


def oriented_symbol(group: NamedGroup, members: Iterable[int]) -> str:
    """Symbol of the subgroup made of the operations `members` (indices into ``group.operations``).

    Groups without blocks of directions (triclinic, monoclinic, icosahedral) get the plain symbol.
    """
    operations = [group.operations[index] for index in members]
    if group.name.system in ("triclinic", "monoclinic") or group.name.family.startswith("I"):
        return classify([element.matrix for element in operations], group.basis).hermann_mauguin
    directions = _directions(operations)
    if not directions:
        return "-1" if any(element.kind == "-1" for element in operations) else "1"
    blocks: list[list[Element]] = [[], [], []]
    seen: set[tuple[float, ...]] = set()
    for axis, element in directions.items():
        if axis not in seen:
            seen |= {_nearest(_image(axis, op), directions) for op in operations}
            blocks[_block(group, axis)].append(element)
    alone = len(directions) == 1
    cubic = group.name.system == "cubic"
    return "".join(_block_symbol(block, alone, cubic, bool(blocks[1])) or "." for block in blocks)


def _directions(operations: Sequence[Operation]) -> dict[tuple[float, ...], Element]:
    facts: dict[tuple[float, ...], list] = {}
    for op in operations:
        if op.axis is None:
            continue
        fact = facts.setdefault(_nearest(op.axis, facts), [1, 0, False])
        if op.kind == "m":
            fact[2] = True
        elif op.proper:
            fact[0] = max(fact[0], op.fold)
        else:
            fact[1] = max(fact[1], op.fold)
    return {axis: Element(np.asarray(axis, float), *fact) for axis, fact in facts.items()}


def _image(axis: tuple[float, ...], op: Operation) -> tuple[float, ...]:
    moved = op.matrix @ np.asarray(axis)
    return tuple(moved.tolist())


def _nearest(axis: tuple[float, ...], known: Iterable[tuple[float, ...]]) -> tuple[float, ...]:
    """The known axis that is this line, whichever way it points; itself when none is."""
    row = np.asarray(axis, float)
    for other in known:
        if min(np.abs(row - other).max(), np.abs(row + other).max()) < ROUND_OFF:
            return other
    return axis


def _block(group: NamedGroup, axis: tuple[float, ...]) -> int:
    system = group.name.system
    used = [value for value in axis if abs(value) > ROUND_OFF]
    if system == "cubic":
        return (0, 2, 1)[len(used) - 1]
    if system == "orthorhombic":
        return int(np.argmax(np.abs(axis)))
    if abs(axis[2]) > ROUND_OFF:
        return 0
    if system == "tetragonal":
        return len(used)
    if group.hexagonal:
        return 1 if tuple(axis) in _SECONDARY_HEXAGONAL else 2
    # Without a lattice: the secondary directions stand at multiples of 2π/N from x, N even.
    period = group.name.principal * (1 if group.name.principal % 2 == 0 else 2)
    steps = (atan2(axis[1], axis[0]) % pi) * period / (2 * pi)
    return 1 if abs(steps - round(steps)) < 0.25 else 2


def _block_symbol(block: list[Element], alone: bool, cubic: bool, threefold: bool) -> str:
    def short(element: Element) -> str:
        # A mirror across an axis is enough where others stand beside it: mmm, not 2/m2/m2/m; m-3m, not 4/m-3m.
        whole = element.symbol
        shortened = (whole == "2/m" and not alone) or (whole == "4/m" and cubic and threefold)
        return "m" if shortened else whole

    def rank(element: Element) -> tuple[int, bool]:
        symbol = short(element)
        if symbol in ("2", "m"):
            # Cubic sets are written as in mm2, the others as in 2m.
            return 0, symbol == ("2" if cubic else "m")
        return -max(element.rotation, element.rotoinversion), False

    return "".join(short(element) for element in sorted(block, key=rank))
