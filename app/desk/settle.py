"""After every entry: does the crew get its next change, and what is the plan from here?

An instruction that is out stays as it is. Only when the hands are free and the next weight has been handed
in does a new one go out; it is the first step of a plan over everything known on the platform, made from
what is on the bar now.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from functools import partial
from typing import Any

from sqlmodel import Session

from app.desk.wish import plan_request
from app.loading.chart import loadable
from app.loading.equipment import Equipment, Stack
from app.loading.mass import show_mass
from app.meet.horizon import horizon
from app.meet.order import Turn
from app.meet.platform import Bar, Condition, instruct, lifted, overtaken
from app.planning import Plan, plan
from app.store.picture import Picture, faces, get, picture, store_bar
from app.store.tables import PlatformRow


def settle(session: Session, platform_id: int) -> None:
    """Bring the platform's instruction and plan up to date with what has just been entered."""
    session.flush()
    row = get(session, PlatformRow, platform_id, "platform")
    now = picture(session, platform_id)
    if now.flight_id is None or now.lift_id is None:
        row.plan = None
        return
    bar = _own_bar(now, row)
    order = now.programme(now.lift_id).order(now.flight_id, now.lift_id)
    if bar.condition is Condition.LIFTING and overtaken(bar, order):
        bar = lifted(bar)  # the loaded attempt is gone (passed, or another flight): the bar itself is known
    equipment = now.equipment(now.lift_id)
    turns = _turns(now, equipment, bar, order)
    start = bar.hand.stack if bar.hand and not must_ask(bar, order, equipment) else bar.carries
    made = plan_for(now, equipment, start, turns, now.lift_id)
    if _may_instruct(bar, order, turns) and made is not None:
        bar = instruct(bar, turns[0], made.changes[0].stack)
        row.plan = _steps(made, turns, skip=1)
    else:
        row.plan = _steps(made, turns, skip=0)
    store_bar(row, bar)


def _own_bar(now: Picture, row: PlatformRow) -> Bar:
    """The bar of the lift that is on: when the lift needs another implement, that one comes out empty."""
    assert now.lift_id is not None  # noqa: S101 - the caller has checked
    wanted = now.programme(now.lift_id).lift(now.lift_id).implement_id
    if row.implement_id == wanted:
        return now.bar
    row.implement_id = wanted
    return Bar(Condition.IDLE, (), None)


def _turns(now: Picture, equipment: Equipment, bar: Bar, order: Sequence[Turn]) -> tuple[Turn, ...]:
    """What is still to be planned: the attempt in hand is not, its stack is settled."""
    assert now.flight_id is not None and now.lift_id is not None  # noqa: S101, PT018 - the caller has checked
    held = bar.hand.attempt_id if bar.hand and not must_ask(bar, order, equipment) else None
    turns = horizon(now.programme(now.lift_id), now.flight_id, now.lift_id, partial(loadable, equipment))
    return tuple(turn for turn in turns if turn.attempt.id != held)


def _may_instruct(bar: Bar, order: Sequence[Turn], turns: Sequence[Turn]) -> bool:
    """Hands free, the next weight handed in by somebody, and it can be made."""
    if bar.hand is not None or bar.condition is not Condition.IDLE or not order or not turns:
        return False
    return not order[0].assumed and turns[0].attempt.id == order[0].attempt.id


def plan_for(
    now: Picture, equipment: Equipment, start: Stack | None, turns: Sequence[Turn], lift_id: int
) -> Plan | None:
    """The plan for these turns from this start; None where there is nothing to plan.

    A start that is not in the stock any more (a plate was taken away while it hung there) is planned as if
    from empty: the stacks are right all the same, and the hand list is made from the bar as it is.
    """
    if not turns:
        return None
    wish = now.loading.get(lift_id, {})
    request = plan_request(now.unit, equipment, wish, start or (), [turn.weight for turn in turns])
    return plan(request if owned(equipment, request.start) else replace(request, start=()))


def must_ask(bar: Bar, order: Sequence[Turn], equipment: Equipment) -> bool:
    """The instruction that is out no longer serves: another bar is wanted, or a plate of it has gone."""
    return bar.hand is not None and (overtaken(bar, order) or not owned(equipment, bar.hand.stack))


def owned(equipment: Equipment, stack: Stack) -> bool:
    """Whether the platform has these plates for one end."""
    have = {plate.face: equipment.pieces_per_end(plate) for plate in equipment.plates}
    return all(stack.count(face) <= have.get(face, 0) for face in set(stack))


def _steps(made: Plan | None, turns: Sequence[Turn], skip: int) -> dict[str, Any] | None:
    if made is None:
        return None
    pairs = list(zip(turns, made.changes, strict=True))[skip:]
    return {
        "steps": [
            {"attempt": turn.attempt.id, "weight": show_mass(turn.weight), "stack": faces(change.stack)}
            for turn, change in pairs
        ],
    }
