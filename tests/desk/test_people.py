"""Lifters on the day: gone, back, late, moved; a fourth attempt; and who enters for a flight."""

from __future__ import annotations

import pytest

from app.desk import people
from app.desk.bar import bar_carries
from app.desk.errors import NotAllowedNow
from app.desk.flight_changes import move_lifter
from app.desk.roster import import_roster
from app.desk.undo import undo
from app.meet.model import Result
from app.meet.platform import Condition
from tests.cast import (
    ADA,
    BO,
    CLEO,
    DOV,
    FLIGHT_A,
    FLIGHT_B,
    OLGA,
    OTTO,
    SQUAT,
    WANDA,
    Hall,
    kg,
    stack,
)
from tests.desk.checks import changes, check_board, refused, replayed, rows


def withdraw(hall: Hall, name: str, *, back: bool = False, who: str = WANDA) -> str:
    return people.withdraw(hall.desk, hall.platform_id, hall.lifter(name).id, back=back, who=who)


def fourth(hall: Hall, name: str, who: str = WANDA) -> str:
    return people.grant_fourth(
        hall.desk, hall.platform_id, hall.lifter(name).id, hall.lift_id(SQUAT), who=who
    )


def take_over(hall: Hall, who: str, flight: str = FLIGHT_A) -> str:
    return people.take_over(hall.desk, hall.platform_id, hall.flight_id(flight), who=who)


# Gone and back


def test_one_who_withdraws_before_the_lift_leaves_the_order_and_the_change_that_is_out_stays(
    hall: Hall,
) -> None:
    bar = hall.picture().bar
    with changes(hall, {("lifter", hall.lifter(CLEO).id): {"withdrawn"}}):
        assert withdraw(hall, CLEO) == "Cleo Dahl withdraws."
    assert CLEO not in {name for name, _, _ in hall.order()}
    assert hall.picture().bar == bar
    assert hall.board().ask is False
    check_board(hall.board())


def test_when_the_one_being_loaded_for_withdraws_the_crew_is_asked_what_is_on_the_bar(hall: Hall) -> None:
    hand = hall.picture().bar.hand
    withdraw(hall, ADA)
    assert hall.picture().bar.hand == hand
    assert hall.board().ask is True
    assert hall.up() == (BO, 1, kg(110))
    bar_carries(hall.desk, hall.platform_id, "shown", who=WANDA)
    bar = hall.picture().bar
    assert bar.hand is not None
    assert (bar.hand.before, bar.hand.weight) == (stack(25, 10, "2.5"), kg(110))
    check_board(hall.board())


def test_nobody_withdraws_under_a_loaded_bar(hall: Hall) -> None:
    hall.load()
    told = (
        "The bar is loaded for Ada Brook at 100. Nothing may change on it now; "
        "take “bar is loaded” back first if it is a mistake."
    )
    with refused(hall, NotAllowedNow, told):
        withdraw(hall, ADA)


def test_one_on_deck_who_withdraws_leaves_the_loaded_bar_alone(hall: Hall) -> None:
    hall.load()
    bar = hall.picture().bar
    withdraw(hall, BO)
    assert hall.picture().bar == bar
    hall.judge(ADA, 1, Result.GOOD)
    assert hall.up() == (CLEO, 1, kg(110))


def test_a_no_show_is_passed_and_stays_in_the_meet(hall: Hall) -> None:
    hall.judge(ADA, 1, Result.PASSED)
    assert hall.up() == (BO, 1, kg(110))
    assert (ADA, 2, kg(100)) in hall.order()


def test_what_was_lifted_stays_and_so_does_what_was_handed_in(hall: Hall) -> None:
    hall.lift(ADA, 1, following="105")
    withdraw(hall, ADA)
    assert hall.attempt(ADA, 1).result is Result.GOOD
    withdraw(hall, ADA, back=True)
    assert (ADA, 2, kg(105)) in hall.order()


def test_one_who_is_back_before_anybody_else_is_loaded_for_is_up_again(hall: Hall) -> None:
    withdraw(hall, ADA)
    assert withdraw(hall, ADA, back=True) == "Ada Brook is back."
    assert hall.up() == (ADA, 1, kg(100))
    assert hall.board().ask is False


def test_withdrawing_twice_changes_nothing(hall: Hall) -> None:
    withdraw(hall, CLEO)
    with changes(hall, {}):
        withdraw(hall, CLEO)


def test_when_the_last_of_a_flight_withdraw_nobody_is_up(hall: Hall) -> None:
    hall.lift(ADA, 1)
    for name in (ADA, BO, CLEO):
        withdraw(hall, name)
    assert hall.up() is None
    assert hall.board().order == ()


def test_the_journal_tells_withdrawals_and_undo_takes_them_back(hall: Hall) -> None:
    withdraw(hall, CLEO)
    assert undo(hall.desk, hall.platform_id, None, who=WANDA) == "Undone: Cleo Dahl withdraws."
    assert hall.lifter(CLEO).withdrawn is False
    assert replayed(hall.journal()) == rows(hall.desk.engine)


def test_a_lifter_of_another_platform_is_refused(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    with refused(hall, NotAllowedNow, "This lifter is not on this platform."):
        people.withdraw(hall.desk, other.platform_id, hall.lifter(ADA).id, back=False, who=WANDA)


# A late lifter, and one who changes flights


def test_a_late_lifter_comes_in_with_the_roster_while_the_round_runs(hall: Hall) -> None:
    hall.lift(ADA, 1)
    hand = hall.picture().bar.hand
    import_roster(
        hall.desk, hall.meet_id, "name,lot,flight,Squat opener\nFay Green,6,Flight A,112.5\n", who=OLGA
    )
    assert hall.picture().bar.hand == hand
    assert [name for name, number, _ in hall.order() if number == 1] == [BO, CLEO, "Fay Green"]
    check_board(hall.board())


def test_a_late_lifter_with_the_lightest_opener_asks_the_crew(hall: Hall) -> None:
    import_roster(
        hall.desk, hall.meet_id, "name,lot,flight,Squat opener\nFay Green,6,Flight A,80\n", who=OLGA
    )
    assert hall.up() == ("Fay Green", 1, kg(80))
    assert hall.board().ask is True


def test_a_late_lifter_without_an_opener_is_named_and_hands_it_in(hall: Hall) -> None:
    import_roster(hall.desk, hall.meet_id, "name,lot,flight\nFay Green,6,Flight A\n", who=OLGA)
    assert [one.name for one in hall.board().no_opener] == ["Fay Green"]
    hall.declare("Fay Green", 1, "105")
    assert ("Fay Green", 1, kg(105)) in hall.order()


def test_a_lifter_moved_to_the_flight_that_is_on_takes_the_place_of_their_weight(hall: Hall) -> None:
    hand = hall.picture().bar.hand
    here, there = hall.flight_id(FLIGHT_B), str(hall.flight_id(FLIGHT_A))
    move_lifter(hall.desk, hall.platform_id, hall.lifter(DOV).id, here, there, who=OLGA)
    assert hall.picture().bar.hand == hand
    assert (DOV, 1, kg(150)) in hall.order()
    check_board(hall.board())


def test_the_one_being_loaded_for_is_not_moved(hall: Hall) -> None:
    told = "The crew is loading for Ada Brook now. Move them after this lift, or pass the attempt first."
    here, there = hall.flight_id(FLIGHT_A), str(hall.flight_id(FLIGHT_B))
    with refused(hall, NotAllowedNow, told):
        move_lifter(hall.desk, hall.platform_id, hall.lifter(ADA).id, here, there, who=OLGA)


# A fourth attempt


@pytest.fixture
def done(hall: Hall) -> Hall:
    """Ada has taken her three squats, the third at 110; fourth attempts are allowed."""
    hall.rules(fourth_for_record="yes")
    hall.lift(ADA, 1, following="105")
    for name in (BO, CLEO):
        hall.lift(name, 1, following="120")
    hall.lift(ADA, 2, following="110")
    for name in (BO, CLEO):
        hall.lift(name, 2)
    hall.lift(ADA, 3)
    return hall


def test_a_fourth_attempt_for_a_record_comes_after_the_round(done: Hall) -> None:
    """A card for a fourth is handed out in WDFPF 2007; whether there are fourths is a setting."""
    assert fourth(done, ADA) == "Ada Brook is granted a fourth attempt for a record. Hand in its weight."
    assert (ADA, 4) not in [turn[:2] for turn in done.order()]
    assert done.declare(ADA, 4, "112.5r") == "Ada Brook: Squat, 4th declared at 112.5, record attempt."
    assert done.order()[-1] == (ADA, 4, kg("112.5"))
    for name in (BO, CLEO):
        done.declare(name, 3, "125", reason="entered late")
    for name in (BO, CLEO):
        done.lift(name, 3)
    done.lift(ADA, 4)
    assert done.attempt(ADA, 4).result is Result.GOOD
    check_board(done.board())


def test_a_fourth_attempt_is_for_a_record_only(done: Hall) -> None:
    fourth(done, ADA)
    with pytest.raises(NotAllowedNow, match="A fourth attempt is for a record only"):
        done.declare(ADA, 4, "112.5")


def test_a_fourth_has_no_default(done: Hall) -> None:
    fourth(done, ADA)
    with pytest.raises(NotAllowedNow, match="type a weight"):
        done.declare(ADA, 4, "")


@pytest.mark.parametrize(
    ("name", "told"),
    [
        (BO, "Bo Carver has not taken the third attempt yet."),
        (ADA, "Ada Brook has a fourth attempt already."),
    ],
)
def test_a_fourth_is_granted_once_and_after_the_third(done: Hall, name: str, told: str) -> None:
    fourth(done, ADA)
    with refused(done, NotAllowedNow, told):
        fourth(done, name)


def test_without_the_rule_nobody_is_granted_a_fourth(done: Hall) -> None:
    done.rules(fourth_for_record="no")
    told = "The rules of this session have no fourth attempt. The Rules page can allow it."
    with refused(done, NotAllowedNow, told):
        fourth(done, ADA)


def test_a_granted_fourth_is_taken_back_with_its_row(done: Hall) -> None:
    fourth(done, ADA)
    undo(done.desk, done.platform_id, None, who=WANDA)
    with pytest.raises(StopIteration):
        done.attempt(ADA, 4)
    assert replayed(done.journal()) == rows(done.desk.engine)


# Who enters for a flight


def test_a_flight_taken_over_takes_entries_of_its_owner_only(hall: Hall) -> None:
    assert take_over(hall, OTTO) == "Otto enters for Flight A."
    told = "Otto enters for this flight. Take it over first, if that is agreed."
    for entry in (
        lambda: hall.declare(BO, 2, "115"),
        lambda: hall.judge(ADA, 1, Result.GOOD),
        lambda: hall.judge(BO, 2, Result.PASSED),
    ):
        with refused(hall, NotAllowedNow, told):
            entry()
    hall.declare(BO, 2, "115", who=OTTO)


@pytest.mark.parametrize("entry", [withdraw, fourth], ids=["withdrawal", "fourth attempt"])
def test_a_flight_taken_over_keeps_its_lifters_for_its_owner(done: Hall, entry) -> None:
    """Weights were refused to the others, and withdrawing a lifter of the flight was not."""
    take_over(done, OTTO)
    told = "Otto enters for this flight. Take it over first, if that is agreed."
    with refused(done, NotAllowedNow, told):
        entry(done, ADA)
    entry(done, ADA, who=OTTO)


def test_an_entry_of_the_owner_is_taken_back_by_the_owner_only(hall: Hall) -> None:
    """Anybody's undo reached into a flight that was not theirs."""
    take_over(hall, OTTO)
    hall.declare(BO, 2, "115", who=OTTO)
    told = "Otto enters for this flight. Take it over first, if that is agreed."
    with refused(hall, NotAllowedNow, told):
        undo(hall.desk, hall.platform_id, None, who=WANDA)
    assert (
        undo(hall.desk, hall.platform_id, None, who=OTTO) == "Undone: Bo Carver: Squat, 2nd declared at 115."
    )


def test_taking_over_is_explicit_and_says_from_whom(hall: Hall) -> None:
    take_over(hall, OTTO)
    assert take_over(hall, WANDA) == "Wanda enters for Flight A (before: Otto)."
    hall.declare(BO, 2, "115")
    with pytest.raises(NotAllowedNow, match="Wanda enters for this flight"):
        hall.declare(CLEO, 2, "115", who=OTTO)


def test_a_flight_handed_back_is_anybodys(hall: Hall) -> None:
    take_over(hall, OTTO)
    said = people.hand_back(hall.desk, hall.platform_id, hall.flight_id(FLIGHT_A), who=OTTO)
    assert said == "Flight A is free for anybody at the table."
    hall.declare(BO, 2, "115")


def test_the_other_flight_stays_anybodys(hall: Hall) -> None:
    take_over(hall, OTTO)
    hall.declare(DOV, 1, "152.5")


def test_the_crew_answers_at_the_bar_whoever_owns_the_flight(hall: Hall) -> None:
    take_over(hall, OTTO)
    hall.load()
    assert hall.picture().bar.condition is Condition.LIFTING


def test_a_flight_of_another_platform_is_not_taken_over(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    with refused(hall, NotAllowedNow, "This flight is not on this platform."):
        people.take_over(hall.desk, other.platform_id, hall.flight_id(FLIGHT_A), who=OTTO)
