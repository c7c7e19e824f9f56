"""The sweep: the cheapest chain of stacks, every change going down to a smaller stack and up again."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from app.planning.prices import Numbers
from app.planning.smaller import Graph, Part, Places


@dataclass(frozen=True, slots=True)
class Course:
    """Attempts as indices of the graph's parts, the start first, and what each stack costs in itself
    (``fee[part]``: threading and distance to the chart)."""

    graph: Graph
    attempts: tuple[int, ...]
    fee: tuple[Numbers, ...]

    def part(self, attempt: int) -> Part:
        return self.graph.parts[self.attempts[attempt]]


class Sweep:
    """Carries the best price of all stacks of one attempt to all stacks of the next.

    Statement. Let d(a, b) be the least price of the plates that come off a and go on to reach b when the
    plates that are not touched are a smaller stack m of both: d(a, b) = min over m of off(a − m) + on(b − m).
    For ``values`` F on the stacks of one part, :meth:`carry` returns min over a of F(a) + d(a, b) for every
    stack b of another part.

    Method. The down pass goes from the longest stacks to the shortest and gives every node m the least
    F(a) + off(a − m); the up pass goes from the shortest to the longest and adds what goes on. Prices of
    plates add, whatever the way taken through the graph, so every way from a down to m costs the same and the
    two passes together try every m. This is the two-pass min-plus distance transform [1]_ on the graph of
    smaller stacks, in place of one edit distance [2]_ for each pair.

    Complexity. Linear in the nodes and edges of the two parts. Exact: whole numbers only.

    References
    ----------
    .. [1] P. Felzenszwalb, D. Huttenlocher, "Distance Transforms of Sampled Functions", Theory of Computing 8
       (2012), pages 415-428.
    .. [2] R. Wagner, M. Fischer, "The String-to-String Correction Problem", Journal of the ACM 21 (1974),
       pages 168-173.
    """

    def __init__(self, graph: Graph, off: Numbers, on: Numbers, never: int) -> None:
        self.graph = graph
        self.off = off
        self.on = on
        self.never = never
        self.value: Numbers = np.full(len(graph.codes), never, off.dtype)

    def carry(self, values: Numbers, before: Part, after: Part) -> Numbers:
        """Least F(a) + d(a, b) for every stack b of ``after``."""
        self.down(values, before)
        found = self.up(after)
        self.clear(before)
        self.clear(after)
        return found

    def down(self, values: Numbers, part: Part) -> None:
        """Give every smaller node the least price of coming down to it."""
        value = self.value
        np.minimum.at(value, part.ends, values)
        for level in reversed(part.levels[1:]):
            here = value[level.nodes]
            for way in range(level.smaller.shape[1]):
                np.minimum.at(value, level.smaller[:, way], here + self.off[level.kind[:, way]])

    def up(self, part: Part) -> Numbers:
        """Give every larger node the least price of going up to it; the prices of the part's stacks."""
        value = self.value
        for level in part.levels[1:]:
            best = (value[level.smaller] + self.on[level.kind]).min(axis=1)
            value[level.nodes] = np.minimum(value[level.nodes], best)
        return np.minimum(value[part.ends], self.never)

    def clear(self, part: Part) -> None:
        """Forget all prices."""
        for level in part.levels:
            self.value[level.nodes] = self.never


def least_total(course: Course, sweep: Sweep) -> list[Numbers]:
    """For every attempt, the least price of reaching each of its stacks from the start (aim total)."""
    reached = [np.zeros(len(course.part(0).ends), sweep.off.dtype)]
    for attempt in range(1, len(course.attempts)):
        here = course.attempts[attempt]
        found = sweep.carry(reached[-1], course.part(attempt - 1), course.part(attempt))
        reached.append(np.minimum(found + course.fee[here], sweep.never))
    return reached


Pricer = Callable[[Places, int], Numbers]
"""Prices of changes from many stacks to one (all as nodes)."""


def way_back(
    course: Course, reached: Sequence[Numbers], price: Pricer, within: tuple[int, int] | None = None
) -> list[int]:
    """One chain of the least price, as the place of its stack in each attempt's list.

    Read backwards: the stack before is the first, in canonical order, from which the price is just right and,
    with ``within`` = (limit, fold), the change measures at most the limit.
    """
    place = int(np.argmin(reached[-1]))
    chain = [place]
    for attempt in range(len(course.attempts) - 1, 0, -1):
        here = course.attempts[attempt]
        fee = course.fee[here][place]
        wanted = reached[attempt][place] - fee
        most = wanted if within is None else (within[0] - fee // within[1] + 1) * within[1] - 1
        node = int(course.part(attempt).ends[place])
        place = _first_from(
            course.part(attempt - 1), reached[attempt - 1], node, price, wanted=wanted, most=most
        )
        chain.append(place)
    return chain[::-1]


CHUNK = 4096


def _first_from(part: Part, before: Numbers, node: int, price: Pricer, *, wanted: int, most: int) -> int:
    candidates = np.flatnonzero(before <= wanted)
    for begin in range(0, len(candidates), CHUNK):
        some = candidates[begin : begin + CHUNK]
        prices = price(part.ends[some], node)
        fits = (before[some] + prices == wanted) & (prices <= most)
        if fits.any():
            return int(some[np.argmax(fits)])
    raise AssertionError("the sweep reached a stack that no stack before it explains")
