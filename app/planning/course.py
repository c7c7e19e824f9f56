"""From a prepared problem to the course that the sweep runs over."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from app.planning.arrange import (
    Family,
    comfortable_family,
    counts_of,
    family,
    inside_first,
    leading_thickness,
    order_matters,
    sorted_digits,
)
from app.planning.comfort import misaligned
from app.planning.prices import Numbers
from app.planning.problem import Problem
from app.planning.request import Access, Order
from app.planning.smaller import build_graph
from app.planning.sweep import Course


def stack_course(problem: Problem) -> Course:
    """The course over every allowed stack of every weight."""
    kit, request, alphabet = problem.kit, problem.request, problem.alphabet
    families = [family(kit, request, alphabet, problem.vectors[share]) for share in problem.distinct]
    start = (alphabet.write(start_row(problem)), np.array([len(kit.start)]))
    return _course(problem, request.access, start, families, np.zeros(1, problem.prices.dtype))


def count_course(problem: Problem) -> Course:
    """The course over count vectors, each written as one stack, as if any plate could be moved.

    Exact where :func:`app.planning.arrange.one_order_is_enough` says so, and a lower bound everywhere: where
    the order matters to comfort or threading, both are left out.
    """
    kit, request, alphabet = problem.kit, problem.request, problem.alphabet
    inside = inside_first(kit, request.order)
    # Where the order matters, comfort is left out of what is only a lower bound.
    rules = [] if order_matters(request) else request.comfort[leading_thickness(request) :]
    families = []
    for share in problem.distinct:
        codes = np.sort(alphabet.write(sorted_digits(alphabet, problem.vectors[share], inside)))
        families.append(comfortable_family(kit, alphabet, codes, rules))
    left, seed = start_left(problem)
    codes = alphabet.write(sorted_digits(alphabet, left, inside))
    order = np.argsort(codes)
    start = (codes[order], left.sum(axis=1)[order])
    threaded = not order_matters(request)
    return _course(problem, Access.ANYWHERE, start, families, seed[order], threaded=threaded)


def _course(
    problem: Problem,
    access: Access,
    start: Family,
    families: Sequence[Family],
    seed: Numbers,
    *,
    threaded: bool = True,
) -> Course:
    fees: list[Numbers] = [np.zeros(len(seed), problem.prices.dtype)]
    for share, (codes, _) in zip(problem.distinct, families, strict=True):
        fees.append(fee_of(problem, share, problem.alphabet.read(codes), threaded=threaded))
    graph = build_graph(problem.alphabet, access, [start, *families])
    return Course(graph, problem.attempts, tuple(fees), seed)


def fee_of(problem: Problem, share: int, rows: NDArray[np.int8], *, threaded: bool = True) -> Numbers:
    """Threading and distance to the chart of rows of digits that make a share."""
    fee = problem.nearness(share, counts_of(rows, problem.kit.kinds))
    if problem.prices.thread and threaded:
        fee = fee + misaligned(problem.kit, rows).astype(fee.dtype) * problem.prices.packed_thread()
    return fee


def start_row(problem: Problem) -> NDArray[np.int64]:
    """What is on the bar, as one row of digits."""
    digits = np.zeros((1, problem.alphabet.longest), np.int64)
    digits[0, : len(problem.kit.start)] = np.array(problem.kit.start, np.int64) + 1
    return digits


def start_left(problem: Problem) -> tuple[NDArray[np.int64], Numbers]:
    """What can be left of the start as part of an allowed stack: different count vectors of the largest
    subsequences that obey the order, and the price of taking the rest off.

    What stands on the bar need not obey the order (then no stack may keep all of it). Smaller subsequences
    need not be listed: taking more off prices the same in one step or two.
    """
    found: dict[tuple[int, ...], int] = {}
    waiting = {problem.kit.start}
    while waiting:
        smaller = set()
        for stack in waiting:
            if obeys(problem, stack):
                gone = sum(problem.prices.off[kind] for kind in problem.kit.start)
                gone -= sum(problem.prices.off[kind] for kind in stack)
                found[tuple(np.bincount(stack, minlength=problem.kit.kinds).tolist())] = gone
            else:
                smaller |= {stack[:place] + stack[place + 1 :] for place in range(len(stack))}
        waiting = smaller
    vectors = np.array(list(found), np.int64).reshape(len(found), problem.kit.kinds)
    return vectors, np.array([int(price) for price in found.values()], problem.prices.dtype)


def obeys(problem: Problem, kinds: tuple[int, ...]) -> bool:
    """Whether a stack of kinds obeys the request's order."""
    order = problem.request.order
    if order is Order.ANY:
        return True
    if order is Order.HEAVIEST_INSIDE:
        return list(kinds) == sorted(kinds)
    wide = [problem.kit.diameter[kind] for kind in kinds]
    falls = [inner > outer for inner, outer in pairwise(wide)]
    if order is Order.NO_VALLEY and True in falls:
        wide = wide[falls.index(True) :]
    elif order is Order.NO_VALLEY:
        return True
    return all(inner >= outer for inner, outer in pairwise(wide))
