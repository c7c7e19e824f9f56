"""A request too large for its time or memory gets a plan and a true bound, never a crash or a hang."""

from dataclasses import replace
from fractions import Fraction

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from app.loading.equipment import Access, Equipment, Implement, Order, Plate
from app.planning import (
    Aim,
    Bound,
    Budget,
    Comfort,
    ComfortBy,
    Measure,
    PlanRequest,
    Refusal,
    answer_document,
    plan,
)
from app.planning.depart import aimed
from tests.planning.checker import checked
from tests.planning.strategies import requests

FACES = ["25", "20", "15", "10", "5", "2.5", "1.25", "0.5", "0.25"]


def belt(*targets: str, **rules) -> PlanRequest:
    plates = tuple(
        Plate(Fraction(face), 3, Fraction(20), Fraction(100 + 9 * at)) for at, face in enumerate(FACES)
    )
    equipment = Equipment(Implement(Fraction(0), 1), None, plates)
    return PlanRequest(equipment=equipment, targets=tuple(map(Fraction, targets)), order=Order.ANY, **rules)


def ticking(step: float = 1.0):
    """A clock that jumps with every look."""
    now = 0.0

    def clock() -> float:
        nonlocal now
        now += step
        return now

    return clock


@given(requests(comfort=()), st.integers(0, 12))
def test_a_clock_that_runs_out_at_any_moment_leaves_a_right_plan_and_a_true_bound(request, looks) -> None:
    try:
        best = plan(request)
    except Refusal:
        assume(False)
    hurried = plan(request, Budget(seconds=looks + 0.5, monotonic=ticking()))
    checked(request, hurried, rules=True)
    if hurried.proof == "optimal":
        assert aimed(request, hurried) == aimed(request, best)
    else:
        assert isinstance(hurried.proof, Bound)
        if request.limit is None:
            assert hurried.proof.value <= aimed(request, best) <= aimed(request, hurried)


@given(requests(comfort=(), limit=None), st.sampled_from([0, 1000, 20_000, 100_000]))
def test_a_memory_too_small_leaves_a_right_plan_and_a_true_bound(request, memory_bytes) -> None:
    try:
        best = plan(request)
        cramped = plan(request, Budget(memory_bytes=memory_bytes))
    except Refusal:
        assume(False)
    checked(request, cramped, rules=True)
    if cramped.proof == "optimal":
        assert aimed(request, cramped) == aimed(request, best)
    else:
        assert cramped.proof.value <= aimed(request, best) <= aimed(request, cramped)


@pytest.mark.parametrize("aim", Aim)
@pytest.mark.parametrize("measure", Measure)
def test_a_belt_round_of_a_million_orders_is_still_proved(aim: Aim, measure: Measure) -> None:
    request = belt("83.75", "96.25", "97.5", "111.25", aim=aim, measure=measure, access=Access.BOTH_ENDS)
    found = plan(request)
    assert found.proof == "optimal"
    checked(request, found)


def test_a_bound_is_shown_in_the_answer() -> None:
    hurried = plan(belt("83.75", "96.25"), Budget(seconds=0, monotonic=ticking()))
    assert answer_document(hurried)["proof"] == {"bound": "2"}


def test_stacks_too_many_to_list_still_have_a_plan() -> None:
    """Sixty kinds and many extra plates: more count vectors than any memory holds."""
    plates = tuple(Plate(Fraction(n, 4), 20) for n in range(1, 61))
    request = PlanRequest(
        equipment=Equipment(Implement(Fraction(0), 1), None, plates),
        targets=(Fraction(100), Fraction(110)),
        extra_plates=12,
    )
    found = plan(request)
    assert isinstance(found.proof, Bound)
    checked(request, found)


def test_comfort_that_would_need_every_order_is_refused_politely_when_there_are_too_many() -> None:
    request = replace(belt("83.75", "96.25"), extra_plates=9)
    with pytest.raises(Refusal, match="allow fewer") as refused:
        plan(replace(request, comfort=(Comfort(ComfortBy.BALANCE),)), Budget(memory_bytes=10_000_000))
    assert refused.value.code == "bad-request"
