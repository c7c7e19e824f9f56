"""Everything the engines need of one request, prepared once."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

from app.loading.equipment import Stack
from app.planning.answer import ChartFigures
from app.planning.arrange import comfortable_vectors, how_many_orders
from app.planning.checking import check_request
from app.planning.compose import chart_figures, chart_stacks
from app.planning.counts import Ints, count_vectors, one_vector
from app.planning.kit import Kit, make_kit
from app.planning.prices import Numbers, Prices, make_prices
from app.planning.refusal import bad_request
from app.planning.request import Measure, PlanRequest
from app.planning.smaller import Alphabet
from app.planning.watch import OutOfTime, TooLarge, Watch
from app.planning.weights import refuse_weight, shares


@dataclass(frozen=True)
class Problem:
    """A request in whole numbers. ``vectors[share]`` are the allowed count vectors; ``chart_counts[share]``
    the chart's, where it has a stack; ``start`` is one row of counts. ``whole`` is false when there were too
    many count vectors to list all: then any plan is allowed, but none is proved best."""

    request: PlanRequest
    kit: Kit
    vectors: dict[int, Ints]
    charts: tuple[Stack | None, ...]
    chart: ChartFigures | None
    chart_counts: dict[int, Ints]
    start: Ints
    prices: Prices
    alphabet: Alphabet
    whole: bool

    @property
    def distinct(self) -> list[int]:
        """The different shares, ascending."""
        return sorted(self.vectors)

    @property
    def attempts(self) -> tuple[int, ...]:
        """For the start (0) and every attempt, 0 or 1 + the place of its share among the different ones."""
        place = {share: 1 + index for index, share in enumerate(self.distinct)}
        return (0, *(place[share] for share in self.kit.shares))

    def nearness(self, shares: Ints, counts: Ints) -> Numbers:
        """How many plates each row of counts would have to swap to be its share's chart: the last tie-break.

        Plates are counted whatever their order, so that every engine can add it up. Where the chart has no
        stack, all are as near.
        """
        distinct = np.array(self.distinct)
        nothing = np.zeros(self.kit.kinds, np.int64)
        charts = np.stack([self.chart_counts.get(share, nothing) for share in self.distinct])
        known = np.array([share in self.chart_counts for share in self.distinct])
        place = np.searchsorted(distinct, shares)
        apart = np.abs(counts - charts[place]).sum(axis=1) * known[place]
        return np.asarray(apart.astype(self.prices.dtype))

    def least_change(self, before: int, after: int) -> int:
        """What any change between two shares costs at least, in steps of the measure."""
        if self.request.measure is Measure.PLATES:
            return int(before != after)
        if self.request.measure is Measure.MASS:
            return int(abs(after - before) * self.kit.step // self.prices.worth)
        return 0

    def how_many_stacks(self) -> int:
        """How many stacks the plain sweep would list, over all different weights."""
        order = self.request.order
        return sum(how_many_orders(self.kit, order, rows) for rows in self.vectors.values())

    def limit(self) -> int | None:
        """The asked limit in whole steps of the measure; ``None`` when there is none to keep."""
        limit = self.request.limit
        asked = self._chart_worst() if isinstance(limit, str) else limit
        return None if asked is None else int(asked // self.prices.worth)

    def _chart_worst(self) -> Fraction | None:
        if self.chart is None:
            return None
        worst = self.chart.worst
        by = {Measure.PLATES: Fraction(worst.plates), Measure.MASS: worst.mass, Measure.TIME: worst.time_s}
        return by[self.request.measure]

    def stacks(self, rows: NDArray[Any]) -> list[Stack]:
        """Rows of digits as stacks of faces."""
        return [tuple(self.kit.plates[digit - 1].face for digit in row if digit) for row in rows.tolist()]


def prepare(request: PlanRequest, watch: Watch) -> Problem:
    """Check the request and list the count vectors. Raises :class:`Refusal` for what cannot be made."""
    check_request(request)
    kit = make_kit(request, shares(request.equipment, request.targets))
    vectors, whole = _list_vectors(kit, request, watch)
    for target, share in zip(request.targets, kit.shares, strict=True):
        if not len(vectors[share]):
            raise refuse_weight(request.equipment, target)
    vectors = {share: comfortable_vectors(kit, request, rows) for share, rows in vectors.items()}
    charts = chart_stacks(request)
    start = np.bincount(kit.start, minlength=kit.kinds)[None, :].astype(np.int64)
    chart_counts = _chart_counts(kit, charts)
    rows = [start, *vectors.values()]
    longest = np.max(np.concatenate([*rows, *(row[None, :] for row in chart_counts.values())]), axis=0)
    return Problem(
        request=request,
        kit=kit,
        vectors=vectors,
        charts=tuple(charts),
        chart=chart_figures(request, charts),
        chart_counts=chart_counts,
        start=start,
        prices=make_prices(request, kit, longest),
        alphabet=Alphabet.of(kit.kinds, max(int(row.sum(axis=1).max()) for row in rows)),
        whole=whole,
    )


def _list_vectors(kit: Kit, request: PlanRequest, watch: Watch) -> tuple[dict[int, Ints], bool]:
    """All count vectors; or, where they are too many, those with fewer extra plates, or one a weight.

    Fewer extra plates are allowed whenever more are, so what is planned with them is a plan; but comfort is
    measured against the best of all stacks, so it cannot be judged without listing them.
    """
    for extra in range(request.extra_plates, -1, -1):
        try:
            return count_vectors(kit, extra, watch), extra == request.extra_plates
        except (TooLarge, OutOfTime):
            if request.comfort:
                because = "There are too many stacks to compare their comfort; allow fewer extra plates."
                raise bad_request("extra_plates", because) from None
    if kit.room is None:
        return one_vector(kit), False
    try:  # the fewest plates that also fit are only known from listing; the memory still bounds it
        return count_vectors(kit, 0, watch.without_clock()), False
    except TooLarge:
        because = "There are too many ways to make these weights within the room."
        raise bad_request("plates", because) from None


def _chart_counts(kit: Kit, charts: list[Stack | None]) -> dict[int, Ints]:
    found = {}
    for share, stack in zip(kit.shares, charts, strict=True):
        if stack is not None and share not in found:
            pieces = Counter(stack)
            found[share] = np.array([pieces[plate.face] for plate in kit.plates], np.int64)
    return found
