"""Images counted by light, linked with the picture in space, and sectors that do not fit."""

from __future__ import annotations

import numpy as np
import pytest

from mirrorlab.desktop.document import Seed
from mirrorlab.desktop.glass.images_section import linked_keys
from mirrorlab.mirrors import Arrangement


@pytest.fixture
def images(section, answered):
    found = section("Images")
    answered(found.answer)
    return found


def test_a_closed_corner_shows_one_image_less_than_its_group_has_elements(window, images):
    assert window.document.finding.order == 48
    assert images.count.text() == "47 images"
    assert window.table.title.text() == "47 images"
    assert images.facts.texts["Mirror-inverted"] == "24, and 23 not"
    assert images.light.texts["1 bounce"] == "3, at most 90 % of the light"


def test_rows_are_linked_with_the_images_in_space(window, images):
    window.document.set_seed(Seed(heights=(1, 2, 3), place=None))
    window.document.select(None)
    model = window.table.rows.model()
    keys = [model.key_of(row) for row in range(model.rowCount())]
    assert sorted(index for kind, index in keys) == list(range(1, 48))
    assert {kind for kind, _ in keys} == {"image"}
    window.table.rows.selectRow(5)
    assert window.document.selection == keys[5]
    window.document.select(("image", 7))
    row = window.table.rows.currentIndex().row()
    assert keys[row] == ("image", 7)


def test_keys_go_by_the_place_not_by_the_spelling():
    class Row:
        word = "baba"  # the same place as "abab" between mirrors at 45°

    arrangement = Arrangement.from_angles(["45"])
    orbit = arrangement.orbit(heights=[1, 2])
    (key,) = linked_keys((Row(),), arrangement, orbit)
    assert np.allclose(orbit.points[key[1]], -orbit.seed)


def test_an_angle_that_does_not_close_cuts_sectors(put, images, answered):
    put(["50"])
    answered(images.answer)
    assert "cut by the seam" in images.sectors.texts["ab"]
    assert images.facts.texts["Rule of two"].startswith("7")


def test_images_without_an_end_are_said_to_go_on(put, images, answered, type_into, section):
    assembly = section("Assembly")
    put(["60", "60", "60"])
    for part in assembly.mirrors.reflectances[:3]:
        type_into(part, "0.3")
    section("Images")
    answered(images.answer)
    assert images.count.text().endswith("and more")
    assert "0.02" in images.facts.texts["Counted until"]
    assert images.model.key_of(0) == ("light", 0)


def test_counting_stopped_by_the_user_can_be_taken_up_again(window, put, images, answered, qtbot):
    put(["60", "60", "60"])
    qtbot.waitUntil(lambda: "count of images" in window.document.work.running(), timeout=60_000)
    window.document.work.cancel("count of images")
    assert images.again.isVisible()
    images.again.click()
    answered(images.answer)
    assert not images.again.isVisible()
    assert "and more" in images.count.text()
