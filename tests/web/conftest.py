"""The app over a file of its own; every action is tried as a plain form and as htmx sends it."""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from pathlib import Path

import pytest
from starlette.testclient import TestClient

from tests.web.asking import HTMX, app_over
from tests.web.ready import Meet, ready_once


@pytest.fixture(scope="session")
def demo_file(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The demo meet, made once; tests work on copies."""
    return ready_once(tmp_path_factory)


@pytest.fixture
def meet(demo_file: Path, tmp_path: Path) -> Meet:
    """The ready meet: platform 1 is a bar in round 2 of the squat, platform 2 a belt."""
    shutil.copy(demo_file, tmp_path / "meet.db")
    return Meet(tmp_path / "meet.db")


@pytest.fixture
def fresh(tmp_path: Path) -> Meet:
    """A folder in which nothing has been made yet."""
    return Meet(tmp_path / "fresh.db")


@pytest.fixture(params=[{}, HTMX], ids=["plain", "htmx"])
def client(request: pytest.FixtureRequest, meet: Meet) -> Iterator[TestClient]:
    """The ready meet's pages, once as a plain browser asks and once as htmx asks."""
    with app_over(meet, request.param) as client:
        yield client


@pytest.fixture
def visitor(meet: Meet) -> Iterator[TestClient]:
    """The ready meet's pages as a browser without scripts asks for them."""
    with app_over(meet) as client:
        yield client


@pytest.fixture(params=[{}, HTMX], ids=["plain", "htmx"])
def new_client(request: pytest.FixtureRequest, fresh: Meet) -> Iterator[TestClient]:
    """An empty folder's pages, both ways."""
    with app_over(fresh, request.param) as client:
        yield client


@pytest.fixture(scope="session")
def still_meet(demo_file: Path, tmp_path_factory: pytest.TempPathFactory) -> Meet:
    """The ready meet for tests that only look, or whose entries are all refused: one copy for all of them."""
    return Meet(Path(shutil.copy(demo_file, tmp_path_factory.mktemp("still") / "meet.db")))


@pytest.fixture(scope="session", params=[{}, HTMX], ids=["plain", "htmx"])
def still_client(request: pytest.FixtureRequest, still_meet: Meet) -> Iterator[TestClient]:
    """Its pages, both ways."""
    with app_over(still_meet, request.param) as client:
        yield client


@pytest.fixture(scope="session")
def still_visitor(still_meet: Meet) -> Iterator[TestClient]:
    """Its pages, without scripts."""
    with app_over(still_meet) as client:
        yield client
