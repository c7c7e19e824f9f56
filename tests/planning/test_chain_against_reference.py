"""The chosen chain is as cheap as the slow, obvious planner's, and its answer can be checked by hand."""

import pytest
from hypothesis import given

from app.planning import Access, Aim, Order, PlanRequest, Refusal, answer_document, plan
from tests.planning import reference
from tests.planning.checker import check_answer, checked
from tests.planning.strategies import a_fifth, requests


def agree(request: PlanRequest) -> None:
    """The planner and the reference give the same figures, or both find no way."""
    expected = reference.best(request)
    if expected is None:
        with pytest.raises(Refusal) as refused:
            plan(request)
        assert refused.value.code in {"no-room", "unloadable"}
        return
    found = plan(request)
    document = answer_document(found)
    total, slowest, kept = expected
    assert check_answer(request, document) == total
    assert document["proof"] == "optimal"
    checked(request, found, rules=True)
    assert found.limit_kept is kept
    if request.aim is Aim.WORST or kept is False:
        names = {"plates": "plates", "mass": "mass", "time": "time_s"}
        assert getattr(found.worst, names[request.measure]) == slowest


@given(requests(full=False))
def test_a_sleeve_loaded_heaviest_inside_costs_what_the_slow_reference_says(request: PlanRequest) -> None:
    agree(request)


@pytest.mark.parametrize("access", Access)
@pytest.mark.parametrize("order", Order)
def test_every_order_and_access_costs_what_the_slow_reference_says(order: Order, access: Access) -> None:
    @a_fifth()
    @given(requests(order=order, access=access))
    def holds(request: PlanRequest) -> None:
        agree(request)

    holds()
