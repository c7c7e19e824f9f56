"""The loading chart of the meet's own plates and bar: every makeable weight of a range with its chart stack."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import ceil, floor

from app.desk.board import Board
from app.loading.chart import chart_stack
from app.loading.equipment import Order
from app.loading.mass import show_mass
from app.loading.stack import check_stack
from app.web.words import tool_words

MOST_LINES = 800


@dataclass(frozen=True, slots=True)
class ChartLine:
    """One weight and the plates of one end, inside to outside."""

    weight: str
    stack: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class ChartPage:
    """The chart of one lift's bar or belt."""

    meet: str
    platform: str
    title: str  # "Loading chart, Squat"
    unit: str
    side: str
    tool: str
    plates: str  # "14 × 25, 2 × 20, …"
    lightest: str
    heaviest: str
    lines: tuple[ChartLine, ...]
    left_out: int  # weights of the range in the lift's steps that no chart stack makes
    shortened: bool


def chart_view(one: Board, lightest: Fraction | None, heaviest: Fraction | None) -> ChartPage:
    """Every weight in the lift's steps that the chart makes, from the empty bar to all plates unless told otherwise.

    Each stack is summed again before it is written down. Raises WrongLoad rather than print a wrong load.
    """
    low, high = _range(one, lightest, heaviest)
    step = one.lift.step
    first, last = ceil(low / step), floor(high / step)
    weights = [step * count for count in range(first, min(last + 1, first + MOST_LINES))]
    lines = tuple(line for weight in weights if (line := _line(one, weight)) is not None)
    ends = one.tool.implement.ends
    return ChartPage(
        meet=one.now.meet,
        platform=one.now.platform,
        title=f"Loading chart, {one.lift.name}",
        unit=one.now.unit,
        side="a side" if ends == 2 else "the stack",
        tool=tool_words(one.tool, one.now.unit),
        plates=", ".join(f"{item.plate.count} × {show_mass(item.plate.face)}" for item in one.now.stock),
        lightest=show_mass(low),
        heaviest=show_mass(high),
        lines=lines,
        left_out=len(weights) - len(lines),
        shortened=last - first >= MOST_LINES,
    )


def _range(one: Board, lightest: Fraction | None, heaviest: Fraction | None) -> tuple[Fraction, Fraction]:
    """What was asked for, within what the bar weighs empty and with every plate on."""
    base, ends = one.equipment.base_mass, one.tool.implement.ends
    faces = (item.plate.face * one.equipment.pieces_per_end(item.plate) for item in one.now.stock)
    most = base + ends * sum(faces, Fraction(0))
    return max(base, lightest or base), min(most, heaviest if heaviest is not None else most)


def _line(one: Board, weight: Fraction) -> ChartLine | None:
    stack = chart_stack(one.equipment, weight)
    if stack is None:
        return None
    check_stack(one.equipment, stack, weight, Order.HEAVIEST_INSIDE)
    return ChartLine(show_mass(weight), tuple(show_mass(face) for face in stack))
