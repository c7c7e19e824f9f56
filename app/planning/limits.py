"""The slowest change: chains in which no single change costs more than a limit."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from app.planning.prices import Numbers, Prices
from app.planning.sweep import Course, Sweep
from app.planning.watch import Watch


@dataclass(frozen=True)
class Limits:
    """Sweeps of a course under a limit on the measure of every change (in steps of ``prices.worth``).

    A change from a to b by way of a smaller stack m measures off(a) − off(m) + on(b) − on(m) + fee(b),
    where off and on are sums over the plates of a stack: so stacks a with the same off(a) and stacks b with
    the same on(b) + fee(b) share one rule, *only by way of an m with off(m) + on(m) of at least so much*.
    One down pass for each such class of a and one up pass for each class of b is therefore exact; by mass
    there is one class of either kind, by plates ``extra_plates`` + 1. A packed price puts the measure
    first, so the cheapest m of a pair is one that keeps to the limit if any does.
    """

    course: Course
    prices: Prices
    never: int
    watch: Watch

    @cached_property
    def _measure(self) -> Sweep:
        graph = self.course.graph
        return Sweep(graph, self.prices.measure_off, self.prices.measure_on, self.never)

    @cached_property
    def _packed(self) -> Sweep:
        return Sweep(self.course.graph, self.prices.off, self.prices.on, self.never)

    @cached_property
    def _loads(self) -> tuple[Numbers, Numbers]:
        """off(m) and on(m) of every node."""
        off = np.zeros(len(self.course.graph.codes), self.prices.dtype)
        on = off.copy()
        for part in self.course.graph.parts:
            for level in part.levels[1:]:
                kind, smaller = level.kind[:, 0], level.smaller[:, 0]
                off[level.nodes] = off[smaller] + self.prices.measure_off[kind]
                on[level.nodes] = on[smaller] + self.prices.measure_on[kind]
        return off, on

    def fee(self, part: int) -> Numbers:
        """The measure that each stack of a part costs in itself: its threading."""
        return self._measured(self.course.fee[part])

    def _measured(self, packed: Numbers) -> Numbers:
        """The measure alone of packed prices."""
        return np.asarray(packed // self.prices.fold)

    def can_keep(self, limit: int) -> bool:
        """Whether some chain keeps to the limit."""
        course = self.course
        reached = self._measured(course.seed)
        for attempt in range(1, len(course.attempts)):
            self.watch.check()
            found = self._measure.carry(reached, course.part(attempt - 1), course.part(attempt))
            kept = found + self.fee(course.attempts[attempt]) <= limit
            if not kept.any():
                return False
            reached = np.where(kept, 0, self.never).astype(self.prices.dtype)
        return True

    def least(self, most: int) -> int:
        """The least limit that a chain can keep, when ``most`` is one that can be kept. Bisection: whoever
        keeps to a limit keeps to every greater one."""
        low, high = self.step_bound(), most
        while low < high:
            middle = (low + high) // 2
            if self.can_keep(middle):
                high = middle
            else:
                low = middle + 1
        return low

    def step_bound(self) -> int:
        """No chain has a slowest change below the easiest change of its hardest step."""
        bound = 0
        for attempt in range(1, len(self.course.attempts)):
            before, after = self.course.part(attempt - 1), self.course.part(attempt)
            free = np.zeros(len(before.ends), self.prices.dtype)
            free = self._measured(self.course.seed) if attempt == 1 else free
            found = self._measure.carry(free, before, after) + self.fee(self.course.attempts[attempt])
            bound = max(bound, int(found.min()))
        return bound

    def least_total(self, limit: int) -> list[Numbers]:
        """As :func:`app.planning.sweep.least_total`, over the chains that keep to the limit."""
        course = self.course
        reached = [course.seed]
        for attempt in range(1, len(course.attempts)):
            self.watch.check()
            here = course.attempts[attempt]
            found = self._carry(reached[-1], attempt, limit)
            reached.append(np.minimum(found + course.fee[here], self.never))
        return reached

    def _carry(self, values: Numbers, attempt: int, limit: int) -> Numbers:
        off, on = self._loads
        before, after = self.course.part(attempt - 1), self.course.part(attempt)
        sweep, nodes = self._packed, after.nodes()
        downs = []
        # All stacks of part 0 are what is left of the start, so they are as high as the start.
        heights = off[before.ends] + (self._measured(self.course.seed) if attempt == 1 else 0)
        for height in np.unique(heights[values < self.never]):
            sweep.down(np.where(heights == height, values, self.never), before)
            downs.append((height, sweep.value[nodes]))
            sweep.clear(before)
        found = np.full(len(after.ends), self.never, self.prices.dtype)
        kept_load = off[nodes] + on[nodes]
        tops = on[after.ends] + self.fee(self.course.attempts[attempt])
        for top in np.unique(tops):
            for height, value in downs:
                allowed = np.where(kept_load >= height + top - limit, value, self.never)
                sweep.value[nodes] = np.minimum(sweep.value[nodes], allowed)
            found = np.where(tops == top, sweep.up(after), found)
            sweep.clear(after)
        return np.asarray(found)
