"""From nothing to a platform that can be loaded."""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from fractions import Fraction
from pathlib import Path

import pytest

from app.desk.board import Board, board
from app.desk.demo import make_demo
from app.desk.entry import Desk
from app.desk.errors import NotAllowedNow
from app.desk.roster import meet_ids
from app.desk.setup import add_platform, start_meet
from app.loading.equipment import Order
from app.loading.stack import check_stack
from app.meet.model import Result
from app.meet.platform import Bar, Condition
from app.meet.presets import PRESETS
from app.store.engine import reading
from app.store.migrate import PROJECT
from app.store.picture import NotFound
from tests.cast import OLGA, Hall, open_desk
from tests.desk.checks import check_board, replayed, rows


@pytest.fixture
def demo(demo_file: Path, tmp_path: Path) -> Iterator[Desk]:
    """The demo meet, in a file of this test's own."""
    made = open_desk(Path(shutil.copy(demo_file, tmp_path / "demo.db")))
    yield made
    made.engine.dispose()


def test_a_meet_begins_with_its_name_and_unit_and_one_line_in_the_journal(desk: Desk) -> None:
    meet_id = start_meet(desk, "  Harbour \t Cup ", "lb", who=OLGA)
    meet = rows(desk.engine)[("meet", meet_id)]
    assert (meet["name"], meet["unit"]) == ("Harbour Cup", "lb")
    entries = Hall(desk).journal()
    assert [(one.meet_id, one.platform_id, one.who, one.what) for one in entries] == [
        (meet_id, None, OLGA, "meet Harbour Cup started")
    ]


@pytest.mark.parametrize(
    ("name", "unit", "told"),
    [
        (" ", "kg", "Give the meet a name."),
        ("x" * 81, "kg", "The name of the meet is longer than 80 letters."),
        ("Harbour Cup", "stone", "The unit is kg or lb."),
    ],
    ids=["no name", "a name too long", "another unit"],
)
def test_a_meet_that_cannot_be_is_refused_and_leaves_nothing(
    desk: Desk, name: str, unit: str, told: str
) -> None:
    with pytest.raises(NotAllowedNow) as refusal:
        start_meet(desk, name, unit, who=OLGA)
    assert str(refusal.value) == told
    assert (rows(desk.engine), Hall(desk).journal()) == ({}, [])


@pytest.mark.parametrize("preset", PRESETS, ids=lambda one: one.key)
def test_a_platform_has_all_that_its_set_promises(desk: Desk, preset) -> None:
    meet_id = start_meet(desk, "Harbour Cup", preset.unit, who=OLGA)
    now = Hall(desk, meet_id, add_platform(desk, meet_id, "Hall", preset.key, who=OLGA)).picture()
    assert [(str(item.plate.face), item.plate.count, item.colour) for item in now.stock] == [
        (str(Fraction(plate.face)), plate.count, plate.colour) for plate in preset.plates
    ]
    assert [(tool.name, tool.kind, tool.implement.mass) for tool in now.tools] == [
        (tool.name, tool.kind, Fraction(tool.mass)) for tool in preset.tools
    ]
    programme = now.sessions[0][2]
    assert [(lift.name, lift.step) for lift in programme.lifts] == [
        (lift.name, Fraction(lift.step)) for lift in preset.lifts
    ]
    assert now.bar == Bar(Condition.IDLE, (), None)
    assert (now.revision, programme.lifters, programme.flights) == (1, (), ())


@pytest.mark.parametrize(
    ("name", "preset", "told"),
    [
        ("", "bar-kg", "Give the platform a name."),
        ("hall", "bar-kg", "There is already a platform called “hall”. Choose another name."),
        ("Stage", "bar-lb", "This meet is in kg; “Bar lifts, lb iron plates” is in lb. Choose a set in kg."),
        (
            "Stage",
            "sledge",
            f"Choose one of: {', '.join(one.name for one in PRESETS)}.",
        ),
    ],
    ids=["no name", "a name that is taken", "a set in the other unit", "no such set"],
)
def test_a_platform_that_cannot_be_is_refused_and_leaves_nothing(hall: Hall, name, preset, told) -> None:
    before = rows(hall.desk.engine)
    with pytest.raises(NotAllowedNow) as refusal:
        add_platform(hall.desk, hall.meet_id, name, preset, who=OLGA)
    assert str(refusal.value) == told
    assert rows(hall.desk.engine) == before


def test_a_platform_of_a_meet_that_is_not_there_is_refused(hall: Hall) -> None:
    with pytest.raises(NotFound):
        add_platform(hall.desk, 99, "Stage", "bar-kg", who=OLGA)


def test_a_second_meet_in_the_same_folder_leaves_the_first_one_alone(hall: Hall) -> None:
    before = hall.picture()
    other = start_meet(hall.desk, "Quay Cup", "lb", who=OLGA)
    add_platform(hall.desk, other, "Hall", "bar-lb", who=OLGA)
    assert hall.picture() == before
    with reading(hall.desk.engine) as session:
        assert meet_ids(session) == [hall.meet_id, other]


def test_the_demo_has_two_platforms_with_a_round_in_progress_and_something_for_every_page(
    demo: Desk,
) -> None:
    for platform_id in (1, 2):
        one = Hall(demo, 1, platform_id).board()
        check_board(one)
        hand, results = one.now.bar.hand, {a.result for a in one.programme.attempts}
        assert hand is not None
        assert (one.here, one.now.bar.condition, one.ask) == (True, Condition.CHANGING, False)
        assert results >= {Result.OPEN, Result.GOOD, Result.MISSED}
        assert one.up is not None
        assert one.up.attempt.number == 2
        assert one.undo is not None
        check_stack(one.equipment, hand.stack, one.up.weight, Order.ANY)
        for flight in one.programme.flights:
            for lift in one.programme.lifts:
                there = board(demo, platform_id, flight.id, lift.id)
                assert isinstance(there, Board)
                check_board(there)


def test_the_demo_is_made_once(demo: Desk) -> None:
    before, entries = rows(demo.engine), Hall(demo).journal()
    assert make_demo(demo, PROJECT / "demo_meet") is False
    assert (rows(demo.engine), len(Hall(demo).journal())) == (before, len(entries))


def test_the_demo_is_not_made_over_a_meet_that_is_there(hall: Hall) -> None:
    before = rows(hall.desk.engine)
    assert make_demo(hall.desk, PROJECT / "demo_meet") is False
    assert rows(hall.desk.engine) == before


def test_the_demos_journal_tells_all_of_it(demo: Desk) -> None:
    assert replayed(Hall(demo).journal()) == rows(demo.engine)
