"""The planner's contract as text: one JSON object, or one object a line; the command line and the web share it."""

from __future__ import annotations

import json
from collections.abc import Iterator

from app.planning import Refusal, answer_line, read_json

MOST_LINES = 10_000


def questions(text: str) -> list[str]:
    """The requests in a text. JSON Lines when the first line is a whole JSON value and more lines follow."""
    lines = [line for line in text.splitlines() if line.strip()]
    if len(lines) < 2:
        return [text]
    try:
        read_json(lines[0])
    except Refusal:
        return [text]
    return lines[:MOST_LINES]


def answers(text: str) -> Iterator[tuple[str, bool]]:
    """One line of answer for each request, and whether it was answered rather than refused."""
    for question in questions(text):
        document, good = answer_line(question)
        yield json.dumps(document, ensure_ascii=False), good
