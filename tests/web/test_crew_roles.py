"""A screen for one pair of hands, the plate that is not there, and the great change told at a round's end."""

from __future__ import annotations

from collections import Counter
from fractions import Fraction

from starlette.testclient import TestClient

from tests.web.asking import get, landed, refusal, send
from tests.web.crew_screen import look
from tests.web.pages import Element, read
from tests.web.ready import Meet
from tests.web.test_table_page import judge, tell

CREW, SCREEN, MISSING = "/platforms/1/crew", "/platforms/1/screen", "/platforms/1/missing"


def play(client: TestClient, role: str) -> None:
    landed(client, send(client, get(client, SCREEN), "/screen", role=role))


def now(client: TestClient) -> Element:
    return get(client, CREW).one("section", "now")


def test_one_loader_takes_the_ends_in_turns_never_more_than_one_big_plate_apart(
    client: TestClient, meet: Meet
) -> None:
    play(client, "alone")
    hand = meet.platform()["hand"]
    ends = {side: [Fraction(face) for face in hand["before"]] for side in ("left", "right")}
    big = max(Fraction(face) for face in [*hand["before"], *hand["stack"]])
    turns = now(client).one("ol", "turns").all("li")
    for turn in turns:
        side, what, face = turn.one("span").text, turn.one("b").text, turn.one("strong").text
        if face != "collar":
            if what == "On":
                ends[side].append(Fraction(face))
            else:
                assert ends[side].pop() == Fraction(face)
        assert abs(sum(ends["left"]) - sum(ends["right"])) <= big
    assert ends == {side: [Fraction(face) for face in hand["stack"]] for side in ("left", "right")}
    assert Counter(turn.one("strong").text for turn in turns)["collar"] == 4


def test_whoever_sets_the_rack_sees_its_setting_alone(client: TestClient) -> None:
    play(client, "rack")
    page = now(client)
    assert "11 out" in page.one("h1").text
    assert not page.all(klass="move")


def test_hander_is_told_that_each_plate_is_wanted_twice(client: TestClient) -> None:
    play(client, "hander")
    assert "one for each end" in now(client).text


def test_left_end_is_drawn_from_right_to_left(client: TestClient) -> None:
    play(client, "left")
    (drawing,) = now(client).all("svg", "end-drawing")
    places = [int(one.attrs["x"]) for one in drawing.all("rect", "plate-edge")]
    assert places == sorted(places, reverse=True)
    assert "Left end" in now(client).text


def test_plate_that_is_not_there_is_taken_out_and_the_stack_made_again(
    client: TestClient, meet: Meet
) -> None:
    assert meet.platform()["hand"]["stack"] == ["25", "10", "5", "2.5", "1.25"]
    before = meet.stock(1)[Fraction("1.25")]
    page = get(client, f"{MISSING}?face=1.25")
    assert [button.text for button in page.all("button") if "here" in button.text] == [
        "No 1.25 here",
        "No 2.5 here",
    ]
    answer = client.post(
        MISSING, data={"face": "1.25", "shown": page.all("input", name="shown")[0].attrs["value"]}
    )
    assert answer.status_code in (204, 303)
    assert meet.stock(1)[Fraction("1.25")] == min(before - 1, 1)
    assert look(client).state == "changed"
    assert "A plate of this change is no longer at the platform." in look(client).text
    landed(client, send(client, get(client, CREW), "/bar", "bar=before"))
    screen = look(client)
    assert Fraction("1.25") not in (screen.drawn or ())


def test_plate_missing_for_an_earlier_change_is_refused(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    answer = client.post(MISSING, data={"face": "2.5", "shown": "99:100:25"})
    assert "earlier change" in refusal(answer, 409)
    assert meet.state() == before


def test_plate_that_the_change_does_not_need_is_refused(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    shown = now(client).attrs["data-shown"]
    for face, sentence in (("20", "This change needs no 20."), ("abc", "Choose one of the plates")):
        assert sentence in refusal(client.post(MISSING, data={"face": face, "shown": shown}), 422)
    assert meet.state() == before


def test_nothing_can_be_missing_during_a_hold(client: TestClient) -> None:
    tell(client, "hold")
    assert not [one for one in get(client, MISSING).texts("button") if "here" in one]


def test_last_lift_of_a_round_tells_the_next_rounds_first_bar(client: TestClient, meet: Meet) -> None:
    while "Lars Pettifer" not in look(client).text.split("Then")[0]:
        judge(client, "good")
    landed(client, send(client, get(client, CREW), "/loaded"))
    page = now(client)
    fall = page.one("section", "fall")
    assert fall.one("h2").text == "After this lift"
    weight = Fraction(fall.one("p", "fall-weight").one("strong").text)
    assert "round 3" in fall.text
    off, on = (
        [
            Fraction(one.text)
            for line in fall.all("p", "fall-hands")
            if word in line.text
            for one in line.all("span", "plate")
        ]
        for word in ("Off", "On")
    )
    bar = [Fraction(face) for face in meet.platform()["bar"]]
    assert bar[len(bar) - len(off) :] == off[::-1]
    assert 25 + 2 * (sum(bar[: len(bar) - len(off)]) + sum(on)) == weight


def test_lift_inside_a_round_tells_no_fall(client: TestClient) -> None:
    landed(client, send(client, get(client, CREW), "/loaded"))
    assert not now(client).all(klass="fall")


def test_screens_ahead_follow_one_from_another(client: TestClient, meet: Meet) -> None:
    """Each starts from where the one before left the bar, and adds up to its weight."""
    bar = [Fraction(face) for face in meet.platform()["hand"]["stack"]]
    ahead = read(client.get(f"{CREW}/ahead").text).all("section", "now")
    assert len(ahead) == 10
    for screen in ahead:
        off, on = (
            [Fraction(word) for word in move.all("span", "heard")[-1].text.split(", ")] if move else []
            for move in (next(iter(screen.all(klass=name)), None) for name in ("off", "on"))
        )
        assert bar[len(bar) - len(off) :] == off[::-1]
        bar = bar[: len(bar) - len(off)] + on
        weight = Fraction(screen.one(klass="weight").one("span", "heard").text)
        assert 25 + 2 * sum(bar) == weight
        assert not screen.all("form")
