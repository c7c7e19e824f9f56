"""Entering what became of an attempt."""

from __future__ import annotations

import pytest

from app.desk import attempts
from app.desk.bar import bar_is_loaded, hold_platform, instruction_name
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.meet.model import Result
from app.meet.platform import Bar, Condition, Hand
from tests.cast import ADA, BENCH, BO, CLEO, DOV, FLIGHT_B, LUC, OTTO, SQUAT, WANDA, Hall, kg, stack
from tests.desk.checks import changes, check_board, refused

JUDGED = {"result", "version", "entered_by", "entered_at"}
FIRST, SECOND = stack(25, 10, "2.5"), stack(25, 15, "2.5")  # 100 kg, 110 kg


@pytest.mark.parametrize(
    ("result", "words"), [(Result.GOOD, "good lift"), (Result.MISSED, "no lift")], ids=["good", "missed"]
)
def test_a_result_is_entered_and_the_crew_gets_its_next_change(
    hall: Hall, result: Result, words: str
) -> None:
    attempt, following = hall.attempt(ADA, 1), hall.attempt(BO, 1)
    hall.load()
    touched = {("attempt", attempt.id): JUDGED | {"lifted_at"}, ("platform", 1): {"condition", "hand", "loaded_at"}}
    with changes(hall, touched):
        assert hall.judge(ADA, 1, result) == f"Ada Brook: Squat, 1st: {words} at 100."
    after = hall.attempt(ADA, 1)
    assert (after.weight, after.result, after.version, after.entered_by) == (
        kg(100),
        result,
        attempt.version + 1,
        WANDA,
    )
    bar = hall.picture().bar
    assert bar.hand is not None
    assert bar == Bar(
        Condition.CHANGING, FIRST, Hand(following.id, kg(110), FIRST, bar.hand.stack, bar.hand.why)
    )
    check_board(hall.board())


def test_a_result_before_the_crew_has_said_loaded_tells_that_the_bar_is_as_shown(hall: Hall) -> None:
    hall.judge(ADA, 1, Result.GOOD)
    assert hall.picture().bar.carries == FIRST


def test_a_result_makes_no_new_change_while_the_next_weight_has_not_been_handed_in(hall: Hall) -> None:
    for name in (ADA, BO, CLEO):
        hall.lift(name, 1)
    carries = hall.picture().bar.carries
    assert hall.picture().bar == Bar(Condition.IDLE, carries, None)
    up = hall.board().up
    assert up is not None
    assert (up.lifter.name, up.weight, up.assumed) == (ADA, kg("102.5"), True)
    assert hall.board().steps[0].before == carries
    hall.declare(ADA, 2, "105")
    hand = hall.picture().bar.hand
    assert hand is not None
    assert (hand.attempt_id, hand.weight, hand.before) == (hall.attempt(ADA, 2).id, kg(105), carries)


def test_equal_weights_one_after_another_leave_the_bar_as_it_is(hall: Hall) -> None:
    """Bo and Cleo both take 110: the crew is shown a change with nothing in it."""
    hall.lift(ADA, 1)
    hall.lift(BO, 1)
    hand = hall.picture().bar.hand
    assert hand is not None
    assert (hand.attempt_id, hand.before) == (hall.attempt(CLEO, 1).id, hand.stack)


def test_the_same_result_again_changes_nothing(hall: Hall) -> None:
    hall.lift(ADA, 1)
    with changes(hall, {}):
        assert hall.judge(ADA, 1, Result.GOOD) == "Ada Brook: Squat, 1st stays a good lift."


def test_a_result_that_somebody_else_entered_meanwhile_is_not_overwritten(hall: Hall) -> None:
    old = hall.seen(ADA, 1)
    hall.load()
    hall.judge(ADA, 1, Result.MISSED, who=OTTO)
    told = (
        "Ada Brook: Squat, 1st was changed by Otto while you were typing: it is now no lift at 100. "
        "Nothing of yours was entered. Look, and enter again."
    )
    with refused(hall, SomebodyWasFirst, told):
        attempts.judge(hall.desk, hall.platform_id, old, Result.GOOD, who=WANDA)


def test_only_the_one_who_is_up_can_be_judged(hall: Hall) -> None:
    told = "Bo Carver is not up, so there is no lift to judge. Ada Brook is up."
    with refused(hall, NotAllowedNow, told):
        hall.judge(BO, 1, Result.GOOD)
    with refused(hall, NotAllowedNow, "Dov Ekman is not up, so there is no lift to judge."):
        hall.judge(DOV, 1, Result.GOOD)
    with refused(hall, NotAllowedNow, "Ada Brook is not up, so there is no lift to judge."):
        hall.judge(ADA, 1, Result.GOOD, lift=BENCH)


def test_an_attempt_that_nobody_handed_in_cannot_be_judged(hall: Hall) -> None:
    for name in (ADA, BO, CLEO):
        hall.lift(name, 1)
    told = "Ada Brook: Squat, 2nd has not been handed in yet. Declare the weight first."
    with refused(hall, NotAllowedNow, told):
        hall.judge(ADA, 2, Result.GOOD)


def test_nothing_is_judged_while_the_platform_is_on_hold(hall: Hall) -> None:
    hold_platform(hall.desk, hall.platform_id, who=WANDA)
    with refused(hall, NotAllowedNow, "The platform is on hold. End the hold first."):
        hall.judge(ADA, 1, Result.GOOD)


def test_nothing_is_judged_until_the_crew_has_said_what_is_on_a_bar_that_was_overtaken(hall: Hall) -> None:
    hall.declare(ADA, 1, "105")
    told = "The crew has not said what is on the bar. Answer that first, then enter the result."
    with refused(hall, NotAllowedNow, told):
        hall.judge(ADA, 1, Result.GOOD)


def test_a_result_cannot_be_made_open_again_by_hand(hall: Hall) -> None:
    hall.lift(ADA, 1)
    with refused(hall, NotAllowedNow, "To take a result back, use undo."):
        hall.judge(ADA, 1, Result.OPEN)


def test_a_pass_needs_no_turn_and_moves_no_iron(hall: Hall) -> None:
    bar = hall.picture().bar
    with changes(hall, {("attempt", hall.attempt(BO, 3).id): JUDGED}):
        assert hall.judge(BO, 3, Result.PASSED) == "Bo Carver: Squat, 3rd: passed."
    assert hall.picture().bar == bar


def test_a_pass_of_the_attempt_in_hand_makes_the_crew_say_what_is_on_the_bar(hall: Hall) -> None:
    bar = hall.picture().bar
    with changes(hall, {("attempt", hall.attempt(ADA, 1).id): JUDGED}):
        assert hall.judge(ADA, 1, Result.PASSED) == "Ada Brook: Squat, 1st: passed at 100."
    assert hall.picture().bar == bar
    assert hall.board().ask is True


def test_a_pass_with_the_bar_loaded_leaves_it_as_shown_and_the_next_change_goes_out(hall: Hall) -> None:
    hall.load()
    hall.judge(ADA, 1, Result.PASSED)
    hand = hall.picture().bar.hand
    assert hand is not None
    assert (hand.attempt_id, hand.before) == (hall.attempt(BO, 1).id, FIRST)


@pytest.mark.parametrize("corrected", [Result.MISSED, Result.PASSED])
def test_a_correction_changes_the_result_and_neither_the_iron_nor_the_crew(
    hall: Hall, corrected: Result
) -> None:
    hall.lift(ADA, 1)
    bar = hall.picture().bar
    words = {Result.MISSED: "no lift", Result.PASSED: "passed"}[corrected]
    with changes(hall, {("attempt", hall.attempt(ADA, 1).id): JUDGED}):
        said = hall.judge(ADA, 1, corrected, who=OTTO)
    assert said == f"Ada Brook: Squat, 1st corrected to {words} (was good lift)."
    assert hall.picture().bar == bar
    default = next(t for t in hall.board().order if t.attempt.id == hall.attempt(ADA, 2).id)
    assert (default.weight, default.assumed) == (kg(100), True)


def test_a_pass_that_was_never_handed_in_cannot_become_a_lift(hall: Hall) -> None:
    """A good lift without a weight would have been on no bar at all."""
    hall.judge(BO, 3, Result.PASSED)
    told = "Bo Carver: Squat, 3rd was never handed in, so nothing was lifted. Use undo."
    with refused(hall, NotAllowedNow, told):
        hall.judge(BO, 3, Result.GOOD)


def test_a_lighter_weight_handed_in_while_the_bar_is_loaded_lifts_after_it(hall: Hall) -> None:
    hall.load()
    hall.declare(BO, 1, "90")
    hall.judge(ADA, 1, Result.GOOD)
    up = hall.board().up
    assert up is not None
    assert (up.lifter.name, up.weight) == (BO, kg(90))
    check_board(hall.board())


def test_a_whole_lift_of_a_flight_is_loaded_right_from_the_first_to_the_last(hall: Hall) -> None:
    """Nine attempts, two misses and a pass: every stack sums, and each change begins where the last one ended."""
    following = {
        (ADA, 1): "105",
        (BO, 1): "115",
        (CLEO, 1): "110",
        (ADA, 2): "110",
        (BO, 2): "120",
        (CLEO, 2): "",
    }
    lifted, carries = [], ()
    while (up := hall.board().up) is not None:
        check_board(hall.board())
        name, number = up.lifter.name, up.attempt.number
        if (name, number) == (CLEO, 3):
            hall.judge(name, number, Result.PASSED)
            continue
        hand = hall.picture().bar.hand
        assert hand is not None
        assert (hand.attempt_id, hand.before, hand.weight) == (up.attempt.id, carries, up.weight)
        assert 25 + 2 * sum(hand.stack) == up.weight
        carries = hand.stack
        bar_is_loaded(hall.desk, hall.platform_id, instruction_name(hall.picture().bar), who=LUC)
        missed = (name, number) in ((CLEO, 1), (BO, 3))
        hall.judge(name, number, Result.MISSED if missed else Result.GOOD)
        lifted.append((name, number, int(up.weight)))
        if following.get((name, number)):
            hall.declare(name, number + 1, following[(name, number)])
    assert lifted == [
        (ADA, 1, 100),
        (BO, 1, 110),
        (CLEO, 1, 110),
        (ADA, 2, 105),
        (CLEO, 2, 110),
        (BO, 2, 115),
        (ADA, 3, 110),
        (BO, 3, 120),
    ]
    assert hall.picture().bar == Bar(Condition.IDLE, carries, None)
    hall.bring(FLIGHT_B, SQUAT)
    hand = hall.picture().bar.hand
    assert hand is not None
    assert (hand.before, hand.weight) == (carries, kg(150))
