"""Cut jobs: lists, cautions, reports, and what is said about the joints."""

from __future__ import annotations

import json

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement
from mirrorlab.optics import (
    JointSettings,
    Place,
    Stock,
    cautions_for,
    corner,
    count_images,
    job_report,
    make_cut_job,
    polygon,
    tube,
    wedge,
)
from mirrorlab.optics.cautions import CAUTIONS, Hazards
from mirrorlab.optics.cutlist import COLUMNS
from mirrorlab.optics.joints import JointError
from mirrorlab.optics.report import images_section


@pytest.fixture(scope="module")
def job():
    return make_cut_job(corner(["90", "60", "45"], 100), stock=Stock(600, 400, 10, 1), copies=3)


def test_cut_list_has_every_side_once_with_its_measures(job):
    assert [row.side for row in job.rows] == [f"{a}{k}" for a in "abc" for k in (1, 2, 3)]
    for row in job.rows:
        pane = next(p for p in job.panes if p.letter == row.part)
        k = int(row.side[1:]) - 1
        assert row.length_mm == pytest.approx(polygon.side_lengths(pane.blank)[k])
        assert row.corner_degrees == pytest.approx(np.degrees(polygon.corner_angles(pane.blank)[k]))
        assert row.quantity == 3
        if row.meets:
            assert row.bevel_degrees == pytest.approx(90 - row.between_degrees / 2)
            assert row.glass_degrees == pytest.approx(row.between_degrees / 2)
            assert row.longer_face == "clear"
    assert set(job.rows[0].to_dict()) == set(COLUMNS)


def test_weight_and_area_by_hand():
    """A 200 x 90 mm pane of 4 mm glass: 0.018 m², at 2.5 kg a m² and mm 0.18 kg."""
    job = make_cut_job(wedge("90", 200, 90, thickness=4), JointSettings.named("square"), copies=2)
    assert job.panes[0].weight == pytest.approx(0.18)
    assert job.glass_area == pytest.approx(2 * 2 * 0.018)


def test_layout_holds_all_copies(job):
    assert sum(len(sheet.placements) for sheet in job.layout.sheets) == 9
    assert job.layout.piece_area == pytest.approx(job.glass_area)
    assert job.kerf == 1
    assert make_cut_job(corner(["90", "60", "45"], 100)).kerf == 0


def test_everything_is_plain_json(job):
    text = json.dumps(job.to_dict(), allow_nan=False)
    back = json.loads(text)
    assert back["dihedrals_degrees"] == pytest.approx({"ab": 90, "ac": 60, "bc": 45})
    assert back["folded_by_bevels"]["largest_angle_error_degrees"] < 1e-6
    assert len(back["panes"]) == 3
    assert back["cautions"][0]["title"] == "Cut glass"


def test_notes_say_what_a_maker_should_know():
    notes = " ".join(make_cut_job(tube(["60"] * 3, 200, 60)).notes)
    assert "Feather edges at a1, a3" in notes
    assert "return to within" in notes
    butted = make_cut_job(tube(["90"] * 4, 200, 60, mirrors="household glass"), JointSettings.named("butted"))
    assert "3.0 mm beside a joint" in " ".join(butted.notes)
    square = make_cut_job(tube(["60"] * 3, 200, 60), JointSettings.named("square"))
    assert "jig" in " ".join(square.notes)
    mixed = make_cut_job(tube(["60"] * 3, 200, 60, mirrors=["household glass", "perfect", "perfect"]))
    assert "First- and second-surface" in " ".join(mixed.notes)


@pytest.mark.parametrize("copies", [0, -1, 100_000])
def test_copies_out_of_range(copies):
    with pytest.raises(JointError, match=f"{copies} copies"):
        make_cut_job(corner(["90", "60", "45"], 100), copies=copies)


ALWAYS = {"cut-glass", "safety-mirror", "sunlight", "photosensitivity", "mirror-room", "disorientation"}


@pytest.mark.parametrize("place", [Place.CUT_SHEET, Place.REPORT])
def test_all_cautions_stand_on_paper(place):
    keys = {caution.key for caution in cautions_for(place, Hazards(longest=50))}
    assert keys == ALWAYS
    keys = {caution.key for caution in cautions_for(place, Hazards(2000, 40, feather=True))}
    assert keys == {caution.key for caution in CAUTIONS}


def test_views_show_the_cautions_that_matter():
    small = {c.key for c in cautions_for(Place.ASSEMBLY, Hazards(longest=200))}
    assert small == {"cut-glass", "safety-mirror", "sunlight"}
    room = {c.key for c in cautions_for(Place.ASSEMBLY, Hazards(longest=2000))}
    assert room == small | {"mirror-room", "disorientation"}
    assert {c.key for c in cautions_for(Place.EYE, Hazards(longest=200))} == {"sunlight", "photosensitivity"}


def test_cautions_speak_of_what_must_be_said():
    said = " ".join(caution.text for caution in CAUTIONS).lower()
    for word in (
        "gloves",
        "eye protection",
        "seam",
        "safety-backed or laminated",
        "building codes",
        "licensed",
    ):
        assert word in said
    for word in ("exits", "loads", "fixing", "seizures", "sun", "fire", "way out"):
        assert word in said


def test_hazards_come_from_the_panes():
    room = make_cut_job(tube(["60"] * 3, 2100, 1500, thickness=6))
    assert room.hazards.room
    assert room.hazards.heaviest == pytest.approx(
        2.1 * polygon.area(room.panes[0].blank) / 2.1 * 6 * 2500 / 1e9
    )
    assert room.hazards.feather
    assert "heavy-pane" in {c.key for c in room.cautions(Place.CUT_SHEET)}
    small = make_cut_job(wedge("90", 100, 100))
    assert not small.hazards.room
    assert not small.hazards.feather


def test_report_holds_assembly_figures_panes_and_cautions(job):
    assembly = corner(["90", "60", "45"], 100)
    finding = Arrangement.from_angles(["90", "60", "45"]).finding()
    report = job_report(job, assembly, finding, figures=[images_section(count_images(assembly))])
    headings = [section.heading for section in report.sections]
    assert headings == ["Assembly", "Images", "Panes", "Sides", "Joints", "Stock"]
    first = " ".join(report.sections[0].lines)
    assert finding.sentence in first
    assert "ab 90°, ac 60°, bc 45°" in first
    assert "reflectance 0.9" in first
    images = report.sections[1]
    assert "47 images" in images.lines[0]
    assert sum(int(row[1]) for row in images.table[1:]) == 47
    sides = next(section for section in report.sections if section.heading == "Sides")
    assert len(sides.table) == 1 + len(job.rows)
    assert {title for title, _ in report.cautions} >= {"Cut glass", "Sunlight", "Mirror rooms"}
    json.dumps(report.to_dict())
