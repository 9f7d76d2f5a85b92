"""A finding printed for a person: the sentence, the angles as read, the group, flags, what closes nearby, evidence."""

from __future__ import annotations

from mirrorlab.angles import Angle, write_angle
from mirrorlab.commands.output import print_table
from mirrorlab.mirrors import Arrangement, Finding, ReflectionGroup
from mirrorlab.mirrors.sentence import moved_words, sentence
from mirrorlab.mirrors.suggestions import Suggestion

ROUNDED = 9
"""Decimals of a degree that a difference of two angles keeps: less is rounding of doubles, and no minute or second."""


def print_finding(arrangement: Arrangement, finding: Finding, style: str = "degrees") -> None:
    """The finding: what a person needs first, each part only where it has something to say.

    `style` is a style of `mirrorlab.angles.write_angle`.
    """
    print(sentence(finding, style))
    print(f"\nkind: {finding.kind}    rank: {finding.rank}")
    print_angles(arrangement, finding, style)
    if finding.group is not None:
        print_group(finding, finding.group)
    if finding.tube is not None:
        print_tube(finding)
    if finding.flags:
        print("\nflags")
        for flag in finding.flags:
            print(f"  {flag.reason_in(style)}")
    print_ways("the same planes with one angle read from the other side", finding.supplements, style)
    print_ways("nearest that close or tile", finding.suggestions, style)


def print_angles(arrangement: Arrangement, finding: Finding, style: str) -> None:
    """The angles as they were read."""
    if not arrangement.angles:
        return
    print("\nangles as read")
    rows = [
        ("pair", "typed", "closing fraction", "" if style == "pi" else "that is", "off by", "4cos²", "order")
    ]
    for name, angle, (_, value, order) in zip(
        arrangement.pair_names, arrangement.angles, finding.evidence.four_cos, strict=True
    ):
        closes = angle.fraction is not None
        rows.append(
            (
                name,
                angle.text,
                write_angle(angle, "pi") if closes else "none",
                write_angle(angle, style) if closes and style != "pi" else "",
                _off(angle, style),
                f"{value:.6g}",
                "∞" if order is None else str(order),
            )
        )
    print_table(rows)


def _off(angle: Angle, style: str) -> str:
    """How far the value is from its closing fraction, where it need not be 0."""
    if angle.fraction is None or angle.source not in ("rounded", "measured"):
        return ""
    off = angle.degrees - float(180 * angle.fraction)
    if off == 0:
        return "0°"
    if angle.source != "measured":
        return _change(off, style, 3)
    return f"{_change(off, style, 3)} ({off / angle.uncertainty:+.1f}σ)"


def _change(degrees: float, style: str, digits: int) -> str:
    """A change of an angle, with its sign; in degrees, or in degrees, minutes and seconds where these are asked for."""
    if style != "dms":
        return f"{degrees:+.{digits}g}°"
    return ("-" if degrees < 0 else "+") + write_angle(abs(round(degrees, ROUNDED)), style)


def print_group(finding: Finding, group: ReflectionGroup) -> None:
    """The group's numbers, its graph and its walls."""
    print("\ngroup")
    rows = [("families", " × ".join(group.families) or "none")]
    symbols, rotations = finding.point_group, finding.rotation_group
    if symbols is not None:
        rows.append(("point group", f"{symbols.hermann_mauguin}, {symbols.schoenflies}"))
    turning = "" if rotations is None else f", {rotations.hermann_mauguin}, {rotations.schoenflies}"
    rows += [
        ("order", f"{group.order:,}"),
        ("mirrors", f"{group.mirror_count:,}"),
        ("rotations", f"{group.rotation_order:,}{turning}"),
        ("degrees", " ".join(map(str, group.degrees))),
        ("exponents", " ".join(map(str, group.exponents))),
        ("Coxeter number", " and ".join(map(str, group.coxeter_numbers))),
        ("−1 in the group", "yes" if group.contains_inversion else "no"),
        ("graph", coxeter_graph(group)),
    ]
    walls = [f"{a} = {w}" for a, w in zip(group.letters, finding.wall_words, strict=True) if a != w]
    if walls:
        rows.append(("walls of the chamber", ", ".join(group.letters) + " with " + ", ".join(walls)))
    print_table(rows)


def coxeter_graph(group: ReflectionGroup) -> str:
    """The Coxeter–Dynkin graph in one line: its edges with the order of the product, then walls that stand alone.

    An edge is written a–b for order 3 and a–5–b for order 5; walls at right angles have no edge.
    """
    orders, letters = group.coxeter_matrix, group.letters
    edges, joined = [], set()
    for i in range(group.rank):
        for j in range(i + 1, group.rank):
            if orders[i, j] > 2:
                label = "–" if orders[i, j] == 3 else f"–{orders[i, j]}–"
                edges.append(f"{letters[i]}{label}{letters[j]}")
                joined |= {i, j}
    alone = [letters[i] for i in range(group.rank) if i not in joined]
    return "  ".join(edges + alone)


def print_tube(finding: Finding) -> None:
    """What a tube's images fill, and the group its planes make through one point."""
    tube = finding.tube
    if tube is None:
        return
    print("\ntube")
    rows = [("direction", tube.direction), ("images fill", f"the {tube.fills}"), ("tiling", tube.tiling)]
    if tube.plane_group is not None:
        rows.append(("plane group", tube.plane_group))
    if tube.chambers is not None:
        rows.append(("chambers between", str(tube.chambers)))
    if tube.moved is not None:
        symbols = tube.moved_point_group
        names = " × ".join(tube.moved_families)
        text = names if symbols is None else f"{symbols.hermann_mauguin} ({names})"
        rows.append((moved_words(finding.rank), f"{text}, order {tube.moved_order}"))
    print_table(rows)


def print_ways(title: str, ways: tuple[Suggestion, ...], style: str) -> None:
    """Sets of angles that close, in the order of the pairs, with the change of each."""
    if not ways:
        return
    print(f"\n{title}")
    rows = [("angles", "makes", "chambers between", "change")]
    for way in ways:
        changes = dict(zip(way.pair_names, way.changes, strict=True))
        change = ", ".join(f"{pair} {_change(changes[pair], style, 4)}" for pair in way.changed_pairs)
        rows.append((" ".join(way.texts(style)), way.name, str(way.chambers_between), change or "none"))
    print_table(rows)


def print_evidence(arrangement: Arrangement, finding: Finding) -> None:
    """Gram matrix, determinant, bounds, and what breaks them."""
    evidence = finding.evidence
    print("\nevidence\n  Gram matrix (−cos of the angles)")
    _print_matrix(arrangement.letters, [[f"{v + 0.0:.6f}" for v in row] for row in evidence.gram])
    print_table(
        [
            ("determinant", f"{evidence.determinant:.9g}"),
            ("eigenvalues", "  ".join(f"{value:.6g}" for value in evidence.eigenvalues)),
            *[("bound", bound) for bound in evidence.bounds],
            *[("broken", broken) for broken in evidence.broken],
        ]
    )
    if evidence.witness is not None:
        one, other, apart = evidence.witness
        print(f"  mirrors {one} and {other} stand {apart:.6g}° apart")
    if finding.group is not None:
        print("  Cartan matrix of the chamber's walls")
        _print_matrix(
            finding.group.letters, [[f"{v + 0.0:.6g}" for v in row] for row in finding.group.cartan]
        )


def _print_matrix(letters: tuple[str, ...], rows: list[list[str]]) -> None:
    """A matrix with the mirrors' letters at its head and side."""
    print_table([("", *letters), *[(a, *row) for a, row in zip(letters, rows, strict=True)]], indent="    ")
