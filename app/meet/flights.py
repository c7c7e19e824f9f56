"""Flights proposed before the day: by opener, or with body-weight classes kept together.

On two real result sheets flights by opener took 12 to 24 % fewer plates than flights by class (``trade.md``
0, finding 4); often the organiser must keep classes together, so both are proposed with what each costs.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from functools import cache
from itertools import groupby
from typing import Generic, TypeVar

from app.loading.chart import loadable
from app.planning import Budget, Departure, PlanRequest, plan

Cost = TypeVar("Cost")
Flights = tuple[tuple[int, ...], ...]
"""Lifter ids, flight by flight, in the order of the proposal."""


@dataclass(frozen=True, slots=True)
class Entrant:
    """What a proposal looks at; a lifter without opener or body weight goes last."""

    lifter_id: int
    lot: int
    opener: Fraction | None = None
    body_weight: Fraction | None = None


@dataclass(frozen=True, slots=True)
class Proposal(Generic[Cost]):
    """One way to make flights, what it is called, and what its openers' round costs."""

    name: str
    flights: Flights
    cost: Cost


@dataclass(frozen=True, slots=True)
class Handled:
    """Plates and mass that the crew handles in the openers' round, all ends together."""

    plates: int
    mass: Fraction
    left_out: int = 0  # openers that the stock cannot make

    def __add__(self, other: Handled) -> Handled:
        return Handled(self.plates + other.plates, self.mass + other.mass, self.left_out + other.left_out)


def by_opener(entrants: Sequence[Entrant], most: int) -> Flights:
    """The fewest flights of at most ``most``, sizes apart by at most one, lightest openers first."""
    ordered = sorted(entrants, key=lambda one: (one.opener is None, one.opener or Fraction(0), one.lot))
    return _balanced([one.lifter_id for one in ordered], most)


def by_class(entrants: Sequence[Entrant], limits: Sequence[Fraction], most: int) -> Flights:
    """Neighbouring body-weight classes together, lightest first; in a flight by opener.

    ``limits`` are the classes' upper limits, ascending; above the last is one more class. A class is split
    only if it alone is more than a flight. Of all ways to join neighbours the fewest flights are taken, and
    of those the most even (least sum of squares): exact, by the cuts before each class, time n² for n classes.
    """
    parts: list[tuple[int, ...]] = []
    placed = sorted(entrants, key=lambda one: (_class_of(one, limits), one.lot))
    for _, group in groupby(placed, key=lambda one: _class_of(one, limits)):
        parts += by_opener(list(group), most)
    openers = {one.lifter_id: (one.opener is None, one.opener or Fraction(0), one.lot) for one in entrants}
    joined = _joined(tuple(len(part) for part in parts), most)
    flights, at = [], 0
    for count in joined:
        together = [lifter_id for part in parts[at : at + count] for lifter_id in part]
        flights.append(tuple(sorted(together, key=lambda lifter_id: openers[lifter_id])))
        at += count
    return tuple(flights)


def propose(
    entrants: Sequence[Entrant],
    limits: Sequence[Fraction],
    most: int,
    cost: Callable[[Flights], Cost],
) -> tuple[Proposal[Cost], ...]:
    """Both proposals (by class only where there are limits), each with what it costs."""
    made = {"By opener": by_opener(entrants, most)}
    if limits:
        made["By body-weight class"] = by_class(entrants, limits, most)
    return tuple(Proposal(name, flights, cost(flights)) for name, flights in made.items())


def openers_cost(
    request: PlanRequest, budget: Budget | None = None, departure: Departure | None = None
) -> Callable[[Sequence[Sequence[Fraction]]], Handled]:
    """The cost of the openers' rounds by a plan with this equipment, these loading rules and this measure.

    Each flight starts with an empty bar, so that proposals of several flights compare alike, and is planned
    within the budget.
    """

    def cost(rounds: Sequence[Sequence[Fraction]]) -> Handled:
        plates, mass, left_out = 0, Fraction(0), 0
        for one in rounds:
            targets = tuple(weight for weight in sorted(one) if loadable(request.equipment, weight))
            left_out += len(one) - len(targets)
            total = plan(replace(request, targets=targets, start=()), budget, departure).total
            plates, mass = plates + total.plates, mass + total.mass
        ends = request.equipment.implement.ends
        return Handled(plates * ends, mass * ends, left_out)

    return cost


def _class_of(one: Entrant, limits: Sequence[Fraction]) -> int:
    """The place of the lifter's class; the class above all limits is the last but one, unknown the last."""
    if one.body_weight is None:
        return len(limits) + 1
    weight = one.body_weight
    return next((at for at, limit in enumerate(limits) if weight <= limit), len(limits))


def _balanced(ids: Sequence[int], most: int) -> Flights:
    if most < 1:
        raise ValueError("A flight needs room for at least one lifter.")
    if not ids:
        return ()
    count = -(-len(ids) // most)
    small, more = divmod(len(ids), count)
    sizes = [small + (at < more) for at in range(count)]
    starts = [sum(sizes[:at]) for at in range(count)]
    return tuple(tuple(ids[start : start + size]) for start, size in zip(starts, sizes, strict=True))


def _joined(sizes: tuple[int, ...], most: int) -> tuple[int, ...]:
    """How many neighbouring parts make each flight: fewest flights, then most even, then fuller first."""

    @cache
    def best(at: int) -> tuple[int, int, tuple[int, ...]]:
        if at == len(sizes):
            return 0, 0, ()
        ways, together = [], 0
        for end in range(at, len(sizes)):
            together += sizes[end]
            if together > most:
                break
            flights, squares, rest = best(end + 1)
            ways.append((flights + 1, squares + together**2, (end + 1 - at, *rest)))
        return min(ways, key=lambda way: (way[0], way[1], [-count for count in way[2]]))

    return best(0)[2]
