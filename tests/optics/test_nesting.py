"""Layouts on stock sheets: nothing overlaps, nothing stands over, every cut goes through, waste adds up."""

from __future__ import annotations

import time

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from mirrorlab.optics import polygon
from mirrorlab.optics.nesting import Cutting, NestingError, Piece, Stock, nest

SQUARE = np.array([(0, 0), (100, 0), (100, 100.0), (0, 100)])
TRIANGLE = np.array([(0, 0), (100, 0), (50, 80.0)])
TRAPEZIUM = np.array([(0, 0), (200, 0), (160, 60.0), (40, 60)])
NEEDLE = np.array([(0, 0), (300, 0), (290, 25.0)])


def _apart(one, other):
    """Distance of two convex outlines; negative when they overlap."""
    normals = np.vstack([-polygon.inward_normals(one), -polygon.inward_normals(other)])
    normals = np.vstack([normals, -normals])
    depth = float(np.max((other @ normals.T).min(axis=0) - (one @ normals.T).max(axis=0)))
    return depth if depth <= 0 else min(_corner_to_side(one, other), _corner_to_side(other, one))


def _corner_to_side(corners, outline):
    sides = polygon.side_vectors(outline)
    apart = corners[:, None] - outline[None]
    along = np.clip((apart * sides).sum(axis=2) / (sides * sides).sum(axis=1), 0, 1)
    return float(np.linalg.norm(apart - along[..., None] * sides, axis=2).min())


def _check(layout, pieces):
    stock = layout.stock
    names = [(p.name, p.copy) for s in layout.sheets for p in s.placements]
    assert sorted(names) == sorted((piece.name, k + 1) for piece in pieces for k in range(piece.count))
    shapes = {piece.name: piece.outline for piece in pieces}
    for sheet in layout.sheets:
        for i, placed in enumerate(sheet.placements):
            back = polygon.turned(placed.outline, -placed.angle)
            assert np.allclose(back - back[0], shapes[placed.name] - shapes[placed.name][0], atol=1e-6)
            assert placed.outline.min() >= stock.margin - 1e-5
            assert np.all(
                placed.outline.max(axis=0) <= np.array([stock.width, stock.height]) - stock.margin + 1e-5
            )
            for other in sheet.placements[:i]:
                assert _apart(placed.outline, other.outline) >= stock.kerf - 1e-5
    total = sum(piece.count * polygon.area(piece.outline) for piece in pieces) / 1e6
    assert layout.piece_area == pytest.approx(total)
    assert layout.waste_area == pytest.approx(len(layout.sheets) * stock.width * stock.height / 1e6 - total)
    assert layout.waste_percent == pytest.approx(100 * (1 - total / layout.sheet_area))


@pytest.mark.parametrize("cutting", Cutting)
@pytest.mark.parametrize("kerf", [0.0, 3.0])
def test_layout_of_mixed_panels(cutting, kerf):
    pieces = [Piece("a", TRIANGLE, 5), Piece("b", TRAPEZIUM, 4), Piece("c", SQUARE, 3), Piece("d", NEEDLE, 3)]
    layout = nest(pieces, Stock(600, 400, 10, kerf, cutting))
    _check(layout, pieces)


@given(
    st.lists(
        st.tuples(st.floats(30, 180), st.floats(20, 120), st.floats(-40, 200), st.integers(1, 3)),
        min_size=1,
        max_size=4,
    ),
    st.sampled_from(list(Cutting)),
    st.floats(0, 5),
)
@settings(max_examples=30, deadline=None)
def test_any_triangles_are_laid_out_cleanly(shapes, cutting, kerf):
    pieces = [
        Piece("abcd"[i], np.array([(0, 0), (base, 0), (lean, high)]), count)
        for i, (base, high, lean, count) in enumerate(shapes)
    ]
    _check(nest(pieces, Stock(500, 350, 5, kerf, cutting)), pieces)


def test_straight_cuts_part_every_piece_without_crossing_one():
    """Make the cuts one after the other: at the end each part of the sheet holds one piece."""
    pieces = [Piece("a", TRIANGLE, 6), Piece("b", TRAPEZIUM, 4), Piece("c", SQUARE, 2)]
    layout = nest(pieces, Stock(600, 400, 10, 2.0))
    for sheet in layout.sheets:
        groups = [list(range(len(sheet.placements)))]
        for start, stop in sheet.cuts:
            across = np.array([stop[1] - start[1], start[0] - stop[0]])
            across /= np.linalg.norm(across)
            after = []
            for group in groups:
                levels = [(sheet.placements[i].outline - start) @ across for i in group]
                right = [i for i, level in zip(group, levels, strict=True) if level.min() >= -1e-6]
                left = [i for i, level in zip(group, levels, strict=True) if level.max() <= 1e-6]
                crossed = len(right) + len(left) < len(group)
                if crossed:  # this cut belongs to another strip, whose pieces lie beyond its ends
                    low, high = sorted((start[1], stop[1]))
                    outlines = np.vstack([sheet.placements[i].outline for i in group])
                    assert outlines[:, 1].min() >= high - 1e-6 or outlines[:, 1].max() <= low + 1e-6
                    after.append(group)
                else:
                    after += [part for part in (left, right) if part]
            groups = after
        assert all(len(group) == 1 for group in groups)


def test_squares_that_fit_exactly_waste_nothing():
    for cutting in Cutting:
        layout = nest([Piece("a", SQUARE, 12)], Stock(400, 300, 0, 0, cutting))
        assert len(layout.sheets) == 1
        assert layout.waste_percent == pytest.approx(0, abs=1e-9)


def test_triangles_stand_head_to_foot():
    for cutting in Cutting:
        layout = nest([Piece("a", TRIANGLE, 5)], Stock(300, 80, 0, 0, cutting))
        assert len(layout.sheets) == 1, cutting


def test_free_cutting_never_needs_more_glass_than_straight():
    for shapes in ((TRIANGLE, TRAPEZIUM), (NEEDLE, SQUARE), (TRAPEZIUM, NEEDLE)):
        pieces = [Piece("a", shapes[0], 7), Piece("b", shapes[1], 5)]
        used = []
        for cutting in (Cutting.FREE, Cutting.STRAIGHT):
            layout = nest(pieces, Stock(500, 350, 5, 2, cutting))
            used.append((len(layout.sheets), layout.sheets[-1].top))
        assert used[0] <= used[1]


def test_a_long_piece_is_turned_to_fit():
    layout = nest([Piece("a", np.array([(0, 0), (20, 0), (20, 390.0), (0, 390)]), 2)], Stock(400, 60, 5))
    assert len(layout.sheets) == 1


def test_remnant_is_what_is_left_at_the_top():
    layout = nest([Piece("a", SQUARE, 2)], Stock(400, 300, 10, 0))
    assert layout.remnant == pytest.approx((400, 190))
    assert layout.waste_percent_without_remnant == pytest.approx(100 * (1 - 20000 / (400 * 110)))


def test_too_large_and_nonsense_are_named():
    with pytest.raises(NestingError, match=r"panel a \(100 x 100 mm\).*larger stock"):
        nest([Piece("a", SQUARE)], Stock(110, 110, 10))
    with pytest.raises(NestingError, match="nothing to lay out"):
        nest([], Stock(110, 110, 10))
    with pytest.raises(NestingError, match="greater than 0"):
        Stock(0, 100)
    with pytest.raises(NestingError, match="margin"):
        Stock(100, 100, 50)
    with pytest.raises(NestingError, match="negative"):
        Stock(100, 100, 5, -1)


def test_sixty_pieces_are_laid_out_in_seconds():
    started = time.perf_counter()
    for cutting in Cutting:
        nest([Piece("a", TRIANGLE, 40), Piece("b", TRAPEZIUM, 20)], Stock(1200, 800, 10, 1, cutting))
    assert time.perf_counter() - started < 30
