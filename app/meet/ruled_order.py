"""The lifting order by the rules of the meet: rounds or rising bar, ties, fourth attempts, retakes."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence

from app.meet.misload import Retake, with_retakes
from app.meet.model import Attempt, Lifter, Result
from app.meet.order import Turn, lifting_order
from app.meet.rising_bar import rising_order
from app.meet.rules import OrderSystem, Rules, Ties
from app.meet.silence import stand_in

LONG_AGO = -1_000_000  # before anybody who has lifted


def ruled_order(
    lifters: Iterable[Lifter],
    attempts: Mapping[int, Sequence[Attempt]],
    rules: Rules,
    *,
    lifted: Sequence[int] = (),
    retakes: Sequence[Retake] = (),
) -> tuple[Turn, ...]:
    """Everything a flight still has to lift in one lift, in lifting order; ``attempts`` by lifter id.

    ``lifted`` are the ids of attempts already taken, in the order in which they were (only looked at where
    ties go by it). ``retakes`` are attempts that have been granted again; they are ``OPEN`` once more.
    """
    people = list(lifters)
    if rules.order_system is OrderSystem.RISING:
        order = rising_order(people, attempts, rules, lifted)
    else:
        order = rounds_order(people, attempts, rules, lifted)
    return with_retakes(order, retakes)


def rounds_order(
    lifters: Sequence[Lifter],
    attempts: Mapping[int, Sequence[Attempt]],
    rules: Rules,
    lifted: Sequence[int] = (),
) -> tuple[Turn, ...]:
    """Rounds one after another; in a round the lighter bar first (WDFPF 2007, Order of competition).

    Ties by lot number, or by the order of the round before and then by lot number (some meets, ``trade.md``
    C-bis). The order of a round that is not yet lifted is the one it will have.
    """
    turns = [turn for lifter in lifters for turn in ruled_turns(lifter, attempts.get(lifter.id, ()), rules)]
    if rules.ties is Ties.LOT:
        return lifting_order(turns)
    rank = _ranks(lifters, attempts, lifted)
    order: list[Turn] = []
    for number in sorted({turn.attempt.number for turn in turns}):
        in_round = [turn for turn in turns if turn.attempt.number == number]
        in_round.sort(key=lambda turn: (turn.weight, rank.get(turn.lifter.id, LONG_AGO), turn.lifter.lot))
        rank |= {turn.lifter.id: len(order) + at for at, turn in enumerate(in_round)}
        order += in_round
    return tuple(order)


def ruled_turns(lifter: Lifter, attempts: Sequence[Attempt], rules: Rules) -> list[Turn]:
    """The attempts of one lifter still to come, undeclared ones as the plan takes them for granted.

    A fourth attempt is there only when it was asked for.
    """
    turns: list[Turn] = []
    before: Attempt | None = None
    weight = None
    for attempt in sorted(attempts, key=lambda one: one.number):
        declared = attempt.weight
        weight = declared if declared is not None else stand_in(rules, before, weight)
        if attempt.result is Result.OPEN and weight is not None:
            turns.append(Turn(attempt, lifter, weight, assumed=declared is None))
        before = attempt
    return turns


def _ranks(
    lifters: Sequence[Lifter], attempts: Mapping[int, Sequence[Attempt]], lifted: Sequence[int]
) -> dict[int, int]:
    """When each lifter last lifted, as a rank below 0; without ``lifted``, by round, weight and lot number."""
    at = {attempt_id: place for place, attempt_id in enumerate(lifted)}
    done = [
        (at.get(attempt.id, -1), attempt.number, attempt.weight, lifter.lot, lifter.id)
        for lifter in lifters
        for attempt in attempts.get(lifter.id, ())
        if attempt.result is not Result.OPEN and attempt.weight is not None
    ]
    return {one[-1]: rank - len(done) for rank, one in enumerate(sorted(done))}
