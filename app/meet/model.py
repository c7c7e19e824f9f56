"""The nouns of a meet, as the rules see them: frozen, no rows, no sessions.

Masses are exact fractions of the meet's own unit (kg or lb), never floats.
"""

from __future__ import annotations

from dataclasses import dataclass
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


@dataclass(frozen=True, slots=True)
class Attempt:
    """One try: a lifter, a lift, a number; the weight is None until somebody hands it in."""

    id: int
    lifter_id: int
    lift_id: int
    number: int
    weight: Fraction | None
    result: Result
    version: int
    entered_by: str = ""


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
