"""Which stack for every weight, and what the crew does between them: one stateless question."""

from app.planning.answer import Bound, Change, ChartFigures, Figures, Plan, answer_document
from app.planning.budget import Budget
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
from app.planning.solve import plan

__all__ = [
    "Access",
    "Aim",
    "Bound",
    "Budget",
    "Change",
    "ChartFigures",
    "Comfort",
    "ComfortBy",
    "Figures",
    "Measure",
    "Order",
    "Plan",
    "PlanRequest",
    "Refusal",
    "Unit",
    "answer_document",
    "answer_line",
    "parse_request",
    "plan",
    "read_json",
    "refusal_document",
]
