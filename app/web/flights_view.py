"""The flights of a session as the page shows them, and what each way to make them costs."""

from __future__ import annotations

from dataclasses import dataclass

from app.desk.flight_changes import NEW
from app.desk.flights import LIFTED, WAYS, Asked, Proposals, session_of
from app.loading.mass import show_mass
from app.meet.flights import Handled
from app.meet.horizon import Programme
from app.meet.model import Lifter
from app.store.picture import Picture


@dataclass(frozen=True, slots=True)
class LifterRow:
    """A lifter in the list of a flight."""

    id: int
    lot: int
    name: str
    body_weight: str
    openers: tuple[str, ...]
    withdrawn: bool


@dataclass(frozen=True, slots=True)
class FlightView:
    """One flight as it stands."""

    id: int
    name: str
    starts: str
    lifters: tuple[LifterRow, ...]
    others: tuple[tuple[str, str], ...]  # where its lifters may be moved
    too_many: bool
    here: bool  # it is on the platform


@dataclass(frozen=True, slots=True)
class FlightsView:
    """The flights of one session."""

    platform_id: int
    meet_id: int
    platform: str
    unit: str
    session_id: int
    session: str
    sessions: tuple[tuple[int, str], ...]
    lifts: tuple[tuple[str, str], ...]
    flights: tuple[FlightView, ...]
    most: int
    lifted: bool
    asked: Asked


@dataclass(frozen=True, slots=True)
class WayView:
    """One way to make flights: as they stand, or a proposal."""

    way: str  # "" for the flights as they stand
    name: str
    plates: int
    mass: str
    less: str  # against the flights as they stand
    left_out: int
    flights: tuple[tuple[str, ...], ...]


def flights_view(now: Picture, session_id: int, starts: dict[int | None, str], asked: Asked) -> FlightsView:
    """The page; ``starts`` by flight id, as typed. Raises NotFound for a session of another platform."""
    programme = session_of(now, session_id)
    names = {number: name for number, name, _ in now.sessions}
    return FlightsView(
        platform_id=now.platform_id,
        meet_id=now.meet_id,
        platform=now.platform,
        unit=now.unit,
        session_id=session_id,
        session=names[session_id],
        sessions=tuple(names.items()),
        lifts=tuple((str(lift.id), lift.name) for lift in programme.lifts),
        flights=tuple(
            _flight(now, programme, one.id, starts)
            for one in sorted(programme.flights, key=lambda flight: (flight.position, flight.id))
        ),
        most=now.rules[session_id].most_in_flight,
        lifted=any(attempt.result in LIFTED for attempt in programme.attempts),
        asked=asked,
    )


def _flight(now: Picture, programme: Programme, flight_id: int, starts: dict[int | None, str]) -> FlightView:
    lifters = programme.of_flight(flight_id)
    others = [(str(one.id), one.name) for one in programme.flights if one.id != flight_id]
    return FlightView(
        id=flight_id,
        name=programme.flight(flight_id).name,
        starts=starts.get(flight_id, ""),
        lifters=tuple(_lifter(programme, one) for one in lifters),
        others=(*others, (NEW, "a new flight")),
        too_many=sum(not one.withdrawn for one in lifters) > programme.rules.most_in_flight,
        here=now.flight_id == flight_id,
    )


def _lifter(programme: Programme, one: Lifter) -> LifterRow:
    openers = {
        a.lift_id: a.weight
        for a in programme.attempts
        if a.lifter_id == one.id and a.number == 1 and a.weight
    }
    return LifterRow(
        id=one.id,
        lot=one.lot,
        name=one.name,
        body_weight="" if one.body_weight is None else show_mass(one.body_weight),
        openers=tuple(show_mass(openers[x.id]) if x.id in openers else "" for x in programme.lifts),
        withdrawn=one.withdrawn,
    )


def ways(found: Proposals) -> list[WayView]:
    """The flights as they stand, then every proposal."""
    names = {one.id: one.name for one in found.programme.lifters}
    keys = {name: way for way, name in WAYS.items()}
    standing = tuple(
        tuple(one.name for one in found.programme.of_flight(flight.id)) for flight in found.programme.flights
    )
    rows = [_way("", found.standing, found, standing)]
    for one in found.made:
        named = tuple(tuple(names[lifter_id] for lifter_id in flight) for flight in one.flights)
        rows.append(_way(keys[one.name], one.cost, found, named))
    return rows


def _way(way: str, cost: Handled, found: Proposals, made: tuple[tuple[str, ...], ...]) -> WayView:
    return WayView(
        way=way,
        name=WAYS.get(way, "As they stand"),
        plates=cost.plates,
        mass=show_mass(cost.mass) if cost.mass else "0",
        less=_less(cost, found.standing, found.now.unit) if way else "",
        left_out=cost.left_out,
        flights=made,
    )


def _less(cost: Handled, standing: Handled, unit: str) -> str:
    """How much less (or more) is handled than with the flights as they stand."""
    parts = []
    for word, fewer, new, old in (
        ("plates", "fewer", cost.plates, standing.plates),
        (unit, "less", cost.mass, standing.mass),
    ):
        if old:
            share = round(100 * (new - old) / old)
            parts.append(
                f"{abs(share)} % {'more' if share > 0 else fewer} {word}" if share else f"as many {word}"
            )
    return ", ".join(parts)
