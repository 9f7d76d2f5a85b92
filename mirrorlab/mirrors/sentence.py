"""A finding as one sentence for a person."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from mirrorlab.mirrors.finding import Finding


def sentence(finding: Finding, style: str = "degrees") -> str:
    """The finding as one sentence, or two where a way out is known, its angle in a style of `write_angle`."""
    return {
        "closed": _closed,
        "closed-subdivided": _closed,
        "open": _open,
        "tube": _tube,
        "unbuildable": _unbuildable,
    }[finding.kind](finding) + _way_out(finding, style)


def _group(finding: Finding) -> str:
    symbols = finding.point_group
    families = " × ".join(finding.families)
    return families if symbols is None else f"{symbols.hermann_mauguin} ({families})"


def _lattice(finding: Finding) -> str:
    if finding.crystallographic:
        return "a lattice can carry it"
    pairs = [flag.letters for flag in finding.flags if flag.code == "no-lattice"]
    listed = " and ".join(part for part in (", ".join(pairs[:-1]), *pairs[-1:]) if part)
    return "no lattice can carry it" + (f", because of {listed}" if pairs else "")


def _closed(finding: Finding) -> str:
    order, mirrors, between = finding.order, finding.mirror_count, finding.chambers_between
    numbers = f"{order:,} images, {mirrors} mirror{'' if mirrors == 1 else 's'}"
    head = f"Closes as {_group(finding)}: {numbers}"
    if between is not None and between > 1:
        head = (
            f"Finite but cut up: {_group(finding)}, {numbers}, {between:,} chambers between the typed mirrors"
        )
    return f"{head}; {_lattice(finding)}."


def _open(finding: Finding) -> str:
    broken = finding.evidence.broken
    return f"Never closes: {broken[0]}." if broken else "Never closes."


def _tube(finding: Finding) -> str:
    tube = finding.tube
    assert tube is not None
    how = {
        "once": f"the images tile the {tube.fills} once",
        "subdivided": f"the images tile the {tube.fills}, with the region between the mirrors subdivided",
        "overlap": "the images overlap without end",
        "undetermined": f"the distances between the mirrors decide whether the images tile the {tube.fills}",
    }[tube.tiling]
    if tube.chambers is not None and tube.chambers > 1:
        how += f" into {tube.chambers} chambers"
    plane = f" ({tube.plane_group})" if tube.plane_group else ""
    moved = ""
    if tube.moved is not None:
        families = " × ".join(tube.moved_families)
        symbol = tube.moved_point_group
        name = families if symbol is None else f"{symbol.hermann_mauguin} ({families})"
        moved = f"; {moved_words(finding.rank)} the same planes make {name}"
    bounded = all(part.singular for part in finding.parts)
    heads = {1: "Parallel mirrors", 2: "A tube" if bounded else "A tube open on one side"}
    head = heads.get(finding.rank, "A cell" if bounded else "A cell open on one side")
    return f"{head}: {how}{plane}{moved}."


def moved_words(rank: int) -> str:
    """How the planes of a tube of a rank are moved to make a finite group."""
    return "moved " + {1: "onto one another", 2: "through one line"}.get(rank, "through one point")


def _unbuildable(finding: Finding) -> str:
    return "Cannot be built: no planes have these angles."


def _way_out(finding: Finding, style: str) -> str:
    if not finding.supplements:
        return ""
    way = finding.supplements[0]
    pair = way.changed_pairs[0]
    return f" With {pair} read as {way.angle_of(pair, style)} it closes as {way.name}."
