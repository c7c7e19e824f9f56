"""The sentence beside a stack that is not the chart's, and when to keep to the chart."""

from dataclasses import replace
from fractions import Fraction

import pytest
from hypothesis import assume, given

from app.loading.chart import chart_stack
from app.loading.equipment import Equipment, Implement, Order, Plate
from app.planning import (
    BELT_COMFORT,
    Aim,
    Bound,
    Departure,
    Measure,
    PlanRequest,
    Refusal,
    by_the_clock,
    chart_plan,
    frontier,
    plan,
    why,
)  # fmt: skip
from tests.planning.checker import checked
from tests.planning.strategies import requests

FACES = ["25", "20", "15", "10", "5", "2.5", "1.25"]
BAR = Equipment(Implement(Fraction(20), 2), None, tuple(Plate(Fraction(face), 4) for face in FACES))


def round_of(*targets: str, **rules) -> PlanRequest:
    return PlanRequest(equipment=BAR, targets=tuple(map(Fraction, targets)), **rules)


def test_a_plate_that_stays_on_is_the_reason() -> None:
    request = round_of("110", "120", "130", start=(Fraction(20), Fraction(20)), measure=Measure.MASS)
    found = plan(request)
    assert [change.stack[:2] for change in found.changes] == [(20, 20)] * 3
    assert why(found, request) == (
        "keeps the 20s on for the next two",
        "keeps the 20s on for the next one",
        "leaves the 20 on rather than changing it",
    )  # fmt: skip


def test_a_chart_stack_needs_no_reason() -> None:
    request = round_of("70", "75", extra_plates=0)
    assert why(plan(request), request) == (None, None)


@given(requests(comfort=()))
def test_exactly_the_stacks_that_depart_from_the_chart_have_a_short_sentence(request: PlanRequest) -> None:
    try:
        found = plan(request)
    except Refusal:
        assume(False)
    for change, sentence in zip(found.changes, why(found, request), strict=True):
        if sentence is None:
            assert change.stack == chart_stack(request.equipment, change.target)
        else:
            assert 3 < len(sentence) <= 70
            assert not {"optimise", "node", "state", "diff", "cost", "sequence"} & set(sentence.split())


def test_chart_stacks_only_are_the_charts_stacks() -> None:
    request = round_of("70", "92.5", "110", "145", measure=Measure.MASS)
    kept = plan(request, departure=Departure(chart_only=True))
    assert [change.stack for change in kept.changes] == [chart_stack(BAR, t) for t in request.targets]
    assert kept == chart_plan(request)
    assert isinstance(kept.proof, Bound)
    checked(request, kept)


def test_the_chart_is_left_only_for_a_saving_that_is_worth_it() -> None:
    request = round_of("110", "120", "130", start=(Fraction(20), Fraction(20)), measure=Measure.MASS)
    best, chart = plan(request), chart_plan(request)
    saving = chart.total.mass - best.total.mass
    assert saving > 0
    assert plan(request, departure=Departure(least_saving_mass=saving)) == best
    kept = plan(request, departure=Departure(least_saving_mass=saving + 1))
    assert (kept.changes, kept.proof) == (chart.changes, Bound(best.total.mass))
    plates = chart.total.plates - best.total.plates
    assert (
        plan(request, departure=Departure(least_saving_mass=saving + 1, least_saving_plates=plates)) == best
    )


def test_the_frontier_has_a_row_for_every_choice_and_more_plates_are_never_worse() -> None:
    table = frontier(round_of("70", "92.5", "110", "112.5", "145"))
    assert len(table.choices) == len({(c.extra_plates, c.aim, c.measure) for c in table.choices}) == 24
    assert table.chart == plan(round_of("70", "92.5", "110", "112.5", "145")).chart
    for aim in Aim:
        best = [c for c in table.choices if c.aim is aim and c.measure is Measure.MASS]
        figures = [(c.worst if aim is Aim.WORST else c.total).mass for c in best]
        assert figures == sorted(figures, reverse=True)


@pytest.mark.parametrize("lift", BELT_COMFORT)
def test_ready_made_belt_settings_plan_a_belt(lift: str) -> None:
    sizes = {
        "25": (27, 450),
        "20": (23, 450),
        "15": (22, 400),
        "10": (21, 325),
        "5": (16, 230),
        "2.5": (13, 190),
        "1.25": (10, 160),
    }
    plates = tuple(Plate(Fraction(f), 2, *map(Fraction, size)) for f, size in sizes.items())
    belt = Equipment(Implement(Fraction(0), 1), None, plates)
    request = PlanRequest(
        equipment=belt,
        targets=tuple(map(Fraction, ("20", "25", "32.5", "41.25"))),
        order=Order.ANY,
        comfort=BELT_COMFORT[lift],
    )
    found = plan(request)
    assert found.proof == "optimal"
    checked(request, found)
    timed = by_the_clock(request, Fraction(4), Fraction(6))
    checked(timed, plan(timed))


def test_seconds_are_plates_moved_and_holes_that_do_not_line_up() -> None:
    """Common practice: seconds a plate × plates moved + seconds a misaligned neighbour × threading."""
    plates = (Plate(Fraction(20), 1, None, Fraction(450)), Plate(Fraction(5), 1, None, Fraction(230)))
    belt = Equipment(Implement(Fraction(0), 1), None, plates)
    request = PlanRequest(equipment=belt, targets=(Fraction(25), Fraction(25)))
    timed = plan(by_the_clock(request, Fraction(4), Fraction(6)))
    assert [change.time_s for change in timed.changes] == [4 + 4 + 6, 6]
    assert replace(timed.total, time_s=Fraction(0)).plates == 2
