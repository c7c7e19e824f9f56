"""Lifters on the day: withdrawn or back again, a fourth attempt for a record, and who enters for a flight."""

from __future__ import annotations

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import NotAllowedNow
from app.meet.horizon import Programme
from app.meet.model import Lifter, Result
from app.store.picture import get
from app.store.tables import AttemptRow, FlightRow, LifterRow


def withdraw(desk: Desk, platform_id: int, lifter_id: int, *, back: bool, who: str) -> str:
    """A lifter leaves the meet (hurt, gone, no-show), or is back. What has been lifted stays as it is."""
    with platform_entry(desk, platform_id, who) as work:
        _, lifter = find_lifter(work, lifter_id)
        check_owner(work, lifter.flight_id)
        row = get(work.session, LifterRow, lifter_id, "lifter")
        row.withdrawn = not back
        work.what = f"{lifter.name} {'is back' if back else 'withdraws'}"
        return f"{work.what}."


def grant_fourth(desk: Desk, platform_id: int, lifter_id: int, lift_id: int, *, who: str) -> str:
    """A fourth attempt for a record, where the rules have it: after the third, outside the order of the round."""
    with platform_entry(desk, platform_id, who) as work:
        programme, lifter = find_lifter(work, lifter_id)
        check_owner(work, lifter.flight_id)
        if not programme.rules.fourth_for_record:
            raise NotAllowedNow(
                "The rules of this session have no fourth attempt. The Rules page can allow it."
            )
        attempts = {a.number: a for a in programme.of_lift(lift_id).get(lifter_id, ())}
        if 4 in attempts:
            raise NotAllowedNow(f"{lifter.name} has a fourth attempt already.")
        if 3 not in attempts or attempts[3].result is Result.OPEN:
            raise NotAllowedNow(f"{lifter.name} has not taken the third attempt yet.")
        work.session.add(AttemptRow(lifter_id=lifter_id, lift_id=lift_id, number=4, record=True))
        work.what = f"{lifter.name} is granted a fourth attempt for a record"
        return f"{work.what}. Hand in its weight."


def find_lifter(work: Work, lifter_id: int) -> tuple[Programme, Lifter]:
    """A lifter of this platform with the session."""
    for _, _, programme in work.picture().sessions:
        for lifter in programme.lifters:
            if lifter.id == lifter_id:
                return programme, lifter
    raise NotAllowedNow("This lifter is not on this platform.")


def take_over(desk: Desk, platform_id: int, flight_id: int, *, who: str) -> str:
    """This official enters for the flight from now on; whoever did before only sees."""
    with platform_entry(desk, platform_id, who) as work:
        row = _flight(work, flight_id)
        before = row.owner
        row.owner = who
        work.what = f"{who} enters for {row.name}{f' (before: {before})' if before else ''}"
        return f"{work.what}."


def hand_back(desk: Desk, platform_id: int, flight_id: int, *, who: str) -> str:
    """Nobody in particular enters for the flight: anybody at the table may."""
    with platform_entry(desk, platform_id, who) as work:
        row = _flight(work, flight_id)
        row.owner = ""
        work.what = f"{row.name} is free for anybody at the table"
        return f"{work.what}."


def _flight(work: Work, flight_id: int) -> FlightRow:
    if all(one.id != flight_id for _, _, p in work.picture().sessions for one in p.flights):
        raise NotAllowedNow("This flight is not on this platform.")
    return get(work.session, FlightRow, flight_id, "flight")


def check_owner(work: Work, flight_id: int) -> None:
    """Refuse an entry for a flight that another official has taken; taking over is explicit."""
    owner = get(work.session, FlightRow, flight_id, "flight").owner
    if owner and owner != work.who:
        raise NotAllowedNow(f"{owner} enters for this flight. Take it over first, if that is agreed.")
