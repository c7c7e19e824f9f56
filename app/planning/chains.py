"""The best chain through a course: aim total or worst, with or without a limit, always exact."""

from __future__ import annotations

from collections.abc import Sequence

from app.loading.equipment import Access
from app.planning.distance import Distance
from app.planning.limits import Limits
from app.planning.problem import Problem
from app.planning.request import Aim
from app.planning.sweep import Course, Sweep, least_total, way_back
from app.planning.watch import Watch


def best_chain(
    problem: Problem, course: Course, access: Access, watch: Watch
) -> tuple[list[int], bool | None]:
    """Nodes of the best chain through a course, the start first, and whether the asked limit is kept.

    Aim total: the sweep. Under a limit: the sweep, if its chain keeps to it anyway; else the sweep among the
    changes within the limit, or within the least limit that a chain can keep. Aim worst: within that least.
    """
    prices, limit, kept = problem.prices, problem.limit(), None
    limits = Limits(course, prices, prices.never, watch)
    price = Distance(access, prices.off, prices.on)
    sweep = Sweep(course.graph, prices.off, prices.on, prices.never)
    chain = way_back(course, least_total(course, sweep, watch), price)
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
        before = course.rows(attempt - 1)[[chain[attempt - 1]]]
        after = course.rows(attempt)[[chain[attempt]]]
        fee = course.fee[course.attempts[attempt]][chain[attempt]]
        seed = course.seed[chain[0]] if attempt == 1 else 0
        worst = max(worst, int((seed + price(before, after)[0]) // fold + fee // fold))
    return worst
