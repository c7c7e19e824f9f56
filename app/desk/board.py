"""What the pages read: one platform at one revision, its order, its plan step by step."""

from __future__ import annotations

from collections import deque
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from fractions import Fraction

from sqlmodel import select

from app.desk.entry import Desk
from app.desk.planned import belts_of, must_ask, next_starts, plan_for, wish_of
from app.desk.undo import UNDONE
from app.desk.wish import Wish
from app.loading.change import HandList, hand_list
from app.loading.chart import chart_stack, loadable
from app.loading.equipment import Access, Equipment, Stack
from app.loading.mass import parse_mass
from app.meet.horizon import Programme
from app.meet.model import Flight, Lift, Lifter, Result
from app.meet.order import Turn, without_opener
from app.meet.platform import up_next
from app.planning import Budget
from app.store.engine import reading
from app.store.journal import last_redoable, last_undoable
from app.store.picture import Picture, Tool, key, picture, to_stack
from app.store.tables import FlightRow, JournalRow


@dataclass(frozen=True, slots=True)
class Step:
    """One turn and its load. ``stack`` is None when the weight cannot be made; ``before`` None: bar unknown."""

    turn: Turn
    before: Stack | None
    stack: Stack | None
    access: Access
    why: str = ""

    @property
    def hands(self) -> HandList | None:
        """What comes off and what goes on."""
        if self.stack is None:
            return None
        return hand_list(self.before or (), self.stack, self.access)


@dataclass(frozen=True, slots=True)
class Undoable:
    """The entry that undo would take back, or redo enter again."""

    id: int
    what: str


@dataclass(frozen=True, slots=True)
class Bare:
    """A platform on which nobody lifts yet: no flight has come in with the roster."""

    now: Picture


@dataclass(frozen=True, slots=True)
class Board:
    """A platform as the pages show it, looking at one flight and lift (``here``: it is the one lifting)."""

    now: Picture
    programme: Programme
    flight: Flight
    lift: Lift
    equipment: Equipment
    here: bool
    order: tuple[Turn, ...]
    steps: tuple[Step, ...]
    up: Turn | None
    ask: bool
    no_opener: tuple[Lifter, ...]
    owner: str
    undo: Undoable | None
    redo: Undoable | None

    @property
    def wish(self) -> Wish:
        """How the stacks of the lift looked at are chosen."""
        return wish_of(self.now, self.lift.id)

    @property
    def tool(self) -> Tool:
        """The bar or belt of the lift looked at."""
        return self.now.tool(self.lift.implement_id)


def board(
    desk: Desk, platform_id: int, flight_id: int | None = None, lift_id: int | None = None
) -> Board | Bare:
    """Read a platform, looking at a flight and lift, or at those that are lifting."""
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
        undo = _named(last_undoable(session, now.meet_id, platform_id))
        owners = {key(row): row.owner for row in session.exec(select(FlightRow).where(FlightRow.owner != ""))}
        redo = _named(last_redoable(session, now.meet_id, platform_id))
    looked_at = _looked_at(now, flight_id, lift_id)
    if looked_at is None:
        return Bare(now)
    flight, lift = looked_at
    programme, equipment = now.programme(lift.id), now.equipment(lift.id)
    order = programme.order(flight.id, lift.id)
    here = (now.flight_id, now.lift_id) == (flight.id, lift.id)
    access = wish_of(now, lift.id).access
    if here:
        steps = tuple(_live_steps(now, order, equipment, access, lift.id))
    else:
        steps = tuple(_fresh_steps(now, order, lift, access, desk.budget))
    return Board(
        now=now,
        programme=programme,
        flight=flight,
        lift=lift,
        equipment=equipment,
        here=here,
        order=order,
        steps=steps,
        up=up_next(now.bar, order) if here else None,
        ask=here and must_ask(now.bar, order, equipment),
        no_opener=without_opener(
            [lifter for lifter in programme.of_flight(flight.id) if not lifter.withdrawn],
            programme.of_lift(lift.id),
        ),
        owner=owners.get(flight.id, ""),
        undo=undo,
        redo=redo,
    )


def _named(entry: JournalRow | None) -> Undoable | None:
    return None if entry is None else Undoable(key(entry), entry.what.removeprefix(UNDONE))


def _looked_at(now: Picture, flight_id: int | None, lift_id: int | None) -> tuple[Flight, Lift] | None:
    """The flight and lift asked for, if they go together; else those on the platform; else the first."""
    for wanted in ((flight_id, lift_id), (now.flight_id, now.lift_id)):
        for _, _, programme in now.sessions:
            flight = next((one for one in programme.flights if one.id == wanted[0]), None)
            lift = next((one for one in programme.lifts if one.id == wanted[1]), None)
            if flight is not None and lift is not None:
                return flight, lift
    for _, _, programme in now.sessions:
        if programme.flights and programme.lifts:
            return programme.flights[0], programme.lifts[0]
    return None


Loads = dict[int, tuple[Fraction, Stack, str]]
"""By attempt: the weight a stack was planned for, the stack, and why it is not the chart's."""


def _live_steps(
    now: Picture, order: Sequence[Turn], equipment: Equipment, access: Access, lift_id: int
) -> Iterator[Step]:
    """The steps of the lift that is on: the change in hand first, then the stored plan, each from the one before."""
    stored = [] if now.plan is None else now.plan["steps"]
    loads: Loads = {
        step["attempt"]: (parse_mass(step["weight"]), to_stack(step["stack"]) or (), step.get("why", ""))
        for step in stored
    }
    hand, up, ask = now.bar.hand, up_next(now.bar, order), must_ask(now.bar, order, equipment)
    belts = belts_of(now, lift_id)
    starts = next_starts(now.bar, belts, ask=ask or up is None)
    if hand is None or up is None or ask:
        yield from _chain(order, loads, starts, access)
        return
    yield Step(up, hand.before, hand.stack, access, hand.why)
    rest = [turn for turn in order if turn.attempt.id != up.attempt.id]
    ahead = now.bar.ahead
    if (
        ahead is not None
        and rest
        and (rest[0].attempt.id, rest[0].weight) == (ahead.attempt_id, ahead.weight)
    ):
        yield Step(rest[0], ahead.before, ahead.stack, access, ahead.why)
        rest = rest[1:]
    yield from _chain(rest, loads, starts, access)


def _fresh_steps(
    now: Picture, order: Sequence[Turn], lift: Lift, access: Access, budget: Budget
) -> Iterator[Step]:
    """The steps of a flight that is not on yet: planned from an empty bar."""
    equipment = now.equipment(lift.id)
    turns = [turn for turn in order if loadable(equipment, turn.weight)]
    made = plan_for(now, lift.id, (), turns, budget)
    loads: Loads = {}
    if made is not None:
        for turn, change, reason in zip(turns, made.plan.changes, made.why, strict=True):
            loads[turn.attempt.id] = (turn.weight, change.stack, reason or "")
    yield from _chain(order, loads, ((),), access)


def _chain(
    order: Sequence[Turn], loads: Loads, starts: Sequence[Stack | None], access: Access
) -> Iterator[Step]:
    """Each turn from what its bar or belt carries; a stack planned for another weight is none."""
    belts = deque(starts)
    for turn in order:
        weight, stack, why = loads.get(turn.attempt.id, (None, None, ""))
        if weight != turn.weight:
            stack, why = None, ""
        before = belts.popleft()
        yield Step(turn, before, stack, access, why)
        belts.append(stack if stack is not None else before)


@dataclass(frozen=True, slots=True)
class Handled:
    """Plates and mass handled at one end over some changes."""

    plates: int
    mass: Fraction


def handled(steps: Sequence[Step]) -> Handled:
    """What the steps cost as planned."""
    plates, mass = 0, Fraction(0)
    for step in steps:
        hands = step.hands
        if hands is not None:
            plates += len(hands.off) + len(hands.on)
            mass += sum(hands.off + hands.on, Fraction(0))
    return Handled(plates, mass)


def handled_by_chart(steps: Sequence[Step], equipment: Equipment) -> Handled | None:
    """What the same weights cost as the wall chart loads them, from the same start; None where it cannot."""
    by_chart: list[Step] = []
    carries = steps[0].before if steps else ()
    for step in steps:
        if step.stack is None:
            continue
        stack = chart_stack(equipment, step.turn.weight)
        if stack is None:
            return None
        by_chart.append(Step(step.turn, carries, stack, Access.OUTER_END))
        carries = stack
    return handled(by_chart)


def lifted_last(one: Board) -> int | None:
    """The attempt whose lifter now hands in the next weight: the newest result of the lift looked at."""
    members = {lifter.id for lifter in one.programme.of_flight(one.flight.id)}
    done = [
        a
        for a in one.programme.attempts
        if a.lift_id == one.lift.id and a.lifter_id in members and a.result in (Result.GOOD, Result.MISSED)
    ]
    return None if not done else max(done, key=lambda a: (a.number, a.weight or 0)).id
