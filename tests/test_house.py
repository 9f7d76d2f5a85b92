"""Rules of the house that a tool can hold: style, types, imports, and what the wheel and the README carry."""

from __future__ import annotations

import re
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent


def tool(*words: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", *words], cwd=ROOT, capture_output=True, text=True, check=False, timeout=300
    )


def test_style() -> None:
    done = tool("ruff", "check", "--no-cache", "mirrorlab", "tests")
    assert done.returncode == 0, done.stdout


def test_types_of_the_core() -> None:
    done = tool("mypy", "--no-incremental", "--cache-dir=/dev/null" if sys.platform != "win32" else "--cache-dir=nul")
    assert done.returncode == 0, done.stdout


def test_imports_go_down() -> None:
    done = subprocess.run(
        [str(Path(sys.executable).with_name("lint-imports")), "--no-cache"],
        cwd=ROOT, capture_output=True, text=True, check=False, timeout=300,
    )  # fmt: skip
    assert done.returncode == 0, done.stdout


def test_every_dependency_has_a_lower_bound() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]
    every = [*project["dependencies"], *project["optional-dependencies"]["test"]]
    assert [name for name in every if ">=" not in name] == []


@pytest.mark.parametrize("heading", ["Run it", "Test it"])
def test_the_readme_has_one_command_under_each_heading(heading: str) -> None:
    text = (ROOT / "README.md").read_text()
    match = re.search(rf"^## {heading}\n+```sh\n(.+?)\n```\n", text, re.MULTILINE | re.DOTALL)
    assert match is not None
    assert "\n" not in match[1]
    assert "venv" in match[1]


def test_pictures_in_the_readme_are_there() -> None:
    text = (ROOT / "README.md").read_text()
    linked = re.findall(r"!\[[^\]]*\]\(([^)]+)\)", text)
    assert linked
    assert [name for name in linked if not (ROOT / name).is_file()] == []


def test_modules_fit_in_a_head() -> None:
    long = {
        str(path.relative_to(ROOT)): lines
        for path in (ROOT / "mirrorlab").rglob("*.py")
        if (lines := len(path.read_text().splitlines())) > 400
    }
    assert long == {}
