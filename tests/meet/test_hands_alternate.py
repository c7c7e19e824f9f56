"""One loader at a racked bar: ends in turns, and whether the bar would turn over."""

from dataclasses import replace
from fractions import Fraction
from functools import cache

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.loading.equipment import Collar, Equipment, Implement, Plate, Stack
from app.meet.hands_alternate import HandOrder, Move, alternate, caution, in_words
from app.meet.tipping import Balance, Rests, balance, balance_of, hung, moments
from tests.meet.nouns import KG_SET, bar

RACK = Rests(Fraction(1100))  # 1.10 m between the bar rests: from memory


def end(*faces: str) -> Stack:
    return tuple(Fraction(face) for face in faces)


def one_sided(bar_mass: str, face: str, thickness: str, count: int, apart: str) -> tuple[Fraction, Fraction]:
    """Moments in kg m with so many equal plates on one end only."""
    plate = Plate(Fraction(face), 20, Fraction(thickness))
    rests = Rests(Fraction(apart))
    equipment = Equipment(Implement(Fraction(bar_mass), 2), None, (plate,))
    heavy = hung(equipment, rests, (plate.face,) * count)
    assert heavy is not None
    turning, holding = moments(equipment.implement.mass, rests.apart_mm / 2, heavy)
    return turning / 1000, holding / 1000


def test_the_textbook_bar_on_two_supports() -> None:
    """V43: a 2.00 m bar on supports a fifth from each end, 15.0 kg at its very end: 15.0 × 0.4 = 10.0 × 0.6."""
    turning, holding = moments(Fraction(10), Fraction(600), [(Fraction(15), Fraction(1000))])
    assert (turning, holding) == (6000, 6000)
    assert balance_of(turning, holding) is Balance.TIPS
    heavier = moments(Fraction("10.1"), Fraction(600), [(Fraction(15), Fraction(1000))])
    assert balance_of(*heavier) is Balance.LITTLE_MARGIN


def test_a_plate_just_outside_the_support_is_held() -> None:
    """V44: 20 kg bar of 2.3 m, 20 kg disc 0.05 m outside a support 0.2 m from the end: 1.0 against 19.0 kg m."""
    assert moments(Fraction(20), Fraction(950), [(Fraction(20), Fraction(1000))]) == (1000, 19000)


@pytest.mark.parametrize(
    ("bar_mass", "face", "thickness", "apart", "turning", "holding", "stays"),
    [
        pytest.param(
            "20", "25", "27", "1100", ["3.71", "8.10", "13.16"], "11.0", [True, True, False], id="V45"
        ),
        pytest.param(
            "20", "20.41", "50", "1100", ["3.27", "7.55", "12.86"], "11.0", [True, True, False], id="V46"
        ),
        pytest.param(
            "15", "20", "22.5", "1100", ["2.925", "6.30", "10.125"], "8.25", [True, True, False], id="V47"
        ),
        pytest.param(
            "20", "20.41", "50", "1070", ["3.57", "8.16", "13.78"], "10.7", [True, True, False], id="V48"
        ),
        pytest.param(
            "20", "25", "27", "1000", ["4.96", "10.60", "16.91"], "10.0", [True, False, False], id="1.00 m"
        ),
        pytest.param(
            "20", "25", "27", "900", ["6.21", "13.10", "20.66"], "9.0", [True, False, False], id="0.90 m"
        ),
        pytest.param(
            "15", "25", "27", "800", ["7.46", "15.60", "24.41"], "6.0", [False, False, False], id="0.80 m"
        ),
    ],
)
def test_one_two_and_three_plates_on_one_end(
    bar_mass: str, face: str, thickness: str, apart: str, turning: list[str], holding: str, stays: list[bool]
) -> None:
    """Computed in ``figures.md`` 7; 27 mm, 22.5 mm and 1.10 m from memory. The first of V48 computed here."""
    for count, (moment, held) in enumerate(zip(turning, stays, strict=True), 1):
        found = one_sided(bar_mass, face, thickness, count, apart)
        assert abs(found[0] - Fraction(moment)) < Fraction("0.011")
        assert found[1] == Fraction(holding)
        assert (balance_of(*found) is not Balance.TIPS) is held


THICK = {"25": "27", "20": "22.5", "15": "21.5", "10": "21", "5": "21", "2.5": "16", "1.25": "12"}
MEASURED = replace(
    KG_SET,
    plates=tuple(Plate(Fraction(face), 12, Fraction(mm)) for face, mm in THICK.items()),
    collar=Collar(Fraction("2.5"), Fraction(50)),
)


def test_the_heavier_end_is_looked_for_on_both_sides() -> None:
    three = end("25", "25", "25")
    assert balance(MEASURED, RACK, three, ()) is Balance.TIPS
    assert balance(MEASURED, RACK, (), three) is Balance.TIPS
    assert balance(MEASURED, RACK, three, end("25")) is Balance.STAYS


def test_the_collar_far_out_counts() -> None:
    """Figures 7: the collar further out raises the moment."""
    stack = end("25", "25", "10", "2.5")
    assert balance(MEASURED, RACK, stack, ()) is Balance.LITTLE_MARGIN
    assert balance(MEASURED, RACK, stack, (), (True, False)) is Balance.TIPS


def test_without_a_thickness_nothing_is_claimed() -> None:
    assert balance(KG_SET, RACK, end("25"), ()) is None


def test_the_ends_are_taken_in_turns_with_as_little_walking_as_can_be() -> None:
    """``trade.md`` E: write the OFF list as alternating ends when only one loader is present."""
    plain = bar(("25", 4), ("10", 2), ("5", 2), collar=None)
    found = alternate(plain, (end("25", "10"), end("25", "10")), end("25", "5"))
    assert in_words(found.steps) == ("left: 10 off", "right: 10 off", "right: 5 on", "left: 5 on")
    assert (found.apart, found.within) == (10, True)


def test_the_collars_come_off_first_and_go_on_last() -> None:
    found = alternate(KG_SET, (end("20"), end("20")), end("25"))
    assert [(one.side, one.move, one.face) for one in found.steps] == [
        ("left", Move.OFF, None),
        ("right", Move.OFF, None),
        ("right", Move.OFF, 20),
        ("left", Move.OFF, 20),
        ("left", Move.ON, 25),
        ("right", Move.ON, 25),
        ("right", Move.ON, None),
        ("left", Move.ON, None),
    ]


def test_no_change_is_no_step() -> None:
    found = alternate(KG_SET, (end("20"), end("20")), end("20"), RACK)
    assert (found.steps, found.apart, caution(found, "kg")) == ((), 0, None)


def test_after_a_misload_the_ends_are_brought_level() -> None:
    found = alternate(KG_SET, (end("25", "15", "2.5"), end("25", "15", "1.25")), end("25", "15", "2.5"))
    assert {one.side for one in found.steps} == {"right"}
    assert found.within


def test_where_one_loader_cannot_keep_the_ends_near_it_is_said() -> None:
    """Never more than one big plate: two 25s against an empty end are past it before the first step."""
    found = alternate(KG_SET, (end("25", "25"), ()), ())
    assert (found.within, found.apart) == (False, 50)
    assert caution(found, "kg") == (
        "The ends differ by 50 kg on the way, more than one big plate. "
        "Get a second person, or take the bar down first."
    )


def test_a_light_bar_on_narrow_supports_needs_a_second_person() -> None:
    """Figures 7: a 15 kg bar on supports 0.80 m apart holds not one 25 kg plate."""
    light = replace(MEASURED, implement=Implement(Fraction(15), 2), collar=None)
    found = alternate(light, (end("25"), end("25")), (), Rests(Fraction(800)))
    assert (found.within, found.balance, found.tips_at) == (True, Balance.TIPS, 0)
    said = caution(found, "kg")
    assert said is not None
    assert said.startswith("One loader alone must not do this")
    wide = alternate(light, (end("25"), end("25")), (), RACK)
    assert (wide.balance, caution(wide, "kg")) == (Balance.STAYS, None)


def test_little_margin_asks_for_a_hand() -> None:
    """Figures 7: 7.46 against 8.0 kg m."""
    plain = replace(MEASURED, collar=None)
    found = alternate(plain, (end("25"), end("25")), (), Rests(Fraction(800)))
    assert found.balance is Balance.LITTLE_MARGIN
    assert (
        caution(found, "kg")
        == "The bar stays with little to spare: keep a hand on the heavy end, nobody near it."
    )


def test_a_belt_has_no_two_ends() -> None:
    belt = bar(("20", 1), mass="0", collar=None, ends=1)
    with pytest.raises(ValueError, match="one stack"):
        alternate(belt, ((), ()), end("20"))


STACKS = st.lists(st.sampled_from([Fraction(face) for face in THICK]), max_size=5).map(
    lambda faces: tuple(sorted(faces, reverse=True))
)


def stacks_on_the_way(found: HandOrder, before: tuple[Stack, Stack]) -> list[tuple[Stack, Stack]]:
    """Both ends after every step, done by hand: only the outermost comes off."""
    ends = {"left": list(before[0]), "right": list(before[1])}
    seen = [before]
    for step in found.steps:
        if step.face is not None and step.move is Move.OFF:
            assert ends[step.side].pop() == step.face
        elif step.face is not None:
            ends[step.side].append(step.face)
        seen.append((tuple(ends["left"]), tuple(ends["right"])))
    return seen


@given(STACKS, STACKS, st.booleans())
def test_ends_that_were_alike_are_never_more_than_one_plate_apart(
    before: Stack, after: Stack, collars: bool
) -> None:
    equipment = MEASURED if collars else replace(MEASURED, collar=None)
    found = alternate(equipment, (before, before), after)
    seen = stacks_on_the_way(found, (before, before))
    assert seen[-1] == (after, after)
    big = max((*before, *after), default=Fraction(0))
    for left, right in seen:
        assert abs(len(left) - len(right)) <= 1
        assert abs(sum(left) - sum(right)) <= big


@given(STACKS, STACKS, STACKS)
def test_the_greatest_difference_is_the_least_of_all_ways_to_take_turns(
    left: Stack, right: Stack, after: Stack
) -> None:
    """Every interleaving tried, for ends that may be unequal."""
    plain = replace(MEASURED, collar=None)
    found = alternate(plain, (left, right), after)
    seen = stacks_on_the_way(found, (left, right))
    assert seen[-1] == (after, after)
    assert max(abs(sum(one) - sum(other)) for one, other in seen) == found.apart

    moves = [own_course(left, after), own_course(right, after)]

    @cache
    def least(one: int, other: int) -> Fraction:
        here = abs(moves[0][one] - moves[1][other])
        rest = [least(one + 1, other)] if one + 1 < len(moves[0]) else []
        rest += [least(one, other + 1)] if other + 1 < len(moves[1]) else []
        return max(here, min(rest)) if rest else here

    assert found.apart == least(0, 0)


def own_course(before: Stack, after: Stack) -> list[Fraction]:
    """The mass of one end along its own off and on list."""
    shared = 0
    while shared < min(len(before), len(after)) and before[shared] == after[shared]:
        shared += 1
    down = [sum(before[:at], Fraction(0)) for at in range(len(before), shared - 1, -1)]
    return down + [sum(after[:at], Fraction(0)) for at in range(shared + 1, len(after) + 1)]
