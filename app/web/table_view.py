"""The Table page as words: who is up, the order with the change each attempt needs, and the score so far."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime

from app.desk.bar import instruction_name
from app.desk.board import Board, Step, lifted_last
from app.loading.mass import show_mass
from app.meet.model import ROUNDS, Attempt, Lifter, Result, attempt_name
from app.meet.platform import Condition
from app.web.table_clock import DueLine, due_lines, pace_words, rest_words
from app.web.table_score import ScoreRow, score_rows
from app.web.views import PlateView
from app.web.words import clock_words, plate_views, side_words, stack_words


@dataclass(frozen=True, slots=True)
class Choice:
    """One flight and lift that the Table may look at."""

    text: str
    href: str
    looked_at: bool
    lifting: bool


@dataclass(frozen=True, slots=True)
class OrderRow:
    """One attempt still to come."""

    attempt_id: int
    version: int
    place: str
    lot: str
    lifter: str
    attempt: str
    weight: str  # what was handed in, "" when nobody did
    default: str  # what the rule gives when nobody does, "" for an opener
    step: str
    up: bool
    loaded: bool
    new_round: int  # the round that begins with this row, 0 when none does
    off: tuple[PlateView, ...]
    on: tuple[PlateView, ...]
    change: str  # "no change", "cannot be made", "build from empty", or "" when off and on say it
    rack: str
    why: str = ""  # why the stack is not the chart's
    marks: tuple[str, ...] = ()  # "record", "retake"


@dataclass(frozen=True, slots=True)
class UpLine:
    """Who is up and what the crew is doing for it."""

    attempt_id: int
    version: int
    lifter: str
    lot: str
    attempt: str
    weight: str
    crew: str


@dataclass(frozen=True, slots=True)
class TableView:
    """The Table page at one revision."""

    meet_id: int
    platform_id: int
    platform: str
    unit: str
    revision: int
    as_of: str
    flight_id: int
    lift_id: int
    title: str
    here: bool
    choices: tuple[Choice, ...]
    up: UpLine | None
    on_deck: str
    in_the_hole: str
    condition: str
    ask: bool
    asked: str
    shown: str
    bar_before: str
    bar_shown: str
    side: str
    order: tuple[OrderRow, ...]
    score: tuple[ScoreRow, ...]
    no_opener: tuple[OrderRow, ...]
    undo_id: int
    undo: str
    redo_id: int
    redo: str
    focus: int  # the attempt whose weight is wanted next
    owner: str
    mine: bool
    due: tuple[DueLine, ...]
    rest: str  # whose rest would be too short, "" when nobody's
    pace: str
    fourths: bool
    here_now: str  # what the platform is lifting, for a Table that looks elsewhere


def table_view(one: Board, who: str, at: datetime, focus: int = 0) -> TableView:
    """The Table at one revision, for one official at one moment.

    ``focus`` names an attempt to put the cursor on, 0 for the usual one.
    """
    now, bar = one.now, one.now.bar
    rows = _order_rows(one)
    return TableView(
        meet_id=now.meet_id,
        platform_id=now.platform_id,
        platform=now.platform,
        unit=now.unit,
        revision=now.revision,
        as_of=clock_words(now.changed_at),
        flight_id=one.flight.id,
        lift_id=one.lift.id,
        title=f"{one.flight.name} · {one.lift.name}",
        here=one.here,
        choices=choices(one),
        up=_up_line(one),
        on_deck=_who(one, 1),
        in_the_hole=_who(one, 2),
        condition=bar.condition.value,
        ask=one.ask,
        asked=_asked(one),
        shown=instruction_name(bar),
        bar_before=stack_words(bar.hand.before) if bar.hand else "",
        bar_shown=stack_words(bar.hand.stack) if bar.hand else "",
        side=side_words(one.tool),
        order=rows,
        score=score_rows(one),
        no_opener=_without_weight(one),
        undo_id=one.undo.id if one.undo else 0,
        undo=one.undo.what if one.undo else "",
        redo_id=one.redo.id if one.redo else 0,
        redo=one.redo.what if one.redo else "",
        focus=focus or _usual_focus(one),
        owner=one.owner,
        mine=one.owner == who,
        due=due_lines(one),
        rest=rest_words(one, at),
        pace=pace_words(one, at),
        fourths=one.programme.rules.fourth_for_record,
        here_now=_here_now(one),
    )


def choices(one: Board) -> tuple[Choice, ...]:
    """Every flight and lift of the platform, in the order they are lifted."""
    base = f"/platforms/{one.now.platform_id}/table"
    found = []
    for _, _, programme in one.now.sessions:
        for lift in programme.lifts:
            for flight in programme.flights:
                looked_at = one.flight == flight and one.lift == lift
                lifting = (one.now.flight_id, one.now.lift_id) == (flight.id, lift.id)
                href = f"{base}?flight={flight.id}&lift={lift.id}"
                found.append(Choice(f"{flight.name}, {lift.name}", href, looked_at, lifting))
    return tuple(found)


def _here_now(one: Board) -> str:
    lifting = next((choice.text for choice in choices(one) if choice.lifting), "")
    return lifting or "nothing yet"


def _up_line(one: Board) -> UpLine | None:
    if one.up is None:
        return None
    turn = one.up
    return UpLine(
        attempt_id=turn.attempt.id,
        version=turn.attempt.version,
        lifter=turn.lifter.name,
        lot=str(turn.lifter.lot),
        attempt=attempt_name(one.lift.name, turn.attempt.number),
        weight=show_mass(turn.weight),
        crew=_crew_words(one),
    )


def _crew_words(one: Board) -> str:
    condition = one.now.bar.condition
    if one.ask:
        return "waits for an answer: what is on the bar?"
    if condition is Condition.HOLD:
        return "on hold"
    if condition is Condition.LIFTING:
        return "bar is loaded"
    if condition is Condition.CHANGING:
        return "loading"
    if one.up is not None and one.up.assumed:
        return "waits: this weight has not been handed in"
    return "waits: this weight cannot be made"


def _asked(one: Board) -> str:
    hand = one.now.bar.hand
    if not one.ask or hand is None:
        return ""
    wanted = f"{one.up.lifter.name}, {show_mass(one.up.weight)}" if one.up else "nobody"
    return f"The crew was loading {show_mass(hand.weight)}. Now up: {wanted}. What is on the bar?"


def _who(one: Board, place: int) -> str:
    if not one.here or len(one.steps) <= place:
        return ""
    turn = one.steps[place].turn
    return f"{turn.lifter.name}, {show_mass(turn.weight)}"


def _usual_focus(one: Board) -> int:
    """The next attempt of whoever has just lifted, if its weight is wanted; else the first that is owed.

    A lifter who has yet to lift the attempt before owes nothing: a second Enter must not hand it in for them.
    """
    mine = {(a.lifter_id, a.number): a for a in one.programme.attempts if a.lift_id == one.lift.id}
    wanted = [step.turn.attempt for step in one.steps if step.turn.assumed]
    owed = [a.id for a in wanted if mine[a.lifter_id, a.number - 1].result is not Result.OPEN]
    owed += [mine[lifter.id, 1].id for lifter in one.no_opener]
    last = next((a for a in mine.values() if a.id == lifted_last(one)), None)
    after = mine.get((last.lifter_id, last.number + 1)) if last else None
    if after is not None and after.id in owed:
        return after.id
    return owed[0] if owed else 0


def _order_rows(one: Board) -> tuple[OrderRow, ...]:
    rows = []
    before_round = 0
    for place, step in enumerate(one.steps, start=1):
        rows.append(_order_row(one, step, place, step.turn.attempt.number != before_round))
        before_round = step.turn.attempt.number
    return tuple(rows)


def _order_row(one: Board, step: Step, place: int, new_round: bool) -> OrderRow:  # noqa: FBT001 - one flag of a row
    turn, hands = step.turn, step.hands
    up = one.here and one.up is not None and one.up.attempt.id == turn.attempt.id
    return OrderRow(
        attempt_id=turn.attempt.id,
        version=turn.attempt.version,
        place=str(place),
        lot=str(turn.lifter.lot),
        lifter=turn.lifter.name,
        attempt=attempt_name(one.lift.name, turn.attempt.number),
        weight="" if turn.assumed else show_mass(turn.weight),
        default=show_mass(turn.weight) if turn.assumed else "",
        step=show_mass(one.lift.step),
        up=up,
        loaded=up and one.now.bar.condition is Condition.LIFTING,
        new_round=turn.attempt.number if new_round else 0,
        off=plate_views(hands.off, one.now) if hands and step.before is not None else (),
        on=plate_views(hands.on, one.now) if hands else (),
        change=_change_words(step, ask=one.ask and up),
        rack=one.now.racks.get((turn.lifter.id, one.lift.id), ""),
        why=step.why,
        marks=tuple(
            word
            for word, on in (("record", turn.attempt.record), ("retake", bool(turn.attempt.retake)))
            if on
        ),
    )


def _change_words(step: Step, *, ask: bool) -> str:
    if ask:
        return "asked at the bar"
    if step.hands is None:
        return "cannot be made"
    if step.before is None:
        return "build from empty"
    return "" if step.hands.off or step.hands.on else "no change"


def _without_weight(one: Board) -> tuple[OrderRow, ...]:
    """Openers nobody has handed in, and fourth attempts granted without a weight yet: in no order, but to be typed."""
    here = [lifter for lifter in one.programme.of_flight(one.flight.id) if not lifter.withdrawn]
    attempts = one.programme.of_lift(one.lift.id)
    fourths = [
        _without_weight_row(one, lifter, attempt, "fourth attempt, no weight yet")
        for lifter in here
        for attempt in attempts.get(lifter.id, ())
        if attempt.number > len(ROUNDS) and attempt.weight is None and attempt.result is Result.OPEN
    ]
    openers = [
        _without_weight_row(
            one, lifter, next(a for a in attempts[lifter.id] if a.number == 1), "no opener yet"
        )
        for lifter in one.no_opener
    ]
    return (*openers, *fourths)


def _without_weight_row(one: Board, lifter: Lifter, attempt: Attempt, words: str) -> OrderRow:
    return OrderRow(
        attempt_id=attempt.id,
        version=attempt.version,
        place="–",
        lot=str(lifter.lot),
        lifter=lifter.name,
        attempt=attempt_name(one.lift.name, attempt.number),
        weight="",
        default="",
        step=show_mass(one.lift.step),
        up=False,
        loaded=False,
        new_round=0,
        off=(),
        on=(),
        change=words,
        rack=one.now.racks.get((lifter.id, one.lift.id), ""),
    )
