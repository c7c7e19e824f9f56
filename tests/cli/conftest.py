"""A folder with the demo meet in it."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest

from tests.web.ready import Meet, make_ready


@pytest.fixture(scope="session")
def demo_file(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The demo meet, made once; tests work on copies."""
    return make_ready(tmp_path_factory.mktemp("demo"))


@pytest.fixture
def ready(demo_file: Path, tmp_path: Path) -> Meet:
    """A data folder with the demo meet, of this test's own."""
    folder = tmp_path / "data"
    folder.mkdir()
    return Meet(Path(shutil.copy(demo_file, folder / "meet.db")))
