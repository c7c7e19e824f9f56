"""Nested stays: the best chain on a sleeve or pin whose order is free, without listing an order."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import groupby

import numpy as np
from numpy.typing import NDArray

from app.planning.prices import Numbers
from app.planning.problem import Problem
from app.planning.request import Order
from app.planning.smaller import Graph
from app.planning.sweep import Course
from app.planning.watch import Watch

Places = NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class Insides:
    """What can lie untouched inside: count vectors, with as much of their order as the rule needs to know.

    ``child[n, k]`` is the inside n with a plate of kind k just outside it, or the number of insides where
    the rule forbids that or no weight has so many; ``apart[n, k]`` is 1 if their holes do not line up;
    ``counts[n]`` the node of the count graph; ``levels`` the insides of 0, 1, 2, … plates. Inside 0 is empty.
    """

    child: Places
    apart: Places
    counts: Places
    levels: tuple[Places, ...]

    def __len__(self) -> int:
        return len(self.counts)


def make_insides(problem: Problem, graph: Graph) -> Insides:
    """All insides that lead to some weight's count vectors, over the graph of smaller count vectors.

    Any order and no threading: the counts are enough. Otherwise the diameter of the outermost plate is kept
    too, and with no valley whether diameters have fallen yet; that decides what may stand outside.
    """
    larger = _larger(graph, problem.kit.kinds)
    wide = np.array([*problem.kit.diameter, 0], np.int64)
    order = problem.request.order
    blind = order is Order.ANY and not problem.prices.thread
    node, last, fallen = (np.zeros(1, np.int64) for _ in range(3))
    last -= 1
    levels, first, children, aparts, nodes = [np.zeros(1, np.int64)], 0, [], [], []
    while len(node):
        nodes.append(node)
        grown, width = larger[node], np.broadcast_to(wide[:-1], (len(node), problem.kit.kinds))
        known = last[:, None] >= 0
        falls = known & (width < last[:, None])
        allowed = grown >= 0
        if order is Order.WIDEST_INSIDE:
            allowed &= ~known | (width <= last[:, None])
        elif order is Order.NO_VALLEY:
            allowed &= ~((fallen[:, None] > 0) & (width > last[:, None]))
        apart = known & (np.abs(width - last[:, None]) > problem.kit.finger)
        row, kind = np.nonzero(allowed)
        keys = np.stack(
            [grown[row, kind], np.zeros_like(row) - 1 if blind else width[row, kind],
             ((fallen[row] > 0) | falls[row, kind]) * (order is Order.NO_VALLEY)], axis=1
        )  # fmt: skip
        found, which = np.unique(keys, axis=0, return_inverse=True)
        first += len(node)
        child = np.full(grown.shape, -1, np.int64)
        child[row, kind] = which.ravel() + first
        children.append(child)
        aparts.append(apart.astype(np.int64))
        levels.append(np.arange(len(found)) + first)
        node, last, fallen = found[:, 0], found[:, 1], found[:, 2]
    total = sum(map(len, nodes))
    child = np.concatenate(children)
    return Insides(
        child=np.where(child < 0, total, child),
        apart=np.concatenate(aparts),
        counts=np.concatenate(nodes),
        levels=tuple(levels[:-1]),
    )


def _larger(graph: Graph, kinds: int) -> Places:
    """``larger[n, k]``: the node of the count graph with one more of kind k, or −1."""
    larger = np.full((len(graph.codes), kinds), -1, np.int64)
    for part in graph.parts[1:]:
        for level in part.levels[1:]:
            for way in range(level.smaller.shape[1]):
                larger[level.smaller[:, way], level.kind[:, way]] = level.nodes
    return larger


class Stays:
    """Least total price over all chains of stacks, as nested stays.

    Statement. A plate's *stay* is the run of attempts from its going on to its coming off. With the outer end
    only, two plates that are on together come off in the reverse of the order in which they went on; so any
    two stays are nested or apart, the longer one inside. Conversely every family of stays that are nested or
    apart, each inside the stays that contain it, gives a sequence of stacks, and the changes between them
    handle each plate once when its stay begins and once when it ends. So the least price of a chain is the
    least price of such a family in which the plates on at attempt i are an allowed stack for its weight.

    Recurrence. Let F(i, j, K) be the least price of everything outside an inside K that lies untouched under
    the attempts i to j (the price of K itself not counted)::

        F(i, j, K) = min( F(i, m, K) + F(m + 1, j, K)              for i <= m < j,
                          F(i, j, K + p) + on(p) + off(p)          for every plate kind p allowed outside K,
                          fee(i)                                   if i = j and K makes the weight i )

    with off(p) left out where j is the last attempt: nobody takes those plates off. Proof: look at the stays
    outside K within i to j. If one of them lasts from i to j, the outermost-but-first such plate stands just
    outside K (all others are nested in it): second line. If none does and i < j, then no stay bridges
    some m, m + 1 (else the stays, nested or apart, would have one that lasts throughout): first line. Otherwise
    i = j and the stack is K: third line. The way back reads the same three lines.

    The start is an attempt before the first whose stack is given: its stays are chains of insides of the start
    and pay no on. Neighbouring attempts at one weight are one attempt, its fee counted as often: between two
    such stacks a and b, taking the one with the lower fee twice is never dearer (triangle inequality).

    Order rules. What may stand outside K depends on the diameter of the outermost plate of K at most (and on
    whether diameters have fallen yet, for no valley), so insides carry that; threading pays for every attempt
    of a stay. Comfort that looks at the order as a whole does not split so, nor does a limit on one change.

    Complexity. O(n² N (n + k)) for n attempts, N insides and k kinds, vectorised over insides and starts of
    intervals; memory O(n² N). N is the number of smaller count vectors (times diameters where the rule needs
    them), not of stacks. Whole numbers: exact. Compare the optimal-triangulation scheme of interval dynamic
    programming (Cormen, Leiserson, Rivest, Stein, Introduction to Algorithms, chapter on dynamic programming).
    """

    def __init__(self, problem: Problem, course: Course, watch: Watch) -> None:
        self.watch = watch
        self.problem = problem
        self.insides = make_insides(problem, course.graph)
        runs = [(part, len(list(run))) for part, run in groupby(course.attempts[1:])]
        self.runs = runs
        self.before = np.cumsum([0, *(times for _, times in runs)])
        self.fees = [self._fees(course, part, times) for part, times in runs]
        self.table: list[Numbers] = []

    def _fees(self, course: Course, part: int, times: int) -> Numbers:
        """The fee of every inside that makes this part's weight, ``never`` for the rest."""
        never = self.problem.prices.never
        fees = np.full(len(course.graph.codes) + 1, never, self.problem.prices.dtype)
        # Threading is paid plate by plate along the way, so only the nearness to the chart is left of the fee.
        fees[course.graph.parts[part].ends] = times * (course.fee[part] % self.problem.prices.charts)
        return np.asarray(np.minimum(np.append(fees[self.insides.counts], never), never))

    def fill(self) -> None:
        """The table: ``table[n][i, K]`` is F(i, i + n, K)."""
        self.watch.room(len(self.runs) * (len(self.runs) + 3) // 2 * (len(self.insides) + 1) * 8)
        for length in range(len(self.runs)):
            self.watch.check()
            starts = len(self.runs) - length
            if length == 0:
                best = np.stack(self.fees)
            else:
                best = self.table[0][:starts] + self.table[length - 1][1 : starts + 1]
                for cut in range(1, length):
                    both = self.table[cut][:starts] + self.table[length - 1 - cut][cut + 1 : cut + 1 + starts]
                    np.minimum(best, both, out=best)
            self.table.append(best)
            self._outside(best, length)
            np.minimum(best, self.problem.prices.never, out=best)

    def _outside(self, best: Numbers, length: int) -> None:
        """Second line of the recurrence, from the largest insides down."""
        child = self.insides.child
        for level in reversed(self.insides.levels):
            for kind in range(child.shape[1]):
                some = level[child[level, kind] < len(self.insides)]
                if len(some):
                    cost = self.stay(length, kind, some)
                    best[:, some] = np.minimum(best[:, some], best[:, child[some, kind]] + cost)

    def stay(self, length: int, kind: int, some: Places) -> Numbers:
        """The price of a stay of a kind just outside some insides, for every start of this length."""
        prices = self.problem.prices
        cost = np.full((len(self.runs) - length, 1), prices.on[kind] + prices.off[kind], prices.dtype)
        cost[-1] = prices.on[kind]
        if prices.thread:
            times = (self.before[length + 1 :] - self.before[: len(cost)])[:, None].astype(prices.dtype)
            cost = cost + times * self.insides.apart[some, kind] * prices.packed_thread()
        return cost
