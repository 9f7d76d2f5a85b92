"""The cut sheet as a glazier sees it: nothing overlaps, nothing is cut off, every size is there."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.drawing.cutsheet import A4, cut_pages, cut_sheet
from mirrorlab.drawing.cutsheet_panel import degrees, inches, millimetres
from mirrorlab.drawing.dimension_lines import all_strokes, all_texts
from mirrorlab.drawing.lettering import Board, overlap, text_box, text_width, wrapped
from mirrorlab.drawing.sheet import Layer, Text
from mirrorlab.drawing.stock_sheet import stock_sheet
from mirrorlab.optics import corner, polygon, tube, wedge
from mirrorlab.optics.cautions import CAUTIONS
from mirrorlab.optics.cutjob import make_cut_job
from mirrorlab.optics.glass import JointSettings
from mirrorlab.optics.nesting import Stock

GLASS = "household glass"
JOBS = {
    "corner": lambda: make_cut_job(corner(["90", "60", "36"], opening=120), copies=2),
    "cut corner": lambda: make_cut_job(
        corner(["90", "60", "45"], 150, truncated=40, mirrors=GLASS, thickness=4)
    ),
    "small corner": lambda: make_cut_job(
        corner(["90", "60", "36"], opening=40, thickness=1), JointSettings.named("butted")
    ),
    "tube": lambda: make_cut_job(tube(["60", "60", "60"], 200, 55), JointSettings.named("butted")),
    "tapered tube": lambda: make_cut_job(
        tube(["60", "60", "60"], 250, 70, taper=0.4), JointSettings.named("square", gap=0.3)
    ),
    "rectangular tube": lambda: make_cut_job(
        tube(["90"] * 4, 180, [60, 40], mirrors=GLASS), JointSettings.named("butted"), Stock(600, 400, 10, 2)
    ),
    "wedge": lambda: make_cut_job(wedge("30", 200, 90)),
    "narrow wedge": lambda: make_cut_job(wedge("15", 60, 25, thickness=2), JointSettings.named("square")),
    "room": lambda: make_cut_job(tube(["60", "60", "60"], 2100, 1500, thickness=6, mirrors=GLASS)),
}


@pytest.fixture(scope="module", params=JOBS)
def job(request):
    return JOBS[request.param]()


def _segments(sheet):
    for stroke in all_strokes(sheet):
        points = np.vstack([stroke.points, stroke.points[:1]]) if stroke.closed else stroke.points
        for k in range(len(points) - 1):
            yield stroke.layer, points[k : k + 2]


@pytest.mark.parametrize("make", [cut_sheet, cut_pages])
def test_no_lettering_overlaps_lettering_or_a_line(job, make):
    sheet = make(job)
    boxes = [(text, text_box(text)) for text in all_texts(sheet)]
    bounds = np.array([[*box.min(axis=0), *box.max(axis=0)] for _, box in boxes])
    for k, (text, box) in enumerate(boxes):
        near = np.all((bounds[:k, :2] < bounds[k, 2:]) & (bounds[:k, 2:] > bounds[k, :2]), axis=1)
        for other in np.flatnonzero(near):
            assert not overlap(box, boxes[other][1]), (text.text, boxes[other][0].text)
    for layer, segment in _segments(sheet):
        low, high = segment.min(axis=0), segment.max(axis=0)
        near = np.all((bounds[:, :2] < high) & (bounds[:, 2:] > low), axis=1)
        for k in np.flatnonzero(near):
            assert not overlap(boxes[k][1], segment), (layer, boxes[k][0].text)


@pytest.mark.parametrize("make", [cut_sheet, cut_pages])
def test_everything_lies_on_the_sheet(job, make):
    sheet = make(job)
    points = [stroke.points for stroke in all_strokes(sheet)] + [text_box(t) for t in all_texts(sheet)]
    points = np.vstack(points)
    assert points.min() >= -1e-9
    assert points[:, 0].max() <= sheet.width + 1e-9
    assert points[:, 1].max() <= sheet.height + 1e-9


def test_nothing_crosses_from_page_to_page(job):
    sheet = cut_pages(job)
    if sheet.page is None:
        longest = max(polygon.side_lengths(pane.blank).max() for pane in job.panes)
        assert longest > min(A4)
        return
    pages = round(sheet.height / sheet.page[1])
    assert sheet.height == pytest.approx(pages * sheet.page[1])
    shapes = [stroke.points for stroke in all_strokes(sheet)] + [text_box(t) for t in all_texts(sheet)]
    for shape in shapes:
        low, high = (sheet.height - shape[:, 1].max()) / sheet.page[1], (sheet.height - shape[:, 1].min())
        assert int(low + 1e-9) == int(high / sheet.page[1] - 1e-9)


def test_the_outlines_are_the_blanks_at_true_size(job):
    sheet = cut_sheet(job)
    cuts = [stroke.points for stroke in sheet.strokes if stroke.layer is Layer.CUT and stroke.closed]
    assert len(cuts) == len(job.panes)
    for pane, outline in zip(job.panes, cuts, strict=True):
        assert np.allclose(outline - outline[0], pane.blank - pane.blank[0])


def test_every_length_and_angle_is_written_and_true(job):
    sheet = cut_sheet(job)
    for dimension in sheet.lengths:
        assert dimension.text == millimetres(dimension.measure)
    for dimension in sheet.angles:
        assert dimension.text == degrees(dimension.measure)
    written = sorted(dimension.text for dimension in sheet.lengths)
    for pane in job.panes:
        for length in polygon.side_lengths(pane.blank):
            assert millimetres(length) in written
        for angle in polygon.corner_angles(pane.blank):
            square = abs(angle - np.pi / 2) < np.radians(0.005)
            assert square or degrees(angle) in [dimension.text for dimension in sheet.angles]


def test_letters_marks_ruler_and_cautions_are_there(job):
    texts = cut_sheet(job).texts
    words = " ".join(text.text for text in texts)
    for pane in job.panes:
        assert any(text.text == pane.letter and text.bold for text in texts)
    assert words.count("mirror side up") >= len(job.panes)
    assert "100 mm across" in words
    ruler = [s for s in cut_sheet(job).strokes if s.layer is Layer.RULER]
    assert max(np.ptp(s.points[:, 0]) for s in ruler) == pytest.approx(100)
    assert max(np.ptp(s.points[:, 1]) for s in ruler) == pytest.approx(50)
    for title in ("Cut glass", "Sunlight", "Mirror rooms", "Disorientation", "Flashing light"):
        assert title in words
    said = " ".join(" ".join(t.text for t in texts if t.layer is Layer.CAUTION).split())
    glass = next(c for c in CAUTIONS if c.key == "cut-glass").text
    assert all(word in said for word in glass.split())


def test_bevels_are_marked_where_there_are_any(job):
    layers = {stroke.layer for stroke in cut_sheet(job).strokes}
    assert (Layer.BEVEL in layers) == any(side.longer_face for pane in job.panes for side in pane.sides)


def test_kerf_path_lies_half_a_kerf_outside():
    job = JOBS["rectangular tube"]()
    sheet = cut_sheet(job)
    paths = [s.points for s in sheet.strokes if s.layer is Layer.KERF and s.closed]
    cuts = [s.points for s in sheet.strokes if s.layer is Layer.CUT and s.closed]
    for path, cut in zip(paths, cuts, strict=True):
        assert path.min(axis=0) == pytest.approx(cut.min(axis=0) - 1.0)
        assert path.max(axis=0) == pytest.approx(cut.max(axis=0) + 1.0)


def test_lengths_in_inches():
    sheet = cut_sheet(JOBS["wedge"](), unit="in")
    assert {d.text for d in sheet.lengths} >= {inches(200.0)}
    assert inches(200.0) == "7.874″"


def test_stock_sheet_is_drawn_to_a_round_scale_and_says_so():
    job = JOBS["rectangular tube"]()
    full = stock_sheet(job.layout, "Stock")
    assert full.scale == 1
    small = stock_sheet(job.layout, "Stock", room=(190.0, 277.0))
    assert small.scale == pytest.approx(1 / 5)
    assert small.width <= 190
    assert any("1:5" in text.text for text in small.texts)
    for sheet in (full, small):
        outlines = [s.points for s in sheet.strokes if s.layer is Layer.CUT]
        area = sum(polygon.area(outline) for outline in outlines) / sheet.scale**2 / 1e6
        assert area == pytest.approx(job.layout.piece_area)
        words = " ".join(text.text for text in sheet.texts)
        assert f"{job.layout.waste_percent:.1f}\u00a0%" in words
        assert "m²" in words


def test_board_finds_the_free_place():
    board = Board()
    board.add_line(np.array([[-50.0, 0.0], [50.0, 0.0]]))
    on_line = Text(Layer.LETTERING, "abc", np.array([0.0, 0.0]), 3.0)
    above = Text(Layer.LETTERING, "abc", np.array([0.0, 6.0]), 3.0)
    assert board.place([on_line, above]) is above
    assert board.place([on_line, above]) is None


def test_wrapped_lines_keep_to_the_width():
    text = (
        "Use safety-backed or laminated mirror wherever someone can touch it, lean on it or fall against it."
    )
    for width in (40.0, 80.0, 200.0):
        lines = wrapped(text, 2.6, width)
        assert " ".join(lines) == text
        assert all(text_width(line, 2.6) <= width for line in lines)
