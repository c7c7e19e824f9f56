"""After an error in loading: what was on the bar, what the rules allow, and the remedy that is taken."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import NotAllowedNow
from app.desk.people import check_owner
from app.desk.subject import Seen, Subject, find_subject, stamp
from app.loading.equipment import Stack
from app.loading.mass import parse_mass, show_mass
from app.loading.stack import total_mass
from app.meet.misload import ERROR_WORDS, Error, Found, Remedy, find_error, remedies
from app.meet.model import Result
from app.meet.platform import Condition, found
from app.store.engine import reading
from app.store.picture import get, store_bar
from app.store.tables import PlatformRow


@dataclass(frozen=True, slots=True)
class Inquiry:
    """What is known of an error, and what may be done about it."""

    name: str
    called: Fraction
    stack: Stack
    ends: int
    found: Found | None
    words: str
    remedies: tuple[Remedy, ...]


def inquire(desk: Desk, platform_id: int, seen: Seen, ends: Sequence[str], kind: str) -> Inquiry:
    """Judge an error without entering anything. ``ends`` as typed; ``kind`` bar, disturbed or spoiled."""
    with reading(desk.engine) as session:
        meet_id = get(session, PlatformRow, platform_id, "platform").meet_id
        work = Work(session, meet_id, platform_id, desk.clock(), "")
        return _inquiry(find_subject(work, seen), ends, kind)


def _inquiry(subject: Subject, ends: Sequence[str], kind: str) -> Inquiry:
    attempt = subject.attempt
    if attempt.weight is None:
        raise NotAllowedNow(f"{subject.name} has no weight, so nothing can have been loaded for it.")
    error = _error(subject, attempt.weight, ends, kind)
    record = attempt.record
    choices = (
        ()
        if error is None
        else remedies(subject.rules, error, attempt.result, subject.now.unit, record=record)
    )
    words = "what was on the bar is what was called" if error is None else ERROR_WORDS[error.error]
    hand = subject.now.bar.hand
    return Inquiry(
        name=subject.name,
        called=attempt.weight,
        stack=hand.stack if hand is not None and subject.in_hand else (),
        ends=subject.now.equipment(attempt.lift_id).implement.ends,
        found=error,
        words=words,
        remedies=choices,
    )


def _error(subject: Subject, called: Fraction, ends: Sequence[str], kind: str) -> Found | None:
    if kind in (Error.DISTURBED, Error.SPOILED):
        return Found(Error(kind), called, called)
    if kind != "bar":
        raise NotAllowedNow("Say what went wrong: the load, a disturbance, or a loader's mistake.")
    equipment = subject.now.equipment(subject.attempt.lift_id)
    stacks = [read_end(end) for end in ends]
    if len(stacks) != equipment.implement.ends:
        raise NotAllowedNow("Say what was on each end.")
    return find_error(equipment, called, stacks)


def read_end(text: str) -> Stack:
    """``25 15 2.5`` or ``25 + 15 + 2.5`` as the plates of one end; empty means nothing was on."""
    faces = []
    for word in text.replace("+", " ").replace(";", " ").split():
        try:
            face = parse_mass(word.replace(",", "."))
        except ValueError:
            raise NotAllowedNow(f"“{word[:20]}” is not a plate. Type the faces, such as 25 15 2.5.") from None
        if not 0 < face <= 100:
            raise NotAllowedNow(f"There is no plate of {word[:20]}.")
        faces.append(face)
    if len(faces) > 40:
        raise NotAllowedNow("No bar holds so many plates.")
    return tuple(faces)


def take_remedy(
    desk: Desk, platform_id: int, seen: Seen, ends: Sequence[str], kind: str, choice: int, *, who: str
) -> str:
    """Take one of the remedies that :func:`inquire` gave for the same facts.

    A kept lift is recorded as the rules say; a retake opens the attempt again at the called weight and puts it
    where the rules put it; before the lift the crew is told to put the bar right from what is really on it, and
    after it the next change begins there.
    """
    with platform_entry(desk, platform_id, who) as work:
        subject = find_subject(work, seen)
        check_owner(work, subject.lifter.flight_id)
        inquiry = _inquiry(subject, ends, kind)
        if inquiry.found is None or not 0 <= choice < len(inquiry.remedies):
            raise NotAllowedNow("There is no such remedy for this. Say again what was on the bar.")
        remedy = inquiry.remedies[choice]
        _correct_the_bar(work, subject, _alike(ends) if kind == "bar" else None, kind)
        if remedy.place is not None:
            subject.row.result, subject.row.retake = Result.OPEN.value, remedy.place.value
            subject.row.lifted_at = None
            stamp(subject.row, work)
        elif remedy.recorded is not None and remedy.recorded != subject.attempt.weight:
            subject.row.weight = remedy.recorded
            stamp(subject.row, work)
        work.what = (
            f"{subject.name}: {inquiry.words}, called {show_mass(inquiry.called)}. {remedy.words.rstrip('.')}"
        )
        return f"{work.what}."


def _alike(ends: Sequence[str]) -> Stack | None:
    """What is on every end; None where the ends are not alike, which is no start for a change."""
    stacks = {read_end(end) for end in ends}
    return stacks.pop() if len(stacks) == 1 else None


def _correct_the_bar(work: Work, subject: Subject, stack: Stack | None, kind: str) -> None:
    if subject.attempt.result is Result.OPEN:
        _put_right(work, subject, stack)
    elif kind == "bar":
        _tell_what_was_on(work, subject, stack)


def _put_right(work: Work, subject: Subject, stack: Stack | None) -> None:
    """Not lifted yet: the bar is what it is. Unequal or disturbed ends cannot be a start: built from empty."""
    if not subject.in_hand:
        raise NotAllowedNow(f"The crew has not been shown a change for {subject.name}.")
    store_bar(work.platform, found(subject.now.bar, stack))


def _tell_what_was_on(work: Work, subject: Subject, stack: Stack | None) -> None:
    """Lifted already: the crew's next change was made from the load as shown, and must begin with the true one.

    Only while that bar still hangs as it was: it was lifted last and nobody has confirmed another load since. Of
    two belts it is the one whose believed load makes the weight called.
    """
    bar, attempt = subject.now.bar, subject.attempt
    times = [a.lifted_at for _, _, p in subject.now.sessions for a in p.attempts if a.lifted_at is not None]
    if bar.condition is Condition.LIFTING or attempt.lifted_at is None or attempt.lifted_at < max(times):
        return
    equipment = subject.now.equipment(attempt.lift_id)
    if bar.carries is not None and total_mass(equipment, bar.carries) == attempt.weight:
        store_bar(work.platform, found(bar, stack))
    elif bar.spare and total_mass(equipment, bar.spare) == attempt.weight:
        store_bar(work.platform, replace(bar, spare=stack))
