"""The exact ways to the best plan. Each is right wherever it applies; the tests hold one against another."""

from __future__ import annotations

from collections.abc import Sequence

from app.planning.arrange import Family, counts_of
from app.planning.chains import best_chain
from app.planning.course import count_course, counts_are_enough, sorted_course, stack_course
from app.planning.inplace import leave_in_place
from app.planning.problem import Problem
from app.planning.request import Access, Aim, ComfortBy, Order
from app.planning.solution import Solution, kinds, priced
from app.planning.stays import Stays
from app.planning.unfold import best_by_stays
from app.planning.watch import Watch

__all__ = ["by_counts", "by_stays", "by_sweep", "counts_are_enough", "sorted_only", "stays_apply"]


def by_counts(problem: Problem, watch: Watch) -> Solution:
    """Choose count vectors, then leave in place what need not move: where the counts are enough."""
    course = count_course(problem, watch)
    chain, kept = best_chain(problem, course, Access.ANYWHERE, watch)
    counts = counts_of(problem.alphabet.read(course.graph.codes[chain[1:]]), problem.kit.kinds)
    return _with(priced(problem, leave_in_place(problem, counts.tolist())), kept)


def stays_apply(problem: Problem) -> bool:
    """Whether nested stays give the exact answer: a sleeve or pin, aim total, an order that leaves kinds
    free, and no comfort that looks at the order."""
    request = problem.request
    return (
        request.access is Access.OUTER_END
        and request.order is not Order.HEAVIEST_INSIDE
        and request.aim is Aim.TOTAL
        and all(rule.by is ComfortBy.THICKNESS for rule in request.comfort)
    )


def by_stays(problem: Problem, watch: Watch) -> Solution:
    """The least total by nested stays; with a limit, exact only if the limit happens to be kept."""
    return priced(problem, best_by_stays(Stays(problem, count_course(problem, watch), watch)))


def by_sweep(problem: Problem, watch: Watch, listed: Sequence[Family] | None = None) -> Solution:
    """The plain sweep over all stacks, or over those listed: always exact, as large as they are many."""
    course = stack_course(problem, watch, listed)
    chain, kept = best_chain(problem, course, problem.request.access, watch)
    return _with(priced(problem, kinds(problem.alphabet.read(course.graph.codes[chain[1:]]))), kept)


def sorted_only(problem: Problem, watch: Watch) -> Solution:
    """The best chain among stacks in one order only: a plan, not a proof. Not where balance counts."""
    course = sorted_course(problem, watch)
    chain, _ = best_chain(problem, course, problem.request.access, watch)
    return priced(problem, kinds(problem.alphabet.read(course.graph.codes[chain[1:]])))


def _with(solution: Solution, kept: bool | None) -> Solution:  # noqa: FBT001 - a fact, not a switch
    """The chain's own say about the limit is the proved one."""
    return Solution(solution.stacks, solution.total, solution.worst, None, kept)
