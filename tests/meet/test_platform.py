"""What is on the bar, and the change in the crew's hands: every move, every refusal, and any run of moves."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import strategies as st
from hypothesis.stateful import RuleBasedStateMachine, invariant, precondition, rule

from app.meet.platform import (
    Bar,
    BarRefused,
    Condition,
    Hand,
    found,
    hold,
    instruct,
    lifted,
    loaded,
    not_loaded,
    overtaken,
    resume,
    up_next,
)
from tests.cast import kg, stack
from tests.meet.nouns import turn

ADA, BO = turn(3, 1, 100), turn(1, 1, 110)
EMPTY = Bar(Condition.IDLE, (), None)
HAND = Hand(ADA.attempt.id, kg(100), (), stack(25, 10, "2.5"))
CHANGING = Bar(Condition.CHANGING, (), HAND)
LIFTING = Bar(Condition.LIFTING, HAND.stack, HAND)


def test_an_instruction_is_the_change_from_what_is_on_the_bar_now() -> None:
    assert instruct(EMPTY, ADA, HAND.stack) == CHANGING


def test_an_instruction_for_an_unknown_bar_says_that_nobody_knows_where_it_begins() -> None:
    unknown = Bar(Condition.IDLE, None, None)
    made = instruct(unknown, ADA, HAND.stack)
    assert made == Bar(Condition.CHANGING, None, replace(HAND, before=None))


def test_a_loaded_bar_carries_what_was_shown_and_the_instruction_stays() -> None:
    assert loaded(CHANGING) == LIFTING


@pytest.mark.parametrize("bar", [EMPTY, LIFTING, hold(CHANGING), hold(EMPTY)])
def test_only_a_change_that_is_out_can_be_confirmed(bar: Bar) -> None:
    with pytest.raises(BarRefused) as refused:
        loaded(bar)
    assert str(refused.value) == "There is no change to confirm."


def test_taking_loaded_back_gives_the_crew_the_same_change_again() -> None:
    assert not_loaded(LIFTING) == CHANGING


@pytest.mark.parametrize("bar", [EMPTY, CHANGING, hold(LIFTING)])
def test_only_a_loaded_bar_can_be_taken_back(bar: Bar) -> None:
    with pytest.raises(BarRefused) as refused:
        not_loaded(bar)
    assert str(refused.value) == "The bar is not confirmed as loaded."


def test_after_the_lift_the_bar_carries_what_was_shown_and_the_hands_are_free() -> None:
    assert lifted(LIFTING) == Bar(Condition.IDLE, HAND.stack, None)


def test_a_result_without_loaded_says_the_same_about_the_bar() -> None:
    """The table is often faster than the crew's tap: a lift that was judged was lifted from the bar as shown."""
    assert lifted(CHANGING) == Bar(Condition.IDLE, HAND.stack, None)


def test_a_result_with_no_change_out_says_nothing_about_the_bar() -> None:
    assert lifted(Bar(Condition.IDLE, stack(25), None)) == Bar(Condition.IDLE, stack(25), None)


@pytest.mark.parametrize("carries", [(), stack(25), None])
def test_whoever_looked_at_the_bar_is_believed_and_the_instruction_falls(carries) -> None:
    assert found(CHANGING, carries) == Bar(Condition.IDLE, carries, None)


def test_looking_at_the_bar_does_not_end_a_hold() -> None:
    assert found(hold(CHANGING), stack(25)) == Bar(Condition.HOLD, stack(25), None)


@pytest.mark.parametrize("bar", [EMPTY, CHANGING, LIFTING])
def test_a_hold_changes_nothing_but_the_condition(bar: Bar) -> None:
    assert hold(bar) == replace(bar, condition=Condition.HOLD)


@pytest.mark.parametrize(
    ("bar", "expected"),
    [(EMPTY, EMPTY), (CHANGING, CHANGING), (LIFTING, replace(LIFTING, condition=Condition.CHANGING))],
    ids=["idle", "changing", "lifting"],
)
def test_after_a_hold_the_same_change_goes_on_and_is_confirmed_anew(bar: Bar, expected: Bar) -> None:
    assert resume(hold(bar)) == expected


@pytest.mark.parametrize("bar", [EMPTY, CHANGING, LIFTING])
def test_ending_a_hold_that_is_over_changes_nothing(bar: Bar) -> None:
    """A late tap on “end hold” took a bar that was loaded meanwhile back to changing."""
    assert resume(bar) == bar


def test_up_is_the_first_of_the_order_until_the_bar_is_loaded_for_somebody() -> None:
    order = (BO, ADA)
    assert up_next(EMPTY, order) == BO
    assert up_next(CHANGING, order) == BO
    assert up_next(LIFTING, order) == ADA
    assert up_next(LIFTING, (BO,)) == BO
    assert up_next(EMPTY, ()) is None


@pytest.mark.parametrize(
    ("bar", "order", "expected"),
    [
        (EMPTY, (ADA,), False),
        (CHANGING, (ADA, BO), False),
        (CHANGING, (BO, ADA), True),
        (CHANGING, (turn(3, 1, 105), BO), True),
        (CHANGING, (), True),
        (LIFTING, (BO, ADA), False),
        (LIFTING, (BO, turn(3, 1, 105)), True),
        (LIFTING, (BO,), True),
    ],
    ids=[
        "no change out",
        "still the one that is wanted",
        "somebody lighter came before",
        "the weight was changed",
        "nobody is left",
        "the loaded bar is theirs whoever is lighter",
        "another weight than the loaded one",
        "whom it was loaded for is gone",
    ],
)
def test_a_change_is_overtaken_when_another_bar_is_wanted_next(bar: Bar, order, expected: bool) -> None:
    assert overtaken(bar, order) is expected


class Loading(RuleBasedStateMachine):
    """Any run of what crew and table may say. A model beside it holds only what people saw."""

    def __init__(self) -> None:
        super().__init__()
        self.bar = EMPTY
        self.shown: Hand | None = None  # the instruction as the crew's screen showed it
        self.known: tuple | None = ()  # what an onlooker would say is on the bar

    def free(self) -> bool:
        return self.bar.hand is None and self.bar.condition is Condition.IDLE

    @precondition(free)
    @rule(lot=st.integers(1, 9), faces=st.lists(st.sampled_from([25, 10, 5]), max_size=3))
    def give_the_next_change(self, lot: int, faces: list[int]) -> None:
        self.bar = instruct(self.bar, turn(lot, 1, 100), stack(*faces))
        self.shown = Hand(turn(lot, 1, 100).attempt.id, kg(100), self.known, stack(*faces))

    @rule()
    def say_loaded(self) -> None:
        if self.bar.condition is Condition.CHANGING:
            self.bar, self.known = loaded(self.bar), self.shown.stack
        else:
            with pytest.raises(BarRefused):
                loaded(self.bar)

    @rule()
    def say_not_loaded(self) -> None:
        if self.bar.condition is Condition.LIFTING:
            self.bar, self.known = not_loaded(self.bar), self.shown.before
        else:
            with pytest.raises(BarRefused):
                not_loaded(self.bar)

    @precondition(lambda self: self.bar.condition is not Condition.HOLD)
    @rule()
    def enter_a_result(self) -> None:
        self.bar = lifted(self.bar)
        self.known = self.known if self.shown is None else self.shown.stack
        self.shown = None

    @precondition(lambda self: self.bar.condition is not Condition.LIFTING)
    @rule(carries=st.sampled_from([(), stack(25), None]))
    def tell_what_is_on_the_bar(self, carries) -> None:
        self.bar, self.known, self.shown = found(self.bar, carries), carries, None

    @rule()
    def hold(self) -> None:
        self.bar = hold(self.bar)

    @rule()
    def end_the_hold(self) -> None:
        before = self.bar
        self.bar = resume(before)
        assert before.condition is Condition.HOLD or self.bar == before

    @invariant()
    def the_instruction_is_what_was_shown(self) -> None:
        assert self.bar.hand == self.shown

    @invariant()
    def the_bar_carries_what_an_onlooker_sees(self) -> None:
        assert self.bar.carries == self.known

    @invariant()
    def hands_are_off_only_a_bar_that_is_as_shown(self) -> None:
        if self.bar.condition is Condition.LIFTING:
            assert self.bar.carries == self.bar.hand.stack

    @invariant()
    def changing_means_that_there_is_a_change(self) -> None:
        assert self.bar.condition is not Condition.CHANGING or self.bar.hand is not None


TestAnyRunOfMoves = Loading.TestCase
