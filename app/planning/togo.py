"""What the rest of the plan must cost at least, whatever the order of the plates."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from app.planning.prices import Numbers, Prices
from app.planning.sweep import Course, Sweep


@dataclass(frozen=True, slots=True)
class ToGo:
    """Lower bounds on the price still to come, for every node of a count course.

    ``after[t][c]``: after attempt t with counts c on. ``down[t][k]``, ``up[t][k]``: in the middle of the
    change to attempt t with counts k on, while plates may still come off, and once they only go on; the fee of
    attempt t included. A node from which attempt t cannot be reached holds ``never``. ``least`` bounds the
    whole plan.
    """

    after: list[Numbers]
    down: list[Numbers]
    up: list[Numbers]
    least: int


def make_to_go(course: Course, prices: Prices) -> ToGo:
    """The sweep over count vectors, run from the last attempt to the first.

    The difference of counts bounds the price of a change from below for every access and order (see
    :func:`app.planning.course.counts_are_enough`), so sums of it along the best chain of count vectors
    bound every chain of stacks. Linear in the count graph for each attempt.
    """
    # Backwards, a plate that goes on is taken off the later stack: the prices change places.
    back = Sweep(course.graph, prices.on, prices.off, prices.never)
    last = len(course.attempts) - 1
    after = [np.zeros(0, prices.dtype)] * (last + 1)
    down, up = after.copy(), after.copy()
    after[last] = np.full(len(course.graph.codes), prices.never, prices.dtype)
    after[last][course.part(last).ends] = 0
    for attempt in range(last, 0, -1):
        part, before = course.part(attempt), course.part(attempt - 1)
        fee = course.fee[course.attempts[attempt]]
        back.down(np.minimum(after[attempt][part.ends] + fee, prices.never), part)
        up[attempt] = back.value.copy()
        back.clear(part)
        nodes = before.nodes()
        back.value[nodes] = up[attempt][nodes]
        back.up(before)
        down[attempt] = np.minimum(back.value, prices.never)
        back.clear(before)
        after[attempt - 1] = down[attempt]
    start = after[0][course.part(0).ends] + course.seed if last else course.seed
    return ToGo(after, down, up, int(start.min()))


def neighbours(course: Course, kinds: int) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """``smaller[n, k]`` and ``larger[n, k]``: the node with one less or one more of kind k, or −1."""
    smaller = np.full((len(course.graph.codes), kinds), -1, np.int64)
    larger = smaller.copy()
    for part in course.graph.parts:
        for level in part.levels[1:]:
            for way in range(level.smaller.shape[1]):
                smaller[level.nodes, level.kind[:, way]] = level.smaller[:, way]
                larger[level.smaller[:, way], level.kind[:, way]] = level.nodes
    return smaller, larger
