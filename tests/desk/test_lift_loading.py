"""How a lift is loaded: its settings typed, checked by the planner's own reader, kept or refused."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.desk.errors import NotAllowedNow
from app.desk.lift_loading import read_form, save_loading
from app.desk.planned import wish_of
from app.desk.wish import Wish, read_wish, wish_document
from app.loading.equipment import Access, Order
from app.planning import Aim, Measure
from tests.cast import OLGA, SQUAT, Hall, kg

TYPED = {
    "order": "any",
    "access": "both-ends",
    "extra_plates": "2",
    "measure": "mass",
    "aim": "total",
    "by_1": "thickness",
    "slack_1": "4,5",
    "by_2": "balance",
    "slack_2": "",
    "plate_s": "3.5",
    "thread_s": "2",
    "finger_mm": "12",
    "chart_limit": "yes",
    "least_plates": "2",
    "least_mass": "10",
}


def test_typed_settings_are_kept_as_typed(hall: Hall) -> None:
    lift_id = hall.lift_id(SQUAT)
    save_loading(hall.desk, hall.platform_id, lift_id, TYPED, who=OLGA)
    assert wish_of(hall.picture(), lift_id) == Wish(
        order=Order.ANY,
        access=Access.BOTH_ENDS,
        extra_plates=2,
        measure=Measure.MASS,
        aim=Aim.TOTAL,
        comfort=(("thickness", "4.5"), ("balance", "0")),
        plate_s=Fraction(7, 2),
        thread_s=Fraction(2),
        finger_mm=Fraction(12),
        chart_limit=True,
        chart_only=False,
        least_plates=2,
        least_mass=kg(10),
    )
    assert hall.journal()[-1].what == "Squat: how it is loaded"


def test_keeping_the_same_settings_twice_changes_nothing_the_second_time(hall: Hall) -> None:
    save_loading(hall.desk, hall.platform_id, hall.lift_id(SQUAT), TYPED, who=OLGA)
    before = (hall.picture().revision, len(hall.journal()))
    save_loading(hall.desk, hall.platform_id, hall.lift_id(SQUAT), TYPED, who=OLGA)
    assert (hall.picture().revision, len(hall.journal())) == before


def test_the_instruction_that_is_out_stays_when_the_settings_change(hall: Hall) -> None:
    hand = hall.picture().bar.hand
    save_loading(hall.desk, hall.platform_id, hall.lift_id(SQUAT), TYPED, who=OLGA)
    assert hall.picture().bar.hand == hand


def test_every_wrong_setting_is_named_and_nothing_is_kept(hall: Hall) -> None:
    lift_id = hall.lift_id(SQUAT)
    wrong = TYPED | {"order": "sideways", "slack_1": "thick", "extra_plates": "9", "least_plates": "-1"}
    with pytest.raises(NotAllowedNow) as refused:
        save_loading(hall.desk, hall.platform_id, lift_id, wrong, who=OLGA)
    sentences = str(refused.value)
    assert "“sideways” is not a choice" in sentences
    assert "slack of rule 1 “thick” is not a number" in sentences
    assert "choose how many plates over the fewest" in sentences
    assert "“-1” is not a whole number" in sentences
    assert wish_of(hall.picture(), lift_id) == Wish()


def test_a_rule_that_needs_a_size_nobody_has_measured_is_refused_by_name(hall: Hall) -> None:
    from app.desk.equipment import save_plates, stock_seen

    now = hall.picture()
    rows = [{"face": face, "count": "4", "thickness": "20", "diameter": ""} for face in ("25", "5")]
    save_plates(hall.desk, hall.platform_id, rows, stock_seen(now.stock, now.tools), who=OLGA)
    with pytest.raises(NotAllowedNow, match="diameter"):
        save_loading(hall.desk, hall.platform_id, hall.lift_id(SQUAT), TYPED | {"by_1": "rims"}, who=OLGA)


def test_a_lift_of_another_platform_is_refused(hall: Hall) -> None:
    with pytest.raises(NotAllowedNow, match="not on this platform"):
        save_loading(hall.desk, hall.platform_id, 999, TYPED, who=OLGA)


masses = st.integers(0, 4000).map(lambda n: Fraction(n, 4))


@given(
    st.builds(
        Wish,
        order=st.sampled_from(Order),
        access=st.sampled_from(Access),
        extra_plates=st.integers(0, 3),
        measure=st.sampled_from(Measure),
        aim=st.sampled_from(Aim),
        comfort=st.lists(
            st.tuples(st.sampled_from(["thickness", "rims"]), st.sampled_from(["0", "2.5"]))
        ).map(tuple),
        plate_s=masses,
        thread_s=masses,
        finger_mm=masses,
        chart_limit=st.booleans(),
        chart_only=st.booleans(),
        least_plates=st.integers(0, 50),
        least_mass=masses,
    )
)
def test_settings_come_back_from_the_store_as_they_went_in(wish: Wish) -> None:
    assert read_wish(wish_document(wish)) == wish


def test_an_empty_form_is_the_default_with_no_complaint() -> None:
    wish, wrong = read_form({"plate_s": "3"})
    assert (wish, wrong) == (Wish(), [])
