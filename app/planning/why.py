"""Why a stack departs from the loading chart: one short sentence in the words of the crew."""

from __future__ import annotations

from collections import Counter
from fractions import Fraction

from app.loading.equipment import Stack
from app.loading.mass import show_mass
from app.planning.answer import Change, Plan
from app.planning.compose import chart_stacks
from app.planning.request import PlanRequest

NUMBERS = ["no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten"]


def why(plan: Plan, request: PlanRequest) -> tuple[str | None, ...]:
    """For every change, why its stack is not the chart's; ``None`` where it is.

    Each sentence is true of the plan as it stands: how long a plate that the chart would not have on stays on
    is read from the hand lists, not guessed.
    """
    ahead = _stays_ahead(plan)
    back = _stays_back(plan)
    return tuple(
        None if change.stack == chart else _reason(plan, request, at, chart, ahead[at], back[at])
        for at, (change, chart) in enumerate(zip(plan.changes, chart_stacks(request), strict=True))
    )


def _reason(
    plan: Plan, request: PlanRequest, at: int, chart: Stack | None, ahead: list[int], back: list[int]
) -> str:
    change = plan.changes[at]
    if chart is None:
        return "the chart has no stack for this weight by these rules"
    if not change.off and not change.on and at:
        return "already on the bar" if request.equipment.implement.ends == 2 else "already on"
    extra = Counter(change.stack) - Counter(chart)
    places = [place for place, face in enumerate(change.stack) if extra[face]]
    if not places:
        return _other_order(plan, at)
    # The heaviest plate that stays longest explains most.
    place = max(places, key=lambda where: (ahead[where] + back[where]) * change.stack[where])
    face = change.stack[place]
    if back[place] and ahead[place]:
        return f"keeps {_plates(change, place, ahead)} on for the next {_number(ahead[place])}"
    if ahead[place]:
        return f"puts {_plates(change, place, ahead)} on to stay for the next {_number(ahead[place])}"
    if back[place]:
        return f"leaves the {show_mass(face)} on rather than changing it"
    if len(change.stack) < len(chart):
        fewer = len(chart) - len(change.stack)
        return f"needs {_number(fewer)} plate{'s' if fewer > 1 else ''} fewer than the chart"
    return _over_the_list(plan, request)


def _other_order(plan: Plan, at: int) -> str:
    """Same plates as the chart: the order makes the difference."""
    stack = plan.changes[at].stack
    if at + 1 < len(plan.changes):
        soon = plan.changes[at + 1].off
        if stack and stack[-1] in soon:
            return f"the chart's plates, with the {show_mass(stack[-1])} outside: it comes off next"
    return "the chart's plates in an order that is handled less"


def _over_the_list(plan: Plan, request: PlanRequest) -> str:
    """No plate of this stack tells the story: the sum over all changes does."""
    if plan.chart is not None:
        plates = plan.chart.total.plates - plan.total.plates
        mass = plan.chart.total.mass - plan.total.mass
        if plates > 0:
            return f"saves {_number(plates)} plate{'s' if plates > 1 else ''} over the whole list"
        if mass > 0:
            return f"saves {show_mass(mass)} {request.unit.value} over the whole list"
    return "part of the list that asks least of the crew"


def _plates(change: Change, place: int, ahead: list[int]) -> str:
    """The plate, in the plural if others of its face stay as long."""
    face = change.stack[place]
    alike = sum(
        other == face and stays >= ahead[place] for other, stays in zip(change.stack, ahead, strict=True)
    )
    return f"the {show_mass(face)}s" if alike > 1 else f"the {show_mass(face)}"


def _number(count: int) -> str:
    return NUMBERS[count] if count < len(NUMBERS) else str(count)


def _stays_ahead(plan: Plan) -> list[list[int]]:
    """For every plate of every stack, through how many of the next attempts it is not touched."""
    ahead: list[list[int]] = [[0] * len(change.stack) for change in plan.changes]
    for at in range(len(plan.changes) - 2, -1, -1):
        for before, after in _untouched(plan.changes[at].stack, plan.changes[at + 1]):
            ahead[at][before] = ahead[at + 1][after] + 1
    return ahead


def _stays_back(plan: Plan) -> list[list[int]]:
    """For every plate of every stack, through how many of the last attempts it has been on untouched; what
    stood there at the start counts as one."""
    back: list[list[int]] = [[0] * len(change.stack) for change in plan.changes]
    for at, change in enumerate(plan.changes):
        before = plan.changes[at - 1].stack if at else _start(change)
        for left, right in _untouched(before, change):
            back[at][right] = (back[at - 1][left] if at else 0) + 1
    return back


def _start(first: Change) -> tuple[Fraction | None, ...]:
    """As many places as the start had; its faces do not matter here."""
    return (None,) * (len(first.stack) - len(first.on) + len(first.off))


def _untouched(before: tuple[Fraction | None, ...], change: Change) -> list[tuple[int, int]]:
    """Places before and after of the plates that a change leaves alone."""
    left = [place for place in range(len(before)) if place not in change.off_at]
    right = [place for place in range(len(change.stack)) if place not in change.on_at]
    return list(zip(left, right, strict=True))
