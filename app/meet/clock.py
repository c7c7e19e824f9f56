"""The clocks of a meet, with ``now`` passed in: who has still to hand in, who is due too soon, how late it is.

All times are aware UTC.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from fractions import Fraction

from app.meet.model import Attempt, Lifter, Result
from app.meet.order import Turn
from app.meet.rules import Rules
from app.meet.silence import ruled_default

PLAN_COUNTS_FOR = 5  # attempts: how long the planned pace outweighs the measured one


@dataclass(frozen=True, slots=True)
class Due:
    """A weight that somebody has still to hand in.

    ``until``: when the time runs out; None where the meet has no limit. ``default``: what stands then; None
    where the attempt is forfeited.
    """

    lifter: Lifter
    attempt: Attempt
    until: datetime | None
    default: Fraction | None

    def left(self, now: datetime) -> timedelta | None:
        """The time left, never less than none; None where there is no limit."""
        return None if self.until is None else max(self.until - now, timedelta(0))

    def over(self, now: datetime) -> bool:
        """Whether the time has run out."""
        return self.until is not None and now > self.until


def still_to_hand_in(
    rules: Rules,
    lifters: Iterable[Lifter],
    attempts: Mapping[int, Sequence[Attempt]],
    lifted_at: Mapping[int, datetime],
) -> tuple[Due, ...]:
    """Lifters who have lifted and not handed in their next weight, least time left first, then by lot.

    ``attempts`` are one lift's, by lifter id; ``lifted_at`` says when an attempt got its result, by attempt
    id. Openers are no part of it (nothing was lifted before): see ``order.without_opener``. A fourth
    attempt is only asked for, so nobody owes it.
    """
    found = [
        due
        for lifter in lifters
        if (due := _due(rules, lifter, attempts.get(lifter.id, ()), lifted_at)) is not None
    ]
    return tuple(sorted(found, key=lambda due: (due.until is None, due.until or _EARLIEST, due.lifter.lot)))


_EARLIEST = datetime.fromisoformat("0001-01-01T00:00:00+00:00")


def _due(
    rules: Rules, lifter: Lifter, attempts: Sequence[Attempt], lifted_at: Mapping[int, datetime]
) -> Due | None:
    before: Attempt | None = None
    for attempt in sorted(attempts, key=lambda one: one.number):
        if attempt.result is not Result.OPEN:
            before = attempt
            continue
        if before is None or attempt.weight is not None or before.number >= 3:
            return None
        since = lifted_at.get(before.id)
        limited = since is not None and rules.seconds_to_hand_in > 0
        until = since + timedelta(seconds=rules.seconds_to_hand_in) if since and limited else None
        return Due(lifter, attempt, until, ruled_default(rules, before, before.weight))
    return None


@dataclass(frozen=True, slots=True)
class TooSoon:
    """A turn that would come before its lifter has rested as long as the rules ask for."""

    turn: Turn
    expected: datetime
    earliest: datetime

    @property
    def short_by(self) -> timedelta:
        """How much rest is missing."""
        return self.earliest - self.expected


def earliest_start(rules: Rules, last_lifted: datetime | None) -> datetime | None:
    """When a lifter may be called again; None: at any time."""
    if last_lifted is None or not rules.least_rest_seconds:
        return None
    return last_lifted + timedelta(seconds=rules.least_rest_seconds)


def too_soon(
    rules: Rules,
    order: Sequence[Turn],
    last_lifted: Mapping[int, datetime],
    now: datetime,
    attempt_seconds: Fraction,
) -> tuple[TooSoon, ...]:
    """The turns to come that would break the least rest at this pace, in lifting order.

    The first of ``order`` is taken to start now, every other one attempt's time after the one before.
    ``last_lifted`` is by lifter id. Once a warning is due, later turns are reckoned as if nobody waited: the
    table decides whether to wait or to change something (at least 5 minutes: Final Rep rulebook, k).
    """
    seen = dict(last_lifted)
    one = timedelta(seconds=float(attempt_seconds))
    found: list[TooSoon] = []
    for at, turn in enumerate(order):
        expected = now + at * one
        earliest = earliest_start(rules, seen.get(turn.lifter.id))
        if earliest is not None and expected < earliest:
            found.append(TooSoon(turn, expected, earliest))
        seen[turn.lifter.id] = expected + one
    return tuple(found)


@dataclass(frozen=True, slots=True)
class Pace:
    """How the meet stands against its plan, and when it will be over.

    ``behind`` is less than nothing when the meet is ahead. ``seconds_each``: what an attempt is reckoned at.
    """

    done: int
    behind: timedelta
    seconds_each: Fraction
    finish: datetime

    @property
    def minutes_behind(self) -> int:
        """Whole minutes, rounded towards none."""
        return int(self.behind.total_seconds() / 60)


def pace(
    planned_seconds: Fraction,
    started: datetime,
    done: int,
    to_come: int,
    now: datetime,
    breaks_taken: timedelta = timedelta(0),
    breaks_to_come: timedelta = timedelta(0),
) -> Pace:
    """Ahead or behind by now, and the finish at the pace so far.

    The forecast weighs the plan as ``PLAN_COUNTS_FOR`` attempts against those measured, so that the first
    attempts do not throw it about; after thirty it is the measured pace but for a seventh. Planned pace:
    60 to 75 s an attempt (``trade.md``, one attempt cycle; school meets plan 60 s).
    """
    spent = now - started - breaks_taken
    planned = timedelta(seconds=float(planned_seconds * done))
    seconds = Fraction(int(spent.total_seconds()))
    each = (
        (seconds + PLAN_COUNTS_FOR * planned_seconds) / (done + PLAN_COUNTS_FOR) if done else planned_seconds
    )
    finish = now + timedelta(seconds=float(each * to_come)) + breaks_to_come
    return Pace(done, spent - planned, each, finish)


def say_pace(found: Pace) -> str:
    """``4 min behind``, ``2 min ahead``, ``on time``."""
    minutes = found.minutes_behind
    if not minutes:
        return "on time"
    return f"{abs(minutes)} min {'behind' if minutes > 0 else 'ahead'}"
