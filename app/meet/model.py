"""The nouns of a meet, as the rules see them: frozen, no rows, no sessions.

Masses are exact fractions of the meet's own unit (kg or lb), never floats.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from enum import StrEnum
from fractions import Fraction

ROUNDS = (1, 2, 3)
ORDINALS = {1: "1st", 2: "2nd", 3: "3rd", 4: "4th"}


class Result(StrEnum):
    """What became of an attempt."""

    OPEN = "open"
    GOOD = "good"
    MISSED = "missed"
    PASSED = "passed"


RESULT_WORDS = {
    Result.OPEN: "not lifted",
    Result.GOOD: "good lift",
    Result.MISSED: "no lift",
    Result.PASSED: "passed",
}


@dataclass(frozen=True, slots=True)
class Lifter:
    """One person of the roster."""

    id: int
    name: str
    lot: int
    flight_id: int
    body_weight: Fraction | None
    withdrawn: bool = False


@dataclass(frozen=True, slots=True)
class Attempt:
    """One try: a lifter, a lift, a number; the weight is None until somebody hands it in.

    ``changes`` counts how often a handed-in weight was replaced. ``record``: the lifter asks for a record.
    ``retake`` says where a retake that was granted goes; "" for none. ``lifted_at`` is aware UTC.
    """

    id: int
    lifter_id: int
    lift_id: int
    number: int
    weight: Fraction | None
    result: Result
    version: int
    entered_by: str = ""
    changes: int = 0
    record: bool = False
    retake: str = ""
    lifted_at: datetime | None = None


@dataclass(frozen=True, slots=True)
class Lift:
    """One discipline of a session, with the rules that its declarations must keep."""

    id: int
    name: str
    position: int
    implement_id: int
    step: Fraction


@dataclass(frozen=True, slots=True)
class Flight:
    """Lifters who lift together."""

    id: int
    name: str
    position: int


def attempt_name(lift: str, number: int) -> str:
    """The attempt in the words of the hall: ``Squat, 2nd``."""
    return f"{lift}, {ORDINALS.get(number, f'{number}th')}"
