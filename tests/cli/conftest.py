"""A folder with the demo meet in it."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest

from tests.web.ready import Meet, ready_once


@pytest.fixture(scope="session")
def demo_file(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The demo meet, made once; tests work on copies."""
    return ready_once(tmp_path_factory)


@pytest.fixture
def ready(demo_file: Path, tmp_path: Path) -> Meet:
    """A data folder with the demo meet, of this test's own."""
    folder = tmp_path / "data"
    folder.mkdir()
    return Meet(Path(shutil.copy(demo_file, folder / "meet.db")))
