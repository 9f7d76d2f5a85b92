"""Every example that a person can read runs: those in each verb's help, in the program's own help and in the README."""

from __future__ import annotations

import argparse
import importlib
import json
import re
import shlex
from collections.abc import Callable
from itertools import pairwise
from pathlib import Path

import pytest

from mirrorlab import command
from mirrorlab.commands import VERBS

Answer = Callable[..., tuple[int, str, str]]

README = (Path(__file__).parents[2] / "README.md").read_text(encoding="utf-8")
NAMES = [verb.name for verb in VERBS]

SPECIMEN = """data_K-7
_cell_length_a 5.10(1)
_cell_length_b 7.20(1)
_cell_length_c 9.30(2)
_cell_angle_alpha 90
_cell_angle_beta 90.05(3)
_cell_angle_gamma 90
loop_
_symmetry_equiv_pos_as_xyz
x,y,z
-x,y,-z
"""
LIST = "label,x,y,z\nA,1,2,3\nB,-1,2,3\nC,3,1,2\n"

READ = {"specimen.cif": SPECIMEN, "points.csv": LIST, "poles.csv": LIST, "atoms.csv": LIST}
"""Text files that examples read; photo.jpg is a picture besides."""

WRITTEN = ("--out", "--csv", "--npy", "--matches", "--pdf", "--dxf", "--svg", "--layout", "--report")
"""Options whose word is a file to write; so is that of --picture, where it has an ending."""


def help_of(verb: str, module: str) -> str:
    """What stands below a verb's options."""
    subparsers = argparse.ArgumentParser().add_subparsers()
    importlib.import_module(module).ADD[verb](subparsers)
    return str(subparsers.choices[verb].epilog)


def commands_in(text: str) -> list[str]:
    """The commands that call a verb, without the words behind them; a backslash at the end goes on in the next line."""
    found = re.findall(r"^  mirrorlab (\w.*?)(?:   .*)?$", re.sub(r"\\\n *", "", text), re.MULTILINE)
    return [line for line in found if shlex.split(line)[0] in NAMES]


IN_HELP = {verb.name: commands_in(help_of(verb.name, verb.module)) for verb in VERBS}
IN_TABLES = re.findall(r"^\| `mirrorlab (.+?)` \|", README, re.MULTILINE)
IN_CONSOLE = re.findall(r"^\$ mirrorlab (.+)\n((?:(?!\$ |```|…).+\n)*)", README, re.MULTILINE)
EVERY = dict.fromkeys(
    [
        *(line for lines in IN_HELP.values() for line in lines),
        *commands_in(command.EXAMPLES),
        *IN_TABLES,
        *(line for line, _ in IN_CONSOLE),
    ]
)


@pytest.fixture
def desk(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A folder to stand in, with the files that examples read."""
    from PySide6.QtGui import QImage

    for name, text in READ.items():
        (tmp_path / name).write_text(text, encoding="utf-8")
    picture = QImage(64, 48, QImage.Format.Format_RGB32)
    picture.fill(0xD08040)
    assert picture.save(str(tmp_path / "photo.jpg"))
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.mark.parametrize("line", EVERY)
def test_an_example_runs(answer: Answer, desk: Path, line: str) -> None:
    words = shlex.split(line)
    targets = [
        word
        for option, word in pairwise(words)
        if option in WRITTEN or (option == "--picture" and "." in word)
    ]
    for target in targets:
        (desk / target).unlink(missing_ok=True)
    status, out, err = answer(*words)
    assert status == 0, err
    assert [target for target in targets if not (desk / target).stat().st_size] == []
    assert out or targets
    if "--json" in words:
        assert json.loads(out)


@pytest.mark.parametrize("verb", NAMES)
def test_every_verb_has_examples(verb: str) -> None:
    assert len(IN_HELP[verb]) >= 3
    assert all(shlex.split(line)[0] == verb for line in IN_HELP[verb])


def test_the_readme_shows_every_verb() -> None:
    assert len(IN_CONSOLE) >= 3
    shown = {line.split()[0] for line in (*IN_TABLES, *(line for line, _ in IN_CONSOLE))}
    assert shown == set(NAMES)


@pytest.mark.parametrize(("line", "begins"), [pair for pair in IN_CONSOLE if pair[1]])
def test_the_readme_shows_what_is_printed(answer: Answer, line: str, begins: str) -> None:
    assert answer(*shlex.split(line))[1].startswith(begins)


def test_the_python_of_the_readme_prints_what_it_says(capsys: pytest.CaptureFixture[str]) -> None:
    match = re.search(r"^```python\n(.+?)^```", README, re.MULTILINE | re.DOTALL)
    assert match is not None
    exec(compile(match[1], "README.md", "exec"), {})
    said = re.findall(r"^print\(.+\)  # (.+)$", match[1], re.MULTILINE)
    assert capsys.readouterr().out.splitlines() == said
    assert len(said) >= 2
