"""A roster goes in whole or not at all, and comes out as it went in."""

from __future__ import annotations

import pytest

from app.desk.errors import NotAllowedNow, WrongRoster
from app.desk.roster import export_roster, import_roster
from app.desk.setup import add_platform
from app.meet.model import Attempt, Result
from app.store.picture import NotFound
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
    ROSTER,
    SQUAT,
    Hall,
    bare_meet,
    kg,
)
from tests.desk.checks import changes, check_board, refused, rows


def bring_in(hall: Hall, *lines: str, header: str = "name,lot,flight,Squat opener,Squat rack") -> str:
    """Olga pastes these lines."""
    return import_roster(hall.desk, hall.meet_id, "\n".join([header, *lines]), who=OLGA)


def wrong(
    hall: Hall, *lines: str, header: str = "name,lot,flight,Squat opener,Squat rack"
) -> list[tuple[int, str]]:
    """What is told to be wrong; nothing at all may have been taken."""
    before, entries = rows(hall.desk.engine), len(hall.journal())
    with pytest.raises(WrongRoster) as told:
        bring_in(hall, *lines, header=header)
    assert (rows(hall.desk.engine), len(hall.journal())) == (before, entries)
    return list(told.value.wrong)


def test_a_roster_makes_flights_lifters_and_three_attempts_in_every_lift(desk) -> None:
    hall = bare_meet(desk)
    assert import_roster(desk, hall.meet_id, ROSTER, who=OLGA) == "5 lifters added, 0 updated."
    programme = hall.picture().sessions[0][2]
    assert [(f.name, f.position) for f in programme.flights] == [(FLIGHT_A, 0), (FLIGHT_B, 1)]
    assert [
        (one.name, one.lot, one.body_weight, programme.flight(one.flight_id).name)
        for one in programme.lifters
    ] == [
        (ADA, 3, kg("61.5"), FLIGHT_A),
        (BO, 1, kg("74.2"), FLIGHT_A),
        (CLEO, 2, kg("68"), FLIGHT_A),
        (DOV, 4, kg("93.1"), FLIGHT_B),
        (ETTA, 5, kg("88.4"), FLIGHT_B),
    ]
    assert len(programme.attempts) == 5 * 3 * 3
    assert [hall.attempt(ADA, number, BENCH).weight for number in (1, 2, 3)] == [kg(60), None, None]
    assert hall.picture().racks[(hall.lifter(ADA).id, hall.lift_id(SQUAT))] == "9"
    assert hall.picture().bar.hand is None


def test_the_same_roster_again_changes_nothing(hall: Hall) -> None:
    with changes(hall, {}):
        import_roster(hall.desk, hall.meet_id, ROSTER, who=OLGA)


def test_what_is_downloaded_can_be_uploaded_and_changes_nothing(hall: Hall) -> None:
    text = export_roster(hall.desk, hall.meet_id)
    assert text.replace("\r\n", "\n") == (
        "name,lot,flight,platform,body weight,Squat opener,Squat rack,Bench press opener,Bench press rack,"
        "Deadlift opener,Deadlift rack\n"
        "Bo Carver,1,Flight A,Hall,74.2,110,11,70,,130,\n"
        "Cleo Dahl,2,Flight A,Hall,68,110,10,65,,140,\n"
        "Ada Brook,3,Flight A,Hall,61.5,100,9,60,,120,\n"
        "Dov Ekman,4,Flight B,Hall,93.1,150,14,100,,180,\n"
        "Etta Frost,5,Flight B,Hall,88.4,160,13,110,,190,\n"
    )
    with changes(hall, {}):
        import_roster(hall.desk, hall.meet_id, text, who=OLGA)


def test_a_lot_that_is_there_updates_that_lifter_and_leaves_everybody_else(hall: Hall) -> None:
    opener, rack = hall.attempt(BO, 1), ("rack", 2)
    with changes(hall, {("attempt", opener.id): {"weight", "version", "entered_at"}, rack: {"setting"}}):
        assert bring_in(hall, "Bo Carver,1,Flight A,115,12") == "0 lifters added, 1 updated."
    after = hall.attempt(BO, 1)
    assert after == Attempt(
        opener.id, opener.lifter_id, opener.lift_id, 1, kg(115), Result.OPEN, opener.version + 1, OLGA
    )
    check_board(hall.board())


def test_columns_that_are_missing_or_empty_take_nothing_away(hall: Hall) -> None:
    with changes(hall, {}):
        bring_in(hall, "Bo Carver,1,Flight A", header="name,lot,flight")
    with changes(hall, {}):
        bring_in(hall, "Bo Carver,1,Flight A,,")


def test_a_lifter_may_move_to_another_flight(hall: Hall) -> None:
    bo = hall.lifter(BO)
    with changes(hall, {("lifter", bo.id): {"flight_id"}}):
        bring_in(hall, "Bo Carver,1,Flight B,,")
    assert [turn.lifter.name for turn in hall.board().order] == [ADA, CLEO] * 3


def test_a_new_opener_that_is_lighter_makes_the_crew_say_what_is_on_the_bar(hall: Hall) -> None:
    hand = hall.picture().bar.hand
    bring_in(hall, "Fay Green,6,Flight A,80,")
    assert (hall.picture().bar.hand, hall.board().ask) == (hand, True)


def test_every_wrong_line_is_named_and_nothing_is_taken(hall: Hall) -> None:
    assert wrong(
        hall,
        "Fay Green,6,Flight A,101,",
        "Gil Hart,7,Flight A,100,",
        "Somebody Else,1,Flight A,100,",
        "Ina Joss,,Flight A,20,",
    ) == [
        (2, "Squat opener: 101 kg is not a multiple of 2.5. Nearest: 100 or 102.5."),
        (5, "lot “” is not a whole number from 1 to 99999."),
        (5, "Squat opener: 20 kg is lighter than the bar with its collars, 25 kg. Next possible: 25."),
    ]


def test_the_count_of_wrong_lines_is_told_in_a_sentence(hall: Hall) -> None:
    for lines, told in ((1, "1 line is wrong"), (2, "2 lines are wrong")):
        with pytest.raises(WrongRoster) as refusal:
            bring_in(hall, *(f"Fay Green,{lot}x,Flight A,100," for lot in range(lines)))
        assert str(refusal.value) == f"Nothing was imported: {told}. Correct and send again."


def test_a_lot_of_somebody_else_is_refused_even_after_good_lines(hall: Hall) -> None:
    assert wrong(hall, "Fay Green,6,Flight C,100,", "Somebody Else,1,Flight A,100,") == [
        (3, "lot 1 is already Bo Carver. Take a free lot number, or write the name the same.")
    ]


def test_an_opener_that_has_been_lifted_is_not_changed_by_a_roster(hall: Hall) -> None:
    hall.lift(ADA, 1)
    assert wrong(hall, "Ada Brook,3,Flight A,105,") == [
        (2, "Squat opener: Ada Brook has lifted already; change its weight at the Table.")
    ]
    bring_in(hall, "Ada Brook,3,Flight A,100,9 in")


def test_a_roster_does_not_change_the_bar_under_a_lifter(hall: Hall) -> None:
    """The crew was given a change for 105 while Ada stood under 100."""
    hall.load()
    told = (
        "The bar is loaded for Ada Brook at 100. Nothing may change on it now; "
        "take “bar is loaded” back first if it is a mistake."
    )
    with refused(hall, NotAllowedNow, told):
        bring_in(hall, "Ada Brook,3,Flight A,105,")


def test_a_flight_is_found_by_its_name_in_any_case(hall: Hall) -> None:
    bring_in(hall, "Fay Green,6,FLIGHT A,100,", "Gil Hart,7,flight c,100,", "Ina Joss,8,Flight C,100,")
    programme = hall.picture().sessions[0][2]
    assert [flight.name for flight in programme.flights] == [FLIGHT_A, FLIGHT_B, "flight c"]
    assert [one.name for one in programme.of_flight(hall.flight_id("flight c"))] == ["Gil Hart", "Ina Joss"]


def test_a_new_flight_goes_to_the_platform_that_lifts_its_openers(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    header = "name,lot,flight,Squat opener,Dip opener"
    bring_in(hall, "Fay Green,6,Flight D,100,", "Gil Hart,7,Flight E,,20", header=header)
    assert hall.flight_id("Flight D") in {f.id for f in hall.picture().sessions[0][2].flights}
    assert other.flight_id("Flight E") in {f.id for f in other.picture().sessions[0][2].flights}


def test_a_flight_cannot_open_a_lift_of_another_platform(halls: tuple[Hall, Hall]) -> None:
    hall, _ = halls
    header = "name,lot,flight,Dip opener"
    assert wrong(hall, "Fay Green,6,Flight A,20", header=header) == [
        (2, "Dip opener: Flight A does not lift Dip.")
    ]


def test_a_new_flight_without_openers_is_doubtful_where_there_are_two_sessions(
    halls: tuple[Hall, Hall],
) -> None:
    hall, _ = halls
    assert wrong(hall, "Fay Green,6,Flight D", header="name,lot,flight") == [
        (2, "it is not clear where flight “Flight D” lifts. Add a column “platform” that names it.")
    ]


def test_a_roster_makes_every_platform_of_the_meet_a_new_revision(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    before = hall.picture().revision, other.picture().revision
    bring_in(hall, "Bo Carver,1,Flight A,115,")
    assert (hall.picture().revision, other.picture().revision) == (before[0] + 1, before[1] + 1)


def test_a_roster_for_a_meet_that_is_not_there_is_refused(hall: Hall) -> None:
    with pytest.raises(NotFound) as told:
        import_roster(hall.desk, 99, ROSTER, who=OLGA)
    assert (
        str(told.value)
        == "There is no such meet here. It may have been taken away; go back and choose again."
    )


def test_names_as_people_have_them_survive_the_way_through_the_database(hall: Hall) -> None:
    names = ['Zoë "Zed" O\'Hara', "=SUM(A1)", "Łukasz, the younger", "李 小龙"]
    quoted = [name.replace('"', '""') for name in names]
    bring_in(hall, *(f'"{name}",{lot},Flight A,100,' for lot, name in enumerate(quoted, start=10)))
    assert [hall.lifter(name).lot for name in names] == [10, 11, 12, 13]
    with changes(hall, {}):
        import_roster(hall.desk, hall.meet_id, export_roster(hall.desk, hall.meet_id), who=OLGA)


def test_a_platform_named_in_the_roster_tells_where_a_new_flight_lifts(hall: Hall) -> None:
    """Two platforms that lift the same lifts: only the name of the platform can tell them apart."""
    second = add_platform(hall.desk, hall.meet_id, "Yard", "bar-kg", who=OLGA)
    header = "name,lot,flight,platform,Squat opener"
    text = f"{header}\nFay Green,6,Flight A,Yard,90\nGus Hill,7,Flight D,Hall,95\n"
    import_roster(hall.desk, hall.meet_id, text, who=OLGA)
    there = Hall(hall.desk, hall.meet_id, second)
    assert there.lifter("Fay Green").flight_id == there.flight_id("Flight A") != hall.flight_id("Flight A")
    assert hall.lifter("Gus Hill").flight_id == hall.flight_id("Flight D")
