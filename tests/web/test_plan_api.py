"""``POST /api/plan``: the planner's contract over HTTP, and what it says to a request that it cannot answer."""

from __future__ import annotations

import json
from typing import Any

import pytest
from starlette.testclient import TestClient

from app.web.main import SECURITY_HEADERS

# The example of the contract: from 100 with 25 + 10 + 1.25 + 1.25 on each end to 102.5, collars counted.
ASKED: dict[str, Any] = {
    "implement": {"mass": "20", "ends": 2},
    "collar": {"mass": "2.5"},
    "plates": [{"face": face, "count": 4} for face in ("25", "20", "15", "10", "5", "2.5", "1.25")],
    "targets": ["102.5"],
}


def asking(**changes: Any) -> dict[str, Any]:
    """The request with other values."""
    return ASKED | changes


def test_plan_of_the_contracts_example(visitor: TestClient) -> None:
    """The numbers of the answer shown in the contract, for a start that leads there: 25 + 10 + 1.25."""
    answer = visitor.post("/api/plan", json=asking(start=["25", "10", "1.25"], extra_plates=1))
    assert answer.status_code == 200
    assert answer.headers["content-type"] == "application/json"
    told = answer.json()
    (change,) = told["changes"]
    assert change["target"] == "102.5"
    assert sum(map(float, change["stack"])) == 38.75
    assert {"plates": change["plates"], "mass": change["mass"], "time_s": change["time_s"]} == told["total"]
    assert told["total"] == told["worst"]
    assert (told["proof"], set(told)) == ("optimal", {"changes", "total", "worst", "chart", "proof"})
    assert change == {
        "target": "102.5",
        "stack": ["25", "10", "2.5", "1.25"],
        "off": ["1.25"],
        "off_at": [2],
        "on": ["2.5", "1.25"],
        "on_at": [2, 3],
        "plates": 3,
        "mass": "5",
        "time_s": "3",
    }
    assert told["chart"]["total"] == {"plates": 3, "mass": "5", "time_s": "3"}


def test_several_lines_give_an_answer_a_line_and_a_refusal_stands_in_its_place(visitor: TestClient) -> None:
    asked = [asking(), asking(targets=["101"]), asking(targets=["25"])]
    answer = visitor.post("/api/plan", content="\n".join(json.dumps(one) for one in asked))
    assert answer.status_code == 422
    assert answer.headers["content-type"] == "application/jsonl"
    told = [json.loads(line) for line in answer.text.splitlines()]
    assert [set(one) == {"error"} for one in told] == [False, True, False]
    assert told[0] == visitor.post("/api/plan", json=asked[0]).json()


@pytest.mark.parametrize(
    ("changes", "error"),
    [
        ({"targets": ["101"]}, {"code": "unloadable", "target": "101", "below": "100", "above": "102.5"}),
        ({"targets": ["20"]}, {"code": "lighter-than-bar", "target": "20", "below": None, "above": "25"}),
        (
            {
                "targets": ["225"],
                "implement": {"mass": "20", "ends": 2, "usable_mm": 110},
                "collar": {"mass": "2.5", "width_mm": 50},
                "plates": [{"face": "25", "count": 8, "thickness_mm": 27}],
            },
            {"code": "no-room", "target": "225", "below": "125", "above": None},
        ),
        ({"weights": ["100"]}, {"code": "bad-request", "key": "weights"}),
        ({"targets": "100"}, {"code": "bad-request", "key": "targets"}),
        ({"targets": [None]}, {"code": "bad-request", "key": "targets"}),
        ({"implement": {"mass": "20", "ends": 3}}, {"code": "bad-request", "key": "ends"}),
        ({"unit": "stone"}, {"code": "bad-request", "key": "unit"}),
        ({"measure": "noise"}, {"code": "bad-request", "key": "measure"}),
    ],
)
def test_refusal_has_its_code_and_says_what_would_be_right(
    visitor: TestClient, changes: dict[str, Any], error: dict[str, Any]
) -> None:
    answer = visitor.post("/api/plan", json=asking(**changes))
    assert answer.status_code == 422
    told = answer.json()["error"]
    assert told.pop("because").endswith(".")
    assert told == error


@pytest.mark.parametrize(
    "body",
    [
        b"",
        b"   ",
        b"not json",
        b"[]",
        b"3",
        b"null",
        b'{"targets": [1,}',
        b"\xff\xfe\x00",
        b'{"targets": [NaN]}',
        b'{"targets": [Infinity]}',
        b'{"targets": [1e999]}',
        b'{"unit": "kg", "unit": "lb"}',
        b"[" * 100_000,
    ],
    ids=range(13),
)
def test_what_is_no_request_is_a_bad_request_and_no_fault(visitor: TestClient, body: bytes) -> None:
    answer = visitor.post("/api/plan", content=body)
    assert answer.status_code == 422
    assert answer.json()["error"]["code"] == "bad-request"
    assert answer.json()["error"]["because"]


def test_nan_inside_a_request_is_refused(visitor: TestClient) -> None:
    text = json.dumps(asking(targets=[float("nan")]))
    answer = visitor.post("/api/plan", content=text)
    assert answer.status_code == 422
    assert answer.json()["error"]["code"] == "bad-request"


def test_ten_megabytes_are_refused_before_they_are_read(visitor: TestClient) -> None:
    answer = visitor.post("/api/plan", content=b"x" * 10_000_000)
    assert answer.status_code == 413
    assert answer.json() == {"error": {"code": "bad-request", "because": "The request is larger than 2 MB."}}


@pytest.mark.parametrize(
    ("method", "path", "status"), [("GET", "/api/plan", 405), ("POST", "/api/nothing", 404)]
)
def test_wrong_question_to_the_api_is_answered_in_json(
    client: TestClient, method: str, path: str, status: int
) -> None:
    answer = client.request(method, path)
    assert answer.status_code == status
    assert answer.json()["error"]["because"].endswith(".")


def test_api_answers_carry_the_security_headers(visitor: TestClient) -> None:
    for answer in (visitor.post("/api/plan", json=ASKED), visitor.post("/api/plan", content=b"x")):
        assert {name: answer.headers.get(name) for name in SECURITY_HEADERS} == SECURITY_HEADERS


def test_post_to_the_api_from_another_sites_page_is_refused_in_json(visitor: TestClient) -> None:
    answer = visitor.post("/api/plan", json=ASKED, headers={"Origin": "http://elsewhere.example"})
    assert answer.status_code == 403
    assert answer.json()["error"]["because"] == "Posted from another site's page: refused."
