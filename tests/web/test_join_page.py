"""Join: the codes hold the address that the browser itself used, and an address that only works here is warned of."""

from __future__ import annotations

import io
import re

import pytest
import segno
from starlette.testclient import TestClient

from tests.web.asking import get

JOIN = "/platforms/1/join"
HALL = {"Host": "192.168.8.20:8420"}


def code(svg: str) -> set[str]:
    """The drawing's path, which is all that a camera sees."""
    return set(re.findall(r' d="([^"]+)"', svg))


@pytest.mark.parametrize("screen", ["crew", "check", "announcer", "table", "screen"])
def test_code_of_each_screen_is_that_of_its_address_in_this_network(visitor: TestClient, screen: str) -> None:
    """Compared with a code that is made here from the address in words."""
    page = visitor.get(JOIN, headers=HALL).text
    address = f"http://192.168.8.20:8420/platforms/1/{screen}"
    assert address in page
    out = io.BytesIO()
    segno.make(address, error="m").save(out, kind="svg", border=4, dark="#000", light="#fff", omitsize=True)
    answer = visitor.get(f"{JOIN}/{screen}.svg", headers=HALL)
    assert answer.headers["content-type"].startswith("image/svg+xml")
    assert code(answer.text) == code(out.getvalue().decode())


@pytest.mark.parametrize("host", ["127.0.0.1:8420", "localhost:8420", "127.0.1.1", "[::1]:8420"])
def test_address_that_only_works_on_this_machine_is_warned_of(visitor: TestClient, host: str) -> None:
    page = visitor.get(JOIN, headers={"Host": host}).text
    assert "No other device can reach this address." in page
    assert "--host 0.0.0.0" in page


def test_address_in_the_network_is_not_warned_of(visitor: TestClient) -> None:
    assert "No other device" not in visitor.get(JOIN, headers=HALL).text


def test_screen_that_does_not_exist_has_no_code(visitor: TestClient) -> None:
    assert visitor.get(f"{JOIN}/scoreboard.svg").status_code == 404


def test_host_from_the_request_is_shown_as_text(visitor: TestClient) -> None:
    page = visitor.get(JOIN, headers={"Host": 'x"><b>'})
    assert "<b>" not in page.text.replace("<body", "")


def test_every_platform_has_its_own_codes(visitor: TestClient) -> None:
    assert "/platforms/2/crew" in get(visitor, "/platforms/2/join").text
