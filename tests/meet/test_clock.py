"""Clocks with the time passed in: handing in, rest, pace."""

from dataclasses import replace
from datetime import UTC, datetime, timedelta
from fractions import Fraction

import pytest

from app.meet.clock import earliest_start, pace, say_pace, still_to_hand_in, too_soon
from app.meet.model import Result
from app.meet.rule_reading import preset_rules
from app.meet.rules import Default
from tests.meet.nouns import attempt, lifter, turn

BAR = preset_rules("rounds-bar")
BELT = preset_rules("rounds-belt")
NOW = datetime(2026, 3, 7, 12, 0, tzinfo=UTC)
GOOD, MISSED = Result.GOOD, Result.MISSED


def ago(seconds: int) -> datetime:
    return NOW - timedelta(seconds=seconds)


def test_whoever_has_least_time_left_is_first_on_the_list() -> None:
    """One minute to hand in: IPL Rulebook 2019, 6.1.1; WDFPF 2007."""
    theirs = {
        1: [attempt(1, 1, 100, GOOD), attempt(1, 2)],
        2: [attempt(2, 1, 110, MISSED), attempt(2, 2)],
        3: [attempt(3, 1, 120, GOOD), attempt(3, 2, 125)],
        4: [attempt(4, 1, 130), attempt(4, 2)],
    }
    lifted = {theirs[1][0].id: ago(20), theirs[2][0].id: ago(70), theirs[3][0].id: ago(50)}
    due = still_to_hand_in(BAR, [lifter(lot) for lot in theirs], theirs, lifted)
    assert [(one.lifter.lot, one.left(NOW), one.over(NOW), one.default) for one in due] == [
        (2, timedelta(0), True, Fraction(110)),
        (1, timedelta(seconds=40), False, Fraction("102.5")),
    ]


def test_a_forfeited_attempt_has_no_default_on_the_list() -> None:
    """WDFPF 2007: the next attempt is forfeited."""
    theirs = {1: [attempt(1, 1, 100, GOOD), attempt(1, 2)]}
    rules = replace(BAR, default=Default.FORFEITED)
    (due,) = still_to_hand_in(rules, [lifter(1)], theirs, {theirs[1][0].id: ago(5)})
    assert due.default is None


def test_without_a_limit_nobody_runs_out_of_time_and_stands_after_those_who_do() -> None:
    theirs = {1: [attempt(1, 1, 100, GOOD), attempt(1, 2)]}
    (due,) = still_to_hand_in(
        replace(BAR, seconds_to_hand_in=0), [lifter(1)], theirs, {theirs[1][0].id: ago(5)}
    )
    assert (due.until, due.left(NOW), due.over(NOW)) == (None, None, False)
    two = {**theirs, 2: [attempt(2, 1, 110, GOOD), attempt(2, 2)]}
    unknown = still_to_hand_in(BAR, [lifter(1), lifter(2)], two, {two[2][0].id: ago(5)})
    assert [one.lifter.lot for one in unknown] == [2, 1]


def test_nobody_owes_an_opener_or_a_fourth_here() -> None:
    theirs = {1: [attempt(1, 1)], 2: [attempt(2, 3, 150, GOOD), attempt(2, 4)]}
    lifted = {theirs[2][0].id: ago(10)}
    assert still_to_hand_in(BAR, [lifter(1), lifter(2)], theirs, lifted) == ()


def test_a_lifter_may_be_called_again_after_the_least_rest() -> None:
    """At least 5 minutes between a lifter's own attempts: Final Rep rulebook, k."""
    assert earliest_start(BELT, NOW) == NOW + timedelta(minutes=5)
    assert earliest_start(BELT, None) is None
    assert earliest_start(BAR, NOW) is None


def test_a_short_flight_is_warned_before_the_rest_is_broken() -> None:
    """Final Rep rulebook, k: with a flight under five at a minute each, the round must be padded."""
    order = [turn(lot, 2, 40 + lot) for lot in (1, 2, 3)]
    lifted = {1: ago(180), 2: ago(120), 3: ago(60)}
    warned = too_soon(BELT, order, lifted, NOW, Fraction(60))
    assert [(one.turn.lifter.lot, one.short_by) for one in warned] == [
        (1, timedelta(minutes=2)),
        (2, timedelta(minutes=2)),
        (3, timedelta(minutes=2)),
    ]
    assert too_soon(BAR, order, lifted, NOW, Fraction(60)) == ()


def test_a_flight_of_six_at_a_minute_each_rests_long_enough() -> None:
    """Five others lift between a lifter's own two attempts."""
    order = [turn(lot, number, 40 + lot) for number in (1, 2) for lot in range(1, 7)]
    assert too_soon(BELT, order, {}, NOW, Fraction(60)) == ()
    assert [one.turn.lifter.lot for one in too_soon(BELT, order, {}, NOW, Fraction(59))] == [1, 2, 3, 4, 5, 6]


@pytest.mark.parametrize(
    ("minutes", "done", "words"),
    [(30, 30, "on time"), (34, 30, "4 min behind"), (28, 30, "2 min ahead"), (30, 31, "1 min ahead")],
)
def test_the_meet_is_so_many_minutes_ahead_or_behind(minutes: int, done: int, words: str) -> None:
    """Planned at a minute an attempt, as a school association plans (trade C1)."""
    assert say_pace(pace(Fraction(60), NOW - timedelta(minutes=minutes), done, 10, NOW)) == words


def test_the_forecast_begins_with_the_plan_and_goes_over_to_what_was_measured() -> None:
    before = pace(Fraction(60), NOW, 0, 30, NOW)
    assert before.finish == NOW + timedelta(minutes=30)
    slow = pace(Fraction(60), NOW - timedelta(seconds=90 * 5), 5, 30, NOW)
    assert slow.seconds_each == 75
    assert slow.finish == NOW + timedelta(seconds=75 * 30)
    long = pace(Fraction(60), NOW - timedelta(seconds=90 * 95), 95, 30, NOW)
    assert long.seconds_each == Fraction(90 * 95 + 300, 100)


def test_breaks_are_no_delay_but_belong_to_the_finish() -> None:
    """A single flight has about 20 minutes between lifts (second-hand)."""
    rest = timedelta(minutes=20)
    found = pace(
        Fraction(60), NOW - timedelta(minutes=50), 30, 30, NOW, breaks_taken=rest, breaks_to_come=rest
    )
    assert say_pace(found) == "on time"
    assert found.finish == NOW + timedelta(minutes=50)
