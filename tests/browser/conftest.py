"""Debian's Chromium, driven against the real server with the demo meet in a folder of the test's own."""

from __future__ import annotations

import os
import re
import shutil
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import BrowserContext, ConsoleMessage, Page

from tests.browser.hall import Hall, new_hall
from tests.serving import Served, served
from tests.web.ready import Meet, ready_once

CHROMIUM = Path("/usr/bin/chromium")
CHROMIUM_ARGS = [
    "--no-sandbox",  # CI runs as root
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
TABLE, CREW = "/platforms/1/table", "/platforms/1/crew"


@pytest.fixture(scope="session")
def browser_type_launch_args(browser_type_launch_args: dict[str, Any]) -> dict[str, Any]:
    """Without a browser these tests are skipped on a laptop, and fail where the whole suite is meant to run."""
    if not CHROMIUM.exists() and not os.environ.get("CI"):
        pytest.skip("no chromium here: apt-get install chromium")
    return {**browser_type_launch_args, "executable_path": str(CHROMIUM), "args": CHROMIUM_ARGS}


@pytest.fixture(scope="session")
def demo_file(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The demo meet, made once; servers work on copies."""
    return ready_once(tmp_path_factory)


def _copy(demo_file: Path, folder: Path) -> Meet:
    folder.mkdir()
    return Meet(Path(shutil.copy(demo_file, folder / "meet.db")))


@pytest.fixture(scope="session")
def house(demo_file: Path, tmp_path_factory: pytest.TempPathFactory) -> Iterator[tuple[Served, Meet]]:
    """The server that all these tests share. Its first meet is only looked at."""
    meet = _copy(demo_file, tmp_path_factory.mktemp("shared") / "data")
    with served("serve", meet.file.parent) as running:
        yield running, meet


@pytest.fixture(scope="session")
def base_url(house: tuple[Served, Meet]) -> str:
    """The real server, for tests that only look."""
    return house[0].url


@pytest.fixture
def hall(house: tuple[Served, Meet]) -> Hall:
    """A meet in the shared server, for a test that enters something."""
    return new_hall(house[0].url, house[1])


@pytest.fixture
def meet(demo_file: Path, tmp_path: Path) -> Meet:
    """The demo meet in a folder of this test's own."""
    return _copy(demo_file, tmp_path / "data")


@pytest.fixture
def running(meet: Meet) -> Iterator[Served]:
    """A server of this test's own, to be killed."""
    with served("serve", meet.file.parent) as one:
        yield one


@pytest.fixture
def complaints(context: BrowserContext) -> list[str]:
    """What the browser's console complains of on any page of the context, and what no script caught."""
    heard: list[str] = []

    def note(message: ConsoleMessage) -> None:
        # A refused entry is an answer of 4xx, which Chromium reports as a failed load.
        if message.type == "error" and "Failed to load resource" not in message.text:
            heard.append(message.text)

    context.on("console", note)
    context.on("weberror", lambda error: heard.append(str(error.error)))
    return heard


@pytest.fixture
def table(page: Page, hall: Hall, complaints: list[str]) -> Iterator[Page]:
    """The Table of the bar's platform, open and connected; its console stays clean."""
    page.goto(hall.table)
    wait_connected(page)
    yield page
    assert complaints == []


def wait_connected(page: Page) -> None:
    """Until the page has heard of its platform's revision."""
    page.locator("[data-age]", has_text=re.compile("^connected")).wait_for()
