"""The document: undo for everything, merged gestures, errors that change nothing, long orbits."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from pytestqt.qtbot import QtBot

from mirrorlab.angles import AngleError, AngleSettings
from mirrorlab.desktop.document import Document, Seed
from mirrorlab.desktop.seeding import land, where
from mirrorlab.mirrors import Arrangement


def test_starts_with_a_closed_sample(document: Document) -> None:
    assert document.finding.kind == "closed"
    assert document.finding.families == ("B3",)
    assert document.orbit is not None
    assert len(document.orbit) == 48
    assert document.undo_stack.isClean()


def test_typing_merges_within_a_gesture_only(document: Document, qtbot: QtBot) -> None:
    first = document.new_gesture("angle")
    for text in ("3", "36"):
        with qtbot.waitSignal(document.arrangement_changed):
            document.set_angle(2, text, first)
    assert document.finding.families == ("H3",)
    document.set_angle(2, "60", document.new_gesture("angle"))
    assert document.undo_stack.count() == 2
    document.undo_stack.undo()
    assert document.finding.families == ("H3",)
    document.undo_stack.undo()
    assert document.finding.families == ("B3",)
    document.undo_stack.redo()
    assert document.arrangement.angles[2].text == "36"


def test_unreadable_angle_changes_nothing(document: Document) -> None:
    before = document.state
    with pytest.raises(AngleError):
        document.set_angle(0, "6o")
    assert document.state is before
    assert document.undo_stack.count() == 0


def test_an_arrangement_change_emits_no_second_signal(document: Document, qtbot: QtBot) -> None:
    with qtbot.assertNotEmitted(document.seed_changed), qtbot.waitSignal(document.arrangement_changed):
        document.set_angle(2, "60")
    with qtbot.assertNotEmitted(document.arrangement_changed), qtbot.waitSignal(document.seed_changed):
        document.set_seed(Seed(heights=(1, 0, 2), place=None))
    assert document.orbit is not None
    assert document.orbit.stabiliser_order == 2


def test_mirrors_come_and_go(document: Document) -> None:
    first = document.seed.heights
    document.add_mirror()
    assert document.arrangement.size == 4
    assert [a.text for a in document.arrangement.angles] == ["90", "60", "90", "45", "90", "90"]
    assert len(document.seed.heights or ()) == 4
    document.remove_mirror(0)
    assert [a.text for a in document.arrangement.angles] == ["45", "90", "90"]
    document.undo_stack.undo()
    document.undo_stack.undo()
    assert document.finding.families == ("B3",)
    assert document.seed.heights == first


def test_settings_read_all_angles_again(document: Document) -> None:
    document.set_angle(2, "51.4(2)")
    assert document.arrangement.angles[2].fraction is not None
    narrow = replace(document.settings, reading=AngleSettings(max_denominator=6, sigmas=0.5))
    document.set_settings(narrow)
    assert document.arrangement.angles[2].fraction is None
    document.undo_stack.undo()
    assert document.arrangement.angles[2].fraction is not None


def test_typing_into_mirrors_given_by_normals_makes_angles_of_them(document: Document) -> None:
    document.put_sheet(Arrangement.from_normals([[1, 0, 0], [0, 1, 0], [0, -1, 1]]), "given")
    assert document.arrangement.given_normals
    document.set_angle(2, "60")
    assert not document.arrangement.given_normals
    assert document.finding.families == ("A1", "A2")


def test_opening_is_a_step_and_paths_stay_with_their_sheets(document: Document, tmp_path: object) -> None:
    from pathlib import Path

    path = Path(str(tmp_path)) / "x.json"
    document.put_sheet(Arrangement.from_family("H3"), "x", path)
    assert document.path == path
    assert document.undo_stack.isClean()
    document.undo_stack.undo()
    assert document.path is None
    assert document.finding.families == ("B3",)


def test_a_sheet_knows_whether_it_differs_from_how_it_was_opened(document: Document) -> None:
    assert not document.altered
    document.set_angle(2, "36")
    assert document.altered
    document.undo_stack.undo()
    assert not document.altered
    document.put_sheet(Arrangement.from_family("H3"), "H3")
    assert not document.altered
    document.set_seed(Seed(place="wall a"))
    assert document.altered


def test_long_orbit_comes_beside_the_window(document: Document, qtbot: QtBot) -> None:
    document.set_arrangement(Arrangement.from_family("E6"), "E6")
    assert document.orbit is None
    assert document.work.running() == ("images",)
    qtbot.waitUntil(lambda: document.orbit is not None, timeout=20_000)
    assert document.orbit is not None
    assert len(document.orbit) == 51840
    assert document.work.running() == ()


def test_too_long_an_orbit_is_refused_with_size_and_memory(document: Document, qtbot: QtBot) -> None:
    document.put_sheet(Arrangement.from_family("E8"), "E8")
    document.set_seed(Seed(place="centre"))
    qtbot.waitUntil(lambda: "696,729,600" in document.orbit_note, timeout=10_000)
    assert document.orbit is None
    assert "MiB" in document.orbit_note


def test_another_arrangement_drops_the_orbit_under_way(document: Document, qtbot: QtBot) -> None:
    document.set_arrangement(Arrangement.from_family("D7"), "D7")
    assert document.work.running() == ("images",)
    document.undo_stack.undo()
    assert document.work.running() == ()
    assert document.orbit is not None
    assert len(document.orbit) == 48


def test_open_arrangements_say_why_there_are_no_images(document: Document) -> None:
    document.set_angle(2, "40")
    assert document.finding.kind == "open"
    assert document.orbit is None
    assert document.orbit_note


@pytest.mark.parametrize("reach", [0.0, 0.02])
def test_a_dragged_seed_snaps_to_a_near_wall(document: Document, reach: float) -> None:
    group = document.finding.group
    assert group is not None
    edge = group.corners[0] + group.corners[1]  # lies on wall c
    point = edge / np.linalg.norm(edge) + reach * group.simple[2]
    landing = land(document.arrangement, point)
    assert landing is not None
    assert landing.walls == ("c",)
    document.set_seed(landing.seed)
    assert document.orbit is not None
    assert document.orbit.stabiliser_order == 2
    assert where(landing.walls, 3) == "on wall c"


def test_a_seed_dragged_out_of_its_chamber_is_held_at_the_wall(document: Document) -> None:
    group = document.finding.group
    assert group is not None
    middle = group.corners.sum(axis=0)
    landing = land(document.arrangement, middle - 3 * (group.simple[0] @ middle) * group.simple[0])
    assert landing is not None
    assert "a" in landing.walls
    assert landing.seed.heights is not None
    assert min(landing.seed.heights) >= 0


def test_a_dragged_seed_in_the_middle_does_not_snap(document: Document) -> None:
    group = document.finding.group
    assert group is not None
    landing = land(document.arrangement, group.corners.sum(axis=0))
    assert landing is not None
    assert landing.walls == ()
    assert where(landing.walls, 3) == "inside its chamber"
