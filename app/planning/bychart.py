"""The chart's stacks as a plan, and the least that any plan must cost."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np

from app.planning.arrange import inside_first, sorted_digits
from app.planning.course import comfort_bars, comfortable
from app.planning.problem import Problem
from app.planning.request import Aim, ComfortBy
from app.planning.smaller import Alphabet
from app.planning.solution import Kinds, Solution, kinds, priced


def by_chart(problem: Problem) -> Solution:
    """The chart's stack at every attempt; where it has none, the first allowed stack of the fewest plates."""
    place = {plate.face: kind for kind, plate in enumerate(problem.kit.plates)}
    stacks = []
    for share, stack in zip(problem.kit.shares, problem.charts, strict=True):
        if stack is None:
            stacks.append(_fewest(problem, share))
        else:
            stacks.append(tuple(place[face] for face in stack))
    # The chart may take more plates than any allowed stack.
    longest = max(problem.alphabet.longest, *map(len, stacks), 1)
    roomy = replace(problem, alphabet=Alphabet.of(problem.kit.kinds, longest))
    return priced(roomy, stacks, bound=plain_bound(problem))


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
