"""What each choice of rules would cost on one list of weights, so that a director picks once, from figures."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal

from app.planning.answer import Bound, ChartFigures, Figures
from app.planning.budget import Budget
from app.planning.request import Aim, Measure, PlanRequest
from app.planning.solve import plan

EXTRA_PLATES = (0, 1, 2, 3)


@dataclass(frozen=True, slots=True)
class Choice:
    """One row: the rules, and what the best plan by them handles in all and at its slowest change (one end)."""

    extra_plates: int
    aim: Aim
    measure: Measure
    total: Figures
    worst: Figures
    proof: Literal["optimal"] | Bound


@dataclass(frozen=True, slots=True)
class Frontier:
    """All choices, and the wall chart's own figures to hold them against."""

    choices: tuple[Choice, ...]
    chart: ChartFigures | None


def frontier(request: PlanRequest, budget: Budget | None = None) -> Frontier:
    """The table of ``extra_plates`` 0 to 3 × aim × measure for the request's weights; its own limit is left
    out. ``budget`` is for each row. Raises :class:`Refusal` as :func:`plan` does."""
    rows, chart = [], None
    for extra in EXTRA_PLATES:
        for aim in Aim:
            for measure in Measure:
                asked = replace(request, extra_plates=extra, aim=aim, measure=measure, limit=None)
                found = plan(asked, budget)
                rows.append(Choice(extra, aim, measure, found.total, found.worst, found.proof))
                chart = found.chart
    return Frontier(tuple(rows), chart)
