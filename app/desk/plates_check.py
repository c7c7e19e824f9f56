"""Will the plates do? Each lift of a platform against its stock, the day before."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from app.desk.entry import Desk
from app.desk.planned import wish_of
from app.desk.roster import pictures
from app.desk.wish import plan_request
from app.loading.chart import TooManyWeights
from app.loading.equipment import Plate
from app.meet.horizon import Programme
from app.meet.model import Lift
from app.meet.presets import PRESETS, exact
from app.meet.stock_check import Borrowed, StockCheck, best_to_borrow, check_stock
from app.planning import Budget, Refusal
from app.store.engine import reading
from app.store.picture import NotFound, Picture, get, picture
from app.store.tables import PlatformRow

Elsewhere = Mapping[Fraction, tuple[tuple[int, str, int], ...]]
"""By face: the other platforms of the meet that have such plates (id and name), and how many pieces."""


@dataclass(frozen=True, slots=True)
class LiftCheck:
    """One lift's weights against the stock. ``check`` is None without openers, or when ``refused`` says why."""

    lift: Lift
    session: str
    openers: int
    check: StockCheck | None
    refused: str = ""


@dataclass(frozen=True, slots=True)
class PlatformCheck:
    """Every lift of a platform, and which plates stand at the meet's other platforms."""

    now: Picture
    lifts: tuple[LiftCheck, ...]
    elsewhere: Elsewhere


def check_platform(desk: Desk, platform_id: int) -> PlatformCheck:
    """Every lift's likely weights, from the lightest opener to the heaviest and some more, against the stock."""
    with reading(desk.engine) as session:
        meet_id = get(session, PlatformRow, platform_id, "platform").meet_id
        seen = pictures(session, meet_id)
    now = next(one for one in seen if one.platform_id == platform_id)
    others = [one for one in seen if one.platform_id != platform_id]
    lendable = lendable_plates(now, others)
    checks = tuple(
        _check(now, name, programme, lift, lendable)
        for _, name, programme in now.sessions
        for lift in programme.lifts
    )
    return PlatformCheck(now, checks, _elsewhere(others))


def _check(
    now: Picture, session: str, programme: Programme, lift: Lift, lendable: tuple[Plate, ...]
) -> LiftCheck:
    openers = [weight for flight in flights_openers(programme, lift.id) for weight in flight]
    if not openers:
        return LiftCheck(lift, session, 0, None)
    try:
        check = check_stock(now.equipment(lift.id), openers, lift.step, lendable)
    except TooManyWeights as refused:
        return LiftCheck(lift, session, len(openers), None, str(refused))
    return LiftCheck(lift, session, len(openers), check)


def flights_openers(programme: Programme, lift_id: int) -> list[list[Fraction]]:
    """The openers that have been handed in for a lift, flight by flight in the order of the day."""
    openers = {
        lifter_id: attempts[0].weight
        for lifter_id, attempts in programme.of_lift(lift_id).items()
        if attempts[0].number == 1
    }
    found = []
    for flight in sorted(programme.flights, key=lambda one: one.position):
        there = [openers.get(one.id) for one in programme.of_flight(flight.id) if not one.withdrawn]
        found.append([weight for weight in there if weight is not None])
    return found


def lendable_plates(now: Picture, others: list[Picture]) -> tuple[Plate, ...]:
    """What could be borrowed: kinds of the meet's other platforms, then of the usual set that is most like this."""
    owned = {item.plate.face for item in now.stock}
    found: dict[Fraction, Plate] = {}
    for other in others:
        found |= {item.plate.face: item.plate for item in other.stock if item.plate.face not in owned}
    usual = [
        {Fraction(plate.face): plate for plate in preset.plates}
        for preset in PRESETS
        if preset.unit == now.unit
    ]
    for face, plate in max(usual, key=lambda one: len(owned & one.keys()), default={}).items():
        if face not in owned:
            found.setdefault(face, Plate(face, 0, exact(plate.thickness_mm), exact(plate.diameter_mm)))
    return tuple(found.values())


def _elsewhere(others: list[Picture]) -> Elsewhere:
    found: dict[Fraction, tuple[tuple[int, str, int], ...]] = {}
    for other in others:
        for item in other.stock:
            if item.plate.count:
                place = (other.platform_id, other.platform, item.plate.count)
                found[item.plate.face] = (*found.get(item.plate.face, ()), place)
    return found


def worth_borrowing(desk: Desk, platform_id: int, lift_id: int, budget: Budget) -> Borrowed | None:
    """The one borrowed pair (piece for a belt) that saves most over the openers of all flights; None: none does.

    Plans the openers once for every kind of plate, each within the budget.
    """
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
        if lift_id not in now.loading:
            raise NotFound("lift")
        others = [one for one in pictures(session, now.meet_id) if one.platform_id != platform_id]
    flights = flights_openers(now.programme(lift_id), lift_id)
    try:
        request = plan_request(now.unit, now.equipment(lift_id), wish_of(now, lift_id), (), ())
        return best_to_borrow(request, flights, lendable_plates(now, others), budget)
    except (Refusal, TooManyWeights):
        return None  # the settings or the plates cannot be planned with: the lift's own page says why
