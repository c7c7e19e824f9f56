"""One question, one answer: which stack for every weight, proved best."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from app.planning.answer import Plan, slowest, summed
from app.planning.arrange import Family, counts_of, sorted_family
from app.planning.budget import Budget
from app.planning.compose import compose
from app.planning.counts import Ints
from app.planning.distance import Distance
from app.planning.limits import Limits
from app.planning.prices import Numbers
from app.planning.problem import Problem, prepare
from app.planning.refusal import bad_request
from app.planning.request import Access, Aim, Order, PlanRequest
from app.planning.smaller import build_graph
from app.planning.sweep import Course, Sweep, least_total, way_back


def plan(request: PlanRequest, budget: Budget | None = None) -> Plan:  # noqa: ARG001 - watched soon
    """The plan that asks least of the crew, with its proof. Raises :class:`Refusal` when there is none."""
    _only_yet(request)
    problem = prepare(request)
    rows, kept = solve_by_sweep(problem)
    changes = compose(request, problem.stacks(rows))
    return Plan(
        changes=changes,
        total=summed(changes),
        worst=slowest(changes),
        chart=problem.chart,
        proof="optimal",
        limit_kept=kept,
    )


def _only_yet(request: PlanRequest) -> None:
    """What the planner does not do yet is refused by name."""
    if request.order is not Order.HEAVIEST_INSIDE:
        raise bad_request("order", f"The order {request.order.value} cannot be planned yet.")
    if request.access is not Access.OUTER_END:
        raise bad_request("access", f"The access {request.access.value} cannot be planned yet.")
    for key in ("comfort", "thread_s", "limit"):
        if getattr(request, key):
            raise bad_request(key, f"{key!r} cannot be planned yet.")


def solve_by_sweep(problem: Problem) -> tuple[Ints, bool | None]:
    """Rows of digits of the best chain, one for each target, and whether the limit was kept."""
    course = make_course(problem, _families(problem))
    prices, limit, kept = problem.prices, problem.limit(), None
    limits = Limits(course, prices, prices.never)
    price = Distance(problem.alphabet, course.graph.codes, problem.request.access, prices.off, prices.on)
    sweep = Sweep(course.graph, prices.off, prices.on, prices.never)
    reached = least_total(course, sweep)
    chain = way_back(course, reached, price)
    if limit is not None or problem.request.aim is Aim.WORST:
        worst = slowest_measure(course, chain, price, prices.fold)
        kept = None if limit is None else worst <= limit or limits.can_keep(limit)
        if limit is None or worst > limit:
            within = limit if kept and limit is not None else limits.least(worst)
            chain = way_back(course, limits.least_total(within), price, (within, prices.fold))
    nodes = [course.part(t).ends[place] for t, place in enumerate(chain)]
    return problem.alphabet.read(course.graph.codes[nodes])[1:].astype(np.int64), kept


def slowest_measure(course: Course, chain: Sequence[int], price: Distance, fold: int) -> int:
    """The measure of the slowest change of a chain."""
    worst = 0
    for attempt in range(1, len(chain)):
        before = course.part(attempt - 1).ends[[chain[attempt - 1]]]
        after = int(course.part(attempt).ends[chain[attempt]])
        fee = course.fee[course.attempts[attempt]][chain[attempt]]
        worst = max(worst, int(price(before, after)[0] // fold + fee // fold))
    return worst


def make_course(problem: Problem, families: Sequence[Family]) -> Course:
    """The graph over the start and the families of every different share, with the fees of the stacks."""
    alphabet, kit = problem.alphabet, problem.kit
    digits = np.zeros((1, alphabet.longest), np.int64)
    digits[0, : len(kit.start)] = np.array(kit.start, np.int64) + 1
    start = (alphabet.write(digits), np.array([len(kit.start)]))
    fees: list[Numbers] = [np.zeros(1, problem.prices.dtype)]
    for share, (codes, _) in zip(problem.distinct, families, strict=True):
        counts = counts_of(alphabet.read(codes), kit.kinds)
        fees.append(problem.nearness(share, counts))
    graph = build_graph(alphabet, problem.request.access, [start, *families])
    return Course(graph, problem.attempts, tuple(fees))


def _families(problem: Problem) -> list[Family]:
    inside_first = range(problem.kit.kinds)
    return [
        sorted_family(problem.alphabet, problem.vectors[share], inside_first) for share in problem.distinct
    ]
