"""What must hold of every plan, whatever the request."""

import random
from dataclasses import replace
from fractions import Fraction
from itertools import pairwise

from hypothesis import assume, given, settings
from hypothesis import strategies as st
from rapidfuzz.distance import Indel

from app.loading.change import hand_list
from app.loading.equipment import Access, Equipment, Implement, Plate
from app.planning import Aim, Measure, PlanRequest, Refusal, answer_document, plan, refusal_document
from app.planning.depart import aimed
from tests.planning import reference
from tests.planning.cpsat import fewest_plates_handled
from tests.planning.strategies import requests

FACES = [Fraction(face) for face in ("25", "20", "10", "5", "2.5", "1.25")]
any_stack = st.lists(st.sampled_from(FACES), max_size=8).map(tuple)


@given(requests(comfort=(), limit=None))
def test_one_more_extra_plate_never_makes_the_best_plan_worse(request: PlanRequest) -> None:
    try:
        narrow = plan(request)
    except Refusal:
        assume(False)
    wide = plan(replace(request, extra_plates=request.extra_plates + 1))
    assert aimed(request, wide) <= aimed(request, narrow)


@given(requests(comfort=(), limit=None), st.data())
def test_more_stock_never_makes_the_best_plan_worse_if_stacks_may_be_no_longer(request, data) -> None:
    plates = request.equipment.plates
    more = data.draw(st.integers(0, len(plates) - 1))
    grown = tuple(replace(p, count=p.count + 2 * (at == more)) for at, p in enumerate(plates))
    richer = replace(request, equipment=replace(request.equipment, plates=grown))
    try:
        poor = plan(request)
    except Refusal:
        assume(False)
    fewest = [
        [len(plan(replace(r, targets=(t,), extra_plates=0, start=())).changes[0].stack) for t in r.targets]
        for r in (request, richer)
    ]
    assume(fewest[0] == fewest[1])
    assert aimed(request, plan(richer)) <= aimed(request, poor)


@given(requests(), st.randoms(use_true_random=False))
def test_the_order_in_which_plates_are_listed_changes_nothing(request, dice: random.Random) -> None:
    plates = list(request.equipment.plates)
    dice.shuffle(plates)
    shuffled = replace(request, equipment=replace(request.equipment, plates=tuple(plates)))
    try:
        document = answer_document(plan(request))
    except Refusal as refusal:
        document = refusal_document(refusal)
    try:
        again = answer_document(plan(shuffled))
    except Refusal as refusal:
        again = refusal_document(refusal)
    assert again == document


@given(st.lists(any_stack, min_size=1, max_size=6), st.sampled_from(Access))
def test_a_chain_of_stacks_read_backwards_handles_the_same_plates(chain, access) -> None:
    def handled(stacks):
        hands = [hand_list(a, b, access) for a, b in pairwise(stacks)]
        plates = [face for hand in hands for face in hand.off + hand.on]
        return len(plates), sum(plates)

    assert handled(chain) == handled(chain[::-1])


@given(any_stack, any_stack)
def test_a_cradle_handles_as_many_plates_as_the_indel_distance(before, after) -> None:
    """rapidfuzz's Indel distance: insertions and deletions only."""
    hands = hand_list(before, after, Access.ANYWHERE)
    assert len(hands.off) + len(hands.on) == Indel.distance(before, after)


@settings(max_examples=15)
@given(st.lists(st.integers(8, 60), min_size=2, max_size=5), st.integers(0, 1))
def test_whole_small_rounds_agree_with_a_constraint_programme(steps, extra) -> None:
    """OR-Tools CP-SAT, proved optimal."""
    plates = tuple(Plate(face, 4) for face in FACES)
    bar = Equipment(Implement(Fraction(20), 2), None, plates)
    targets = tuple(20 + Fraction("2.5") * step for step in sorted(steps))
    request = PlanRequest(equipment=bar, targets=targets, extra_plates=extra)
    fewest = [len(min(reference.all_stacks(request, target), key=len)) for target in targets]
    proved = fewest_plates_handled(request, [n + extra for n in fewest])
    assert plan(request).total.plates == proved


def test_the_slowest_change_is_eased_at_no_more_than_it_must_cost() -> None:
    """Worked by hand: 10 then 20 with tens and a 20; swapping handles 2 plates at once, adding only 1."""
    belt = Equipment(Implement(Fraction(0), 1), None, (Plate(Fraction(20), 1), Plate(Fraction(10), 2)))
    request = PlanRequest(equipment=belt, targets=(Fraction(10), Fraction(20)), aim=Aim.WORST)
    found = plan(request)
    assert [change.plates for change in found.changes] == [1, 1]
    assert found.changes[1].stack == (10, 10)


def test_by_mass_a_heavy_plate_stays_where_by_plates_it_would_be_swapped() -> None:
    """Worked by hand: from 20 to 30, one 30 handles 2 plates and 50 kg; 20 + 5 + 5 handles 2 and 10 kg."""
    plates = (Plate(Fraction(30), 1), Plate(Fraction(20), 1), Plate(Fraction(5), 2))
    belt = Equipment(Implement(Fraction(0), 1), None, plates)
    request = PlanRequest(
        equipment=belt, targets=(Fraction(30),), start=(Fraction(20),), measure=Measure.MASS, extra_plates=2
    )
    assert plan(request).changes[0].stack == (20, 5, 5)
    assert plan(replace(request, extra_plates=0)).changes[0].stack == (30,)
