"""Loadings that were published or can be recomputed; each names where it stands."""

from fractions import Fraction

import pytest

from app.loading.chart import chart_stack
from app.loading.equipment import Collar, Equipment, Implement, Plate
from app.planning import PlanRequest, plan

KG = ["25", "20", "15", "10", "5", "2.5", "1.25"]
IWF = ["25", "20", "15", "10", "5", "2.5", "2", "1.5", "1", "0.5"]
LB = ["45", "35", "25", "10", "5", "2.5"]


def bar(mass: str, faces: list[str], collar: str | None = None, pieces: int = 40) -> Equipment:
    plates = tuple(Plate(Fraction(face), pieces) for face in faces)
    return Equipment(Implement(Fraction(mass), 2), Collar(Fraction(collar)) if collar else None, plates)


def words(stack) -> str:
    return " ".join(str(float(face)).removesuffix(".0") for face in stack)


POWERLIFTING = {  # recomputed, largest first, bar and collars 25 kg (figures 5.3, V19)
    "25": "", "27.5": "1.25", "40": "5 2.5", "42.5": "5 2.5 1.25", "55": "15", "60": "15 2.5",
    "72.5": "20 2.5 1.25", "77.5": "25 1.25", "92.5": "25 5 2.5 1.25", "102.5": "25 10 2.5 1.25",
    "117.5": "25 20 1.25", "140": "25 25 5 2.5", "157.5": "25 25 15 1.25", "200": "25 25 25 10 2.5",
    "225": "25 25 25 25", "247.5": "25 25 25 25 10 1.25", "275": "25 25 25 25 25",
    "302.5": "25 25 25 25 25 10 2.5 1.25", "350": "25 25 25 25 25 25 10 2.5",
    "400": "25 25 25 25 25 25 25 10 2.5", "425": "25 25 25 25 25 25 25 25",
}  # fmt: skip
IWF_MEN = {  # recomputed (figures 5.3, V19)
    "26": "0.5", "31": "2.5 0.5", "61": "15 2.5 0.5", "101": "25 10 2.5 0.5", "137": "25 25 5 1",
    "181": "25 25 25 2.5 0.5",
}  # fmt: skip
IWF_WOMEN = {"21": "0.5", "56": "15 2.5 0.5", "63": "20 1.5", "81": "25 5 0.5", "111": "25 20 0.5"}
PUBLISHED_LB = {
    # fitness-vip.com, milestones (V14, V15); youcandomore.net 2013, weight room 101 (V14, V16)
    "135": "45", "225": "45 45", "315": "45 45 45", "405": "45 45 45 45", "495": "45 45 45 45 45",
    "50": "2.5", "55": "5", "65": "10", "95": "25", "115": "35",
    # issuhub.com, page 221 (V17); resourcefulman.net (V18)
    "75": "10 5", "185": "45 25",
}  # fmt: skip


@pytest.mark.parametrize(
    ("equipment", "loadings"),
    [
        pytest.param(bar("20", KG, "2.5"), {"110": "25 15 2.5"}, id="Dziepak 1997 (V12)"),
        pytest.param(
            bar("20", ["20"]),
            {"60": "20", "100": "20 20", "140": "20 20 20", "180": "20 20 20 20", "220": "20 20 20 20 20"},
            id="fitness-vip.com, milestones (V13)",
        ),
        pytest.param(bar("45", LB), PUBLISHED_LB, id="published pound loadings (V14-V18)"),
        pytest.param(bar("20", KG, "2.5"), POWERLIFTING, id="powerlifting, recomputed (V19)"),
        pytest.param(bar("20", IWF, "2.5"), IWF_MEN, id="IWF men, recomputed (V19)"),
        pytest.param(bar("15", IWF, "2.5"), IWF_WOMEN, id="IWF women, recomputed (V19)"),
    ],
)
def test_the_chart_and_the_fewest_plates_plan_load_it_as_printed(equipment, loadings) -> None:
    for target, printed in loadings.items():
        assert words(chart_stack(equipment, Fraction(target))) == printed
        only = plan(PlanRequest(equipment=equipment, targets=(Fraction(target),), extra_plates=0))
        assert words(only.changes[0].stack) == printed


def test_165_pounds_takes_two_plates_where_the_largest_first_chart_takes_three() -> None:
    """Recomputed (figures 5.3, V20): 35 + 25 against 45 + 10 + 5."""
    equipment = bar("45", LB)
    assert words(chart_stack(equipment, Fraction(165))) == "45 10 5"
    only = plan(PlanRequest(equipment=equipment, targets=(Fraction(165),), extra_plates=0))
    assert words(only.changes[0].stack) == "35 25"


def test_the_pound_chart_uses_one_plate_too_many_at_exactly_eight_totals_up_to_445() -> None:
    """Recomputed (figures 5.3, V20 and V21)."""
    equipment = bar("45", LB)
    wasteful = []
    for target in range(45, 446, 5):
        fewest = plan(PlanRequest(equipment=equipment, targets=(Fraction(target),), extra_plates=0))
        chart = chart_stack(equipment, Fraction(target))
        if len(chart) > fewest.total.plates:
            assert len(chart) == fewest.total.plates + 1
            wasteful.append(target)
    assert wasteful == [165, 170, 255, 260, 345, 350, 435, 440]


@pytest.mark.parametrize(
    ("faces", "step", "most"),
    [(KG, "1.25", 300), (["50", *KG], "1.25", 300), (IWF, "0.5", 300), ([*KG, "0.5", "0.25"], "0.25", 150)],
)
def test_in_kilograms_the_chart_uses_the_fewest_plates(faces, step, most) -> None:
    """Recomputed (figures 5.3, V22): unlimited plates, every weight of one end."""
    belt = Equipment(Implement(Fraction(0), 1), None, tuple(Plate(Fraction(face), 300) for face in faces))
    units = [int(Fraction(face) / Fraction(step)) for face in faces]
    fewest = [0]  # fewest[n] = fewest plates that make n steps, by the textbook recurrence
    for made in range(1, int(most / Fraction(step)) + 1):
        ways = [fewest[made - unit] for unit in units if unit <= made]
        fewest.append(min((way for way in ways if way is not None), default=None))
        fewest[made] = None if fewest[made] is None else fewest[made] + 1
        if fewest[made] is not None:
            assert len(chart_stack(belt, Fraction(step) * made)) == fewest[made]
