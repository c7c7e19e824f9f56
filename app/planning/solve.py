"""One question, one answer: which stack for every weight, proved best."""

from __future__ import annotations

from dataclasses import replace

from app.planning.answer import Bound, Plan, slowest, summed
from app.planning.arrange import how_many_orders
from app.planning.budget import Budget
from app.planning.compose import compose
from app.planning.hard import Hunt
from app.planning.problem import Problem, prepare
from app.planning.refusal import bad_request
from app.planning.request import Access, ComfortBy, Order, PlanRequest
from app.planning.solution import Solution, priced
from app.planning.watch import OutOfTime, Watch
from app.planning.ways import by_counts, by_stays, by_sweep, counts_are_enough, sorted_only, stays_apply

FEW_STACKS = 3000
BYTES_A_STACK = 400  # of the plain sweep, smaller stacks included; more with access anywhere


def plan(request: PlanRequest, budget: Budget | None = None) -> Plan:
    """The plan that asks least of the crew, with its proof. Raises :class:`Refusal` when there is none.

    Every stack is summed again, against its weight, the stock, the sleeve and the order, before it is given
    back. What cannot be proved best within the budget comes with a bound instead.
    """
    budget = budget or Budget()
    problem = prepare(request)
    solution = _solve(problem, budget)
    changes = compose(
        request, [tuple(problem.kit.plates[kind].face for kind in stack) for stack in solution.stacks]
    )
    return Plan(
        changes=changes,
        total=summed(changes),
        worst=slowest(changes),
        chart=problem.chart,
        proof="optimal" if solution.bound is None else Bound(solution.bound * problem.prices.worth),
        limit_kept=solution.kept,
    )


def _solve(problem: Problem, budget: Budget) -> Solution:
    """The way that suits the request: all of them exact, each faster than the next where it applies."""
    watch = Watch(budget)
    if not problem.request.targets:
        return priced(problem, [])
    if counts_are_enough(problem):
        return by_counts(problem, watch)
    if stays_apply(problem):
        solution = by_stays(problem, watch)
        if solution.kept is not False:
            return solution
    stacks = how_many_stacks(problem)
    balanced = any(rule.by is ComfortBy.BALANCE for rule in problem.request.comfort)
    if stacks <= FEW_STACKS or problem.request.order is Order.HEAVIEST_INSIDE or balanced:
        return _listed(problem, stacks, budget, watch)
    return _hunted(problem, stacks, budget, watch)


def how_many_stacks(problem: Problem) -> int:
    """How many stacks the plain sweep would list, over all different weights."""
    order = problem.request.order
    return sum(how_many_orders(problem.kit, order, rows) for rows in problem.vectors.values())


def sweep_fits(problem: Problem, stacks: int, budget: Budget) -> bool:
    """Whether the plain sweep stays within the memory of the budget."""
    ways = problem.alphabet.longest if problem.request.access is Access.ANYWHERE else 2
    return stacks * (BYTES_A_STACK + 50 * ways) <= budget.memory_bytes


def _listed(problem: Problem, stacks: int, budget: Budget, watch: Watch) -> Solution:
    if not sweep_fits(problem, stacks, budget):
        raise bad_request("comfort", "There are too many orders to balance; allow fewer extra plates.")
    return by_sweep(problem, watch)


def _hunted(problem: Problem, stacks: int, budget: Budget, watch: Watch) -> Solution:
    """A bound, a chain that attains it; failing that, the plain sweep; failing that, the best chain known."""
    best = _first_known(problem, watch)
    try:
        hunt = Hunt(problem, watch, most_stacks=budget.memory_bytes // 2000)
        best = hunt.best(best)
        if best.bound is not None and sweep_fits(problem, stacks, budget):
            best = by_sweep(problem, watch)
    except OutOfTime:
        best = replace(best, bound=best.bound or 0)
    return best


def _first_known(problem: Problem, watch: Watch) -> Solution:
    """Some chain: stacks in one order only, or what a sleeve would carry, which every access can do too."""
    known = sorted_only(problem, watch)
    sleeve = replace(problem, request=replace(problem.request, access=Access.OUTER_END))
    if stays_apply(sleeve):
        nested = priced(problem, by_stays(sleeve, watch).stacks)
        known = min(known, nested, key=lambda solution: solution.total)
    return known
