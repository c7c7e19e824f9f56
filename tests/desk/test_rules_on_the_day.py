"""The rules of the meet at work: what they refuse, what the table may override, and what the journal keeps of it."""

from __future__ import annotations

from datetime import timedelta

import pytest

from app.desk.ahead import look_ahead
from app.desk.equipment import LiftWish, save_lifts
from app.desk.errors import AgainstTheRules, NotAllowedNow
from app.desk.flight_changes import save_flight
from app.desk.people import withdraw
from app.desk.undo import undo
from app.meet.model import Result
from tests.cast import (
    ADA,
    BENCH,
    BO,
    CLEO,
    DEADLIFT,
    DOV,
    ETTA,
    FLIGHT_A,
    FLIGHT_B,
    OLGA,
    SQUAT,
    START,
    WANDA,
    Hall,
    kg,
)
from tests.desk.checks import changes, check_board, refused

ENTERED = {"weight", "version", "entered_by", "entered_at"}
LATE_S = 61  # the preset's minute to hand in (IPL Rulebook 2019, 6.1.1) and a second


def lift_flight_a(hall: Hall, until_left: int) -> None:
    """Flight A lifts, handing in the default each time, until so many of its attempts are left."""
    while len(hall.board().order) > until_left:
        name, number, _ = hall.up() or ("", 0, kg(0))
        if hall.attempt(name, number).weight is None:
            hall.declare(name, number, "")
        hall.lift(name, number)


# Overriding with a reason


def test_a_rule_is_overridden_with_a_reason_that_the_journal_keeps(hall: Hall) -> None:
    """IPL Rulebook 2019, 6.1.1: attempts are multiples of 2.5 kg."""
    told = "101 kg is not a multiple of 2.5. Nearest: 100 or 102.5."
    with refused(hall, AgainstTheRules, told):
        hall.declare(BO, 1, "101")
    with changes(hall, {("attempt", hall.attempt(BO, 1).id): ENTERED | {"changes"}}):
        hall.declare(BO, 1, "101", reason="  jury   says so ")
    entry = hall.journal()[-1]
    assert entry.what == (
        "Bo Carver: Squat, 1st declared at 101 (was 110); against the rule (101 kg is not a multiple of 2.5.), "
        "because: jury says so"
    )
    check_board(hall.board())


def test_a_reason_that_nobody_needed_is_not_kept(hall: Hall) -> None:
    assert hall.declare(BO, 2, "115", reason="why not") == "Bo Carver: Squat, 2nd declared at 115."


def test_a_reason_of_blanks_is_none(hall: Hall) -> None:
    with pytest.raises(AgainstTheRules):
        hall.declare(BO, 2, "116", reason="   ")


def test_a_reason_is_kept_to_two_hundred_letters(hall: Hall) -> None:
    hall.declare(BO, 2, "116", reason="x" * 5000)
    assert hall.journal()[-1].what.endswith("because: " + "x" * 200)


@pytest.mark.parametrize(
    ("weight", "told"),
    [
        ("101.1", "101.1 kg cannot be made with the plates at this platform. Nearest: 100 or 102.5."),
        ("20", "20 kg is lighter than the bare bar or belt, 25 kg. Next possible: 25."),
        ("999", "999 kg cannot be made with the plates at this platform. No weight near it can be made."),
    ],
    ids=["no plates", "under the bar", "too heavy"],
)
def test_what_no_table_can_decide_stays_refused_with_a_reason(hall: Hall, weight: str, told: str) -> None:
    with pytest.raises(NotAllowedNow) as refusal:
        hall.declare(BO, 1, weight, reason="I want to")
    assert str(refusal.value) == told
    assert not isinstance(refusal.value, AgainstTheRules)
    assert hall.attempt(BO, 1).weight == kg(110)


def test_a_lifted_attempt_stays_refused_with_a_reason(hall: Hall) -> None:
    hall.lift(ADA, 1)
    with refused(
        hall, NotAllowedNow, "This attempt has been lifted. Undo its result first, or correct the result."
    ):
        hall.declare(ADA, 1, "90", reason="it was lighter")


def test_every_rule_that_is_broken_is_named(hall: Hall) -> None:
    """IPL Rulebook 2019, 6.1.1: multiples of 2.5 kg, and never below a weight already failed."""
    hall.lift(ADA, 1, Result.MISSED)
    told = (
        "96 kg is not a multiple of 2.5. Nearest: 100 or 102.5. "
        "96 kg is below 100 kg, which this lifter has missed. Nearest: 100 or 102.5."
    )
    with pytest.raises(AgainstTheRules) as refusal:
        hall.declare(ADA, 2, "96")
    assert str(refusal.value) in (told, told.replace("Nearest: 100 or 102.5", "Next possible: 100"))
    assert refusal.value.late is False


# The time to hand in


def test_a_weight_handed_in_too_late_is_refused_and_the_refusal_says_that_only_time_is_against_it(
    hall: Hall,
) -> None:
    """One minute: IPL Rulebook 2019, 6.1.1, WDFPF 2007, Order of competition."""
    hall.lift(ADA, 1)
    hall.wait(LATE_S)
    with pytest.raises(
        AgainstTheRules, match=r"s after the 60 s had run out\. The default stands: 102\.5 kg\."
    ) as told:
        hall.declare(ADA, 2, "107.5")
    assert told.value.late is True
    hall.declare(ADA, 2, "107.5", reason="handed in in time, entered late")
    assert hall.attempt(ADA, 2).weight == kg("107.5")


def test_late_and_wrong_is_not_only_late(hall: Hall) -> None:
    hall.lift(ADA, 1)
    hall.wait(LATE_S)
    with pytest.raises(AgainstTheRules) as told:
        hall.declare(ADA, 2, "108")
    assert told.value.late is False


def test_in_the_last_second_a_weight_is_still_in_time(hall: Hall) -> None:
    hall.lift(ADA, 1)
    hall.wait(58)  # reading the clock takes this one another second
    assert hall.declare(ADA, 2, "107.5") == "Ada Brook: Squat, 2nd declared at 107.5."


def test_the_default_may_be_entered_at_any_time(hall: Hall) -> None:
    hall.lift(ADA, 1)
    hall.wait(600)
    assert hall.declare(ADA, 2, "") == "Ada Brook: Squat, 2nd declared at 102.5."


def test_time_begins_with_the_lift_and_not_with_a_correction_of_it(hall: Hall) -> None:
    hall.lift(ADA, 1)
    hall.wait(LATE_S)
    hall.judge(ADA, 1, Result.MISSED)
    with pytest.raises(AgainstTheRules, match=r"The default stands: 100 kg\."):
        hall.declare(ADA, 2, "107.5")


def test_without_a_limit_nobody_is_late(hall: Hall) -> None:
    hall.rules(seconds_to_hand_in="0")
    hall.lift(ADA, 1)
    hall.wait(6000)
    hall.declare(ADA, 2, "107.5")


def test_a_forfeited_default_wants_a_weight_or_a_pass(hall: Hall) -> None:
    """WDFPF 2007, Order of competition: the next attempt is forfeited."""
    hall.rules(default="forfeited")
    hall.lift(ADA, 1)
    told = "Ada Brook: Squat, 2nd: type a weight. Not handed in, the attempt is forfeited: pass it then."
    with refused(hall, NotAllowedNow, told):
        hall.declare(ADA, 2, "")
    hall.wait(LATE_S)
    with pytest.raises(AgainstTheRules, match=r"The attempt is forfeited\."):
        hall.declare(ADA, 2, "105")
    assert hall.judge(ADA, 2, Result.PASSED) == "Ada Brook: Squat, 2nd: passed."


# Record attempts


def test_a_record_attempt_is_marked_and_goes_by_its_own_step(hall: Hall) -> None:
    """Half a kilo over the record: IPF rule from memory, the value is a setting of the preset."""
    with refused(hall, AgainstTheRules, "101 kg is not a multiple of 2.5. Nearest: 100 or 102.5."):
        hall.declare(ADA, 2, "101")
    assert hall.declare(ADA, 2, "101r") == "Ada Brook: Squat, 2nd declared at 101, record attempt."
    assert hall.attempt(ADA, 2).record is True
    check_board(hall.board())


@pytest.mark.parametrize("typed", ["101R", " 101 r ", "101,0r"])
def test_the_record_mark_is_read_as_people_type_it(hall: Hall, typed: str) -> None:
    hall.declare(ADA, 2, typed)
    assert (hall.attempt(ADA, 2).weight, hall.attempt(ADA, 2).record) == (kg(101), True)


def test_a_record_step_is_still_a_step(hall: Hall) -> None:
    with refused(
        hall,
        NotAllowedNow,
        "101.25 kg cannot be made with the plates at this platform. Nearest: 101 or 101.5.",
    ):
        hall.declare(ADA, 2, "101.25r")


def test_after_a_good_lift_a_record_attempt_may_rise_by_the_record_step(hall: Hall) -> None:
    hall.lift(ADA, 1)
    with pytest.raises(AgainstTheRules, match=r"After a good lift at 100 kg the least rise is 2\.5 kg"):
        hall.declare(ADA, 2, "100")
    hall.declare(ADA, 2, "100.5r")
    assert hall.attempt(ADA, 2).weight == kg("100.5")


def test_the_default_after_a_record_attempt_is_a_whole_step_again(hall: Hall) -> None:
    hall.lift(ADA, 1, following="100.5r")
    hall.declare(BO, 1, "130", reason="the jury")
    hall.declare(CLEO, 1, "140", reason="the jury")
    lift_flight_a(hall, 6)
    while hall.up() != (ADA, 2, kg("100.5")):
        name, number, _ = hall.up() or ("", 0, kg(0))
        hall.lift(name, number)
    hall.lift(ADA, 2)
    assert hall.declare(ADA, 3, "") == "Ada Brook: Squat, 3rd declared at 105."


def test_a_mark_alone_makes_the_standing_weight_a_record_attempt(hall: Hall) -> None:
    hall.declare(ADA, 2, "105")
    assert hall.declare(ADA, 2, "r") == "Ada Brook: Squat, 2nd declared at 105 (was 105), record attempt."
    assert hall.attempt(ADA, 2).changes == 0


def test_a_weight_handed_in_again_without_the_mark_is_no_record_attempt(hall: Hall) -> None:
    hall.declare(ADA, 2, "105r")
    hall.declare(ADA, 2, "105")
    assert hall.attempt(ADA, 2).record is False


# Openers


def test_an_opener_may_be_changed_once(hall: Hall) -> None:
    """WDFPF 2007, Order of competition: once only."""
    hall.declare(DOV, 1, "152.5")
    with refused(hall, AgainstTheRules, "This attempt may be changed once, and was. 152.5 kg stands."):
        hall.declare(DOV, 1, "155")
    hall.declare(DOV, 1, "155", reason="first change was our typing error")
    assert hall.attempt(DOV, 1).changes == 2


def test_handing_in_the_same_weight_is_no_change(hall: Hall) -> None:
    hall.declare(DOV, 1, "150")
    hall.declare(DOV, 1, "152.5")
    assert hall.attempt(DOV, 1).changes == 1


def test_an_undone_change_is_not_counted(hall: Hall) -> None:
    hall.declare(DOV, 1, "152.5")
    undo(hall.desk, hall.platform_id, None, who=WANDA)
    hall.declare(DOV, 1, "155")
    assert hall.attempt(DOV, 1).changes == 1


def test_openers_may_be_changed_while_the_flight_before_has_attempts_left(hall: Hall) -> None:
    """Irish federation's athletes' briefing: until the third-last lifter of the flight before."""
    lift_flight_a(hall, 3)
    hall.declare(DOV, 1, "152.5")
    lift_flight_a(hall, 2)
    told = "Openers may be changed while the flight before has at least 3 attempts left; it has 2. 160 kg stands."
    with refused(hall, AgainstTheRules, told):
        hall.declare(ETTA, 1, "165")


def test_the_opener_of_a_later_lift_waits_for_the_last_flight_of_the_lift_before(hall: Hall) -> None:
    """Flight A does all rounds of a lift, then flight B, then the next lift: WPC and GPA rule 5."""
    hall.declare(ADA, 1, "62.5", lift=BENCH)
    hall.declare(ADA, 1, "125", lift=DEADLIFT)


def test_openers_of_the_first_flight_go_by_its_start(hall: Hall) -> None:
    """Three minutes before one's own flight: USA Powerlifting Arizona, meet preparation (second-hand)."""
    starts = (START + timedelta(hours=1)).astimezone().strftime("%Y-%m-%d %H:%M")
    save_flight(hall.desk, hall.platform_id, hall.flight_id(FLIGHT_A), FLIGHT_A, starts, who=OLGA)
    hall.wait(56 * 60)
    hall.declare(BO, 1, "112.5")
    hall.wait(60)
    with refused(
        hall, AgainstTheRules, "Openers may be changed until 3 min before the flight. 110 kg stands."
    ):
        hall.declare(CLEO, 1, "112.5")


def test_any_number_of_changes_until_ten_minutes_before(hall: Hall) -> None:
    """Any number up to 10 min before the flight, none after: USSF rules."""
    hall.rules(opener_changes="any", opener_deadline="minutes", opener_minutes="10")
    starts = (START + timedelta(hours=1)).astimezone().strftime("%Y-%m-%d %H:%M")
    save_flight(hall.desk, hall.platform_id, hall.flight_id(FLIGHT_B), FLIGHT_B, starts, who=OLGA)
    for weight in ("152.5", "155", "157.5", "150"):
        hall.declare(DOV, 1, weight)
    hall.wait(50 * 60)
    with pytest.raises(AgainstTheRules, match="until 10 min before the flight"):
        hall.declare(DOV, 1, "152.5")


# Later attempts


def test_the_third_of_the_last_lift_may_be_changed_twice_until_the_bar_is_called(hall: Hall) -> None:
    """Two changes of the third deadlift: WDFPF 2007 hands out five cards for it; until the call from memory."""
    hall.bring(FLIGHT_A, DEADLIFT)
    hall.declare(ADA, 3, "140", lift=DEADLIFT)
    hall.declare(ADA, 3, "145", lift=DEADLIFT)
    hall.declare(ADA, 3, "142.5", lift=DEADLIFT)
    with refused(hall, AgainstTheRules, "This attempt may be changed twice, and was. 142.5 kg stands."):
        hall.declare(ADA, 3, "147.5", lift=DEADLIFT)


def test_a_called_weight_stands(hall: Hall) -> None:
    hall.rules(changeable="all")
    hall.declare(ADA, 2, "102.5")
    lift_flight_a(hall, 6)
    assert hall.up() == (ADA, 2, kg("102.5"))
    with refused(hall, AgainstTheRules, "The bar has been called for this lifter. 102.5 kg stands."):
        hall.declare(ADA, 2, "105")
    hall.declare(ADA, 2, "105", reason="announcer called the wrong name")
    assert hall.board().ask is True  # what the crew loads has been overtaken, so it is asked, never told


def test_a_later_attempt_that_is_lighter_now_is_named(hall: Hall) -> None:
    hall.rules(changeable="all")
    hall.declare(ADA, 2, "105")
    hall.declare(ADA, 3, "110")
    told = "A later attempt of this lifter has been handed in already, lighter: 110 kg. Change that one too."
    with refused(hall, AgainstTheRules, told):
        hall.declare(ADA, 2, "115")
    hall.declare(ADA, 2, "115", reason="third follows")
    hall.declare(ADA, 3, "120")
    check_board(hall.board())


def test_a_weight_below_one_that_is_yet_to_be_lifted_is_named(hall: Hall) -> None:
    hall.declare(ADA, 2, "105")
    with pytest.raises(AgainstTheRules, match=r"102\.5 kg is below 105 kg, which this lifter has yet to lift"):
        hall.declare(ADA, 3, "102.5")


# Rules changed in the middle of the meet


def test_a_rule_changed_in_the_middle_of_the_meet_holds_from_the_next_entry(hall: Hall) -> None:
    hall.lift(ADA, 1, Result.MISSED)
    with pytest.raises(AgainstTheRules, match="which this lifter has missed"):
        hall.declare(ADA, 2, "95")
    bar = hall.picture().bar
    assert hall.rules(below_missed="yes") == "The rules of Bar lifts are kept."
    assert hall.picture().bar == bar
    assert hall.declare(ADA, 2, "95") == "Ada Brook: Squat, 2nd declared at 95."


def test_the_journal_says_which_rules_are_other_than_the_presets(hall: Hall) -> None:
    hall.rules(below_missed="yes", default="forfeited")
    assert hall.journal()[-1].what == (
        "Bar lifts: rules; other than the preset: May go below a missed weight, When nobody hands in"
    )


def test_saving_the_same_rules_changes_nothing(hall: Hall) -> None:
    hall.rules(below_missed="yes")
    with changes(hall, {}):
        hall.rules()


def test_a_wrong_rule_is_refused_whole(hall: Hall) -> None:
    with pytest.raises(NotAllowedNow) as told:
        hall.rules(step="0", seconds_following="1", ties="coin")
    assert "“coin” is none of lot, sequence." in str(told.value)
    assert hall.journal()[-1].what == "Hall: Flight A, Squat"


def test_a_changed_rule_is_undone_like_any_entry(hall: Hall) -> None:
    before = hall.picture().rules
    hall.rules(below_missed="yes")
    undo(hall.desk, hall.platform_id, None, who=OLGA)
    assert hall.picture().rules == before


def test_a_change_of_rules_leaves_a_loaded_bar_to_its_lifter(hall: Hall) -> None:
    hall.load()
    bar = hall.picture().bar
    hall.rules("rising-bar")
    assert hall.picture().bar == bar


# A rising bar


@pytest.fixture
def rising(hall: Hall) -> Hall:
    """The ready meet under the rules of a rising bar, in steps of 2.5 kg, with Cleo's opener at 120."""
    hall.rules("rising-bar")
    hall.declare(CLEO, 1, "120")
    return hall


def test_on_a_rising_bar_the_lightest_weight_is_next_whatever_attempt_it_is(rising: Hall) -> None:
    """The lightest weight first, whatever attempt it is: IWF order, from memory."""
    rising.lift(ADA, 1, following="105")
    assert rising.up() == (ADA, 2, kg(105))
    rising.lift(ADA, 2, following="115")
    assert rising.order()[:2] == [(BO, 1, kg(110)), (BO, 2, kg("112.5"))]
    check_board(rising.board())


def test_on_a_rising_bar_equal_weights_go_by_the_lower_attempt_number(rising: Hall) -> None:
    """Attempt number before lot: from memory (``figures.md`` 2)."""
    rising.lift(ADA, 1, following="110")
    assert rising.order()[:2] == [(BO, 1, kg(110)), (ADA, 2, kg(110))]


def test_the_bar_does_not_go_down(rising: Hall) -> None:
    rising.lift(ADA, 1, following="115")
    rising.lift(BO, 1, following="120")
    told = "The bar is at 115 kg and does not go down."
    with pytest.raises(AgainstTheRules, match=told):
        rising.declare(CLEO, 1, "112.5")


def test_the_bar_does_not_go_down_while_the_crew_waits_for_a_weight(rising: Hall) -> None:
    """Nothing was out at the bar, so nothing held the weight up: 105 went through after 110 had been lifted."""
    rising.lift(ADA, 1, following="115")
    rising.lift(BO, 1)  # Bo's second is next and nobody has handed it in
    assert rising.picture().bar.hand is None
    with pytest.raises(AgainstTheRules, match="The bar is at 110 kg and does not go down"):
        rising.declare(CLEO, 1, "105")


def test_enter_takes_the_weight_that_the_order_shows_on_a_rising_bar(rising: Hall) -> None:
    """One who was away while the bar rose is shown at the bar's weight; Enter took 102.5, below the bar."""
    rising.lift(ADA, 1)
    withdraw(rising.desk, rising.platform_id, rising.lifter(ADA).id, back=False, who=WANDA)
    rising.lift(BO, 1, following="115")
    rising.lift(BO, 2)
    withdraw(rising.desk, rising.platform_id, rising.lifter(ADA).id, back=True, who=WANDA)
    assert rising.order()[0] == (ADA, 2, kg(115))
    assert rising.declare(ADA, 2, "") == "Ada Brook: Squat, 2nd declared at 115."


def test_the_bar_of_the_next_flight_begins_anew(rising: Hall) -> None:
    """Flight A ended at 120; Flight B's lifters, with openers at 60, were shown a bar that never goes below 120."""
    for name in (DOV, ETTA):
        rising.declare(name, 1, "60", reason="lighter flight")
    while rising.up() is not None:
        name, number, _ = rising.up() or ("", 0, kg(0))
        if rising.attempt(name, number).weight is None:
            rising.declare(name, number, "")
        rising.lift(name, number)
    rising.bring(FLIGHT_B, SQUAT)
    assert [weight for _, _, weight in rising.order()] == [kg(60), kg(60), *[kg("62.5")] * 2, *[kg(65)] * 2]
    rising.lift(DOV, 1)
    rising.declare(DOV, 2, "62.5")


def test_a_withdrawn_lifters_weight_still_holds_the_bar_up(rising: Hall) -> None:
    """The bar does not go down because whoever lifted last has left."""
    rising.lift(ADA, 1)
    withdraw(rising.desk, rising.platform_id, rising.lifter(ADA).id, back=False, who=WANDA)
    rising.lift(BO, 1, following="115")
    rising.lift(BO, 2)
    withdraw(rising.desk, rising.platform_id, rising.lifter(ADA).id, back=True, who=WANDA)
    withdraw(rising.desk, rising.platform_id, rising.lifter(BO).id, back=False, who=WANDA)
    assert rising.order()[0] == (ADA, 2, kg(115))
    with pytest.raises(AgainstTheRules, match="The bar is at 115 kg and does not go down"):
        rising.declare(ADA, 2, "105")


def test_before_enter_the_table_reads_what_the_rules_would_say(hall: Hall) -> None:
    found = look_ahead(hall.desk, hall.platform_id, hall.seen(BO, 1), "101")
    assert [str(one) for one in found.breaches] == ["101 kg is not a multiple of 2.5. Nearest: 100 or 102.5."]
    fine = look_ahead(hall.desk, hall.platform_id, hall.seen(BO, 1), "120")
    assert (fine.breaches, fine.place) == ((), 3)
    assert fine.after is not None
    assert fine.after.lifter.name == CLEO
    never = look_ahead(hall.desk, hall.platform_id, hall.seen(BO, 1), "999")
    assert (never.place, never.hands) == (0, None)


def test_looking_ahead_enters_nothing(hall: Hall) -> None:
    with changes(hall, {}):
        look_ahead(hall.desk, hall.platform_id, hall.seen(BO, 1), "120")


def test_a_lift_in_steps_of_its_own_is_judged_in_them(hall: Hall) -> None:
    wish = LiftWish(hall.lift_id(SQUAT), str(hall.picture().tools[0].id), "5", "1", "plates", "total")
    save_lifts(hall.desk, hall.platform_id, [wish], who=OLGA)
    with pytest.raises(AgainstTheRules, match=r"102\.5 kg is not a multiple of 5\. Nearest: 100 or 105"):
        hall.declare(ADA, 2, "102.5")
    hall.lift(ADA, 1)
    assert hall.declare(ADA, 2, "") == "Ada Brook: Squat, 2nd declared at 105."
