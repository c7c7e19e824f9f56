"""The planner's contract as text: one JSON object, or one object a line; the command line and the web share it."""

from __future__ import annotations

import json
import time
from collections.abc import Iterator

from app.planning import Budget, Refusal, answer_line, read_json

MOST_LINES = 10_000
SECONDS, MEMORY_MB = 20.0, 400


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


def watched(seconds: float = SECONDS, memory_mb: int = MEMORY_MB) -> Budget:
    """What one plan may take: what cannot be proved within it is answered with the best plan and a bound."""
    return Budget(memory_bytes=memory_mb * 1_000_000, seconds=seconds, monotonic=time.monotonic)


def answers(text: str, budget: Budget | None = None) -> Iterator[tuple[str, bool]]:
    """One line of answer for each request, and whether it was answered rather than refused."""
    for question in questions(text):
        document, good = answer_line(question, budget or watched())
        yield json.dumps(document, ensure_ascii=False), good
