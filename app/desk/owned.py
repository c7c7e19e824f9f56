"""Plates that the meet owns, counted once: no plate stands at two platforms."""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction

from sqlmodel import Session, col, select

from app.desk.errors import NotAllowedNow
from app.loading.mass import parse_mass, show_mass
from app.store.journal import Edit
from app.store.tables import MeetRow, PlateRow, PlatformRow

Placed = dict[Fraction, list[tuple[str, int]]]
"""By face: at which platforms how many pieces stand."""


def owned_pieces(meet: MeetRow | None) -> dict[Fraction, int] | None:
    """How many pieces of each face the meet owns; None where it was never said."""
    if meet is None or meet.owned is None:
        return None
    return {parse_mass(face): count for face, count in meet.owned.items()}


def placed(session: Session, meet_id: int) -> Placed:
    """Where the meet's plates stand, heaviest first."""
    query = (
        select(PlateRow, PlatformRow)
        .join(PlatformRow, col(PlatformRow.id) == PlateRow.platform_id)
        .where(PlatformRow.meet_id == meet_id)
        .order_by(col(PlatformRow.id))
    )
    found: Placed = {}
    for plate, platform in session.exec(query):
        if plate.count:
            found.setdefault(plate.face, []).append((platform.name, plate.count))
    return dict(sorted(found.items(), reverse=True))


def pieces_left(session: Session, meet_id: int, face: Fraction, wanted: int) -> int:
    """How many of the pieces that another platform wants the meet still has; all of them where it does not count."""
    owned = owned_pieces(session.get(MeetRow, meet_id))
    if owned is None:
        return wanted
    stand = sum(count for _, count in placed(session, meet_id).get(face, []))
    return max(0, min(wanted, owned.get(face, 0) - stand))


def check_owned(session: Session, meet_id: int, edits: Iterable[Edit]) -> None:
    """Refuse an entry, whatever it is (an undo too), after which more plates stand somewhere than the meet owns."""
    faces = _touched(session, edits)
    if faces is not None and not faces:
        return
    owned = owned_pieces(session.get(MeetRow, meet_id))
    if owned is None:
        return
    wrong = []
    for face, places in placed(session, meet_id).items():
        total, have = sum(count for _, count in places), owned.get(face, 0)
        if total > have and (faces is None or face in faces):
            where = ", ".join(f"{name} {count}" for name, count in places)
            wrong.append(
                f"{show_mass(face)}: {total} would stand at the platforms ({where}), and the meet owns {have}."
            )
    if wrong:
        raise NotAllowedNow(
            f"{' '.join(wrong)} A plate is counted once: lend it from one platform to the other, "
            "or correct on the Meet page what the meet owns."
        )


def _touched(session: Session, edits: Iterable[Edit]) -> set[Fraction] | None:
    """The faces of which an entry may have put more somewhere; None: of all, what is owned was changed."""
    faces: set[Fraction] = set()
    for edit in edits:
        if edit["table"] == "meet" and "owned" in (edit["after"] or {}):
            return None
        if edit["table"] == "plate" and edit["after"] is not None:
            faces.add(session.get_one(PlateRow, edit["id"]).face)
    return faces
