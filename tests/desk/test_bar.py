"""What the crew and the table say about the platform: loaded, hold, what is on the bar, which flight is on."""

from __future__ import annotations

import pytest

from app.desk.bar import (
    bar_carries,
    bar_is_loaded,
    bar_is_not_loaded,
    bring_flight,
    end_hold,
    hold_platform,
    instruction_name,
)
from app.desk.equipment import LiftWish, save_lifts, save_tools, stock_seen
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.meet.model import Result
from app.meet.platform import Bar, Condition, Hand
from tests.cast import (
    ADA,
    BENCH,
    BO,
    DOV,
    ETTA,
    FLIGHT_A,
    FLIGHT_B,
    LUC,
    OLGA,
    SQUAT,
    WANDA,
    Hall,
    kg,
    stack,
)
from tests.desk.checks import changes, check_board, refused

PLATFORM = ("platform", 1)
FIRST = stack(25, 10, "2.5")  # 100 kg, what the crew of the ready meet has been shown
LATE = "This screen was showing an earlier change. Look at the new one, then answer."


def answer(hall: Hall, words: str, shown: str | None = None) -> None:
    bar_carries(hall.desk, hall.platform_id, words, shown, who=LUC)


def hand_of(hall: Hall) -> Hand:
    hand = hall.picture().bar.hand
    assert hand is not None
    return hand


# Bar is loaded


def test_a_loaded_bar_is_as_shown_and_hands_are_off(hall: Hall) -> None:
    hand = hand_of(hall)
    with changes(hall, {PLATFORM: {"condition", "bar", "loaded_at"}}):
        hall.load()
    assert hall.picture().bar == Bar(Condition.LIFTING, FIRST, hand)


def test_a_second_tap_on_loaded_is_refused_and_changes_nothing(hall: Hall) -> None:
    hall.load()
    with refused(hall, NotAllowedNow, "There is no change to confirm."):
        hall.load()


def test_a_late_screen_cannot_confirm_a_change_that_it_has_not_shown(hall: Hall) -> None:
    late = instruction_name(hall.picture().bar)
    hall.lift(ADA, 1)
    with refused(hall, SomebodyWasFirst, LATE):
        bar_is_loaded(hall.desk, hall.platform_id, late, who=LUC)


def test_the_name_of_an_instruction_tells_attempt_weight_and_plates(hall: Hall) -> None:
    assert instruction_name(hall.picture().bar) == f"{hall.attempt(ADA, 1).id}:100:25+10+2.5"
    assert instruction_name(Bar(Condition.IDLE, (), None)) == "none"


def test_loaded_on_a_screen_that_had_not_heard_of_the_new_weight_is_believed(hall: Hall) -> None:
    """The crew finished the 100 that it was shown, while the table made it 105: the bar is at 100, and the
    next change starts from there."""
    hall.declare(ADA, 1, "105")
    hall.load()
    bar, hand = hall.picture().bar, hand_of(hall)
    assert (bar.condition, bar.carries) == (Condition.CHANGING, FIRST)
    assert (hand.attempt_id, hand.weight, hand.before) == (hall.attempt(ADA, 1).id, 105, FIRST)
    check_board(hall.board())


# Not loaded


def test_taking_loaded_back_gives_the_crew_the_same_change_again(hall: Hall) -> None:
    before = hall.picture().bar
    hall.load()
    with changes(hall, {PLATFORM: {"condition", "bar", "loaded_at"}}):
        bar_is_not_loaded(hall.desk, hall.platform_id, who=LUC)
    assert hall.picture().bar == before


def test_what_was_never_loaded_cannot_be_taken_back(hall: Hall) -> None:
    with refused(hall, NotAllowedNow, "The bar is not confirmed as loaded."):
        bar_is_not_loaded(hall.desk, hall.platform_id, who=LUC)


# Hold


def test_a_hold_stops_the_platform_and_keeps_the_change(hall: Hall) -> None:
    before = hall.picture().bar
    with changes(hall, {PLATFORM: {"condition"}}):
        hold_platform(hall.desk, hall.platform_id, who=WANDA)
    assert hall.picture().bar == Bar(Condition.HOLD, before.carries, before.hand)
    with refused(hall, NotAllowedNow, "There is no change to confirm."):
        hall.load()
    with changes(hall, {}):
        hold_platform(hall.desk, hall.platform_id, who=WANDA)
    with changes(hall, {PLATFORM: {"condition"}}):
        end_hold(hall.desk, hall.platform_id, who=WANDA)
    assert hall.picture().bar == before


def test_no_new_change_goes_out_during_a_hold(hall: Hall) -> None:
    hold_platform(hall.desk, hall.platform_id, who=WANDA)
    answer(hall, "empty")
    assert hall.picture().bar == Bar(Condition.HOLD, (), None)
    end_hold(hall.desk, hall.platform_id, who=WANDA)
    assert hand_of(hall).before == ()


def test_ending_a_hold_that_is_over_does_not_touch_a_bar_that_was_loaded_meanwhile(hall: Hall) -> None:
    hall.load()
    with changes(hall, {}):
        end_hold(hall.desk, hall.platform_id, who=WANDA)
    assert hall.picture().bar.condition is Condition.LIFTING


def test_a_bar_that_was_loaded_before_a_hold_is_confirmed_anew_after_it(hall: Hall) -> None:
    hall.load()
    hold_platform(hall.desk, hall.platform_id, who=WANDA)
    end_hold(hall.desk, hall.platform_id, who=WANDA)
    bar = hall.picture().bar
    assert (bar.condition, bar.carries) == (Condition.CHANGING, FIRST)
    hall.load()
    assert hall.picture().bar.condition is Condition.LIFTING


def test_bringing_another_bar_on_does_not_end_a_hold(halls: tuple[Hall, Hall]) -> None:
    """Something is wrong on the platform: that the belt is brought does not make it right."""
    hall, _ = halls
    hold_platform(hall.desk, hall.platform_id, who=WANDA)
    spare = spare_bar(hall)
    use_bar(hall, BENCH, spare)
    hall.bring(FLIGHT_A, BENCH)
    assert hall.picture().bar == Bar(Condition.HOLD, (), None)


# What is on the bar

ANSWERS = {"before": (), "shown": FIRST, "empty": (), "unknown": None}


@pytest.mark.parametrize(("words", "carries"), ANSWERS.items(), ids=list(ANSWERS))
def test_when_the_bar_was_overtaken_the_crew_tells_what_is_on_it_and_goes_on_from_there(
    hall: Hall, words: str, carries
) -> None:
    old = hand_of(hall)
    hall.declare(ADA, 1, "105")
    assert (hall.board().ask, hand_of(hall)) == (True, old)
    answer(hall, words, instruction_name(hall.picture().bar))
    hand = hand_of(hall)
    assert hall.picture().bar == Bar(Condition.CHANGING, carries, hand)
    assert (hand.attempt_id, hand.weight, hand.before) == (old.attempt_id, kg(105), carries)
    assert hall.board().ask is False
    check_board(hall.board())


def test_before_means_what_was_on_the_bar_when_the_change_was_shown(hall: Hall) -> None:
    hall.lift(ADA, 1)
    hall.declare(BO, 1, "115")
    answer(hall, "before")
    assert hall.picture().bar.carries == FIRST


def test_an_answer_to_a_change_that_still_stands_gives_it_again_from_there(hall: Hall) -> None:
    answer(hall, "unknown")
    hand = hand_of(hall)
    assert (hand.weight, hand.before, hall.picture().bar.carries) == (kg(100), None, None)


def test_a_late_answer_is_refused(hall: Hall) -> None:
    late = instruction_name(hall.picture().bar)
    hall.lift(ADA, 1)
    with refused(hall, SomebodyWasFirst, LATE):
        answer(hall, "shown", late)


def test_nobody_answers_for_a_bar_with_a_lifter_under_it(hall: Hall) -> None:
    hall.load()
    told = "The bar is loaded and somebody is about to lift. Take “bar is loaded” back first."
    with refused(hall, NotAllowedNow, told):
        answer(hall, "empty")


@pytest.mark.parametrize("words", ["before", "shown", "half loaded"])
def test_without_a_change_out_there_is_nothing_to_compare_with(hall: Hall, words: str) -> None:
    for name in (ADA, BO, "Cleo Dahl"):
        hall.lift(name, 1)
    with refused(hall, NotAllowedNow, "There is no change out to compare the bar with."):
        answer(hall, words)


def test_an_unknown_bar_is_built_from_empty_and_known_once_it_is_loaded(hall: Hall) -> None:
    answer(hall, "unknown")
    step = hall.board().steps[0]
    assert step.before is None
    assert step.hands is not None
    assert (step.hands.off, step.hands.on) == ((), step.stack)
    hall.load()
    assert hall.picture().bar.carries == step.stack


# Bringing a flight


def test_bringing_a_flight_keeps_the_change_in_hand_until_the_crew_has_answered(hall: Hall) -> None:
    hand = hand_of(hall)
    with changes(hall, {PLATFORM: {"flight_id"}}):
        hall.bring(FLIGHT_B, SQUAT)
    assert (hand_of(hall), hall.board().ask) == (hand, True)
    answer(hall, "before")
    assert (hand_of(hall).attempt_id, hand_of(hall).weight) == (hall.attempt(DOV, 1).id, kg(150))


def test_the_same_flight_again_changes_nothing(hall: Hall) -> None:
    with changes(hall, {}):
        hall.bring(FLIGHT_A, SQUAT)


def test_a_flight_of_another_platform_is_refused(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    told = "This flight does not lift that lift on this platform."
    for flight_id, lift_id in (
        (other.flight_id("Flight C"), other.lift_id("Dip")),
        (hall.flight_id(FLIGHT_A), other.lift_id("Dip")),
        (999, 999),
    ):
        with refused(hall, NotAllowedNow, told):
            bring_flight(hall.desk, hall.platform_id, flight_id, lift_id, who=WANDA)


def spare_bar(hall: Hall) -> int:
    """A second bar at the platform; its id."""
    now = hall.picture()
    row = {"id": "", "name": "Light bar", "kind": "bar", "mass": "15", "usable": "", "collar_mass": "2.5"}
    kept = {
        "id": str(now.tools[0].id),
        "name": "Power bar",
        "kind": "bar",
        "mass": "20",
        "usable": "415",
        "collar_mass": "2.5",
        "collar_width": "50",
    }
    save_tools(hall.desk, hall.platform_id, [kept, row], stock_seen(now.stock, now.tools), who=OLGA)
    return hall.picture().tools[-1].id


def use_bar(hall: Hall, lift: str, tool_id: int) -> None:
    """This lift is done with this bar from now on."""
    wish = LiftWish(hall.lift_id(lift), str(tool_id), "2.5", "1", "plates", "total")
    save_lifts(hall.desk, hall.platform_id, [wish], who=OLGA)


def test_another_bar_comes_out_empty(hall: Hall) -> None:
    use_bar(hall, BENCH, spare_bar(hall))
    hall.lift(ADA, 1)
    hall.bring(FLIGHT_A, BENCH)
    now = hall.picture()
    assert now.implement_id == now.tools[-1].id
    hand = hand_of(hall)
    assert (now.bar.carries, hand.before, hand.weight) == ((), (), kg(60))
    assert 20 + 2 * sum(hand.stack) == 60
    check_board(hall.board())


def test_the_same_bar_keeps_its_plates_from_lift_to_lift(hall: Hall) -> None:
    hall.lift(ADA, 1)
    answer(hall, "shown")
    carries = hall.picture().bar.carries
    hall.bring(FLIGHT_A, BENCH)
    answer(hall, "before")
    assert hand_of(hall).before == carries


# Hands off: nothing takes a loaded bar away from its lifter

HANDS_OFF = (
    "The bar is loaded for Ada Brook at 100. Nothing may change on it now; "
    "take “bar is loaded” back first if it is a mistake."
)


def test_no_other_flight_is_brought_on_while_somebody_is_under_the_bar(hall: Hall) -> None:
    hall.load()
    with refused(hall, NotAllowedNow, HANDS_OFF):
        hall.bring(FLIGHT_B, SQUAT)


def test_the_lift_is_not_given_another_bar_while_somebody_is_under_this_one(hall: Hall) -> None:
    spare = spare_bar(hall)
    hall.load()
    with refused(hall, NotAllowedNow, HANDS_OFF):
        use_bar(hall, SQUAT, spare)


def test_after_the_result_another_flight_may_come(hall: Hall) -> None:
    hall.load()
    hall.judge(ADA, 1, Result.GOOD)
    hall.bring(FLIGHT_B, SQUAT)
    answer(hall, "before")
    assert (hand_of(hall).attempt_id, hand_of(hall).before) == (hall.attempt(DOV, 1).id, FIRST)
    assert hall.board().order[1].lifter.name == ETTA
