"""Every faster way to the best plan agrees with the plain sweep over all stacks, to the last tie-break."""

from dataclasses import replace
from fractions import Fraction

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from app.planning import Access, Aim, Budget, Comfort, ComfortBy, Order, PlanRequest, Refusal
from app.planning.hard import Hunt
from app.planning.listed import list_comfortable
from app.planning.problem import Problem, prepare
from app.planning.solution import Solution
from app.planning.watch import Watch
from app.planning.ways import by_counts, by_stays, by_sweep, counts_are_enough, sorted_only, stays_apply
from tests.planning.strategies import a_fifth, requests

FREE = [order for order in Order if order is not Order.HEAVIEST_INSIDE]
WATCH = Watch(Budget())


def prepared(request: PlanRequest) -> Problem:
    assume(request.targets)
    try:
        return prepare(request, WATCH)
    except Refusal:
        assume(False)
        raise


def same(problem: Problem, one: Solution, other: Solution) -> None:
    assert one.bound is None
    if problem.request.aim is Aim.WORST or one.kept is False:
        assert one.worst == other.worst
    assert (one.total, one.kept) == (other.total, other.kept)


@given(requests(access=Access.ANYWHERE, most_targets=6))
def test_count_vectors_are_enough_where_any_plate_can_be_moved(request: PlanRequest) -> None:
    problem = prepared(request)
    assume(counts_are_enough(problem))
    same(problem, by_counts(problem, WATCH), by_sweep(problem, WATCH))


@pytest.mark.parametrize("order", FREE)
def test_nested_stays_find_the_least_total_of_a_sleeve(order: Order) -> None:
    @a_fifth()
    @given(
        requests(order=order, access=Access.OUTER_END, aim=Aim.TOTAL, comfort=(), limit=None, most_targets=7)
    )
    def holds(request: PlanRequest) -> None:
        problem = prepared(request)
        assert stays_apply(problem)
        same(problem, by_stays(problem, WATCH), by_sweep(problem, WATCH))

    holds()


@pytest.mark.parametrize("access", Access)
@pytest.mark.parametrize("order", FREE)
def test_the_guided_sweep_finds_the_best_chain_however_narrow_it_starts(order: Order, access: Access) -> None:
    @a_fifth()
    @given(requests(order=order, access=access, most_targets=6), st.sampled_from([1, 3, 1000]))
    def holds(request: PlanRequest, width: int) -> None:
        assume(all(rule.by is not ComfortBy.BALANCE for rule in request.comfort))
        problem = prepared(request)
        hunt = Hunt(problem, WATCH, most_stacks=100_000, first_width=width)
        same(problem, hunt.best(sorted_only(problem, WATCH)), by_sweep(problem, WATCH))

    holds()


@given(
    requests(comfort=(Comfort(ComfortBy.BALANCE, Fraction(3)), Comfort(ComfortBy.RIMS, Fraction(20)))),
    st.sampled_from(FREE),
)
def test_balance_is_judged_by_listing_and_hunted_all_the_same(request: PlanRequest, order: Order) -> None:
    problem = prepared(replace(request, order=order))
    listed = list_comfortable(problem, WATCH)
    best = by_sweep(problem, WATCH)
    same(problem, by_sweep(problem, WATCH, listed.families), best)
    hunt = Hunt(problem, WATCH, most_stacks=100_000, first_width=3, bars=listed.bars)
    same(problem, hunt.best(by_sweep(problem, WATCH, listed.sampled(1))), best)


@given(requests(order=Order.ANY, access=Access.BOTH_ENDS, comfort=(), most_targets=6))
def test_a_sweep_too_narrow_to_prove_anything_gives_a_true_bound(request: PlanRequest) -> None:
    problem = prepared(request)
    found = Hunt(problem, WATCH, most_stacks=1, first_width=1).best(sorted_only(problem, WATCH))
    best = by_sweep(problem, WATCH)
    if found.bound is None:
        same(problem, found, best)
    elif request.aim is Aim.WORST:
        assert found.bound <= best.worst <= found.worst
    else:
        assert found.bound <= best.total // problem.prices.fold
        if found.kept is best.kept:
            assert best.total <= found.total
