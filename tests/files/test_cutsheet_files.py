"""Cut sheets on disk: read back by other programs' libraries and measured."""

from __future__ import annotations

import re
import shutil
import subprocess
import xml.etree.ElementTree as ET

import numpy as np
import pytest

from mirrorlab.drawing.cutsheet import cut_pages, cut_sheet
from mirrorlab.drawing.lettering import CAP_HEIGHT, text_width
from mirrorlab.drawing.sheet import LOOKS, Layer, Sheet, Stroke, Text
from mirrorlab.drawing.stock_sheet import stock_sheet
from mirrorlab.files.cutsheet_dxf import sheets_dxf, write_dxf
from mirrorlab.files.cutsheet_pdf import OVERLAP, PAGES, PdfError, printable, register_marks, tiles, write_pdf
from mirrorlab.files.cutsheet_svg import sheet_svg, write_svg
from mirrorlab.files.whole import FileError
from mirrorlab.optics import corner, polygon, tube
from mirrorlab.optics.cutjob import make_cut_job
from mirrorlab.optics.glass import JointSettings
from mirrorlab.optics.nesting import Stock


@pytest.fixture(scope="module")
def job():
    return make_cut_job(corner(["90", "60", "36"], opening=120), stock=Stock(600, 400, 10, 1), copies=2)


@pytest.fixture(scope="module")
def dxf(job, tmp_path_factory):
    import ezdxf

    path = tmp_path_factory.mktemp("dxf") / "corner.dxf"
    write_dxf([cut_sheet(job), stock_sheet(job.layout, "Stock sheets")], path)
    return ezdxf.readfile(path)


def test_dxf_is_sound_in_millimetres_with_named_layers(dxf):
    audit = dxf.audit()
    assert not audit.errors
    assert not audit.fixes
    assert dxf.header["$INSUNITS"] == 4
    names = {layer.dxf.name for layer in dxf.layers}
    assert {layer.value for layer in Layer} <= names
    used = {entity.dxf.layer for entity in dxf.modelspace()}
    assert used <= {layer.value for layer in Layer}
    assert {
        "CUT",
        "BEVEL",
        "COATED_FACE",
        "DIMENSION",
        "LETTERING",
        "MIRROR_SIDE",
        "RULER",
        "CAUTION",
    } <= used
    assert dxf.layers.get("COATED_FACE").dxf.linetype == "COATED_FACE"


def test_dxf_outlines_measure_as_the_blanks(dxf, job):
    outlines = [
        np.array(e.get_points("xy")) for e in dxf.modelspace().query('LWPOLYLINE[layer=="CUT"]') if e.closed
    ]
    panes = [pane.blank for pane in job.panes]
    pieces = [p.outline for sheet in job.layout.sheets for p in sheet.placements]
    assert len(outlines) == len(panes) + len(pieces)
    for outline, blank in zip(outlines, panes + pieces, strict=True):
        assert polygon.side_lengths(outline) == pytest.approx(polygon.side_lengths(blank), abs=1e-6)
        assert polygon.corner_angles(outline) == pytest.approx(polygon.corner_angles(blank), abs=1e-8)
        assert polygon.area(outline) > 0


def test_dxf_dimensions_are_real_and_measure_true(dxf, job):
    dimensions = dxf.modelspace().query("DIMENSION")
    lengths = sorted(d.get_measurement() for d in dimensions if d.dimtype == 0)
    angles = sorted(d.get_measurement() for d in dimensions if d.dimtype == 5)
    wanted_lengths = sorted(x for pane in job.panes for x in polygon.side_lengths(pane.blank))
    wanted_angles = sorted(x for pane in job.panes for x in np.degrees(polygon.corner_angles(pane.blank)))
    assert lengths == pytest.approx(wanted_lengths, abs=1e-6)
    assert angles == pytest.approx(wanted_angles, abs=1e-6)
    for dimension in dimensions:
        assert dimension.dxf.text == "<>"
        shown = [e.dxf.text if e.dxftype() == "TEXT" else e.text for e in _texts_of(dimension)]
        value = dimension.get_measurement()
        digits = float(re.sub(r"[^\d.]", "", re.sub(r"\\[A-Z][^;]*;|%%d", "", shown[0])))
        assert digits == pytest.approx(value, abs=0.051 if dimension.dimtype == 0 else 0.0051)


def _texts_of(dimension):
    return [e for e in dimension.virtual_entities() if e.dxftype() in ("TEXT", "MTEXT")]


def test_dxf_stands_upright_in_inches_too(job):
    document = sheets_dxf([cut_sheet(job, unit="in")], unit="in")
    texts = {d.dxf.text for d in document.modelspace().query("DIMENSION") if d.dimtype == 0}
    assert all(text.endswith("″") for text in texts)
    assert document.header["$INSUNITS"] == 4


def test_dxf_refuses_a_reduced_sheet(job):
    with pytest.raises(ValueError, match="true size"):
        sheets_dxf([stock_sheet(job.layout, "Stock", room=(190, 277))])


def test_svg_is_one_millimetre_a_unit_and_measures_as_the_blanks(job, tmp_path):
    sheet = cut_sheet(job)
    write_svg(sheet, tmp_path / "corner.svg")
    root = ET.parse(tmp_path / "corner.svg").getroot()
    space = {"s": "http://www.w3.org/2000/svg"}
    box = [float(x) for x in root.get("viewBox").split()]
    assert root.get("width") == f"{box[2]:.3f}mm"
    assert root.get("height") == f"{box[3]:.3f}mm"
    shapes = root.findall('.//s:g[@id="CUT"]/s:polygon', space)
    assert len(shapes) == len(job.panes)
    for shape, pane in zip(shapes, job.panes, strict=True):
        points = np.array([[float(v) for v in pair.split(",")] for pair in shape.get("points").split()])
        points[:, 1] *= -1  # SVG counts downwards
        assert polygon.side_lengths(points) == pytest.approx(polygon.side_lengths(pane.blank), abs=1e-3)
        assert polygon.area(points) > 0  # not mirrored
    groups = [g.get("id") for g in root.findall("./s:g", space)]
    assert groups == [layer.value for layer in sheet.layers]


def test_svg_escapes_what_a_title_may_hold():
    text = Text(Layer.LETTERING, "a < b & c", np.array([1.0, 1.0]), 2.0)
    root = ET.fromstring(sheet_svg(Sheet("<&>", 10, 10, texts=(text,))).encode())
    assert "a < b & c" in "".join(root.itertext())


def test_nothing_half_written_is_left(job, tmp_path):
    with pytest.raises(FileError, match="cannot be written"):
        write_svg(cut_sheet(job), tmp_path / "missing" / "corner.svg")
    with pytest.raises(FileError, match="cannot be written"):
        write_dxf([cut_sheet(job)], tmp_path / "missing" / "corner.dxf")
    assert list(tmp_path.iterdir()) == []


def _pdf_boxes(path):
    return re.findall(rb"/MediaBox\s*\[\s*([\d. ]+)\]", path.read_bytes())


@pytest.mark.parametrize("page", PAGES)
def test_pdf_pages_have_the_size_of_the_paper(job, tmp_path, qapp, page):
    path = tmp_path / "corner.pdf"
    sheets = [
        cut_pages(job, printable(page)),
        stock_sheet(job.layout, "Stock sheets", room=printable(page)),
    ]
    count = write_pdf(sheets, path, page)
    boxes = [[float(v) * 25.4 / 72 for v in box.split()] for box in _pdf_boxes(path)]
    assert len(boxes) == count
    for left, bottom, right, top in boxes:
        # Qt rounds a page to whole points, a third of a millimetre.
        assert sorted((right - left, top - bottom)) == pytest.approx(sorted(PAGES[page]), abs=0.36)


@pytest.mark.skipif(shutil.which("pdftoppm") is None, reason="pdftoppm (poppler-utils) is not installed")
def test_pdf_ruler_measures_true_on_the_page(job, tmp_path, qapp):
    """Rasterise the foot's 50 mm rule with an independent program and measure its ends in pixels."""
    from PySide6.QtGui import QImage

    path = tmp_path / "corner.pdf"
    write_pdf([cut_pages(job, printable("A4"))], path)
    subprocess.run(
        ["pdftoppm", "-r", "254", "-f", "1", "-l", "1", "-gray", "-png", path, tmp_path / "p"], check=True
    )
    image = QImage(str(next(tmp_path.glob("p*.png")))).convertToFormat(QImage.Format.Format_Grayscale8)
    data = np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), image.bytesPerLine())[
        :, : image.width()
    ]
    foot = data[-100:, :800] < 128  # 10 pixels a millimetre: the last 10 mm, the left 80 mm
    row = foot.sum(axis=1).argmax()
    dark = np.flatnonzero(foot[row])
    run = np.split(dark, np.flatnonzero(np.diff(dark) > 1) + 1)
    longest = max(run, key=len)
    assert len(longest) == pytest.approx(500, abs=3)


def test_large_sheets_are_tiled_with_marks_that_fall_on_each_other():
    job = make_cut_job(tube(["60", "60", "60"], 700, 300), JointSettings.named("butted"))
    sheet = cut_pages(job, printable("A4"))
    assert sheet.page is None
    found = tiles(sheet, "A4")
    assert len(found) > 4
    steps = {round(tile.left / (tile.width - OVERLAP), 6) % 1 for tile in found}
    assert steps == {0.0}
    marks = {}
    for tile in found:
        window = (
            tile.left,
            sheet.height - tile.top - tile.height,
            tile.left + tile.width,
            sheet.height - tile.top,
        )
        for stroke in register_marks(sheet, found, tile):
            if stroke.closed:
                x, y = np.round(stroke.points.mean(axis=0), 6)
                assert window[0] < x < window[2]
                assert window[1] < y < window[3]
                marks.setdefault((x, y), set()).add(tile.name)
    shared = [names for names in marks.values() if len(names) > 1]
    assert len(shared) >= len(found) - 1
    names = set().union(*shared)
    assert names == {tile.name for tile in found}
    covered = sum(tile.name.startswith("A") for tile in found)
    assert covered >= 2


def test_tiles_cover_every_line():
    job = make_cut_job(tube(["60", "60", "60"], 700, 300), JointSettings.named("butted"))
    sheet = cut_pages(job, printable("Letter"))
    found = tiles(sheet, "Letter")
    for stroke in sheet.strokes:
        for x, y in stroke.points:
            down = sheet.height - y
            inside = [
                t
                for t in found
                if t.left - 1e-9 <= x <= t.left + t.width + 1e-9
                and t.top - 1e-9 <= down <= t.top + t.height + 1e-9
            ]
            assert inside, stroke


def test_too_many_pages_and_unknown_paper_are_refused(tmp_path):
    wall = Sheet("wall", 9000.0, 9000.0, (Stroke(Layer.CUT, np.array([(0, 0), (9000.0, 9000.0)])),))
    with pytest.raises(PdfError, match=r"pages of A4.*larger page"):
        write_pdf([wall], tmp_path / "wall.pdf")
    with pytest.raises(PdfError, match=r"'B5'.*A4, A3, Letter"):
        write_pdf([wall], tmp_path / "wall.pdf", "B5")
    assert list(tmp_path.iterdir()) == []


def test_reserved_text_widths_hold_for_the_font_that_is_drawn(job, qapp):
    from PySide6.QtGui import QFont, QFontInfo, QFontMetricsF

    font = QFont("DejaVu Sans")
    font.setPixelSize(100)
    assert QFontInfo(font).family() == "DejaVu Sans"
    for text in cut_sheet(job).texts:
        font.setBold(text.bold)
        real = QFontMetricsF(font).horizontalAdvance(text.text) * text.height / (100 * CAP_HEIGHT)
        assert real <= text_width(text.text, text.height, text.bold) * 1.01, text.text


def test_painted_sheet_shows_its_lines(qapp):
    from PySide6.QtGui import QImage, QPainter

    from mirrorlab.files.cutsheet_paint import paint_sheet

    square = np.array([(10, 10), (50, 10), (50, 50), (10, 50.0)])
    sheet = Sheet("square", 60, 60, (Stroke(Layer.CUT, square, closed=True),))
    image = QImage(600, 600, QImage.Format.Format_RGB32)
    image.fill(0xFFFFFFFF)
    painter = QPainter(image)
    painter.scale(10, 10)
    paint_sheet(painter, sheet)
    painter.end()
    assert image.pixelColor(100, 300).lightness() < 60
    assert image.pixelColor(300, 500).lightness() < 60
    assert image.pixelColor(300, 300).lightness() == 255
    assert LOOKS[Layer.CUT].width == 0.35
