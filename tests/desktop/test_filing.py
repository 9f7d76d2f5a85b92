"""Files of the window: a round trip, wrong files that change nothing, exports, recent files."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import numpy as np
import pytest
from PySide6.QtWidgets import QFileDialog

from mirrorlab.desktop.document import Seed
from mirrorlab.desktop.window import Window
from mirrorlab.mirrors import Arrangement


def test_saved_and_opened_again(window: Window, tmp_path: Path) -> None:
    document, path = window.document, tmp_path / "lantern.json"
    document.set_angle(2, "35.9(2)")
    document.set_seed(Seed(heights=(1, 0, 2), place=None, rotations=True))
    assert window.isWindowModified()
    assert window.filing.save_path(path)
    assert not window.isWindowModified()
    assert "lantern.json" in window.windowTitle()
    document.set_angle(2, "60")
    assert window.filing.open_path(path)
    assert [a.text for a in document.arrangement.angles] == ["90", "60", "35.9(2)"]
    assert document.seed == Seed(heights=(1, 0, 2), place=None, rotations=True)
    assert document.finding.families == ("H3",)
    assert document.path == path
    document.undo_stack.undo()  # the opening is a step, too
    assert document.arrangement.angles[2].text == "60"


def test_normals_come_back_as_normals(window: Window, tmp_path: Path) -> None:
    given = Arrangement.from_normals([[1, 0, 0], [1, 1, 0], [0, 1, 1]])
    window.document.put_sheet(given, "normals")
    window.filing.save_path(tmp_path / "n.json")
    window.document.undo_stack.undo()
    window.filing.open_path(tmp_path / "n.json")
    assert window.document.arrangement.given_normals
    assert window.document.finding.families == given.finding().families


@pytest.mark.parametrize(
    "text",
    ["", "{", "[]", '{"format": "mirrorlab arrangement", "version": 99}', "\x00\x01"],
)
def test_a_wrong_file_says_so_and_changes_nothing(window: Window, tmp_path: Path, text: str) -> None:
    path = tmp_path / "wrong.json"
    path.write_text(text)
    before = window.document.state
    assert not window.filing.open_path(path)
    assert window.document.state is before
    assert window.notice.isVisible()
    assert "wrong.json was not opened" in window.notice.words.text()
    assert path not in window.filing.recent()


def test_a_missing_file_is_no_disaster(window: Window, tmp_path: Path) -> None:
    assert not window.filing.open_path(tmp_path / "nowhere.json")
    assert window.notice.isVisible()


def test_exports(window: Window, tmp_path: Path) -> None:
    document, filing = window.document, window.filing
    assert document.orbit is not None
    assert filing.export_path("csv", tmp_path / "i.csv")
    with (tmp_path / "i.csv").open(newline="") as file:
        rows = list(csv.reader(file))
    assert rows[0] == ["image", "x", "y", "z", "parity", "depth", "word"]
    assert np.array_equal(np.array([[float(v) for v in row[1:4]] for row in rows[1:]]), document.orbit.points)
    assert filing.export_path("npy", tmp_path / "i.npy")
    assert np.array_equal(np.load(tmp_path / "i.npy"), document.orbit.points)
    for suffix, head in ((".png", b"\x89PNG"), (".svg", b"<?xml"), (".pdf", b"%PDF")):
        assert filing.export_path("picture", tmp_path / f"p{suffix}")
        assert (tmp_path / f"p{suffix}").read_bytes().startswith(head)
    assert filing.export_path("mesh", tmp_path / "m.stl")
    assert (tmp_path / "m.stl").stat().st_size > 1000


def test_an_export_without_images_says_why(window: Window, tmp_path: Path) -> None:
    window.document.set_angle(2, "40")
    assert not window.filing.export_path("csv", tmp_path / "i.csv")
    assert not (tmp_path / "i.csv").exists()
    assert "was not written" in window.notice.words.text()


def test_dialogs_ask_for_names(window: Window, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(
        QFileDialog, "getSaveFileName", lambda *_: (str(tmp_path / "typed"), "Arrangements (*.json)")
    )
    assert window.filing.save()
    assert json.loads((tmp_path / "typed.json").read_text())["version"] == 1
    assert window.filing.recent() == [(tmp_path / "typed.json").resolve()]
    monkeypatch.setattr(QFileDialog, "getOpenFileName", lambda *_: (str(tmp_path / "typed.json"), ""))
    window.document.set_angle(0, "60")
    window.filing.open()
    assert window.document.arrangement.angles[0].text == "90"
    monkeypatch.setattr(
        QFileDialog, "getSaveFileName", lambda *_: (str(tmp_path / "rows"), "Rows as CSV (*.csv)")
    )
    window.filing.save_rows()
    assert (tmp_path / "rows.csv").is_file()
    window.actions_._fill_recent()
    assert [a.text() for a in window.actions_.recent.actions()] == [str((tmp_path / "typed.json").resolve())]
