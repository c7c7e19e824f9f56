"""How far the plan looks: this round, the rounds after it, and the first round of what follows on the same bar."""

from fractions import Fraction

import pytest

from app.meet.horizon import Programme, after, horizon
from app.meet.model import Flight, Lift, Result
from tests.meet.nouns import STEP, attempt, lifter, short

SQUAT, BENCH, DIP = (
    Lift(1, "Squat", 0, implement_id=1, step=STEP),
    Lift(2, "Bench press", 1, implement_id=1, step=STEP),
    Lift(3, "Dip", 2, implement_id=2, step=STEP),
)
FLIGHT_A, FLIGHT_B = Flight(1, "A", 0), Flight(2, "B", 1)


def openers(lift_id: int, **weights: int) -> list:
    """Three attempts for each lifter (``l3=100``: lot 3), the first at this weight."""
    return [
        attempt(int(name[1:]), number, weight if number == 1 else None, lift_id=lift_id)
        for name, weight in weights.items()
        for number in (1, 2, 3)
    ]


def programme(*attempts, lifts=(SQUAT, BENCH, DIP), flights=(FLIGHT_A, FLIGHT_B)) -> Programme:
    """Lots 1 and 2 in flight A, 3 and 4 in flight B."""
    lifters = tuple(lifter(lot, 1 if lot < 3 else 2) for lot in (4, 2, 3, 1))
    return Programme(lifts, flights, lifters, tuple(attempts))


def anything(_: Fraction) -> bool:
    return True


def test_after_a_flight_comes_the_next_one_and_then_the_next_lift() -> None:
    """WPC and GPA rule 5: flight A does all rounds of a lift, then flight B, then the next lift."""
    meet = programme(lifts=(BENCH, SQUAT), flights=(FLIGHT_B, FLIGHT_A))
    assert after(meet, 1, 1) == (2, 1)
    assert after(meet, 2, 1) == (1, 2)
    assert after(meet, 1, 2) == (2, 2)
    assert after(meet, 2, 2) is None


def test_the_plan_looks_over_all_rounds_and_at_the_next_flights_openers() -> None:
    meet = programme(*openers(1, l1=100, l2=90, l3=150, l4=140))
    assert short(horizon(meet, 1, 1, anything)) == [
        (2, 1, "90"),
        (1, 1, "100"),
        (2, 2, "185/2"),
        (1, 2, "205/2"),
        (2, 3, "95"),
        (1, 3, "105"),
        (4, 1, "140"),
        (3, 1, "150"),
    ]


def test_after_the_last_flight_the_plan_looks_at_the_next_lifts_openers_on_the_same_bar() -> None:
    meet = programme(*openers(1, l3=150), *openers(2, l1=60, l2=50, l3=70))
    assert short(horizon(meet, 2, 1, anything)) == [
        (3, 1, "150"),
        (3, 2, "305/2"),
        (3, 3, "155"),
        (2, 1, "50"),
        (1, 1, "60"),
    ]


def test_the_plan_does_not_look_across_a_change_of_the_implement() -> None:
    """The belt comes out empty, whatever the bar was left with."""
    meet = programme(*openers(2, l3=70), *openers(3, l1=20))
    assert [turn.attempt.lift_id for turn in horizon(meet, 2, 2, anything)] == [2, 2, 2]


def test_the_plan_ends_with_the_session() -> None:
    meet = programme(*openers(3, l3=20))
    assert short(horizon(meet, 2, 3, anything)) == [(3, 1, "20"), (3, 2, "45/2"), (3, 3, "25")]


def test_what_has_been_lifted_is_not_planned_again() -> None:
    meet = programme(attempt(1, 1, 100, Result.GOOD), attempt(1, 2, 110, Result.MISSED), attempt(1, 3, 110))
    assert short(horizon(meet, 1, 1, anything)) == [(1, 3, "110")]


def test_a_following_opener_that_has_been_passed_is_not_looked_at() -> None:
    meet = programme(attempt(3, 1, 150, Result.PASSED), attempt(3, 2, 160), *openers(1, l4=140))
    assert short(horizon(meet, 1, 1, anything)) == [(4, 1, "140")]


def test_a_weight_that_no_plates_make_is_left_out_and_the_rest_is_planned() -> None:
    meet = programme(*openers(1, l1=100))
    assert short(horizon(meet, 1, 1, lambda weight: weight != Fraction("102.5"))) == [
        (1, 1, "100"),
        (1, 3, "105"),
    ]


@pytest.mark.parametrize("flight_id", [1, 2])
def test_a_flight_with_nobody_in_it_has_an_empty_plan(flight_id: int) -> None:
    assert horizon(programme(lifts=(SQUAT,)), flight_id, 1, anything) == ()
