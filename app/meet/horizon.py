"""How far the plan looks: everything known on the platform with the same implement, in lifting order.

The rest of this round, the rounds after it (an undeclared weight stands in at its default), and then the
first round of whatever flight follows on the same bar. The fall at each round's end is part of the price.
Without that last look a plan leaves a long stack for the next flight to strip (``trade.md`` 0, finding 3).
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from functools import partial

from app.meet.misload import Retake
from app.meet.model import Attempt, Flight, Lift, Lifter, Result
from app.meet.order import Turn
from app.meet.rule_presets import ROUNDS_BAR
from app.meet.rule_reading import preset_rules
from app.meet.ruled_order import ruled_order
from app.meet.rules import RetakePlace, Rules


@dataclass(frozen=True, slots=True)
class Programme:
    """One session of one platform: its lifts and flights in order, who is in them, and every attempt."""

    lifts: tuple[Lift, ...]
    flights: tuple[Flight, ...]
    lifters: tuple[Lifter, ...]
    attempts: tuple[Attempt, ...]
    rules: Rules = field(default_factory=partial(preset_rules, ROUNDS_BAR.key))

    def of_flight(self, flight_id: int) -> tuple[Lifter, ...]:
        """The flight's lifters by lot number."""
        return tuple(
            sorted((one for one in self.lifters if one.flight_id == flight_id), key=lambda one: one.lot)
        )

    def of_lift(self, lift_id: int) -> Mapping[int, tuple[Attempt, ...]]:
        """The lift's attempts by lifter id, in the order of their numbers."""
        found: dict[int, list[Attempt]] = {}
        for attempt in sorted(self.attempts, key=lambda one: one.number):
            if attempt.lift_id == lift_id:
                found.setdefault(attempt.lifter_id, []).append(attempt)
        return {lifter_id: tuple(attempts) for lifter_id, attempts in found.items()}

    def lift(self, lift_id: int) -> Lift:
        """The lift with this id."""
        return next(one for one in self.lifts if one.id == lift_id)

    def flight(self, flight_id: int) -> Flight:
        """The flight with this id."""
        return next(one for one in self.flights if one.id == flight_id)

    def rules_of(self, lift_id: int) -> Rules:
        """The session's rules in the step of this lift."""
        return self.rules.for_step(self.lift(lift_id).step)

    def order(self, flight_id: int, lift_id: int) -> tuple[Turn, ...]:
        """Everything the flight still has to lift in this lift, in lifting order by the session's rules."""
        members = self.of_flight(flight_id)
        of_lift = self.of_lift(lift_id)
        # Only this flight's: another flight's weights say nothing about how high a rising bar is here. But those of
        # its lifters who have left do.
        attempts = {lifter.id: of_lift.get(lifter.id, ()) for lifter in members}
        here = [lifter for lifter in members if not lifter.withdrawn]
        done = [(a.lifted_at, a.id) for a in self.attempts if a.lift_id == lift_id and a.lifted_at is not None]
        granted = [a for a in self.attempts if a.lift_id == lift_id and a.retake and a.result is Result.OPEN]
        return ruled_order(
            here,
            attempts,
            self.rules_of(lift_id),
            lifted=[attempt_id for _, attempt_id in sorted(done)],
            retakes=[Retake(a.id, RetakePlace(a.retake)) for a in sorted(granted, key=lambda a: a.id)],
        )


def after(programme: Programme, flight_id: int, lift_id: int) -> tuple[int, int] | None:
    """What the platform does after this flight's lift: next flight, same lift; else first flight, next lift.

    (Several flights: flight A does all rounds of a lift, then flight B, then the next lift; WPC and GPA rule 5
    as read in ``figures.md`` 1.3.)
    """
    flights = sorted(programme.flights, key=lambda one: one.position)
    lifts = sorted(programme.lifts, key=lambda one: one.position)
    place = [flight.id for flight in flights].index(flight_id)
    if place + 1 < len(flights):
        return flights[place + 1].id, lift_id
    rank = [lift.id for lift in lifts].index(lift_id)
    if rank + 1 < len(lifts):
        return flights[0].id, lifts[rank + 1].id
    return None


def horizon(
    programme: Programme, flight_id: int, lift_id: int, loadable: Callable[[Fraction], bool]
) -> tuple[Turn, ...]:
    """The turns to plan for, in lifting order.

    Turns whose weight cannot be made are left out: a stand-in that no plate makes must not stop the plan.
    """
    turns = list(programme.order(flight_id, lift_id))
    following = after(programme, flight_id, lift_id)
    if following is not None and _same_implement(programme, lift_id, following[1]):
        turns += [turn for turn in programme.order(*following) if turn.attempt.number == 1]
    makeable = {weight: loadable(weight) for weight in {turn.weight for turn in turns}}
    return tuple(turn for turn in turns if makeable[turn.weight])


def _same_implement(programme: Programme, lift_id: int, other_id: int) -> bool:
    return programme.lift(lift_id).implement_id == programme.lift(other_id).implement_id
