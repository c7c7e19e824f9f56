"""Bring back from paper: a round that was run on cards while the screens were away, typed in at one go."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import NotAllowedNow
from app.desk.people import check_owner
from app.desk.subject import Seen, Subject, find_subject, stamp
from app.loading.chart import loadable
from app.meet.declare import Refused, read_weight, sentence
from app.meet.model import Result
from app.meet.platform import found
from app.store.picture import store_bar


@dataclass(frozen=True, slots=True)
class PaperLine:
    """One line of a card: the attempt as the page showed it, the weight and the result as written on paper."""

    seen: Seen
    weight: str
    result: str  # "good", "missed", "passed", or "" for not lifted yet


def bring_back(desk: Desk, platform_id: int, lines: Sequence[PaperLine], *, who: str) -> str:
    """Take a round in from paper, all of it or nothing. The bar is then unknown: the next change is a full build.

    What was lifted was lifted: the rules of handing in and changing are not asked, only whether the weight can
    be made with this platform's plates. A line that a colleague has changed since stops the whole.
    """
    with platform_entry(desk, platform_id, who) as work:
        wrong: list[str] = []
        taken = sum(_take(work, line, wrong) for line in lines)
        if wrong:
            raise NotAllowedNow(" ".join(wrong))
        if not taken:
            return "Nothing was typed that is not here already."
        bar = work.picture().bar
        store_bar(work.platform, found(bar, None))
        work.what = f"brought back from paper: {taken} attempt{'s' if taken != 1 else ''}"
        return f"{work.what[0].upper()}{work.what[1:]}. The next change is a full build from empty."


def _take(work: Work, line: PaperLine, wrong: list[str]) -> bool:
    """One line; True if it changed anything."""
    subject = find_subject(work, line.seen)
    check_owner(work, subject.lifter.flight_id)
    row = subject.row
    before = (row.weight, row.result)
    if line.weight.strip():
        read = read_weight(line.weight)
        if isinstance(read, Refused):
            wrong.append(f"{subject.name}: {sentence(read)}")
            return False
        if not loadable(subject.now.equipment(subject.attempt.lift_id), read.weight):
            wrong.append(
                f"{subject.name}: {line.weight.strip()} cannot be made with the plates at this platform."
            )
            return False
        row.weight = read.weight
    _judge(work, subject, line.result, wrong)
    if (row.weight, row.result) == before:
        return False
    stamp(row, work)
    return True


def _judge(work: Work, subject: Subject, result: str, wrong: list[str]) -> None:
    if not result:
        return
    known: Mapping[str, Result] = {one.value: one for one in Result if one is not Result.OPEN}
    if result not in known:
        wrong.append(f"{subject.name}: “{result}” is no result.")
    elif subject.row.weight is None and result != Result.PASSED:
        wrong.append(f"{subject.name}: a lift has a weight. Type it too.")
    else:
        subject.row.result = result
        if result != Result.PASSED:
            subject.row.lifted_at = subject.row.lifted_at or work.now
