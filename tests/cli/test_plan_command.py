"""``platewright plan``: the same answers as the API, on standard output, with an exit status to build on."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from starlette.testclient import TestClient

from app.web.main import create_app
from tests.serving import platewright, platewright_here

ASKED: dict[str, Any] = {
    "implement": {"mass": "20", "ends": 2},
    "collar": {"mass": "2.5"},
    "plates": [{"face": face, "count": 4} for face in ("25", "20", "15", "10", "5", "2.5", "1.25")],
    "start": ["25", "10", "1.25"],
    "targets": ["102.5", "110", "142.5"],
}
TOO_ODD = ASKED | {"targets": ["101"]}


@pytest.fixture
def request_file(tmp_path: Path) -> Path:
    """A file with one request, spread over several lines."""
    file = tmp_path / "request.json"
    file.write_text(json.dumps(ASKED, indent=2), encoding="utf-8")
    return file


def from_api(text: str, tmp_path: Path) -> str:
    """What the web answers to the same text."""
    with TestClient(create_app(f"sqlite:///{tmp_path / 'meet.db'}")) as client:
        return client.post("/api/plan", content=text).text


def test_file_is_answered_as_the_api_answers_it(request_file: Path, tmp_path: Path) -> None:
    done = platewright("plan", str(request_file))
    assert (done.status, done.err) == (0, "")
    assert json.loads(done.out)["proof"] == "optimal"
    assert done.out == from_api(request_file.read_text(encoding="utf-8"), tmp_path)


def test_standard_input_is_read_for_a_dash(request_file: Path) -> None:
    done = platewright("plan", "-", stdin=request_file.read_bytes())
    assert (done.status, done.out) == (0, platewright_here("plan", str(request_file)).out)


def test_lines_are_answered_line_by_line_and_one_refusal_makes_the_status_2(tmp_path: Path) -> None:
    text = "\n".join(json.dumps(one) for one in (ASKED, TOO_ODD, ASKED)) + "\n"
    done = platewright("plan", "-", stdin=text.encode())
    assert done.status == 2
    told = [json.loads(line) for line in done.out.splitlines()]
    assert told[0] == told[2]
    error = told[1]["error"]
    assert (error["code"], error["below"], error["above"]) == ("unloadable", "100", "102.5")
    assert done.out == from_api(text, tmp_path)


@pytest.mark.parametrize(
    "text", ["", "not json", '{"targets": [NaN]}', json.dumps(ASKED | {"weights": []})], ids=range(4)
)
def test_what_is_no_request_is_refused_with_status_2_and_no_trace(text: str, tmp_path: Path) -> None:
    done = platewright_here("plan", "-", stdin=text)
    assert (done.status, done.err) == (2, "")
    assert json.loads(done.out)["error"]["code"] == "bad-request"
    assert done.out == from_api(text, tmp_path)


@pytest.mark.parametrize("content", [None, b"\xff\xfe\x00"], ids=["missing", "no text"])
def test_file_that_cannot_be_read_is_a_sentence(tmp_path: Path, content: bytes | None) -> None:
    file = tmp_path / "request.json"
    if content is not None:
        file.write_bytes(content)
    done = platewright_here("plan", str(file))
    assert (done.status, done.out) == (2, "")
    assert done.err.startswith(f"{file} cannot be read: ")
    assert "Traceback" not in done.err


def test_input_that_is_no_text_is_refused_without_a_trace() -> None:
    done = platewright("plan", "-", stdin=b"\xff\xfe\x00")
    assert done.status == 2
    assert "Traceback" not in done.err


def test_every_command_is_named_in_the_help() -> None:
    told = platewright_here("--help").out
    assert [name for name in ("demo", "serve", "plan") if name not in told] == []


@pytest.mark.parametrize("arguments", [(), ("play",), ("plan",), ("demo", "--port", "many")], ids=range(4))
def test_command_that_is_not_understood_has_status_2(arguments: tuple[str, ...]) -> None:
    done = platewright_here(*arguments)
    assert done.status == 2
    assert "usage: platewright" in done.err
