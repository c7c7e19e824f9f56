"""Hand lists: what comes off and goes on, for every access."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.loading.change import HandList, apply, hand_list
from app.loading.equipment import Access

FACES = [Fraction(face) for face in ("25", "20", "10", "5", "2.5")]
any_stack = st.lists(st.sampled_from(FACES), max_size=7).map(tuple)


def stack(*faces: str) -> tuple[Fraction, ...]:
    return tuple(Fraction(face) for face in faces)


def test_the_contracts_example_takes_one_plate_off_and_puts_two_on() -> None:
    hands = hand_list(stack("25", "10", "1.25"), stack("25", "10", "2.5", "1.25"), Access.OUTER_END)
    assert hands == HandList(stack("1.25"), (2,), stack("2.5", "1.25"), (2, 3))


def test_off_is_outermost_first_and_on_innermost_first() -> None:
    hands = hand_list(stack("25", "5", "2.5"), stack("20", "10"), Access.OUTER_END)
    assert hands == HandList(stack("2.5", "5", "25"), (2, 1, 0), stack("20", "10"), (0, 1))


def test_a_chain_open_at_both_ends_keeps_one_unbroken_run() -> None:
    hands = hand_list(stack("5", "25", "10", "20"), stack("25", "10", "2.5"), Access.BOTH_ENDS)
    assert hands == HandList(stack("20", "5"), (3, 0), stack("2.5"), (2,))


def test_in_a_cradle_any_plate_can_stay() -> None:
    hands = hand_list(stack("25", "20", "10", "5"), stack("25", "10", "2.5", "5"), Access.ANYWHERE)
    assert hands == HandList(stack("20"), (1,), stack("2.5"), (2,))


def test_of_equally_many_plates_the_heavier_stay() -> None:
    hands = hand_list(stack("5", "25"), stack("25", "5"), Access.ANYWHERE)
    assert (hands.off, hands.on) == (stack("5"), stack("5"))


def test_another_worth_keeps_other_plates() -> None:
    before, after = stack("2.5", "5", "25"), stack("25", "2.5", "5")
    by_mass = {face: int(face * 2) for face in before}
    assert hand_list(before, after, Access.ANYWHERE).off == stack("25")
    assert hand_list(before, after, Access.ANYWHERE, by_mass).off == stack("5", "2.5")


@pytest.mark.parametrize("access", Access)
@given(before=any_stack, after=any_stack)
def test_a_hand_list_done_on_the_stack_before_gives_the_stack_after(access, before, after) -> None:
    hands = hand_list(before, after, access)
    assert apply(before, hands) == after
    assert tuple(before[place] for place in hands.off_at) == hands.off
    assert tuple(after[place] for place in hands.on_at) == hands.on


@pytest.mark.parametrize("access", Access)
@given(before=any_stack, after=any_stack)
def test_the_same_way_back_handles_as_many_plates(access, before, after) -> None:
    there, back = hand_list(before, after, access), hand_list(after, before, access)
    assert sorted(there.off + there.on) == sorted(back.off + back.on)


@given(stack=any_stack, access=st.sampled_from(Access))
def test_the_same_stack_needs_no_hands(stack, access) -> None:
    assert hand_list(stack, stack, access) == HandList((), (), (), ())


def test_a_hand_list_that_does_not_fit_is_refused() -> None:
    with pytest.raises(ValueError, match="not where the list says"):
        apply(stack("25"), HandList(stack("20"), (0,), (), ()))
    with pytest.raises(ValueError, match="nothing inside"):
        apply(stack("25"), HandList((), (), stack("20"), (3,)))
