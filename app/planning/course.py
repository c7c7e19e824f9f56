"""From a prepared problem to the course that the sweep runs over."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.arrange import (
    Family,
    comfortable_families,
    counts_of,
    families,
    inside_first,
    leading_thickness,
    one_order,
    order_matters,
    rules_by_counts,
    sorted_digits,
)
from app.planning.comfort import comfort_values, misaligned
from app.planning.prices import Numbers
from app.planning.problem import Problem
from app.planning.request import Access, ComfortBy, Order
from app.planning.smaller import build_graph
from app.planning.sweep import Course
from app.planning.watch import Watch


def stack_course(problem: Problem, watch: Watch, listed: Sequence[Family] | None = None) -> Course:
    """The course over every allowed stack of every weight, or over those listed."""
    kit, request, alphabet = problem.kit, problem.request, problem.alphabet
    if listed is None:
        watch.room(problem.how_many_stacks() * LISTED_BYTES)
        vectors = [problem.vectors[share] for share in problem.distinct]
        listed = families(kit, request, alphabet, vectors)
    start = (alphabet.write(start_row(problem)), np.array([len(kit.start)]))
    return _course(problem, request.access, start, listed, np.zeros(1, problem.prices.dtype), watch)


def sorted_course(problem: Problem, watch: Watch) -> Course:
    """The course over one stack for each count vector, under the request's own access: some chains only."""
    alphabet = problem.alphabet
    whole = count_course(problem, watch, bound=True)
    stacks = [(whole.graph.codes[part.ends], whole.graph.length[part.ends]) for part in whole.graph.parts]
    start = (alphabet.write(start_row(problem)), np.array([len(problem.kit.start)]))
    seed = np.zeros(1, problem.prices.dtype)
    return _course(problem, problem.request.access, start, stacks[1:], seed, watch)


def counts_are_enough(problem: Problem) -> bool:
    """Whether the best chain of count vectors gives the best chain of stacks.

    So it is with access anywhere when only the counts matter: from any stack, keep what the next counts share
    with it and put the other plates where the rule lets them stand (:mod:`app.planning.inplace`); that
    handles the plain difference of the counts, and no change can handle less. It is so too when rims or
    threading count and what is on the bar stands with the widest inside: keep every stack so, which is also
    the most comfortable order. Balance depends on the order in other ways.
    """
    request = problem.request
    if request.access is not Access.ANYWHERE or request.order is Order.HEAVIEST_INSIDE:
        return False
    if any(rule.by is ComfortBy.BALANCE for rule in request.comfort):
        return False
    return not order_matters(request) or obeys(problem, problem.kit.start, Order.WIDEST_INSIDE)


def count_course(problem: Problem, watch: Watch, *, bound: bool = False) -> Course:
    """The course over count vectors, each written as one stack, as if any plate could be moved.

    Its best chain is a lower bound for every order and access (then, with ``bound``, the start counts as if
    it obeyed the order), and exact where :func:`counts_are_enough`.
    """
    kit, request, alphabet = problem.kit, problem.request, problem.alphabet
    inside = inside_first(kit, request)
    rules = rules_by_counts(request)[leading_thickness(request) :]
    listed = one_order(kit, request, alphabet, [problem.vectors[share] for share in problem.distinct])
    stacks = comfortable_families(kit, alphabet, listed, rules)
    left, seed = (problem.start, np.zeros(1, problem.prices.dtype)) if bound else start_left(problem)
    codes = alphabet.write(sorted_digits(alphabet, left, inside))
    order = np.argsort(codes)
    start = (codes[order], left.sum(axis=1)[order])
    return _course(problem, Access.ANYWHERE, start, stacks, seed[order], watch)


LISTED_BYTES = 60  # of one stack while all are listed
Bars = list[tuple[ComfortBy, int]]


def comfort_bars(problem: Problem, share: int) -> Bars:
    """What each comfort rule allows at most for a share, without listing an order: the rules one after another
    on the stacks with the widest inside (see :func:`app.planning.arrange.inside_first`). Not for balance."""
    inside = inside_first(problem.kit, problem.request)
    return set_bars(problem, sorted_digits(problem.alphabet, problem.vectors[share], inside))[0]


def set_bars(problem: Problem, rows: NDArray[Any]) -> tuple[Bars, NDArray[np.bool_]]:
    """What each comfort rule allows at most, one rule after another, and which rows keep to all."""
    bars: Bars = []
    kept = np.ones(len(rows), np.bool_)
    for rule in problem.request.comfort[leading_thickness(problem.request) :]:
        values, unit = comfort_values(problem.kit, rows, rule.by)
        most = int(values[kept].min()) + int(rule.slack // unit)
        bars.append((rule.by, most))
        kept &= values <= most
    return bars, kept


def comfortable(problem: Problem, bars: Bars, rows: NDArray[Any]) -> NDArray[np.bool_]:
    """Which rows of digits keep to every bar."""
    good = np.ones(len(rows), np.bool_)
    for by, most in bars:
        good &= comfort_values(problem.kit, rows, by)[0] <= most
    return good


def _course(
    problem: Problem,
    access: Access,
    start: Family,
    listed: Sequence[Family],
    seed: Numbers,
    watch: Watch,
) -> Course:
    graph = build_graph(problem.alphabet, access, [start, *listed], watch)
    rows = problem.alphabet.read(np.concatenate([codes for codes, _ in listed]))
    shares = np.repeat(np.arange(len(listed)), [len(codes) for codes, _ in listed])
    fees = fees_of(problem, np.array(problem.distinct)[shares], rows)
    cuts = np.flatnonzero(np.diff(shares)) + 1
    return Course(graph, problem.attempts, (np.zeros_like(seed), *np.split(fees, cuts)), seed)


def fees_of(problem: Problem, shares: NDArray[np.int64], rows: NDArray[Any]) -> Numbers:
    """Threading and distance to the chart of rows of digits, each of which makes its share."""
    fees = problem.nearness(shares, counts_of(rows, problem.kit.kinds))
    if problem.prices.thread:
        fees = fees + misaligned(problem.kit, rows).astype(fees.dtype) * problem.prices.packed_thread()
    return fees


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
            if obeys(problem, stack, problem.request.order):
                gone = sum(problem.prices.off[kind] for kind in problem.kit.start)
                gone -= sum(problem.prices.off[kind] for kind in stack)
                found[tuple(np.bincount(stack, minlength=problem.kit.kinds).tolist())] = gone
            else:
                smaller |= {stack[:place] + stack[place + 1 :] for place in range(len(stack))}
        waiting = smaller
    vectors = np.array(list(found), np.int64).reshape(len(found), problem.kit.kinds)
    return vectors, np.array([int(price) for price in found.values()], problem.prices.dtype)


def obeys(problem: Problem, kinds: tuple[int, ...], order: Order) -> bool:
    """Whether a stack of kinds obeys an order."""
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
