"""Who lifts when. Rules as read in the rulebooks named beside each test."""

from fractions import Fraction
from itertools import pairwise

from hypothesis import given
from hypothesis import strategies as st

from app.meet.model import Attempt, Lifter, Result
from app.meet.order import Turn, lifting_order, without_opener
from app.meet.rule_reading import preset_rules
from app.meet.ruled_order import ruled_order, ruled_turns
from app.meet.silence import stand_in
from tests.meet.nouns import STEP, attempt, lifter, short, turn

ROUNDS_BAR = preset_rules("rounds-bar")


def default_weight(before: Attempt | None, weight: Fraction | None, step: Fraction) -> Fraction | None:
    """What stands in by the rules of a rounds meet with a bar."""
    return stand_in(ROUNDS_BAR.for_step(step), before, weight)


def turns_of(one: Lifter, attempts: list[Attempt], step: Fraction) -> list[Turn]:
    """What a lifter still has to lift by those rules."""
    return ruled_turns(one, attempts, ROUNDS_BAR.for_step(step))


def flight_order(lifters: list[Lifter], attempts: dict, step: Fraction) -> tuple[Turn, ...]:
    """The order by those rules."""
    return ruled_order(lifters, attempts, ROUNDS_BAR.for_step(step))


def test_a_round_goes_up_in_weight() -> None:
    """WDFPF 2007, Order of competition: the announcer orders by weight."""
    turns = [turn(1, 1, 120), turn(2, 1, 100), turn(3, 1, "112.5")]
    assert short(lifting_order(turns)) == [(2, 1, "100"), (3, 1, "225/2"), (1, 1, "120")]


def test_the_next_round_begins_when_the_last_one_is_over_however_heavy_it_was() -> None:
    """The rounds system: all first attempts, then all second ones (WDFPF 2007, Order of competition)."""
    turns = [turn(1, 2, 90), turn(2, 1, 200), turn(1, 3, 80), turn(3, 2, 210)]
    assert short(lifting_order(turns)) == [(2, 1, "200"), (1, 2, "90"), (3, 2, "210"), (1, 3, "80")]


def test_of_two_equal_weights_the_lower_lot_lifts_first() -> None:
    """WDFPF 2007: "by weight and if needed by lot number"; that the lower goes first is common practice."""
    turns = [turn(10, 1, 100), turn(9, 1, 100), turn(2, 1, 100)]
    assert short(lifting_order(turns)) == [(2, 1, "100"), (9, 1, "100"), (10, 1, "100")]


def test_after_a_good_lift_the_default_is_one_step_more() -> None:
    """IPL Rulebook 2019, 6.1.1: nothing handed in after a good lift means 2.5 kg more."""
    assert default_weight(attempt(1, 1, 100, Result.GOOD), Fraction(100), STEP) == Fraction("102.5")


def test_after_a_miss_the_default_is_the_same_weight() -> None:
    """IPL Rulebook 2019, 6.1.1: nothing handed in after a failed lift means the same weight."""
    assert default_weight(attempt(1, 1, 100, Result.MISSED), Fraction(100), STEP) == 100


def test_after_a_pass_the_default_is_the_same_weight() -> None:
    """No published rule; a pass proves nothing, so the careful reading is that of a miss."""
    assert default_weight(attempt(1, 1, 100, Result.PASSED), Fraction(100), STEP) == 100


def test_an_opener_has_no_default() -> None:
    """An opener is handed in at the weigh-in (common practice): there is nothing to derive it from."""
    assert default_weight(None, None, STEP) is None


def test_body_weight_alone_is_a_weight_like_any_other() -> None:
    """Belt lifts begin at 0 kg: nothing on the belt is not the same as nothing handed in."""
    attempts = [attempt(1, 1, 0, Result.GOOD), attempt(1, 2), attempt(1, 3)]
    turns = turns_of(lifter(1), attempts, Fraction("1.25"))
    assert [(one.weight, one.assumed) for one in turns] == [(Fraction("1.25"), True), (Fraction("2.5"), True)]


def test_undeclared_attempts_stand_in_at_their_default_and_say_so() -> None:
    attempts = [attempt(1, 1, 100), attempt(1, 2), attempt(1, 3)]
    turns = turns_of(lifter(1), attempts, STEP)
    assert [(one.attempt, one.lifter, one.weight, one.assumed) for one in turns] == [
        (attempts[0], lifter(1), Fraction(100), False),
        (attempts[1], lifter(1), Fraction("102.5"), True),
        (attempts[2], lifter(1), Fraction(105), True),
    ]


def test_a_default_builds_on_what_was_declared_after_it() -> None:
    attempts = [attempt(1, 1, 100, Result.MISSED), attempt(1, 2), attempt(1, 3, 110)]
    turns = turns_of(lifter(1), attempts, STEP)
    assert [(one.attempt.number, one.weight, one.assumed) for one in turns] == [
        (2, Fraction(100), True),
        (3, Fraction(110), False),
    ]


def test_a_passed_attempt_is_no_turn_and_the_next_one_stays_at_its_weight() -> None:
    attempts = [attempt(1, 1, 100, Result.GOOD), attempt(1, 2, 110, Result.PASSED), attempt(1, 3)]
    assert short(turns_of(lifter(1), attempts, STEP)) == [(1, 3, "110")]


def test_an_attempt_passed_before_it_was_handed_in_counts_at_its_default() -> None:
    attempts = [attempt(1, 1, 100, Result.GOOD), attempt(1, 2, None, Result.PASSED), attempt(1, 3)]
    assert short(turns_of(lifter(1), attempts, STEP)) == [(1, 3, "205/2")]


def test_without_an_opener_a_lifter_is_in_no_order_and_somebody_is_told() -> None:
    lifters = [lifter(3), lifter(1), lifter(2), lifter(4)]
    attempts = {
        1: [attempt(1, 1), attempt(1, 2), attempt(1, 3)],
        2: [attempt(2, 1, 100), attempt(2, 2)],
        3: [attempt(3, 1), attempt(3, 2)],
        4: [attempt(4, 1, None, Result.PASSED), attempt(4, 2, 120)],
    }
    assert without_opener(lifters, attempts) == (lifter(1), lifter(3))
    assert short(flight_order(lifters, attempts, STEP)) == [
        (2, 1, "100"),
        (2, 2, "205/2"),
        (4, 2, "120"),
    ]


def test_a_lifter_without_any_attempt_is_left_out() -> None:
    assert flight_order([lifter(1)], {}, STEP) == ()


weights = st.integers(0, 12).map(lambda steps: 100 + steps * STEP)
all_turns = st.lists(
    st.builds(turn, st.integers(1, 40), st.integers(1, 3), weights),
    unique_by=lambda one: (one.lifter.lot, one.attempt.number),
)


@given(turns=all_turns, random=st.randoms(use_true_random=False))
def test_the_order_is_the_same_turns_sorted_whatever_order_they_came_in(turns, random) -> None:
    order = lifting_order(turns)
    assert sorted(map(repr, order)) == sorted(map(repr, turns))
    keys = [(one.attempt.number, one.weight, one.lifter.lot) for one in order]
    assert all(before < after for before, after in pairwise(keys))
    shuffled = list(turns)
    random.shuffle(shuffled)
    assert lifting_order(shuffled) == order


results = st.sampled_from([Result.GOOD, Result.MISSED])


@given(weight=weights, done=st.lists(results, max_size=2))
def test_defaults_never_go_down_and_rise_only_after_a_good_lift(weight, done) -> None:
    """The lifter's own course, followed by hand: good adds a step, a miss repeats (IPL Rulebook 2019, 6.1.1)."""
    attempts = [attempt(1, number) for number in (1, 2, 3)]
    now = weight
    for place, result in enumerate(done):
        attempts[place] = attempt(1, place + 1, now, result)
        now = now + STEP if result is Result.GOOD else now
    if not done:
        attempts[0] = attempt(1, 1, weight)
    turns = turns_of(lifter(1), attempts, STEP)
    assert [one.weight for one in turns] == [now + STEP * place for place in range(3 - len(done))]
