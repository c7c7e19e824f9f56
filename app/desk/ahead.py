"""Before Enter: what the rules would say to a weight, where it would lift, and which change it would need."""

from __future__ import annotations

from collections import deque
from dataclasses import dataclass, replace

from app.desk.attempts import breaches_of, read_entry
from app.desk.entry import Desk, Work
from app.desk.planned import Situation, plan_belts, situation, wish_of
from app.desk.subject import Seen, Subject, find_subject
from app.loading.change import HandList, hand_list
from app.meet.moment import Breach
from app.meet.order import Turn
from app.planning import Budget
from app.store.engine import reading
from app.store.picture import get
from app.store.tables import PlatformRow


@dataclass(frozen=True, slots=True)
class Ahead:
    """``place`` counts from 1 among what the flight still lifts; 0 when the weight breaks a rule for good.

    ``after`` lifts just before. ``hands`` is None where no plan can tell (another flight is on, or the weight
    cannot be made).
    """

    breaches: tuple[Breach, ...]
    place: int = 0
    after: Turn | None = None
    hands: HandList | None = None


def look_ahead(desk: Desk, platform_id: int, seen: Seen, text: str) -> Ahead:
    """Answer without entering anything. Raises what cannot even be read, as the entry itself would."""
    with reading(desk.engine) as session:
        meet_id = get(session, PlatformRow, platform_id, "platform").meet_id
        work = Work(session, meet_id, platform_id, desk.clock(), "")
        subject = find_subject(work, seen)
        weight, record = read_entry(subject, text)
        breaches = tuple(breaches_of(work, subject, weight, record))
        session.rollback()
    if any(not breach.overridable for breach in breaches):
        return Ahead(breaches)
    changed = replace(subject.attempt, weight=weight)
    attempts = tuple(changed if one.id == changed.id else one for one in subject.programme.attempts)
    programme = replace(subject.programme, attempts=attempts)
    order = programme.order(subject.lifter.flight_id, changed.lift_id)
    place = next((at for at, turn in enumerate(order) if turn.attempt.id == changed.id), None)
    if place is None:
        return Ahead(breaches)
    here = situation(subject.now, subject.now.bar)
    hands = None
    if here is not None and subject.here:
        then = replace(here, programme=programme, order=order)
        hands = _hands(then, subject, changed.id, desk.budget)
    return Ahead(breaches, place + 1, order[place - 1] if place else None, hands)


def _hands(then: Situation, subject: Subject, attempt_id: int, budget: Budget) -> HandList | None:
    """The change of this attempt in the plan that would be made."""
    turns = then.turns
    made = plan_belts(subject.now, then.lift_id, then.starts, turns, budget)
    if made is None:
        return None
    access = wish_of(subject.now, then.lift_id).access
    belts = deque(then.starts)
    for turn, change in zip(turns, made.plan.changes, strict=True):
        before = belts.popleft()
        belts.append(change.stack)
        if turn.attempt.id == attempt_id:
            return hand_list(before or (), change.stack, access)
    return None
