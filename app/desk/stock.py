"""Plates on the move: what the meet owns, pieces lent from one platform to another, a broken one taken out."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

from sqlmodel import Session, select

from app.desk.entry import Desk, Work, meet_entry, platform_entry
from app.desk.equipment import MOST_PIECES, Form, check_room, check_searchable, unchanged
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.loading.mass import parse_mass, show_mass
from app.meet.platform import Bar
from app.store.picture import Picture, get, picture
from app.store.tables import MeetRow, PlateRow, PlatformRow


def owned_seen(meet: MeetRow) -> str:
    """Names what the meet owns as a page showed it."""
    return "-" if meet.owned is None else ",".join(f"{face}:{count}" for face, count in meet.owned.items())


def save_owned(
    desk: Desk, meet_id: int, rows: Sequence[Mapping[str, str]] | None, seen: str, *, who: str
) -> str:
    """These are all the plates that the meet owns; None: from now on nobody counts them.

    A row without a count is left out. Refused when more than that stand at the platforms.
    """
    with meet_entry(desk, meet_id, who) as work:
        meet = get(work.session, MeetRow, meet_id, "meet")
        if owned_seen(meet) != seen:
            raise SomebodyWasFirst("Somebody changed the plates of the meet since. Look, and save again.")
        owned = None if rows is None else _read_owned(rows)
        if meet.owned != owned:
            meet.owned = owned
        work.what = "plates of the meet are not counted" if owned is None else "plates that the meet owns"
        return "The plates of the meet are not counted." if owned is None else "What the meet owns is kept."


def _read_owned(rows: Sequence[Mapping[str, str]]) -> dict[str, int]:
    owned: dict[Fraction, int] = {}
    wrong: list[str] = []
    for number, row in enumerate(rows, start=1):
        if not row.get("face", "").strip() or not row.get("count", "").strip():
            continue
        form = Form(row, f"Row {number}")
        face, count = form.mass("face", "face value"), form.count()
        if face is not None and face in owned:
            form.wrong.append(f"Row {number}: {show_mass(face)} stands twice. Add the counts together.")
        if face is not None:
            owned[face] = count
        wrong += form.wrong
    if not owned and not wrong:
        wrong.append("Type how many of each plate the meet owns, or do not count them.")
    if wrong:
        raise NotAllowedNow(" ".join(wrong))
    return {show_mass(face): owned[face] for face in sorted(owned, reverse=True)}


def lend(desk: Desk, platform_id: int, to_id: int, face: str, pieces: str, seen: str, *, who: str) -> str:
    """Move pieces of one face to another platform of the meet, in one entry.

    Refused when the lender has not so many, or needs them for its bar or for the change that its crew was shown.
    """
    with platform_entry(desk, platform_id, who) as work:
        now = unchanged(work, seen)
        row, count = _plate(work.session, platform_id, face), _pieces(pieces)
        other = _other(work, to_id)
        _check_free(now, row, count)
        row.count -= count
        there = _same_plate(work.session, other.id or 0, row)
        there.count += count
        if there.count > MOST_PIECES:
            raise NotAllowedNow(f"More than {MOST_PIECES} pieces of one plate at {other.name}.")
        work.session.flush()
        for one in (now.platform_id, other.id or 0):
            after = picture(work.session, one)
            check_room(after)
            check_searchable(after)
        work.what = f"{count} of the {show_mass(row.face)}s lent from {now.platform} to {other.name}"
        return f"{work.what}."


def _plate(session: Session, platform_id: int, face: str) -> PlateRow:
    try:
        value = parse_mass(face.strip().replace(",", "."))
    except ValueError:
        raise NotAllowedNow("Choose one of the plates of this platform.") from None
    row = session.exec(
        select(PlateRow).where(PlateRow.platform_id == platform_id, PlateRow.face == value)
    ).first()
    if row is None:
        raise NotAllowedNow(f"There is no {show_mass(value)} at this platform. Load the page again.")
    return row


def _pieces(text: str) -> int:
    text = text.strip()
    if text.isascii() and text.isdigit() and 0 < len(text) <= 3 and 0 < int(text) <= MOST_PIECES:
        return int(text)
    raise NotAllowedNow(f"Pieces: “{text}” is not a whole number from 1 to {MOST_PIECES}.")


def _other(work: Work, to_id: int) -> PlatformRow:
    other = work.session.get(PlatformRow, to_id)
    if other is None or other.meet_id != work.meet_id or other.id == work.platform_id:
        raise NotAllowedNow("Choose another platform of this meet.")
    return other


def _check_free(now: Picture, row: PlateRow, count: int) -> None:
    name = f"{show_mass(row.face)}s"
    if count > row.count:
        raise NotAllowedNow(f"{now.platform} has only {row.count} of the {name}.")
    if now.bar.carries is None and now.bar.hand is None:
        raise NotAllowedNow(
            f"Nobody knows what is on the bar at {now.platform}. Say it at the Table first, then lend."
        )
    needed = in_use(now.bar, _ends(now), row.face)
    if row.count - count < needed:
        free = row.count - needed
        raise NotAllowedNow(
            f"{needed} of the {row.count} {name} at {now.platform} are on the bar or in the change its crew was "
            f"shown. {f'At most {free} can be lent' if free > 0 else 'None can be lent'} now."
        )


def in_use(bar: Bar, ends: int, face: Fraction) -> int:
    """Pieces of a face that hang on the bar, or will when the change that is shown is made; all ends together."""
    stacks = [bar.carries or ()]
    if bar.hand is not None:
        stacks += [bar.hand.before or (), bar.hand.stack]
    return ends * max(stack.count(face) for stack in stacks)


def _ends(now: Picture) -> int:
    known = [tool.implement.ends for tool in now.tools if tool.id == now.implement_id]
    return known[0] if known else max((tool.implement.ends for tool in now.tools), default=1)


def _same_plate(session: Session, platform_id: int, like: PlateRow) -> PlateRow:
    """The row of this face at a platform; made when it has none, with the sizes that the plates have."""
    query = select(PlateRow).where(PlateRow.platform_id == platform_id, PlateRow.face == like.face)
    row = session.exec(query).first()
    if row is None:
        row = PlateRow(
            platform_id=platform_id,
            face=like.face,
            count=0,
            thickness_mm=like.thickness_mm,
            diameter_mm=like.diameter_mm,
            colour=like.colour,
        )
        session.add(row)
    return row


def take_out(desk: Desk, platform_id: int, face: str, seen: str, *, who: str) -> str:
    """One piece is broken or missing. If the change that is shown needs it, the crew is asked what is on the bar."""
    with platform_entry(desk, platform_id, who) as work:
        now = unchanged(work, seen)
        row = _plate(work.session, platform_id, face)
        if not row.count:
            raise NotAllowedNow(f"There is no {show_mass(row.face)} left to take out.")
        row.count -= 1
        work.what = f"{now.platform}: one {show_mass(row.face)} taken out of stock"
        left = f"{row.count} {'are' if row.count != 1 else 'is'} left"
        odd = _ends(now) == 2 and row.count % 2 == 1
        return f"One {show_mass(row.face)} is taken out: {left}{', one of them without a partner' if odd else ''}."
