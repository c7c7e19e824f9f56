"""Who lifts when on a rising bar, and in rounds by the rules of the meet."""

from dataclasses import replace
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.meet.model import Attempt, Result
from app.meet.order import Turn, lifting_order
from app.meet.rising_bar import rising_order, seconds_to_start
from app.meet.rule_reading import preset_rules
from app.meet.ruled_order import ruled_order, ruled_turns
from app.meet.rules import Default, Ties
from app.meet.silence import ruled_default, stand_in
from tests.meet.nouns import attempt, lifter, short, turn

RISING = preset_rules("rising-bar")
ROUNDS = preset_rules("rounds-bar")
GOOD, MISSED, OPEN = Result.GOOD, Result.MISSED, Result.OPEN


def rising(*theirs: list[Attempt], lifted: tuple[int, ...] = ()) -> list[tuple[int, int, str]]:
    """The order of lifters 1, 2, 3 … with these attempts."""
    people = [lifter(lot) for lot in range(1, len(theirs) + 1)]
    return short(rising_order(people, dict(enumerate(theirs, 1)), RISING, lifted))


def test_the_lightest_weight_is_called_whatever_attempt_it_is() -> None:
    """From memory: the bar goes up as each lifter's next weight requires, not by rounds."""
    one = [attempt(1, 1, 80), attempt(1, 2, 84), attempt(1, 3, 88)]
    two = [attempt(2, 1, 86)]
    assert rising(one, two) == [(1, 1, "80"), (1, 2, "84"), (2, 1, "86"), (1, 3, "88")]


def test_of_equal_weights_the_lower_attempt_number_is_called_first() -> None:
    """From memory: attempt number comes right after the weight."""
    one = [attempt(1, 1, 80, GOOD), attempt(1, 2, 90)]
    two = [attempt(2, 1, 90)]
    assert rising(one, two)[:2] == [(2, 1, "90"), (1, 2, "90")]


def test_of_equal_weights_and_numbers_whoever_lifted_earlier_is_called_first() -> None:
    """IWF 6.5.8 as reprinted: the sequence of the previous attempts, the earlier lifter first."""
    one = [attempt(1, 1, 85, GOOD), attempt(1, 2, 90)]
    two = [attempt(2, 1, 80, GOOD), attempt(2, 2, 90)]
    assert rising(one, two) == [(2, 2, "90"), (1, 2, "90")]


def test_the_sequence_is_the_one_in_which_they_really_lifted() -> None:
    """IWF 6.5.8 as reprinted: sequence, not weight; a lifter may have come down to the bar after another."""
    one = [attempt(1, 1, 80, GOOD), attempt(1, 2, 90)]
    two = [attempt(2, 1, 80, GOOD), attempt(2, 2, 90)]
    first, second = one[0].id, two[0].id
    assert rising(one, two, lifted=(second, first)) == [(2, 2, "90"), (1, 2, "90")]
    assert rising(one, two, lifted=(first, second)) == [(1, 2, "90"), (2, 2, "90")]


def test_at_last_the_lower_lot_is_called_first() -> None:
    """IWF 6.5.8 as reprinted: lot or start number, the lower first."""
    assert rising([attempt(1, 1, 80)], [attempt(2, 1, 80)]) == [(1, 1, "80"), (2, 1, "80")]


def test_a_weight_nobody_handed_in_goes_up_by_a_step_and_with_the_bar() -> None:
    """A coaching page (second-hand): 1 kg more after a good lift. The bar does not go down (from memory)."""
    one = [attempt(1, 1, 80), attempt(1, 2)]
    assert rising(one) == [(1, 1, "80"), (1, 2, "81")]
    waits = [attempt(1, 1, 80, Result.PASSED), attempt(1, 2)]
    gone_on = [attempt(2, 1, 95, GOOD), attempt(2, 2, 97)]
    assert rising(waits, gone_on) == [(1, 2, "95"), (2, 2, "97")]


def test_a_declared_weight_is_never_altered_by_the_order() -> None:
    """It breaks a rule, which the check of the declaration says; the order must not show another weight."""
    one = [attempt(1, 1, 80, GOOD), attempt(1, 2, 85)]
    two = [attempt(2, 1, 95, GOOD), attempt(2, 2, 97)]
    assert rising(one, two) == [(1, 2, "85"), (2, 2, "97")]


def test_after_a_weight_that_breaks_the_rule_the_default_is_back_at_the_bar() -> None:
    """The bar does not go down (from memory): 80 after 100 is an error, and nothing builds on it."""
    one = [attempt(1, 1, 100), attempt(1, 2, 80), attempt(1, 3)]
    assert rising(one) == [(1, 1, "100"), (1, 2, "80"), (1, 3, "100")]


def test_a_lifter_following_himself_has_the_longer_time() -> None:
    """IWF 6.5.9 as reprinted: 60 s, and 120 s when following oneself."""
    assert seconds_to_start(RISING, 2, turn(1, 1, 80)) == 60
    assert seconds_to_start(RISING, 1, turn(1, 2, 81)) == 120
    assert seconds_to_start(RISING, None, turn(1, 1, 80)) == 60
    assert seconds_to_start(ROUNDS, 1, turn(1, 2, 81)) == 60


OPENERS = st.integers(40, 60)
RISES = st.none() | st.integers(0, 6)
PEOPLE = st.lists(
    st.tuples(OPENERS, RISES, RISES, st.sampled_from([OPEN, GOOD, MISSED])), min_size=1, max_size=7
)


def attempts_of(
    lot: int, opener: int, second: int | None, third: int | None, result: Result
) -> list[Attempt]:
    weight = None if second is None else opener + second
    last = None if third is None or weight is None else weight + third
    return [attempt(lot, 1, opener, result), attempt(lot, 2, weight), attempt(lot, 3, last)]


@given(PEOPLE, st.randoms())
def test_a_rising_order_calls_every_open_attempt_once_and_always_the_least_that_could_be_called(
    people: list[tuple[int, int | None, int | None, Result]], shuffle
) -> None:
    theirs = {lot: attempts_of(lot, *one) for lot, one in enumerate(people, 1)}
    lifters = [lifter(lot) for lot in theirs]
    order = rising_order(lifters, theirs, RISING)
    shuffle.shuffle(lifters)
    assert rising_order(lifters, theirs, RISING) == order

    still_open = {one.id for all_ in theirs.values() for one in all_ if one.result is OPEN}
    assert sorted(one.attempt.id for one in order) == sorted(still_open)
    for lot, all_ in theirs.items():
        assert [one.attempt.number for one in order if one.lifter.lot == lot] == [
            one.number for one in all_ if one.result is OPEN
        ]
    check_always_the_least(order, theirs)
    if all(one[3] is OPEN for one in people):
        assert [one.weight for one in order] == sorted(one.weight for one in order)


def check_always_the_least(order: tuple[Turn, ...], theirs: dict[int, list[Attempt]]) -> None:
    """No turn is called while one that is ready and goes before it waits."""
    done = sorted(
        (one.weight, one.number, lot)
        for lot, all_ in theirs.items()
        for one in all_
        if one.result is not OPEN
    )
    since = {lot: at - len(done) for at, (_, _, lot) in enumerate(done)}
    before: list[int] = []
    for at, called in enumerate(order):
        before.append(since.get(called.lifter.lot, -1000))
        since[called.lifter.lot] = at
    for at, called in enumerate(order):
        for later in range(at + 1, len(order)):
            if before[later] < at:
                assert order_key(called, before[at]) < order_key(order[later], before[later])


def order_key(one: Turn, before: int) -> tuple[Fraction, int, int, int]:
    return one.weight, one.attempt.number, before, one.lifter.lot


@given(PEOPLE)
def test_rounds_with_ties_by_lot_are_the_plain_flight_order(
    people: list[tuple[int, int | None, int | None, Result]],
) -> None:
    """Two ways to the same order, where every weight is a multiple of the step."""
    theirs = {lot: attempts_of(lot, *one) for lot, one in enumerate(people, 1)}
    lifters = [lifter(lot) for lot in theirs]
    whole = replace(ROUNDS, step=Fraction(1), least_rise=Fraction(1))
    turns = [turn for one in lifters for turn in ruled_turns(one, theirs[one.lot], whole)]
    assert ruled_order(lifters, theirs, whole) == lifting_order(turns)


def test_ties_may_keep_the_order_of_the_round_before() -> None:
    """``trade.md`` C-bis: in rounds 2 and 3 some meets keep the previous order."""
    theirs = {
        1: [attempt(1, 1, 105), attempt(1, 2, 110), attempt(1, 3, 120)],
        2: [attempt(2, 1, 100), attempt(2, 2, 110), attempt(2, 3, 120)],
    }
    people = [lifter(1), lifter(2)]
    kept = short(ruled_order(people, theirs, replace(ROUNDS, ties=Ties.SEQUENCE)))
    assert [(lot, number) for lot, number, _ in kept] == [(2, 1), (1, 1), (2, 2), (1, 2), (2, 3), (1, 3)]
    by_lot = short(ruled_order(people, theirs, ROUNDS))
    assert [(lot, number) for lot, number, _ in by_lot] == [(2, 1), (1, 1), (1, 2), (2, 2), (1, 3), (2, 3)]


def test_ties_by_the_round_before_look_at_what_was_lifted() -> None:
    theirs = {
        1: [attempt(1, 1, 105, GOOD), attempt(1, 2, 110)],
        2: [attempt(2, 1, 100, MISSED), attempt(2, 2, 110)],
    }
    rules = replace(ROUNDS, ties=Ties.SEQUENCE)
    assert short(ruled_order([lifter(1), lifter(2)], theirs, rules)) == [(2, 2, "110"), (1, 2, "110")]
    ids = (theirs[1][0].id, theirs[2][0].id)
    assert short(ruled_order([lifter(1), lifter(2)], theirs, rules, lifted=ids)) == [
        (1, 2, "110"),
        (2, 2, "110"),
    ]


def test_a_fourth_attempt_comes_after_the_third_round_and_only_when_asked_for() -> None:
    """A card for a record fourth: WDFPF 2007."""
    theirs = {
        1: [attempt(1, 3, 150, GOOD), attempt(1, 4, "152.5")],
        2: [attempt(2, 3, 200), attempt(2, 4)],
    }
    assert short(ruled_order([lifter(1), lifter(2)], theirs, ROUNDS)) == [(2, 3, "200"), (1, 4, "305/2")]


@pytest.mark.parametrize(
    ("default", "result", "by_rule", "taken_for_granted"),
    [
        pytest.param(Default.REPEAT_OR_STEP, GOOD, "102.5", "102.5", id="IPL Rulebook 2019, 6.1.1: good"),
        pytest.param(Default.REPEAT_OR_STEP, MISSED, "100", "100", id="IPL Rulebook 2019, 6.1.1: missed"),
        pytest.param(Default.STEP, MISSED, "102.5", "102.5", id="always a step more, where set"),
        pytest.param(Default.FORFEITED, GOOD, None, "102.5", id="WDFPF 2007: forfeited, but most hand in"),
        pytest.param(Default.FORFEITED, MISSED, None, "100", id="WDFPF 2007: forfeited after a miss"),
    ],
)
def test_silence_has_the_weight_that_the_rule_gives(
    default: Default, result: Result, by_rule: str | None, taken_for_granted: str
) -> None:
    rules, before = replace(ROUNDS, default=default), attempt(1, 1, 100, result)
    assert ruled_default(rules, before, Fraction(100)) == (None if by_rule is None else Fraction(by_rule))
    assert stand_in(rules, before, Fraction(100)) == Fraction(taken_for_granted)


def test_an_opener_and_a_fourth_have_no_default() -> None:
    """Common practice: an opener is handed in at the weigh-in, a fourth is asked for."""
    assert ruled_default(ROUNDS, None, None) is None
    assert ruled_default(ROUNDS, attempt(1, 3, 100, GOOD), Fraction(100)) is None


def test_a_step_after_a_record_lift_comes_back_to_a_multiple() -> None:
    """No rule text: the least multiple of 2.5 that is a whole step more than 200.5."""
    assert ruled_default(ROUNDS, attempt(1, 2, "200.5", GOOD), Fraction("200.5")) == 205


def test_a_default_rises_by_no_less_than_the_least_rise() -> None:
    """Common practice: the default must not break the rule about the rise itself."""
    rules = replace(ROUNDS, least_rise=Fraction(5))
    assert ruled_default(rules, attempt(1, 1, 100, GOOD), Fraction(100)) == 105
