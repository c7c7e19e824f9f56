"""The guided sweep: only stacks that can still be part of a plan as good as wanted are ever made."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.loading.equipment import Access
from app.planning.course import Bars, comfort_bars, comfortable, fees_of, start_row
from app.planning.orders import obeying
from app.planning.prices import Numbers
from app.planning.problem import Problem
from app.planning.smaller import Codes, open_places
from app.planning.sweep import Course
from app.planning.togo import ToGo, neighbours
from app.planning.watch import Watch

Places = NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class Stacks:
    """Some stacks with their count node, the least price of reaching them, and the measure spent in the change
    under way (0 where nothing limits it)."""

    codes: Codes
    nodes: Places
    price: Numbers
    spent: Numbers

    def __len__(self) -> int:
        return len(self.codes)

    def some(self, which: NDArray[Any]) -> Stacks:
        return Stacks(self.codes[which], self.nodes[which], self.price[which], self.spent[which])


def together(parts: list[Stacks]) -> Stacks:
    """All parts as one; of one stack with one measure spent, the cheapest."""
    codes, nodes, price, spent = (
        np.concatenate([getattr(part, name) for part in parts]) for name in Stacks.__slots__
    )
    order = np.lexsort((price, spent, codes))
    codes, spent = codes[order], spent[order]
    first = np.ones(len(codes), np.bool_)
    first[1:] = (codes[1:] != codes[:-1]) | (spent[1:] != spent[:-1])
    kept = order[first]
    return Stacks(codes[first], nodes[kept], price[kept], spent[first])


@dataclass
class Guided:
    """The sweep of :mod:`app.planning.sweep` without its graph, cut short by a bound on the rest.

    Statement. Among all chains whose price is at most ``most`` (and whose changes measure at most ``limit``),
    find the cheapest, or show that there is none.

    Method. Stacks are made as they are reached: plates come off level by level, then go on level by level, as
    access and order allow. A stack with counts k is dropped when its price so far and the least price to go
    from k (over count vectors, :mod:`app.planning.togo`) exceed ``most``: no chain through it can keep to
    that. Everything else is the down-and-up sweep, so the result is exact (A* pruning: Hart, Nilsson and
    Raphael 1968). With ``most`` equal to the bound of the whole plan, finding a chain proves it best.

    ``width`` keeps only so many stacks of one length, the most promising: then what is found is still a chain
    with its true price, but finding none shows nothing (``narrowed``). If nothing was narrowed, no chain within
    the limit is cheaper than ``beyond`` but for those found, and none within ``most`` has a slowest change
    between ``limit`` and ``over``.
    """

    problem: Problem
    course: Course
    to_go: ToGo
    watch: Watch
    most: int
    width: int
    limit: int | None = None
    bars: dict[int, Bars] | None = None
    narrowed: bool = False
    beyond: int = field(init=False)
    over: int = field(init=False)

    def __post_init__(self) -> None:
        self.smaller, self.larger = neighbours(self.course, self.problem.kit.kinds)
        self.beyond = self.over = self.problem.prices.never
        if self.bars is None:
            self.bars = {share: comfort_bars(self.problem, share) for share in self.problem.distinct}

    def run(self) -> list[Stacks] | None:
        """The stacks reached at every attempt, the start first; ``None`` when no chain was found."""
        alphabet, prices = self.problem.alphabet, self.problem.prices
        zero = np.zeros(1, prices.dtype)
        reached = [Stacks(alphabet.write(start_row(self.problem)), self.course.part(0).ends, zero, zero)]
        for attempt in range(1, len(self.course.attempts)):
            self.watch.check()
            found = self._rise(self._fall(reached[-1], attempt), attempt)
            if not len(found):
                return None
            reached.append(found)
        return reached

    def _cut(self, stacks: Stacks, rest: Numbers) -> Stacks:
        """Only what can still keep to the bound and, if need be, only the most promising."""
        hope = stacks.price + rest[stacks.nodes]
        good = hope <= self.most
        if not good.all():
            self.beyond = min(self.beyond, int(hope[~good].min()))
        if self.limit is not None:
            slow = stacks.spent > self.limit
            if (good & slow).any():
                self.over = min(self.over, int(stacks.spent[good & slow].min()))
            good &= ~slow
        kept = np.flatnonzero(good)
        return stacks.some(kept)

    def _narrow(self, stacks: Stacks, rest: Numbers) -> Stacks:
        if len(stacks) <= self.width:
            return stacks
        self.narrowed = True
        hope = stacks.price + rest[stacks.nodes]
        return stacks.some(np.sort(np.argsort(hope, kind="stable")[: self.width]))

    def _fall(self, stacks: Stacks, attempt: int) -> dict[int, Stacks]:
        """Everything smaller, by length."""
        alphabet, prices, access = self.problem.alphabet, self.problem.prices, self.problem.request.access
        lengths = np.count_nonzero(alphabet.read(stacks.codes), axis=1)
        rest, held = self.to_go.down[attempt], {}
        arriving = self._cut(stacks.some(np.zeros(0, np.int64)), rest)
        for length in range(int(lengths.max()), -1, -1):
            own = self._cut(stacks.some(lengths == length), rest)
            here = self._narrow(together([own, arriving]), rest)
            held[length] = here
            parts = [here.some(np.zeros(0, np.int64))]
            for place in open_places(access, length) if length else []:
                kind = alphabet.digit(here.codes, place) - 1
                gone = Stacks(
                    alphabet.without(here.codes, place),
                    self.smaller[here.nodes, kind],
                    here.price + prices.off[kind],
                    here.spent + self._counted(prices.measure_off)[kind],
                )
                parts.append(self._cut(gone, rest))
            arriving = together(parts)
        return held

    def _counted(self, measure: Numbers) -> Numbers:
        return measure if self.limit is not None else np.zeros_like(measure)

    def _rise(self, held: dict[int, Stacks], attempt: int) -> Stacks:
        """Everything larger that makes the weight of the attempt, fees paid, ready for the next change."""
        rest, longest = self.to_go.up[attempt], self.problem.alphabet.longest
        nothing = held[0].some(np.zeros(0, np.int64))
        arriving, ends = nothing, []
        for length in range(longest + 1):
            own = self._cut(held.get(length, nothing), rest)
            if attempt == 1:  # what is left of the start need not obey the order
                own = own.some(obeying(self.problem, self.problem.alphabet.read(own.codes)))
            here = self._narrow(together([own, arriving]), rest)
            ends.append(self._arrive(here, attempt))
            arriving = self._grow(here, length, rest) if length < longest else nothing
        return together(ends)

    def _grow(self, here: Stacks, length: int, rest: Numbers) -> Stacks:
        """One plate more, at every place that the access opens."""
        alphabet, prices = self.problem.alphabet, self.problem.prices
        larger = self.larger[here.nodes]
        hope = here.price[:, None] + prices.on + np.where(larger >= 0, rest[larger], prices.never)
        row, kind = np.nonzero(hope <= self.most)
        missed = hope[hope > self.most]
        if len(missed):
            self.beyond = min(self.beyond, int(missed.min()))
        parts = [here.some(np.zeros(0, np.int64))]
        for place in _new_places(self.problem.request.access, length):
            codes = alphabet.with_plate(here.codes[row], place, kind + 1)
            allowed = obeying(self.problem, alphabet.read(codes))
            spent = here.spent[row] + self._counted(prices.measure_on)[kind]
            grown = Stacks(codes, larger[row, kind], here.price[row] + prices.on[kind], spent)
            parts.append(self._cut(grown.some(allowed), rest))
        return together(parts)

    def _arrive(self, here: Stacks, attempt: int) -> Stacks:
        problem, part = self.problem, self.course.part(attempt)
        share = problem.kit.shares[attempt - 1]
        here = here.some(np.isin(here.nodes, part.ends))
        bars = self.bars[share] if self.bars else []
        here = here.some(comfortable(problem, bars, problem.alphabet.read(here.codes)))
        fee = fees_of(problem, np.full(len(here), share), problem.alphabet.read(here.codes))
        spent = here.spent + (fee // problem.prices.fold if self.limit is not None else 0)
        paid = self._cut(Stacks(here.codes, here.nodes, here.price + fee, spent), self.to_go.after[attempt])
        return Stacks(paid.codes, paid.nodes, paid.price, np.zeros_like(paid.spent))


def _new_places(access: Access, length: int) -> list[int]:
    if access is Access.OUTER_END:
        return [length]
    if access is Access.BOTH_ENDS:
        return sorted({0, length})
    return list(range(length + 1))
