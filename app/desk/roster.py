"""The roster goes in and out as CSV: all of it or nothing of it."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from sqlmodel import Session, col, select

from app.desk.entry import Desk, Work, meet_entry
from app.desk.errors import WrongRoster
from app.desk.flight_names import flight_rows, free_name
from app.loading.equipment import Equipment
from app.meet.declare import Refused, decide
from app.meet.model import ROUNDS, Attempt, Result
from app.meet.roster_csv import Entry, read_roster, write_roster
from app.store.engine import reading
from app.store.picture import Picture, get, key, picture
from app.store.tables import AttemptRow, FlightRow, LifterRow, LiftRow, MeetRow, PlatformRow, RackRow

CORRECTED = "has lifted already; change its weight at the Table"


def pictures(session: Session, meet_id: int) -> list[Picture]:
    """Every platform of a meet."""
    get(session, MeetRow, meet_id, "meet")
    rows = session.exec(
        select(PlatformRow).where(PlatformRow.meet_id == meet_id).order_by(col(PlatformRow.id))
    )
    return [picture(session, key(row)) for row in rows]


def meet_ids(session: Session) -> list[int]:
    """The meets of this folder, oldest first."""
    return [key(row) for row in session.exec(select(MeetRow).order_by(col(MeetRow.id)))]


def lift_names(seen: Sequence[Picture]) -> list[str]:
    """The lifts of the meet in order, each name once."""
    return list(dict.fromkeys(lift.name for now in seen for _, _, p in now.sessions for lift in p.lifts))


def import_roster(desk: Desk, meet_id: int, text: str, *, who: str) -> str:
    """Take a roster in. A lot number that is already there updates that lifter; nobody is removed.

    Raises :class:`WrongRoster` with every wrong line; then nothing has been taken.
    """
    with meet_entry(desk, meet_id, who) as work:
        seen = pictures(work.session, meet_id)
        sessions = _Sessions(seen)
        found = read_roster(text, lift_names(seen), sessions.check_opener)
        wrong = [(one.line, one.because) for one in found.wrong]
        if not wrong:
            lines = _Lines(work, sessions)
            for entry in found.entries:
                wrong += [(entry.line, because) for because in lines.take(entry)]
        if wrong:
            raise WrongRoster(tuple(wrong))
        work.what = f"roster: {lines.added} lifters added, {lines.updated} updated"
        return f"{lines.added} lifters added, {lines.updated} updated."


def export_roster(desk: Desk, meet_id: int) -> str:
    """The roster as :func:`import_roster` takes it."""
    with reading(desk.engine) as session:
        seen = pictures(session, meet_id)
        entries = [entry for now in seen for entry in roster_entries(now)]
        return write_roster(sorted(entries, key=lambda one: (one.flight, one.lot)), lift_names(seen))


def roster_entries(now: Picture) -> list[Entry]:
    """The lifters of one platform as roster lines."""
    entries = []
    for _, _, programme in now.sessions:
        flights = {flight.id: flight.name for flight in programme.flights}
        for lifter in programme.lifters:
            openers = {
                programme.lift(a.lift_id).name: a.weight
                for a in programme.attempts
                if a.lifter_id == lifter.id and a.number == 1 and a.weight is not None
            }
            racks = {
                lift.name: now.racks[(lifter.id, lift.id)]
                for lift in programme.lifts
                if (lifter.id, lift.id) in now.racks
            }
            flight = flights[lifter.flight_id]
            entries.append(
                Entry(lifter.name, lifter.lot, flight, lifter.body_weight, openers, racks, now.platform)
            )
    return entries


class _Sessions:
    """Which session a lifter lifts in, and what its lifts are loaded with."""

    def __init__(self, seen: Sequence[Picture]) -> None:
        self.lifts: dict[int, dict[str, tuple[Equipment, Fraction, str, int]]] = {}
        self.platform: dict[int, str] = {}
        self.flights: dict[int, set[str]] = {}
        for now in seen:
            for session_id, _, programme in now.sessions:
                self.lifts[session_id] = {
                    lift.name: (now.equipment(lift.id), lift.step, now.unit, lift.id)
                    for lift in programme.lifts
                }
                self.platform[session_id] = now.platform.casefold()
                self.flights[session_id] = {flight.name.casefold() for flight in programme.flights}

    def of(self, platform: str, flight: str, lifts: Sequence[str]) -> int | None:
        """The only session that it can be: of that platform if one is named, with that flight, with all these
        lifts. None: there is none, or more than one."""
        here = [n for n, name in self.platform.items() if not platform or name == platform.casefold()]
        known = [n for n in here if flight.casefold() in self.flights[n]]
        fitting = [n for n in known or here if known or all(lift in self.lifts[n] for lift in lifts)]
        return fitting[0] if len(fitting) == 1 else None

    def check_opener(self, platform: str, flight: str, lift: str, weight: Fraction) -> Refused | None:
        session_id = self.of(platform, flight, [lift])
        if session_id is None:
            return None  # said once for the line, not once for each lift
        if lift not in self.lifts[session_id]:
            return Refused(f"{flight} does not lift {lift}.")
        equipment, step, unit, lift_id = self.lifts[session_id][lift]
        opener = Attempt(0, 0, lift_id, 1, None, Result.OPEN, 0)
        decision = decide(weight, opener, (), step, equipment, unit)
        return decision if isinstance(decision, Refused) else None


class _Lines:
    """Writes roster lines; what cannot be is returned as reasons, and the transaction is then given up."""

    def __init__(self, work: Work, sessions: _Sessions) -> None:
        self.work, self.sessions = work, sessions
        self.added = self.updated = 0
        self.flights: dict[tuple[int, str], int] = {}
        rows = work.session.exec(select(LifterRow).where(LifterRow.meet_id == work.meet_id))
        self.by_lot = {row.lot: row for row in rows}

    def take(self, entry: Entry) -> list[str]:
        row = self.by_lot.get(entry.lot)
        flight = entry.flight or self._standing(row)
        session_id = self.sessions.of(entry.platform, flight, list(entry.openers))
        if session_id is None:
            who = f"flight “{flight}”" if flight else entry.name
            return [f"it is not clear where {who} lifts. Add a column “platform” that names it."]
        if row is not None and row.name != entry.name:
            return [
                f"lot {entry.lot} is already {row.name}. Take a free lot number, or write the name the same."
            ]
        flight_id = self._flight(session_id, flight or self._first(session_id))
        if row is None:
            row = LifterRow(meet_id=self.work.meet_id, flight_id=flight_id, name=entry.name, lot=entry.lot)
            self.work.session.add(row)
            self.added += 1
        else:
            self.updated += 1
        row.flight_id = flight_id
        if entry.body_weight is not None:
            row.body_weight = entry.body_weight
        self.work.session.flush()
        return self._lifts(row, session_id, entry)

    def _standing(self, row: LifterRow | None) -> str:
        """Where a lifter that is here already lifts."""
        return "" if row is None else self.work.session.get_one(FlightRow, row.flight_id).name

    def _first(self, session_id: int) -> str:
        """Where a lifter goes whom nobody has placed: the session's first flight, to be parted on the Flights page."""
        rows = flight_rows(self.work.session, session_id)
        return rows[0].name if rows else free_name(self.work.session, self.work.meet_id)

    def _flight(self, session_id: int, name: str) -> int:
        place = (session_id, name.casefold())
        if place not in self.flights:
            rows = self.work.session.exec(select(FlightRow).where(FlightRow.session_id == session_id)).all()
            row = next((one for one in rows if one.name.casefold() == name.casefold()), None)
            if row is None:
                row = FlightRow(session_id=session_id, name=name, position=len(rows))
                self.work.session.add(row)
                self.work.session.flush()
            self.flights[place] = key(row)
        return self.flights[place]

    def _lifts(self, lifter: LifterRow, session_id: int, entry: Entry) -> list[str]:
        reasons: list[str] = []
        lifts = self.work.session.exec(select(LiftRow).where(LiftRow.session_id == session_id)).all()
        for lift in lifts:
            attempts = self._attempts(key(lifter), key(lift))
            opener = entry.openers.get(lift.name)
            if opener is not None and attempts[1].weight != opener:
                if attempts[1].result != Result.OPEN:
                    reasons.append(f"{lift.name} opener: {entry.name} {CORRECTED}.")
                    continue
                attempts[1].weight = opener
                attempts[1].version += 1
                attempts[1].entered_by, attempts[1].entered_at = self.work.who, self.work.now
            if lift.name in entry.racks:
                self._rack(key(lifter), key(lift), entry.racks[lift.name])
        return reasons

    def _attempts(self, lifter_id: int, lift_id: int) -> dict[int, AttemptRow]:
        query = select(AttemptRow).where(AttemptRow.lifter_id == lifter_id, AttemptRow.lift_id == lift_id)
        rows = {row.number: row for row in self.work.session.exec(query)}
        for number in ROUNDS:
            if number not in rows:
                rows[number] = AttemptRow(lifter_id=lifter_id, lift_id=lift_id, number=number)
                self.work.session.add(rows[number])
        return rows

    def _rack(self, lifter_id: int, lift_id: int, setting: str) -> None:
        query = select(RackRow).where(RackRow.lifter_id == lifter_id, RackRow.lift_id == lift_id)
        row = self.work.session.exec(query).first()
        if row is None:
            self.work.session.add(RackRow(lifter_id=lifter_id, lift_id=lift_id, setting=setting))
        elif row.setting != setting:
            row.setting = setting
