"""A declaration against the rules of the meet: a table of cases for each setting, with its source."""

from dataclasses import replace
from datetime import UTC, datetime, timedelta
from fractions import Fraction

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from app.meet.check_declaration import check_declaration
from app.meet.model import Attempt, Result
from app.meet.moment import Breach, Moment
from app.meet.rule_reading import preset_rules
from app.meet.rules import Changeable, Default, OpenerDeadline, Rules, Until
from tests.meet.nouns import KG_SET, attempt, bar

BAR = preset_rules("rounds-bar")
RISING = preset_rules("rising-bar")
BELT = preset_rules("rounds-belt")
CHIPS = bar(
    ("25", 12), ("20", 2), ("15", 2), ("10", 2), ("5", 2), ("2.5", 2), ("1.25", 2), ("0.5", 4), ("0.25", 2)
)
NOW = datetime(2026, 3, 7, 12, 0, tzinfo=UTC)
QUIET = Moment(now=NOW)
GOOD, MISSED = Result.GOOD, Result.MISSED


def found(
    rules: Rules,
    weight: str,
    one: Attempt,
    others: tuple[Attempt, ...] = (),
    moment: Moment = QUIET,
    equipment=KG_SET,
    *,
    record: bool = False,
) -> list[Breach]:
    return check_declaration(rules, Fraction(weight), one, others, moment, equipment, "kg", record=record)


def keys(breaches: list[Breach]) -> list[str]:
    return [breach.key for breach in breaches]


def after(seconds: int) -> Moment:
    """So many seconds after the lifter's time to hand in began."""
    return Moment(now=NOW, asked_since=NOW - timedelta(seconds=seconds))


SECOND, THIRD, FOURTH = attempt(1, 2), attempt(1, 3), attempt(1, 4)
GOOD_100, MISSED_110 = attempt(1, 1, 100, GOOD), attempt(1, 2, 110, MISSED)


@pytest.mark.parametrize(
    ("rules", "weight", "others", "breaches"),
    [
        pytest.param(BAR, "102.5", (GOOD_100,), [], id="a multiple of 2.5 (IPL Rulebook 2019, 6.1.1)"),
        pytest.param(BAR, "103", (GOOD_100,), ["step"], id="no multiple of 2.5 (IPL Rulebook 2019, 6.1.1)"),
        pytest.param(RISING, "103", (GOOD_100,), [], id="steps of 1 kg (second-hand)"),
        pytest.param(RISING, "103.5", (GOOD_100,), ["step"], id="no whole kg (second-hand)"),
        pytest.param(BELT, "101.5", (GOOD_100,), ["step"], id="no multiple of 1.25 (common practice)"),
        pytest.param(
            BAR, "100", (GOOD_100,), ["least_rise"], id="no rise after a good lift (common practice)"
        ),
        pytest.param(
            replace(BAR, least_rise=Fraction(0)), "100", (GOOD_100,), [], id="the same again, where allowed"
        ),
        pytest.param(
            replace(BAR, least_rise=Fraction(0)),
            "97.5",
            (GOOD_100,),
            ["least_rise"],
            id="never below a good lift",
        ),
        pytest.param(
            replace(BAR, least_rise=Fraction(5)),
            "102.5",
            (GOOD_100,),
            ["least_rise"],
            id="a least rise of two steps",
        ),
        pytest.param(BAR, "110", (GOOD_100, MISSED_110), [], id="a missed weight again (IPL 6.1.1)"),
        pytest.param(BAR, "107.5", (GOOD_100, MISSED_110), ["below_missed"], id="below a miss (IPL 6.1.1)"),
        pytest.param(
            replace(BAR, below_missed=True),
            "107.5",
            (GOOD_100, MISSED_110),
            [],
            id="below a miss, where allowed",
        ),
        pytest.param(
            replace(BAR, below_missed=True),
            "100",
            (GOOD_100, MISSED_110),
            ["least_rise"],
            id="but not to the weight already lifted",
        ),
        pytest.param(BAR, "97.5", (attempt(1, 1, 100),), ["least_rise"], id="below an opener not lifted yet"),
        pytest.param(BAR, "95", (attempt(1, 1, 100, Result.PASSED),), [], id="a pass proves nothing"),
    ],
)
def test_weights_keep_the_step_the_rise_and_the_miss(
    rules: Rules, weight: str, others: tuple[Attempt, ...], breaches: list[str]
) -> None:
    one = THIRD if len(others) == 2 else SECOND
    assert keys(found(rules, weight, one, others, equipment=CHIPS)) == breaches


def test_a_record_attempt_may_use_the_record_step() -> None:
    """At least 0.5 kg over the record (from memory; para powerlifting overview, second-hand)."""
    assert found(BAR, "100.5", SECOND, (GOOD_100,), equipment=CHIPS, record=True) == []
    assert keys(found(BAR, "100.5", SECOND, (GOOD_100,), equipment=CHIPS)) == ["step", "least_rise"]
    assert keys(found(BAR, "100.25", SECOND, (GOOD_100,), equipment=CHIPS, record=True)) == [
        "stock", "step", "least_rise"
    ]  # fmt: skip


@pytest.mark.parametrize(
    ("allowed", "record", "breaches"),
    [(True, True, []), (True, False, ["fourth_for_record"]), (False, True, ["fourth_for_record"])],
)
def test_a_fourth_attempt_is_for_a_record_where_the_meet_has_one(
    allowed: bool, record: bool, breaches: list[str]
) -> None:
    """WDFPF 2007 hands out a card for a record fourth; other rulebooks have none (from memory)."""
    rules = replace(BAR, fourth_for_record=allowed)
    others = (GOOD_100, attempt(1, 2, 110, GOOD), attempt(1, 3, 115, GOOD))
    assert keys(found(rules, "120", FOURTH, others, record=record)) == breaches


def test_what_no_plate_makes_cannot_be_overridden() -> None:
    """Bar and collars 25 kg (WDFPF 2007, Equipment): nothing lighter exists, and 500 needs more plates."""
    light, heavy = found(BAR, "20", attempt(1, 1)), found(BAR, "500", attempt(1, 1))
    assert [(one.key, one.overridable) for one in light + heavy] == [("under-bar", False), ("stock", False)]
    assert str(light[0]) == "20 kg is lighter than the bare bar or belt, 25 kg. Next possible: 25."


def test_a_lifted_attempt_is_not_declared_again() -> None:
    breaches = found(BAR, "105", GOOD_100)
    assert [(one.key, one.overridable) for one in breaches] == [("lifted", False)]


@pytest.mark.parametrize(
    ("weight", "others", "sentence"),
    [
        ("103", (GOOD_100,), "103 kg is not a multiple of 2.5. Nearest: 102.5 or 105."),
        ("101", (GOOD_100,), "101 kg is not a multiple of 2.5. Next possible: 102.5."),
        ("100", (GOOD_100,), "After a good lift at 100 kg the least rise is 2.5 kg. Next possible: 102.5."),
        ("107.5", (GOOD_100, MISSED_110),
         "107.5 kg is below 110 kg, which this lifter has missed. Next possible: 110."),
    ],
)  # fmt: skip
def test_a_breach_says_what_would_be_right(weight: str, others: tuple[Attempt, ...], sentence: str) -> None:
    one = THIRD if len(others) == 2 else SECOND
    assert sentence in [str(breach) for breach in found(BAR, weight, one, others)]


@pytest.mark.parametrize(
    ("rules", "seconds", "weight", "breaches"),
    [
        pytest.param(BAR, 60, "110", [], id="within the minute (IPL 6.1.1; WDFPF 2007)"),
        pytest.param(BAR, 61, "110", ["seconds_to_hand_in"], id="after the minute (IPL 6.1.1; WDFPF 2007)"),
        pytest.param(BAR, 300, "102.5", [], id="the default itself is never late"),
        pytest.param(replace(BAR, seconds_to_hand_in=0), 900, "110", [], id="a meet without a limit"),
        pytest.param(
            replace(BAR, default=Default.FORFEITED),
            61,
            "102.5",
            ["seconds_to_hand_in"],
            id="a forfeited attempt has no default (WDFPF 2007)",
        ),
    ],
)
def test_the_time_to_hand_in_runs_out(rules: Rules, seconds: int, weight: str, breaches: list[str]) -> None:
    assert keys(found(rules, weight, SECOND, (GOOD_100,), after(seconds))) == breaches


def test_handing_in_late_says_what_stands_instead() -> None:
    """IPL Rulebook 2019, 6.1.1 and WDFPF 2007, Order of competition, disagree on what that is."""
    late = after(85)
    assert str(found(BAR, "110", SECOND, (GOOD_100,), late)[0]) == (
        "Handed in 25 s after the 60 s had run out. The default stands: 102.5 kg."
    )
    missed = (attempt(1, 1, 100, MISSED),)
    assert found(BAR, "110", SECOND, missed, late)[0].right == "The default stands: 100 kg."
    forfeit = replace(BAR, default=Default.FORFEITED)
    assert found(forfeit, "110", SECOND, missed, late)[0].right == "The attempt is forfeited."


OPENER = attempt(1, 1, 100)
FLIGHT = NOW + timedelta(minutes=4)


@pytest.mark.parametrize(
    ("rules", "moment", "breaches"),
    [
        pytest.param(BAR, Moment(now=NOW, changes=1), ["opener_changes"], id="once only (WDFPF 2007)"),
        pytest.param(BAR, Moment(now=NOW, flight_starts=FLIGHT), [], id="4 min before the first flight"),
        pytest.param(
            BAR,
            Moment(now=NOW + timedelta(seconds=61), flight_starts=FLIGHT),
            ["opener_deadline"],
            id="less than 3 min before the first flight (second-hand)",
        ),
        pytest.param(
            replace(BAR, opener_minutes=5),
            Moment(now=NOW, flight_starts=FLIGHT),
            ["opener_deadline"],
            id="5 min before the first flight (WDFPF 2007)",
        ),
        pytest.param(
            BAR, Moment(now=NOW, attempts_before=3), [], id="third-last of the flight before (Irish page)"
        ),
        pytest.param(
            BAR, Moment(now=NOW, attempts_before=2), ["opener_deadline"], id="second-last: too late"
        ),
        pytest.param(
            replace(BAR, opener_attempts_left=5),
            Moment(now=NOW, attempts_before=4),
            ["opener_deadline"],
            id="not less than 5 attempts left (WDFPF 2007)",
        ),
        pytest.param(
            replace(BAR, opener_changes=None, opener_deadline=OpenerDeadline.MINUTES, opener_minutes=10),
            Moment(now=NOW, changes=7, attempts_before=1, flight_starts=NOW + timedelta(minutes=10)),
            [],
            id="any number up to 10 min before (USSF Rules 2012)",
        ),
        pytest.param(
            replace(BAR, opener_changes=None, opener_deadline=OpenerDeadline.MINUTES, opener_minutes=10),
            Moment(now=NOW, flight_starts=NOW + timedelta(minutes=9)),
            ["opener_deadline"],
            id="none after that (USSF Rules 2012)",
        ),
        pytest.param(
            RISING,
            Moment(now=NOW, changes=1, attempts_before=0),
            [],
            id="a rising bar asks for no opener deadline",
        ),
        pytest.param(RISING, Moment(now=NOW, changes=2), ["opener_changes"], id="two changes (from memory)"),
    ],
)
def test_an_opener_may_be_changed_so_often_and_so_late(
    rules: Rules, moment: Moment, breaches: list[str]
) -> None:
    assert keys(found(rules, "105", OPENER, (), moment)) == breaches


def test_an_opener_that_nobody_has_handed_in_is_no_change() -> None:
    late = Moment(now=NOW, attempts_before=0, changes=1, flight_starts=NOW)
    assert found(BAR, "105", attempt(1, 1), (), late) == []


LAST = Moment(now=NOW, last_lift=True)
DECLARED_3RD = attempt(1, 3, 120)
BEFORE_3RD = (GOOD_100, attempt(1, 2, 110, GOOD))


@pytest.mark.parametrize(
    ("rules", "moment", "breaches"),
    [
        pytest.param(BAR, QUIET, ["changeable"], id="a third squat stands (from memory)"),
        pytest.param(BAR, LAST, [], id="the third deadlift may change (WDFPF 2007: cards for it)"),
        pytest.param(BAR, replace(LAST, changes=1), [], id="twice (WDFPF 2007: five cards)"),
        pytest.param(BAR, replace(LAST, changes=2), ["changes_each"], id="not three times (WDFPF 2007)"),
        pytest.param(BAR, replace(LAST, called=True), ["change_until"], id="not once called (from memory)"),
        pytest.param(
            replace(BAR, change_until=Until.LOADED),
            replace(LAST, called=True),
            [],
            id="until loaded, where set",
        ),
        pytest.param(
            replace(BAR, change_until=Until.LOADED), replace(LAST, loaded=True), ["change_until"], id="loaded"
        ),
        pytest.param(replace(BAR, change_until=Until.NEVER), LAST, ["change_until"], id="never, where set"),
        pytest.param(
            replace(BAR, changeable=Changeable.THIRDS), QUIET, [], id="thirds of any lift, where set"
        ),
        pytest.param(
            RISING,
            Moment(now=NOW, called=True, clock_ends=NOW + timedelta(seconds=31)),
            [],
            id="before the warning (IWF 6.5.11)",
        ),
        pytest.param(
            RISING,
            Moment(now=NOW, called=True, loaded=True, clock_ends=NOW + timedelta(seconds=30)),
            ["change_until"],
            id="the warning is the final call (IWF 6.5.12)",
        ),
        pytest.param(RISING, Moment(now=NOW, changes=2), ["changes_each"], id="two changes (from memory)"),
        pytest.param(BELT, replace(QUIET, changes=1), ["changes_each"], id="once on belts (common practice)"),
    ],
)
def test_a_later_attempt_may_be_changed_so_often_and_so_late(
    rules: Rules, moment: Moment, breaches: list[str]
) -> None:
    assert keys(found(rules, "125", DECLARED_3RD, BEFORE_3RD, moment)) == breaches


def test_a_second_attempt_may_be_changed_where_every_attempt_may() -> None:
    """From memory: second attempts stand in a rounds meet; IWF 6.5.11 lets any weight change."""
    declared = attempt(1, 2, 110)
    assert keys(found(BAR, "115", declared, (GOOD_100,), LAST)) == ["changeable"]
    assert found(RISING, "115", declared, (GOOD_100,)) == []


def test_handing_in_the_same_weight_again_is_no_change() -> None:
    late = replace(after(900), changes=9, called=True, loaded=True)
    assert found(BAR, "120", DECLARED_3RD, BEFORE_3RD, late) == []


def test_a_rising_bar_does_not_go_down() -> None:
    """From memory: the bar cannot go below what is already on it."""
    moment = Moment(now=NOW, bar_weight=Fraction(115))
    breaches = found(RISING, "112", SECOND, (GOOD_100,), moment, CHIPS)
    assert [str(one) for one in breaches] == [
        "The bar is at 115 kg and does not go down. Next possible: 115."
    ]
    assert found(RISING, "115", SECOND, (GOOD_100,), moment, CHIPS) == []
    assert found(BAR, "112.5", SECOND, (GOOD_100,), moment) == []


WEIGHTS = st.integers(0, 1400).map(lambda quarter: Fraction(quarter, 4))
RESULTS = st.sampled_from([GOOD, MISSED, Result.OPEN])


@given(
    st.sampled_from(
        [BAR, RISING, BELT, replace(BAR, below_missed=True), replace(BAR, least_rise=Fraction(0))]
    ),
    WEIGHTS,
    st.lists(st.tuples(WEIGHTS, RESULTS), max_size=2),
    WEIGHTS,
    st.booleans(),
)
def test_whatever_is_named_as_right_breaks_no_rule_itself(
    rules: Rules, weight: Fraction, before: list[tuple[Fraction, Result]], on_bar: Fraction, record: bool
) -> None:
    others = tuple(attempt(1, number, mass, result) for number, (mass, result) in enumerate(before, 1))
    one = attempt(1, len(others) + 1)
    moment = Moment(now=NOW, bar_weight=on_bar)
    breaches = check_declaration(rules, weight, one, others, moment, CHIPS, "kg", record=record)
    assume(breaches)
    for breach in breaches:
        assert breach.because.endswith(".")
        if ": " not in breach.right:
            continue
        for near in breach.right.split(": ")[1].rstrip(".").split(" or "):
            again = check_declaration(rules, Fraction(near), one, others, moment, CHIPS, "kg", record=record)
            assert again == []
