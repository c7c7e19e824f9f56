"""Undo: the last entry that stands is taken back, in words, and no plate moves by it."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from app.desk.attempts import declare
from app.desk.bar import bar_is_not_loaded
from app.desk.equipment import LiftWish, save_lifts, save_plates, save_tools, stock_seen
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.desk.roster import import_roster
from app.desk.undo import undo
from app.meet.model import Result
from app.meet.platform import Condition
from tests.cast import ADA, BO, FLIGHT_A, FLIGHT_B, OLGA, SQUAT, WANDA, Hall, kg, stack
from tests.desk.checks import Rows, changes, check_board, refused, rows
from tests.desk.forms import plate_rows, tool_rows

FIRST = stack(25, 10, "2.5")
IRON = ("condition", "bar", "hand", "implement_id")


def take_back(hall: Hall) -> str:
    """Undoes what the page offers to undo."""
    offered = hall.board().undo
    return undo(hall.desk, hall.platform_id, offered.id if offered else None, who=WANDA)


def entered(hall: Hall) -> Rows:
    """What people entered: every row without the iron and without what undo itself counts and signs."""
    found = rows(hall.desk.engine)
    for (table, _), row in found.items():
        for column in IRON if table == "platform" else ("version",):
            row.pop(column, None)
    return found


def without_ten(hall: Hall) -> None:
    now = hall.picture()
    kept = [row for row in plate_rows(now) if row["face"] != "10"]
    save_plates(hall.desk, hall.platform_id, kept, stock_seen(now.stock, now.tools), who=OLGA)


def with_fifty(hall: Hall) -> None:
    now = hall.picture()
    fifty = {"face": "50", "count": "2", "thickness": "27", "diameter": "450", "colour": "#2e7d32"}
    save_plates(
        hall.desk, hall.platform_id, [*plate_rows(now), fifty], stock_seen(now.stock, now.tools), who=OLGA
    )


def with_spare_bar(hall: Hall) -> None:
    now = hall.picture()
    spare = {"id": "", "name": "Spare", "kind": "bar", "mass": "15"}
    save_tools(
        hall.desk, hall.platform_id, [*tool_rows(now), spare], stock_seen(now.stock, now.tools), who=OLGA
    )


def in_fives(hall: Hall) -> None:
    lift = hall.lift_id(SQUAT)
    wish = LiftWish(lift, str(hall.picture().tools[0].id), "5", "2", "mass", "worst")
    save_lifts(hall.desk, hall.platform_id, [wish], who=OLGA)


ENTRIES: dict[str, Callable[[Hall], object]] = {
    "a declaration": lambda hall: hall.declare(BO, 2, "120"),
    "a changed declaration": lambda hall: hall.declare(BO, 1, "112.5"),
    "a good lift": lambda hall: hall.judge(ADA, 1, Result.GOOD),
    "a pass": lambda hall: hall.judge(BO, 3, Result.PASSED),
    "another flight": lambda hall: hall.bring(FLIGHT_B, SQUAT),
    "plates taken out": without_ten,
    "plates brought": with_fifty,
    "another bar": with_spare_bar,
    "settings of a lift": in_fives,
}


@pytest.mark.parametrize("entry", ENTRIES.values(), ids=list(ENTRIES))
def test_every_kind_of_entry_is_taken_back_whole_and_no_plate_moves(hall: Hall, entry) -> None:
    before = entered(hall)
    entry(hall)
    what, bar = hall.journal()[-1].what, hall.picture().bar
    assert entered(hall) != before
    assert take_back(hall) == f"Undone: {what}."
    assert entered(hall) == before
    assert hall.picture().bar.carries == bar.carries
    assert hall.picture().bar.hand == bar.hand
    assert hall.journal()[-1].what == f"undone: {what}"
    assert hall.journal()[-1].undoes == hall.journal()[-2].id
    check_board(hall.board())


def test_an_undo_asks_the_crew_when_another_bar_is_wanted_now(hall: Hall) -> None:
    hall.judge(ADA, 1, Result.GOOD)
    assert hall.board().ask is False
    take_back(hall)
    assert hall.board().ask is True
    up = hall.board().up
    assert up is not None
    assert (up.lifter.name, up.weight) == (ADA, kg(100))


def test_entries_are_taken_back_one_after_another_and_undos_are_not_undone(hall: Hall) -> None:
    start = entered(hall)
    hall.declare(BO, 2, "120")
    middle = entered(hall)
    hall.declare(BO, 3, "130")
    assert take_back(hall) == "Undone: Bo Carver: Squat, 3rd declared at 130."
    assert entered(hall) == middle
    assert take_back(hall) == "Undone: Bo Carver: Squat, 2nd declared at 120."
    assert entered(hall) == start
    assert take_back(hall) == "Undone: Hall: Flight A, Squat."
    with refused(hall, NotAllowedNow, "There is nothing to undo."):
        take_back(hall)


def test_an_entry_after_an_undo_is_the_next_to_be_taken_back(hall: Hall) -> None:
    hall.declare(BO, 2, "120")
    take_back(hall)
    hall.declare(BO, 2, "125")
    assert take_back(hall) == "Undone: Bo Carver: Squat, 2nd declared at 125."


def test_what_the_crew_said_about_the_iron_is_not_offered_for_undo(hall: Hall) -> None:
    hall.declare(BO, 2, "120")
    hall.load()
    bar_is_not_loaded(hall.desk, hall.platform_id, who=WANDA)
    offered = hall.board().undo
    assert offered is not None
    assert offered.what == "Bo Carver: Squat, 2nd declared at 120"


def test_the_undo_that_was_seen_is_done_and_no_other(hall: Hall) -> None:
    hall.declare(BO, 2, "120")
    seen = hall.board().undo
    assert seen is not None
    hall.declare(BO, 3, "130")
    told = "Somebody made another entry since: “Bo Carver: Squat, 3rd declared at 130”. Look before you undo."
    with refused(hall, SomebodyWasFirst, told):
        undo(hall.desk, hall.platform_id, seen.id, who=WANDA)


def test_undo_pressed_twice_takes_back_one_entry(hall: Hall) -> None:
    hall.declare(BO, 2, "120")
    hall.declare(BO, 3, "130")
    seen = hall.board().undo
    assert seen is not None
    undo(hall.desk, hall.platform_id, seen.id, who=WANDA)
    told = "Somebody made another entry since: “Bo Carver: Squat, 2nd declared at 120”. Look before you undo."
    with refused(hall, SomebodyWasFirst, told):
        undo(hall.desk, hall.platform_id, seen.id, who=WANDA)


def test_an_entry_whose_attempt_was_changed_since_is_not_taken_back(hall: Hall) -> None:
    """The roster is an entry of the meet, not of the platform, so the platform's last entry is older than it."""
    hall.declare(BO, 1, "112.5")
    import_roster(
        hall.desk, hall.meet_id, "name,lot,flight,Squat opener\nBo Carver,1,Flight A,115\n", who=OLGA
    )
    told = "“Bo Carver: Squat, 1st declared at 112.5 (was 110)” cannot be undone: it has been changed again since."
    with refused(hall, NotAllowedNow, told):
        take_back(hall)


def test_a_form_made_before_an_undo_is_told_so(hall: Hall) -> None:
    """Versions count on: else a page from before the undone entry would pass for a fresh one."""
    hall.declare(BO, 2, "120")
    old = hall.seen(BO, 2)
    take_back(hall)
    assert hall.attempt(BO, 2).version == old.version + 1
    with pytest.raises(SomebodyWasFirst):
        declare(hall.desk, hall.platform_id, old, "125", who=WANDA)


def test_an_undo_does_not_change_the_weight_of_a_bar_with_a_lifter_under_it(hall: Hall) -> None:
    """Undo of Ada's 105 gave the crew a new change for 100 while she stood under the bar."""
    hall.declare(ADA, 1, "105")
    hall.load()  # of the 100 first shown: the crew had not heard yet
    hall.load()
    assert hall.picture().bar.condition is Condition.LIFTING
    told = (
        "The bar is loaded for Ada Brook at 105. Nothing may change on it now; "
        "take “bar is loaded” back first if it is a mistake."
    )
    with refused(hall, NotAllowedNow, told):
        take_back(hall)
    hall.judge(ADA, 1, Result.GOOD)


def test_an_undo_of_the_lift_before_leaves_the_loaded_bar_to_its_lifter(hall: Hall) -> None:
    hall.lift(ADA, 1)
    hall.load()
    bar = hall.picture().bar
    take_back(hall)
    assert hall.picture().bar == bar
    up = hall.board().up
    assert up is not None
    assert up.lifter.name == BO


def test_plates_taken_out_come_back_though_another_platform_brought_some_meanwhile(
    halls: tuple[Hall, Hall],
) -> None:
    """The row of the last plate was taken out, its number was given to a plate of the other platform, and the
    undo failed on it."""
    hall, other = halls
    now = other.picture()
    save_plates(
        other.desk, other.platform_id, plate_rows(now)[:-1], stock_seen(now.stock, now.tools), who=OLGA
    )
    with_fifty(hall)
    take_back(other)
    assert other.picture().stock == now.stock


def test_an_undo_leaves_the_other_platform_alone(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    before = other.picture()
    hall.declare(BO, 2, "120")
    take_back(hall)
    assert other.picture() == before
    assert hall.picture().flight_id == hall.flight_id(FLIGHT_A)


def test_taking_back_a_declaration_in_hand_asks_the_crew(hall: Hall) -> None:
    hall.lift(ADA, 1)
    for name in (BO, "Cleo Dahl"):
        hall.lift(name, 1)
    hall.declare(ADA, 2, "105")
    with changes(
        hall, {("attempt", hall.attempt(ADA, 2).id): {"weight", "version", "entered_by", "entered_at"}}
    ):
        take_back(hall)
    assert hall.board().ask is True
