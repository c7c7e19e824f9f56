"""Flights of a session: proposed and priced, taken with one press, and changed one lifter at a time."""

from __future__ import annotations

import time
from datetime import UTC, datetime, timedelta
from fractions import Fraction

import pytest

from app.desk.errors import NotAllowedNow, SomebodyWasFirst, WrongRoster
from app.desk.flight_changes import move_lifter, read_start, remove_flight, save_flight, show_start
from app.desk.flights import Asked, flights_seen, proposals, read_limits, take_proposal
from app.desk.planned import wish_of
from app.desk.roster import import_roster
from app.desk.rule_book import save_rules
from app.desk.setup import add_platform
from app.desk.undo import redo, undo
from app.desk.wish import plan_request
from app.meet.rule_reading import rules_document
from app.planning import Budget, plan
from app.store.engine import reading
from app.store.picture import NotFound
from app.store.tables import FlightRow
from tests.cast import (
    ADA,
    BENCH,
    BO,
    CLEO,
    DOV,
    ETTA,
    FLIGHT_A,
    FLIGHT_B,
    OLGA,
    OTTO,
    ROSTER,
    SQUAT,
    START,
    Hall,
    bare_meet,
)
from tests.desk.checks import changes, check_board, differing, refused, rows

LIMITS = "66, 74, 83, 93"
UNPLACED = "name,lot,Squat opener\nAda Brook,3,100\nBo Carver,1,110\nCleo Dahl,2,115\n"


@pytest.fixture
def eve(desk) -> Hall:
    """Harbour Cup the day before: everybody in one flight, nothing on the platform."""
    hall = bare_meet(desk)
    import_roster(desk, hall.meet_id, ROSTER.replace("Flight B", "Flight A"), who=OLGA)
    return hall


def session_id(hall: Hall) -> int:
    return hall.picture().sessions[0][0]


def asked(hall: Hall, by: str = "", limits: str = LIMITS) -> Asked:
    return Asked(session_id(hall), by, limits)


def most(hall: Hall, lifters: int) -> None:
    """The rules allow so many lifters in a flight."""
    rules = rules_document(hall.picture().sessions[0][2].rules)
    document = rules | {"most_in_flight": str(lifters)}
    save_rules(hall.desk, hall.platform_id, session_id(hall), document, who=OLGA)


def seen(hall: Hall) -> str:
    return flights_seen(hall.picture().sessions[0][2])


def take(hall: Hall, way: str = "opener", limits: str = LIMITS) -> str:
    return take_proposal(hall.desk, hall.platform_id, asked(hall, limits=limits), way, seen(hall), who=OLGA)


def who_is_where(hall: Hall) -> dict[str, set[str]]:
    programme = hall.picture().sessions[0][2]
    return {flight.name: {one.name for one in programme.of_flight(flight.id)} for flight in programme.flights}


def move(hall: Hall, name: str, to: str) -> str:
    lifter = hall.lifter(name)
    return move_lifter(hall.desk, hall.platform_id, lifter.id, lifter.flight_id, to, who=OLGA)


# Proposed


def test_openers_of_all_lifts_together_or_of_one_lift_say_who_lifts_together(hall: Hall) -> None:
    most(hall, 3)
    together = proposals(hall.desk, hall.platform_id, asked(hall), Budget()).made[0]
    ids = {one.id: one.name for one in hall.picture().sessions[0][2].lifters}
    assert [[ids[x] for x in flight] for flight in together.flights] == [[ADA, BO, CLEO], [DOV, ETTA]]
    bench = proposals(hall.desk, hall.platform_id, asked(hall, str(hall.lift_id(BENCH))), Budget()).made[0]
    assert [[ids[x] for x in flight] for flight in bench.flights] == [[ADA, CLEO, BO], [DOV, ETTA]]


def test_classes_stay_together_and_no_flight_is_larger_than_the_rules_allow(hall: Hall) -> None:
    most(hall, 3)
    found = proposals(hall.desk, hall.platform_id, asked(hall), Budget())
    assert [one.name for one in found.made] == ["By opener", "By body-weight class"]
    ids = {one.id: one.name for one in found.programme.lifters}
    # 61.5 | 68.0 | 74.2 | 88.4 93.1: the class limits part 68.0 from 74.2 and 88.4 from 93.1
    assert [{ids[x] for x in flight} for flight in found.made[1].flights] == [{ADA, CLEO, BO}, {ETTA, DOV}]


def test_a_proposal_costs_what_plans_of_its_openers_handle_in_every_lift(hall: Hall) -> None:
    """Summed anew: each flight, each lift, planned from an empty bar."""
    now = hall.picture()
    found = proposals(hall.desk, hall.platform_id, asked(hall), Budget())
    plates, mass = 0, Fraction(0)
    for lift in now.sessions[0][2].lifts:
        openers = sorted(
            a.weight for a in found.programme.attempts if a.lift_id == lift.id and a.number == 1 and a.weight
        )
        wish = wish_of(now, lift.id)
        total = plan(plan_request(now.unit, now.equipment(lift.id), wish, (), openers)).total
        plates, mass = plates + 2 * total.plates, mass + 2 * total.mass
    (one_flight,) = found.made[0].flights
    assert (len(one_flight), found.made[0].cost.plates, found.made[0].cost.mass) == (5, plates, mass)


@pytest.mark.parametrize(
    ("typed", "limits"),
    [("", []), ("59, 66.5;74 83", ["59", "66.5", "74", "83"]), ("-59 -66", ["59", "66"])],
)
def test_class_limits_are_read_as_organisers_type_them(typed: str, limits: list[str]) -> None:
    assert read_limits(typed) == tuple(map(Fraction, limits))


@pytest.mark.parametrize("typed", ["67,5", "74 66", "0", "66+", "66, 66"])
def test_class_limits_that_cannot_be_are_refused(typed: str) -> None:
    with pytest.raises(NotAllowedNow, match="Class limits"):
        read_limits(typed)


def test_a_session_of_another_platform_is_not_found(halls: tuple[Hall, Hall]) -> None:
    with pytest.raises(NotFound):
        proposals(halls[0].desk, halls[0].platform_id, Asked(session_id(halls[1])), Budget())


# Taken


def test_taking_a_proposal_is_one_entry_that_undo_takes_back_and_redo_makes_again(eve: Hall) -> None:
    most(eve, 3)
    before = rows(eve.desk.engine)
    told = "Flight A 3, Flight B 2"
    assert take(eve) == f"The flights of Bar lifts are made: {told}."
    assert who_is_where(eve) == {FLIGHT_A: {ADA, BO, CLEO}, FLIGHT_B: {DOV, ETTA}}
    taken = rows(eve.desk.engine)
    assert eve.journal()[-1].what == f"Bar lifts: flights by opener: {told}"
    undo(eve.desk, eve.platform_id, None, who=OTTO)
    assert rows(eve.desk.engine) == before
    redo(eve.desk, eve.platform_id, None, who=OTTO)
    assert rows(eve.desk.engine) == taken


def test_flights_that_are_left_over_are_taken_out_and_come_back_with_undo(eve: Hall) -> None:
    most(eve, 2)
    take(eve)
    assert [len(one) for one in who_is_where(eve).values()] == [2, 2, 1]
    most(eve, 15)
    before = rows(eve.desk.engine)
    take(eve)
    assert who_is_where(eve) == {FLIGHT_A: {ADA, BO, CLEO, DOV, ETTA}}
    undo(eve.desk, eve.platform_id, None, who=OLGA)
    assert rows(eve.desk.engine) == before


def test_a_new_flight_takes_a_letter_that_no_flight_of_the_meet_has(halls: tuple[Hall, Hall]) -> None:
    hall = halls[0]
    hall.bring(FLIGHT_A, SQUAT)
    most(hall, 2)
    take(hall)
    assert list(who_is_where(hall)) == [FLIGHT_A, FLIGHT_B, "Flight D"]  # C lifts on the Stage


def test_once_somebody_has_lifted_the_flights_stay(hall: Hall) -> None:
    most(hall, 2)
    hall.lift(ADA, 1)
    sentence = "Somebody has lifted in this session, so its flights stay. Move single lifters instead."
    with refused(hall, NotAllowedNow, sentence):
        take(hall)


def test_a_proposal_made_from_another_roster_is_refused(hall: Hall) -> None:
    old = seen(hall)
    hall.declare(DOV, 1, "155")
    with refused(
        hall, SomebodyWasFirst, "The roster has changed since this was proposed. Look at the new proposal."
    ):
        take_proposal(hall.desk, hall.platform_id, asked(hall), "opener", old, who=OLGA)


def test_by_class_without_limits_asks_for_them(hall: Hall) -> None:
    with refused(
        hall,
        NotAllowedNow,
        "Type the limits of the body-weight classes first, for instance 59, 66, 74, 83.",
    ):
        take(hall, "class", limits="")


def test_a_flight_on_the_platform_is_not_taken_out(hall: Hall) -> None:
    hall.bring(FLIGHT_B, SQUAT)
    with refused(
        hall, NotAllowedNow, "Flight B is on the platform. Bring another flight at the Table first."
    ):
        take(hall)


def test_under_a_loaded_bar_no_proposal_moves_its_lifter(hall: Hall) -> None:
    most(hall, 2)
    hall.load()
    before = rows(hall.desk.engine)
    hall_take = take(hall)  # Ada stays in Flight A, so her loaded bar stays too
    assert "Flight A 2" in hall_take
    assert hall.attempt(ADA, 1).id == (hall.picture().bar.hand.attempt_id if hall.picture().bar.hand else 0)
    assert {table for table, _ in differing(before, rows(hall.desk.engine))} == {"flight", "lifter"}


# A roster in which nobody has been placed


def test_a_roster_without_flights_puts_everybody_into_one_to_be_parted_here(desk) -> None:
    hall = bare_meet(desk)
    import_roster(desk, hall.meet_id, UNPLACED, who=OLGA)
    assert who_is_where(hall) == {FLIGHT_A: {ADA, BO, CLEO}}
    most(hall, 2)
    take(hall)
    assert who_is_where(hall) == {FLIGHT_A: {ADA, BO}, FLIGHT_B: {CLEO}}


def test_the_same_roster_again_leaves_everybody_where_they_have_been_put(desk) -> None:
    hall = bare_meet(desk)
    import_roster(desk, hall.meet_id, UNPLACED, who=OLGA)
    move(hall, CLEO, "new")
    import_roster(desk, hall.meet_id, UNPLACED, who=OLGA)
    assert who_is_where(hall) == {FLIGHT_A: {ADA, BO}, FLIGHT_B: {CLEO}}


def test_where_two_platforms_lift_the_same_the_roster_must_say_which(desk) -> None:
    hall = bare_meet(desk)
    add_platform(desk, hall.meet_id, "Stage", "bar-kg", who=OLGA)
    with pytest.raises(WrongRoster) as told:
        import_roster(desk, hall.meet_id, UNPLACED, who=OLGA)
    assert told.value.wrong[0] == (
        2,
        "it is not clear where Ada Brook lifts. Add a column “platform” that names it.",
    )
    placed = UNPLACED.replace("lot,", "lot,platform,", 1)
    for lot in (3, 1, 2):
        placed = placed.replace(f",{lot},", f",{lot},Stage,")
    import_roster(desk, hall.meet_id, placed, who=OLGA)
    assert Hall(desk, hall.meet_id, 2).picture().sessions[0][2].flights[0].name == FLIGHT_A


# One lifter


def test_a_lifter_is_moved_in_the_middle_of_the_meet_and_lifts_there(hall: Hall) -> None:
    hall.lift(ADA, 1, following="110")
    cleo = hall.lifter(CLEO)
    with changes(hall, {("lifter", cleo.id): {"flight_id"}}):
        assert move(hall, CLEO, str(hall.flight_id(FLIGHT_B))) == "Cleo Dahl moved from Flight A to Flight B."
    programme = hall.picture().sessions[0][2]
    assert cleo.id not in {
        t.lifter.id for t in programme.order(hall.flight_id(FLIGHT_A), hall.lift_id(SQUAT))
    }
    assert cleo.id in {t.lifter.id for t in programme.order(hall.flight_id(FLIGHT_B), hall.lift_id(SQUAT))}
    check_board(hall.board())


def test_a_move_is_undone_in_words(hall: Hall) -> None:
    before = rows(hall.desk.engine)
    move(hall, ETTA, "new")
    assert who_is_where(hall)["Flight C"] == {ETTA}
    assert undo(hall.desk, hall.platform_id, None, who=OTTO) == (
        "Undone: Etta Frost moved from Flight B to Flight C."
    )
    assert rows(hall.desk.engine) == before


def test_a_lifter_whose_bar_is_being_loaded_stays(hall: Hall) -> None:
    with refused(
        hall,
        NotAllowedNow,
        "The crew is loading for Ada Brook now. Move them after this lift, or pass the attempt first.",
    ):
        move(hall, ADA, str(hall.flight_id(FLIGHT_B)))


def test_the_second_of_two_who_move_a_lifter_is_told_where_the_first_put_them(hall: Hall) -> None:
    lifter = hall.lifter(ETTA)
    move(hall, ETTA, str(hall.flight_id(FLIGHT_A)))
    with refused(
        hall, SomebodyWasFirst, "Etta Frost has been moved to Flight A meanwhile. Look, and move again."
    ):
        move_lifter(hall.desk, hall.platform_id, lifter.id, lifter.flight_id, "new", who=OTTO)


def test_no_lifter_is_moved_to_a_flight_of_another_session(halls: tuple[Hall, Hall]) -> None:
    hall, stage = halls
    with refused(
        hall, NotAllowedNow, "Choose a flight of the same session: only its lifts are lifted there."
    ):
        move(hall, ETTA, str(stage.flight_id("Flight C")))


def test_an_empty_flight_is_taken_out_and_one_with_lifters_is_not(hall: Hall) -> None:
    flight = hall.flight_id(FLIGHT_B)
    with refused(hall, NotAllowedNow, "There are lifters in Flight B. Move them first."):
        remove_flight(hall.desk, hall.platform_id, flight, who=OLGA)
    for name in (DOV, ETTA):
        move(hall, name, str(hall.flight_id(FLIGHT_A)))
    with changes(hall, {("flight", flight): {"id"}}):
        remove_flight(hall.desk, hall.platform_id, flight, who=OLGA)


# A flight's name and start


def save(hall: Hall, flight: str, name: str, starts: str) -> str:
    return save_flight(hall.desk, hall.platform_id, hall.flight_id(flight), name, starts, who=OLGA)


def start_of(hall: Hall, flight: str) -> datetime | None:
    with reading(hall.desk.engine) as session:
        return session.get_one(FlightRow, hall.flight_id(flight)).starts_at


def test_a_flight_has_another_name_and_a_start_in_one_entry(hall: Hall) -> None:
    flight = hall.flight_id(FLIGHT_A)
    with changes(hall, {("flight", flight): {"name", "starts_at"}}):
        assert save(hall, FLIGHT_A, " Morning ", "10:30") == (
            "Flight A is now called Morning; Morning starts at 10:30."
        )
    start = start_of(hall, "Morning")
    assert start is not None
    assert start.astimezone().strftime("%H:%M") == "10:30"
    with changes(hall, {}):
        save(hall, "Morning", "Morning", "10:30")


def test_a_name_that_another_flight_of_the_meet_has_is_refused(halls: tuple[Hall, Hall]) -> None:
    for name in ("flight b", "FLIGHT C"):
        with refused(
            halls[0],
            NotAllowedNow,
            f"There is already a flight called “{name}” in this meet. Choose another name.",
        ):
            save(halls[0], FLIGHT_A, name, "")


@pytest.mark.parametrize("typed", ["half nine", "25:00", "9", "2026-13-01 09:30", "09:75"])
def test_a_start_that_is_no_time_is_refused(hall: Hall, typed: str) -> None:
    with refused(
        hall,
        NotAllowedNow,
        f"Start: “{typed}” is not a time. Type it like 09:30, or 2026-03-08 09:30 for another day.",
    ):
        save(hall, FLIGHT_A, FLIGHT_A, typed)


@pytest.mark.parametrize("zone", ["UTC", "Pacific/Auckland", "America/St_Johns"])
def test_a_start_is_the_next_such_time_where_the_hall_is(monkeypatch: pytest.MonkeyPatch, zone: str) -> None:
    monkeypatch.setenv("TZ", zone)
    time.tzset()
    try:
        for hours in range(0, 24, 5):
            now = START + timedelta(hours=hours)
            for typed in ("00:15", "9:30", "09.30", "23:45"):
                start = read_start(typed, now)
                assert start is not None
                assert start.tzinfo is UTC
                assert -timedelta(hours=6) <= start - now < timedelta(hours=18)
                assert read_start(show_start(start, now), now) == start
            far = read_start("2026-03-14 09:30", now)
            assert far is not None
            assert show_start(far, now) == "2026-03-14 09:30"
    finally:
        monkeypatch.undo()
        time.tzset()
