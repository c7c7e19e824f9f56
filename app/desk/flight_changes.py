"""One flight or one lifter at a time: moved, renamed, given a time. Also in the middle of the meet."""

from __future__ import annotations

from datetime import UTC, date, datetime, time, timedelta

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.desk.flight_names import flight_rows, meet_flight_names
from app.desk.flights import new_flight, remove_row
from app.desk.setup import checked_name
from app.meet.model import Lifter
from app.store.picture import Picture, get
from app.store.tables import AttemptRow, FlightRow, LifterRow

NEW = "new"
LONG_PAST = timedelta(hours=6)  # a time that has passed by more than this is meant for the next day


def move_lifter(desk: Desk, platform_id: int, lifter_id: int, from_flight: int, to: str, *, who: str) -> str:
    """Put a lifter into another flight of the session (``to``: its id, or "new").

    Not while the crew is loading for that lifter. ``from_flight`` is where the person saw them.
    """
    with platform_entry(desk, platform_id, who) as work:
        now = work.picture()
        session_id, lifter = _lifter(now, lifter_id)
        if lifter.flight_id != from_flight:
            there = get(work.session, FlightRow, lifter.flight_id, "flight").name
            raise SomebodyWasFirst(
                f"{lifter.name} has been moved to {there} meanwhile. Look, and move again."
            )
        _check_not_in_hand(work, now, lifter)
        rows = {str(row.id): row for row in flight_rows(work.session, session_id)}
        if to != NEW and to not in rows:
            raise NotAllowedNow("Choose a flight of the same session: only its lifts are lifted there.")
        flight = new_flight(work, session_id, len(rows)) if to == NEW else rows[to]
        if flight.id == from_flight:
            return f"{lifter.name} is in {flight.name} already."
        get(work.session, LifterRow, lifter_id, "lifter").flight_id = flight.id or 0
        work.what = f"{lifter.name} moved from {rows[str(from_flight)].name} to {flight.name}"
        return f"{work.what}."


def _lifter(now: Picture, lifter_id: int) -> tuple[int, Lifter]:
    for session_id, _, programme in now.sessions:
        for lifter in programme.lifters:
            if lifter.id == lifter_id:
                return session_id, lifter
    raise NotAllowedNow("This lifter does not lift on this platform. Load the page again.")


def _check_not_in_hand(work: Work, now: Picture, lifter: Lifter) -> None:
    if now.bar.hand is None:
        return
    attempt = work.session.get(AttemptRow, now.bar.hand.attempt_id)
    if attempt is not None and attempt.lifter_id == lifter.id:
        raise NotAllowedNow(
            f"The crew is loading for {lifter.name} now. Move them after this lift, or pass the attempt first."
        )


def save_flight(desk: Desk, platform_id: int, flight_id: int, name: str, starts: str, *, who: str) -> str:
    """The flight's name, unique in the meet, and when it starts (empty: not said)."""
    name = checked_name(name, "the flight")
    with platform_entry(desk, platform_id, who) as work:
        row = _flight(work, flight_id)
        taken = meet_flight_names(work.session, work.meet_id)
        if any(one.casefold() == name.casefold() for other, one in taken.items() if other != flight_id):
            raise NotAllowedNow(
                f"There is already a flight called “{name}” in this meet. Choose another name."
            )
        old = row.name
        told = []
        if old != name:
            row.name = name
            told.append(f"{old} is now called {name}")
        if starts.strip() != show_start(row.starts_at, work.now):
            row.starts_at = read_start(starts, work.now)
            when = show_start(row.starts_at, work.now)
            told.append(f"{name} starts at {when}" if when else f"{name} has no time")
        work.what = "; ".join(told)
        return f"{work.what}." if told else f"{name} is as it was."


def remove_flight(desk: Desk, platform_id: int, flight_id: int, *, who: str) -> str:
    """Take a flight out that nobody is in."""
    with platform_entry(desk, platform_id, who) as work:
        row = _flight(work, flight_id)
        if any(one.flight_id == flight_id for _, _, p in work.picture().sessions for one in p.lifters):
            raise NotAllowedNow(f"There are lifters in {row.name}. Move them first.")
        work.what = f"{row.name} taken out"
        told = f"{row.name} is taken out."
        remove_row(work, row)
        return told


def _flight(work: Work, flight_id: int) -> FlightRow:
    if all(one.id != flight_id for _, _, p in work.picture().sessions for one in p.flights):
        raise NotAllowedNow("This flight is not on this platform any more. Load the page again.")
    return get(work.session, FlightRow, flight_id, "flight")


def read_start(text: str, now: datetime) -> datetime | None:
    """A start as typed: ``09:30`` is the next such moment (or one just past), ``2026-03-08 09:30`` names its day.

    Read in the time zone of this machine, kept in UTC.
    """
    text = text.strip()
    if not text:
        return None
    here = now.astimezone()
    day, _, hour = text.replace("T", " ").rpartition(" ")
    try:
        at = time.fromisoformat(hour.replace(".", ":").zfill(5))
        on = date.fromisoformat(day.strip()) if day else here.date()
    except ValueError:
        raise NotAllowedNow(
            f"Start: “{text}” is not a time. Type it like 09:30, or 2026-03-08 09:30 for another day."
        ) from None
    days = [on] if day else [on + timedelta(days=step) for step in (-1, 0, 1)]
    starts = [datetime.combine(one, at).astimezone(UTC) for one in days]
    return next((start for start in starts if now - start <= LONG_PAST), starts[-1])


def show_start(start: datetime | None, now: datetime) -> str:
    """The start as it is typed; with its day where the time alone would be read as another day's."""
    if start is None:
        return ""
    short = start.astimezone().strftime("%H:%M")
    return short if read_start(short, now) == start else start.astimezone().strftime("%Y-%m-%d %H:%M")
