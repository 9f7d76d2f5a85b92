"""The arrangement file: what is saved comes back, and a wrong file is told apart."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from mirrorlab import AngleSettings, Arrangement
from mirrorlab.files.samples import samples
from mirrorlab.files.sheet_file import (
    FORMAT,
    VERSION,
    Sheet,
    load_sheet,
    save_sheet,
    sheet_from_text,
    sheet_to_text,
)
from mirrorlab.files.whole import FileError

LANTERN = Arrangement.from_angles(["90", "60", "45"])


def good(**changes: Any) -> str:
    content = {"format": FORMAT, "version": VERSION, "mirrors": {"angles": ["90", "60", "45"]}}
    return json.dumps({**content, **changes})


def test_typed_texts_come_back(tmp_path: Path) -> None:
    arrangement = Arrangement.from_angles(["59.9(2)", "pi/2", "45.0"], AngleSettings(100, 2.0))
    sheet = Sheet(arrangement, "K-7", "a note", {"heights": [1, 2, 3]}, {"group": "m-3m"}, {"kind": "corner"})
    back = load_sheet(save_sheet(tmp_path / "k7.json", sheet))
    assert [angle.text for angle in back.arrangement.angles] == ["59.9(2)", "pi/2", "45.0"]
    assert back.arrangement.settings == arrangement.settings
    assert (back.name, back.note, back.seed) == ("K-7", "a note", {"heights": [1, 2, 3]})
    assert (back.crystal, back.glass) == ({"group": "m-3m"}, {"kind": "corner"})


def test_normals_come_back_to_the_same_double(tmp_path: Path) -> None:
    normals = np.random.default_rng(7).normal(size=(4, 3))
    arrangement = Arrangement.from_normals(normals)
    back = load_sheet(save_sheet(tmp_path / "n.json", Sheet(arrangement))).arrangement
    assert back.given_normals
    assert np.abs(back.normals - arrangement.normals).max() < 1e-15


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("{", "not JSON"),
        ("[1]", "not an arrangement file"),
        ("{}", "not an arrangement file"),
        ('{"format": "something else"}', "not an arrangement file"),
        (good(version=VERSION + 1), "newer Mirrorlab"),
        (good(version="1"), '"version" is'),
        (good(version=0), '"version" is'),
        (good(mirrors=[]), '"mirrors" is []'),
        (good(mirrors={}), "none of its keys"),
        (good(mirrors={"angles": ["90"], "family": "A2"}), "angles and family"),
        (good(mirrors={"angles": ["90", "60"]}), "2 angles fit no number of mirrors"),
        (good(mirrors={"angles": ["90", "6o", "45"]}), 'angle 2 of 3, "6o"'),
        (good(mirrors={"angles": "90"}), '"angles" is "90"'),
        (good(mirrors={"normals": [[1, 0], [0]]}), '"mirrors"'),
        (good(mirrors={"normals": [[1, "x"]]}), '"normals" is'),
        (good(mirrors={"family": "Z9"}), "Z9"),
        (good(reading={"max_denominator": "many"}), "max_denominator is a whole number"),
        (good(reading={"max_denominator": -1}), "largest denominator -1"),
        (good(seed={"heights": [1, None]}), '"seed" is'),
        (good(seed={"heights": [1, 10**400]}), '"seed" is'),
        (good().replace('["90", "60", "45"]', "[1e999]"), "inf"),
        (good(mirrors={"normals": [[1, 0], [10**400, 1]]}), '"normals" is'),
        (good(mirrors={"normals": [[0, 0], [1, 0]]}), '"mirrors"'),
        (good(mirrors={"angles": ["90"] * 66}), '"mirrors"'),
        ("[" * 200_000, "not JSON"),
        (good(seed={"heights": [1], "place": "centre"}), '"seed" is'),
        (good(seed={"elsewhere": 1}), '"seed" is'),
        (good(name=3), '"name" is 3'),
        (good(crystal=3), '"crystal" is 3'),
        ('{"format": NaN}', "NaN is not a JSON number"),
    ],
)
def test_a_wrong_file_is_refused_with_what_stands_there(text: str, said: str) -> None:
    with pytest.raises(FileError) as caught:
        sheet_from_text(text, "lantern.json")
    assert str(caught.value).startswith("lantern.json: ")
    assert said in str(caught.value)


def test_a_byte_order_mark_is_passed_over(tmp_path: Path) -> None:
    (tmp_path / "a.json").write_bytes(b"\xef\xbb\xbf" + good().encode())
    assert load_sheet(tmp_path / "a.json").arrangement.finding().order == 48


def test_a_file_that_is_too_large_is_refused_unread(tmp_path: Path) -> None:
    with (tmp_path / "a.json").open("wb") as handle:
        handle.truncate(5_000_000)
    with pytest.raises(FileError, match="larger than 4 MB"):
        load_sheet(tmp_path / "a.json")


def test_a_wrong_sheet_is_never_written(tmp_path: Path) -> None:
    target = save_sheet(tmp_path / "a.json", Sheet(LANTERN, "old"))
    with pytest.raises(ValueError, match="JSON"):
        save_sheet(target, Sheet(LANTERN, "new", crystal={"distance": float("nan")}))
    assert load_sheet(target).name == "old"
    assert [path.name for path in tmp_path.iterdir()] == ["a.json"]


@given(
    st.recursive(
        st.none() | st.booleans() | st.integers() | st.floats(allow_nan=False) | st.text(max_size=8),
        lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=4), inner, max_size=3),
        max_leaves=6,
    ),
    st.sampled_from(["version", "name", "note", "mirrors", "reading", "seed", "crystal", "glass"]),
)
def test_any_value_of_any_key_is_read_or_refused(value: Any, key: str) -> None:
    said = "lantern.json: "
    try:
        sheet_from_text(good(**{key: value}), "lantern.json")
    except FileError as error:
        said = str(error)
    assert said.startswith("lantern.json: ")


def test_files_that_are_no_text_or_are_not_there(tmp_path: Path) -> None:
    (tmp_path / "a.json").write_bytes(b"\xff\xfe\x00")
    with pytest.raises(FileError, match="not text"):
        load_sheet(tmp_path / "a.json")
    with pytest.raises(FileError, match="cannot be read"):
        load_sheet(tmp_path / "b.json")
    with pytest.raises(FileError, match="cannot be read"):
        load_sheet(tmp_path)


def test_every_sample_can_be_read_and_saved() -> None:
    assert len(samples()) >= 8
    for sheet in samples():
        assert sheet.name
        again = sheet_from_text(sheet_to_text(sheet))
        assert again.arrangement.finding().kind == sheet.arrangement.finding().kind


def test_the_samples_show_every_kind_but_the_impossible() -> None:
    kinds = {sheet.arrangement.finding().kind for sheet in samples()}
    assert kinds == {"closed", "closed-subdivided", "open", "tube"}
