"""A platform read whole, as the pure rooms' own nouns, and the iron written back."""

from __future__ import annotations

import pytest
from sqlmodel import Session

from app.meet.platform import Bar, Condition, Hand
from app.store.engine import reading, writing
from app.store.journal import Recorder
from app.store.picture import NotFound, picture, store_bar, to_bar
from app.store.tables import PlatformRow
from tests.cast import ADA, BO, FLIGHT_A, FLIGHT_B, SQUAT, Hall, kg, stack

HAND = Hand(1, kg("102.5"), stack(25), stack(25, 10, "2.5", "1.25"))
BARS = {
    "idle and empty": Bar(Condition.IDLE, (), None),
    "idle and unknown": Bar(Condition.IDLE, None, None),
    "changing": Bar(Condition.CHANGING, stack(25), HAND),
    "changing from unknown": Bar(Condition.CHANGING, None, Hand(1, kg(0), None, ())),
    "lifting": Bar(Condition.LIFTING, HAND.stack, HAND),
    "on hold": Bar(Condition.HOLD, stack("0.45359237"), HAND),
}


def row_of(session: Session) -> PlatformRow:
    return session.get_one(PlatformRow, 1)


@pytest.mark.parametrize("bar", BARS.values(), ids=list(BARS))
def test_the_iron_is_read_back_as_it_was_written(hall: Hall, bar: Bar) -> None:
    with writing(hall.desk.engine) as session:
        store_bar(row_of(session), bar)
    with reading(hall.desk.engine) as session:
        assert to_bar(row_of(session)) == bar


@pytest.mark.parametrize("bar", BARS.values(), ids=list(BARS))
def test_the_same_iron_again_is_no_change(hall: Hall, bar: Bar) -> None:
    with writing(hall.desk.engine) as session:
        store_bar(row_of(session), bar)
    with writing(hall.desk.engine) as session:
        recorder = Recorder(session)
        store_bar(row_of(session), bar)
        assert recorder.edits() == []


def test_a_picture_shows_the_meet_as_the_rules_see_it(hall: Hall) -> None:
    now = hall.picture()
    programme = now.sessions[0][2]
    assert (now.meet, now.unit, now.platform, now.revision) == ("Harbour Cup", "kg", "Hall", 3)
    assert [
        (flight.name, [one.name for one in programme.of_flight(flight.id)]) for flight in programme.flights
    ] == [
        (FLIGHT_A, [BO, "Cleo Dahl", ADA]),
        (FLIGHT_B, ["Dov Ekman", "Etta Frost"]),
    ]
    assert now.equipment(hall.lift_id(SQUAT)).base_mass == 25
    assert now.programme_of_flight(hall.flight_id(FLIGHT_A)) == programme
    assert [item.plate.face for item in now.stock] == sorted((i.plate.face for i in now.stock), reverse=True)


def test_pictures_of_two_platforms_have_nothing_in_common(halls: tuple[Hall, Hall]) -> None:
    mine, theirs = halls[0].picture(), halls[1].picture()
    mine_too, theirs_too = mine.sessions[0][2], theirs.sessions[0][2]
    for name in ("lifts", "flights", "lifters", "attempts"):
        ours = {one.id for one in getattr(mine_too, name)}
        others = {one.id for one in getattr(theirs_too, name)}
        assert ours
        assert others
        assert not ours & others
    assert not {item.id for item in mine.stock} & {item.id for item in theirs.stock}
    assert not {tool.id for tool in mine.tools} & {tool.id for tool in theirs.tools}


def test_a_platform_that_is_not_there_is_told_in_words(hall: Hall) -> None:
    with reading(hall.desk.engine) as session, pytest.raises(NotFound) as told:
        picture(session, 99)
    assert (
        str(told.value)
        == "There is no such platform here. It may have been taken away; go back and choose again."
    )
