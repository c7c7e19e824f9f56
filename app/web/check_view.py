"""The referee's check: the load that is called, added up independently, beside what the wall chart would have."""

from __future__ import annotations

import logging
from dataclasses import dataclass

from app.desk.board import Board
from app.loading.chart import chart_stack
from app.loading.equipment import Order
from app.loading.mass import show_mass
from app.loading.stack import WrongLoad, check_stack
from app.web.crew_view import crew_view
from app.web.views import CrewView, PlateView
from app.web.words import count_words, plate_views, sum_words, tool_words

log = logging.getLogger("platewright.wrong_load")


@dataclass(frozen=True, slots=True)
class ChartView:
    """The wall chart's stack for the called weight."""

    same: bool  # the load shown is the chart's own
    plates: tuple[PlateView, ...]
    sum: str  # "25 + 25 + 15 = 65 a side"
    count: str


@dataclass(frozen=True, slots=True)
class CheckView:
    """What a referee compares the bar with. ``crew`` is the very view that the crew reads, so both read the same."""

    crew: CrewView
    tool: str  # "Power bar 20 + collars 2 × 2.5 = 25 kg"
    ends: int
    collar: str  # "2.5 each", "" where there is none
    weight: str
    chart: ChartView | None  # None where there is no load to compare, or the chart has no stack for it


def check_view(one: Board) -> CheckView:
    """The check at this moment; what the crew is not shown is not shown here either."""
    crew = crew_view(one)
    collar = one.tool.collar
    return CheckView(
        crew=crew,
        tool=tool_words(one.tool, one.now.unit),
        ends=one.tool.implement.ends,
        collar=show_mass(collar.mass) if collar and collar.mass else "",
        weight=crew.new_weight or (crew.up.weight if crew.up else ""),
        chart=_chart(one, crew),
    )


def _chart(one: Board, crew: CrewView) -> ChartView | None:
    hand = one.now.bar.hand
    if crew.change is None or hand is None or crew.state == "changed":
        return None
    stack = chart_stack(one.equipment, hand.weight)
    if stack is None:
        return None
    try:
        check_stack(one.equipment, stack, hand.weight, Order.HEAVIEST_INSIDE)
    except WrongLoad:
        log.exception("the chart's stack failed its re-sum on platform %s", one.now.platform)
        return None
    return ChartView(
        same=stack == hand.stack,
        plates=plate_views(stack, one.now),
        sum=sum_words(stack, one.tool),
        count=count_words(len(stack), one.tool.collar is not None),
    )
