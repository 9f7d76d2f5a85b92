"""Images, tolerances and chances as text."""

from __future__ import annotations

from typing import TYPE_CHECKING

from mirrorlab.commands.output import computed, print_table

if TYPE_CHECKING:
    from mirrorlab.optics.images import ImageCount
    from mirrorlab.optics.montecarlo import SeamChances
    from mirrorlab.optics.tolerance import Tolerance

BAR = 40
"""Letters of the longest bar of a histogram."""

MOST_LISTED = 60


def print_images(count: ImageCount, listed: bool, notes: tuple[str, ...]) -> None:
    """Print how many images there are, how bright, and what the seams do."""
    print(count.sentence)
    if count.rule is not None:
        print(f"the rule of two mirrors (common practice) gives {count.rule}")
    print("\nby bounces")
    rows = [["bounces", "images", "brightest"]]
    rows += [[str(bounces), str(images), f"{bright:.1%}"] for bounces, images, bright in count.by_bounces()]
    print_table(rows)
    print("\naround the edges, from the eye")
    for edge in count.edges:
        print(f"  {edge.sentence}")
    if count.overlaps:
        worst = count.overlaps[0]
        names = " and ".join(word or "the space itself" for word in (worst.first, worst.second))
        more = " at least" if len(count.overlaps) >= 200 else ""
        print(
            f"\nimages that overlap:{more} {len(count.overlaps)} pairs, most {names} ({worst.share:.0%} of one)"
        )
    if listed:
        _list(count)
    for note in (*notes, *count.notes):
        print(f"\nnote: {note}")


def _list(count: ImageCount) -> None:
    print("\nimages")
    rows = [["word", "x", "y", "z", "bounces", "brightness", "seen"]]
    for image in count.images[:MOST_LISTED]:
        place = [f"{value:.2f}" for value in image.position]
        seen = "yes" if image.seen else "no"
        rows.append([image.word, *place, str(image.bounces), f"{image.brightness:.1%}", seen])
    print_table(rows)
    if count.count > MOST_LISTED:
        print(f"  … and {count.count - MOST_LISTED} more; --csv or --json has them all")


def print_tolerance(found: Tolerance, style: str) -> None:
    """Print what is left over, the seams, and what is allowed; angles in a style of `mirrorlab.angles.write_angle`."""
    print(f"{found.intent.kind}, seams at {found.distance:g} mm: {found.sentence}")
    heads = ["edge", "meant", "actual", "off", "sectors", "left over", "seam mm"]
    if found.limit is not None:
        heads.append("allowed alone")
    rows = [heads]
    for edge in found.edges:
        row = [
            edge.pair,
            computed(edge.intended, style, ".6g"),
            computed(edge.actual, style, ".6g"),
            f"{edge.error:+.4f}°",
            str(edge.sectors),
        ]
        row += [f"{edge.leftover:+.4f}°", f"{edge.seam:+.3f}"]
        if found.limit is not None:
            row.append("" if edge.allowed is None else f"±{edge.allowed:.4f}°")
        rows.append(row)
    print_table(rows)
    for edge in found.edges:
        if edge.always:
            meant = computed(edge.intended, style, ".6g")
            print(f"  {edge.pair}: {meant} is not 180°/m, so its images meet in a seam even when exact")
    if found.whole is not None:
        whole = found.whole
        print(
            f"around the corner, {whole.rounds} rounds of {whole.word}: {whole.leftover:.4f}° left over,"
            f" seam {whole.seam:.3f} mm"
        )
        if whole.worst > 0:
            one, two = whole.worst_words
            print(
                f"at worst {whole.worst:.4f}° between {one} and {two}, which should be one image:"
                f" {whole.worst_seam:.3f} mm"
            )
    if found.returns is not None:
        print(
            f"as a corner reflector: a beam returns {found.returns.centre_line:.4f}° off along the centre line,"
            f" at worst {found.returns.worst:.4f}°"
        )
    for note in found.notes:
        print(f"note: {note}")


def print_chances(chances: SeamChances, limit: float | None) -> None:
    """Print the histogram."""
    print(f"\n{chances.sentence} (seed {chances.seed})")
    if limit is not None:
        print(f"  {chances.share_below(limit):.1%} stay within {limit:g} mm")
    top = max(int(chances.counts.max()), 1)
    rows = [["seam mm", "assemblies", ""]]
    for low, high, count in zip(chances.edges[:-1], chances.edges[1:], chances.counts, strict=True):
        rows.append([f"{low:.2f}–{high:.2f}", str(int(count)), "▪" * round(BAR * int(count) / top)])
    print_table(rows)
