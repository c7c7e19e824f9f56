"""The announcer's page names whom the order of the meet names, and says what the bar is doing."""

from __future__ import annotations

from starlette.testclient import TestClient

from tests.web.asking import get, landed, send
from tests.web.crew_screen import look
from tests.web.ready import Meet
from tests.web.test_crew_page import up_by_page
from tests.web.test_table_page import declare, judge, tell, up

ANNOUNCER = "/platforms/1/announcer"


def calls(client: TestClient, path: str = ANNOUNCER) -> list[tuple[str, str, str, str]]:
    """Place, name, weight, and what else is said of each."""
    return [
        (
            one.one(klass="place").text,
            one.one(klass="name").text,
            one.one("p", "kilos").text,
            one.one(klass="what").text,
        )
        for one in get(client, path).all("li", "call")
    ]


def test_up_on_deck_and_in_the_hole_are_the_first_three_of_the_order(client: TestClient) -> None:
    assert calls(client) == [
        ("Up", "Tamsin Okoro", "112.5 kg", "Squat, 2nd, lot 2"),
        ("On deck", "Ines Quarto", "125 kg", "Squat, 2nd, lot 7"),
        ("In the hole", "Rosa Tenney", "137.5 kg", "Squat, 2nd, lot 5"),
    ]
    assert get(client, ANNOUNCER).one("h1").text == "Flight A, Squat, round 2"


def test_order_moves_on_with_the_result(client: TestClient) -> None:
    judge(client, "good")
    assert calls(client)[0][:2] == ("Up", "Ines Quarto")


def test_bar_is_loaded_is_said_when_the_crew_has_said_so(client: TestClient) -> None:
    words = get(client, ANNOUNCER).one(klass="bar-words")
    assert words.text == "The bar is being loaded."
    landed(client, send(client, get(client, "/platforms/1/crew"), "/loaded"))
    assert get(client, ANNOUNCER).one(klass="bar-words").text == "The bar is loaded."


def test_changed_weight_is_announced_at_its_new_value(client: TestClient, meet: Meet) -> None:
    declare(client, up(meet), "115")
    assert calls(client)[0][2] == "115 kg"
    assert get(client, ANNOUNCER).one(klass="bar-words").text == "The weight has changed."


def test_hold_is_said(client: TestClient) -> None:
    tell(client, "hold")
    assert "Hold. Nothing moves" in get(client, ANNOUNCER).one(klass="bar-words").text


def test_weight_that_nobody_handed_in_is_marked(client: TestClient) -> None:
    while look(client).state != "waiting":
        judge(client, "good")
    assert calls(client)[0][3].endswith("weight not handed in, by the rule")


def test_next_flight_follows_when_nobody_is_left(client: TestClient, meet: Meet) -> None:
    while (state := look(client).state) != "finished":
        if state == "waiting":
            declare(client, up_by_page(client, meet), "")
        else:
            judge(client, "missed")
    first = calls(client)[0]
    assert first[0] == "First"
    assert first[3].startswith("Flight B. Squat, 1st")


def test_each_name_has_a_place_for_how_it_is_said(client: TestClient) -> None:
    fields = get(client, ANNOUNCER).all("input")
    assert [field.attrs["aria-label"] for field in fields] == [
        f"How to say {name}" for _, name, *_ in calls(client)
    ]


def test_belt_platform_has_its_own_announcements(client: TestClient) -> None:
    assert calls(client, "/platforms/2/announcer")[0][0] == "Up"


def test_platform_without_flight_says_so(client: TestClient) -> None:
    client.post("/meets/1/platforms", data={"name": "Third", "preset": "bar-kg"})
    assert "The table has not brought a flight" in get(client, "/platforms/3/announcer").text
