"""The score sheet of the flight's lift, as the Table page shows it."""

from __future__ import annotations

from dataclasses import dataclass

from app.desk.board import Board
from app.loading.mass import show_mass
from app.meet.model import RESULT_WORDS, Attempt, Lifter, Result
from app.meet.rules import Rules
from app.meet.silence import ruled_default


@dataclass(frozen=True, slots=True)
class ScoreCell:
    """One attempt of the score sheet."""

    attempt_id: int
    version: int
    weight: str
    result: str  # "good lift", …; "" for one still to come
    kind: str  # "good", "missed", "passed", "open"


@dataclass(frozen=True, slots=True)
class ScoreRow:
    """A lifter of the flight with the three attempts of the lift."""

    lot: str
    lifter: str
    body_weight: str
    rack: str
    cells: tuple[ScoreCell, ...]
    best: str
    lifter_id: int
    withdrawn: bool
    may_have_fourth: bool


def score_rows(one: Board) -> tuple[ScoreRow, ...]:
    """The flight's lifters by lot number."""
    return tuple(_score_row(one, lifter) for lifter in one.programme.of_flight(one.flight.id))


def _score_row(one: Board, lifter: Lifter) -> ScoreRow:
    attempts = {a.number: a for a in one.programme.of_lift(one.lift.id).get(lifter.id, ())}
    rules = one.programme.rules_of(one.lift.id)
    best = max(
        (a.weight for a in attempts.values() if a.result is Result.GOOD and a.weight is not None),
        default=None,
    )
    return ScoreRow(
        lot=str(lifter.lot),
        lifter=lifter.name,
        body_weight="" if lifter.body_weight is None else show_mass(lifter.body_weight),
        rack=one.now.racks.get((lifter.id, one.lift.id), ""),
        cells=tuple(_cell(attempts, number, rules) for number in sorted(attempts)),
        best="" if best is None else show_mass(best),
        lifter_id=lifter.id,
        withdrawn=lifter.withdrawn,
        may_have_fourth=one.programme.rules.fourth_for_record
        and 4 not in attempts
        and 3 in attempts
        and attempts[3].result is not Result.OPEN,
    )


def _cell(attempts: dict[int, Attempt], number: int, rules: Rules) -> ScoreCell:
    """One attempt; a weight that is asked for now and not handed in stands in brackets at the rule's default."""
    attempt, before = attempts[number], attempts.get(number - 1)
    shown = show_mass(attempt.weight) if attempt.weight is not None else ""
    if not shown and attempt.result is Result.OPEN and before and before.result is not Result.OPEN:
        default = ruled_default(rules, before, before.weight)
        shown = "" if default is None else f"({show_mass(default)})"
    return ScoreCell(
        attempt.id,
        attempt.version,
        shown,
        "" if attempt.result is Result.OPEN else RESULT_WORDS[attempt.result],
        attempt.result.value,
    )
