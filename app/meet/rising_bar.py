"""Who lifts when on a rising bar: all attempts mixed, and the bar does not go down within the lift.

The call goes to the lightest weight; of equal ones to the lower attempt number, then to whoever took the
attempt before earlier, then to the lower lot number (IWF 6.5.8 as reprinted in an e-book for the last two;
weight and attempt number first: from memory; ``figures.md`` 2).
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from app.meet.model import Attempt, Lifter, Result
from app.meet.order import Turn
from app.meet.rules import Rules, Ties
from app.meet.silence import stand_in


@dataclass(frozen=True, slots=True)
class _Place:
    """A lifter's next attempt, and when the one before was taken (-1: there was none)."""

    turn: Turn
    before: int
    following: tuple[Attempt, ...]


def rising_order(
    lifters: Iterable[Lifter],
    attempts: Mapping[int, Sequence[Attempt]],
    rules: Rules,
    lifted: Sequence[int] = (),
) -> tuple[Turn, ...]:
    """Everything still to be lifted on a rising bar, in the order in which it would be called.

    ``attempts`` are this lift's, by lifter id. ``lifted`` are the ids of the attempts already taken, in the
    order in which they were; those it does not name are taken to have been lifted by weight, number and lot.

    Statement: call again and again the least of all lifters' next attempts. Only a lifter's next attempt can
    be called, so sorting all attempts at once would be wrong where a later one is lighter than an earlier.
    An undeclared weight stands in by :func:`~app.meet.silence.stand_in`, and never below the bar as it will
    then be; a weight that somebody handed in is never altered here. Time n² for n attempts.
    """
    people = list(lifters)
    taken = _sequence(people, attempts, lifted)
    bar = _bar_now(attempts)
    places = (_first(lifter, attempts.get(lifter.id, ()), rules, taken, bar) for lifter in people)
    return tuple(_calls([place for place in places if place is not None], rules, bar, len(taken)))


def _calls(waiting: list[_Place], rules: Rules, bar: Fraction, rank: int) -> Iterator[Turn]:
    """The least of those waiting, then the next attempt of that lifter joins them."""
    while waiting:
        called = min(waiting, key=lambda place: _key(place, rules))
        yield called.turn
        bar = max(bar, called.turn.weight)
        following = _next(called, rules, rank, bar)
        rank += 1
        waiting = [place for place in waiting if place is not called]
        waiting += [following] if following is not None else []


def follows_self(last_lifter_id: int | None, turn: Turn) -> bool:
    """Whether the lifter who is up was also the last one on the platform."""
    return last_lifter_id == turn.lifter.id


def seconds_to_start(rules: Rules, last_lifter_id: int | None, turn: Turn) -> int:
    """How long the lifter has: 60 s, and 120 s when following oneself (IWF 6.5.9); as the rules say."""
    return rules.seconds_following if follows_self(last_lifter_id, turn) else rules.seconds_to_start


def _key(place: _Place, rules: Rules) -> tuple[Fraction, int, int, int]:
    before = place.before if rules.ties is Ties.SEQUENCE else 0
    return place.turn.weight, place.turn.attempt.number, before, place.turn.lifter.lot


def _sequence(
    lifters: Sequence[Lifter], attempts: Mapping[int, Sequence[Attempt]], lifted: Sequence[int]
) -> dict[int, int]:
    """When each attempt was taken, as a rank; the ones ``lifted`` does not name come before it."""
    named = set(lifted)
    done = [
        (attempt.weight, attempt.number, lifter.lot, attempt.id)
        for lifter in lifters
        for attempt in attempts.get(lifter.id, ())
        if attempt.weight is not None and attempt.result is not Result.OPEN and attempt.id not in named
    ]
    ids = [*(one[-1] for one in sorted(done)), *lifted]
    return {attempt_id: rank for rank, attempt_id in enumerate(ids)}


def _bar_now(attempts: Mapping[int, Sequence[Attempt]]) -> Fraction:
    """The heaviest weight lifted so far, good or missed."""
    return max(
        (
            attempt.weight
            for theirs in attempts.values()
            for attempt in theirs
            if attempt.weight is not None and attempt.result in (Result.GOOD, Result.MISSED)
        ),
        default=Fraction(0),
    )


def _first(
    lifter: Lifter, attempts: Sequence[Attempt], rules: Rules, taken: Mapping[int, int], bar: Fraction
) -> _Place | None:
    """The lifter's next attempt, after the last one that has a result; None without an opener or an end."""
    theirs = sorted(attempts, key=lambda one: one.number)
    before: Attempt | None = None
    for at, attempt in enumerate(theirs):
        if attempt.result is Result.OPEN:
            rank = taken.get(before.id, -1) if before else -1
            return _place(lifter, before, tuple(theirs[at:]), rules, rank, bar)
        if attempt.weight is None and before is not None:  # passed without a weight: the last one counts on
            attempt = replace(attempt, weight=before.weight)  # noqa: PLW2901
        before = attempt
    return None


def _next(called: _Place, rules: Rules, rank: int, bar: Fraction) -> _Place | None:
    """The same lifter's attempt after the one that is called."""
    before = replace(called.turn.attempt, weight=called.turn.weight)
    left = tuple(attempt for attempt in called.following if attempt.result is Result.OPEN)
    return _place(called.turn.lifter, before, left, rules, rank, bar)


def _place(
    lifter: Lifter,
    before: Attempt | None,
    left: tuple[Attempt, ...],
    rules: Rules,
    rank: int,
    bar: Fraction,
) -> _Place | None:
    if not left:
        return None
    attempt = left[0]
    if attempt.weight is not None:
        return _Place(Turn(attempt, lifter, attempt.weight, assumed=False), rank, left[1:])
    weight = stand_in(rules, before, before.weight if before else None)
    if weight is None:
        return None
    return _Place(Turn(attempt, lifter, max(weight, bar), assumed=True), rank, left[1:])
