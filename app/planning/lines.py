"""One JSON text in, one JSON-ready answer out: the command line, JSON Lines and the web share it."""

from __future__ import annotations

import json
from decimal import Decimal, InvalidOperation

from app.planning.answer import answer_document
from app.planning.budget import Budget
from app.planning.reading import parse_request
from app.planning.refusal import Refusal, bad_request, refusal_document
from app.planning.solve import plan

LONGEST = 2_000_000


def answer_line(text: str, budget: Budget | None = None) -> tuple[dict[str, object], bool]:
    """The answer document and ``True``, or the error document and ``False``. Never raises on bad input."""
    try:
        request = parse_request(read_json(text))
        return answer_document(plan(request, budget or Budget())), True
    except Refusal as refusal:
        return refusal_document(refusal), False


def read_json(text: str) -> object:
    """Read JSON with exact numbers; what is not JSON is refused as ``bad-request``."""
    if len(text) > LONGEST:
        raise bad_request("request", "The request is longer than two million characters.")
    try:
        return json.loads(
            text, parse_float=_decimal, parse_int=_whole, parse_constant=_no_number, object_pairs_hook=_once
        )
    except RecursionError:
        raise bad_request("request", "The request is nested too deeply.") from None
    except json.JSONDecodeError as wrong:
        where = f"line {wrong.lineno}, character {wrong.colno}"
        raise bad_request("request", f"This is not JSON: {wrong.msg} at {where}.") from None


def _whole(digits: str) -> int:
    if len(digits) > 40:
        raise bad_request("request", "A number in the request has more than forty digits.")
    return int(digits)


def _decimal(digits: str) -> Decimal:
    try:
        return Decimal(digits)
    except InvalidOperation:
        raise bad_request("request", "A number in the request is far too large or too small.") from None


def _no_number(word: str) -> None:
    raise bad_request("request", f"{word} is not a number that a plate can weigh.")


def _once(pairs: list[tuple[str, object]]) -> dict[str, object]:
    found = dict(pairs)
    if len(found) < len(pairs):
        keys = [key for key, _ in pairs]
        twice = next(key for key in keys if keys.count(key) > 1)
        raise bad_request(twice[:60], f"The key {twice[:60]!r} stands twice.")
    return found
