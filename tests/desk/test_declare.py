"""Handing in a weight."""

from __future__ import annotations

import pytest

from app.desk import attempts
from app.desk.attempts import Seen
from app.desk.errors import AgainstTheRules, NotAllowedNow, SomebodyWasFirst
from app.desk.roster import import_roster
from app.meet.model import Result
from app.store.picture import NotFound
from tests.cast import ADA, BO, CLEO, DOV, FLIGHT_A, OTTO, SQUAT, WANDA, Hall, kg, stack
from tests.desk.checks import changes, check_board, refused

ENTERED = {"weight", "version", "entered_by", "entered_at"}


def test_a_declared_weight_is_entered_and_nothing_else_is_touched(hall: Hall) -> None:
    attempt = hall.attempt(BO, 2)
    with changes(hall, {("attempt", attempt.id): ENTERED}):
        assert hall.declare(BO, 2, "117,5") == "Bo Carver: Squat, 2nd declared at 117.5."
    after = hall.attempt(BO, 2)
    assert (after.weight, after.result, after.version, after.entered_by) == (
        kg("117.5"),
        Result.OPEN,
        attempt.version + 1,
        WANDA,
    )
    check_board(hall.board())


def test_a_changed_weight_says_what_it_was(hall: Hall) -> None:
    hall.declare(BO, 2, "117.5")
    with pytest.raises(AgainstTheRules, match="Only the third attempt of the last lift may be changed"):
        hall.declare(BO, 2, "120")
    reason = "the coach misspoke"
    said = hall.declare(BO, 2, "120", reason=reason)
    assert said == (
        "Bo Carver: Squat, 2nd declared at 120 (was 117.5); against the rule (Only the third attempt of the last "
        "lift may be changed.), because: the coach misspoke."
    )
    assert hall.attempt(BO, 2).changes == 1


def test_the_same_weight_again_changes_nothing(hall: Hall) -> None:
    hall.declare(BO, 2, "117.5")
    with changes(hall, {}):
        assert hall.declare(BO, 2, "117.5") == "Bo Carver: Squat, 2nd stays at 117.5."


def test_a_wrong_weight_is_refused_with_what_would_be_right(hall: Hall) -> None:
    with refused(hall, NotAllowedNow, "118 kg is not a multiple of 2.5. Nearest: 117.5 or 120."):
        hall.declare(BO, 2, "118")
    with refused(hall, NotAllowedNow, "“12o” is not a weight. Type a number such as 142.5."):
        hall.declare(BO, 2, "12o")


def test_a_weight_that_somebody_else_entered_meanwhile_is_not_overwritten(hall: Hall) -> None:
    old = hall.seen(BO, 2)
    hall.declare(BO, 2, "117.5", who=OTTO)
    told = (
        "Bo Carver: Squat, 2nd was changed by Otto while you were typing: it is now not lifted at 117.5. "
        "Nothing of yours was entered. Look, and enter again."
    )
    with refused(hall, SomebodyWasFirst, told):
        attempts.declare(hall.desk, hall.platform_id, old, "120", who=WANDA)


def test_an_attempt_that_is_not_there_is_refused(hall: Hall) -> None:
    with pytest.raises(NotFound) as told:
        attempts.declare(hall.desk, hall.platform_id, Seen(999, 0), "120", who=WANDA)
    assert (
        str(told.value)
        == "There is no such attempt here. It may have been taken away; go back and choose again."
    )


def test_an_empty_entry_takes_the_rules_default_after_a_good_lift(hall: Hall) -> None:
    """IPL Rulebook 2019, 6.1.1: one step more after a good lift."""
    hall.lift(ADA, 1, Result.GOOD)
    assert hall.declare(ADA, 2, "") == "Ada Brook: Squat, 2nd declared at 102.5."


def test_an_empty_entry_takes_the_rules_default_after_a_miss(hall: Hall) -> None:
    """IPL Rulebook 2019, 6.1.1: the same weight after a failed lift."""
    hall.lift(ADA, 1, Result.MISSED)
    assert hall.declare(ADA, 2, " ") == "Ada Brook: Squat, 2nd declared at 100."


def test_an_empty_entry_before_the_lift_takes_the_default_of_a_good_one(hall: Hall) -> None:
    assert hall.declare(ADA, 3, "") == "Ada Brook: Squat, 3rd declared at 105."


def test_an_empty_entry_after_a_pass_that_was_never_handed_in_takes_what_the_table_shows(hall: Hall) -> None:
    """The order showed 102.5 for the 3rd attempt, and Enter said that an opener has no default."""
    hall.lift(ADA, 1)
    hall.judge(ADA, 2, Result.PASSED)
    shown = next(turn.weight for turn in hall.board().order if turn.attempt == hall.attempt(ADA, 3))
    assert shown == kg("102.5")
    assert hall.declare(ADA, 3, "") == "Ada Brook: Squat, 3rd declared at 102.5."


def test_an_empty_entry_after_a_lift_with_nothing_on_the_belt_takes_the_default(belt: Hall) -> None:
    """0 kg is a weight: a good muscle-up with body weight alone was taken for one that nobody had handed in."""
    belt.lift("Livia Corran", 1, lift="Muscle-up")
    assert (
        belt.declare("Livia Corran", 2, "", lift="Muscle-up")
        == "Livia Corran: Muscle-up, 2nd declared at 1.25."
    )


def test_an_empty_entry_for_an_opener_is_refused(hall: Hall) -> None:
    import_roster(hall.desk, hall.meet_id, "name,lot,flight\nFay Green,6,Flight A\n", who=WANDA)
    with refused(hall, NotAllowedNow, "Fay Green: Squat, 1st: type a weight. An opener has no default."):
        hall.declare("Fay Green", 1, "")


def test_an_empty_entry_leaves_a_weight_that_stands(hall: Hall) -> None:
    with changes(hall, {}):
        assert hall.declare(BO, 1, "") == "Bo Carver: Squat, 1st stays at 110."


def test_a_default_that_no_plates_make_is_refused(hall: Hall) -> None:
    hall.lift(ADA, 1)
    hall.declare(ADA, 2, "440")
    told = "442.5 kg cannot be made with the plates at this platform."
    with refused(hall, NotAllowedNow, told + " Next possible: 440."):
        hall.declare(ADA, 3, "")


def test_an_attempt_that_is_over_takes_no_weight(hall: Hall) -> None:
    hall.lift(ADA, 1)
    over = "This attempt has been lifted. Undo its result first, or correct the result."
    with refused(hall, NotAllowedNow, over):
        hall.declare(ADA, 1, "105")
    hall.judge(ADA, 2, Result.PASSED)
    with refused(hall, NotAllowedNow, over):
        hall.declare(ADA, 2, "")


def test_nothing_changes_on_a_bar_that_is_loaded(hall: Hall) -> None:
    hall.load()
    told = (
        "The bar is loaded for Ada Brook at 100. Nothing may change on it now; "
        "take “bar is loaded” back first if it is a mistake."
    )
    with refused(hall, NotAllowedNow, told):
        hall.declare(ADA, 1, "105")


def test_the_others_may_declare_while_the_bar_is_loaded_even_something_lighter(hall: Hall) -> None:
    hall.load()
    bar = hall.picture().bar
    hall.declare(BO, 1, "90")
    assert hall.picture().bar == bar
    assert hall.board().up == next(t for t in hall.board().order if t.lifter.name == ADA)
    assert hall.board().ask is False
    hall.judge(ADA, 1, Result.GOOD)
    hand = hall.picture().bar.hand
    assert hand is not None
    assert (hand.attempt_id, hand.before, hand.stack) == (
        hall.attempt(BO, 1).id,
        stack(25, 10, "2.5"),
        stack(25, 5, "2.5"),
    )


def test_an_attempt_of_another_platform_is_refused(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    seen = hall.seen(ADA, 2)
    with refused(hall, NotAllowedNow, "This attempt belongs to another platform."):
        attempts.declare(hall.desk, other.platform_id, seen, "105", who=WANDA)


def test_weights_of_a_flight_that_is_not_on_are_entered_and_wait(hall: Hall) -> None:
    hand = hall.picture().bar.hand
    hall.declare(DOV, 1, "90")
    assert hall.picture().bar.hand == hand
    assert hall.picture().flight_id == hall.flight_id(FLIGHT_A)
    assert hall.board().flight.name == FLIGHT_A
    assert [turn.lifter.name for turn in hall.board().order[:3]] == [ADA, BO, CLEO]
    assert hall.board().lift.name == SQUAT
