"""What is to be planned on a platform, from what is on the bar; and the plan, within a budget of time."""

from __future__ import annotations

import logging
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import partial
from typing import Any

from app.desk.wish import Wish, plan_request, read_wish
from app.loading.chart import loadable
from app.loading.equipment import Equipment, Order, Stack
from app.loading.mass import show_mass
from app.loading.stack import WrongLoad, check_stack
from app.meet.horizon import Programme, horizon
from app.meet.order import Turn
from app.meet.platform import Bar, Hand, overtaken
from app.planning import Budget, Plan, Refusal, plan
from app.planning.why import why
from app.store.picture import Picture, faces

log = logging.getLogger("platewright.plan")


@dataclass(frozen=True, slots=True)
class Situation:
    """The flight and lift that are on, its order, and the bar."""

    now: Picture
    programme: Programme
    flight_id: int
    lift_id: int
    equipment: Equipment
    bar: Bar
    order: tuple[Turn, ...]

    @property
    def ask(self) -> bool:
        """The instruction that is out no longer serves, so somebody must say what is on the bar."""
        return must_ask(self.bar, self.order, self.equipment)

    @property
    def turns(self) -> tuple[Turn, ...]:
        """What is still to be planned: the attempts whose instruction is out are not, their stacks are settled."""
        out = (self.bar.hand, self.bar.ahead) if not self.ask else ()
        held = {hand.attempt_id for hand in out if hand is not None}
        turns = horizon(self.programme, self.flight_id, self.lift_id, partial(loadable, self.equipment))
        return tuple(turn for turn in turns if turn.attempt.id not in held)

    @property
    def belts(self) -> int:
        """How many of the implement are in circulation: the next is made up while a lifter has the other."""
        return belts_of(self.now, self.lift_id)

    @property
    def starts(self) -> tuple[Stack | None, ...]:
        """What each belt in circulation carries when its next turn comes, the one that is used first in front."""
        return next_starts(self.bar, self.belts, ask=self.ask)


def belts_of(now: Picture, lift_id: int) -> int:
    """How many belts a lift is loaded on in turn; a bar is always one."""
    tool = now.tool(now.programme(lift_id).lift(lift_id).implement_id)
    return min(tool.pieces, 2) if tool.implement.ends == 1 else 1


def next_starts(bar: Bar, belts: int, *, ask: bool) -> tuple[Stack | None, ...]:
    """The stacks from which the turns to come are made up, in turn: one for each belt in circulation."""
    if bar.hand is None or ask:
        return (bar.carries, bar.spare)[:belts]
    if belts == 1:
        return (bar.hand.stack,)
    if bar.ahead is not None:
        return bar.hand.stack, bar.ahead.stack
    return bar.spare, bar.hand.stack


def situation(now: Picture, bar: Bar) -> Situation | None:
    """The platform as it is to be planned; None while no flight has been brought to it."""
    if now.flight_id is None or now.lift_id is None:
        return None
    programme = now.programme(now.lift_id)
    return Situation(
        now=now,
        programme=programme,
        flight_id=now.flight_id,
        lift_id=now.lift_id,
        equipment=now.equipment(now.lift_id),
        bar=bar,
        order=programme.order(now.flight_id, now.lift_id),
    )


@dataclass(frozen=True, slots=True)
class Made:
    """A plan, and for each of its stacks that is not the wall chart's the reason in a sentence."""

    plan: Plan
    why: tuple[str | None, ...]


def plan_belts(
    now: Picture, lift_id: int, starts: Sequence[Stack | None], turns: Sequence[Turn], budget: Budget
) -> Made | None:
    """The plan where the turns take the belts one after another: each belt's turns are planned for themselves.

    With one bar or belt that is :func:`plan_for`. With two, each chain is best for itself; that both together
    must do with one stock is looked to when the next load is made up.
    """
    parts = [
        plan_for(now, lift_id, start, turns[at :: len(starts)], budget) for at, start in enumerate(starts)
    ]
    return parts[0] if len(starts) == 1 else _woven(parts, len(turns))


def _woven(parts: Sequence[Made | None], count: int) -> Made | None:
    """The belts' plans as one list in the order of the turns."""
    made = [part for part in parts if part is not None]
    if len(made) < min(len(parts), count) or not made:
        return None
    changes = tuple(_belt(made, at).plan.changes[at // len(parts)] for at in range(count))
    reasons = tuple(_belt(made, at).why[at // len(parts)] for at in range(count))
    proved = all(part.plan.proof == "optimal" for part in made)
    worst = next((part.plan for part in made if part.plan.proof != "optimal"), made[0].plan)
    return Made(replace(made[0].plan if proved else worst, changes=changes), reasons)


def _belt(parts: Sequence[Made], at: int) -> Made:
    """The plan of the belt whose turn it is."""
    return parts[at % len(parts)]


def less(equipment: Equipment, stack: Stack) -> Equipment:
    """The equipment without the plates of a stack that hangs on a lifter."""
    plates = tuple(
        replace(plate, count=max(0, plate.count - stack.count(plate.face))) for plate in equipment.plates
    )
    return replace(equipment, plates=plates)


def plan_for(
    now: Picture,
    lift_id: int,
    start: Stack | None,
    turns: Sequence[Turn],
    budget: Budget,
    equipment: Equipment | None = None,
) -> Made | None:
    """The plan for these turns from this start; None where there is nothing to plan.

    A start that is not in the stock any more (a plate was taken away while it hung there) is planned as if
    from empty: the stacks are right all the same, and the hand list is made from the bar as it is.
    """
    if not turns:
        return None
    equipment = equipment or now.equipment(lift_id)
    from_here = start if start is not None and owned(equipment, start) else ()
    targets = [turn.weight for turn in turns]
    wish = wish_of(now, lift_id)
    try:
        request = plan_request(now.unit, equipment, wish, from_here, targets)
        made = plan(request, budget, wish.departure)
        return Made(made, why(made, request))
    except Refusal as refused:
        # An entry must not be lost because its plan cannot be made: the crew is told that the load is missing.
        log.exception("no plan for %s: %s", now.platform, refused.because)
        return None


def wish_of(now: Picture, lift_id: int) -> Wish:
    """How this lift's stacks are chosen."""
    return read_wish(now.loading.get(lift_id, {}))


def must_ask(bar: Bar, order: Sequence[Turn], equipment: Equipment) -> bool:
    """The instruction that is out no longer serves: another bar is wanted, or this one is not made by it any more,
    because a plate of it has gone or the bar itself was found to weigh something else."""
    return bar.hand is not None and (overtaken(bar, order) or not _makes_its_weight(bar.hand, equipment))


def _makes_its_weight(hand: Hand, equipment: Equipment) -> bool:
    try:
        check_stack(equipment, hand.stack, hand.weight, Order.ANY)
    except WrongLoad:
        return False
    return True


def owned(equipment: Equipment, stack: Stack) -> bool:
    """Whether the platform has these plates for one end."""
    have = {plate.face: equipment.pieces_per_end(plate) for plate in equipment.plates}
    return all(stack.count(face) <= have.get(face, 0) for face in set(stack))


def stored_plan(made: Made | None, turns: Sequence[Turn], skip: int = 0) -> dict[str, Any] | None:
    """The plan as the platform's row keeps it; the first ``skip`` steps have become the instruction."""
    if made is None:
        return None
    steps = list(zip(turns, made.plan.changes, made.why, strict=True))[skip:]
    return {
        "steps": [
            {
                "attempt": turn.attempt.id,
                "weight": show_mass(turn.weight),
                "stack": faces(change.stack),
                "why": reason or "",
            }
            for turn, change, reason in steps
        ],
        "proved": made.plan.proof == "optimal",
    }
