"""Which stack for every weight, and what the crew does between them: one stateless question."""

from app.planning.answer import Bound, Change, ChartFigures, Figures, Plan, answer_document
from app.planning.belts import BELT_COMFORT, by_the_clock
from app.planning.budget import Budget
from app.planning.depart import Departure
from app.planning.frontier import Choice, Frontier, frontier
from app.planning.lines import answer_line, read_json
from app.planning.reading import parse_request
from app.planning.refusal import Refusal, refusal_document
from app.planning.request import (
    Access,
    Aim,
    Comfort,
    ComfortBy,
    Measure,
    Order,
    PlanRequest,
    Unit,
)
from app.planning.solve import chart_plan, plan
from app.planning.why import why

__all__ = [
    "BELT_COMFORT",
    "Access",
    "Aim",
    "Bound",
    "Budget",
    "Change",
    "ChartFigures",
    "Choice",
    "Comfort",
    "ComfortBy",
    "Departure",
    "Figures",
    "Frontier",
    "Measure",
    "Order",
    "Plan",
    "PlanRequest",
    "Refusal",
    "Unit",
    "answer_document",
    "answer_line",
    "by_the_clock",
    "chart_plan",
    "frontier",
    "parse_request",
    "plan",
    "read_json",
    "refusal_document",
    "why",
]
