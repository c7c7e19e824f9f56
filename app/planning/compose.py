"""From stacks to an answer: hand lists, figures, the chart beside it, and the independent sum."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from itertools import pairwise

from app.loading.change import hand_list
from app.loading.chart import Chart, TooManyWeights
from app.loading.equipment import Access, Stack
from app.loading.stack import check_stack, obeys
from app.planning.answer import Change, ChartFigures, slowest, summed
from app.planning.refusal import bad_request
from app.planning.request import Measure, PlanRequest


def compose(request: PlanRequest, stacks: Sequence[Stack]) -> tuple[Change, ...]:
    """The changes of a chain of stacks under the request's access; every stack is summed again first.

    Raises :class:`app.loading.stack.WrongLoad` if a stack must not be shown.
    """
    for target, stack in zip(request.targets, stacks, strict=True):
        check_stack(request.equipment, stack, target, request.order)
    return describe(request, stacks, request.access)


def describe(request: PlanRequest, stacks: Sequence[Stack], access: Access) -> tuple[Change, ...]:
    """Hand lists and figures of a chain of stacks."""
    worth = plate_worth(request)
    off_s = {plate.face: plate.off_s for plate in request.equipment.plates}
    on_s = {plate.face: plate.on_s for plate in request.equipment.plates}
    changes = []
    for target, (before, after) in zip(request.targets, pairwise((request.start, *stacks)), strict=True):
        hands = hand_list(before, after, access, worth)
        seconds = [*(off_s[face] for face in hands.off), *(on_s[face] for face in hands.on)]
        if request.thread_s:
            seconds.append(request.thread_s * misaligned(request, after))
        changes.append(
            Change(
                target=target,
                stack=after,
                off=hands.off,
                off_at=hands.off_at,
                on=hands.on,
                on_at=hands.on_at,
                plates=len(hands.off) + len(hands.on),
                mass=sum(hands.off + hands.on, Fraction(0)),
                time_s=sum(seconds, Fraction(0)),
            )
        )
    return tuple(changes)


def plate_worth(request: PlanRequest) -> dict[Fraction, int]:
    """What not touching a plate saves, in the request's measure and then its tie-break, as one number."""
    plates = request.equipment.plates
    parts = {
        Measure.PLATES: [(Fraction(2), 2 * plate.face) for plate in plates],
        Measure.MASS: [(2 * plate.face, Fraction(2)) for plate in plates],
        Measure.TIME: [(plate.off_s + plate.on_s, Fraction(2)) for plate in plates],
    }[request.measure]
    scale = 1
    for pair in parts:
        for value in pair:
            scale = scale * value.denominator if scale % value.denominator else scale
    more = int(scale * sum(tie * plate.count for (_, tie), plate in zip(parts, plates, strict=True))) + 1
    return {
        plate.face: int(value * scale) * more + int(tie * scale)
        for (value, tie), plate in zip(parts, plates, strict=True)
    }


def misaligned(request: PlanRequest, stack: Stack) -> int:
    """Neighbours whose holes are more than ``finger_mm`` apart when both stand on their rims."""
    wide = {plate.face: plate.diameter_mm or Fraction(0) for plate in request.equipment.plates}
    return sum(abs(wide[a] - wide[b]) / 2 > request.finger_mm for a, b in pairwise(stack))


def chart_stacks(request: PlanRequest) -> list[Stack | None]:
    """The chart's stack for every target; ``None`` where the stock, the sleeve or the order has none."""
    known: dict[Fraction, Stack | None] = {}
    chart = Chart(request.equipment)
    try:
        for target in request.targets:
            if target not in known:
                stack = chart.stack(target)
                keeps = stack is not None and obeys(request.equipment, stack, request.order)
                known[target] = stack if keeps else None
    except TooManyWeights as wrong:
        raise bad_request("plates", str(wrong)) from None
    return [known[target] for target in request.targets]


def chart_figures(request: PlanRequest, stacks: Sequence[Stack | None]) -> ChartFigures | None:
    """The weights loaded as the wall chart does, from the outer end; ``None`` if one has no chart stack."""
    made = [stack for stack in stacks if stack is not None]
    if len(made) < len(stacks):
        return None
    changes = describe(request, made, Access.OUTER_END)
    return ChartFigures(total=summed(changes), worst=slowest(changes))
