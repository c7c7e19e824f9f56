"""Requests with very many orders: a bound first, then a chain that attains it."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from app.planning.course import Bars, count_course, fees_of
from app.planning.distance import Distance
from app.planning.guided import Guided, Stacks
from app.planning.limits import Limits
from app.planning.problem import Problem
from app.planning.request import Aim
from app.planning.solution import Kinds, Solution, kinds, priced
from app.planning.togo import make_to_go
from app.planning.watch import Watch


@dataclass
class Hunt:
    """The guided sweep, widened until it finds the best chain or proves that there is no better one.

    The bound over count vectors is where it starts: of the real belt rounds tried, nearly all have a chain that
    attains it, and then the first narrow sweep is the proof. When a sweep that dropped nothing for want of
    width finds none, the least price it turned away is a better bound, and the next sweep allows more.
    """

    problem: Problem
    watch: Watch
    most_stacks: int
    first_width: int = 2000
    bars: dict[int, Bars] | None = None

    def __post_init__(self) -> None:
        self.over = 0
        self.course = count_course(self.problem, self.watch, bound=True)
        self.to_go = make_to_go(self.course, self.problem.prices)
        self.limits = Limits(self.course, self.problem.prices, self.problem.prices.never, self.watch)

    def best(self, known: Solution) -> Solution:
        """The best plan by the request's aim and limit. ``known`` is any chain; the better of it and what is
        found is given back, with a bound unless it is proved best."""
        limit = self.problem.limit()
        if self.problem.request.aim is Aim.WORST:
            return self._least_worst(known, 0)
        free = self._least_total(known)
        if limit is None or free.worst <= limit:
            return free
        best, proved = self._within(limit, known if known.worst <= limit else None)
        if best is not None:
            return replace(best, bound=None if proved else self._steps(self.to_go.least), kept=True)
        if not proved:
            return replace(free, bound=self._steps(self.to_go.least), kept=False)
        slower = known if known.worst > limit else free
        return replace(self._least_worst(slower, limit + 1), kept=False)

    def floor(self) -> int:
        """What no plan's aimed figure is below, in steps of the measure, known before any search."""
        if self.problem.request.aim is Aim.WORST:
            return self.limits.step_bound()
        return self._steps(self.to_go.least)

    def _steps(self, packed: int) -> int:
        """A packed price in whole steps of the measure."""
        return packed // self.problem.prices.fold

    def _least_total(self, known: Solution) -> Solution:
        found, bound = self._widen(self.to_go.least, known.total - 1, None)
        best = known if found is None else priced(self.problem, found)
        return replace(best, bound=None if bound >= best.total else self._steps(bound))

    def _within(self, limit: int, known: Solution | None) -> tuple[Solution | None, bool]:
        """The cheapest chain whose changes keep to a limit, and whether that (or that there is none) is
        proved. ``known`` is a chain that keeps to it, if one is known."""
        if not self.limits.can_keep(limit):  # not even count vectors keep to it
            return None, True
        least = int(self.limits.least_total(limit)[-1].min())
        most = known.total - 1 if known else self.problem.prices.never - 1
        found, bound = self._widen(least, most, limit)
        best = known if found is None else priced(self.problem, found)
        return best, bound >= (best.total if best else most)

    def _least_worst(self, known: Solution, bound: int) -> Solution:
        """The chain whose slowest change is least, then its total; none has a slowest change below ``bound``."""
        limit = max(bound, self.limits.least(known.worst))
        while limit < known.worst:
            best, proved = self._within(limit, None)
            if best is not None or not proved:
                return replace(best or known, bound=None if proved else limit)
            limit = max(limit + 1, self.over)
        best, proved = self._within(known.worst, known)
        return replace(best or known, bound=None if proved else known.worst)

    def _widen(self, bound: int, most: int, limit: int | None) -> tuple[list[Kinds] | None, int]:
        """A chain of price at most ``most``, if one was found, and a price below which there is none: the
        chain is proved best if its price is not above that, and there is none if ``most`` is below it."""
        allowed, gap = bound, max(1, (most - bound) // 256)
        while bound <= most:
            guided, reached = self._guide(allowed, limit, proves=allowed == bound)
            self.over = guided.over
            if reached is not None:
                found = self._way_back(reached, limit)
                total = priced(self.problem, found).total
                return found, bound if guided.narrowed else total
            if guided.narrowed:
                return None, bound
            bound = max(allowed + 1, guided.beyond)
            allowed, gap = min(most, max(bound, allowed + gap)), gap * 4
        return None, bound

    def _guide(self, most: int, limit: int | None, *, proves: bool) -> tuple[Guided, list[Stacks] | None]:
        """A sweep wide enough to prove something; where any chain found is a proof, the first to find one."""
        width = self.first_width
        while True:
            guided = Guided(self.problem, self.course, self.to_go, self.watch, most, width, limit, self.bars)
            reached = guided.run()
            if not guided.narrowed or width >= self.most_stacks or (proves and reached is not None):
                return guided, reached
            width = min(width * 16, self.most_stacks)

    def _way_back(self, reached: list[Stacks], limit: int | None) -> list[Kinds]:
        """The stacks behind the cheapest end. A narrowed sweep may have priced a change too high; the real
        price is used, so the chain is at least as good as was found."""
        problem, prices = self.problem, self.problem.prices
        price = Distance(problem.request.access, prices.off, prices.on)
        read = problem.alphabet.read
        rows = [read(reached[-1].codes[[int(np.argmin(reached[-1].price))]])]
        for attempt in range(len(reached) - 1, 1, -1):
            before = reached[attempt - 1]
            choices = read(before.codes)
            change = price(choices, rows[-1])
            total = before.price + change
            if limit is not None:
                share = np.array([problem.kit.shares[attempt - 1]])
                fee = int(fees_of(problem, share, rows[-1])[0]) // prices.fold
                total = np.where(change // prices.fold + fee <= limit, total, prices.never)
            rows.append(choices[[int(np.argmin(total))]])
        return kinds(np.concatenate(rows[::-1]))
