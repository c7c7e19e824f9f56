"""Who lifts when, in the rounds system.

The order is the rulebook's and not ours to choose: rounds one after another; inside a round the lighter
bar first; on equal weights the lower lot number (WDFPF 2007, Order of competition, as read in
``figures.md`` 1.2; lower lot first is common practice).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from app.meet.model import ROUNDS, Attempt, Lifter, Result


@dataclass(frozen=True, slots=True)
class Turn:
    """An attempt still to come, with the weight it is planned at.

    ``assumed`` is true when nobody has handed the weight in and ``weight`` is what the rule gives by default.
    """

    attempt: Attempt
    lifter: Lifter
    weight: Fraction
    assumed: bool


def default_weight(before: Attempt | None, before_weight: Fraction | None, step: Fraction) -> Fraction | None:
    """What stands in for a weight that nobody handed in; None for an opener, which has no default.

    The same weight after a miss or a pass, one step more after a good lift (IPL Rulebook 2019, 6.1.1). An
    attempt that is still to be lifted is taken as good, since most are.
    """
    if before is None or before_weight is None:
        return None
    if before.result in (Result.MISSED, Result.PASSED):
        return before_weight
    return before_weight + step


def turns_of(lifter: Lifter, attempts: Sequence[Attempt], step: Fraction) -> list[Turn]:
    """The attempts of one lifter in one lift that are still to come, undeclared ones at their default."""
    by_number = {attempt.number: attempt for attempt in attempts}
    turns: list[Turn] = []
    before: Attempt | None = None
    weight: Fraction | None = None
    for number in ROUNDS:
        attempt = by_number.get(number)
        if attempt is None:
            continue
        declared = attempt.weight
        weight = declared if declared is not None else default_weight(before, weight, step)
        if attempt.result is Result.OPEN and weight is not None:
            turns.append(Turn(attempt, lifter, weight, assumed=declared is None))
        before = attempt
    return turns


def lifting_order(turns: Iterable[Turn]) -> tuple[Turn, ...]:
    """Rounds, then ascending weight, then the lower lot number; the same turns always give the same order."""
    return tuple(sorted(turns, key=lambda turn: (turn.attempt.number, turn.weight, turn.lifter.lot)))


def flight_order(
    lifters: Iterable[Lifter], attempts: Mapping[int, Sequence[Attempt]], step: Fraction
) -> tuple[Turn, ...]:
    """Everything a flight still has to lift in one lift; ``attempts`` are that lift's, by lifter id."""
    return lifting_order(
        turn for lifter in lifters for turn in turns_of(lifter, attempts.get(lifter.id, ()), step)
    )


def without_opener(
    lifters: Iterable[Lifter], attempts: Mapping[int, Sequence[Attempt]]
) -> tuple[Lifter, ...]:
    """Lifters whose opener nobody has handed in: they are in no order yet, and somebody must be told."""
    missing = [
        lifter
        for lifter in lifters
        if any(
            attempt.number == 1 and attempt.weight is None and attempt.result is Result.OPEN
            for attempt in attempts.get(lifter.id, ())
        )
    ]
    return tuple(sorted(missing, key=lambda lifter: lifter.lot))
