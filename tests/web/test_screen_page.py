"""This screen: what a device says about itself is kept by it alone, and nonsense is refused in words."""

from __future__ import annotations

import pytest
from starlette.testclient import TestClient

from app.web.screen import Screen, read_diagonal, read_screen
from tests.web.asking import get, landed, refusal, send

PAGE = "/platforms/1/screen"


def test_kept_settings_come_back_in_the_form(client: TestClient) -> None:
    landed(
        client,
        send(client, get(client, PAGE), PAGE, distance="3", diagonal="10,1", language="de", role="rack"),
    )
    page = get(client, PAGE)
    assert [one.attrs["value"] for one in page.all("option", selected="")] == ["3", "de", "rack"]
    assert page.one("input", id="diagonal").attrs["value"] == "10.1"


def test_height_of_a_digit_is_told_for_the_distance(client: TestClient) -> None:
    """12 mm for each metre (trade, B)."""
    for metres, mm in (("2", 24), ("3", 36), ("4", 48), ("6", 72)):
        landed(client, send(client, get(client, PAGE), PAGE, distance=metres, diagonal="43"))
        assert f"At {metres} m a digit should be {mm} mm high" in get(client, PAGE).text


def test_size_that_no_screen_has_is_refused_and_stays_to_be_corrected(client: TestClient) -> None:
    answer = send(client, get(client, PAGE), PAGE, distance="3", diagonal="1010")
    assert "not the diagonal of a screen" in refusal(answer, 422)
    assert 'value="1010"' in answer.text
    assert "screen" not in answer.cookies


def test_crews_screen_is_told_the_sizes(client: TestClient) -> None:
    landed(client, send(client, get(client, PAGE), PAGE, distance="6", diagonal="55"))
    answer = client.get("/platforms/1/crew", headers={"HX-Request-Type": "full"})
    assert 'data-distance="6" data-diagonal="55"' in answer.text


def test_screen_that_was_never_told_shows_no_ruler(client: TestClient) -> None:
    assert "This line is 100 mm" not in get(client, PAGE).text


@pytest.mark.parametrize("cookie", ["", "distance=9&diagonal=x&language=xx&role=king", "%%%", "a=1&" * 50])
def test_cookie_that_makes_no_sense_counts_for_nothing(client: TestClient, cookie: str) -> None:
    client.cookies.set("screen", cookie)
    assert get(client, "/platforms/1/crew")


@pytest.mark.parametrize(
    ("typed", "read"), [("10.1", "10.1"), ('43"', "43"), (" 32 ", "32"), ("", ""), ("1", None), ("nan", None)]
)
def test_diagonal_is_read_as_people_write_it(typed: str, read: str | None) -> None:
    assert read_diagonal(typed) == read


def test_what_the_cookie_keeps_is_read_back() -> None:
    screen = Screen("4", "43", "pl", "left")
    said = dict(pair.split("=") for pair in screen.cookie().split("&"))
    assert read_screen(said) == screen
