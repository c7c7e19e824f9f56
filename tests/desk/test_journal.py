"""Every use case leaves one line in the journal, and the journal alone can tell the whole meet."""

from __future__ import annotations

import shutil
from collections.abc import Callable
from dataclasses import dataclass, field, replace
from datetime import timedelta
from fractions import Fraction
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from app.desk.bar import bar_carries, bar_is_not_loaded, end_hold, hold_platform
from app.desk.entry import Desk
from app.desk.equipment import LiftWish, save_lifts, save_plates, save_tools, stock_seen
from app.desk.errors import DeskError
from app.desk.hub import platform_topic
from app.desk.roster import import_roster
from app.desk.setup import add_platform, start_meet
from app.desk.undo import redo, undo
from app.meet.model import Result
from app.store.engine import make_engine, reading
from app.store.tables import AttemptRow, PlatformRow
from tests.cast import (
    ADA,
    BO,
    FLIGHT_A,
    FLIGHT_B,
    LUC,
    OLGA,
    ROSTER,
    SQUAT,
    START,
    WANDA,
    Hall,
    kg,
    open_desk,
    ready_meet,
)
from tests.desk.checks import check_board, replayed, rows
from tests.desk.forms import plate_rows, tool_rows


def seen(hall: Hall) -> str:
    now = hall.picture()
    return stock_seen(now.stock, now.tools)


def no_quarters(hall: Hall) -> None:
    save_plates(hall.desk, hall.platform_id, plate_rows(hall.picture())[:-1], seen(hall), who=OLGA)


def spare_bar(hall: Hall) -> None:
    spare = {"id": "", "name": "Spare", "kind": "bar", "mass": "15"}
    save_tools(hall.desk, hall.platform_id, [*tool_rows(hall.picture()), spare], seen(hall), who=OLGA)


def in_fives(hall: Hall) -> None:
    wish = LiftWish(hall.lift_id(SQUAT), str(hall.picture().tools[0].id), "5", "1", "plates", "total")
    save_lifts(hall.desk, hall.platform_id, [wish], who=OLGA)


def loaded_and_back(hall: Hall) -> None:
    hall.load()
    bar_is_not_loaded(hall.desk, 1, who=LUC)


def held_and_on(hall: Hall) -> None:
    hold_platform(hall.desk, 1, who=LUC)
    end_hold(hall.desk, 1, who=WANDA)


def declared_and_undone(hall: Hall) -> None:
    hall.declare(BO, 2, "120")
    undo(hall.desk, 1, None, who=WANDA)


ONE_LINE: dict[str, tuple[Callable[[Hall], object], list[tuple[int | None, str, str]]]] = {
    "declare": (
        lambda hall: hall.declare(BO, 2, "120"),
        [(1, WANDA, "Bo Carver: Squat, 2nd declared at 120")],
    ),
    "judge": (
        lambda hall: hall.judge(ADA, 1, Result.MISSED),
        [(1, WANDA, "Ada Brook: Squat, 1st: no lift at 100")],
    ),
    "bar is loaded, and not": (
        loaded_and_back,
        [(1, LUC, "Hall: bar is loaded (100)"), (1, LUC, "Hall: bar is not loaded yet (100)")],
    ),
    "hold and end of hold": (
        held_and_on,
        [(1, LUC, "Hall: hold (100)"), (1, WANDA, "Hall: hold ended (100)")],
    ),
    "what is on the bar": (
        lambda hall: bar_carries(hall.desk, 1, "unknown", who=LUC),
        [(1, LUC, "Hall: bar is unknown, build from empty (100)")],
    ),
    "bring a flight": (lambda hall: hall.bring(FLIGHT_B, SQUAT), [(1, WANDA, "Hall: Flight B, Squat")]),
    "plates": (no_quarters, [(1, OLGA, "Hall: plates changed")]),
    "bars and belts": (spare_bar, [(1, OLGA, "Hall: bars and belts changed")]),
    "settings of lifts": (in_fives, [(1, OLGA, "Hall: settings of the lifts changed")]),
    "undo": (
        declared_and_undone,
        [
            (1, WANDA, "Bo Carver: Squat, 2nd declared at 120"),
            (1, WANDA, "undone: Bo Carver: Squat, 2nd declared at 120"),
        ],
    ),
    "roster": (
        lambda hall: import_roster(hall.desk, 1, "name,lot,flight\nFay Green,6,Flight A\n", who=OLGA),
        [(None, OLGA, "roster: 1 lifters added, 0 updated")],
    ),
    "platform": (
        lambda hall: add_platform(hall.desk, 1, "Stage", "belt-kg", who=OLGA),
        [(None, OLGA, "platform Stage set up: Belt lifts, kg steel plates")],
    ),
    "meet": (
        lambda hall: start_meet(hall.desk, "Quay Cup", "kg", who=OLGA),
        [(None, OLGA, "meet Quay Cup started")],
    ),
}


@pytest.mark.parametrize(("entry", "expected"), ONE_LINE.values(), ids=list(ONE_LINE))
def test_a_use_case_leaves_one_line_of_who_what_and_when_and_the_lines_before_it_as_they_were(
    hall: Hall, entry, expected
) -> None:
    before, revision = hall.journal(), hall.picture().revision
    at = START + timedelta(seconds=60)
    entry(replace(hall, desk=replace(hall.desk, clock=lambda: at)))
    after = hall.journal()
    assert [row.model_dump() for row in after[: len(before)]] == [row.model_dump() for row in before]
    new = after[len(before) :]
    assert [(row.platform_id, row.who, row.what) for row in new] == expected
    assert {row.at for row in new} == {at}
    counted = [
        revision + step if platform else None for step, (platform, _, _) in enumerate(expected, start=1)
    ]
    assert [row.revision for row in new] == counted
    assert replayed(after) == rows(hall.desk.engine)


def test_a_line_holds_each_touched_row_before_and_after(hall: Hall) -> None:
    attempt = hall.attempt(ADA, 1)
    hall.load()
    hall.judge(ADA, 1, Result.GOOD)
    edits = {
        (edit["table"], edit["id"]): (edit["before"], edit["after"]) for edit in hall.journal()[-1].edits
    }
    hand = {"attempt": attempt.id, "weight": "100", "before": [], "stack": ["25", "10", "2.5"], "why": ""}
    before, after = edits.pop(("attempt", attempt.id))
    assert before == {
        "result": "open",
        "version": attempt.version,
        "entered_by": OLGA,
        "entered_at": before["entered_at"],
        "lifted_at": None,
    }
    assert after == {
        "result": "good",
        "version": attempt.version + 1,
        "entered_by": WANDA,
        "entered_at": hall.journal()[-1].at.isoformat(),
        "lifted_at": hall.journal()[-1].at.isoformat(),
    }
    before, after = edits.pop(("platform", 1))
    assert before == {"condition": "lifting", "hand": hand, "loaded_at": before["loaded_at"]}
    assert (after["condition"], after["hand"]["attempt"]) == ("changing", hall.attempt(BO, 1).id)
    assert edits == {}


def test_a_refused_entry_leaves_no_line(hall: Hall) -> None:
    before = len(hall.journal())
    with pytest.raises(DeskError):
        hall.declare(BO, 2, "118")
    assert len(hall.journal()) == before


def test_redo_enters_again_what_was_undone_and_the_journal_tells_that_too(hall: Hall) -> None:
    declared_and_undone(hall)
    redo(hall.desk, 1, None, who=WANDA)
    assert hall.attempt(BO, 2).weight == 120
    assert hall.journal()[-1].what == "entered again: Bo Carver: Squat, 2nd declared at 120"
    assert replayed(hall.journal()) == rows(hall.desk.engine)


@dataclass
class Reader:
    """A hub that looks at the meet the moment it is told of a change, through a connection of its own."""

    url: str
    attempt_id: int
    read: list[tuple[str, int, Fraction | None]] = field(default_factory=list)

    def publish(self, topic: str) -> None:
        """Look at once, as a page does."""
        engine = make_engine(self.url)
        with reading(engine) as session:
            revision = session.get_one(PlatformRow, 1).revision
            self.read.append((topic, revision, session.get_one(AttemptRow, self.attempt_id).weight))
        engine.dispose()


def with_reader(hall: Hall) -> tuple[Hall, Reader]:
    """The hall with a hub that reads Bo's second attempt whenever it is told of anything."""
    hub = Reader(str(hall.desk.engine.url), hall.attempt(BO, 2).id)
    return replace(hall, desk=replace(hall.desk, hub=hub)), hub


def test_pages_are_told_after_the_commit_and_only_of_what_changed(hall: Hall) -> None:
    heard, hub = with_reader(hall)
    revision = hall.picture().revision
    heard.declare(BO, 2, "120")
    heard.declare(BO, 2, "120")
    with pytest.raises(DeskError):
        heard.declare(BO, 2, "118")
    assert hub.read == [(platform_topic(1), revision + 1, kg(120))]


def test_an_entry_of_the_meet_tells_the_pages_of_every_platform(halls: tuple[Hall, Hall]) -> None:
    heard, hub = with_reader(halls[0])
    import_roster(heard.desk, 1, "name,lot,flight\nFay Green,6,Flight A\n", who=OLGA)
    assert [topic for topic, _, _ in hub.read] == [platform_topic(1), platform_topic(2)]


# Any day at all: entries picked blindly, refused ones too. Whatever happens, the journal tells it, every shown stack
# sums, and an instruction that is out is changed by nothing but the crew's word or a result.

moves = st.lists(
    st.tuples(
        st.sampled_from(
            [
                "declare",
                "declare",
                "judge",
                "judge up",
                "judge up",
                "load",
                "load",
                "unload",
                "hold",
                "go on",
                "answer",
                "bring",
                "undo",
                "redo",
                "plates",
                "bar",
                "roster",
            ]
        ),
        st.integers(0, 1000),
    ),
    max_size=14,
)


def move(hall: Hall, what: str, pick: int) -> None:
    """One blind entry; ``pick`` chooses its details."""
    programme = hall.picture().sessions[0][2]
    attempt = programme.attempts[pick % len(programme.attempts)]
    lifter = next(one.name for one in programme.lifters if one.id == attempt.lifter_id)
    lift = programme.lift(attempt.lift_id).name
    up = hall.board().up
    if what == "declare":
        hall.declare(lifter, attempt.number, str(25 + pick % 90 * 2.5), lift)
    elif what == "judge":
        hall.judge(lifter, attempt.number, list(Result)[pick % 4], lift)
    elif what == "judge up" and up is not None:
        hall.judge(up.lifter.name, up.attempt.number, list(Result)[1 + pick % 3], hall.board().lift.name)
    elif what == "load":
        hall.load()
    elif what == "unload":
        bar_is_not_loaded(hall.desk, 1, who=LUC)
    elif what == "hold":
        hold_platform(hall.desk, 1, who=LUC)
    elif what == "go on":
        end_hold(hall.desk, 1, who=LUC)
    elif what == "answer":
        bar_carries(hall.desk, 1, ["before", "shown", "empty", "unknown"][pick % 4], who=LUC)
    elif what == "bring":
        hall.bring([FLIGHT_A, FLIGHT_B][pick % 2], programme.lifts[pick % 3].name)
    elif what == "undo":
        undo(hall.desk, 1, None, who=WANDA)
    elif what == "redo":
        redo(hall.desk, 1, None, who=WANDA)
    elif what == "plates":
        rows_now = plate_rows(hall.picture())
        rows_now[pick % len(rows_now)]["count"] = str(pick % 5)
        save_plates(hall.desk, 1, rows_now, seen(hall), who=OLGA)
    elif what == "bar":
        first, *others = tool_rows(hall.picture())
        save_tools(hall.desk, 1, [first | {"mass": ["20", "15"][pick % 2]}, *others], seen(hall), who=OLGA)
    elif what == "roster":
        import_roster(hall.desk, 1, ROSTER.replace("100,9", f"{80 + pick % 20 * 2.5},9"), who=OLGA)


LETS_GO = {"load", "judge", "judge up", "answer"}  # the only entries that may end or change an instruction


@settings(max_examples=25, suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow])
@given(day=moves)
def test_on_any_day_the_journal_tells_all_every_stack_sums_and_the_crews_change_stands(
    ready_file, tmp_path_factory, day
) -> None:
    file = Path(shutil.copy(ready_file, tmp_path_factory.mktemp("day")))
    hall = Hall(open_desk(file))
    for what, pick in day:
        before, entries = hall.picture(), len(hall.journal())
        try:
            move(hall, what, pick)
        except DeskError:
            assert (hall.picture(), len(hall.journal())) == (before, entries)
            continue
        after = hall.picture()
        if before.bar.hand is not None and what not in LETS_GO:
            assert after.bar.hand == before.bar.hand
        check_board(hall.board())
        assert after.revision - before.revision == len(hall.journal()) - entries
    assert replayed(hall.journal()) == rows(hall.desk.engine)
    hall.desk.engine.dispose()


def test_a_meet_made_anew_is_the_same_meet(desk: Desk, hall: Hall) -> None:
    """The cast's clock and numbers are its own, so that tests may name them."""
    assert replayed(ready_meet(desk).journal()) == rows(hall.desk.engine)
