"""The swap list of one flight's round, for paper."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime

from app.desk.board import Board, Step, handled, handled_by_chart
from app.loading.equipment import Equipment, Stack
from app.loading.mass import show_mass
from app.loading.stack import check_stack
from app.meet.model import RESULT_WORDS, Attempt, Lifter, Result, attempt_name
from app.web.views import CardRow, CardView
from app.web.words import now_words, side_words, stack_words, sum_words, tool_words, whole_words


def card_view(one: Board, round_number: int, *, now: datetime) -> CardView:
    """The card of a round; ``now`` is printed on it. Raises WrongLoad rather than print a wrong load."""
    steps = [step for step in one.steps if step.turn.attempt.number == round_number]
    done = _done(one, round_number)
    if not done and all(step.turn.assumed for step in steps):
        steps = []  # nobody has handed in: an order made of guesses would only mislead, so the card is blank
    rows = [_done_row(one, a, lifter) for a, lifter in done]
    rows += [_row(one, one.equipment, step, len(rows) + place) for place, step in enumerate(steps, start=1)]
    return CardView(
        meet=one.now.meet,
        title=f"{one.flight.name} · {one.lift.name} · round {round_number}",
        platform=one.now.platform,
        unit=one.now.unit,
        side=side_words(one.tool),
        implement=tool_words(one.tool, one.now.unit),
        start=stack_words(steps[0].before) if steps else "…………",
        rows=tuple(rows),
        undeclared=_undeclared(one, round_number, {step.turn.lifter.id for step in steps}),
        revision=one.now.revision,
        printed=now_words(now),
        total=_total(steps, one.equipment, one.now.unit, side_words(one.tool)),
    )


def _done(one: Board, round_number: int) -> list[tuple[Attempt, Lifter]]:
    """What has been lifted of this round already, in the order of its weights."""
    members = {lifter.id: lifter for lifter in one.programme.of_flight(one.flight.id)}
    done = [
        (a, members[a.lifter_id])
        for a in one.programme.attempts
        if a.lift_id == one.lift.id
        and a.number == round_number
        and a.lifter_id in members
        and a.result is not Result.OPEN
    ]
    return sorted(done, key=lambda pair: (pair[0].weight or 0, pair[1].lot))


def _done_row(one: Board, attempt: Attempt, lifter: Lifter) -> CardRow:
    return CardRow(
        order="–",
        lot=str(lifter.lot),
        lifter=lifter.name,
        attempt=attempt_name(one.lift.name, attempt.number),
        weight="" if attempt.weight is None else show_mass(attempt.weight),
        stack=(),
        off=(),
        on=(),
        rack=one.now.racks.get((lifter.id, one.lift.id), ""),
        sum="",
        note=RESULT_WORDS[attempt.result],
    )


def _row(one: Board, equipment: Equipment, step: Step, place: int) -> CardRow:
    turn, hands = step.turn, step.hands
    stack: Stack = step.stack or ()
    if step.stack is not None:
        check_stack(equipment, stack, turn.weight, one.wish.order)
    return CardRow(
        order=str(place),
        lot=str(turn.lifter.lot),
        lifter=turn.lifter.name,
        attempt=attempt_name(one.lift.name, turn.attempt.number),
        weight=show_mass(turn.weight),
        stack=tuple(show_mass(face) for face in stack),
        off=tuple(show_mass(face) for face in hands.off) if hands else (),
        on=tuple(show_mass(face) for face in hands.on) if hands else (),
        rack=one.now.racks.get((turn.lifter.id, one.lift.id), ""),
        sum=_sum(one, step),
        note=_note(step),
    )


def _sum(one: Board, step: Step) -> str:
    """The sum for the referee, beside the stack."""
    if step.stack is None:
        return ""
    return whole_words(one.equipment, step.stack, one.tool) or sum_words(step.stack, one.tool)


def _note(step: Step) -> str:
    if step.stack is None:
        return "cannot be made with these plates"
    if step.before is None:
        return "bar unknown: build from empty"
    return "not handed in: by the rule" if step.turn.assumed else ""


def _undeclared(one: Board, round_number: int, planned: set[int]) -> tuple[CardRow, ...]:
    """Lifters with no weight for this round: a blank line each, by lot."""
    known = planned | {lifter.id for _, lifter in _done(one, round_number)}
    return tuple(
        CardRow(
            order="",
            lot=str(lifter.lot),
            lifter=lifter.name,
            attempt=attempt_name(one.lift.name, round_number),
            weight="",
            stack=(),
            off=(),
            on=(),
            rack=one.now.racks.get((lifter.id, one.lift.id), ""),
            sum="",
            note="no weight yet",
        )
        for lifter in one.programme.of_flight(one.flight.id)
        if lifter.id not in known
    )


def _total(steps: Sequence[Step], equipment: Equipment, unit: str, side: str) -> str:
    """What the round costs the crew, and what the wall chart's stacks would: the honest number beside the plan."""
    if not steps:
        return ""
    where = "a side" if side == "a side" else "in all"
    ours, chart = handled(steps), handled_by_chart(steps, equipment)
    words = f"{ours.plates} plates, {show_mass(ours.mass)} {unit} handled {where}"
    if chart is None:
        return words
    return f"{words}; by the chart {chart.plates} plates, {show_mass(chart.mass)} {unit}"
