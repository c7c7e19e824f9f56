"""A whole small meet driven at random: whatever people enter, in whatever order, what must always hold does hold.

After every entry, taken or refused: the order is the rule set's (sorted anew here), every stack that is shown adds up
and is in stock, an instruction that is out has only changed for a reason that may change it, the journal played from
nothing gives the rows of the database, and the revision has counted by one, or not at all if nothing was entered.
"""

from __future__ import annotations

import shutil
import tempfile
from collections.abc import Callable
from fractions import Fraction
from functools import cache
from pathlib import Path
from typing import Any, TypeVar

from hypothesis import settings
from hypothesis import strategies as st
from hypothesis.stateful import RuleBasedStateMachine, initialize, invariant, rule

from app.desk import attempts, misload, people
from app.desk.bar import bar_carries, bar_is_not_loaded, end_hold, hold_platform
from app.desk.board import Board
from app.desk.entry import Desk
from app.desk.equipment import save_plates, save_tools, stock_seen
from app.desk.errors import DeskError
from app.desk.flight_changes import move_lifter
from app.desk.planned import wish_of
from app.desk.roster import import_roster
from app.desk.setup import add_platform, start_meet
from app.desk.undo import redo, undo
from app.loading.mass import show_mass
from app.loading.stack import check_stack
from app.meet.model import Attempt, Lifter, Result
from app.meet.order import Turn
from app.meet.platform import Bar, Condition
from app.meet.rules import OrderSystem, Ties
from app.store.migrate import upgrade
from tests.cast import BELT_ROSTER, OLGA, WANDA, Hall, open_desk, ready_meet
from tests.desk.checks import Rows, check_board, replay_on, rows
from tests.desk.forms import plate_rows, tool_rows

KINDS = ("rounds with a bar", "rising bar", "rounds with belts", "rounds with two belts")
# What may change the instruction that is out (DEVELOPERS.md): an answer about the bar, "loaded", a result.
MAY_CHANGE_THE_HAND = {"answer", "loaded", "not loaded", "result", "remedy", "pass"}

Entry = TypeVar("Entry", bound=Callable[..., None])

who_lifts = st.integers(0, 4)
numbers = st.integers(1, 4)
steps = st.sampled_from([-2, -1, 0, 1, 1, 2, 3, 6])
results = st.sampled_from([Result.GOOD, Result.GOOD, Result.MISSED])
reasons = st.sampled_from(["", "the jury decided"])


@cache
def made(kind: str) -> Path:
    """A meet of this kind with its first flight on, made once; the machine works on copies."""
    file = Path(tempfile.mkdtemp(prefix="platewright-machine-")) / "meet.db"
    upgrade(f"sqlite:///{file}")
    desk = open_desk(file)
    if "belt" in kind:
        meet_id = start_meet(desk, "Quay Cup", "kg")
        hall = Hall(desk, meet_id, add_platform(desk, meet_id, "Stage", "belt-kg", who=OLGA))
        import_roster(desk, meet_id, BELT_ROSTER, who=OLGA)
        if "two" in kind:
            now = hall.picture()
            tools = [row | {"pieces": "2"} for row in tool_rows(now)]
            save_tools(desk, hall.platform_id, tools, stock_seen(now.stock, now.tools), who=OLGA)
        hall.bring("Flight C", "Pull-up")
    else:
        hall = ready_meet(desk)
        hall.rules("rising-bar" if "rising" in kind else "")
    desk.engine.dispose()
    return file


ENTRIES: dict[str, dict[str, st.SearchStrategy[Any]]] = {}
DRAWN_FROM: list[str] = []


def often(weight: int, **facts: st.SearchStrategy[Any]) -> Callable[[Entry], Entry]:
    """An entry that is drawn this often beside the others, with these facts.

    One rule draws them all: left to itself, Hypothesis leaves most rules out of most runs: too few lifts.
    """

    def note(entry: Entry) -> Entry:
        ENTRIES[entry.__name__] = facts
        DRAWN_FROM.extend([entry.__name__] * weight)
        return entry

    return note


class WholeMeet(RuleBasedStateMachine):
    """The entries of a day; each is tried and may be refused, but only in words."""

    hall: Hall
    desk: Desk

    @initialize(kind=st.sampled_from(KINDS))
    def begin(self, kind: str) -> None:
        self.folder = tempfile.TemporaryDirectory(prefix="platewright-machine-")
        self.desk = open_desk(Path(shutil.copy(made(kind), self.folder.name)))
        self.hall = Hall(self.desk)
        self.played: Rows = {}
        self.known = 0
        self.late = 0
        self.did = ""
        self.bar = self.hall.picture().bar
        self.revision = self.hall.picture().revision

    def teardown(self) -> None:
        if hasattr(self, "folder"):
            self.desk.engine.dispose()
            self.folder.cleanup()

    # What people look at

    def board(self) -> Board:
        return self.hall.board()

    def lifter(self, place: int) -> Lifter:
        _, _, programme = self.hall.picture().sessions[0]
        return sorted(programme.lifters, key=lambda one: one.lot)[place % len(programme.lifters)]

    def attempt(self, place: int, number: int) -> Attempt | None:
        lifter, one = self.lifter(place), self.board()
        theirs = one.programme.of_lift(one.lift.id).get(lifter.id, ())
        return next((a for a in theirs if a.number == number), None)

    def enter(self, did: str, entry: Callable[[], object]) -> bool:
        """Try an entry; a refusal is words and leaves everything as it was."""
        self.did = did
        try:
            entry()
        except DeskError:
            assert self.hall.picture().revision == self.revision
            self.did = "refused"
            return False
        return True

    def seen(self, attempt: Attempt) -> attempts.Seen:
        return attempts.Seen(attempt.id, attempt.version)

    def declare(self, attempt: Attempt, text: str, reason: str = "") -> bool:
        pid = self.hall.platform_id
        return self.enter(
            "declaration",
            lambda: attempts.declare(self.desk, pid, self.seen(attempt), text, reason, who=WANDA),
        )

    def judge(self, attempt: Attempt, result: Result) -> bool:
        did = "pass" if result is Result.PASSED else "result"
        pid = self.hall.platform_id
        return self.enter(did, lambda: attempts.judge(self.desk, pid, self.seen(attempt), result, who=WANDA))

    # What they enter

    @often(5, result=results, more=steps, load=st.booleans())
    def a_lift(self, result: Result, more: int, load: bool) -> None:
        """The usual: handed in if it was not, loaded, judged, and the next weight handed in."""
        up = self.board().up
        if up is None:
            return
        if up.assumed:
            self.declare(up.attempt, show_mass(up.weight), "in time")
            self.check()
        if load:
            self.enter("loaded", self.hall.load)
            self.check()
        up = self.board().up
        if up is None or not self.judge(up.attempt, result):
            return
        self.check()
        following = next(
            (
                a
                for a in self.board().programme.attempts
                if (a.lifter_id, a.lift_id, a.number)
                == (up.lifter.id, up.attempt.lift_id, up.attempt.number + 1)
            ),
            None,
        )
        if following is not None and more > -2:
            self.declare(following, show_mass(up.weight + more * self.board().lift.step))

    @often(
        3,
        place=who_lifts,
        number=numbers,
        more=steps,
        half=st.booleans(),
        record=st.booleans(),
        reason=reasons,
    )
    def a_declaration(
        self, place: int, number: int, more: int, half: bool, record: bool, reason: str
    ) -> None:
        attempt = self.attempt(place, number)
        if attempt is None:
            return
        before = self.attempt(place, number - 1)
        base = attempt.weight or (before.weight if before else None) or Fraction(100)
        weight = base + more * self.board().lift.step + (Fraction(1, 2) if half else 0)
        self.declare(attempt, show_mass(max(weight, Fraction(0))) + ("r" if record else ""), reason)

    @often(1, place=who_lifts, number=numbers)
    def the_grey_weight(self, place: int, number: int) -> None:
        attempt = self.attempt(place, number)
        if attempt is not None:
            self.declare(attempt, "")

    @often(1, place=who_lifts, number=numbers, result=st.sampled_from(list(Result)))
    def any_result(self, place: int, number: int, result: Result) -> None:
        attempt = self.attempt(place, number)
        if attempt is not None:
            self.judge(attempt, result)

    @often(
        3, what=st.sampled_from(["loaded", "not loaded", "hold", "go", "before", "shown", "empty", "unknown"])
    )
    def a_word_about_the_bar(self, what: str) -> None:
        pid, words = self.hall.platform_id, self.desk
        entries: dict[str, Callable[[], object]] = {
            "loaded": self.hall.load,
            "not loaded": lambda: bar_is_not_loaded(words, pid, who=WANDA),
            "hold": lambda: hold_platform(words, pid, who=WANDA),
            "go": lambda: end_hold(words, pid, who=WANDA),
        }
        answer = lambda: bar_carries(words, pid, what, who=WANDA)  # noqa: E731
        did = what if what in entries else "answer"
        self.enter(did, entries.get(what, answer))

    @often(
        1,
        place=who_lifts,
        number=numbers,
        kind=st.sampled_from(["bar", "bar", "disturbed", "spoiled"]),
        left=st.sampled_from(["25 10", "25 10 2.5", "10 25", ""]),
        right=st.sampled_from(["25 10", "25 10 2.5", "10 25", ""]),
        choice=st.integers(0, 1),
    )
    def a_misload(self, place: int, number: int, kind: str, left: str, right: str, choice: int) -> None:
        attempt = self.attempt(place, number)
        if attempt is None:
            return
        ends = [left, right][: self.board().equipment.implement.ends]
        pid, seen = self.hall.platform_id, self.seen(attempt)
        self.enter("remedy", lambda: misload.take_remedy(self.desk, pid, seen, ends, kind, choice, who=WANDA))

    @often(4, result=results, kind=st.sampled_from(["bar", "disturbed", "spoiled"]), again=st.booleans())
    def a_lift_that_went_wrong(self, result: Result, kind: str, again: bool) -> None:
        """The next lift, and at once a remedy for it: kept, or taken again."""
        up = self.board().up
        self.a_lift(result, 1, load=True)
        self.check()
        done = (
            None if up is None else next(a for a in self.board().programme.attempts if a.id == up.attempt.id)
        )
        if done is None or done.result not in (Result.GOOD, Result.MISSED):
            return
        ends = ["25 10"] * self.board().equipment.implement.ends
        pid, seen = self.hall.platform_id, self.seen(done)
        choice = int(again and result is Result.GOOD)
        self.enter("remedy", lambda: misload.take_remedy(self.desk, pid, seen, ends, kind, choice, who=WANDA))

    @often(
        4,
        load=st.booleans(),
        what=st.sampled_from(["heavier", "withdraws", "undo", "plate gone", "other flight", "record mark"]),
    )
    def something_about_whoever_is_up(self, load: bool, what: str) -> None:
        """The entries that a loaded bar must be defended against, and a bar being loaded must survive."""
        if load:
            self.enter("loaded", self.hall.load)
            self.check()
        one = self.board()
        if one.up is None:
            return
        if what == "heavier":
            self.declare(one.up.attempt, show_mass(one.up.weight + one.lift.step), "the coach ran")
        elif what == "record mark":
            self.declare(one.up.attempt, "r", "forgotten")
        elif what == "withdraws":
            pid, lifter = self.hall.platform_id, one.up.lifter.id
            self.enter("withdrawal", lambda: people.withdraw(self.desk, pid, lifter, back=False, who=WANDA))
        elif what == "undo":
            self.undone()
        elif what == "other flight":
            self.another_flight_comes_on(1, 1)
        elif one.now.bar.hand is not None and one.now.bar.hand.stack:
            faces = [item.plate.face for item in one.now.stock]
            self.plates_come_and_go(faces.index(one.now.bar.hand.stack[-1]), 0)

    @often(1, place=who_lifts, back=st.booleans())
    def somebody_leaves(self, place: int, back: bool) -> None:
        lifter, pid = self.lifter(place).id, self.hall.platform_id
        self.enter("withdrawal", lambda: people.withdraw(self.desk, pid, lifter, back=back, who=WANDA))

    @often(1, place=who_lifts)
    def a_fourth_is_asked_for(self, place: int) -> None:
        lifter, pid, lift = self.lifter(place).id, self.hall.platform_id, self.board().lift.id
        self.enter("fourth", lambda: people.grant_fourth(self.desk, pid, lifter, lift, who=WANDA))

    @often(2)
    def undone(self) -> None:
        self.enter("undo", lambda: undo(self.desk, self.hall.platform_id, None, who=WANDA))

    @often(1)
    def redone(self) -> None:
        self.enter("redo", lambda: redo(self.desk, self.hall.platform_id, None, who=WANDA))

    @often(1, place=st.integers(0, 8), pairs=st.integers(0, 3))
    def plates_come_and_go(self, place: int, pairs: int) -> None:
        now = self.hall.picture()
        typed = plate_rows(now)
        typed[place % len(typed)]["count"] = str(2 * pairs)
        seen, pid = stock_seen(now.stock, now.tools), self.hall.platform_id
        self.enter("stock", lambda: save_plates(self.desk, pid, typed, seen, who=OLGA))

    @often(1, flight=st.integers(0, 1), lift=st.integers(0, 1))
    def another_flight_comes_on(self, flight: int, lift: int) -> None:
        programme = self.board().programme
        name = programme.flights[flight % len(programme.flights)].name
        self.enter("flight", lambda: self.hall.bring(name, programme.lifts[lift].name))

    @often(1, place=who_lifts, to=st.integers(0, 1))
    def a_lifter_is_moved(self, place: int, to: int) -> None:
        lifter, flights = self.lifter(place), self.board().programme.flights
        there, pid = str(flights[to % len(flights)].id), self.hall.platform_id
        self.enter("move", lambda: move_lifter(self.desk, pid, lifter.id, lifter.flight_id, there, who=OLGA))

    @often(1, opener=st.integers(40, 60))
    def a_late_lifter_comes(self, opener: int) -> None:
        if self.late == 2:
            return
        one = self.board()
        self.late += 1
        weight = show_mass(Fraction(opener) * one.lift.step)
        line = f"name,lot,flight,{one.lift.name} opener\nLate {self.late},{90 + self.late},{one.flight.name},{weight}\n"
        self.enter("roster", lambda: import_roster(self.desk, self.hall.meet_id, line, who=OLGA))

    @often(2,
        change=st.sampled_from(
            [{"retake_place": "at-once"}, {"retake_place": "end-of-round"}, {"default": "forfeited"},
             {"default": "repeat-or-step"}, {"fourth_for_record": "yes"}, {"seconds_to_hand_in": "0"}]
        )
    )  # fmt: skip
    def a_rule_is_changed(self, change: dict[str, str]) -> None:
        self.enter("rules", lambda: self.hall.rules(**change))

    @often(1, seconds=st.sampled_from([5, 61, 600]))
    def time_passes(self, seconds: int) -> None:
        self.hall.wait(seconds)

    @rule(data=st.data())
    def somebody_enters_something(self, data: st.DataObject) -> None:
        name = data.draw(st.sampled_from(DRAWN_FROM))
        getattr(self, name)(**{fact: data.draw(one, fact) for fact, one in ENTRIES[name].items()})

    # What must hold

    @invariant()
    def check(self) -> None:
        if not hasattr(self, "hall"):
            return
        one = self.board()
        self.check_counting(one)
        self.check_hand(one)
        check_sums(one)
        if one.programme.rules.order_system is OrderSystem.RISING:
            check_rising(one)
        else:
            check_rounds(one)
        self.bar, self.revision, self.did = one.now.bar, one.now.revision, ""

    def check_counting(self, one: Board) -> None:
        """A revision an entry, a journal line a revision, and the lines tell the whole meet."""
        entries = self.hall.journal()
        if self.known:
            assert one.now.revision - self.revision == len(entries) - self.known <= 1
        self.played = replay_on(self.played, entries[self.known :])
        self.known = len(entries)
        assert self.played == rows(self.desk.engine)

    def check_hand(self, one: Board) -> None:
        """What the crew is told adds up, begins with what is on the bar, and stays while they are at it."""
        bar = one.now.bar
        for hand in (bar.hand, bar.ahead):
            if hand is not None and one.here and not one.ask:
                check_stack(one.equipment, hand.stack, hand.weight, wish_of(one.now, one.lift.id).order)
        if bar.hand is not None and bar.condition is Condition.CHANGING:
            assert bar.hand.before == bar.carries
        if bar.condition is Condition.LIFTING:
            assert bar.hand is not None
            assert bar.carries == bar.hand.stack
        if self.bar.hand is not None and self.did not in MAY_CHANGE_THE_HAND:
            assert bar.hand == self.bar.hand, self.did
        if self.did == "refused":
            assert bar == self.bar
        assert_no_plate_in_two_places(one, bar)


def check_sums(one: Board) -> None:
    """Every step that is shown is summed afresh; with one bar or belt each begins where the one before it ended."""
    if one.tool.pieces == 1 or not one.here:
        check_board(one)
        return
    for step in one.steps:
        if step.stack is not None:
            check_stack(one.equipment, step.stack, step.turn.weight, wish_of(one.now, one.lift.id).order)


def assert_no_plate_in_two_places(one: Board, bar: Bar) -> None:
    """Two belts share one stock: what one carries the other cannot."""
    if bar.condition is not Condition.LIFTING or bar.hand is None or bar.ahead is None or one.ask:
        return
    both = (*bar.hand.stack, *bar.ahead.stack)
    for plate in one.equipment.plates:
        assert both.count(plate.face) <= plate.count


def still_to_lift(one: Board) -> dict[tuple[int, int], tuple[Lifter, Attempt]]:
    """Every attempt without a result of everybody who is in the flight and has not left."""
    return {
        (lifter.id, a.number): (lifter, a)
        for lifter in one.programme.lifters
        if lifter.flight_id == one.flight.id and not lifter.withdrawn
        for a in one.programme.attempts
        if a.lifter_id == lifter.id and a.lift_id == one.lift.id and a.result is Result.OPEN
    }


def check_everybody_is_there(one: Board) -> None:
    """Each handed-in attempt stands in the order once, at its own weight; the others are marked as not handed in."""
    open_now = still_to_lift(one)
    placed = [(turn.lifter.id, turn.attempt.number) for turn in one.order]
    assert len(placed) == len(set(placed))
    assert set(placed) <= set(open_now)
    assert {at for at, (_, a) in open_now.items() if a.weight is not None} <= set(placed)
    for turn in one.order:
        assert turn.assumed == (turn.attempt.weight is None)
        if turn.attempt.weight is not None:
            assert turn.weight == turn.attempt.weight
        assert turn.weight >= 0


def check_rounds(one: Board) -> None:
    """Round by round, lighter first, lower lot first (WDFPF 2007); retakes at the end of their round, or at once."""
    check_everybody_is_there(one)

    def key(turn: Turn) -> tuple[int, int, Fraction, int]:
        return turn.attempt.number, turn.attempt.retake == "end-of-round", turn.weight, turn.lifter.lot

    usual = [turn for turn in one.order if turn.attempt.retake != "at-once"]
    at_once = [turn for turn in one.order if turn.attempt.retake == "at-once"]
    assert usual == sorted(usual, key=key)
    assert list(one.order) == [*at_once, *usual]


def check_rising(one: Board) -> None:
    """The lightest next weight, the lower attempt number, then whoever took the attempt before earlier, then lot."""
    check_everybody_is_there(one)
    ranks = {a.id: a.lifted_at for a in one.programme.attempts if a.lifted_at is not None}
    rest = [turn for turn in one.order if not turn.attempt.retake]
    assert [turn for turn in one.order if turn.attempt.retake] + rest == list(one.order)
    for place, turn in enumerate(rest):
        nexts = {other.lifter.id: other for other in reversed(rest[place:])}
        for other in nexts.values():
            mine, theirs = (turn.weight, turn.attempt.number), (other.weight, other.attempt.number)
            assert mine <= theirs or other is turn
            if mine == theirs and other is not turn and mine[1] == 1:
                assert turn.lifter.lot < other.lifter.lot
            if mine == theirs and other is not turn and one.programme.rules.ties is Ties.SEQUENCE:
                first, second = (ranks.get(_before(one, x)) for x in (turn, other))
                if first is not None and second is not None:
                    assert first < second


def _before(one: Board, turn: Turn) -> int:
    """The id of the same lifter's attempt before; 0 for an opener."""
    wanted = (turn.lifter.id, turn.attempt.lift_id, turn.attempt.number - 1)
    return next((a.id for a in one.programme.attempts if (a.lifter_id, a.lift_id, a.number) == wanted), 0)


TestWholeMeet = WholeMeet.TestCase
TestWholeMeet.settings = settings(max_examples=12, stateful_step_count=25, deadline=None)
