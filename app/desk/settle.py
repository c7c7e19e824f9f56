"""After every entry: does the crew get its next change, and what is the plan from here?

An instruction that is out stays as it is. Only when the hands are free and the next weight has been handed
in does a new one go out; it is the first step of a plan over everything known on the platform, made from
what is on the bar now. Nobody waits for the best plan: what is best within the budget goes out, and
:mod:`app.desk.improve` betters what the crew has not been shown yet.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from sqlmodel import Session

from app.desk.planned import Situation, less, plan_belts, plan_for, situation, stored_plan
from app.loading.chart import loadable
from app.meet.order import Turn
from app.meet.platform import Bar, Condition, found, instruct, lifted, overtaken, prepare
from app.planning import Budget
from app.store.picture import Picture, get, picture, store_bar
from app.store.tables import PlatformRow


def settle(session: Session, platform_id: int, budget: Budget) -> None:
    """Bring the platform's instruction and plan up to date with what has just been entered."""
    session.flush()
    row = get(session, PlatformRow, platform_id, "platform")
    now = picture(session, platform_id)
    here = situation(now, _own_bar(now, row))
    if here is None:
        row.plan = None
        return
    bar = here.bar
    if bar.condition is Condition.LIFTING and overtaken(bar, here.order):
        bar = lifted(bar)  # the loaded attempt is gone (passed, or another flight): the bar itself is known
        here = situation(now, bar) or here
    turns = here.turns
    made = plan_belts(now, here.lift_id, here.starts, turns, budget)
    if made is not None and _may_instruct(bar, here.order, turns):
        bar = instruct(bar, turns[0], made.plan.changes[0].stack, made.why[0] or "")
        row.plan = stored_plan(made, turns, skip=1)
    else:
        row.plan = stored_plan(made, turns)
    bar = _make_up_next(replace(here, bar=bar), budget)
    store_bar(row, bar)
    if bar.condition is not Condition.LIFTING:
        row.loaded_at = None


def _make_up_next(here: Situation, budget: Budget) -> Bar:
    """With a second belt: while a lifter has one, the crew makes the next load up from the plates that are left."""
    bar = here.bar
    if here.belts < 2 or bar.condition is not Condition.LIFTING or bar.hand is None or bar.ahead is not None:
        return bar
    held = bar.hand.attempt_id
    left = less(here.equipment, bar.hand.stack)
    coming = [turn for turn in here.order if turn.attempt.id != held]
    if not coming or coming[0].assumed or not loadable(left, coming[0].weight):
        return bar
    chain = [turn for turn in coming[::2] if loadable(left, turn.weight)]
    made = plan_for(here.now, here.lift_id, bar.spare, chain, budget, left)
    return bar if made is None else prepare(bar, chain[0], made.plan.changes[0].stack, made.why[0] or "")


def _own_bar(now: Picture, row: PlatformRow) -> Bar:
    """The bar of the lift that is on: when the lift needs another implement, that one comes out empty."""
    if now.lift_id is None:
        return now.bar
    wanted = now.programme(now.lift_id).lift(now.lift_id).implement_id
    if row.implement_id == wanted:
        return now.bar
    row.implement_id = wanted
    return found(now.bar, ())  # a hold stays on


def _may_instruct(bar: Bar, order: Sequence[Turn], turns: Sequence[Turn]) -> bool:
    """Hands free, the next weight handed in by somebody, and it can be made."""
    if bar.hand is not None or bar.condition is not Condition.IDLE or not order or not turns:
        return False
    return not order[0].assumed and turns[0].attempt.id == order[0].attempt.id
