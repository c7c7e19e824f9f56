"""From a chain of count vectors to stacks, leaving in place every plate that need not move."""

from __future__ import annotations

from collections import Counter
from itertools import combinations

from app.planning.arrange import order_matters
from app.planning.course import obeys
from app.planning.problem import Problem
from app.planning.request import Order


def leave_in_place(problem: Problem, chain: list[list[int]]) -> list[tuple[int, ...]]:
    """Stacks of kinds with these counts, each change handling only the difference of the counts.

    For access anywhere. From a stack that obeys the order, keep what the next counts share with it (a part of
    an allowed stack is allowed) and put every other plate just outside the outermost plate that is at least
    as wide (as heavy, where any order goes), else innermost; with no valley, the widest of all goes just
    outside the widest there is. The start may break the order; of what it shares with the first counts, the
    worthiest part that obeys is kept. Where rims or threading count, every stack has the widest inside.
    """
    stack = _best_of_start(problem, chain[0]) if chain else ()
    stacks = []
    for counts in chain:
        stack = _keep(stack, counts)
        missing = Counter(dict(enumerate(counts)))
        missing.subtract(Counter(stack))
        for kind in sorted(missing.elements()):
            stack = _insert(problem, stack, kind)
        stacks.append(stack)
    return stacks


def _keep(stack: tuple[int, ...], counts: list[int]) -> tuple[int, ...]:
    left, kept = list(counts), []
    for kind in stack:
        if left[kind]:
            left[kind] -= 1
            kept.append(kind)
    return tuple(kept)


def _insert(problem: Problem, stack: tuple[int, ...], kind: int) -> tuple[int, ...]:
    order = Order.WIDEST_INSIDE if order_matters(problem.request) else problem.request.order
    size = problem.kit.mass if order is Order.ANY else problem.kit.diameter
    at_least = size[kind]
    if order is Order.NO_VALLEY:
        at_least = min(at_least, max((size[other] for other in stack), default=0))
    place = max((place + 1 for place, other in enumerate(stack) if size[other] >= at_least), default=0)
    return (*stack[:place], kind, *stack[place:])


def _best_of_start(problem: Problem, counts: list[int]) -> tuple[int, ...]:
    start = problem.kit.start
    if obeys(problem, start, problem.request.order):
        return start
    worth = problem.prices.off + problem.prices.on
    best: tuple[int, tuple[int, ...]] = (-1, ())
    for size in range(len(start) + 1):
        for some in combinations(start, size):
            shared = _keep(some, counts)
            value = sum(int(worth[kind]) for kind in shared)
            if value > best[0] and obeys(problem, shared, problem.request.order):
                best = (value, shared)
    return best[1]
