"""Recomputes a plan from its answer alone: never trusts a number of the planner."""

from __future__ import annotations

from collections import Counter
from fractions import Fraction

from app.planning import Access, Measure, PlanRequest, answer_document
from tests.planning import reference


def check_answer(request: PlanRequest, document: dict) -> tuple[Fraction, Fraction]:
    """Check every change and every sum; gives (measure, tie-break) summed over the changes."""
    bar = list(request.start)
    totals = {"plates": [], "mass": [], "time_s": []}
    equipment = request.equipment
    assert len(document["changes"]) == len(request.targets)
    for target, change in zip(request.targets, document["changes"], strict=True):
        stack = [Fraction(face) for face in change["stack"]]
        assert Fraction(change["target"]) == target
        assert equipment.base_mass + equipment.implement.ends * sum(stack) == target
        for face, pieces in Counter(stack).items():
            assert pieces * equipment.implement.ends <= reference.row(request, face).count
        assert reference.fits(request, tuple(stack))
        assert reference.keeps_order(request, tuple(stack))
        off, on = ([Fraction(face) for face in change[way]] for way in ("off", "on"))
        assert off == [bar[place] for place in change["off_at"]]
        assert on == [stack[place] for place in change["on_at"]]
        assert change["off_at"] == sorted(set(change["off_at"]), reverse=True)
        assert change["on_at"] == sorted(set(change["on_at"]))
        left = [place for place in range(len(bar)) if place not in change["off_at"]]
        right = [place for place in range(len(stack)) if place not in change["on_at"]]
        assert [bar[place] for place in left] == [stack[place] for place in right]
        for places in (left, right):
            if request.access is Access.OUTER_END:
                assert places == list(range(len(places)))
            if request.access is Access.BOTH_ENDS and places:
                assert places == list(range(places[0], places[-1] + 1))
        seconds = sum((reference.row(request, face).off_s for face in off), Fraction(0))
        seconds += sum((reference.row(request, face).on_s for face in on), Fraction(0))
        if request.thread_s:
            seconds += request.thread_s * reference.misaligned(request, tuple(stack))
        figures = {"plates": len(off) + len(on), "mass": sum(off) + sum(on), "time_s": seconds}
        for name, value in figures.items():
            assert Fraction(change[name]) == value
            totals[name].append(Fraction(value))
        bar = stack
    for name, values in totals.items():
        assert Fraction(document["total"][name]) == sum(values)
        assert Fraction(document["worst"][name]) == max(values, default=0)
    measure = {Measure.PLATES: "plates", Measure.MASS: "mass", Measure.TIME: "time_s"}[request.measure]
    tie = "mass" if request.measure is Measure.PLATES else "plates"
    return sum(totals[measure], Fraction(0)), sum(totals[tie], Fraction(0))


def checked(request: PlanRequest, plan, *, rules: bool = False) -> tuple[Fraction, Fraction]:
    """The same from a plan; with ``rules``, also that every stack is among all that are allowed (slow)."""
    for change in plan.changes if rules else ():
        assert change.stack in reference.all_stacks(request, change.target)
    return check_answer(request, answer_document(plan))
