"""The page on which a round run on cards is typed in."""

from __future__ import annotations

from starlette.testclient import TestClient

from tests.web.asking import get, refusal, send
from tests.web.ready import Meet

PAGE = "/platforms/1/from-paper"


def test_the_round_that_is_on_is_taken_in(client: TestClient, meet: Meet) -> None:
    page = get(client, PAGE)
    rows = len(page.all("select"))
    answer = send(client, page, "/from-paper", result=["good"] * rows)
    assert answer.status_code in (204, 303)
    assert meet.rows("SELECT count(*) AS n FROM attempt WHERE number = 2 AND result = 'good' AND lift_id = 1") == [
        {"n": rows}
    ]
    assert meet.platform()["bar"] is None


def test_a_wrong_weight_comes_back_as_typed_and_nothing_is_taken(client: TestClient, meet: Meet) -> None:
    page = get(client, PAGE)
    rows = len(page.all("select"))
    before = meet.state()
    answer = send(client, page, "/from-paper", weight=["heavy"] * rows, result=["good"] * rows)
    assert "“heavy” is not a weight" in refusal(answer, 422)
    assert answer.text.count('value="heavy"') == rows
    assert meet.state() == before


def test_a_torn_form_is_refused(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    data = {"number": "2", "attempt": ["1", "2"], "version": ["0"], "weight": ["1"], "result": [""]}
    assert "The form was not complete" in refusal(client.post(PAGE, data=data), 422)
    assert meet.state() == before
