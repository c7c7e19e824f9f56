"""Flights proposed by opener and by body-weight class, with what each costs."""

from fractions import Fraction
from itertools import combinations, pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.meet.flights import Entrant, Handled, by_class, by_opener, openers_cost, propose
from app.planning import PlanRequest, plan
from tests.meet.nouns import KG_SET

LIMITS = tuple(Fraction(limit) for limit in ("59", "74", "93"))


def entrant(number: int, opener: str | None, body: str | None = None) -> Entrant:
    return Entrant(
        number, number, None if opener is None else Fraction(opener), None if body is None else Fraction(body)
    )


def test_by_opener_the_lightest_lift_together() -> None:
    four = [entrant(1, "150"), entrant(2, "60"), entrant(3, "90"), entrant(4, "140")]
    assert by_opener(four, 2) == ((2, 3), (4, 1))


def test_flights_are_as_few_and_as_even_as_can_be() -> None:
    """IPL Rulebook 2019, 6.1.2: at most 15; 31 lifters are three flights of 11, 10 and 10, not 15, 15 and 1."""
    many = [entrant(number, str(number)) for number in range(1, 32)]
    assert [len(flight) for flight in by_opener(many, 15)] == [11, 10, 10]
    assert [len(flight) for flight in by_opener(many[:15], 15)] == [15]
    assert by_opener([], 15) == ()


def test_a_lifter_without_an_opener_goes_last() -> None:
    assert by_opener([entrant(1, None), entrant(2, "200")], 14) == ((2, 1),)


def test_by_class_neighbouring_classes_stay_together() -> None:
    field = [entrant(1, "100", "57"), entrant(2, "90", "58"), entrant(3, "150", "72"), entrant(4, "160", "90"),
             entrant(5, "155", "91"), entrant(6, "200", "120")]  # fmt: skip
    assert by_class(field, LIMITS, 3) == ((2, 1, 3), (5, 4, 6))


def test_a_class_that_is_more_than_a_flight_is_split_by_opener() -> None:
    field = [entrant(number, str(200 - number), "57") for number in range(1, 6)]
    assert by_class(field, LIMITS, 4) == ((5, 4, 3), (2, 1))


def test_the_limit_belongs_to_the_lighter_class() -> None:
    """A class is up to and including its limit (common practice)."""
    field = [entrant(number, "100", body) for number, body in enumerate(("58", "59", "59.1", "60"), 1)]
    assert by_class(field, LIMITS, 2) == ((1, 2), (3, 4))


def test_a_flight_needs_room_for_somebody() -> None:
    with pytest.raises(ValueError, match="room for at least one"):
        by_opener([entrant(1, "100")], 0)


@given(
    st.lists(st.tuples(st.integers(40, 60), st.none() | st.integers(50, 100)), max_size=24), st.integers(1, 7)
)
def test_everybody_is_in_one_flight_and_no_flight_is_too_large(rows, most: int) -> None:
    field = [
        Entrant(number, number, Fraction(opener), None if body is None else Fraction(body))
        for number, (opener, body) in enumerate(rows, 1)
    ]
    for flights in (by_opener(field, most), by_class(field, LIMITS, most)):
        assert sorted(one for flight in flights for one in flight) == list(range(1, len(rows) + 1))
        assert all(1 <= len(flight) <= most for flight in flights)


@given(st.lists(st.integers(1, 5), min_size=1, max_size=7), st.integers(5, 9))
def test_classes_are_joined_in_the_best_of_all_ways(sizes: list[int], most: int) -> None:
    """Every set of cuts between classes tried: fewest flights, then the least sum of squared sizes."""
    limits = [Fraction(10 * at) for at in range(1, len(sizes) + 1)]
    field = []
    for at, size in enumerate(sizes):
        field += [entrant(len(field) + k, "100", str(10 * at + 5)) for k in range(size)]
    made = [len(flight) for flight in by_class(field, limits, most)]

    def cut(cuts: tuple[int, ...]) -> list[int]:
        bounds = [0, *cuts, len(sizes)]
        return [sum(sizes[a:b]) for a, b in pairwise(bounds)]

    ways = [cut(cuts) for count in range(len(sizes)) for cuts in combinations(range(1, len(sizes)), count)]
    allowed = [(len(way), sum(one**2 for one in way)) for way in ways if max(way) <= most]
    assert (len(made), sum(one**2 for one in made)) == min(allowed)


def test_each_proposal_carries_the_cost_it_was_asked_for() -> None:
    field = [
        entrant(1, "100", "57"),
        entrant(2, "200", "58"),
        entrant(3, "110", "90"),
        entrant(4, "210", "91"),
    ]
    openers = {one.lifter_id: one.opener or Fraction(0) for one in field}
    spreads = propose(
        field, LIMITS, 2, lambda flights: sum(openers[one[-1]] - openers[one[0]] for one in flights)
    )
    assert [(one.name, one.flights, one.cost) for one in spreads] == [
        ("By opener", ((1, 3), (2, 4)), Fraction(20)),
        ("By body-weight class", ((1, 2), (3, 4)), Fraction(200)),
    ]


def test_without_classes_there_is_one_proposal() -> None:
    assert [one.name for one in propose([entrant(1, "100")], (), 2, len)] == ["By opener"]


def test_the_cost_of_the_openers_is_what_a_plan_handles_at_both_ends() -> None:
    rounds = [[Fraction(100), Fraction(110)], [Fraction(60), Fraction(500)]]
    plans = [
        plan(PlanRequest(KG_SET, targets)).total
        for targets in ((Fraction(100), Fraction(110)), (Fraction(60),))
    ]
    assert openers_cost(PlanRequest(KG_SET, ()))(rounds) == Handled(
        plates=2 * sum(one.plates for one in plans), mass=2 * sum(one.mass for one in plans), left_out=1
    )
