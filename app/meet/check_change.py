"""May a weight that was handed in still be changed? Openers and later attempts have rules of their own."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import timedelta

from app.loading.mass import show_mass
from app.meet.model import Attempt
from app.meet.moment import Breach, Moment
from app.meet.rules import Changeable, OpenerDeadline, Rules, Until


def change_breaches(rules: Rules, attempt: Attempt, moment: Moment, unit: str) -> list[Breach]:
    """Every rule that changing ``attempt`` now would break; the weight itself is judged elsewhere."""
    stands = "" if attempt.weight is None else f"{show_mass(attempt.weight)} {unit} stands."
    if attempt.number == 1:
        found = [*_opener_count(rules, moment, stands), *_opener_deadline(rules, moment, stands)]
        return list(found)
    if rules.change_until is Until.NEVER:
        return [Breach("change_until", "A weight that was handed in may not be changed.", stands)]
    if not _may_change(rules, attempt, moment):
        return [Breach("changeable", f"Only {_WHICH[rules.changeable]} may be changed.", stands)]
    return [*_count(rules.changes_each, "changes_each", moment, stands), *_until(rules, moment, stands)]


_WHICH = {
    Changeable.LAST_LIFT_THIRD: "the third attempt of the last lift",
    Changeable.THIRDS: "third attempts",
    Changeable.ALL: "attempts",
}


def _may_change(rules: Rules, attempt: Attempt, moment: Moment) -> bool:
    if rules.changeable is Changeable.ALL:
        return True
    return attempt.number >= 3 and (rules.changeable is Changeable.THIRDS or moment.last_lift)


def _opener_count(rules: Rules, moment: Moment, stands: str) -> Iterator[Breach]:
    yield from _count(rules.opener_changes, "opener_changes", moment, stands)


def _count(allowed: int | None, key: str, moment: Moment, stands: str) -> Iterator[Breach]:
    if allowed is None or moment.changes < allowed:
        return
    times = {0: "may not be changed", 1: "may be changed once", 2: "may be changed twice"}
    because = f"This attempt {times.get(allowed, f'may be changed {allowed} times')}"
    yield Breach(key, f"{because}{', and was' if allowed else ''}.", stands)


def _opener_deadline(rules: Rules, moment: Moment, stands: str) -> Iterator[Breach]:
    if rules.opener_deadline is OpenerDeadline.AS_LATER:
        yield from _until(rules, moment, stands)
    elif rules.opener_deadline is OpenerDeadline.ATTEMPTS_LEFT and moment.attempts_before is not None:
        if moment.attempts_before < rules.opener_attempts_left:
            because = (
                f"Openers may be changed while the flight before has at least {rules.opener_attempts_left} "
                f"attempts left; it has {moment.attempts_before}."
            )
            yield Breach("opener_deadline", because, stands)
    elif moment.flight_starts is not None:
        last = moment.flight_starts - timedelta(minutes=rules.opener_minutes)
        if moment.now > last:
            because = f"Openers may be changed until {rules.opener_minutes} min before the flight."
            yield Breach("opener_deadline", because, stands)


def _until(rules: Rules, moment: Moment, stands: str) -> Iterator[Breach]:
    over = {
        Until.NEVER: (True, "A weight that was handed in may not be changed."),
        Until.CALLED: (moment.called or moment.loaded, "The bar has been called for this lifter."),
        Until.LOADED: (moment.loaded, "The bar is loaded for this lifter."),
        Until.WARNING: (_warned(rules, moment), "The warning has been given."),
    }
    past, because = over[rules.change_until]
    if past:
        yield Breach("change_until", because, stands)


def _warned(rules: Rules, moment: Moment) -> bool:
    if moment.clock_ends is None:
        return False
    return moment.now >= moment.clock_ends - timedelta(seconds=rules.warning_seconds)
