"""The flights of a session and of the meet by name, and the name that a new one gets."""

from __future__ import annotations

from sqlmodel import Session, col, select

from app.store.picture import key
from app.store.tables import FlightRow, PlatformRow, SessionRow


def flight_rows(session: Session, session_id: int) -> list[FlightRow]:
    """The session's flights in their order."""
    query = select(FlightRow).where(FlightRow.session_id == session_id)
    return list(session.exec(query.order_by(col(FlightRow.position), col(FlightRow.id))).all())


def meet_flight_names(session: Session, meet_id: int) -> dict[int, str]:
    """Every flight of the meet, all platforms together."""
    query = (
        select(FlightRow)
        .join(SessionRow, col(SessionRow.id) == FlightRow.session_id)
        .join(PlatformRow, col(PlatformRow.id) == SessionRow.platform_id)
        .where(PlatformRow.meet_id == meet_id)
    )
    return {key(row): row.name for row in session.exec(query)}


def free_name(session: Session, meet_id: int) -> str:
    """The first of Flight A to Z, Flight 27 and on that no flight of the meet has."""
    taken = {name.casefold() for name in meet_flight_names(session, meet_id).values()}
    letters = [f"Flight {letter}" for letter in "ABCDEFGHIJKLMNOPQRSTUVWXYZ"]
    numbers = (f"Flight {number}" for number in range(27, 1000))
    return next(one for one in (*letters, *numbers) if one.casefold() not in taken)
