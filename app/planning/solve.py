"""One question, one answer: which stack for every weight, proved best."""

from __future__ import annotations

from collections.abc import Sequence

from app.loading.equipment import Stack
from app.planning.answer import Plan, slowest, summed
from app.planning.arrange import counts_of, one_order_is_enough
from app.planning.budget import Budget
from app.planning.compose import compose
from app.planning.course import count_course, stack_course
from app.planning.distance import Distance
from app.planning.inplace import leave_in_place
from app.planning.limits import Limits
from app.planning.problem import Problem, prepare
from app.planning.request import Access, Aim, ComfortBy, Order, PlanRequest
from app.planning.stays import Stays
from app.planning.sweep import Course, Sweep, least_total, way_back
from app.planning.unfold import best_by_stays


def plan(request: PlanRequest, budget: Budget | None = None) -> Plan:  # noqa: ARG001 - watched soon
    """The plan that asks least of the crew, with its proof. Raises :class:`Refusal` when there is none."""
    problem = prepare(request)
    stacks, kept = _solve(problem)
    changes = compose(request, stacks)
    return Plan(
        changes=changes,
        total=summed(changes),
        worst=slowest(changes),
        chart=problem.chart,
        proof="optimal",
        limit_kept=kept,
    )


def _solve(problem: Problem) -> tuple[list[Stack], bool | None]:
    request = problem.request
    if one_order_is_enough(request) and request.order is not Order.HEAVIEST_INSIDE:
        course = count_course(problem)
        chain, kept = best_chain(problem, course, Access.ANYWHERE)
        counts = counts_of(problem.alphabet.read(course.graph.codes[chain[1:]]), problem.kit.kinds)
        kinds = leave_in_place(problem, counts.tolist())
        return [tuple(problem.kit.plates[kind].face for kind in stack) for stack in kinds], kept
    if stays_apply(problem):
        stays = Stays(problem, count_course(problem))
        return [
            tuple(problem.kit.plates[kind].face for kind in stack) for stack in best_by_stays(stays)
        ], None
    course = stack_course(problem)
    chain, kept = best_chain(problem, course, request.access)
    return problem.stacks(problem.alphabet.read(course.graph.codes[chain[1:]])), kept


def stays_apply(problem: Problem) -> bool:
    """Whether nested stays give the exact answer: a sleeve or pin, aim total, an order that leaves kinds
    free, and no comfort that looks at the order."""
    request = problem.request
    return (
        request.access is Access.OUTER_END
        and request.order is not Order.HEAVIEST_INSIDE
        and request.aim is Aim.TOTAL
        and request.limit is None
        and not any(rule.by is not ComfortBy.THICKNESS for rule in request.comfort)
    )


def best_chain(problem: Problem, course: Course, access: Access) -> tuple[list[int], bool | None]:
    """Nodes of the best chain through a course, the start first, and whether the asked limit is kept."""
    prices, limit, kept = problem.prices, problem.limit(), None
    limits = Limits(course, prices, prices.never)
    price = Distance(problem.alphabet, access, prices.off, prices.on)
    sweep = Sweep(course.graph, prices.off, prices.on, prices.never)
    chain = way_back(course, least_total(course, sweep), price)
    if limit is not None or problem.request.aim is Aim.WORST:
        worst = slowest_measure(course, chain, price, prices.fold)
        kept = None if limit is None else worst <= limit or limits.can_keep(limit)
        if limit is None or worst > limit:
            within = limit if kept and limit is not None else limits.least(worst)
            chain = way_back(course, limits.least_total(within), price, (within, prices.fold))
    return [int(course.part(t).ends[place]) for t, place in enumerate(chain)], kept


def slowest_measure(course: Course, chain: Sequence[int], price: Distance, fold: int) -> int:
    """The measure of the slowest change of a chain (places in each attempt's list)."""
    worst = 0
    for attempt in range(1, len(chain)):
        before = course.stacks(attempt - 1)[[chain[attempt - 1]]]
        after = course.stacks(attempt)[[chain[attempt]]]
        fee = course.fee[course.attempts[attempt]][chain[attempt]]
        seed = course.seed[chain[0]] if attempt == 1 else 0
        worst = max(worst, int((seed + price(before, after)[0]) // fold + fee // fold))
    return worst
