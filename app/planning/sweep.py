"""The sweep: the cheapest chain of stacks, every change going down to a smaller stack and up again."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.planning.prices import Numbers
from app.planning.smaller import Graph, Part, Places
from app.planning.watch import Watch


@dataclass(frozen=True)
class Course:
    """Attempts as indices of the graph's parts, the start (part 0) first; what each stack costs in itself
    (``fee[part]``: threading and distance to the chart); and what it takes to come from what stands on the
    bar to each stack of part 0 (``seed``; all of it belongs to the first change)."""

    graph: Graph
    attempts: tuple[int, ...]
    fee: tuple[Numbers, ...]
    seed: Numbers

    def part(self, attempt: int) -> Part:
        return self.graph.parts[self.attempts[attempt]]

    def rows(self, attempt: int) -> NDArray[np.int8]:
        """The stacks of an attempt as rows of digits."""
        return self._rows[self.attempts[attempt]]

    @cached_property
    def _rows(self) -> list[NDArray[np.int8]]:
        ends = np.concatenate([part.ends for part in self.graph.parts])
        rows = self.graph.alphabet.read(self.graph.codes[ends])
        return np.split(rows, np.cumsum([len(part.ends) for part in self.graph.parts])[:-1])


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


def least_total(course: Course, sweep: Sweep, watch: Watch) -> list[Numbers]:
    """For every attempt, the least price of reaching each of its stacks from the start (aim total)."""
    reached = [course.seed]
    for attempt in range(1, len(course.attempts)):
        watch.check()
        here = course.attempts[attempt]
        found = sweep.carry(reached[-1], course.part(attempt - 1), course.part(attempt))
        reached.append(np.minimum(found + course.fee[here], sweep.never))
    return reached


Pricer = Callable[[NDArray[Any], NDArray[Any]], Numbers]
"""Prices of changes from many stacks to one (rows of digits)."""


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
        fee = course.fee[course.attempts[attempt]][place]
        wanted = reached[attempt][place] - fee
        most = wanted if within is None else (within[0] - fee // within[1] + 1) * within[1] - 1
        stack = course.rows(attempt)[[place]]
        before, stacks = reached[attempt - 1], course.rows(attempt - 1)
        for some in _in_pieces(np.flatnonzero(before <= wanted)):
            prices = price(stacks[some], stack)
            # The way to a stack of part 0 belongs to the first change.
            change = prices + course.seed[some] if attempt == 1 else prices
            fits = (before[some] + prices == wanted) & (change <= most)
            if fits.any():
                place = int(some[np.argmax(fits)])
                break
        else:
            raise AssertionError("the sweep reached a stack that no stack before it explains")
        chain.append(place)
    return chain[::-1]


def _in_pieces(places: Places, size: int = 4096) -> Iterator[Places]:
    for begin in range(0, len(places), size):
        yield places[begin : begin + size]
