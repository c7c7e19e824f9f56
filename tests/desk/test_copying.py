"""A new meet like an earlier one, and the sets to start from."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest

from app.desk.copying import copy_meet
from app.desk.entry import Desk
from app.desk.errors import NotAllowedNow
from app.desk.roster import import_roster, pictures
from app.desk.rule_book import save_rules
from app.desk.setup import add_platform, start_meet
from app.loading.chart import loadable
from app.meet.presets import KG_BUMPERS, KG_STEEL, PresetPlate
from app.meet.rule_reading import rules_document
from app.meet.rules import OrderSystem
from app.store.engine import reading
from app.store.picture import NotFound, Picture
from tests.cast import ADA, OLGA, ROSTER, Hall, kg
from tests.desk.checks import rows

DAY = ("flight", "lifter", "rack", "attempt")


def platforms(hall: Hall, meet_id: int) -> list[Picture]:
    with reading(hall.desk.engine) as session:
        return pictures(session, meet_id)


def set_up(now: Picture) -> object:
    """Everything about a platform that is no person, no entry and no number of a row."""
    tools = {tool.id: tool.name for tool in now.tools}
    return (
        now.platform,
        now.unit,
        [(item.plate, item.colour) for item in now.stock],
        [(tool.name, tool.kind, tool.implement, tool.collar) for tool in now.tools],
        [
            (
                session,
                rules_document(now.rules[number]),
                [
                    (lift.name, lift.position, lift.step, tools[lift.implement_id], now.loading[lift.id])
                    for lift in programme.lifts
                ],
            )
            for number, session, programme in now.sessions
        ],
    )


def test_the_copy_is_set_up_like_its_model_without_people_or_entries(halls: tuple[Hall, Hall]) -> None:
    hall = halls[0]
    session = hall.picture().sessions[0]
    changed = rules_document(session[2].rules) | {"most_in_flight": "11"}
    save_rules(hall.desk, hall.platform_id, session[0], changed, who=OLGA)
    hall.lift(ADA, 1)
    before = rows(hall.desk.engine)
    copy = copy_meet(hall.desk, hall.meet_id, " Harbour Cup  2 ", who=OLGA)
    after = rows(hall.desk.engine)
    assert {place: after[place] for place in before} == before
    assert not {table for table, _ in after.keys() - before.keys()} & set(DAY)
    model, made = platforms(hall, hall.meet_id), platforms(hall, copy)
    assert [set_up(one) for one in made] == [set_up(one) for one in model]
    assert all(
        (one.meet, one.flight_id, one.bar.carries, one.bar.hand) == ("Harbour Cup 2", None, (), None)
        for one in made
    )
    last = hall.journal()[-1]
    assert (last.meet_id, last.what) == (copy, "meet Harbour Cup 2 started as a copy of Harbour Cup")
    assert sum(entry.meet_id == copy for entry in hall.journal()) == 1


def test_the_copy_lives_on_its_own(hall: Hall) -> None:
    copy = copy_meet(hall.desk, hall.meet_id, "Harbour Cup 2", who=OLGA)
    before = hall.picture()
    (made,) = platforms(hall, copy)
    other = Hall(hall.desk, copy, made.platform_id)
    import_roster(hall.desk, copy, ROSTER, who=OLGA)
    other.bring("Flight A", "Squat")
    other.lift(ADA, 1)
    assert hall.picture() == before


def test_a_copy_without_a_name_or_of_nothing_is_refused(hall: Hall) -> None:
    before = rows(hall.desk.engine)
    with pytest.raises(NotAllowedNow, match="Give the new meet a name"):
        copy_meet(hall.desk, hall.meet_id, " ", who=OLGA)
    with pytest.raises(NotFound):
        copy_meet(hall.desk, 99, "Harbour Cup 2", who=OLGA)
    assert rows(hall.desk.engine) == before


@pytest.mark.parametrize(
    ("key", "empty", "room"), [("rising-men", 25, 415), ("rising-women", 20, 320)], ids=["men", "women"]
)
def test_a_rising_bar_is_what_the_published_figures_say(desk: Desk, key: str, empty: int, room: int) -> None:
    """Bar and collars 25 and 20 kg, lightest loaded 26 and 21, sleeve 415 and 320 mm, steps of 1 kg.

    ``figures.md`` V5, V6, V49 and section 2: second-hand reports of the IWF's rules.
    """
    meet_id = start_meet(desk, "Hill Open", "kg", who=OLGA)
    now = Hall(desk, meet_id, add_platform(desk, meet_id, "Hall", key, who=OLGA)).picture()
    programme = now.sessions[0][2]
    assert programme.rules.order_system is OrderSystem.RISING
    assert [(lift.name, lift.step) for lift in programme.lifts] == [("Snatch", 1), ("Clean and jerk", 1)]
    equipment = now.equipment(programme.lifts[0].id)
    assert (equipment.base_mass, equipment.implement.usable_mm) == (empty, room)
    assert not loadable(equipment, kg(empty) + Fraction(1, 2))
    top = 220 if empty == 25 else 170
    assert all(loadable(equipment, kg(weight)) for weight in range(empty, top))


@pytest.mark.parametrize(
    "plate", [*KG_STEEL, *KG_BUMPERS[5:]], ids=lambda one: f"{one.face}, {one.thickness_mm} mm"
)
def test_no_plate_is_thinner_than_solid_steel_of_its_mass(plate: PresetPlate) -> None:
    """``figures.md`` 4.5: 7850 kg/m³ with a hole of 52.5 mm is the thinnest that such a disc can be (computed)."""
    diameter, hole = float(plate.diameter_mm) / 1000, 0.0525
    thinnest = float(plate.face) / (7850 * math.pi / 4 * (diameter**2 - hole**2)) * 1000
    assert float(plate.thickness_mm) >= thinnest
