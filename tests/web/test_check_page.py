"""The referee's check: its sums are added up again here, from what stands on the page and nothing else."""

from __future__ import annotations

from fractions import Fraction

from starlette.testclient import TestClient

from tests.web.asking import get, landed, send
from tests.web.pages import Element
from tests.web.ready import Meet
from tests.web.test_table_page import declare, judge, tell, up

CHECK = "/platforms/1/check"


def now_of(client: TestClient, path: str = CHECK) -> Element:
    return get(client, path).one("section", "now")


def numbers(words: str) -> list[Fraction]:
    return [Fraction(word) for word in words.split() if word.replace(".", "").isdigit()]


def test_sum_a_side_and_in_all_add_up_to_the_called_weight(client: TestClient, meet: Meet) -> None:
    page = now_of(client)
    *plates, side = numbers(page.one(klass="side-sum").text)
    two, again, base, whole = numbers(page.one(klass="whole-sum").text)
    hand = meet.platform()["hand"]
    assert plates == [Fraction(face) for face in hand["stack"]]
    assert sum(plates) == side == again
    assert two * side + base == whole == Fraction(hand["weight"])
    assert "Power bar 20 + collars 2 × 2.5 = 25 kg" in page.text


def test_both_ends_are_drawn_alike_and_the_plates_counted(client: TestClient, meet: Meet) -> None:
    page = now_of(client)
    left, right = (one.texts("text", "label-number") for one in page.all("svg", "end-drawing"))
    assert left == right == meet.platform()["hand"]["stack"]
    assert f"{len(left)} plates + collar, both ends alike" in page.text
    assert "Collars 2.5 each, on and tight" in page.text


def test_other_end_is_drawn_from_right_to_left(client: TestClient) -> None:
    left, right = now_of(client).all("svg", "end-drawing")
    places = [[int(one.attrs["x"]) for one in end.all("rect", "plate-edge")] for end in (left, right)]
    assert places[0] == sorted(places[0], reverse=True)
    assert places[1] == sorted(places[1])


def test_stack_that_is_not_the_charts_is_named_with_the_charts_beside_it(
    client: TestClient, meet: Meet
) -> None:
    """The demo's first change keeps the 10 and the 5 that are on: 25 + 10 + 5 + 2.5 + 1.25, the chart has 25 + 15."""
    assert meet.platform()["hand"]["stack"] == ["25", "10", "5", "2.5", "1.25"]
    words = now_of(client).one(klass="chart").text
    assert words == "Not the chart's stack. The chart has 25 + 15 + 2.5 + 1.25 = 43.75 a side."


def test_charts_own_stack_is_said_to_be_so(client: TestClient, meet: Meet) -> None:
    declare(client, up(meet), "115")
    tell(client, "unknown")
    assert meet.platform()["hand"]["stack"] == ["25", "20"]
    assert now_of(client).one(klass="chart").text == "The chart's stack."


def test_page_says_whether_the_crew_still_loads(client: TestClient) -> None:
    assert now_of(client).one(klass="loaded-word").text == "Being loaded"
    landed(client, send(client, get(client, "/platforms/1/crew"), "/loaded"))
    assert now_of(client).one(klass="loaded-word").text == "Loaded"


def test_no_load_is_shown_for_checking_while_the_weight_is_in_doubt(client: TestClient, meet: Meet) -> None:
    declare(client, up(meet), "115")
    page = now_of(client)
    assert page.one("h1").one("span", "heard").text == "CHANGED"
    assert "112.5 115 kg" in page.text
    assert not page.all("svg", "end-drawing")
    assert not page.all(klass="sum")


def test_hold_fills_the_page(client: TestClient) -> None:
    tell(client, "hold")
    page = now_of(client)
    assert page.one("h1").one("span", "heard").text == "HOLD"
    assert "Should be on each end: 25 + 10 + 5" in page.text


def test_belt_is_one_stack_without_sides(client: TestClient, meet: Meet) -> None:
    page = now_of(client, "/platforms/2/check")
    assert len(page.all("svg", "end-drawing")) == 1
    assert "a side" not in page.text
    assert "both ends" not in page.text
    assert numbers(page.one(klass="side-sum").text)[-1] == Fraction(meet.platform(2)["hand"]["weight"])


def test_page_has_nothing_to_press_but_light_or_dark(client: TestClient) -> None:
    page = get(client, CHECK)
    assert not page.all("form")
    assert page.texts("button") == ["Light or dark"]


def test_finished_flight_and_empty_platform_have_words(client: TestClient, meet: Meet) -> None:
    client.post("/meets/1/platforms", data={"name": "Third", "preset": "bar-kg"})
    assert "NO FLIGHT" in now_of(client, "/platforms/3/check").text
    judge(client, "good")
    assert now_of(client).one("h1").text.startswith("125")
