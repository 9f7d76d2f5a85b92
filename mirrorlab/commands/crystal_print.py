"""Point groups, forms and candidates printed for a person."""

from __future__ import annotations

from typing import TYPE_CHECKING

from mirrorlab.commands.output import computed, print_table

if TYPE_CHECKING:
    from mirrorlab.crystal.candidates import Candidates
    from mirrorlab.crystal.combinations import Combination
    from mirrorlab.crystal.pointgroups import NamedGroup
    from mirrorlab.crystal.positions import GroupOrbit

SHOWN = 48
"""Operations and equivalent points printed for a person; all of them go into a file or JSON."""


def print_group(group: NamedGroup, with_subgroups: bool, with_forms: bool, operations: bool) -> None:
    """A point group for a person."""
    from mirrorlab.crystal.lattices import lattices_of
    from mirrorlab.crystal.positions import positions_of
    from mirrorlab.crystal.relations import LARGEST_LISTED, subgroups_among_the_32, supergroups_among_the_32

    facts = [
        word for word, true in (("centrosymmetric", group.centrosymmetric), ("polar", group.polar)) if true
    ]
    facts += ["chiral"] if group.chiral else []
    print(f"{group.setting}  {group.schoenflies}  order {group.order}  {group.name.system}")
    lattices = lattices_of(group)
    rows = [
        ("axes", group.axes),
        ("Laue class", group.laue_class),
        ("kind", ", ".join(facts) or "neither centrosymmetric, polar nor chiral"),
        ("mirrors", f"{len(group.mirrors)}, generating {group.mirror_subgroup.hermann_mauguin}"),
    ]
    if group.order <= LARGEST_LISTED:
        rows.append(("subgroups", " ".join(subgroups_among_the_32(group)) or "none"))
    rows.append(("supergroups", " ".join(supergroups_among_the_32(group)) or "none"))
    if lattices.required:
        rows.append(("lattices", " ".join(row.symbol for row in lattices.required)))
        rows.append(("more symmetric ones", " ".join(row.symbol for row in lattices.also) or "none"))
    print_table(rows)
    if operations:
        print("\noperations")
        print_table([(str(k), one.text, one.triplet) for k, one in enumerate(group.operations[:SHOWN], 1)])
        _more(group.order)
    print("\npositions")
    print_table(
        [
            (str(row.multiplicity), row.site_symmetry, row.place, _some(row.triplets))
            for row in positions_of(group)
        ]
    )
    if with_subgroups:
        print_subgroups(group)
    if with_forms:
        print_forms(group)


def print_subgroups(group: NamedGroup) -> None:
    """The classes of subgroups for a person."""
    from mirrorlab.crystal.relations import subgroups

    print("\nsubgroups: symbol, oriented, index, how many alike")
    print_table(
        [
            (
                row.name.hermann_mauguin,
                row.oriented,
                f"index {row.index}",
                "normal" if row.conjugates == 1 else f"{row.conjugates} conjugates",
                "maximal" if row.maximal else "",
            )
            for row in subgroups(group)
        ]
    )


def print_forms(group: NamedGroup) -> None:
    """One form of each kind for a person."""
    from mirrorlab.crystal.forms import forms_of

    print("\nforms")
    print_table(
        [
            (
                made.symbol,
                f"{made.face_count}",
                made.name,
                "closed" if made.closed else "open",
                made.kind,
                f"face symmetry {made.face_symmetry}",
            )
            for made in forms_of(group)
        ]
    )


def print_orbit(group: NamedGroup, orbit: GroupOrbit, shown: int) -> None:
    """Equivalent points for a person."""
    count = len(orbit.points)
    print(f"\n{count} equivalent point{'s' if count > 1 else ''}; site symmetry {orbit.site_symmetry}")
    print(f"axes: {orbit.axes}")
    if not shown:
        return
    rows = [("point", "x", "y", "z", "operation", "triplet")]
    for k, (point, index) in enumerate(zip(orbit.points[:shown], orbit.operations[:shown], strict=True), 1):
        element = group.operations[index]
        rows.append((str(k), *(f"{value + 0.0:+.6f}" for value in point), element.text, element.triplet))
    print_table(rows)
    _more(count)


def print_combination(made: Combination, faces: bool, style: str) -> None:
    """Forms and the solid they make, for a person; angles in a style of `mirrorlab.angles.write_angle`."""
    for one, distance, share in zip(made.forms, made.distances, made.area_shares, strict=True):
        others = f" ({', '.join(one.other_names)})" if one.other_names else ""
        print(f"{one.symbol} of {one.group}: {one.name}{others}")
        rows = [
            ("faces", f"{one.face_count}, {'closed' if one.closed else 'open'}"),
            ("kind", f"{one.kind}, face symmetry {one.face_symmetry}"),
            ("eigensymmetry", one.eigensymmetry),
        ]
        if len(made.forms) > 1:
            rows.append(("distance", f"{distance:g}"))
            rows.append(("part of the surface", f"{100 * share:.1f} %"))
        print_table(rows)
        if faces:
            print("  " + " ".join(one.face_labels))
    if len(made.forms) > 1:
        print("together: " + ("closed" if made.closed else "open"))
    for symbol in made.hidden:
        print(f"{symbol} does not show: other forms lie nearer to the centre")
    if made.edge_angles:
        print("\nangles between the normals of neighbouring faces")
        print_table(
            [
                (row.first, row.second, computed(row.degrees, style, ".4f"), f"{row.edges} edges")
                for row in made.edge_angles
            ]
        )


def print_candidates(found: Candidates) -> None:
    """Candidates and what decides between them, for a person."""
    symbol = found.mirror_group.hermann_mauguin
    print("no mirrors at all" if symbol == "1" else f"the mirrors generate {symbol}")
    for title, group in (
        ("exactly these mirrors", found.exactly),
        ("these mirrors and more", found.at_least),
    ):
        if group:
            print(f"\n{title}")
            print_table(
                [
                    (
                        one.group.hermann_mauguin,
                        one.group.schoenflies,
                        one.group.name.system,
                        f"order {one.group.order}",
                        f"{len(one.group.mirrors)} mirrors",
                    )
                    for one in group
                ]
            )
    if found.decisions:
        print("\nwhat decides")
        for decision in found.decisions:
            print(f"  {decision.sentence}")


def _some(texts: tuple[str, ...], most: int = 6) -> str:
    more = f" … {len(texts) - most} more" if len(texts) > most else ""
    return "  ".join(texts[:most]) + more


def _more(count: int) -> None:
    if count > SHOWN:
        print(f"  … {count - SHOWN:,} more; --json or --csv FILE has all")
