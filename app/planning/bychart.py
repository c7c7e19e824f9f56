"""The chart's stacks as a plan, and the least that any plan must cost."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np

from app.planning.arrange import inside_first, sorted_digits
from app.planning.course import comfort_bars, comfortable
from app.planning.problem import Problem
from app.planning.refusal import bad_request
from app.planning.request import Aim, ComfortBy
from app.planning.smaller import Alphabet
from app.planning.solution import Kinds, Solution, kinds, priced


def by_chart(problem: Problem) -> Solution:
    """The chart's stack at every attempt, whatever the rules about extra plates and comfort; where there is
    none, as :func:`by_rule`."""
    place = {plate.face: kind for kind, plate in enumerate(problem.kit.plates)}
    stacks = [
        _fewest(problem, share) if stack is None else tuple(place[face] for face in stack)
        for share, stack in zip(problem.kit.shares, problem.charts, strict=True)
    ]
    # The chart may take more plates than any allowed stack.
    longest = max(problem.alphabet.longest, *map(len, stacks), 1)
    roomy = replace(problem, alphabet=Alphabet.of(problem.kit.kinds, longest))
    return priced(roomy, stacks, bound=plain_bound(problem))


def by_rule(problem: Problem) -> Solution:
    """A plan at once, by all the rules: at every attempt a stack of the fewest plates, heaviest plates first.

    Raises :class:`Refusal` when comfort asks for balance, which cannot be judged without listing all orders.
    """
    if any(rule.by is ComfortBy.BALANCE for rule in problem.request.comfort):
        because = "There are too many orders to find the best balanced; allow fewer extra plates."
        raise bad_request("comfort", because)
    stacks = {share: _fewest(problem, share) for share in problem.distinct}
    return priced(problem, [stacks[share] for share in problem.kit.shares], bound=plain_bound(problem))


def _fewest(problem: Problem, share: int) -> Kinds:
    vectors = problem.vectors[share]
    rows = sorted_digits(problem.alphabet, vectors, inside_first(problem.kit, problem.request))
    if all(rule.by is not ComfortBy.BALANCE for rule in problem.request.comfort):
        rows = rows[comfortable(problem, comfort_bars(problem, share), rows)]
    return kinds(rows[[int(np.argmin(np.count_nonzero(rows, axis=1)))]])[0]


def plain_bound(problem: Problem) -> int:
    """What no plan is below, in steps of the measure: each weight differs from the one before by so much."""
    start = sum(problem.kit.mass[kind] for kind in problem.kit.start)
    steps = [problem.least_change(a, b) for a, b in pairwise([start, *problem.kit.shares])]
    return max(steps, default=0) if problem.request.aim is Aim.WORST else sum(steps)
