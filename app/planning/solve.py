"""One question, one answer: which stack for every weight, proved best."""

from __future__ import annotations

from contextlib import suppress
from dataclasses import replace

from app.planning.answer import Bound, Plan, slowest, summed
from app.planning.budget import Budget
from app.planning.bychart import by_chart, by_rule, plain_bound
from app.planning.compose import compose
from app.planning.depart import Departure, aimed
from app.planning.hard import Hunt
from app.planning.listed import by_listing
from app.planning.problem import Problem, prepare
from app.planning.request import Access, Aim, ComfortBy, Order, PlanRequest
from app.planning.solution import Solution, priced
from app.planning.watch import OutOfTime, TooLarge, Watch
from app.planning.ways import by_counts, by_stays, by_sweep, counts_are_enough, sorted_only, stays_apply

FEW_STACKS = 3000


def plan(request: PlanRequest, budget: Budget | None = None, departure: Departure | None = None) -> Plan:
    """The plan that asks least of the crew, with its proof. Raises :class:`Refusal` when there is none.

    Every stack is summed again, against its weight, the stock, the sleeve and the order, before it is given
    back. What cannot be proved best within the budget comes with a bound instead. With a ``departure``, the
    chart's stacks are kept unless leaving them saves enough.
    """
    budget = budget or Budget()
    watch = Watch(budget)
    problem = prepare(request, watch)
    if departure is None:
        return as_plan(problem, _solve(problem, budget, watch))
    chart = as_plan(problem, by_chart(problem))
    if departure.chart_only:
        return chart
    best = as_plan(problem, _solve(problem, budget, watch))
    if departure.worth_it(best.total, chart.total):
        return best
    return replace(chart, proof=Bound(aimed(request, best)) if best.proof == "optimal" else best.proof)


def chart_plan(request: PlanRequest) -> Plan:
    """The chart's stacks, at once: right, though not the least work. For a crew that must not wait."""
    problem = prepare(request, Watch(Budget()))
    return as_plan(problem, by_chart(problem))


def as_plan(problem: Problem, solution: Solution) -> Plan:
    """A solution in the words of the answer, checked stack by stack."""
    faces = [plate.face for plate in problem.kit.plates]
    stacks = [tuple(faces[kind] for kind in stack) for stack in solution.stacks]
    changes = compose(problem.request, stacks)
    bound = solution.bound
    return Plan(
        changes=changes,
        total=summed(changes),
        worst=slowest(changes),
        chart=problem.chart,
        proof="optimal" if bound is None else Bound(bound * problem.prices.worth),
        limit_kept=solution.kept,
    )


def _solve(problem: Problem, budget: Budget, watch: Watch) -> Solution:
    """The best chain the budget allows."""
    if not problem.request.targets:
        return priced(problem, [])
    try:
        solution = _proved(problem, budget, watch)
    except (OutOfTime, TooLarge):
        solution = by_rule(problem)
    return solution if problem.whole else replace(solution, bound=plain_bound(problem))


def _proved(problem: Problem, budget: Budget, watch: Watch) -> Solution:
    """The way that suits the request: all of them exact, each faster than the next where it applies."""
    if counts_are_enough(problem):
        return by_counts(problem, watch)
    if stays_apply(problem):
        with suppress(TooLarge):
            solution = by_stays(problem, watch)
            if solution.kept is not False:
                return solution
    balanced = any(rule.by is ComfortBy.BALANCE for rule in problem.request.comfort)
    if balanced and problem.request.order is not Order.HEAVIEST_INSIDE:
        return by_listing(problem, watch, budget.memory_bytes // 2000)
    if problem.request.order is Order.HEAVIEST_INSIDE or problem.how_many_stacks() <= FEW_STACKS:
        return by_sweep(problem, watch)
    return _hunted(problem, budget, watch)


def _hunted(problem: Problem, budget: Budget, watch: Watch) -> Solution:
    """A bound, a chain that attains it; failing that, the plain sweep; failing that, the best chain known."""
    best = _first_known(problem, watch)
    hunt = Hunt(problem, watch, most_stacks=budget.memory_bytes // 2000)
    floor = hunt.floor()
    try:
        best = hunt.best(best)
        if best.bound is not None:
            best = by_sweep(problem, watch)
    except (OutOfTime, TooLarge):
        best = replace(best, bound=max(floor, best.bound or 0))
    return best


def _first_known(problem: Problem, watch: Watch) -> Solution:
    """Some chain: stacks in one order only, or what a sleeve would carry, which every access can do too."""
    known = sorted_only(problem, watch)
    sleeve = replace(problem, request=replace(problem.request, access=Access.OUTER_END, aim=Aim.TOTAL))
    if stays_apply(sleeve):
        with suppress(TooLarge):
            nested = priced(problem, by_stays(sleeve, watch).stacks)
            known = min(known, nested, key=lambda solution: solution.total)
    return known
