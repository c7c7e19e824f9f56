"""The house keeps its shape: which room may import which, what lies at the top, how long a module may be."""

from __future__ import annotations

import subprocess
from pathlib import Path

import pytest
from importlinter.cli import lint_imports

PROJECT = Path(__file__).resolve().parents[1]
MODULES = sorted((PROJECT / "app").rglob("*.py"))
MOST_LINES = 350

TOP = {
    "README.md",
    "DEVELOPERS.md",
    "pyproject.toml",
    "app",
    "templates",
    "static",
    "migrations",
    "tests",
    "demo_meet",
}


def test_imports_go_one_way_and_the_pure_rooms_are_pure(monkeypatch: pytest.MonkeyPatch, capsys) -> None:
    monkeypatch.chdir(PROJECT)
    status = lint_imports(config_filename=str(PROJECT / "pyproject.toml"), no_cache=True)
    assert status == 0, capsys.readouterr().out


def tracked() -> list[str]:
    """The files that are committed or about to be; without git (an unpacked archive), what lies there and is not
    left behind by the tools."""
    asked = ["git", "ls-files", "--cached", "--others", "--exclude-standard"]
    found = subprocess.run(asked, cwd=PROJECT, capture_output=True, text=True, check=False)
    if found.returncode:
        return [str(path.relative_to(PROJECT)) for path in PROJECT.rglob("*") if path.name != "uv.lock"]
    return found.stdout.splitlines()


def test_at_the_top_lies_what_is_allowed_and_nothing_else() -> None:
    top = {name.partition("/")[0] for name in tracked()}
    assert {name for name in top if not name.startswith(".")} == TOP


@pytest.mark.parametrize("module", MODULES, ids=lambda path: str(path.relative_to(PROJECT)))
def test_a_module_is_short_enough_to_be_read_in_one_go(module: Path) -> None:
    assert len(module.read_text(encoding="utf-8").splitlines()) <= MOST_LINES
