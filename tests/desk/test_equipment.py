"""The platform's iron as the organiser types it in."""

from __future__ import annotations

import pytest

from app.desk.bar import bar_carries
from app.desk.equipment import LiftWish, lifts_seen, save_lifts, save_plates, save_tools, stock_seen
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.loading.equipment import Collar, Implement, Plate
from app.store.picture import PlateStock, Tool
from tests.cast import ADA, BENCH, BO, LUC, OLGA, SQUAT, Hall, kg, stack
from tests.desk.checks import changes, check_board, refused
from tests.desk.forms import plate_rows, tool_rows

STALE = "Somebody changed the equipment since this page was made. Look, and save again."
FIFTY = {"face": "50", "count": "2", "thickness": "27,5", "diameter": "450", "colour": "#2E7D32"}
SPARE = {"id": "", "name": " Light  bar ", "kind": "bar", "mass": "15", "usable": "320"}
SPARE |= {"collar_mass": "2.5", "collar_width": "50"}


def seen(hall: Hall) -> str:
    now = hall.picture()
    return stock_seen(now.stock, now.tools)


def plates(
    hall: Hall, *changed: dict[str, str], without: str = "", more: tuple[dict[str, str], ...] = ()
) -> None:
    """Saves the plates as they are, with these rows changed by face, one taken out, some more."""
    by_face = {row["face"]: row for row in changed}
    kept = [
        row | by_face.get(row["face"], {}) for row in plate_rows(hall.picture()) if row["face"] != without
    ]
    save_plates(hall.desk, hall.platform_id, [*kept, *more], seen(hall), who=OLGA)


def tools(hall: Hall, *more: dict[str, str], **changed: str) -> None:
    """Saves the tools as they are, the first one changed, and some more."""
    first, *others = tool_rows(hall.picture())
    save_tools(hall.desk, hall.platform_id, [first | changed, *others, *more], seen(hall), who=OLGA)


def wish(hall: Hall, **changed: str) -> None:
    """Saves the settings of the squat with these changed."""
    now = hall.picture()
    plain = {"implement_id": str(now.tools[0].id), "step": "2.5", "extra_plates": "1", "measure": "plates"}
    settings = plain | {"aim": "total"} | changed
    save_lifts(hall.desk, hall.platform_id, [LiftWish(hall.lift_id(SQUAT), **settings)], who=OLGA)


# Plates


def test_new_plates_stand_at_the_platform_heaviest_first(hall: Hall) -> None:
    with changes(hall, {("plate", 10): {"id"}}):
        plates(hall, more=(FIFTY,))
    first = hall.picture().stock[0]
    assert first == PlateStock(10, Plate(kg(50), 2, kg("27.5"), kg(450)), "#2e7d32")


def test_a_changed_count_changes_that_row_only(hall: Hall) -> None:
    with changes(hall, {("plate", 2): {"count"}}):
        plates(hall, {"face": "20", "count": "4"})
    assert [(item.plate.face, item.plate.count) for item in hall.picture().stock[:3]] == [
        (25, 12),
        (20, 4),
        (15, 2),
    ]


def test_the_same_plates_again_change_nothing(hall: Hall) -> None:
    with changes(hall, {}):
        plates(hall)


def test_a_row_with_an_empty_face_is_taken_out(hall: Hall) -> None:
    with changes(hall, {("plate", 9): {"id"}}):
        plates(hall, {"face": "0.25"} | {"face": "0.25"}, without="0.25", more=({"face": " ", "count": "2"},))
    assert [item.plate.face for item in hall.picture().stock][-1] == kg("0.5")


def test_every_wrong_plate_is_named_by_its_row(hall: Hall) -> None:
    told = (
        "Row 1: count “many” is not a whole number from 0 to 200. "
        "Row 2: thickness “thick” is not a number. "
        "Row 3: diameter 0 is not possible. "
        "Row 4: colour “red” is not of the form #c62828. "
        "Row 10: face value “x” is not a number. Row 10: count “” is not a whole number from 0 to 200. "
        "Row 11: 25 stands twice. Add the counts together."
    )
    with refused(hall, NotAllowedNow, told):
        plates(
            hall,
            {"face": "25", "count": "many"},
            {"face": "20", "thickness": "thick"},
            {"face": "15", "diameter": "0"},
            {"face": "10", "colour": "red"},
            more=({"face": "x"}, {"face": "25", "count": "2"}),
        )


@pytest.mark.parametrize("count", ["-1", "1.5", "201", "٣", "", "99999999999999999999"])
def test_a_count_is_a_whole_number_that_somebody_could_carry(hall: Hall, count: str) -> None:
    with refused(hall, NotAllowedNow, f"Row 1: count “{count}” is not a whole number from 0 to 200."):
        plates(hall, {"face": "25", "count": count})


def test_a_stale_form_of_plates_is_refused(hall: Hall) -> None:
    old, form = seen(hall), plate_rows(hall.picture())
    plates(hall, {"face": "20", "count": "4"})
    with refused(hall, SomebodyWasFirst, STALE):
        save_plates(hall.desk, hall.platform_id, form, old, who=OLGA)


def test_a_form_of_plates_from_before_the_bar_was_changed_is_refused(hall: Hall) -> None:
    old, form = seen(hall), plate_rows(hall.picture())
    tools(hall, SPARE)
    with refused(hall, SomebodyWasFirst, STALE):
        save_plates(hall.desk, hall.platform_id, form, old, who=OLGA)


def test_too_many_kinds_of_plates_are_refused(hall: Hall) -> None:
    more = tuple({"face": str(face), "count": "2", "thickness": "9"} for face in range(30, 46))
    with refused(hall, NotAllowedNow, "More than 24 kinds of plates at one platform."):
        plates(hall, more=more)


def test_plates_that_make_more_weights_than_can_be_listed_are_refused(hall: Hall) -> None:
    odd = ("7.0000001", "11.0000011", "13.0000111", "17.0001113", "19.0000017", "23.0000117", "29.0000119")
    more = tuple({"face": face, "count": "20", "thickness": "0.1"} for face in odd)
    told = (
        "These plates make more different weights than can be searched. "
        "Leave out the plates that will not be used."
    )
    with refused(hall, NotAllowedNow, told):
        plates(hall, more=more)


def test_a_plate_without_a_thickness_is_refused_while_a_bar_has_only_so_much_room(hall: Hall) -> None:
    """Every later entry failed on it, because no plan could be made."""
    told = "Fill in the thickness of the 20, 5, or leave the room for plates of Power bar empty."
    with refused(hall, NotAllowedNow, told):
        plates(hall, {"face": "20", "thickness": ""}, {"face": "5", "thickness": ""})
    plates(hall, {"face": "20", "thickness": "", "count": "1"})  # never on this bar: it goes on in pairs
    hall.declare(BO, 2, "120")
    check_board(hall.board())


def test_a_plate_of_the_change_in_hand_that_is_taken_out_makes_the_crew_say_what_is_on_the_bar(
    hall: Hall,
) -> None:
    hand = hall.picture().bar.hand
    assert hand is not None
    assert hand.stack == stack(25, 10, "2.5")
    plates(hall, without="10")
    assert (hall.picture().bar.hand, hall.board().ask) == (hand, True)
    bar_carries(hall.desk, hall.platform_id, "before", who=LUC)
    after = hall.picture().bar.hand
    assert after is not None
    assert (after.weight, after.before, kg(10) in after.stack) == (kg(100), (), False)
    assert hall.board().ask is False
    check_board(hall.board())


def test_a_plate_that_is_taken_out_while_it_hangs_on_the_bar_comes_off_with_the_next_change(
    hall: Hall,
) -> None:
    hall.lift(ADA, 1)
    plates(hall, without="10")
    bar_carries(hall.desk, hall.platform_id, "before", who=LUC)
    step = hall.board().steps[0]
    assert step.before == stack(25, 10, "2.5")
    assert step.hands is not None
    assert kg(10) in step.hands.off
    check_board(hall.board())


def test_without_plates_nothing_can_be_made_and_nothing_breaks(hall: Hall) -> None:
    save_plates(hall.desk, hall.platform_id, [], seen(hall), who=OLGA)
    bar_carries(hall.desk, hall.platform_id, "before", who=LUC)
    assert hall.picture().stock == ()
    assert hall.picture().bar.hand is None
    assert [step.stack for step in hall.board().steps] == [None] * 9
    with refused(
        hall, NotAllowedNow, "100 kg cannot be made with the plates at this platform. Next possible: 25."
    ):
        hall.declare(BO, 1, "100")


# Bars and belts


def test_a_new_bar_stands_at_the_platform(hall: Hall) -> None:
    with changes(hall, {("implement", 2): {"id"}}):
        tools(hall, SPARE)
    assert hall.picture().tools[1] == Tool(
        2, "Light bar", "bar", Implement(kg(15), 2, kg(320)), Collar(kg("2.5"), kg(50))
    )


def test_the_same_tools_again_change_nothing(hall: Hall) -> None:
    with changes(hall, {}):
        tools(hall)


def test_a_bar_that_no_lift_uses_is_taken_out_and_one_that_is_used_stays(hall: Hall) -> None:
    tools(hall, SPARE)
    kept, spare = tool_rows(hall.picture())
    told = "Row 1: Power bar is used by a lift. Give that lift another one first."
    with refused(hall, NotAllowedNow, told):
        save_tools(hall.desk, hall.platform_id, [kept | {"name": ""}, spare], seen(hall), who=OLGA)
    with changes(hall, {("implement", 2): {"id"}}):
        save_tools(hall.desk, hall.platform_id, [kept, spare | {"name": ""}], seen(hall), who=OLGA)


def test_every_wrong_tool_is_named_by_its_row(hall: Hall) -> None:
    told = (
        "Row 1: mass “heavy” is not a number. "
        "Row 2: it is a bar or a belt. Row 2: collar -1 is not possible. Row 2: mass 0 is not possible. "
        "Row 3: mass is empty."
    )
    with refused(hall, NotAllowedNow, told):
        tools(
            hall,
            SPARE | {"kind": "sledge", "mass": "0", "collar_mass": "-1"},
            SPARE | {"mass": ""},
            mass="heavy",
        )


def test_a_belt_may_weigh_nothing(hall: Hall) -> None:
    tools(hall, {"id": "", "name": "Belt", "kind": "belt", "mass": "0"})
    assert hall.picture().tools[1] == Tool(2, "Belt", "belt", Implement(kg(0), 1), None)


def test_a_stale_form_of_tools_is_refused(hall: Hall) -> None:
    old, form = seen(hall), tool_rows(hall.picture())
    plates(hall, more=(FIFTY,))
    with refused(hall, SomebodyWasFirst, STALE):
        save_tools(hall.desk, hall.platform_id, form, old, who=OLGA)


def test_a_collar_without_a_width_is_refused_while_the_bar_has_only_so_much_room(hall: Hall) -> None:
    told = (
        "Power bar: fill in how much room its collar takes, or leave the room for plates of Power bar empty."
    )
    with refused(hall, NotAllowedNow, told):
        tools(hall, collar_width="")
    tools(hall, collar_width="", usable="")
    hall.declare(BO, 2, "120")
    check_board(hall.board())


def test_a_bar_found_to_weigh_something_else_makes_the_crew_say_what_is_on_it(hall: Hall) -> None:
    """The change in hand made 95 then, and 100 still stood above it."""
    tools(hall, mass="15")
    assert hall.board().ask is True
    bar_carries(hall.desk, hall.platform_id, "shown", who=LUC)
    hand = hall.picture().bar.hand
    assert hand is not None
    assert (hand.before, 15 + 5 + 2 * sum(hand.stack)) == (stack(25, 10, "2.5"), 100)
    check_board(hall.board())


def test_a_sleeve_found_shorter_is_never_overfilled(hall: Hall) -> None:
    tools(hall, usable="100")  # 50 mm of it for the collar: two plates go on
    bar_carries(hall.desk, hall.platform_id, "before", who=LUC)
    check_board(hall.board())
    assert hall.picture().bar.hand is None
    told = "100 kg cannot be made with the plates at this platform. Nearest: 95 or 105."
    with refused(hall, NotAllowedNow, told):
        hall.declare(BO, 1, "100")


# Settings of the lifts


def test_the_settings_of_a_lift_are_kept_and_the_others_are_left_alone(hall: Hall) -> None:
    others = hall.picture().loading
    with changes(hall, {("lift", hall.lift_id(SQUAT)): {"step", "loading"}}):
        wish(hall, step="5", measure="mass", aim="worst", extra_plates="2")
    now = hall.picture()
    lift = now.sessions[0][2].lift(hall.lift_id(SQUAT))
    assert (lift.step, now.loading[lift.id]["measure"], now.loading[lift.id]["aim"]) == (
        kg(5),
        "mass",
        "worst",
    )
    assert now.loading[lift.id]["extra_plates"] == 2
    assert now.loading[hall.lift_id(BENCH)] == others[hall.lift_id(BENCH)]


def test_the_same_settings_again_change_nothing(hall: Hall) -> None:
    wish(hall, measure="mass")
    with changes(hall, {}):
        wish(hall, measure="mass")


def test_every_wrong_setting_is_named_by_its_lift(hall: Hall) -> None:
    told = (
        "Squat: step 0 is not possible. Squat: choose a bar or belt of this platform. "
        "Squat: choose one of fewest plates, least kilograms, least time. "
        "Squat: choose one of in total, at the slowest change. "
        "Squat: choose one of fewest only, one more, two more, three more."
    )
    with refused(hall, NotAllowedNow, told):
        wish(hall, step="0", implement_id="99", measure="luck", aim="never", extra_plates="9")


def test_a_lift_of_another_platform_is_refused(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    asked = LiftWish(other.lift_id("Dip"), str(hall.picture().tools[0].id), "2.5", "1", "plates", "total")
    told = "One of these lifts is not on this platform any more. Load the page again."
    with refused(hall, NotAllowedNow, told):
        save_lifts(hall.desk, hall.platform_id, [asked], who=OLGA)


def test_new_settings_leave_the_change_in_hand_and_plan_the_rest_anew(hall: Hall) -> None:
    bar = hall.picture().bar
    wish(hall, extra_plates="0", measure="mass")
    assert hall.picture().bar == bar
    assert hall.board().ask is False
    check_board(hall.board())


def test_settings_of_lifts_that_somebody_changed_meanwhile_are_not_overwritten(hall: Hall) -> None:
    seen = lifts_seen(hall.picture())
    wishes = [LiftWish(hall.lift_id("Squat"), str(hall.picture().tools[0].id), "5", "1", "mass", "total")]
    save_lifts(hall.desk, hall.platform_id, wishes, who=OLGA, seen=seen)
    with refused(
        hall, SomebodyWasFirst, "Somebody changed the lifts since this page was made. Look, and save again."
    ):
        save_lifts(hall.desk, hall.platform_id, wishes, who=OLGA, seen=seen)
