"""Debian's Chromium, driven against the real server with the demo meet in a folder of the test's own."""

from __future__ import annotations

import os
import shutil
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import BrowserContext, ConsoleMessage, Page

from tests.serving import Served, served
from tests.web.ready import Meet, make_ready

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
    return make_ready(tmp_path_factory.mktemp("demo"))


def _copy(demo_file: Path, folder: Path) -> Meet:
    folder.mkdir()
    return Meet(Path(shutil.copy(demo_file, folder / "meet.db")))


@pytest.fixture(scope="session")
def base_url(demo_file: Path, tmp_path_factory: pytest.TempPathFactory) -> Iterator[str]:
    """A server for tests that only look."""
    meet = _copy(demo_file, tmp_path_factory.mktemp("looked-at") / "data")
    with served("serve", meet.file.parent) as running:
        yield running.url


@pytest.fixture
def meet(demo_file: Path, tmp_path: Path) -> Meet:
    """The demo meet for a test that enters something."""
    return _copy(demo_file, tmp_path / "data")


@pytest.fixture
def running(meet: Meet) -> Iterator[Served]:
    """A server of this test's own."""
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
def table(page: Page, running: Served, complaints: list[str]) -> Iterator[Page]:
    """The Table of the bar's platform, open and connected; its console stays clean."""
    page.goto(running.url + TABLE)
    wait_connected(page)
    yield page
    assert complaints == []


def wait_connected(page: Page) -> None:
    """Until the page has heard of its platform's revision."""
    page.locator("[data-age]", has_text="connected, changed").wait_for()
