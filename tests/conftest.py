"""What all tests share: real database files, the ready meet of :mod:`tests.cast`, browser tests last."""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from pathlib import Path

import pytest
from hypothesis import settings

from app.desk.demo import make_demo
from app.desk.entry import Desk
from app.desk.roster import import_roster
from app.desk.setup import add_platform, start_meet
from app.store.migrate import PROJECT, upgrade
from tests.cast import BELT_ROSTER, OLGA, Hall, open_desk, ready_meet

# A slow machine is no failure; how many cases are tried, each room's own conftest may say.
settings.register_profile("house", deadline=None)
settings.load_profile("house")


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Browser tests last: Playwright leaves an event loop running in this thread."""
    items.sort(key=lambda item: item.get_closest_marker("browser") is not None)


@pytest.fixture(scope="session")
def empty_file(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A database with all tables and nothing in them. Copy it, never write to it."""
    file = tmp_path_factory.mktemp("empty") / "meet.db"
    upgrade(f"sqlite:///{file}")
    return file


@pytest.fixture(scope="session")
def ready_file(empty_file: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A database with the ready meet of the cast. Copy it, never write to it."""
    file = Path(shutil.copy(empty_file, tmp_path_factory.mktemp("ready")))
    desk = open_desk(file)
    ready_meet(desk)
    desk.engine.dispose()
    return file


@pytest.fixture(scope="session")
def demo_file(empty_file: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A database with the demo meet. Copy it, never write to it."""
    file = Path(shutil.copy(empty_file, tmp_path_factory.mktemp("demo")))
    desk = open_desk(file)
    assert make_demo(desk, PROJECT / "demo_meet") is True
    desk.engine.dispose()
    return file


@pytest.fixture
def desk(empty_file: Path, tmp_path: Path) -> Iterator[Desk]:
    """A desk with nothing on it yet."""
    made = open_desk(Path(shutil.copy(empty_file, tmp_path / "meet.db")))
    yield made
    made.engine.dispose()


@pytest.fixture
def hall(ready_file: Path, tmp_path: Path) -> Iterator[Hall]:
    """The ready meet, in a file of this test's own."""
    made = open_desk(Path(shutil.copy(ready_file, tmp_path / "ready.db")))
    yield Hall(made)
    made.engine.dispose()


@pytest.fixture
def belt(desk: Desk) -> Hall:
    """Quay Cup, one platform with belt and chain; Flight C lifts the muscle-up, Livia with nothing on the belt."""
    meet_id = start_meet(desk, "Quay Cup", "kg")
    made = Hall(desk, meet_id, add_platform(desk, meet_id, "Stage", "belt-kg", who=OLGA))
    import_roster(desk, meet_id, BELT_ROSTER, who=OLGA)
    made.bring("Flight C", "Muscle-up")
    return made


@pytest.fixture
def halls(hall: Hall) -> tuple[Hall, Hall]:
    """The ready meet with a second platform, *Stage*, on which Flight C lifts the pull-up with a belt."""
    stage = add_platform(hall.desk, hall.meet_id, "Stage", "belt-kg", who=OLGA)
    import_roster(hall.desk, hall.meet_id, BELT_ROSTER, who=OLGA)
    other = Hall(hall.desk, hall.meet_id, stage)
    other.bring("Flight C", "Pull-up")
    return hall, other
